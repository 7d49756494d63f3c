package campaigns

import (
	"math"

	"example.org/tallystick/sky/orbit"
	"example.org/tallystick/sky/timing"
)

// OrbitSizes are what general relativity makes of a binary: what there is to be measured.
type OrbitSizes struct {
	CompanionMsun, SinI float64
	Assumed             string // what of the two is not known and assumed: empty, or words

	ShapiroUs float64 // the Shapiro delay, from its least to its most
	H3Us      float64 // its orthometric amplitude
	ThirdUs   float64 // its third harmonic, the first that the orbit's own parameters cannot take up

	// From both masses; zero where one of the two above is assumed, or where they contradict the size of the orbit.
	PulsarMsun      float64
	AdvanceDegPerYr float64
	Decay           float64 // s/s
	EinsteinUs      float64 // amplitude; 0 of a circular orbit
}

// What is taken where it is not known: the usual mass of a pulsar, and the inclination that half of all orbits exceed.
const assumedPulsarMsun = 1.4

var assumedSinI = math.Sin(60 * math.Pi / 180)

// sizes works out what a binary shows; nil where not even the size of the orbit is known.
func (o *Orbit) sizes(of *orbit.Orbit) *OrbitSizes {
	s := &OrbitSizes{CompanionMsun: o.CompanionMsun, SinI: o.SinI}
	if s.SinI == 0 {
		s.SinI, s.Assumed = assumedSinI, "an assumed inclination of 60 deg"
	}
	f := orbit.MassFunctionMsun(of.SemimajorLs, of.PeriodDays)
	if s.CompanionMsun == 0 {
		if of.SemimajorLs == 0 {
			return nil
		}
		s.CompanionMsun = orbit.CompanionMsun(f, assumedPulsarMsun, s.SinI)
		and := ""
		if s.Assumed != "" {
			and = " and " + s.Assumed
		}
		s.Assumed = "an assumed pulsar of 1.4 Msun" + and
	}
	s.shapiro(of)
	if m := orbit.PulsarMsun(f, s.CompanionMsun, s.SinI); s.Assumed == "" && m > 0 && m < 100 {
		s.PulsarMsun = m
		s.AdvanceDegPerYr = orbit.AdvanceGR(m, s.CompanionMsun, of.PeriodDays, of.Eccentricity)
		s.Decay = orbit.DecayGR(m, s.CompanionMsun, of.PeriodDays, of.Eccentricity)
		s.EinsteinUs = 1e6 * orbit.EinsteinSec(m, s.CompanionMsun, of.PeriodDays, of.Eccentricity)
	}
	return s
}

// shapiro is what the companion's gravity delays: most at superior conjunction, least at the inferior one.
func (s *OrbitSizes) shapiro(of *orbit.Orbit) {
	from := of.EpochMJD()
	ends := [2]float64{}
	for i, kind := range [...]orbit.Kind{orbit.Superior, orbit.Inferior} {
		at := of.Conjunctions(kind, from, from+1.5*of.PeriodDays)
		if len(at) == 0 {
			return
		}
		ends[i] = of.ShapiroSec(at[0], s.CompanionMsun, math.Min(s.SinI, 1-1e-9))
	}
	s.ShapiroUs = 1e6 * (ends[0] - ends[1])
	s.H3Us = 1e6 * timing.H3Sec(s.CompanionMsun, s.SinI)
	s.ThirdUs = 1e6 * timing.HarmonicSec(3, s.CompanionMsun, s.SinI)
}
