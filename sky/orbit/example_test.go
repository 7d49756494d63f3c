package orbit_test

import (
	"fmt"

	"example.org/tallystick/sky/orbit"
)

// An invented binary: when is its companion in front of it, and may the answer be trusted?
func ExampleOrbit_Conjunctions() {
	o, err := orbit.New(orbit.Elements{PeriodDays: 2.5, AscendingNodeMJD: 60000, SemimajorLs: 4.1})
	if err != nil {
		fmt.Println(err)
		return
	}
	sigmas := orbit.Sigmas{EpochDays: 1e-6, PeriodDays: 2e-5}
	for _, mjd := range o.Conjunctions(orbit.Superior, 61001, 61006) {
		p := o.ConjunctionError(sigmas, mjd)
		fmt.Printf("%.3f at the pulsar, %.3f at the telescope: %s\n", mjd, o.ToObservatory(mjd, -350), p.Say(0.02))
	}
	// Output:
	// 61003.125 at the pulsar, 61003.129 at the telescope: trustworthy: known to 0.0032 turns, wanted within 0.02
	// 61005.625 at the pulsar, 61005.629 at the telescope: trustworthy: known to 0.0032 turns, wanted within 0.02
}

func ExampleNew() {
	_, err := orbit.New(orbit.Elements{PeriodDays: 2.5, Eccentricity: 1.2, Decay: 1.6})
	fmt.Println(err)
	// Output:
	// epoch: found none; accepted the ascending node or periastron, as a modified Julian date
	// eccentricity: found 1.2; accepted from 0 to below 1
	// decay: found 1.6 s/s; accepted within ±1e-07
	// (tables often print it in units of 1e-12)
}
