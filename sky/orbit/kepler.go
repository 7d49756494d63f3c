package orbit

import "math"

// EccentricAnomaly solves Kepler's equation.
//
//	E − e sin E = M
//
// Given:   m in radians, any; e within 0 ≤ e < 1
// Returns: E in radians, in the same turn as m
// Ends:    m of 0 or ±π gives itself; e outside its range gives NaN
// Source:  Halley's method inside a bracket: E lies between M and M + e
// Checked: TestEccentricAnomaly (book and 40-digit values), TestKeplerResidual, BenchmarkEccentricAnomaly
func EccentricAnomaly(m, e float64) float64 {
	if !(e >= 0 && e < 1) {
		return math.NaN()
	}
	if e == 0 {
		return m
	}
	whole := math.Round(m/turn) * turn
	part := m - whole
	if part < 0 {
		return whole - eccentricHalf(-part, e)
	}
	return whole + eccentricHalf(part, e)
}

// eccentricHalf solves for 0 ≤ m ≤ π.
func eccentricHalf(m, e float64) float64 {
	low, high := m, math.Min(m+e, math.Pi)
	x := start(m, e)
	for range 60 {
		sin, cos := math.Sincos(x)
		f := x - e*sin - m
		if f > 0 {
			high = x
		} else {
			low = x
		}
		slope := 1 - e*cos
		newton := f / slope
		next := x - newton/(1-0.5*newton*e*sin/slope) // Halley
		if !(next >= low && next <= high) {
			x = 0.5 * (low + high) // bisection is the net
			continue
		}
		step := math.Abs(next - x)
		x = next
		// Halley's steps shrink to their cube: after this one the error is below rounding.
		if step*step*step <= 1e-17*slope*slope*x || step <= 4e-16*x {
			break
		}
	}
	return x
}

// start is a first guess within a few per cent. For small anomalies at high eccentricity the cubic
// that remains of Kepler's equation, (1−e) E + e E³/6 = M, is solved; else one term of the series.
func start(m, e float64) float64 {
	if e < 0.5 || m > 1 {
		return math.Min(m+0.85*e, m+e*math.Sin(m)/(1-math.Min(0.6, e*math.Cos(m))))
	}
	p, q := 2*(1-e)/e, 3*m/e
	s := math.Cbrt(q + math.Sqrt(q*q+p*p*p))
	return s - p/s
}

// trueAnomaly returns the true anomaly of a body at eccentric anomaly E, in the same turn, radians.
//
//	tan(ν/2) = √((1+e)/(1−e)) tan(E/2)
//
// Given:   eccentric in radians within ±π
// Source:  Smart, Textbook on Spherical Astronomy, 6th ed. 1977, §66
// Checked: TestTrueAnomaly
func trueAnomaly(eccentric, e float64) float64 {
	sin, cos := math.Sincos(eccentric / 2)
	return 2 * math.Atan2(math.Sqrt(1+e)*sin, math.Sqrt(1-e)*cos)
}

// meanFromTrue is the way back: mean anomaly in turns from the true anomaly in turns, whole turns kept.
func meanFromTrue(turns, e float64) float64 {
	whole := math.Round(turns)
	sin, cos := math.Sincos((turns - whole) * math.Pi)
	eccentric := 2 * math.Atan2(math.Sqrt(1-e)*sin, math.Sqrt(1+e)*cos)
	return whole + (eccentric-e*math.Sin(eccentric))/turn
}
