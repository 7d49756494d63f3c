// Package orbit says where in its orbit a binary pulsar is: orbital phases, conjunctions, eclipses,
// the light time across the orbit, and how far a predicted conjunction may be trusted.
//
// Most readers need New, Orbit.Phase, Orbit.Conjunctions, Orbit.EclipseSpans, Orbit.ToObservatory
// and Orbit.ConjunctionError.
//
// Conventions. Angles and longitudes are those of the pulsar's own orbit and count from its ascending
// node, where it recedes fastest. "Phase" is the mean orbital longitude in turns, from the ascending
// node, 0 ≤ phase < 1: it runs evenly with time. In a circular orbit superior conjunction (the pulsar
// behind its companion) is at phase 0.25 and inferior conjunction at 0.75; in an eccentric orbit they
// are where the true longitude is 90° and 270°, and ConjunctionPhase says which phase that is.
// Phases counted from periastron are only given by calls that say so.
//
// Times are modified Julian dates in TDB at the solar-system barycentre with the orbit's own light
// time taken off, the time in which published epochs of orbits are given ("orbit time" below). A day
// number in a float64 is good to 0.6 µs. ToObservatory and FromObservatory change to the arrival at
// the telescope.
package orbit

import (
	"errors"
	"fmt"
	"math"
)

const (
	secPerDay   = 86400
	daysPerYear = 365.25 // Julian year
	turn        = 2 * math.Pi
	degToRad    = math.Pi / 180
)

// largestSpeed is the largest orbital speed, in units of that of light, New believes. The fastest
// known binary pulsars move at about 0.002; beyond 0.1 days and seconds have been mixed up.
const largestSpeed = 0.1

// largestDecay is the largest |dPb/dt|. Published values stay below 1e-10; tables often print them
// in units of 1e-12, and a number above this limit is one of those.
const largestDecay = 1e-7

// Elements are the orbital elements of an ephemeris. Exactly one of the two epochs is set (not 0).
// Exactly one of PeriodDays and FrequencySeries is set.
type Elements struct {
	PeriodDays       float64 // at the epoch; node to node with AscendingNodeMJD, periastron to periastron with PeriastronMJD
	AscendingNodeMJD float64 // instant of mean orbital longitude 0, orbit time
	PeriastronMJD    float64 // orbit time
	SemimajorLs      float64 // of the pulsar's orbit times sin i, light-seconds, ≥ 0
	Eccentricity     float64 // 0 ≤ e < 1
	PeriastronDeg    float64 // longitude of periastron at the epoch
	AdvanceDegPerYr  float64 // of periastron
	Decay            float64 // dPb/dt, s/s; must be 0 with FrequencySeries

	// FrequencySeries is the orbital frequency at the epoch and its time derivatives: Hz, Hz/s, Hz/s² …
	FrequencySeries []float64
}

// An Orbit answers questions about Elements that New has checked. Its zero value is of no use.
// It may be copied, and shared between goroutines.
type Orbit struct {
	Elements

	epoch   float64 // MJD
	advance float64 // k: turns of periastron per turn of true anomaly
	om      float64 // longitude of periastron when the mean anomaly is 0, rad
	series  []float64
	node    bool
}

// New checks the elements. Every fault is reported, joined, each naming the element. With a
// FrequencySeries the orbit's PeriodDays and Decay are filled in from it.
func New(el Elements) (Orbit, error) {
	if err := check(el); err != nil {
		return Orbit{}, err
	}
	o := Orbit{Elements: el, epoch: el.PeriastronMJD}
	if len(el.FrequencySeries) > 0 {
		o.series = append([]float64(nil), el.FrequencySeries...)
		o.PeriodDays = 1 / (el.FrequencySeries[0] * secPerDay)
		if len(el.FrequencySeries) > 1 {
			o.Decay = DecayFromSeries(el.FrequencySeries[0], el.FrequencySeries[1])
		}
	}
	o.om = el.PeriastronDeg * degToRad
	perTurn := el.AdvanceDegPerYr / (360 * daysPerYear) * o.PeriodDays
	o.advance = perTurn
	if el.AscendingNodeMJD != 0 {
		o.node, o.epoch = true, el.AscendingNodeMJD
		// A node-to-node period P gives k = q P (1+k), q the rate of the advance in turns per day.
		o.advance = perTurn / (1 - perTurn)
		// Between the node and periastron the longitude of periastron advances too.
		o.om *= 1 + o.advance
	}
	if v := o.largestSpeed(); v > largestSpeed {
		return Orbit{}, fmt.Errorf("orbit: found semimajor axis %g ls with period %g d, which moves the pulsar at %.3g of the speed of light; accepted up to %g",
			el.SemimajorLs, o.PeriodDays, v, largestSpeed)
	}
	return o, nil
}

func check(el Elements) error {
	var faults []error
	fault := func(format string, args ...any) { faults = append(faults, fmt.Errorf(format, args...)) }
	for _, f := range []struct {
		name  string
		value float64
	}{
		{"period", el.PeriodDays}, {"ascending node", el.AscendingNodeMJD}, {"periastron epoch", el.PeriastronMJD},
		{"semimajor axis", el.SemimajorLs}, {"eccentricity", el.Eccentricity}, {"longitude of periastron", el.PeriastronDeg},
		{"advance of periastron", el.AdvanceDegPerYr}, {"decay", el.Decay},
	} {
		if math.IsNaN(f.value) || math.IsInf(f.value, 0) {
			fault("%s: found %g; accepted a finite number", f.name, f.value)
		}
	}
	for i, f := range el.FrequencySeries {
		if math.IsNaN(f) || math.IsInf(f, 0) {
			fault("frequency series: found %g as term %d; accepted a finite number", f, i)
		}
	}
	if faults != nil {
		return errors.Join(faults...)
	}
	switch {
	case el.AscendingNodeMJD == 0 && el.PeriastronMJD == 0:
		fault("epoch: found none; accepted the ascending node or periastron, as a modified Julian date")
	case el.AscendingNodeMJD != 0 && el.PeriastronMJD != 0:
		fault("epoch: found both the ascending node and periastron; accepted one of them")
	}
	switch n := len(el.FrequencySeries); {
	case n == 0 && el.PeriodDays <= 0:
		fault("period: found %g d; accepted above 0", el.PeriodDays)
	case n > 0 && el.PeriodDays != 0:
		fault("period: found %g d beside a frequency series; accepted one of them", el.PeriodDays)
	case n > 0 && el.FrequencySeries[0] <= 0:
		fault("frequency series: found %g Hz; accepted above 0", el.FrequencySeries[0])
	case n > 0 && el.Decay != 0:
		fault("decay: found %g beside a frequency series, whose second term says it; accepted one of them", el.Decay)
	}
	if el.Eccentricity < 0 || el.Eccentricity >= 1 {
		fault("eccentricity: found %g; accepted from 0 to below 1", el.Eccentricity)
	}
	if el.SemimajorLs < 0 {
		fault("semimajor axis: found %g ls; accepted 0 or more", el.SemimajorLs)
	}
	if math.Abs(el.Decay) > largestDecay {
		fault("decay: found %g s/s; accepted within ±%g\n(tables often print it in units of 1e-12)", el.Decay, largestDecay)
	}
	if perTurn := el.AdvanceDegPerYr * el.PeriodDays / (360 * daysPerYear); math.Abs(perTurn) > 0.1 {
		fault("advance of periastron: found %g deg/yr, %.2g turns an orbit; accepted below 0.1 turns an orbit", el.AdvanceDegPerYr, perTurn)
	}
	return errors.Join(faults...)
}

// largestSpeed is the line-of-sight speed at periastron, in units of that of light: the amplitude
// 2π x/(Pb √(1−e²)) times 1+e.
func (o Orbit) largestSpeed() float64 {
	e := o.Eccentricity
	return turn * o.SemimajorLs / (o.PeriodDays * secPerDay) * math.Sqrt((1+e)/(1-e))
}

// EpochMJD is the epoch the elements are counted from, node or periastron.
func (o Orbit) EpochMJD() float64 { return o.epoch }

// elapsed returns the orbits since the epoch, of the kind the period counts.
//
//	N = dt/Pb − ½ Ṗb (dt/Pb)²        or        N = f0 dt + f1 dt²/2 + f2 dt³/6 + …
//
// Given:   mjd, orbit time
// Returns: turns, negative before the epoch
// Source:  Damour & Deruelle 1986, Ann. Inst. H. Poincaré 44, 263
// Checked: TestOrbitsElapsed, TestEpochToEpoch
func (o *Orbit) elapsed(mjd float64) float64 {
	dt := mjd - o.epoch
	if o.series == nil {
		n := dt / o.PeriodDays
		return n - 0.5*o.Decay*n*n
	}
	dt *= secPerDay
	n := 0.0
	for i := len(o.series) - 1; i >= 0; i-- { // Horner's scheme on dt/1 (f0 + dt/2 (f1 + dt/3 (f2 …
		n = (n + o.series[i]) * dt / float64(i+1)
	}
	return n
}

// rate is the derivative of elapsed, turns per day.
func (o *Orbit) rate(mjd float64) float64 {
	dt := mjd - o.epoch
	if o.series == nil {
		return (1 - o.Decay*dt/o.PeriodDays) / o.PeriodDays
	}
	dt *= secPerDay
	f := 0.0
	for i := len(o.series) - 1; i >= 1; i-- {
		f = (f + o.series[i]) * dt / float64(i)
	}
	return (f + o.series[0]) * secPerDay
}

// Meaningful reports whether the elements say anything at an instant: whether the orbit still runs at between half
// and twice the rate that it has at the epoch. A frequency series is a fit to its data and runs away beyond them.
func (o Orbit) Meaningful(mjd float64) bool {
	r := o.rate(mjd) * o.PeriodDays
	return r > 0.5 && r < 2
}

// whenElapsed is the inverse of elapsed, by Newton's method. The second result is false where the
// series has run backwards or nowhere: so far from the epoch that it means nothing.
func (o *Orbit) whenElapsed(turns float64) (mjd float64, ok bool) {
	mjd = o.epoch + turns*o.PeriodDays
	for range 30 {
		r := o.rate(mjd)
		if !(r > 0) {
			return 0, false
		}
		step := (turns - o.elapsed(mjd)) / r
		mjd += step
		if math.Abs(step) <= 1e-11+1e-16*math.Abs(mjd) {
			return mjd, true
		}
	}
	return mjd, math.Abs(o.elapsed(mjd)-turns) < 1e-6
}

// meanAnomaly returns the mean anomaly in turns, whole turns kept.
func (o *Orbit) meanAnomaly(mjd float64) float64 {
	_, anomaly := o.Means(mjd)
	return anomaly
}

// whenMeanAnomaly is the inverse of meanAnomaly.
func (o *Orbit) whenMeanAnomaly(turns float64) (mjd float64, ok bool) {
	if o.node {
		turns = turns*(1+o.advance) + o.om/turn
	}
	return o.whenElapsed(turns)
}

// Phase returns the orbital phase from the ascending node, 0 ≤ phase < 1: the mean orbital longitude
// in turns, so that it runs evenly with time.
//
// Given:    mjd, orbit time
// Returns:  turns
// Neglects: with mjd the barycentric arrival instead of orbit time, up to SemimajorLs: 1.5e-5 turns
// for an orbit of 11 ls in 8.7 d
func (o Orbit) Phase(mjd float64) float64 {
	longitude, _ := o.Means(mjd)
	return fraction(longitude)
}

// Means returns the mean orbital longitude and the mean anomaly in turns, whole turns kept: Phase and
// PhasePeriastron without their whole turns taken off. Their difference is the longitude of periastron in the
// mean. It is the call for inner loops.
func (o *Orbit) Means(mjd float64) (longitude, anomaly float64) {
	n := o.elapsed(mjd)
	if o.node {
		return n, (n - o.om/turn) / (1 + o.advance)
	}
	return o.om/turn + (1+o.advance)*n, n
}

// PhasePeriastron returns the mean anomaly in turns: the phase counted from periastron, 0 ≤ phase < 1.
func (o Orbit) PhasePeriastron(mjd float64) float64 { return fraction(o.meanAnomaly(mjd)) }

// LongitudeDeg returns the true orbital longitude, counted from the ascending node, 0 ≤ θ < 360:
// 90 at superior conjunction, 270 at inferior.
func (o Orbit) LongitudeDeg(mjd float64) float64 { return 360 * fraction(o.longitudeTurns(mjd)) }

// PeriastronDegAt returns the longitude of periastron at an instant, 0 ≤ ω < 360.
//
//	ω = ω0 + k A,  k = ω̇ Pb/(360 · 365.25),  A the true anomaly with whole turns kept
//
// Source:  Damour & Deruelle 1986
// Checked: TestPeriastronAdvances
func (o Orbit) PeriastronDegAt(mjd float64) float64 {
	return 360 * fraction((o.om+o.advance*turn*o.trueAnomalyTurns(mjd))/turn)
}

// trueAnomalyTurns returns the true anomaly with whole turns kept.
func (o *Orbit) trueAnomalyTurns(mjd float64) float64 {
	m := o.meanAnomaly(mjd)
	whole := math.Round(m)
	return whole + trueAnomaly(EccentricAnomaly((m-whole)*turn, o.Eccentricity), o.Eccentricity)/turn
}

func (o *Orbit) longitudeTurns(mjd float64) float64 {
	return o.om/turn + (1+o.advance)*o.trueAnomalyTurns(mjd)
}

// fraction returns x − floor(x), below 1 also where rounding would make it 1.
func fraction(x float64) float64 {
	f := x - math.Floor(x)
	if f >= 1 {
		return 0
	}
	return f
}
