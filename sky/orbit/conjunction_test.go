package orbit

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"example.org/tallystick/sky/outside"
)

func TestConjunctions(t *testing.T) {
	for _, r := range outside.Rows(t, "orbits.csv", "ORB-060", "ORB-061", "ORB-062", "ORB-064") {
		o := fromRow(t, r)
		kind := Superior
		if r.ID == "ORB-062" {
			kind = Inferior
		}
		all := o.Conjunctions(kind, r.Want()-0.02, r.Want()+0.02)
		if len(all) != 1 {
			t.Errorf("%s: got %d conjunctions, want 1", r.ID, len(all))
			continue
		}
		r.Check(all[0])
	}
	for _, r := range outside.Rows(t, "orbits.csv", "ORB-070") {
		// An epoch of our own: near day 1 the rounding of a day number is far below the row's tolerance.
		r.Inputs["T0"] = "1"
		o := fromRow(t, r)
		all := o.Conjunctions(Superior, 0.96, 1.08)
		if len(all) != 2 {
			t.Fatalf("%s: got %v", r.ID, all)
		}
		r.Check(all[1] - all[0])
	}
	for _, r := range outside.Rows(t, "barycentre.csv", "BAR-010", "BAR-014", "BAR-016") {
		o := mustNew(t, Elements{PeriodDays: r.Num("PB"), AscendingNodeMJD: r.Num("TASC"), Decay: r.Num("PBDOT")})
		from := r.Num("not_before_TDB")
		r.Check(o.Conjunctions(Superior, from, from+10)[0])
	}
}

// Every conjunction is one by the longitude, none is missing, none comes twice: against a scan in small steps.
func TestConjunctionsAgainstScan(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		o := mustNewRapid(t, Elements{
			PeriodDays: rapid.Float64Range(0.1, 50).Draw(t, "period"), PeriastronMJD: 55000,
			Eccentricity: rapid.Float64Range(0, 0.9).Draw(t, "e"), PeriastronDeg: rapid.Float64Range(-360, 720).Draw(t, "om"),
			AdvanceDegPerYr: rapid.Float64Range(-1, 20).Draw(t, "advance"), Decay: rapid.Float64Range(-1e-10, 1e-10).Draw(t, "decay"),
		})
		kind := rapid.SampledFrom([]Kind{Superior, Inferior}).Draw(t, "kind")
		from := 55000 + rapid.Float64Range(-1000, 1000).Draw(t, "from")
		span := o.PeriodDays * rapid.Float64Range(0.1, 6).Draw(t, "orbits")
		found := o.Conjunctions(kind, from, from+span)
		for i, c := range found {
			if c < from || c > from+span || i > 0 && c <= found[i-1] {
				t.Fatalf("out of order or range: %v", found)
			}
			if d := apart(o.LongitudeDeg(c)/360, kind.longitudeTurns()); d > 1e-7 {
				t.Fatalf("longitude %g at a %v conjunction", o.LongitudeDeg(c), kind)
			}
		}
		n := 0
		const steps = 2000
		before := fraction(o.LongitudeDeg(from)/360 - kind.longitudeTurns())
		for i := 1; i <= steps; i++ {
			now := fraction(o.LongitudeDeg(from+span*float64(i)/steps)/360 - kind.longitudeTurns())
			if now < before-0.5 {
				n++
			}
			before = now
		}
		edges := 0 // conjunctions so near an end of the span that rounding may put them on either side
		for _, c := range found {
			if c-from < 1e-6 || from+span-c < 1e-6 {
				edges++
			}
		}
		if d := n - len(found); max(d, -d) > max(1, edges) || d != 0 && len(found) > 0 && edges == 0 {
			t.Fatalf("scan finds %d, solver %v", n, found)
		}
	})
}

func TestConjunctionsOfNothing(t *testing.T) {
	o := mustNew(t, Elements{PeriodDays: 2, AscendingNodeMJD: 55000})
	for _, span := range [][2]float64{{55001, 55000}, {math.NaN(), 55000}, {55000, math.Inf(1)}, {1e300, 2e300}, {55001, 55002}} {
		if got := o.Conjunctions(Superior, span[0], span[1]); len(got) != 0 {
			t.Errorf("%v: got %v", span, got)
		}
	}
	// A series that runs backwards far from its epoch ends the list instead of never ending it.
	s := mustNew(t, Elements{FrequencySeries: []float64{1e-5, -1e-13}, AscendingNodeMJD: 55000})
	if got := s.Conjunctions(Superior, 55000, 60000); len(got) > 1000 {
		t.Errorf("%d conjunctions of an orbit that has stopped", len(got))
	}
}

func TestConjunctionPhase(t *testing.T) {
	circular := mustNew(t, Elements{PeriodDays: 2, AscendingNodeMJD: 55000})
	if p := circular.ConjunctionPhase(Inferior, 55777); math.Abs(p-0.75) > 1e-9 {
		t.Errorf("inferior conjunction of a circular orbit at %g", p)
	}
	// To first order in e the superior conjunction is shifted by −(PB/π) e cos ω (Lange et al. 2001).
	const e, om = 1e-3, 40.0
	o := mustNew(t, Elements{PeriodDays: 2, AscendingNodeMJD: 55000, Eccentricity: e, PeriastronDeg: om})
	want := 0.25 - e*math.Cos(om*degToRad)/math.Pi
	if p := o.ConjunctionPhase(Superior, 55000); math.Abs(p-want) > 3*e*e {
		t.Errorf("got %g, want %g", p, want)
	}
}
