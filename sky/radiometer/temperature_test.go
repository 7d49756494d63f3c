package radiometer

import (
	"math"
	"testing"

	"example.org/tallystick/sky/outside"
)

func TestSkyAt408(t *testing.T) {
	for _, r := range outside.Rows(t, "radiometer.csv", "RAD-075", "RAD-076", "RAD-077") {
		r.Check(SkyAt408(r.Num("l_deg"), r.Num("b_deg")))
		r.Check(SkyAt408(r.Num("l_deg")+360, r.Num("b_deg")))
	}
}

func TestSkyScales(t *testing.T) {
	for _, r := range outside.Rows(t, "radiometer.csv", "RAD-071", "RAD-072", "RAD-073") {
		r.Check(scaleSky(r.Num("T1_K"), r.Num("f1"), r.Num("f2"), r.Num("index")))
	}
	for _, r := range outside.Rows(t, "radiometer.csv", "RAD-071") {
		r.Check(SkyK(30, 1400) - 2.73)
	}
}

func TestSystemTemperature(t *testing.T) {
	for _, r := range outside.Rows(t, "radiometer.csv", "RAD-080", "RAD-082", "RAD-086") {
		// These rows quote the receiver without any atmosphere: the zenith's is added first.
		tau := r.Num("tau0")
		zenith := r.Num("T0_K") + r.Num("Tatm_K")*(1-math.Exp(-tau))
		r.Check(SystemK(zenith, 0, tau, r.Num("el_deg")))
	}
	for _, r := range outside.Rows(t, "radiometer.csv", "RAD-105", "RAD-106") {
		r.Check(SystemK(r.Num("tsys_zenith_K"), r.Num("tsky_K"), r.Num("tau0"), r.Num("el_deg")))
	}
}

func TestEffectiveWeight(t *testing.T) {
	for _, r := range outside.Rows(t, "radiometer.csv", "RAD-081", "RAD-083", "RAD-087") {
		tau, el := r.Num("tau0"), r.Num("el_deg")
		zenith := r.Num("T0_K") + r.Num("Tatm_K")*(1-math.Exp(-tau))
		ratio := SystemK(zenith, 0, tau, el) / SystemK(zenith, 0, tau, 90) * math.Exp(tau*(AirMass(el)-1))
		r.Check(ratio * ratio)
	}
	// A minute weighs as much as its share of the squared signal-to-noise ratio.
	s := example()
	last := 0.0
	for el := 1.0; el <= 90; el++ {
		w := s.EffectiveWeights([]float64{el}, nil)[0]
		if want := square(s.SNR(1, el) / s.SNR(1, 90)); math.Abs(w-want) > 1e-12 || w < last || w > 1 {
			t.Errorf("elevation %g: weight %g, squared ratio %g, before %g", el, w, want, last)
		}
		last = w
	}
	for _, el := range []float64{0, -10, math.NaN(), 180, 270} {
		if w := s.EffectiveWeights([]float64{el}, nil)[0]; w != 0 {
			t.Errorf("elevation %g: weight %g, want 0", el, w)
		}
	}
}

func TestAirMass(t *testing.T) {
	for _, r := range outside.Rows(t, "airmass.csv", "AST-10*") {
		r.Check(AirMass(r.Num("el_deg")))
	}
}
