package sky

import "math"

// A wave is all that a planet's series has of one frequency, radians in a Julian millennium.
type wave struct {
	perMillennium float64
	parts         []part
}

// A part adds τ^power (cos · cos cτ + sin · sin cτ) to a coordinate: longitude, latitude or distance.
type part struct {
	of, power int
	cos, sin  float64
}

// Of the coordinates of a place in a series.
const (
	ofLongitude = iota
	ofLatitude
	ofDistance
)

// along returns the sums of a series, tau Julian millennia of TT after J2000.0, and their change per millennium.
func along(waves []wave, tau float64) (place, rate [3]float64) {
	var powers [6]float64
	powers[0] = 1
	for i := 1; i < len(powers); i++ {
		powers[i] = powers[i-1] * tau
	}
	for i := len(waves) - 1; i >= 0; i-- { // the small ones first
		w := &waves[i]
		sin, cos := math.Sincos(w.perMillennium * tau)
		for j := range w.parts {
			p := &w.parts[j]
			v := p.cos*cos + p.sin*sin
			d := powers[p.power] * w.perMillennium * (p.sin*cos - p.cos*sin)
			if p.power > 0 {
				d += float64(p.power) * powers[p.power-1] * v
			}
			place[p.of] += powers[p.power] * v
			rate[p.of] += d
		}
	}
	return place, rate
}

// rectangular turns longitude, latitude and distance, and their change, into a place and its change.
func rectangular(s, rate [3]float64) (place, change vec) {
	sl, cl := math.Sincos(s[ofLongitude])
	sb, cb := math.Sincos(s[ofLatitude])
	outward, east, north := vec{cb * cl, cb * sl, sb}, vec{-sl, cl, 0}, vec{-sb * cl, -sb * sl, cb}
	r := s[ofDistance]
	return outward.times(r), outward.times(rate[ofDistance]).plus(r*cb*rate[ofLongitude], east).plus(r*rate[ofLatitude], north)
}

// fromEcliptic turns a vector on the ecliptic and equinox of the planetary theory to ICRS axes.
//
// Source: the inertial ecliptic's obliquity and the place of its equinox, Chapront, Chapront-Touzé & Francou 2002,
// A&A 387, 700. The theory's own axes, by the rows of TestSun, are within 0.01 arcsec of these
func fromEcliptic(a vec) vec {
	const equinox = -0.05542 * radPerSec
	return aboutZ(-equinox).apply(aboutX(-84381.411 * radPerSec).apply(a))
}

// earthFromSun returns the Earth's heliocentric place in au and its velocity in au per Julian millennium, ICRS axes.
//
// Given:    jd, Julian day of TT (the difference to TDB moves the Earth by 50 m)
// Neglects: series terms under 2.5e−8 au each: 3e−7 au in all, or 0.06 arcsec
// Source:   see earthWaves
// Checked:  TestSun, TestEarthVelocity, TestDomainValues (AST-068)
func earthFromSun(jd float64) (place, perMillennium vec) {
	r, v := rectangular(along(earthWaves, (jd-mjdOffset-j2000MJD)/(10*daysPerCentury)))
	return fromEcliptic(r), fromEcliptic(v)
}

// heavyPlanets are those whose pull on the Sun is followed by a series: all but the inner ones.
// Masses: the Sun's over the planet's, moons included, IAU 2009.
var heavyPlanets = [...]struct {
	inverseMass float64
	waves       []wave
}{{1047.3486, jupiterWaves}, {3497.898, saturnWaves}, {22902.98, uranusWaves}, {19412.24, neptuneWaves}}

// orbitElements are a planet's mean elements at J2000.0 and their change per Julian century: semi-major axis
// in au, eccentricity, and in degrees inclination, mean longitude, longitudes of perihelion and of the node.
type orbitElements struct {
	inverseMass float64 // the Sun's mass over the planet's, moons included
	at, rate    [6]float64
}

// Venus and Mars move the Sun by 1.8e−6 and 5e−7 au: mean ellipses are enough for them.
// Source: Standish, "Keplerian elements for approximate positions of the major planets", table 1
// (1800 to 2050); masses of IAU 2009.
var lightPlanets = [...]orbitElements{
	{408523.72, [6]float64{0.72333566, 0.00677672, 3.39467605, 181.97909950, 131.60246718, 76.67984255},
		[6]float64{0.00000390, -0.00004107, -0.00078890, 58517.81538729, 0.00268329, -0.27769418}},
	{3098703.59, [6]float64{1.52371034, 0.09339410, 1.84969142, -4.55343205, -23.94362959, 49.55953891},
		[6]float64{0.00001847, 0.00007882, -0.00813131, 19140.30268499, 0.44441088, -0.29257343}},
}

// The Sun's mass over that of the Earth and the Moon, IAU 2009.
const earthMoonInverseMass = 328900.56

// place returns the planet's heliocentric place in au on the ecliptic of J2000.0.
func (o *orbitElements) place(t float64) vec {
	var e [6]float64
	for i := range e {
		e[i] = o.at[i] + o.rate[i]*t
	}
	a, ecc := e[0], e[1]
	m := halfTurn((e[3] - e[4]) * radPerDeg)
	ea := m
	for range 4 { // e is below 0.1: four steps are exact
		ea -= (ea - ecc*math.Sin(ea) - m) / (1 - ecc*math.Cos(ea))
	}
	s, c := math.Sincos(ea)
	v := vec{a * (c - ecc), a * math.Sqrt(1-ecc*ecc) * s, 0}
	v = aboutZ(-(e[4] - e[5]) * radPerDeg).apply(v)
	v = aboutX(-e[2] * radPerDeg).apply(v)
	return aboutZ(-e[5] * radPerDeg).apply(v)
}

// sunFromBarycentre returns the Sun's place as seen from the barycentre of the solar system, in au, and its velocity
// in au per Julian millennium, ICRS axes.
//
//	r = −Σ m r_planet / (1 + Σ m)
//
// Given:    jd, Julian day of TT; the Earth's heliocentric place and velocity in the same units, ICRS
// Neglects: Mercury (7e−8 au), series terms under 2.5e−8 au each, the way from the Earth to its and the Moon's common
// centre (1e−10 au), the velocity that Venus and Mars give the Sun (4e−10 of the speed of light): 3e−7 au in all
// Source:   definition of the barycentre; see heavyPlanets and lightPlanets
// Checked:  TestDomainValues (AST-069)
func sunFromBarycentre(jd float64, earth, earthPerMillennium vec) (place, perMillennium vec) {
	days := jd - mjdOffset - j2000MJD
	all := 1.0
	for i := range heavyPlanets {
		p := &heavyPlanets[i]
		r, v := rectangular(along(p.waves, days/(10*daysPerCentury)))
		place, perMillennium = place.plus(-1/p.inverseMass, r), perMillennium.plus(-1/p.inverseMass, v)
		all += 1 / p.inverseMass
	}
	for i := range lightPlanets {
		p := &lightPlanets[i]
		place = place.plus(-1/p.inverseMass, p.place(days/daysPerCentury))
		all += 1 / p.inverseMass
	}
	const m = 1 / earthMoonInverseMass
	place = fromEcliptic(place).plus(-m, earth)
	perMillennium = fromEcliptic(perMillennium).plus(-m, earthPerMillennium)
	return place.times(1 / (all + m)), perMillennium.times(1 / (all + m))
}
