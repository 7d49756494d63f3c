package radiometer

import (
	"math"
	"testing"

	"example.org/tallystick/internal/outside"
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
		w := s.EffectiveWeight(el)
		if want := square(s.SNR(1, el) / s.SNR(1, 90)); math.Abs(w-want) > 1e-12 || w < last || w > 1 {
			t.Errorf("elevation %g: weight %g, squared ratio %g, before %g", el, w, want, last)
		}
		last = w
	}
	for _, el := range []float64{0, -10, math.NaN(), 180, 270} {
		if w := s.EffectiveWeight(el); w != 0 {
			t.Errorf("elevation %g: weight %g, want 0", el, w)
		}
	}
}

func TestGalactic(t *testing.T) {
	// The system's own definition (Hipparcos catalogue, §1.5.3): the pole, and the centre at 17h45m37.224s −28°56′10.23″.
	for _, c := range []struct{ ra, dec, l, b float64 }{{266.40510, -28.936175, 0, 0}, {192.85948, 27.12825, 0, 90}} {
		l, b := GalacticDeg(c.ra, c.dec)
		if math.Abs(b-c.b) > 1e-4 || c.b == 0 && math.Abs(math.Remainder(l-c.l, 360)) > 1e-4 {
			t.Errorf("%g %g: got %g %g, want %g %g", c.ra, c.dec, l, b, c.l, c.b)
		}
	}
}

func TestAirMass(t *testing.T) {
	for _, r := range outside.Rows(t, "airmass.csv", "AST-10*") {
		r.Check(AirMass(r.Num("el_deg")))
	}
}
