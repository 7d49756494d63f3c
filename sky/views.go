package sky

import "math"

// GalacticDeg returns the galactic longitude, 0 to 360, and latitude of an ICRS direction, all in degrees.
//
// Neglects: the frame bias of the 1958 system against ICRS (0.02 arcsec)
// Source:   Hipparcos catalogue vol. 1, eq. 1.5.11: pole 192.85948, +27.12825; node 32.93192
// Checked:  TestDomainValues (AST-073)
func GalacticDeg(raDeg, decDeg float64) (lDeg, bDeg float64) {
	const poleRA, poleDec, node = 192.85948, 27.12825, 32.93192
	turned := chain(aboutZ(-node*radPerDeg), aboutX((90-poleDec)*radPerDeg), aboutZ((poleRA+90)*radPerDeg))
	v := turned.apply(direction(raDeg*radPerDeg, decDeg*radPerDeg))
	return mod(math.Atan2(v[1], v[0])*degPerRad, 360), math.Atan2(v[2], math.Hypot(v[0], v[1])) * degPerRad
}

// AirMass returns the air in the line of sight over that at the zenith, for an elevation in degrees without
// refraction. At and below the horizon it is that of the horizon, 38.
//
//	1 / ( sin h + 0.50572 (h + 6.07995)^−1.6364 )
//
// Source:   Kasten & Young 1989, Applied Optics 28, 4735, eq. 3 and table II
// Checked:  TestDomainValues (AST-106 to AST-110)
func AirMass(elDeg float64) float64 {
	h := min(max(elDeg, 0), 90)
	return 1 / (math.Sin(h*radPerDeg) + 0.50572*math.Pow(h+6.07995, -1.6364))
}
