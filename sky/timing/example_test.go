package timing_test

import (
	"fmt"
	"math"

	"example.org/tallystick/sky/timing"
)

// A pulsar found yesterday: seen twice, four hours apart. How long does the count of its turns hold?
func ExampleModel_Deadline() {
	src := timing.Source{FrequencyHz: 40, EpochMJD: 60000}
	free := []timing.Prior{{Parameter: timing.Phase, Sigma: math.Inf(1)}, {Parameter: timing.Frequency, Sigma: math.Inf(1)}}
	seen := []timing.Observation{{MJD: 60000, SigmaUs: 250, MHz: 1400}, {MJD: 60000.166667, SigmaUs: 250, MHz: 1400}}
	m, err := timing.New(src, free, seen)
	if err != nil {
		fmt.Println(err)
		return
	}
	d := m.Deadline(0.1/3, 60000.2, 1400)
	fmt.Printf("phase error tomorrow %.2f turns; to be seen again within %.1f h\n", m.PhaseErrorTurns(60001.2, 1400), 24*(d.MJD-60000.2))
	// Output:
	// phase error tomorrow 0.10 turns; to be seen again within 6.4 h
}
