package orbit

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"example.org/tallystick/sky/outside"
)

func TestEclipseWidths(t *testing.T) {
	for _, r := range outside.Rows(t, "orbits.csv", "ORB-092") {
		e := Eclipse{CentreTurns: 0.25, HalfWidthTurns: 0.045, ReferenceMHz: 430, Index: r.Num("index")}
		r.Check(r.Num("d430_min") * e.At(r.Num("f")).HalfWidthTurns / e.HalfWidthTurns)
	}
	for _, r := range outside.Rows(t, "orbits.csv", "ORB-090", "ORB-093") {
		minutes, period := r.Inputs["d_min"], r.Num("PB_d")
		d := 0.0
		if minutes != "" {
			d = r.Num("d_min") * 60
		} else {
			d = r.Num("duration_s")
		}
		o := mustNew(t, Elements{PeriodDays: period, AscendingNodeMJD: 55000})
		half := d / 2 / secPerDay / period
		spans := o.EclipseSpans(Eclipse{CentreTurns: 0.25, HalfWidthTurns: half}, 55000, 55000+period)
		if len(spans) != 1 {
			t.Fatalf("%s: spans %v", r.ID, spans)
		}
		r.Check((spans[0].ToMJD - spans[0].FromMJD) / period)
	}
}

// Spans and the question at an instant agree; margins surround the eclipse.
func TestEclipseSpansAgainstScan(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		o := mustNewRapid(t, Elements{
			PeriodDays: rapid.Float64Range(0.1, 3).Draw(t, "period"), AscendingNodeMJD: 55000,
			Eccentricity: rapid.Float64Range(0, 0.5).Draw(t, "e"), PeriastronDeg: rapid.Float64Range(0, 360).Draw(t, "om"),
		})
		e := Eclipse{CentreTurns: rapid.Float64Range(0, 1).Draw(t, "centre"), HalfWidthTurns: rapid.Float64Range(0.01, 0.3).Draw(t, "half"),
			MarginTurns: rapid.Float64Range(0, 0.1).Draw(t, "margin")}
		from := 55000 + rapid.Float64Range(-50, 50).Draw(t, "from")
		to := from + o.PeriodDays*rapid.Float64Range(0.05, 3).Draw(t, "orbits")
		hidden, untimable := o.EclipseSpans(e, from, to), o.UntimableSpans(e, from, to)
		for i := range 500 {
			at := from + (to-from)*(float64(i)+0.5)/500
			if got, want := o.Eclipsed(e, at), inSpans(hidden, at); got != want && !edge(hidden, at) {
				t.Fatalf("%.9f: eclipsed %v, spans %v", at, got, hidden)
			}
			if got, want := e.In(o.eclipsePhase(at)) || e.InMargin(o.eclipsePhase(at)), inSpans(untimable, at); got != want && !edge(untimable, at) {
				t.Fatalf("%.9f: untimable %v, spans %v", at, got, untimable)
			}
		}
	})
}

func inSpans(spans []Span, at float64) bool {
	for _, s := range spans {
		if at >= s.FromMJD && at <= s.ToMJD {
			return true
		}
	}
	return false
}

func edge(spans []Span, at float64) bool {
	for _, s := range spans {
		if math.Abs(at-s.FromMJD) < 1e-7 || math.Abs(at-s.ToMJD) < 1e-7 {
			return true
		}
	}
	return false
}

func TestEclipseOfNoWidth(t *testing.T) {
	o := mustNew(t, Elements{PeriodDays: 1, AscendingNodeMJD: 55000})
	if (Eclipse{}).In(0) || (Eclipse{CentreTurns: 0.25, MarginTurns: 0.1}).InMargin(0.25) || o.EclipseSpans(Eclipse{}, 55000, 55010) != nil {
		t.Error("no eclipse hides something")
	}
	always := o.EclipseSpans(Eclipse{CentreTurns: 0.25, HalfWidthTurns: 0.5}, 55000, 55010)
	if len(always) != 1 || always[0] != (Span{55000, 55010}) {
		t.Errorf("an eclipse of the whole orbit: %v", always)
	}
}
