package campaigns

import (
	"math"
	"strings"
	"testing"

	"example.org/tallystick/sky/orbit"
)

func sizesOf(t *testing.T, o Orbit) *OrbitSizes {
	t.Helper()
	of, err := orbit.New(o.elements())
	if err != nil {
		t.Fatal(err)
	}
	return o.sizes(&of)
}

// Published orbits, and what is published of their delays and masses.
func TestOrbitSizes(t *testing.T) {
	near := func(what string, got, want, tol float64) {
		t.Helper()
		if math.Abs(got-want) > tol {
			t.Errorf("%s: %g, want %g", what, got, want)
		}
	}
	// J0740+6620, Fonseca et al. 2021, ApJL 915, L12: 19.13 µs from least to most (SHA-003), a pulsar of 2.08 ± 0.07 Msun.
	s := sizesOf(t, Orbit{PeriodDays: 4.76694461936107, AscendingNodeMJD: 57804.731308895, SemimajorLs: 3.977556072, CompanionMsun: 0.252687, SinI: 0.999083})
	near("Shapiro delay, µs", s.ShapiroUs, 19.1348, 0.001)
	near("pulsar, Msun", s.PulsarMsun, 2.08, 0.07)
	near("third harmonic over H3", s.ThirdUs/s.H3Us, 4.0/3, 1e-12)
	if s.Assumed != "" || s.EinsteinUs != 0 {
		t.Errorf("%+v", s)
	}
	// J0737-3039A, Kramer et al. 2021, PRX 11, 041050: the relativity that it is the test of.
	s = sizesOf(t, Orbit{PeriodDays: 0.1022515592973, PeriastronMJD: 55700.233017540, Eccentricity: 0.087777023, PeriastronDeg: 204.753686,
		AdvanceDegPerYr: 16.899323, SemimajorLs: 1.415028603, CompanionMsun: 1.248868, SinI: 0.999936})
	near("pulsar, Msun", s.PulsarMsun, 1.338185, 5e-4)
	near("advance, deg/yr", s.AdvanceDegPerYr, 16.899323, 0.005)
	near("decay", s.Decay, -1.247752e-12, 5e-16)
	near("Einstein delay, µs", s.EinsteinUs, 384.045, 0.2)
	// J2222-0137, Guo et al. 2021, A&A 654, A16: H3 of 5.052 ± 0.027 µs.
	s = sizesOf(t, Orbit{PeriodDays: 2.445759995471, AscendingNodeMJD: 58001.2009126, SemimajorLs: 10.8480213, CompanionMsun: 1.3153, SinI: 0.996623})
	near("H3, µs", s.H3Us, 5.052, 0.035)

	// What is not known is assumed, and said; masses that contradict the orbit give no relativity.
	s = sizesOf(t, Orbit{PeriodDays: 5, AscendingNodeMJD: 58000, SemimajorLs: 4})
	if !strings.Contains(s.Assumed, "1.4 Msun and an assumed inclination of 60 deg") || s.PulsarMsun != 0 || s.ShapiroUs <= 0 {
		t.Errorf("%+v", s)
	}
	s = sizesOf(t, Orbit{PeriodDays: 5, AscendingNodeMJD: 58000, SemimajorLs: 4, CompanionMsun: 0.01, SinI: 0.5})
	if s.PulsarMsun != 0 || s.Decay != 0 {
		t.Errorf("%+v", s)
	}
	if s := sizesOf(t, Orbit{PeriodDays: 5, AscendingNodeMJD: 58000}); s != nil {
		t.Errorf("of an orbit without size: %+v", s)
	}
}

// A decay that was not measured counts with what gravitational waves make: of this orbit 3.4 s in seven years.
func TestRadiatedDecayCounts(t *testing.T) {
	s := Source{Name: "A", Orbit: &Orbit{PeriodDays: 0.10225156248, PeriastronMJD: 53155.9074280, Eccentricity: 0.0877775, PeriastronDeg: 87.0331,
		SemimajorLs: 1.415032, CompanionMsun: 1.2489, SinI: 0.99974}}
	of, err := orbit.New(s.Orbit.elements())
	if err != nil {
		t.Fatal(err)
	}
	if off := 86400 * of.ConjunctionError(s.orbitSigmas(), 55700.233).SigmaDays; math.Abs(off-3.43) > 0.05 {
		t.Errorf("off by %.2f s, published epochs by 3.43", off)
	}
	s.Orbit.Decay = -1.252e-12
	of, err = orbit.New(s.Orbit.elements())
	if err != nil {
		t.Fatal(err)
	}
	if off := of.ConjunctionError(s.orbitSigmas(), 55700.233).SigmaDays; off != 0 {
		t.Errorf("with the decay given, off by %g d", off)
	}
}
