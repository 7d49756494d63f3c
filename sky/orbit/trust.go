package orbit

import (
	"fmt"
	"math"
)

// Sigmas are the 1-σ errors of an ephemeris, as far as they are known, and what else decides how far
// a conjunction can be predicted. Everything not known is 0.
type Sigmas struct {
	EpochDays     float64 // of the node or periastron, whichever the elements are counted from
	PeriodDays    float64
	Decay         float64 // s/s
	SemimajorLs   float64
	DataStartMJD  float64 // span of the observations behind the ephemeris
	DataFinishMJD float64

	// What a decay that was not measured may be.
	ProperMotionMasPerYr float64 // with DistanceKpc
	DistanceKpc          float64
	RadiatedDecay        float64 // by gravitational waves, without its sign: see DecayGR

	// WanderSecPerYr is added for orbits that wander irregularly, those of eclipsing systems, for every
	// year beyond the data; DefaultWanderSecPerYr is common practice.
	WanderSecPerYr float64
}

// DefaultWanderSecPerYr is what to expect of an eclipsing system beyond its data, by common practice:
// measured ones have moved by 10 to 15 s in ten years, some by more.
const DefaultWanderSecPerYr = 5

// A Caution is something a reader of a predicted conjunction should know.
type Caution string

// The cautions.
const (
	NodeFromSemimajor  Caution = "error of the node estimated from that of the semimajor axis: the orbit is nearly circular"
	NodeFromPeriastron Caution = "error of the node estimated from that of periastron: the orbit is nearly circular"
	EpochUnknown       Caution = "no error of the epoch given"
	PeriodUnknown      Caution = "no error of the period given"
	DecayBounded       Caution = "decay not measured: bounded by the effect of proper motion"
	DecayAbsent        Caution = "no decay in the ephemeris: a drift is possible"
	Wanders            Caution = "the orbit may wander irregularly beyond the data"
)

// Prediction is how well a conjunction is known.
type Prediction struct {
	SigmaDays  float64
	SigmaTurns float64
	Cautions   []Caution // in the order of the constants
}

// nearlyCircular is the eccentricity below which periastron and its longitude are so correlated that
// the error of the one says nothing about the conjunction.
const nearlyCircular = 0.1

// ConjunctionError returns the error of a conjunction predicted for an instant (orbit time).
//
//	σ² = σ_epoch² + (n σ_Pb)² + (½ n² Pb σ_Ṗb)² + wander²
//
// with n the orbits from the middle of the data where that is known, else from the epoch, because the
// errors of period and epoch are correlated elsewhere. Of a nearly circular orbit given by periastron
// the error of the epoch is never used: periastron is as uncertain as its longitude, and the two
// errors cancel in the conjunction. What is left is about Pb/2π · σ_x/x, or e σ_T0.
//
// Source:  Lange et al. 2001, MNRAS 326, 274 for the correlation
// Checked: TestConjunctionError, against published errors of the node
func (o Orbit) ConjunctionError(s Sigmas, mjd float64) Prediction {
	var p Prediction
	epoch := o.epochError(s, &p)
	if s.PeriodDays <= 0 {
		p.Cautions = append(p.Cautions, PeriodUnknown)
	}
	from, end := o.epoch, o.epoch
	if s.DataFinishMJD > s.DataStartMJD && s.DataStartMJD > 0 {
		from, end = (s.DataStartMJD+s.DataFinishMJD)/2, s.DataFinishMJD
	}
	n := (mjd - from) / o.PeriodDays
	decay := o.decayError(s, &p)
	wander := 0.0
	if s.WanderSecPerYr > 0 {
		wander = s.WanderSecPerYr / secPerDay * math.Max(0, mjd-end) / daysPerYear
		p.Cautions = append(p.Cautions, Wanders)
	}
	p.SigmaDays = math.Sqrt(square(epoch) + square(n*s.PeriodDays) + square(0.5*n*n*o.PeriodDays*decay) + square(wander))
	p.SigmaTurns = p.SigmaDays / o.PeriodDays
	return p
}

// EpochErrorDays returns the error of the epoch as it counts in conjunctions, 0 where it is not known: that of the
// node for nearly circular orbits, also of those given by periastron, as ConjunctionError says. The second result
// tells whether it is that of periastron instead.
func (o Orbit) EpochErrorDays(s Sigmas) (days float64, ofPeriastron bool) {
	var p Prediction
	days = o.epochError(s, &p)
	return days, !o.node && o.Eccentricity >= nearlyCircular
}

func (o *Orbit) epochError(s Sigmas, p *Prediction) float64 {
	e := o.Eccentricity
	switch {
	case !o.node && e > 0 && e < nearlyCircular && s.SemimajorLs > 0 && o.SemimajorLs > 0:
		p.Cautions = append(p.Cautions, NodeFromSemimajor)
		return NodeErrorDays(o.PeriodDays, o.SemimajorLs, s.SemimajorLs)
	case s.EpochDays <= 0:
		p.Cautions = append(p.Cautions, EpochUnknown)
		return 0
	case !o.node && e > 0 && e < nearlyCircular:
		p.Cautions = append(p.Cautions, NodeFromPeriastron)
		return e * s.EpochDays
	}
	return s.EpochDays
}

// NodeErrorDays estimates the error of the ascending node from that of the semimajor axis: the sine and
// the cosine of the orbit are measured equally well.
//
//	σ_node ≈ Pb/(2π) σ_x/x
//
// Source:  Lange et al. 2001, MNRAS 326, 274
// Checked: TestConjunctionError; within 1.5 of published errors
func NodeErrorDays(periodDays, semimajorLs, sigmaLs float64) float64 {
	return periodDays / turn * sigmaLs / semimajorLs
}

func (o *Orbit) decayError(s Sigmas, p *Prediction) float64 {
	switch {
	case s.Decay > 0:
		return s.Decay
	case o.Decay != 0 || len(o.series) > 1:
		return 0
	case s.ProperMotionMasPerYr > 0 && s.DistanceKpc > 0:
		p.Cautions = append(p.Cautions, DecayBounded)
		return KinematicDecay(o.PeriodDays, s.ProperMotionMasPerYr, s.DistanceKpc) + s.RadiatedDecay
	}
	p.Cautions = append(p.Cautions, DecayAbsent)
	return s.RadiatedDecay
}

// KinematicDecay returns the apparent dPb/dt of an orbit whose system moves across the sky.
//
//	Ṗb = Pb μ² d/c
//
// Source:  Shklovskii 1970, Sov. Astron. 13, 562
// Checked: TestKinematicDecay
func KinematicDecay(periodDays, properMotionMasPerYr, distanceKpc float64) float64 {
	const kpcSec = 3.0856775815e19 / 299792458 // light time over a kiloparsec
	mu := properMotionMasPerYr * degToRad / 3.6e6 / (daysPerYear * secPerDay)
	return periodDays * secPerDay * mu * mu * distanceKpc * kpcSec
}

func square(x float64) float64 { return x * x }

// Trust is what a prediction is good for, against the half-width of an aim.
type Trust int

// The degrees of trust.
const (
	Trustworthy Trust = iota // 3 σ lie inside the half-width
	Widen                    // between a third of the half-width and all of it: widen the window
	Refuse                   // σ beyond the half-width: planning it would be guesswork
)

// String names the degree.
func (t Trust) String() string {
	switch t {
	case Trustworthy:
		return "trustworthy"
	case Widen:
		return "widen"
	}
	return "refuse"
}

// TrustFor judges a prediction for an aim of a given half-width in turns. WidenedTurns returns the
// half-width to use.
func (p Prediction) TrustFor(halfWidthTurns float64) Trust {
	switch {
	case 3*p.SigmaTurns < halfWidthTurns:
		return Trustworthy
	case p.SigmaTurns <= halfWidthTurns:
		return Widen
	}
	return Refuse
}

// WidenedTurns returns the half-width of the window that holds the wanted one with 3-σ certainty, at
// most half a turn; the wanted half-width itself while the prediction is trustworthy.
func (p Prediction) WidenedTurns(halfWidthTurns float64) float64 {
	if p.TrustFor(halfWidthTurns) == Trustworthy {
		return halfWidthTurns
	}
	return math.Min(0.5, halfWidthTurns+3*p.SigmaTurns)
}

// Say returns the judgement in plain words.
func (p Prediction) Say(halfWidthTurns float64) string {
	switch p.TrustFor(halfWidthTurns) {
	case Trustworthy:
		return fmt.Sprintf("trustworthy: known to %.2g turns, wanted within %.2g", p.SigmaTurns, halfWidthTurns)
	case Widen:
		return fmt.Sprintf("window widened to %.2g turns each side: known to %.2g turns only, wanted within %.2g",
			p.WidenedTurns(halfWidthTurns), p.SigmaTurns, halfWidthTurns)
	}
	return fmt.Sprintf("refused: known to %.2g turns only, wanted within %.2g; the orbit must be measured again first",
		p.SigmaTurns, halfWidthTurns)
}
