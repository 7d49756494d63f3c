// Package radiometer says what a receiver hears of a pulsar: signal-to-noise ratio, error of the pulse
// arrival time, minutes needed for a wanted error, and what an elevation costs.
//
// Most readers need Setup: a Receiver and a Pulsar together, with SNR, TOAErrorUs, MinutesFor and
// EffectiveWeight. Elevations are in degrees above the horizon, frequencies in MHz, flux densities in
// mJy, arrival-time errors in µs. Nothing here is NaN: what is not heard has a signal-to-noise ratio
// of 0 and an infinite error, and MinutesFor says in words why there is no answer.
package radiometer

import (
	"errors"
	"fmt"
	"math"
)

// A Receiver is a front end at its telescope.
type Receiver struct {
	BandMHz       [2]float64 // lower and upper edge
	TsysK         float64    // at the zenith, with its atmosphere, without the sky behind
	ZenithOpacity float64    // nepers; about 0.008 below 2 GHz
	GainKPerJy    float64
	GainCurve     [][2]float64 // elevation in degrees, rising, and factor of GainKPerJy there; nil: 1 at every elevation
	Polarizations int          // 1 or 2
	ChannelMHz    float64      // width of a channel within which dispersion is not taken out; 0: it is taken out everywhere
}

// CentreMHz is the middle of the band.
func (r Receiver) CentreMHz() float64 { return (r.BandMHz[0] + r.BandMHz[1]) / 2 }

// BandwidthMHz is the width of the band.
func (r Receiver) BandwidthMHz() float64 { return r.BandMHz[1] - r.BandMHz[0] }

// A Pulsar is what decides how well it can be timed. Everything not known is 0.
type Pulsar struct {
	FluxMJy         float64 // mean flux density at AtMHz
	AtMHz           float64 // 0: the flux is taken as it is at every frequency
	SpectralIndex   float64 // flux ∝ frequency^SpectralIndex; −1.6 is typical
	PeriodS         float64
	WidthMs         float64 // effective width of the pulse; 0: 5 % of the period
	JitterUsPerHour float64 // arrival-time error from the pulses' own variation after one hour
	FloorUs         float64 // arrival-time error that no amount of time goes below
	Sky408K         float64 // sky temperature at 408 MHz in its direction: SkyAt408, or measured
	DMPcPerCm3      float64 // smears the pulse across the receiver's channels
	GaussianPulse   bool    // timed with the matched template of a Gaussian of that width; false: by the plain W/(S/N)
}

// usualDuty stands in for an unknown pulse width: published survey limits assume 5 % of the period.
const usualDuty = 0.05

// EffectiveWidthMs is the pulse width, or 5 % of the period where it is not known.
func (p Pulsar) EffectiveWidthMs() float64 {
	if p.WidthMs > 0 {
		return p.WidthMs
	}
	return usualDuty * p.PeriodS * 1e3
}

// FluxAt returns the flux density at a frequency, mJy.
//
//	S = S₀ (f/f₀)^α
//
// Source:  power law; mean α about −1.6, Jankowski et al. 2018, MNRAS 473, 4436
// Checked: TestFluxAt
func (p Pulsar) FluxAt(mhz float64) float64 {
	if !(p.AtMHz > 0) || !(mhz > 0) {
		return p.FluxMJy
	}
	return p.FluxMJy * math.Pow(mhz/p.AtMHz, p.SpectralIndex)
}

// A Setup is a receiver pointed at a pulsar.
type Setup struct {
	Receiver Receiver
	Pulsar   Pulsar
}

// Check reports everything that keeps a Setup from being used, joined. A Setup that fails it still
// answers, as if the pulsar were not heard.
func (s Setup) Check() error {
	var smeared error
	if w := s.WidthMs(); s.Pulsar.PeriodS > 0 && w >= s.Pulsar.PeriodS*1e3 && s.Pulsar.EffectiveWidthMs() < s.Pulsar.PeriodS*1e3 {
		smeared = fmt.Errorf("pulse: found smeared over %.3g ms by dispersion in channels of %g MHz; accepted below the period, %g ms", w, s.Receiver.ChannelMHz, s.Pulsar.PeriodS*1e3)
	}
	return errors.Join(s.Receiver.Check(), s.Pulsar.Check(), smeared)
}

// Check reports everything that keeps a receiver from being used, joined.
func (r Receiver) Check() error {
	return errors.Join(
		positive("lower edge of the band", r.BandMHz[0]),
		positive("bandwidth", r.BandwidthMHz()),
		positive("system temperature", r.TsysK),
		positive("gain", r.GainKPerJy),
		checkGainCurve(r.GainCurve),
		notNegative("width of a channel", r.ChannelMHz),
		positive("polarizations", float64(r.Polarizations)),
		notNegative("zenith opacity", r.ZenithOpacity),
	)
}

// Check reports everything that keeps the signal of a pulsar from being known, joined.
func (p Pulsar) Check() error {
	var wide error
	if p.PeriodS > 0 && p.EffectiveWidthMs() >= p.PeriodS*1e3 {
		wide = fmt.Errorf("pulse width: found %g ms; accepted below the period, %g ms", p.WidthMs, p.PeriodS*1e3)
	}
	return errors.Join(
		positive("flux density", p.FluxMJy),
		notNegative("frequency of the flux density", p.AtMHz),
		finite("spectral index", p.SpectralIndex),
		positive("period", p.PeriodS),
		notNegative("pulse width", p.WidthMs),
		wide,
		notNegative("jitter", p.JitterUsPerHour),
		notNegative("floor", p.FloorUs),
		notNegative("dispersion measure", p.DMPcPerCm3),
		notNegative("sky temperature", p.Sky408K),
	)
}

func positive(name string, v float64) error {
	if v > 0 && !math.IsInf(v, 0) {
		return nil
	}
	return fmt.Errorf("%s: found %g; accepted above 0", name, v)
}

func notNegative(name string, v float64) error {
	if v >= 0 && !math.IsInf(v, 0) {
		return nil
	}
	return fmt.Errorf("%s: found %g; accepted 0 or more", name, v)
}

func finite(name string, v float64) error {
	if !math.IsNaN(v) && !math.IsInf(v, 0) {
		return nil
	}
	return fmt.Errorf("%s: found %g; accepted a finite number", name, v)
}

// SNR returns the expected signal-to-noise ratio of the folded profile after some minutes at an
// elevation: 0 below the horizon and for a pulsar of unknown flux.
//
//	S/N = S G √(n_p t B)/T · √((P−W)/W)
//
// with S the flux density behind the atmosphere at the middle of the band, G the gain and T the system temperature
// at that elevation, sky included.
//
// Neglects: losses of digitisation (a factor 1 to 1.5), scattering, and scintillation
// Source:   Lorimer & Kramer 2005, Handbook of Pulsar Astronomy
// Checked:  TestSNR, TestPublishedObservations
func (s Setup) SNR(minutes, elevationDeg float64) float64 {
	if !(minutes > 0) || !(elevationDeg > 0) || s.Check() != nil {
		return 0
	}
	flux := s.Pulsar.FluxAt(s.Receiver.CentreMHz()) * transmission(s.Receiver.ZenithOpacity, elevationDeg)
	snr := SNR(flux, s.Receiver.GainKPerJy*gainFactor(s.Receiver.GainCurve, elevationDeg), s.SystemK(elevationDeg), s.Receiver.Polarizations,
		60*minutes, s.Receiver.BandwidthMHz(), s.Pulsar.PeriodS*1e3, s.WidthMs())
	if !(snr > 0) {
		return 0 // also where absurd numbers have overflowed
	}
	return snr
}

// SNR is the radiometer equation for a folded pulse profile.
//
//	S/N = S G √(n_p t B)/T · √((P−W)/W)
//
// Given:   fluxMJy, gain in K/Jy, tsysK, polarizations, seconds, bandwidthMHz, period and width in ms
// Returns: 0 when the width does not fit the period or anything is not positive
// Source:  Lorimer & Kramer 2005, Handbook of Pulsar Astronomy
// Checked: TestSNR
func SNR(fluxMJy, gainKPerJy, tsysK float64, polarizations int, seconds, bandwidthMHz, periodMs, widthMs float64) float64 {
	samples := float64(polarizations) * seconds * bandwidthMHz * 1e6
	if !(samples > 0) || !(widthMs > 0) || !(periodMs > widthMs) || !(tsysK > 0) {
		return 0
	}
	return fluxMJy * 1e-3 * gainKPerJy * math.Sqrt(samples) / tsysK * math.Sqrt((periodMs-widthMs)/widthMs)
}

// WidthMs returns the width of the pulse as the receiver sees it, in the middle of its band, ms.
//
//	W² = W_pulse² + t_channel²
//
// Neglects: scattering, and that of the band's lower edge, where channels smear more
// Source:   Lorimer & Kramer 2005, Handbook of Pulsar Astronomy
// Checked:  TestSmearedWidth
func (s Setup) WidthMs() float64 {
	smeared := ChannelSmearingUs(s.Pulsar.DMPcPerCm3, s.Receiver.ChannelMHz, s.Receiver.CentreMHz())
	if !(smeared > 0) {
		return s.Pulsar.EffectiveWidthMs()
	}
	return math.Hypot(s.Pulsar.EffectiveWidthMs(), smeared/1e3)
}

// TOAErrorUs returns the expected error of an arrival time after some minutes at an elevation, µs:
// infinite when the pulsar is not heard.
//
//	σ² = noise² + jitter² + floor²
//
// The noise is the plain W/(S/N), as much as real profiles and receivers reach; of a GaussianPulse it is the least that
// a matched template reaches, GaussianErrorUs.
//
// Source:  Lorimer & Kramer 2005; jitter ∝ t^(−1/2), Parthasarathy et al. 2021, MNRAS 502, 407
// Checked: TestTOAError, TestTOAErrorOfGaussianPulse, TestPublishedObservations
func (s Setup) TOAErrorUs(minutes, elevationDeg float64) float64 {
	hour := s.hourErrorUs(elevationDeg)
	if !(minutes > 0) || math.IsInf(hour, 1) {
		return math.Inf(1)
	}
	return math.Hypot(hour*math.Sqrt(60/minutes), s.Pulsar.FloorUs)
}

// noiseUs is the part of an arrival time's error that a signal-to-noise ratio leaves.
func (s Setup) noiseUs(snr float64) float64 {
	if s.Pulsar.GaussianPulse {
		return GaussianErrorUs(1e3*s.WidthMs(), gaussianGain*snr)
	}
	return 1e3 * s.WidthMs() / snr
}

// GaussianErrorUs returns the error of the arrival time of a Gaussian pulse that is timed with its matched template, µs:
// the Cramér–Rao bound, below which no method goes.
//
//	√2 w/(S/N) = 0.6006 FWHM/(S/N),  for the pulse exp(−t²/2w²)
//
// Given:    the full width at half height, µs; the S/N of the matched template, which is the pulse's height over the
// height's error
// Neglects: what a template that does not fit costs
// Source:   Cramér–Rao bound, Rao 1945, Bull. Calcutta Math. Soc. 37, 81; for pulsars Taylor 1992, Phil. Trans. R. Soc. A 341, 117
// Checked:  TestGaussianError (RAD-030), TestGaussianErrorIsTheBound
func GaussianErrorUs(fwhmUs, matchedSNR float64) float64 {
	w := fwhmUs / (2 * math.Sqrt(2*math.Ln2))
	return math.Sqrt2 * w / matchedSNR
}

// gaussianGain is the S/N of a matched template over that of the radiometer equation, (2 ln 2/π)^(1/4). The equation counts
// a rectangle of the pulse's width and of all its energy; a Gaussian as wide at half height is lower and has wings.
//
// Checked: TestGaussianErrorIsTheBound
var gaussianGain = math.Pow(2*math.Ln2/math.Pi, 0.25)

// GaussianPulseFactor is what multiplies W/(S/N) in the errors of a GaussianPulse: 0.737, the bound's 0.6006 for an S/N
// that is 0.815 of the radiometer equation's.
//
// Checked: TestTOAErrorOfGaussianPulse
func GaussianPulseFactor() float64 { return GaussianErrorUs(1, gaussianGain) }

// hourErrorUs is the part of the error that shrinks with time, after one hour: radiometer and jitter.
func (s Setup) hourErrorUs(elevationDeg float64) float64 {
	snr := s.SNR(60, elevationDeg)
	if !(snr > 0) {
		return math.Inf(1)
	}
	return math.Hypot(s.noiseUs(snr), s.Pulsar.JitterUsPerHour)
}

// JitterUs returns the arrival-time error from the variation of the pulses themselves after some
// seconds, where it has not been measured.
//
//	σ_J = f_J W/√N_p,  f_J about 1/3
//
// Source:  Cordes & Shannon 2010, arXiv:1010.3785
// Checked: TestJitter
func JitterUs(widthUs, fraction, periodS, seconds float64) float64 {
	return fraction * widthUs / math.Sqrt(seconds/periodS)
}
