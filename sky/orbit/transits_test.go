package orbit

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"example.org/tallystick/sky/outside"
)

func TestTransitStep(t *testing.T) {
	for _, r := range outside.Rows(t, "orbits.csv", "ORB-120", "ORB-121") {
		o := mustNew(t, Elements{PeriodDays: r.Num("PB_d"), AscendingNodeMJD: 55000})
		r.Check(o.TransitStepTurns())
	}
}

// coprime tells whether no whole number but 1 divides both.
func coprime(a, b int) bool {
	for b != 0 {
		a, b = b, a%b
	}
	return a == 1
}

// A walk from transit to transit, marking what is seen of the orbit in small cells: all of it is seen after about as
// many days as are said, and not long before.
func TestTransitRepeat(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(1, mostParts).Draw(t, "parts")
		orbits := rapid.IntRange(1, 20).Filter(func(orbits int) bool { return coprime(n, orbits) }).Draw(t, "orbits") // else fewer parts do
		part := rapid.Float64Range(0.01, 0.9/float64(n)).Draw(t, "part")
		rest := rapid.Float64Range(0.002, 0.01).Draw(t, "rest")
		period := float64(n) * siderealDayDays / (float64(orbits) + rest)
		o := mustNewRapid(t, Elements{PeriodDays: period, AscendingNodeMJD: 55000})
		got, days := o.TransitRepeat(part)
		if got != n {
			t.Fatalf("%d parts, want %d", got, n)
		}
		const cells = 2000
		var seen [cells]bool
		left := cells
		for i := 0; left > 0; i++ {
			at := o.Phase(55000.3 + float64(i)*siderealDayDays)
			for c := int(at*cells) + 1; float64(c) <= (at+part)*cells; c++ {
				if !seen[c%cells] {
					seen[c%cells] = true
					left--
				}
			}
			if i > 100000 {
				t.Fatal("never all seen")
			}
			if left == 0 {
				// A cell, and what moves in one round, are let pass.
				slack := (2.0/cells + rest) / rest * float64(n)
				if walked := float64(i) * siderealDayDays; math.Abs(walked-days) > slack+float64(n) {
					t.Fatalf("all seen after %.1f d, said %.1f", walked, days)
				}
			}
		}
	})
	o := mustNew(t, Elements{PeriodDays: 100, AscendingNodeMJD: 55000})
	if parts, days := o.TransitRepeat(0.003); parts != 0 || days != 0 {
		t.Errorf("a long orbit is seen as it goes on, and not in %d parts for %g d", parts, days)
	}
	o = mustNew(t, Elements{PeriodDays: 0.1, AscendingNodeMJD: 55000})
	if parts, days := o.TransitRepeat(1.5); parts != 0 || days != 0 {
		t.Errorf("an orbit shorter than a transit is seen whole, and not in %d parts for %g d", parts, days)
	}
	o = mustNew(t, Elements{PeriodDays: siderealDayDays, AscendingNodeMJD: 55000})
	if parts, days := o.TransitRepeat(0.3); parts != 1 || math.IsInf(days, 0) || days < 1e6 {
		t.Errorf("an orbit of a sidereal day is seen in %d parts for %g d", parts, days)
	}
}
