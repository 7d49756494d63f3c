package orbit

import "math"

const (
	siderealDayDays = 0.99726957
	siderealDayOff  = 5e-9 // at most: what is rounded off
)

// TransitStepTurns returns by how much the orbital phase steps from one transit of the source over a
// site to the next, 0 ≤ step < 1. Near 0, 1 or a simple fraction a site sees the same phases for months.
//
// Checked: TestTransitStep
func (o Orbit) TransitStepTurns() float64 { return fraction(siderealDayDays / o.PeriodDays) }

// mostParts is how many parts of an orbit may be seen in turn for it to be said that they are the same ones: of
// more, too little is missing between them.
const mostParts = 6

// TransitRepeat says how long a site that can follow the source for a part of its orbit at every transit sees no
// more than the same few parts. After n transits and about a whole number of orbits the site is back where it
// was but for a small rest, by which the n parts move; all of the orbit has been seen when they have moved from
// one to the next.
//
//	days = n d (1/n − part)/|n s − round(n s)|,  s the step of the phase, d the sidereal day
//
// The rest is taken for no smaller than what is rounded off of the day in n of them: that of an orbit of exactly one
// sidereal day is not known better.
//
// Given:    partTurns, what is seen of the orbit at one transit
// Returns:  the n of at most 6, without an orbit or more in n days none, for which that takes longest;
// 0 and 0 where the parts leave nothing between them
// Neglects: that the phase of superior conjunction is not kept evenly in an eccentric orbit
// Checked:  TestTransitRepeat, against a walk from transit to transit
func (o Orbit) TransitRepeat(partTurns float64) (parts int, days float64) {
	step := o.TransitStepTurns()
	for n := 1; n <= mostParts; n++ {
		gap := 1/float64(n) - partTurns
		if gap <= 0 || float64(n)*siderealDayDays/o.PeriodDays < 0.5 {
			continue
		}
		rest := max(math.Abs(float64(n)*step-math.Round(float64(n)*step)), float64(n)*siderealDayOff/o.PeriodDays)
		if d := float64(n) * siderealDayDays * gap / rest; d > days {
			parts, days = n, d
		}
	}
	return parts, days
}
