package timing

import (
	"math"
	"slices"

	"example.org/tallystick/sky/orbit"
)

// LoosePriors completes the stated errors of an ephemeris: every other parameter that has a meaning for
// the source is set free, known only as well as nature allows. It is for the aims to measure something
// and to keep count, where an error that was not stated must not pass for none.
//
// The ranges: a position within a beam of 10′, 200 mas/yr, 10 mas, 1 pc/cm³, a frequency within 1e-5 and a
// derivative of 1e-11 Hz/s at most, an orbit within a tenth of its size and a hundredth of its period, a
// companion within a solar mass, an Einstein delay as a companion of ten would make it. They are common
// practice and wide on purpose.
//
// Given:   stated, which is kept as it is and comes first
// Returns: a new slice
// Checked: TestLoosePriors
func LoosePriors(src Source, stated []Prior) []Prior {
	out := slices.Clone(stated)
	var covered [columns]bool
	for _, p := range stated {
		for _, c := range columnsOf(p.Parameter) {
			covered[c] = true
		}
	}
	add := func(p Parameter, sigma float64) {
		if !covered[p] {
			out = append(out, Prior{p, sigma})
		}
	}
	add(Phase, math.Inf(1)) // the first arrival starts the count
	add(Frequency, 1e-5*src.FrequencyHz)
	add(FrequencyDerivative, 1e-11)
	add(RightAscension, 6e5)
	add(Declination, 6e5)
	add(ProperMotionRA, 200)
	add(ProperMotionDec, 200)
	add(Parallax, 10)
	add(Dispersion, 1)
	if src.Orbit == nil {
		return out
	}
	period := src.Orbit.PeriodDays
	if len(src.Orbit.FrequencySeries) > 0 {
		period = 1 / (src.Orbit.FrequencySeries[0] * secPerDay)
	}
	add(SemimajorAxis, max(0.1*src.Orbit.SemimajorLs, 0.001))
	add(AscendingNode, 0.1*period)
	add(OrbitalPeriod, 0.01*period)
	add(OrbitalDecay, 1e-10)
	add(Eps1, 0.1)
	add(Eps2, 0.1)
	if src.Orbit.Eccentricity > 0.001 {
		add(AdvanceOfPeriastron, 10)
		add(EinsteinDelay, max(src.EinsteinSec, orbit.EinsteinSec(1.4, 10, period, src.Orbit.Eccentricity)))
	}
	if src.CompanionMsun > 0 {
		add(CompanionMass, 1)
		add(SinI, 0.3)
	}
	return out
}
