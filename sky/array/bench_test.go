package array

import (
	"math"
	"testing"
)

// An invented array of 120 pulsars.
func many() (set []Pulsar, timed []Timed) {
	for i := range 120 {
		f := float64(i)
		set = append(set, Pulsar{
			HourErrorUs: 0.05 * math.Exp(f/20), FloorUs: 0.02 * float64(i%5), Weight: 1, LeastH: 0.3, MostH: 5 + float64(i*7%11),
		})
		timed = append(timed, Timed{math.Mod(137.5*f, 360), math.Asin(1-f/60) / degToRad, set[i].ErrorUs(2)})
	}
	return set, timed
}

func BenchmarkShare(b *testing.B) {
	set, _ := many()
	b.ReportAllocs()
	for b.Loop() {
		if _, err := Share(set, 250); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkPair(b *testing.B) {
	_, timed := many()
	b.ReportAllocs()
	for b.Loop() {
		Pair(timed)
	}
}
