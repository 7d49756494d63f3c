package orbit

import (
	"math"
	"testing"

	"example.org/tallystick/sky/outside"
)

func TestGeneralRelativity(t *testing.T) {
	for _, r := range outside.Rows(t, "orbits.csv", "ORB-100", "ORB-101", "ORB-103") {
		f := map[string]func(a, b, c, d float64) float64{"ORB-100": AdvanceGR, "ORB-101": DecayGR, "ORB-103": EinsteinSec}[r.ID]
		r.Check(f(r.Num("mp"), r.Num("mc"), r.Num("PB"), r.Num("e")))
	}
	for _, r := range outside.Rows(t, "orbits.csv", "ORB-071") {
		o := mustNew(t, Elements{PeriodDays: 0.1022515592973, PeriastronMJD: 55700, AdvanceDegPerYr: r.Num("OMDOT")})
		r.Check(o.PeriodDays / o.advance / daysPerYear)
	}
	for _, r := range outside.Rows(t, "orbits.csv", "ORB-072") {
		with := mustNew(t, Elements{PeriodDays: r.Num("PB"), PeriastronMJD: 50000, Decay: r.Num("PBDOT")})
		n := r.Num("t_yr") * daysPerYear / with.PeriodDays
		at, _ := with.whenElapsed(n)
		r.Check((at - 50000 - n*with.PeriodDays) * secPerDay)
	}
}

// The pulsar's mass that follows from orbit, companion and inclination is the one that the companion's mass was made from;
// with the masses of ORB-103 and the published size of that orbit, 1.415028603 ls, the amplitude is the row's.
func TestEinsteinFromTheOrbit(t *testing.T) {
	f := MassFunctionMsun(3.7, 2.2)
	for _, sinI := range []float64{0.3, 0.9, 1} {
		m := CompanionMsun(f, 1.4, sinI)
		if got := PulsarMsun(f, m, sinI); math.Abs(got-1.4) > 1e-9 {
			t.Errorf("sin i %g: pulsar of %g, want 1.4", sinI, got)
		}
	}
	for _, r := range outside.Rows(t, "orbits.csv", "ORB-103") {
		o := mustNew(t, Elements{PeriodDays: r.Num("PB"), PeriastronMJD: 55700, Eccentricity: r.Num("e"), SemimajorLs: 1.415028603, PeriastronDeg: 204.75})
		r.Check(o.EinsteinGR(r.Num("mc"), 0.999936))
		for _, none := range [][2]float64{{0, 0.9}, {1.2, 0}, {0.1, 0.5}} {
			if got := o.EinsteinGR(none[0], none[1]); got != 0 {
				t.Errorf("companion of %g, sin i %g: %g s, want none", none[0], none[1], got)
			}
		}
	}
}

func TestMassFunction(t *testing.T) {
	for _, r := range outside.Rows(t, "orbits.csv", "ORB-104", "ORB-105") {
		f := MassFunctionMsun(r.Num("x"), r.Num("PB"))
		r.Check(f)
		m := CompanionMsun(f, 1.4, 1)
		if back := m * m * m / square(1.4+m); math.Abs(back/f-1) > 1e-10 {
			t.Errorf("%s: companion %g gives mass function %g, want %g", r.ID, m, back, f)
		}
	}
	if m := CompanionMsun(0, 1.4, 1); m != 0 {
		t.Errorf("no mass function gives a companion of %g", m)
	}
}
