package timing

import "math"

// earthSec returns where the Earth is, in light-seconds, along the equatorial axes of J2000.
//
//	λ = L + 1.915° sin g + 0.020° sin 2g,  R = 1.00014 − 0.01671 cos g − 0.00014 cos 2g
//
// Given:    MJD, TDB
// Neglects: the Sun's own motion about the barycentre, 5 s at most: 1 % of the partial derivatives with
// respect to position, which matters to no error
// Source:   The Astronomical Almanac, low-precision formulas for the Sun's coordinates, p. C5; referred
// to the equinox of J2000 by the general precession, 50.29″ a year
// Checked:  TestEarth
func earthSec(mjd float64) [3]float64 {
	n := mjd - 51544.5
	g := (357.528 + 0.9856003*n) * degToRad
	sinG, cosG := math.Sincos(g)
	lambda := (280.460 + 0.9856474*n + 1.915*sinG + 0.020*2*sinG*cosG - 50.29/3600/daysPerYear*n) * degToRad
	r := (1.00014 - 0.01671*cosG - 0.00014*(2*cosG*cosG-1)) * auSec
	sinL, cosL := math.Sincos(lambda)
	const sinE, cosE = 0.3977771559, 0.9174820621 // of the obliquity at J2000, 23.4392911°
	return [3]float64{-r * cosL, -r * cosE * sinL, -r * sinE * sinL}
}
