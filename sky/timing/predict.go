package timing

import "math"

// PhaseErrorTurns returns the 1-σ error of the pulse phase predicted for an instant, in turns, from the
// full covariance. It is infinite where something undetermined matters.
//
//	σ = F √(aᵀ C a),  a the row of partial derivatives
//
// Given:   mjd; mhz the observing frequency, which matters where the dispersion measure is free: with data
// at one frequency only, the phase is known at that frequency alone. 0 is infinite frequency.
// Source:  linear propagation
// Checked: TestPhaseConnection
func (m *Model) PhaseErrorTurns(mjd, mhz float64) float64 {
	var a vec
	m.geo.row(Observation{MJD: mjd, MHz: mhz}, &a)
	variance, ok := m.fit.variance(&a)
	if !ok || math.IsNaN(variance) {
		return math.Inf(1)
	}
	return m.geo.src.FrequencyHz * math.Sqrt(variance)
}

// horizonDays is how far ahead a deadline is looked for.
const horizonDays = 100 * daysPerYear

// A Deadline is the date by which a source must be seen again for its turns to stay counted.
type Deadline struct {
	MJD    float64 // the start of the search when Passed
	Passed bool    // the phase is already less certain than the limit
	Never  bool    // not within a hundred years
}

// Deadline returns the first date at or after fromMJD at which the predicted 1-σ phase error exceeds the
// limit. For a limit of k σ give limit/k.
//
// Given:    limitTurns above 0; mhz as for PhaseErrorTurns
// Neglects: a shorter excursion than a fiftieth of the time from fromMJD, at most 15 d: an orbit whose
// error swings above the limit is found within that
// Checked:  TestPhaseConnection
func (m *Model) Deadline(limitTurns, fromMJD, mhz float64) Deadline {
	over := func(mjd float64) bool { return !(m.PhaseErrorTurns(mjd, mhz) <= limitTurns) }
	if over(fromMJD) {
		return Deadline{MJD: fromMJD, Passed: true}
	}
	low := fromMJD
	for low < fromMJD+horizonDays {
		high := low + math.Min(15, math.Max(0.01, (low-fromMJD)/50))
		if !over(high) {
			low = high
			continue
		}
		for range 60 {
			mid := (low + high) / 2
			if mid == low || mid == high {
				break
			}
			if over(mid) {
				high = mid
			} else {
				low = mid
			}
		}
		return Deadline{MJD: high}
	}
	return Deadline{MJD: low, Never: true}
}

// SwingDays returns in how many days the annual wave that a position error leaves in the pulse phase reaches a limit in its
// worst season, once a fit has absorbed the first terms of its series: 2 are phase and F0, 3 are F1 as well.
//
//	A (ω t)^n / n! = limit,  ω = 2π a year
//
// Given:   the wave's amplitude A and the limit, turns above 0; how many terms are absorbed, 1 or more
// Returns: days from the middle of a short fit; the next term of the series counts for more than a tenth beyond 58 d (ω t = 1)
// Source:  the Taylor series of a sine
// Checked: TestSwingDays (PHA-011, -012, -014, -015), TestPositionErrorGrows against the whole model
func SwingDays(amplitudeTurns, limitTurns float64, absorbed int) float64 {
	const daysPerYear = 365.25
	x := limitTurns / amplitudeTurns
	for n := 2; n <= absorbed; n++ {
		x *= float64(n)
	}
	return math.Pow(x, 1/float64(absorbed)) * daysPerYear / turn
}

// PositionAmplitudeTurns returns the amplitude of the annual wave in pulse phase that an error of position
// makes, for explanations.
//
//	F (au/c) cos β Δλ   and   F (au/c) sin β Δβ,  added in quadrature
//
// Given:   frequency in Hz; ecliptic latitude in degrees; errors in arcsec, of longitude as a true offset
// on the ecliptic
// Checked: TestPositionAmplitude
func PositionAmplitudeTurns(frequencyHz, betaDeg, dLambdaArcsec, dBetaArcsec float64) float64 {
	sin, cos := math.Sincos(betaDeg * degToRad)
	return frequencyHz * auSec * 1e3 * masToRad * math.Hypot(cos*dLambdaArcsec, sin*dBetaArcsec)
}
