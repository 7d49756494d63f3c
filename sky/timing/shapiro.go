package timing

import (
	"math"

	"example.org/tallystick/sky/orbit"
)

// ConjunctionWeight returns what a minute at an orbital phase is worth to the Shapiro delay, 1 at superior
// conjunction: the square of what is left of the delay when the orbit has been fitted, over its square at
// phase 0.25.
//
//	w = [g(φ)/g(¼)]²,  g = ln(1 − s sin Φ) + ln(1+ς²) + 2ς cos(Φ−π/2) + ς² cos 2(Φ−π/2)
//
// The Fourier series of ln(1 − s sin Φ) has amplitudes 2ςᵏ/k; the orbit swallows k = 0, 1, 2.
//
// Given:    phase from the ascending node, any turn; sinI within 0..1, 0 for not known: 60° is assumed
// Returns:  0..1; it is not small only near 0.25 and, less, at the troughs beside it
// Neglects: eccentricity
// Source:   Freire & Wex 2010, MNRAS 409, 199 for the series; uniform coverage of the orbit
// Checked:  TestConjunctionWeight
func ConjunctionWeight(phase, sinI float64) float64 {
	if !(sinI > 0) {
		sinI = sky60
	}
	stig := Stig(math.Min(sinI, 1-1e-9))
	return square(leftOver(phase, stig) / leftOver(0.25, stig))
}

// leftOver is g above.
func leftOver(phase, stig float64) float64 {
	u := turn * (phase - 0.25)
	if stig < 0.3 { // the closed form would lose digits: sum the harmonics that are left
		sum := 0.0
		for k, p := 3.0, stig*stig*stig; k <= 40 && p > 1e-18*stig*stig*stig; k, p = k+1, p*stig {
			sum -= 2 * p * math.Cos(k*u) / k
		}
		return sum
	}
	s := 2 * stig / (1 + stig*stig)
	return math.Log(1-s*math.Cos(u)) + math.Log1p(stig*stig) + 2*stig*math.Cos(u) + stig*stig*math.Cos(2*u)
}

// Stig returns the orthometric ratio of an inclination.
//
//	ς = s/(1 + √(1−s²))
//
// Source:  Freire & Wex 2010, MNRAS 409, 199
// Checked: TestOrthometric
func Stig(sinI float64) float64 { return sinI / (1 + math.Sqrt((1-sinI)*(1+sinI))) }

// SinIFromStig is the way back: s = 2ς/(1+ς²).
func SinIFromStig(stig float64) float64 { return 2 * stig / (1 + stig*stig) }

// H3Sec returns the orthometric amplitude, seconds: r ς³.
func H3Sec(companionMsun, sinI float64) float64 {
	s := Stig(sinI)
	return companionMsun * orbit.SunSec * s * s * s
}

// CompanionFromH3 returns the companion's mass from the orthometric amplitude (seconds) and ratio.
func CompanionFromH3(h3Sec, stig float64) float64 {
	return h3Sec / (stig * stig * stig) / orbit.SunSec
}

// HarmonicSec returns the amplitude of harmonic k ≥ 1 of the Shapiro delay, seconds: 4 r ςᵏ/k. The first two
// cannot be told from the orbit.
func HarmonicSec(k int, companionMsun, sinI float64) float64 {
	return 4 * companionMsun * orbit.SunSec * math.Pow(Stig(sinI), float64(k)) / float64(k)
}

func square(x float64) float64 { return x * x }
