package sky

import "math"

// earthRotation returns the Earth rotation angle in radians within [0, 2π).
//
//	θ = 2π (0.7790572732640 + 1.00273781191135448 D)
//
// Given:    day and fraction, which add up to the MJD of UT1
// Source:   IAU 2000 resolution B1.8; Capitaine et al. 2000
// Checked:  TestSidereal, TestDomainValues (AST-063)
func earthRotation(mjd, fraction float64) float64 {
	d := mjd - j2000MJD + fraction
	// Whole days are dropped before multiplying: the angle keeps its digits.
	f := mod(mjd-0.5, 1) + fraction + 0.7790572732640 + 0.00273781191135448*d
	return mod(turn*f, turn)
}

// earthRotationPerDay is how far the Earth turns in a day of UT1, in radians.
const earthRotationPerDay = turn * 1.00273781191135448

// precessionInRA returns mean sidereal time less the Earth rotation angle, in radians.
//
// Given:    t, Julian centuries of TT since J2000.0
// Source:   Capitaine, Wallace & Chapront 2003, A&A 412, 567; IAU 2006
// Checked:  TestSidereal, TestDomainValues (AST-064)
func precessionInRA(t float64) float64 {
	return (0.014506 + t*(4612.156534+t*(1.3915817+t*(-0.00000044+t*(-0.000029956-t*0.0000000368))))) * radPerSec
}

// equationOfEquinoxes returns apparent less mean sidereal time, in radians.
//
//	Δψ cos ε + 0.00264″ sin Ω + 0.00006″ sin 2Ω
//
// Given:    nutation in longitude and true obliquity in radians; t in Julian centuries of TT since J2000.0
// Neglects: complementary terms under 0.00002 arcsec
// Source:   IAU 1994 resolution C7; IERS Conventions 2003, section 5.4
// Checked:  TestSidereal
func equationOfEquinoxes(psi, obliquity, t float64) float64 {
	node := (125.04452 - 1934.136261*t) * radPerDeg
	return psi*math.Cos(obliquity) + (0.00264*math.Sin(node)+0.00006*math.Sin(2*node))*radPerSec
}
