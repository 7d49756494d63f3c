package orbit

import (
	"math"
	"slices"
	"strings"
	"testing"

	"example.org/tallystick/sky/outside"
)

func TestConjunctionError(t *testing.T) {
	for _, r := range outside.Rows(t, "orbits.csv", "ORB-080", "ORB-081") {
		o := mustNew(t, Elements{PeriodDays: r.Num("PB"), AscendingNodeMJD: 55000})
		s := Sigmas{EpochDays: r.Num("sT"), PeriodDays: r.Num("sPB"), Decay: r.Num("sPBDOT")}
		p := o.ConjunctionError(s, 55000+r.Num("N")*o.PeriodDays)
		r.Check(p.SigmaDays)
		if math.Abs(p.SigmaTurns*o.PeriodDays-p.SigmaDays) > 1e-18 {
			t.Errorf("%s: turns %g and days %g disagree", r.ID, p.SigmaTurns, p.SigmaDays)
		}
	}
	for _, r := range outside.Rows(t, "orbits.csv", "ORB-053") {
		r.Check(NodeErrorDays(r.Num("PB"), r.Num("A1"), r.Num("sigma_A1")))
	}
	// The published errors of periastron and of its longitude say one and the same thing (ORB-050, -051): a longitude
	// that is off by its error moves the conjunction by the published error of periastron, which takes that back.
	for _, r := range outside.Rows(t, "orbits.csv", "ORB-050", "ORB-051") {
		at := func(omDeg float64) float64 {
			o := mustNew(t, Elements{PeriodDays: r.Num("PB"), PeriastronMJD: 1, Eccentricity: 2e-5, PeriastronDeg: omDeg})
			return o.Conjunctions(Superior, 1, 1+r.Num("PB"))[0]
		}
		r.Check(at(180) - at(180+r.Num("sigma_OM_deg")))
	}
}

// B1855+09, Arzoumanian et al. 2015, ApJ 813, 65: periastron to 2e-3 d, the conjunction to 4e-8 d.
func TestConjunctionOfNearlyCircularOrbit(t *testing.T) {
	o := mustNew(t, Elements{PeriodDays: 12.32717119132762, PeriastronMJD: 54975.5128660817, PeriastronDeg: 276.536118059963,
		Eccentricity: 2.16340e-5, SemimajorLs: 9.230780480})
	s := Sigmas{EpochDays: 0.0019286695, PeriodDays: 1.9722e-10, SemimajorLs: 2.03e-7}
	p := o.ConjunctionError(s, o.EpochMJD())
	if p.SigmaDays < 3e-8 || p.SigmaDays > 6e-8 || !slices.Contains(p.Cautions, NodeFromSemimajor) {
		t.Errorf("got %+v, want about 4e-8 d", p)
	}
	s.SemimajorLs = 0
	p = o.ConjunctionError(s, o.EpochMJD())
	if p.SigmaDays < 2e-8 || p.SigmaDays > 8e-8 || !slices.Contains(p.Cautions, NodeFromPeriastron) {
		t.Errorf("from periastron: got %+v, want about 4e-8 d", p)
	}
}

func TestConjunctionErrorCountsFromTheData(t *testing.T) {
	o := mustNew(t, Elements{PeriodDays: 1, AscendingNodeMJD: 50000, SemimajorLs: 1})
	s := Sigmas{EpochDays: 1e-9, PeriodDays: 1e-8, DataStartMJD: 55000, DataFinishMJD: 57000, WanderSecPerYr: DefaultWanderSecPerYr}
	if p := o.ConjunctionError(s, 56000); math.Abs(p.SigmaDays-1e-9) > 1e-12 || !slices.Contains(p.Cautions, DecayAbsent) {
		t.Errorf("in the middle of the data: %+v", p)
	}
	// Two years past the end: 10 s of wander in quadrature.
	p := o.ConjunctionError(s, 57000+2*daysPerYear)
	want := math.Hypot(10.0/secPerDay, 1e-8*(1000+2*daysPerYear))
	if math.Abs(p.SigmaDays/want-1) > 1e-6 || !slices.Contains(p.Cautions, Wanders) {
		t.Errorf("two years on: %+v, want %g", p, want)
	}
}

func TestKinematicDecay(t *testing.T) {
	// J0437−4715: van Straten et al. 2001, Nature 412, 158 explain a decay of 3.64e-12 by proper motion,
	// with 140.9 mas/yr and a parallax of 7.19 mas (139 pc).
	got := KinematicDecay(5.741046, math.Hypot(121.438, -71.438), 0.139)
	if math.Abs(got/3.64e-12-1) > 0.1 {
		t.Errorf("got %g, want about 3.64e-12", got)
	}
	o := mustNew(t, Elements{PeriodDays: 5.741046, AscendingNodeMJD: 51194, SemimajorLs: 3.37})
	p := o.ConjunctionError(Sigmas{EpochDays: 1e-9, PeriodDays: 1e-12, ProperMotionMasPerYr: 140.9, DistanceKpc: 0.139}, 51194+3652.5)
	// ½ n² Pb Ṗb is half the kinematic drift: 3652.5²/(2·5.741)·3.7e-12 d.
	if want := 3652.5 * 3652.5 / 2 / 5.741046 * got; math.Abs(p.SigmaDays/want-1) > 1e-3 || !slices.Contains(p.Cautions, DecayBounded) {
		t.Errorf("got %+v, want %g", p, want)
	}
}

func TestTrust(t *testing.T) {
	for _, c := range []struct {
		sigma float64
		want  Trust
		word  string
	}{{0.001, Trustworthy, "trustworthy"}, {0.0166, Trustworthy, "trustworthy"}, {0.0167, Widen, "widened"}, {0.05, Widen, "widened"}, {0.051, Refuse, "refused"}} {
		p := Prediction{SigmaTurns: c.sigma}
		if got := p.TrustFor(0.05); got != c.want || !strings.Contains(p.Say(0.05), c.word) {
			t.Errorf("sigma %g: %v, %q", c.sigma, got, p.Say(0.05))
		}
	}
	if w := (Prediction{SigmaTurns: 0.02}).WidenedTurns(0.05); math.Abs(w-0.11) > 1e-12 {
		t.Errorf("widened to %g, want 0.11", w)
	}
}
