package orbit

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"example.org/tallystick/sky/outside"
)

func TestRoemer(t *testing.T) {
	for _, r := range outside.Rows(t, "orbits.csv", "ORB-110") {
		o := mustNew(t, Elements{PeriodDays: 0.36, PeriastronMJD: 50000, SemimajorLs: r.Num("x"),
			Eccentricity: r.Num("e"), PeriastronDeg: r.Num("OM")})
		r.Check(o.RoemerSec(50000 + 0.36*r.Num("M_deg")/360))
	}
	for _, r := range outside.Rows(t, "orbits.csv", "ORB-112") {
		o := mustNew(t, Elements{PeriodDays: r.Num("PB"), PeriastronMJD: 50000, SemimajorLs: r.Num("x"), Eccentricity: r.Num("e")})
		r.Check(o.largestSpeed() / (1 + o.Eccentricity))
	}
	// The near-circular form of Lange et al. 2001, valid to the order of e² x.
	o := mustNew(t, Elements{PeriodDays: 8, AscendingNodeMJD: 50000, SemimajorLs: 11, Eccentricity: 1e-4, PeriastronDeg: 70})
	eps1, eps2 := 1e-4*math.Sin(70*degToRad), 1e-4*math.Cos(70*degToRad)
	for i := range 16 {
		phi := turn * float64(i) / 16
		want := 11 * (math.Sin(phi) + eps2/2*math.Sin(2*phi) - eps1/2*math.Cos(2*phi) - 1.5*eps1)
		if got := o.RoemerSec(50000 + 8*float64(i)/16); math.Abs(got-want) > 3*11*1e-8 {
			t.Errorf("phase %g: got %.9g, want %.9g", phi/turn, got, want)
		}
	}
}

func TestShapiro(t *testing.T) {
	for _, r := range outside.Rows(t, "shapiro.csv", "SHA-00*", "SHA-010", "SHA-011", "SHA-013", "SHA-015", "SHA-020") {
		m2, s := r.Num("M2"), r.Num("SINI")
		switch {
		case r.Inputs["nu_deg"] != "":
			e := r.Num("e")
			o := mustNew(t, Elements{PeriodDays: 100, PeriastronMJD: 50000, Eccentricity: e, PeriastronDeg: r.Num("OM")})
			r.Check(1e6 * o.ShapiroSec(50000+100*meanFromTrue(r.Num("nu_deg")/360, e), m2, s))
		case r.Inputs["phase"] != "":
			o := mustNew(t, Elements{PeriodDays: 10, AscendingNodeMJD: 50000})
			r.Check(1e6 * o.ShapiroSec(50000+10*r.Num("phase"), m2, s))
		default:
			o := mustNew(t, Elements{PeriodDays: 10, AscendingNodeMJD: 50000})
			r.Check(1e6 * (o.ShapiroSec(50002.5, m2, s) - o.ShapiroSec(50007.5, m2, s)))
		}
	}
	o := mustNew(t, Elements{PeriodDays: 10, AscendingNodeMJD: 50000})
	if d := o.ShapiroSec(50002.5, 0.3, 1); math.IsInf(d, 0) || math.IsNaN(d) {
		t.Errorf("an edge-on orbit gives %g", d)
	}
}

// A conjunction of the table, at the clock of an observatory in the middle of the Earth. The Earth's
// part of the light time and TT − UTC are those the table was made with.
func TestToObservatory(t *testing.T) {
	earth := map[string]float64{"BAR-011": -378.283, "BAR-015": 491.532, "BAR-017": 350.739}
	for _, r := range outside.Rows(t, "barycentre.csv", "BAR-011", "BAR-015", "BAR-017") {
		o := mustNew(t, Elements{PeriodDays: r.Num("PB"), AscendingNodeMJD: r.Num("TASC"), Decay: r.Num("PBDOT")})
		from := r.Num("not_before_TDB")
		c := o.Conjunctions(Superior, from, from+10)[0]
		r.Check(o.ToObservatory(c, earth[r.ID]) - 69.184/secPerDay)
	}
	// What leaves at superior conjunction arrives later by the size of the orbit.
	o := mustNew(t, Elements{PeriodDays: 8, AscendingNodeMJD: 50000, SemimajorLs: 11.3})
	if d := (o.ToObservatory(50002, 0) - 50002) * secPerDay; math.Abs(d-11.3) > 1e-5 {
		t.Errorf("superior conjunction arrives %g s later, want 11.3", d)
	}
}

func TestObservatoryAndBack(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		o := mustNewRapid(t, Elements{
			PeriodDays: rapid.Float64Range(0.1, 50).Draw(t, "period"), PeriastronMJD: 55000, SemimajorLs: rapid.Float64Range(0, 3).Draw(t, "x"),
			Eccentricity: rapid.Float64Range(0, 0.9).Draw(t, "e"), PeriastronDeg: rapid.Float64Range(0, 360).Draw(t, "om"),
		})
		at := 55000 + rapid.Float64Range(-100, 100).Draw(t, "after")
		earth := rapid.Float64Range(-505, 505).Draw(t, "earth")
		if back := o.FromObservatory(o.ToObservatory(at, earth), earth); math.Abs(back-at) > 5e-11 {
			t.Fatalf("%.12g comes back as %.12g", at, back)
		}
	})
}

func BenchmarkFromObservatory(b *testing.B) {
	o := mustNew(b, Elements{PeriodDays: 3, PeriastronMJD: 57000, SemimajorLs: 6, Eccentricity: 0.2, PeriastronDeg: 70, AdvanceDegPerYr: 1})
	at := 57000.0
	for b.Loop() {
		o.Phase(o.FromObservatory(at, 300))
		at += 1.0 / 1440
	}
}
