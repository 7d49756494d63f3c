package orbit

import "math"

// An Eclipse is the part of the orbit in which the pulsar is not heard.
//
// CentreTurns is counted so that superior conjunction is at 0.25. In a circular orbit that is the phase
// from the ascending node; in an eccentric one, the time from superior conjunction in units of the
// period, plus 0.25, since an eclipse stays with the conjunction while phase 0.25 does not.
type Eclipse struct {
	CentreTurns    float64 // 0.25 unless the eclipse trails
	HalfWidthTurns float64 // at ReferenceMHz
	MarginTurns    float64 // on both sides: heard, but delayed by the companion's wind and of no use for timing
	ReferenceMHz   float64 // 0: the width is the same at all frequencies
	Index          float64 // width ∝ frequency^Index; −0.4 is typical
}

// At returns the eclipse as it is at another observing frequency.
//
//	width = width_ref (f/f_ref)^index
//
// Given:   mhz above 0; an Eclipse without ReferenceMHz is returned as it is
// Returns: half-width at most half a turn
// Source:  Fruchter et al. 1990, ApJ 351, 642
// Checked: TestEclipseWidths
func (e Eclipse) At(mhz float64) Eclipse {
	if e.ReferenceMHz > 0 && mhz > 0 {
		e.HalfWidthTurns = math.Min(0.5, e.HalfWidthTurns*math.Pow(mhz/e.ReferenceMHz, e.Index))
		e.ReferenceMHz = mhz
	}
	return e
}

// In reports whether the pulsar is hidden at a phase counted so that superior conjunction is at 0.25.
// For an eccentric orbit ask Orbit.Eclipsed.
func (e Eclipse) In(phase float64) bool {
	return e.HalfWidthTurns > 0 && apart(phase, e.CentreTurns) <= e.HalfWidthTurns
}

// InMargin reports whether the pulsar is heard at that phase but its pulses are of no use for timing.
func (e Eclipse) InMargin(phase float64) bool {
	return e.HalfWidthTurns > 0 && !e.In(phase) && apart(phase, e.CentreTurns) <= e.HalfWidthTurns+e.MarginTurns
}

// apart is the distance between two phases, 0..0.5.
func apart(a, b float64) float64 {
	d := fraction(a - b)
	return math.Min(d, 1-d)
}

// A Span is a stretch of time, modified Julian dates.
type Span struct{ FromMJD, ToMJD float64 }

// EclipseSpans returns when the pulsar is hidden between two instants, in order, cut off at both ends,
// orbit time. Spans that touch are joined.
func (o Orbit) EclipseSpans(e Eclipse, fromMJD, toMJD float64) []Span {
	return o.around(e, e.HalfWidthTurns, fromMJD, toMJD)
}

// UntimableSpans returns when pulses carry no weight for timing: the eclipse and its margins.
func (o Orbit) UntimableSpans(e Eclipse, fromMJD, toMJD float64) []Span {
	return o.around(e, e.HalfWidthTurns+e.MarginTurns, fromMJD, toMJD)
}

func (o *Orbit) around(e Eclipse, half, fromMJD, toMJD float64) []Span {
	if !(e.HalfWidthTurns > 0) || !(toMJD > fromMJD) {
		return nil
	}
	if half >= 0.5 {
		return []Span{{fromMJD, toMJD}}
	}
	var spans []Span
	// Half a turn each way holds the eclipses whose centre is outside the span, wherever it trails.
	reach := (half + apart(e.CentreTurns, 0.25)) * o.PeriodDays
	lag := (fraction(e.CentreTurns-0.25+0.5) - 0.5) * o.PeriodDays
	for _, t := range o.Conjunctions(Superior, fromMJD-reach, toMJD+reach) {
		from := math.Max(fromMJD, t+lag-half*o.PeriodDays)
		to := math.Min(toMJD, t+lag+half*o.PeriodDays)
		if to <= from {
			continue
		}
		if last := len(spans) - 1; last >= 0 && spans[last].ToMJD >= from {
			spans[last].ToMJD = to
			continue
		}
		spans = append(spans, Span{from, to})
	}
	return spans
}

// Eclipsed reports whether the pulsar is hidden at an instant, orbit time.
func (o Orbit) Eclipsed(e Eclipse, mjd float64) bool { return e.In(o.eclipsePhase(mjd)) }

// eclipsePhase is the time from the nearest superior conjunction in periods, plus 0.25.
func (o *Orbit) eclipsePhase(mjd float64) float64 {
	t, ok := o.nearest(Superior, mjd)
	if !ok {
		return o.Phase(mjd)
	}
	return fraction(0.25 + (mjd-t)/o.PeriodDays)
}
