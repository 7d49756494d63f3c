package radiometer

import (
	"math"
	"testing"

	"example.org/tallystick/sky/outside"
)

func TestGaussianError(t *testing.T) {
	r := outside.One(t, "radiometer.csv", "RAD-030")
	r.Check(GaussianErrorUs(r.Num("FWHM_us"), r.Num("SN_matched")))
}

// A Gaussian pulse in so many bins, each with the noise that the radiometer equation has for its share of the time: the
// information on shift and height is added up bin by bin.
func TestGaussianErrorIsTheBound(t *testing.T) {
	const (
		bins                 = 4096
		flux, gain, tsys     = 1.3, 2.0, 25.0 // mJy, K/Jy, K
		seconds, mhz         = 1800.0, 400.0
		periodMs, polarizers = 5.0, 2
	)
	for _, duty := range []float64{0.005, 0.02} {
		fwhm := duty * periodMs
		w := fwhm / 2.354820045
		noise := tsys / gain * 1e3 / math.Sqrt(polarizers*seconds/bins*mhz*1e6) // mJy in one bin
		height := flux * periodMs / (w * math.Sqrt(2*math.Pi))
		var shift, cross, high float64
		for i := range bins {
			x := (float64(i) - bins/2) * periodMs / bins
			u := math.Exp(-x * x / (2 * w * w))
			d := height * x / (w * w) * u
			shift, cross, high = shift+d*d, cross+d*u, high+u*u
		}
		if math.Abs(cross) > 1e-9*math.Sqrt(shift*high) {
			t.Fatalf("shift and height are correlated: %g", cross)
		}
		bound := 1e3 * noise / math.Sqrt(shift) // µs
		matched := height * math.Sqrt(high) / noise
		if got := GaussianErrorUs(1e3*fwhm, matched); math.Abs(got/bound-1) > 1e-6 {
			t.Errorf("duty %g: %.7f µs for the template's S/N, the bound is %.7f", duty, got, bound)
		}
		// By the S/N of the radiometer equation, which takes a baseline off that the shift does not feel: √(P/(P−W)).
		snr := SNR(flux, gain, tsys, polarizers, seconds, mhz, periodMs, fwhm)
		if got := GaussianPulseFactor() * 1e3 * fwhm / snr; math.Abs(got*math.Sqrt(1-duty)/bound-1) > 1e-6 {
			t.Errorf("duty %g: %.7f µs for the S/N of the radiometer equation, the bound is %.7f", duty, got, bound)
		}
	}
}

// The template changes the noise's part and nothing else: jitter and floor stay, and minutes and chances follow.
func TestTOAErrorOfGaussianPulse(t *testing.T) {
	s := example()
	s.Receiver.ChannelMHz, s.Pulsar.DMPcPerCm3 = 0.5, 30
	plain := s
	s.Pulsar.GaussianPulse = true
	const minutes, el = 20.0, 50.0
	if s.SNR(minutes, el) != plain.SNR(minutes, el) || s.WidthMs() != plain.WidthMs() {
		t.Error("the template changes S/N or width")
	}
	rest := math.Hypot(s.Pulsar.JitterUsPerHour*math.Sqrt(60/minutes), s.Pulsar.FloorUs)
	noise := GaussianErrorUs(1e3*s.WidthMs(), math.Pow(2*math.Ln2/math.Pi, 0.25)*s.SNR(minutes, el))
	if got, want := s.TOAErrorUs(minutes, el), math.Hypot(noise, rest); math.Abs(got/want-1) > 1e-12 {
		t.Errorf("%g µs, want %g", got, want)
	}
	if got := noise / (1e3 * s.WidthMs() / s.SNR(minutes, el)); math.Abs(got-0.73685) > 5e-6 || math.Abs(GaussianPulseFactor()-got) > 1e-14 {
		t.Errorf("%g of the plain rule, GaussianPulseFactor %g", got, GaussianPulseFactor())
	}
	// Without jitter minutes go as the square of the error.
	s.Pulsar.JitterUsPerHour, plain.Pulsar.JitterUsPerHour = 0, 0
	short, err1 := s.MinutesFor(0.5, el)
	long, err2 := plain.MinutesFor(0.5, el)
	if err1 != nil || err2 != nil || math.Abs(short/long/(noise*noise/square(1e3*s.WidthMs()/s.SNR(minutes, el)))-1) > 1e-12 {
		t.Errorf("%g and %g min, %v, %v", short, long, err1, err2)
	}
	// One scintle: a visit reaches the aim that the mean flux reaches with the chance 1/e, by either rule.
	one := Scintillation{TimescaleS: 1e9, BandwidthMHz: 1e9}
	if a, b := s.ChanceOfTOA(0.5, short, el, one), plain.ChanceOfTOA(0.5, long, el, one); math.Abs(a-b) > 1e-6 || math.Abs(a-1/math.E) > 1e-3 {
		t.Errorf("chances %g and %g", a, b)
	}
}
