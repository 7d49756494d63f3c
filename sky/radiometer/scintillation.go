package radiometer

import "math"

// Scintillation are the scales of a pulsar's strong scintillation at the observing frequency.
type Scintillation struct {
	TimescaleS   float64
	BandwidthMHz float64
	Filling      float64 // η: the part of time and band that scintles fill; 0: 0.2
}

// At returns the scales at another observing frequency.
//
//	τ_d ∝ f^1.2,  Δν_d ∝ f^4.4
//
// Given:   the frequency at which the scales are known, and the other, both above 0
// Source:  turbulence of the Kolmogorov kind, Rickett 1990, ARA&A 28, 561
// Checked: TestScintlesAt
func (s Scintillation) At(fromMHz, mhz float64) Scintillation {
	if fromMHz > 0 && mhz > 0 {
		s.TimescaleS *= math.Pow(mhz/fromMHz, 1.2)
		s.BandwidthMHz *= math.Pow(mhz/fromMHz, 4.4)
	}
	return s
}

// Scintles returns the number of independent scintles in an observation.
//
//	N_s = (1 + η t/τ_d)(1 + η B/Δν_d),  η = 0.2..0.3
//
// Returns: infinite when either scale is not known: no scintillation
// Source:  Cordes & Shannon 2010, arXiv:1010.3785
// Checked: TestScintles
func (s Scintillation) Scintles(seconds, bandwidthMHz float64) float64 {
	if !(s.TimescaleS > 0) || !(s.BandwidthMHz > 0) {
		return math.Inf(1)
	}
	eta := s.Filling
	if !(eta > 0) {
		eta = 0.2
	}
	return (1 + eta*seconds/s.TimescaleS) * (1 + eta*bandwidthMHz/s.BandwidthMHz)
}

// ModulationIndex returns the scatter of the flux from visit to visit over its mean, N_s^(−1/2).
func ModulationIndex(scintles float64) float64 { return 1 / math.Sqrt(scintles) }

// ChanceAbove returns the probability that a visit shows more than x times the mean flux: the gamma
// law of shape N_s and mean 1, which is exponential for one scintle.
//
// Given:   scintles ≥ 1 or infinite; x ≥ 0
// Checked: TestChanceAbove
func ChanceAbove(x, scintles float64) float64 {
	switch {
	case !(x > 0):
		return 1
	case math.IsInf(scintles, 1) && x <= 1:
		return 1
	case math.IsInf(scintles, 1) || math.IsInf(x, 1):
		return 0
	}
	return upperGamma(scintles, scintles*x)
}

// ChanceOfTOA returns the probability that some minutes at an elevation reach a wanted arrival-time
// error, given how the pulsar scintillates.
//
// Returns: 0 for an aim that jitter and floor alone already miss
// Checked: TestChanceOfTOA
func (s Setup) ChanceOfTOA(toaUs, minutes, elevationDeg float64, sc Scintillation) float64 {
	snr := s.SNR(minutes, elevationDeg)
	if !(snr > 0) {
		return 0
	}
	noise := s.noiseUs(snr)
	left := square(toaUs) - square(s.Pulsar.FloorUs) - square(s.Pulsar.JitterUsPerHour)*60/minutes
	if !(left > 0) {
		return 0
	}
	return ChanceAbove(noise/math.Sqrt(left), sc.Scintles(60*minutes, s.Receiver.BandwidthMHz()))
}

// upperGamma is the regularised upper incomplete gamma function Q(a, x).
//
// Given:   a > 0, x > 0
// Source:  series and continued fraction, Abramowitz & Stegun 1972, 6.5.29 and 6.5.31; for large a the
// cube root of the variable is normal, Wilson & Hilferty 1931, PNAS 17, 684
// Checked: TestUpperGamma
func upperGamma(a, x float64) float64 {
	if a > 1e5 { // 6.5.29 would need thousands of terms; here the normal law errs by less than 1e-6
		z := (math.Cbrt(x/a) - 1 + 1/(9*a)) * 3 * math.Sqrt(a)
		return 0.5 * math.Erfc(z/math.Sqrt2)
	}
	lg, _ := math.Lgamma(a)
	front := math.Exp(a*math.Log(x) - x - lg)
	if x < a+1 {
		term, sum := 1/a, 1/a
		for n := 1.0; n < 1e5 && term > 1e-17*sum; n++ { // 6.5.29
			term *= x / (a + n)
			sum += term
		}
		return math.Max(0, 1-front*sum)
	}
	// 6.5.31, evaluated from the front by the modified method of Lentz 1976, Appl. Opt. 15, 668.
	const tiny = 1e-300
	b := x + 1 - a
	c, d := 1/tiny, 1/b
	h := d
	for i := 1.0; i < 1e5; i++ {
		an := -i * (i - a)
		b += 2
		d = an*d + b
		if math.Abs(d) < tiny {
			d = tiny
		}
		c = b + an/c
		if math.Abs(c) < tiny {
			c = tiny
		}
		d = 1 / d
		h *= d * c
		if math.Abs(d*c-1) < 1e-15 {
			break
		}
	}
	return math.Min(1, front*h)
}
