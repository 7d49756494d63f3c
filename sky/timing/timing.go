// Package timing says what is known of a pulsar and what an observation would add: the linearised
// timing model, its information matrix and covariance.
//
// Most readers need New, which takes a Source, the errors of its ephemeris (Priors) and the
// observations so far, and then Model.PhaseErrorTurns and Model.Deadline (is the count of the turns
// safe?), Model.SigmaOf (how well is this parameter known?), Model.GainPerMinute and Model.SlotGain
// (what would a minute, a slot, add to it?). ConjunctionWeight weighs orbital phases for the Shapiro
// delay alone.
//
// Conventions. Times are modified Julian dates, TDB at the solar-system barycentre: arrivals, with the
// binary's own light time in them. Using the observatory's time instead shifts orbital phases by up to
// 505 s over the period, and nothing else. A model only tells errors, never values: it is linear about
// the ephemeris and needs no measured arrival, only when and how well each was measured.
package timing

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"

	"example.org/tallystick/sky/orbit"
)

const (
	secPerDay   = 86400
	daysPerYear = 365.25
	farMJD      = 1e7 // 27,000 years: dates beyond are mistakes
	turn        = 2 * math.Pi
	degToRad    = math.Pi / 180
	masToRad    = degToRad / 3.6e6
	auSec       = 499.004783836 // light time over the astronomical unit
)

// A Source is the ephemeris that the model is linear about.
type Source struct {
	FrequencyHz      float64 // of rotation, above 0
	DerivativeHzPerS float64
	EpochMJD         float64 // of the frequency

	RADeg, DecDeg float64
	PMMasPerYr    [2]float64 // in right ascension (times cos dec) and declination
	PositionMJD   float64
	ParallaxMas   float64
	DMPcPerCm3    float64

	Orbit         *orbit.Elements // nil: a single pulsar
	CompanionMsun float64         // 0: not known, no Shapiro delay
	SinI          float64         // 0: not known; 60° is assumed when the mass is known
	EinsteinSec   float64         // amplitude of the Einstein delay; 0: as general relativity has it, where companion mass and sin i are known

	// GlitchMJD is the date of the last glitch, 0 for none. Rotation before it says nothing of rotation
	// after it: phase, frequency and derivative are then fitted apart on both sides.
	GlitchMJD float64
}

// An Observation is one measured, or possible, arrival time.
type Observation struct {
	MJD     float64
	SigmaUs float64 // error of the arrival time, above 0
	MHz     float64 // observing frequency; 0: free of dispersion
}

// A Prior says how well the ephemeris knows a parameter. An infinite Sigma frees the parameter without
// any knowledge of it. Parameters for which no Prior is given are held at their value, without error.
type Prior struct {
	Parameter Parameter
	Sigma     float64 // in the parameter's unit, above 0
}

// A Parameter is something that a timing model can measure.
type Parameter int

// The parameters, with the units of their errors. Frequency, position and orbit refer to the epochs of
// the Source.
const (
	Phase                 Parameter = iota // turns
	Frequency                              // Hz
	FrequencyDerivative                    // Hz/s
	RightAscension                         // mas, times cos dec
	Declination                            // mas
	ProperMotionRA                         // mas/yr, times cos dec
	ProperMotionDec                        // mas/yr
	Parallax                               // mas
	Dispersion                             // pc/cm³
	SemimajorAxis                          // light-seconds
	AscendingNode                          // days: epoch of the node
	OrbitalPeriod                          // days: of the kind that the Source's elements count
	OrbitalDecay                           // s/s
	Eps1                                   // e sin ω
	Eps2                                   // e cos ω
	AdvanceOfPeriastron                    // deg/yr
	CompanionMass                          // solar masses
	SinI                                   // –
	EinsteinDelay                          // seconds: its amplitude γ
	ProperMotion                           // mas/yr: the total
	Periastron                             // days: epoch of periastron
	Eccentricity                           // –
	LongitudeOfPeriastron                  // deg
	parameterCount
)

var parameterNames = [parameterCount]struct{ name, unit string }{
	Phase:                 {"phase", "turns"},
	Frequency:             {"spin frequency", "Hz"},
	FrequencyDerivative:   {"spin-down", "Hz/s"},
	RightAscension:        {"right ascension", "mas"},
	Declination:           {"declination", "mas"},
	ProperMotionRA:        {"proper motion in right ascension", "mas/yr"},
	ProperMotionDec:       {"proper motion in declination", "mas/yr"},
	Parallax:              {"parallax", "mas"},
	Dispersion:            {"dispersion measure", "pc/cm3"},
	SemimajorAxis:         {"semimajor axis", "ls"},
	AscendingNode:         {"ascending node", "d"},
	OrbitalPeriod:         {"orbital period", "d"},
	OrbitalDecay:          {"orbital decay", "s/s"},
	Eps1:                  {"eps1", ""},
	Eps2:                  {"eps2", ""},
	AdvanceOfPeriastron:   {"advance of periastron", "deg/yr"},
	CompanionMass:         {"companion mass", "Msun"},
	SinI:                  {"sin i", ""},
	EinsteinDelay:         {"einstein delay", "s"},
	ProperMotion:          {"proper motion", "mas/yr"},
	Periastron:            {"periastron", "d"},
	Eccentricity:          {"eccentricity", ""},
	LongitudeOfPeriastron: {"longitude of periastron", "deg"},
}

// String names the parameter in the words that ParameterNamed reads.
func (p Parameter) String() string {
	if p < 0 || p >= parameterCount {
		return fmt.Sprintf("parameter %d", int(p))
	}
	return parameterNames[p].name
}

// Unit is the unit of the parameter's error; empty for a pure number.
func (p Parameter) Unit() string {
	if p < 0 || p >= parameterCount {
		return ""
	}
	return parameterNames[p].unit
}

// ParameterNamed reads a parameter's name; capitals do not matter. The error lists the names.
func ParameterNamed(name string) (Parameter, error) {
	want := strings.ToLower(strings.TrimSpace(name))
	var names []string
	for p := range parameterCount {
		if parameterNames[p].name == want {
			return p, nil
		}
		names = append(names, parameterNames[p].name)
	}
	return 0, fmt.Errorf("parameter: found %q; accepted: %s", name, strings.Join(names, ", "))
}

// Undetermined is the error for parameters on which neither the ephemeris nor the observations say
// anything. Everything else in the model stays good.
type Undetermined struct{ Parameters []Parameter }

// Error names them.
func (u Undetermined) Error() string {
	var names []string
	for _, p := range u.Parameters {
		names = append(names, p.String())
	}
	words := "undetermined: " + strings.Join(names, ", ") + "; the ephemeris gives no error and the observations do not reach"
	if slices.Contains(u.Parameters, EinsteinDelay) {
		words += "; an einstein delay shows only by periastron's turning: until then it cannot be told from semimajor axis and longitude of periastron"
	}
	return words
}

// check reports every fault of a source, joined.
func (s Source) check() error {
	var faults []error
	finite := func(name string, v float64) {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			faults = append(faults, fmt.Errorf("%s: found %g; accepted a finite number", name, v))
		}
	}
	for _, f := range []struct {
		name  string
		value float64
	}{{"frequency derivative", s.DerivativeHzPerS}, {"right ascension", s.RADeg}, {"declination", s.DecDeg},
		{"proper motion", s.PMMasPerYr[0]}, {"proper motion", s.PMMasPerYr[1]},
		{"parallax", s.ParallaxMas}, {"dispersion measure", s.DMPcPerCm3}} {
		finite(f.name, f.value)
	}
	for _, f := range []struct {
		name string
		mjd  float64
	}{{"epoch", s.EpochMJD}, {"epoch of position", s.PositionMJD}, {"glitch", s.GlitchMJD}} {
		if !(math.Abs(f.mjd) <= farMJD) {
			faults = append(faults, fmt.Errorf("%s: found MJD %g; accepted within ±%g", f.name, f.mjd, farMJD))
		}
	}
	if !(s.FrequencyHz > 0) || math.IsInf(s.FrequencyHz, 0) {
		faults = append(faults, fmt.Errorf("spin frequency: found %g Hz; accepted above 0", s.FrequencyHz))
	}
	if !(s.CompanionMsun >= 0) || math.IsInf(s.CompanionMsun, 0) {
		faults = append(faults, fmt.Errorf("companion mass: found %g; accepted 0 or more", s.CompanionMsun))
	}
	if !(s.SinI >= 0 && s.SinI <= 1) {
		faults = append(faults, fmt.Errorf("sin i: found %g; accepted from 0 to 1", s.SinI))
	}
	if !(s.EinsteinSec >= 0) || math.IsInf(s.EinsteinSec, 0) {
		faults = append(faults, fmt.Errorf("einstein delay: found %g s; accepted 0 or more", s.EinsteinSec))
	}
	if s.Orbit == nil && s.EinsteinSec > 0 {
		faults = append(faults, errors.New("einstein delay: found without an orbit; accepted with one"))
	}
	if s.Orbit == nil && s.CompanionMsun > 0 {
		faults = append(faults, errors.New("companion mass: found without an orbit; accepted with one"))
	}
	return errors.Join(faults...)
}
