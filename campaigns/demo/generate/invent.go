package main

import (
	"fmt"
	"math"
	"time"
)

// A sketch is a source as the scenario wants it: rough numbers and the reasons to observe it. invent
// gives it its digits.
type sketch struct {
	chapter  string // the file it belongs to
	role     string // what it is for, in plain words: becomes its comment
	name     string // calibrators only; pulsars are named after their position
	raH      float64
	decDeg   float64
	priority float64
	raised   float64 // the priority it has now, if that is another than it had until now

	periodS   float64
	slowdown  float64 // dP/dt, s/s
	dm        float64
	mjy       float64 // at 1400 MHz
	index     float64
	duty      float64 // pulse width as a share of the period
	floorUs   float64
	sunLimit  float64
	skyK      float64
	pmMas     float64 // size of the proper motion, mas/yr
	parallax  float64
	positions [2]float64 // error of the position, mas
	sigmas    *spinSigmas
	glitchMJD float64
	found     time.Time // observed since then only
	missed    time.Time // not observed since: there was always something else
	orbit     *orbitSketch
	aims      []aim
}

// spinSigmas are given where the ephemeris itself is the story; others get those of their kind.
type spinSigmas struct{ epochMJD, phaseTurns, frequencyHz, derivativeHzPerS float64 }

// An orbitSketch is a binary in rough numbers. The orbit's size follows from the masses, and its
// relativistic effects, where measured, from general relativity.
type orbitSketch struct {
	periodDays    float64
	exactPeriod   bool // the period makes the story: add no more than a few late digits
	e, omegaDeg   float64
	m1, m2, sinI  float64
	massKnown     bool
	sinIKnown     bool
	advanceKnown  bool
	decayKnown    bool
	conjunctionAt time.Time // superior conjunction on the observatory's clock; zero: any
	periastronAt  time.Time // likewise
	eclipse       *eclipse
	sigmaPeriod   float64
	sigmaEpoch    float64
}

// An aim is a reason to observe, with only the keys that its kind knows.
type aim struct {
	kind       string
	comment    string
	everyDays  float64
	receivers  []string
	pairDays   float64
	minutes    float64
	toaUs      float64
	minFrac    float64
	maxMinutes float64
	carry      float64
	minGap     float64
	ramp       *ramp

	halfWidth   float64
	wanted      int
	bins        int
	perBin      int
	since       string
	parameter   string
	goalPercent float64
	maxPhase    float64
	perSession  int
}

type ramp struct {
	from      string
	firstDays float64
	factor    float64
}

// A source is a sketch with all its digits.
type source struct {
	sketch
	raDeg       float64
	raText      string
	decText     string
	position    vector // J2000
	pm          [2]float64
	frequencyHz float64
	slowdownHz  float64 // dF/dt, Hz/s
	spinEpoch   float64
	sigma       spinSigmas
	atMHz       float64
	widthMs     float64
	jitterUs    float64
	orbit       *orbit
}

// inventSources gives every sketch its digits. It refuses two sources of one name.
func inventSources() []source {
	var out []source
	seen := map[string]bool{}
	for _, k := range sketches {
		s := invent(k)
		if seen[s.name] {
			panic("two sources are called " + s.name)
		}
		seen[s.name] = true
		out = append(out, s)
	}
	return out
}

func invent(k sketch) source {
	d := newDice(fmt.Sprintf("%s %.2f %+.1f", k.chapter, k.raH, k.decDeg))
	s := source{sketch: k, atMHz: 1400}
	s.placeAt(d)
	s.mjy = roundFigures(d.near(k.mjy, 0.06), 3)
	s.index = roundTo(k.index+d.between(-0.06, 0.06), 2)
	if k.periodS == 0 {
		return s
	}
	s.name = jName(s.raDeg, s.decDeg)
	s.spinUp(d)
	s.dm = roundTo(d.near(k.dm, 0.05), 3)
	if k.pmMas > 0 {
		angle := d.between(0, 2*math.Pi)
		s.pm = [2]float64{roundTo(k.pmMas*math.Sin(angle), 1), roundTo(k.pmMas*math.Cos(angle), 1)}
	}
	if k.orbit != nil {
		s.orbit = k.orbit.invent(d, s.position)
	}
	return s
}

// placeAt moves the rough position by up to a minute of time and a tenth of a degree, and writes it down.
func (s *source) placeAt(d dice) {
	raSec := roundTo((s.raH+d.between(-0.015, 0.015))*3600, 3)
	decSec := roundTo((math.Abs(s.decDeg)+d.between(-0.1, 0.1))*3600, 2)
	s.raDeg = raSec / 240
	s.decDeg = math.Copysign(decSec/3600, s.decDeg)
	s.raText = fmt.Sprintf("%02d:%02d:%06.3f", int(raSec)/3600, int(raSec)/60%60, math.Mod(raSec, 60))
	sign := "+"
	if s.decDeg < 0 {
		sign = "-"
	}
	s.decText = fmt.Sprintf("%s%02d:%02d:%05.2f", sign, int(decSec)/3600, int(decSec)/60%60, math.Mod(decSec, 60))
	s.position = direction(s.raDeg, s.decDeg)
}

// spinUp invents the rotation, and the pulse width and jitter that go with it.
func (s *source) spinUp(d dice) {
	s.periodS = d.near(s.periodS, 0.02)
	decimals := 13
	if s.periodS > 0.1 {
		decimals = 12
	}
	s.frequencyHz = roundTo(1/s.periodS, decimals)
	s.slowdownHz = roundFigures(-d.near(s.slowdown, 0.3)/(s.periodS*s.periodS), 5)
	s.spinEpoch = 60900 + math.Floor(d.between(0, 15))*10
	s.sigma = s.usualSigmas(d)
	if s.sigmas != nil {
		s.sigma = *s.sigmas
		s.spinEpoch = s.sigmas.epochMJD
	}
	s.widthMs = roundFigures(1000*s.periodS*d.near(s.duty, 0.15), 3)
	s.jitterUs = jitterPerHour(s.widthMs, s.periodS)
}

// usualSigmas returns the errors of a well-kept ephemeris: some thousandths of a turn after two years.
func (s *source) usualSigmas(d dice) spinSigmas {
	two := 2 * daysYear * secondsDay
	turns := d.between(0.0004, 0.002)
	if s.periodS > 0.05 {
		turns = d.between(0.002, 0.008)
	}
	return spinSigmas{
		phaseTurns:       roundFigures(turns/2, 1),
		frequencyHz:      roundFigures(turns/two, 2),
		derivativeHzPerS: roundFigures(turns/(two*two), 2),
	}
}

// jitterPerHour returns the TOA error from pulse jitter after one hour, µs.
//
//	σ_J = f W/sqrt(N), f = 0.2 for the averaged pulse, N pulses in an hour
func jitterPerHour(widthMs, periodS float64) float64 {
	return roundFigures(0.2*widthMs*1000/math.Sqrt(3600/periodS), 2)
}

func (k *orbitSketch) invent(d dice, position vector) *orbit {
	o := &orbit{eccentricity: k.e, periastronDeg: k.omegaDeg, eclipse: k.eclipse,
		sigmaPeriodDays: k.sigmaPeriod, sigmaEpochDays: k.sigmaEpoch}
	spread := 0.012
	if k.exactPeriod {
		spread = 1e-5
	}
	o.periodDays = roundTo(d.near(k.periodDays, spread), int(math.Round(-math.Log10(k.sigmaPeriod)))+1)
	if k.e > 0.01 {
		o.eccentricity = roundTo(d.near(k.e, 0.02), 7)
		o.periastronDeg = roundTo(d.near(k.omegaDeg, 0.05), 4)
	}
	o.semimajorLs = roundTo(semimajorLs(o.periodDays, k.m1, k.m2, k.sinI), 6)
	if k.massKnown {
		o.companionMsun = k.m2
	}
	if k.sinIKnown {
		o.sinI = k.sinI
	}
	if k.advanceKnown {
		o.advanceDegPerYr = roundFigures(advanceDegPerYr(o.periodDays, o.eccentricity, k.m1, k.m2), 5)
	}
	if k.decayKnown {
		o.decay = roundFigures(decay(o.periodDays, o.eccentricity, k.m1, k.m2), 4)
	}
	epochDecimals := int(math.Round(-math.Log10(k.sigmaEpoch))) + 1
	epoch := orbitEpochMJD + d.unit()*k.periodDays
	switch {
	case !k.conjunctionAt.IsZero():
		epoch = barycentreMJD(position, mjdOf(k.conjunctionAt)) - o.semimajorLs/secondsDay - o.periodDays/4
	case !k.periastronAt.IsZero():
		epoch = barycentreMJD(position, mjdOf(k.periastronAt))
	}
	epoch = roundTo(epoch-math.Round((epoch-orbitEpochMJD)/o.periodDays)*o.periodDays, epochDecimals)
	if k.e > 0.01 {
		o.periastronMJD = epoch
	} else {
		o.nodeMJD = epoch
	}
	return o
}

// orbitEpochMJD is near the middle of the campaign so far: there the epochs of orbits are known best.
const orbitEpochMJD = 61000

// jName names a source after its position: hours and minutes, degrees and minutes, cut off.
func jName(raDeg, decDeg float64) string {
	sign := "+"
	if decDeg < 0 {
		sign = "-"
	}
	raMin, decMin := int(raDeg*4), int(math.Abs(decDeg)*60)
	return fmt.Sprintf("J%02d%02d%s%02d%02d", raMin/60, raMin%60, sign, decMin/60, decMin%60)
}
