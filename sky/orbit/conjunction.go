package orbit

import "math"

// A Kind is one of the two conjunctions of an orbit.
type Kind int

// The conjunctions.
const (
	Superior Kind = iota // the pulsar is behind its companion: largest Shapiro delay, eclipse
	Inferior             // the pulsar is in front
)

// String returns "superior" or "inferior".
func (k Kind) String() string {
	if k == Inferior {
		return "inferior"
	}
	return "superior"
}

func (k Kind) longitudeTurns() float64 {
	if k == Inferior {
		return 0.75
	}
	return 0.25
}

// Conjunctions returns the instants of one kind of conjunction from fromMJD to toMJD, both included,
// in order, orbit time. The list is as long as the span asks for: span/PeriodDays.
//
//	ω0 + (1+k) A = 90° + 360° n   (superior; 270° inferior), then A → E → M → t
//
// Returns: nothing when toMJD is before fromMJD, when either is beyond ±1e7 (27,000 years), or when the elements
// mean nothing at either (see Meaningful)
// Source:  Damour & Deruelle 1986, Ann. Inst. H. Poincaré 44, 263
// Checked: TestConjunctions, TestConjunctionsAgainstScan
func (o Orbit) Conjunctions(kind Kind, fromMJD, toMJD float64) []float64 {
	if !(toMJD >= fromMJD) || math.Abs(fromMJD) > 1e7 || math.Abs(toMJD) > 1e7 || !o.Meaningful(fromMJD) || !o.Meaningful(toMJD) {
		return nil
	}
	var times []float64
	// Starting one early costs nothing and forgives rounding at the edge.
	first := math.Ceil(o.longitudeTurns(fromMJD)-kind.longitudeTurns()) - 1
	most := 4 + 4*(toMJD-fromMJD)/o.PeriodDays // a series that runs to and fro between the ends has an end too
	for n := first; n <= first+most; n++ {
		t, ok := o.conjunction(kind, n)
		if !ok || t > toMJD {
			return times
		}
		if t >= fromMJD {
			times = append(times, t)
		}
	}
	return times
}

// conjunction returns the instant at which the true longitude has made n whole turns and stands at
// the conjunction.
func (o *Orbit) conjunction(kind Kind, n float64) (mjd float64, ok bool) {
	anomaly := (kind.longitudeTurns() + n - o.om/turn) / (1 + o.advance)
	return o.whenMeanAnomaly(meanFromTrue(anomaly, o.Eccentricity))
}

// nearest returns the conjunction nearest to an instant.
func (o *Orbit) nearest(kind Kind, mjd float64) (float64, bool) {
	n := math.Round(o.longitudeTurns(mjd) - kind.longitudeTurns())
	best, found := 0.0, false
	for d := -1.0; d <= 1; d++ {
		t, ok := o.conjunction(kind, n+d)
		if ok && (!found || math.Abs(t-mjd) < math.Abs(best-mjd)) {
			best, found = t, true
		}
	}
	return best, found
}

// ConjunctionPhase returns the phase (from the ascending node) at which the conjunction nearest to an
// instant happens: 0.25 or 0.75 in a circular orbit, elsewhere in an eccentric one, and moving with
// the advance of periastron.
func (o Orbit) ConjunctionPhase(kind Kind, mjd float64) float64 {
	t, ok := o.nearest(kind, mjd)
	if !ok {
		return kind.longitudeTurns()
	}
	return o.Phase(t)
}
