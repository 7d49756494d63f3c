package array

import "math"

const degToRad = math.Pi / 180

// Correlation returns the correlation that an isotropic background of gravitational waves gives the residuals of two
// pulsars: the Hellings–Downs curve.
//
//	Γ = (3/2) c ln c − c/4 + 1/2,  c = (1 − cos ξ)/2
//
// Given:   the angle ξ between two different pulsars, degrees within 0..180
// Returns: 1/2 at 0, least, −0.152, at 82.5°, and 1/4 at 180°
// Source:  Hellings & Downs 1983, ApJ 265, L39
// Checked: TestCorrelationRows, TestCorrelation
func Correlation(separationDeg float64) float64 {
	s := math.Sin(separationDeg / 2 * degToRad)
	return correlation(s * s)
}

// correlation is Correlation by c, the square of the sine of half the angle.
func correlation(c float64) float64 {
	if !(c > 0) {
		return 0.5 // the limit
	}
	return 1.5*c*math.Log(c) - c/4 + 0.5
}

// FirstZeroDeg is the angle at which the Hellings–Downs curve first vanishes: nearer pairs are correlated, those
// beyond it, up to 121.7°, against each other.
//
// Source:  Hellings & Downs 1983, ApJ 265, L39
// Checked: TestCorrelationRows, TestFirstZero
const FirstZeroDeg = 49.317268
