package orbit

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

// The series of J0023+0923 (ORB-057) is good for decades; the same with a wild second derivative is not, and says so.
func TestMeaningful(t *testing.T) {
	o := mustNew(t, Elements{AscendingNodeMJD: 55000, SemimajorLs: 0.03, FrequencySeries: []float64{8.338721549e-5, -1.87e-20, 2.4e-28}})
	for _, years := range []float64{-30, 0, 30} {
		at := 55000 + years*daysPerYear
		if !o.Meaningful(at) || len(o.Conjunctions(Superior, at, at+1)) < 6 {
			t.Errorf("%g years on: %v", years, o.Conjunctions(Superior, at, at+1))
		}
	}
	wild := mustNew(t, Elements{AscendingNodeMJD: 55000, SemimajorLs: 0.03, FrequencySeries: []float64{8.338721549e-5, -1.87e-20, 2.4e-20}})
	if at := 55000 + 10*daysPerYear; wild.Meaningful(at) || wild.Conjunctions(Superior, at, at+1) != nil {
		t.Error("a runaway series passes for an orbit")
	}
}

// No series makes the list of conjunctions endless, or anything that is no number.
func TestAnySeriesEnds(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		series := []float64{rapid.Float64Range(1e-10, 1e-2).Draw(t, "frequency")}
		for range rapid.IntRange(0, 5).Draw(t, "terms") {
			series = append(series, rapid.Float64Range(-1, 1).Draw(t, "term")*math.Pow(10, -rapid.Float64Range(0, 40).Draw(t, "size")))
		}
		o, err := New(Elements{AscendingNodeMJD: 55000, FrequencySeries: series})
		if err != nil {
			return
		}
		from := rapid.Float64Range(20000, 100000).Draw(t, "from")
		for _, mjd := range o.Conjunctions(Superior, from, from+0.1) {
			if !(mjd >= from && mjd <= from+0.1) {
				t.Fatalf("%g is not within the span", mjd)
			}
		}
		if p := o.Phase(from); !(p >= 0 && p < 1) {
			t.Fatalf("phase %g", p)
		}
		o.EclipseSpans(Eclipse{CentreTurns: 0.25, HalfWidthTurns: 0.05}, from, from+0.1)
	})
}

func TestEpochErrorDays(t *testing.T) {
	s := Sigmas{EpochDays: 0.002, SemimajorLs: 2e-7}
	for _, c := range []struct {
		el         Elements
		want       float64
		periastron bool
	}{
		{Elements{PeriodDays: 12.3, PeriastronMJD: 55000, Eccentricity: 2e-5, SemimajorLs: 9.2}, NodeErrorDays(12.3, 9.2, 2e-7), false},
		{Elements{PeriodDays: 12.3, PeriastronMJD: 55000, Eccentricity: 0.6, SemimajorLs: 9.2}, 0.002, true},
		{Elements{PeriodDays: 12.3, AscendingNodeMJD: 55000, SemimajorLs: 9.2}, 0.002, false},
	} {
		if got, periastron := mustNew(t, c.el).EpochErrorDays(s); got != c.want || periastron != c.periastron {
			t.Errorf("%+v: %g, %v", c.el, got, periastron)
		}
	}
}
