package array

import "math"

// A Regime says how strong a background is in the data of an array.
type Regime int

// The regimes.
const (
	Weak         Regime = iota // the background is below the noise at every frequency
	Intermediate               // it is above the noise at the lowest frequencies: most arrays after ten years
)

// A Change is by which factors an array becomes another; 1 leaves a thing as it is.
type Change struct {
	Pulsars float64 // as many, all alike
	Cadence float64 // observations in a year
	Noise   float64 // error of one arrival time
	Span    float64 // years
}

// Same changes nothing.
func Same() Change { return Change{1, 1, 1, 1} }

// backgroundSlope is β: the power of the background of supermassive binaries in the residuals falls as frequency
// to the −β.
const backgroundSlope = 13. / 3

// Gain returns by which factor a change of the array changes the signal-to-noise ratio of the background.
//
//	weak:          S/N ∝ N c T^β/σ²
//	intermediate:  S/N ∝ N √T (c/σ²)^(1/(2β)),  β = 13/3
//
// Given:    factors above 0
// Neglects: that an array passes from one regime to the other, and that pulsars differ
// Source:   Siemens et al. 2013, CQG 30, 224015; β: Phinney 2001, arXiv:astro-ph/0108028
// Checked:  TestGainRows, TestGain
func (r Regime) Gain(c Change) float64 {
	heard := c.Cadence / (c.Noise * c.Noise)
	if r == Weak {
		return c.Pulsars * heard * math.Pow(c.Span, backgroundSlope)
	}
	return c.Pulsars * math.Sqrt(c.Span) * math.Pow(heard, 1/(2*backgroundSlope))
}
