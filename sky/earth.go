package sky

import "math"

// term is one row of a periodic series: a cos(b + c τ), τ in Julian millennia of TT since J2000.0.
type term struct{ a, b, c float64 }

func sum(terms []term, tau float64) float64 {
	var s float64
	for i := len(terms) - 1; i >= 0; i-- { // the small ones first
		s += terms[i].a * math.Cos(terms[i].b+terms[i].c*tau)
	}
	return s
}

// The Earth's heliocentric longitude, latitude and distance, mean dynamical ecliptic and equinox of date,
// in units of 1e−8 radian and 1e−8 au. The series is cut where its terms fall below 0.05 arcsec.
// Source: Bretagnon & Francou 1988, A&A 202, 309 (VSOP87D), in the extract of Meeus, appendix III.
var earthL0 = []term{
	{175347046, 0, 0},
	{3341656, 4.6692568, 6283.0758500},
	{34894, 4.62610, 12566.15170},
	{3497, 2.7441, 5753.3849},
	{3418, 2.8289, 3.5231},
	{3136, 3.6277, 77713.7715},
	{2676, 4.4181, 7860.4194},
	{2343, 6.1352, 3930.2097},
	{1324, 0.7425, 11506.7698},
	{1273, 2.0371, 529.6910},
	{1199, 1.1096, 1577.3435},
	{990, 5.233, 5884.927},
	{902, 2.045, 26.298},
	{857, 3.508, 398.149},
	{780, 1.179, 5223.694},
	{753, 2.533, 5507.553},
	{505, 4.583, 18849.228},
	{492, 4.205, 775.523},
	{357, 2.920, 0.067},
	{317, 5.849, 11790.629},
	{284, 1.899, 796.298},
	{271, 0.315, 10977.079},
	{243, 0.345, 5486.778},
	{206, 4.806, 2544.314},
	{205, 1.869, 5573.143},
	{202, 2.458, 6069.777},
	{156, 0.833, 213.299},
	{132, 3.411, 2942.463},
	{126, 1.083, 20.775},
	{115, 0.645, 0.980},
	{103, 0.636, 4694.003},
	{102, 0.976, 15720.839},
	{102, 4.267, 7.114},
	{99, 6.21, 2146.17},
	{98, 0.68, 155.42},
	{86, 5.98, 161000.69},
	{85, 1.30, 6275.96},
	{85, 3.67, 71430.70},
	{80, 1.81, 17260.15},
	{79, 3.04, 12036.46},
	{75, 1.76, 5088.63},
	{74, 3.50, 3154.69},
	{74, 4.68, 801.82},
	{70, 0.83, 9437.76},
	{62, 3.98, 8827.39},
	{61, 1.82, 7084.90},
	{57, 2.78, 6286.60},
	{56, 4.39, 14143.50},
	{56, 3.47, 6279.55},
	{52, 0.19, 12139.55},
	{52, 1.33, 1748.02},
	{51, 0.28, 5856.48},
	{49, 0.49, 1194.45},
	{41, 5.37, 8429.24},
	{41, 2.40, 19651.05},
	{39, 6.17, 10447.39},
	{37, 6.04, 10213.29},
	{37, 2.57, 1059.38},
	{36, 1.71, 2352.87},
	{36, 1.78, 6812.77},
	{33, 0.59, 17789.85},
	{30, 0.44, 83996.85},
	{30, 2.74, 1349.87},
	{25, 3.16, 4690.48},
}

var earthL1 = []term{
	{628331966747, 0, 0},
	{206059, 2.678235, 6283.075850},
	{4303, 2.6351, 12566.1517},
	{425, 1.590, 3.523},
	{119, 5.796, 26.298},
	{109, 2.966, 1577.344},
	{93, 2.59, 18849.23},
	{72, 1.14, 529.69},
	{68, 1.87, 398.15},
	{67, 4.41, 5507.55},
	{59, 2.89, 5223.69},
	{56, 2.17, 155.42},
	{45, 0.40, 796.30},
	{36, 0.47, 775.52},
	{29, 2.65, 7.11},
}

var earthL2 = []term{
	{52919, 0, 0},
	{8720, 1.0721, 6283.0758},
	{309, 0.867, 12566.152},
	{27, 0.05, 3.52},
}

var earthB0 = []term{
	{280, 3.199, 84334.662},
	{102, 5.422, 5507.553},
	{80, 3.88, 5223.69},
	{44, 3.70, 2352.87},
	{32, 4.00, 1577.34},
}

var earthR0 = []term{
	{100013989, 0, 0},
	{1670700, 3.0984635, 6283.0758500},
	{13956, 3.05525, 12566.15170},
	{3084, 5.1985, 77713.7715},
	{1628, 1.1739, 5753.3849},
	{1576, 2.8469, 7860.4194},
	{925, 5.453, 11506.770},
	{542, 4.564, 3930.210},
	{472, 3.661, 5884.927},
	{346, 0.964, 5507.553},
	{329, 5.900, 5223.694},
	{307, 0.299, 5573.143},
	{243, 4.273, 11790.629},
	{212, 5.847, 1577.344},
	{186, 5.022, 10977.079},
	{175, 3.012, 18849.228},
	{110, 5.055, 5486.778},
	{98, 0.89, 6069.78},
	{86, 5.69, 15720.84},
	{86, 1.27, 161000.69},
	{65, 0.27, 17260.15},
	{63, 0.92, 529.69},
	{57, 2.01, 83996.85},
	{56, 5.24, 71430.70},
	{49, 3.25, 2544.31},
	{47, 2.58, 775.52},
	{45, 5.54, 9437.76},
	{43, 6.01, 6275.96},
	{39, 5.36, 4694.00},
	{38, 2.39, 8827.39},
}

var earthR1 = []term{
	{103019, 1.107490, 6283.075850},
	{1721, 1.0644, 12566.1517},
	{702, 3.142, 0},
	{32, 1.02, 18849.23},
}

// earthFromSun returns the Earth's heliocentric place in au on the axes of the mean equator and equinox of date.
//
// Given:    jd, Julian day of TT (the difference to TDB moves the Earth by 50 m)
// Neglects: series terms under 0.05 arcsec each, about 0.5 arcsec in all
// Source:   see earthL0; the turn to the FK5 equinox is Meeus, eq. 32.3
// Checked:  TestSun, TestDomainValues (AST-068)
func earthFromSun(jd, obliquity float64) vec {
	tau := (jd - mjdOffset - j2000MJD) / (10 * daysPerCentury)
	l := (sum(earthL0, tau)+tau*(sum(earthL1, tau)+tau*sum(earthL2, tau)))*1e-8 - 0.09033*radPerSec
	b := sum(earthB0, tau) * 1e-8
	r := (sum(earthR0, tau) + tau*sum(earthR1, tau)) * 1e-8
	return aboutX(-obliquity).apply(direction(l, b).times(r))
}

// orbitElements are a planet's mean elements at J2000.0 and their change per Julian century: semi-major axis
// in au, eccentricity, and in degrees inclination, mean longitude, longitudes of perihelion and of the node.
type orbitElements struct {
	inverseMass float64 // the Sun's mass over the planet's, moons included
	at, rate    [6]float64
}

// The four planets that move the Sun by more than a millisecond of light time.
// Source: Standish, "Keplerian elements for approximate positions of the major planets", table 1
// (1800 to 2050); masses of IAU 2009.
var heavyPlanets = [...]orbitElements{
	{1047.3486, [6]float64{5.20288700, 0.04838624, 1.30439695, 34.39644051, 14.72847983, 100.47390909},
		[6]float64{-0.00011607, -0.00013253, -0.00183714, 3034.74612775, 0.21252668, 0.20469106}},
	{3497.898, [6]float64{9.53667594, 0.05386179, 2.48599187, 49.95424423, 92.59887831, 113.66242448},
		[6]float64{-0.00125060, -0.00050991, 0.00193609, 1222.49362201, -0.41897216, -0.28867794}},
	{22902.98, [6]float64{19.18916464, 0.04725744, 0.77263783, 313.23810451, 170.95427630, 74.01692503},
		[6]float64{-0.00196176, -0.00004397, -0.00242939, 428.48202785, 0.40805281, 0.04240589}},
	{19412.24, [6]float64{30.06992276, 0.00859048, 1.77004347, -55.12002969, 44.96476227, 131.78422574},
		[6]float64{0.00026291, 0.00005105, 0.00035372, 218.45945325, -0.32241464, -0.00508664}},
}

// place returns the planet's heliocentric place in au on the ecliptic of J2000.0.
func (o *orbitElements) place(t float64) vec {
	var e [6]float64
	for i := range e {
		e[i] = o.at[i] + o.rate[i]*t
	}
	a, ecc := e[0], e[1]
	m := halfTurn((e[3] - e[4]) * radPerDeg)
	ea := m
	for range 4 { // e is below 0.06: four steps are exact
		ea -= (ea - ecc*math.Sin(ea) - m) / (1 - ecc*math.Cos(ea))
	}
	s, c := math.Sincos(ea)
	v := vec{a * (c - ecc), a * math.Sqrt(1-ecc*ecc) * s, 0}
	v = aboutZ(-(e[4] - e[5]) * radPerDeg).apply(v)
	v = aboutX(-e[2] * radPerDeg).apply(v)
	return aboutZ(-e[5] * radPerDeg).apply(v)
}

// sunFromBarycentre returns the Sun's place as seen from the barycentre of the solar system, in au, on the axes of J2000.0.
//
//	r = −Σ m r_planet / (1 + Σ m)
//
// Given:    jd, Julian day of TT
// Neglects: the inner planets (3e−6 au) and the planets' pull on one another (1e−5 au): 6 ms of light time in all
// Source:   definition of the barycentre; elements: see heavyPlanets
// Checked:  TestDomainValues (AST-068 and AST-069)
func sunFromBarycentre(jd float64) vec {
	t := (jd - mjdOffset - j2000MJD) / daysPerCentury
	var r vec
	all := 1.0
	for i := range heavyPlanets {
		m := 1 / heavyPlanets[i].inverseMass
		r = r.plus(-m, heavyPlanets[i].place(t))
		all += m
	}
	return aboutX(-obliquityJ2000).apply(r.times(1 / all))
}
