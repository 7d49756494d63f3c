package radiometer

import "math"

const (
	backgroundK = 2.73  // cosmic microwave background
	airK        = 270   // mean physical temperature of the atmosphere
	skyIndex    = -2.55 // of the Galaxy's radiation from 408 MHz: published values −2.5 to −2.6
)

// SkyAt408 returns the sky temperature at 408 MHz towards a Galactic direction, K, by a formula good to
// a factor 1.5 away from the brightest ridge. A measured value is better.
//
//	T = 25 + 275/{[1 + (l/42)²][1 + (b/3)²]}
//
// Given:   Galactic longitude (any turn) and latitude, degrees
// Source:  Narayan 1987, ApJ 319, 162
// Checked: TestSkyAt408
func SkyAt408(longitudeDeg, latitudeDeg float64) float64 {
	l := math.Remainder(longitudeDeg, 360)
	return 25 + 275/((1+square(l/42))*(1+square(latitudeDeg/3)))
}

// SkyK returns the sky temperature at a frequency from that at 408 MHz, with the cosmic background
// added apart, K.
//
//	T = T408 (f/408)^(−2.55) + 2.73
//
// Source:  Lawson et al. 1987, MNRAS 225, 307 for the index
// Checked: TestSkyScales
func SkyK(sky408K, mhz float64) float64 {
	return scaleSky(sky408K, 408, mhz, skyIndex) + backgroundK
}

func scaleSky(k, fromMHz, toMHz, index float64) float64 {
	return k * math.Pow(toMHz/fromMHz, index)
}

// AirMass returns how many zenith atmospheres the line of sight crosses.
//
//	X = 1/sin el
//
// Given:    elevation above 0
// Neglects: the curvature of the Earth: fine above 15°, 10 % too much at 5°
func AirMass(elevationDeg float64) float64 {
	return 1 / math.Sin(math.Min(elevationDeg, 180-elevationDeg)*math.Pi/180)
}

func transmission(opacity, elevationDeg float64) float64 {
	return math.Exp(-opacity * AirMass(elevationDeg))
}

// SystemK returns the system temperature at an elevation, K.
//
//	T = Tz + Tsky e^(−τX) + 270 K (e^(−τ) − e^(−τX))
//
// Given:   the receiver's figure at the zenith, which holds the zenith atmosphere; the sky behind;
// opacity in nepers; elevation above 0
// Checked: TestSystemTemperature
func SystemK(zenithK, skyK, opacity, elevationDeg float64) float64 {
	through := transmission(opacity, elevationDeg)
	return zenithK + skyK*through + airK*(math.Exp(-opacity)-through)
}

// SystemK returns the system temperature of the receiver towards the pulsar at an elevation, K.
func (s Setup) SystemK(elevationDeg float64) float64 {
	r := s.Receiver
	return SystemK(r.TsysK, SkyK(s.Pulsar.Sky408K, r.CentreMHz()), r.ZenithOpacity, elevationDeg)
}

// EffectiveWeights returns what a minute at each elevation of a track is worth in minutes at the zenith: the ratio of the
// times in which the same signal-to-noise ratio is reached. It is 0 at and below the horizon, and at most 1 for a gain
// that is the same everywhere; above 1 where the gain is that much better than at the zenith.
//
//	[g(el)/g(90°) · T(90°)/T(el)]² e^(−2τ(X−1)),  g the gain
//
// Given:    dst, used for the result when it is long enough; it may be nil
// Returns:  one weight for each elevation, in their order
// Neglects: the ground that a deformed dish hears
// Checked:  TestEffectiveWeight, TestGainCurveInEffectiveMinutes
func (s Setup) EffectiveWeights(elevationDeg, dst []float64) []float64 {
	if cap(dst) < len(elevationDeg) {
		dst = make([]float64, len(elevationDeg))
	}
	dst = dst[:len(elevationDeg)]
	clear(dst)
	r := s.Receiver
	if r.Check() != nil || notNegative("sky temperature", s.Pulsar.Sky408K) != nil {
		return dst
	}
	sky, zenith := SkyK(s.Pulsar.Sky408K, r.CentreMHz()), math.Exp(-r.ZenithOpacity)
	best, atZenith := zenith/(r.TsysK+sky*zenith), gainFactor(r.GainCurve, 90)
	for i, el := range elevationDeg {
		if !(el > 0) || !(el < 180) {
			continue
		}
		through := transmission(r.ZenithOpacity, el)
		ratio := through / (r.TsysK + sky*through + airK*(zenith-through)) / best
		if weight := ratio * ratio; weight > 0 {
			gain := gainFactor(r.GainCurve, el) / atZenith
			dst[i] = math.Min(1, weight) * gain * gain
		}
	}
	return dst
}

func square(x float64) float64 { return x * x }
