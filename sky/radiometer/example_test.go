package radiometer_test

import (
	"fmt"

	"example.org/tallystick/sky/radiometer"
)

// An invented receiver on an invented pulsar.
func ExampleSetup_MinutesFor() {
	s := radiometer.Setup{
		Receiver: radiometer.Receiver{BandMHz: [2]float64{1200, 1600}, TsysK: 25, ZenithOpacity: 0.008, GainKPerJy: 1.5, Polarizations: 2},
		Pulsar:   radiometer.Pulsar{FluxMJy: 0.8, AtMHz: 1400, PeriodS: 0.004, WidthMs: 0.2, JitterUsPerHour: 0.05, FloorUs: 0.2, Sky408K: 35},
	}
	for _, aim := range []float64{1, 0.5, 0.2} {
		minutes, err := s.MinutesFor(aim, 45)
		if err != nil {
			fmt.Println(err)
			continue
		}
		fmt.Printf("%g µs: %.1f min\n", aim, minutes)
	}
	// Output:
	// 1 µs: 29.5 min
	// 0.5 µs: 134.9 min
	// no answer: an error of 0.2 µs is wanted, but the floor is 0.2 µs; no amount of time goes below it
}
