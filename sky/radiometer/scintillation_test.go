package radiometer

import (
	"math"
	"testing"

	"example.org/tallystick/sky/outside"
)

func TestScintles(t *testing.T) {
	scales := func(r outside.Row) Scintillation {
		return Scintillation{r.Num("tau_d_s"), r.Num("dnu_d_MHz"), r.Num("eta")}
	}
	for _, r := range outside.Rows(t, "radiometer.csv", "RAD-060") {
		r.Check(scales(r).Scintles(r.Num("t_s"), r.Num("bw_MHz")))
	}
	for _, r := range outside.Rows(t, "radiometer.csv", "RAD-061") {
		r.Check(ModulationIndex(scales(r).Scintles(r.Num("t_s"), r.Num("bw_MHz"))))
	}
}

// The exponents are those of Kolmogorov turbulence, 6/5 and 22/5.
func TestScintlesAt(t *testing.T) {
	s := Scintillation{TimescaleS: 600, BandwidthMHz: 50}.At(1400, 700)
	if math.Abs(s.TimescaleS-600/math.Pow(2, 6.0/5)) > 1e-9 || math.Abs(s.BandwidthMHz-50/math.Pow(2, 22.0/5)) > 1e-9 {
		t.Errorf("at half the frequency: %+v", s)
	}
	if same := (Scintillation{TimescaleS: 600, BandwidthMHz: 50}).At(0, 700); same.TimescaleS != 600 || same.BandwidthMHz != 50 {
		t.Errorf("without a frequency: %+v", same)
	}
}

func TestChanceAbove(t *testing.T) {
	for _, r := range outside.Rows(t, "radiometer.csv", "RAD-064") {
		r.Check(1 - ChanceAbove(r.Num("x"), 1))
	}
	// Many scintles leave the mean flux; none at all are a steady source.
	if c := ChanceAbove(0.9, 1e4); c < 0.9999 {
		t.Errorf("ten thousand scintles: %g", c)
	}
	if ChanceAbove(1, math.Inf(1)) != 1 || ChanceAbove(1.01, math.Inf(1)) != 0 || ChanceAbove(0, 1) != 1 || ChanceAbove(math.Inf(1), 3) != 0 {
		t.Error("limits")
	}
}

// For whole shapes the upper gamma function is a sum of Poisson terms.
func TestUpperGamma(t *testing.T) {
	for _, a := range []int{1, 2, 5, 20, 60} {
		for _, x := range []float64{0.1, 0.9, 3, 7, 19.5, 25, 80} {
			term, want := math.Exp(-x), 0.0
			for k := range a {
				if k > 0 {
					term *= x / float64(k)
				}
				want += term
			}
			if got := upperGamma(float64(a), x); math.Abs(got-want) > 1e-12 {
				t.Errorf("Q(%d, %g) = %.15g, want %.15g", a, x, got, want)
			}
		}
	}
	// Both methods meet where one takes over from the other.
	if a, b := upperGamma(99999, 99800), upperGamma(100001, 99802); math.Abs(a-b) > 1e-5 {
		t.Errorf("%g beside %g", a, b)
	}
}

func TestChanceOfTOA(t *testing.T) {
	s := example()
	aim := s.TOAErrorUs(20, 60)
	steady := s.ChanceOfTOA(aim*1.0001, 20, 60, Scintillation{})
	one := s.ChanceOfTOA(aim, 20, 60, Scintillation{TimescaleS: 1e9, BandwidthMHz: 1e9})
	if steady != 1 || math.Abs(one-math.Exp(-1)) > 1e-3 {
		t.Errorf("steady %g, one scintle %g; want 1 and 1/e", steady, one)
	}
	if c := s.ChanceOfTOA(0.1, 20, 60, Scintillation{}); c != 0 {
		t.Errorf("an aim at the floor has a chance of %g", c)
	}
}
