package main

import (
	"math"
	"time"
)

// The generator has small formulas of its own (good to about 0.02 degrees and some seconds of light
// time) so that the logbook can be checked with the program's sky package, which it does not share.

const (
	degrees    = math.Pi / 180
	secondsDay = 86400.0
	lightAuSec = 499.004784
	tdbUtcSec  = 69.184 // since 2017-01-01
	daysYear   = 365.25
)

// A vector is a direction or a position; x to the equinox, z to the pole.
type vector [3]float64

func direction(lonDeg, latDeg float64) vector {
	sl, cl := math.Sincos(lonDeg * degrees)
	sb, cb := math.Sincos(latDeg * degrees)
	return vector{cb * cl, cb * sl, sb}
}

func (v vector) dot(w vector) float64 { return v[0]*w[0] + v[1]*w[1] + v[2]*w[2] }

func (v vector) lonLatDeg() (lon, lat float64) {
	return math.Mod(math.Atan2(v[1], v[0])/degrees+360, 360), math.Atan2(v[2], math.Hypot(v[0], v[1])) / degrees
}

// separationDeg returns the angle between two unit vectors.
func separationDeg(v, w vector) float64 {
	d := vector{v[0] - w[0], v[1] - w[1], v[2] - w[2]}
	return 2 * math.Asin(math.Min(1, math.Sqrt(d.dot(d))/2)) / degrees
}

func mjdOf(t time.Time) float64 { return float64(t.UnixMilli())/1000/secondsDay + 40587 }

func timeOf(mjd float64) time.Time {
	return time.UnixMilli(int64(math.Round((mjd - 40587) * secondsDay * 1000))).UTC()
}

// sunAt returns the direction of the Sun (equator and equinox of date) and its distance in au.
//
//	g = 357.528° + 0.9856003° n,  λ = L + 1.915° sin g + 0.020° sin 2g
//
// Source: Astronomical Almanac, low-precision formulas for the Sun (0.01° until 2050)
func sunAt(mjd float64) (vector, float64) {
	n := mjd - 51544.5
	mean := 280.460 + 0.9856474*n
	g := (357.528 + 0.9856003*n) * degrees
	lambda := mean + 1.915*math.Sin(g) + 0.020*math.Sin(2*g)
	obliquity := (23.439 - 4e-7*n) * degrees
	sl, cl := math.Sincos(lambda * degrees)
	return vector{cl, sl * math.Cos(obliquity), sl * math.Sin(obliquity)},
		1.00014 - 0.01671*math.Cos(g) - 0.00014*math.Cos(2*g)
}

// precess turns a J2000 direction into one of the equator and equinox of date.
//
// Source: Lieske et al. 1977 (the IAU 1976 angles), first two orders
func precess(v vector, mjd float64) vector {
	t := (mjd - 51544.5) / 36525
	zeta := (2306.2181*t + 0.30188*t*t) / 3600 * degrees
	z := (2306.2181*t + 1.09468*t*t) / 3600 * degrees
	theta := (2004.3109*t - 0.42665*t*t) / 3600 * degrees
	ra, dec := v.lonLatDeg()
	sd, cd := math.Sincos(dec * degrees)
	sa, ca := math.Sincos(ra*degrees + zeta)
	st, ct := math.Sincos(theta)
	a, b, c := cd*sa, ct*cd*ca-st*sd, st*cd*ca+ct*sd
	return direction(math.Atan2(a, b)/degrees+z/degrees, math.Asin(c)/degrees)
}

// siderealDeg returns the local mean sidereal time in degrees.
//
// Source: Meeus, Astronomical Algorithms, 2nd ed. 1998, eq. 12.4, without the terms in T² and T³
func siderealDeg(mjdUT float64) float64 {
	return math.Mod(280.46061837+360.98564736629*(mjdUT-51544.5)+siteLongitudeDeg, 360)
}

// azEl returns where a direction of date stands, seen from the site: azimuth from north through east.
func azEl(ofDate vector, mjdUT float64) (azDeg, elDeg float64) {
	ra, dec := ofDate.lonLatDeg()
	h := (siderealDeg(mjdUT) - ra) * degrees
	sl, cl := math.Sincos(siteLatitudeDeg * degrees)
	sd, cd := math.Sincos(dec * degrees)
	elDeg = math.Asin(sl*sd+cl*cd*math.Cos(h)) / degrees
	azDeg = math.Atan2(-cd*math.Sin(h), sd*cl-cd*math.Cos(h)*sl) / degrees
	return math.Mod(azDeg+360, 360), elDeg
}

// lowestDeg returns the lowest usable elevation at an azimuth: the limit of the mount or the skyline.
func lowestDeg(azDeg float64) float64 {
	last := siteHorizonDeg[len(siteHorizonDeg)-1]
	before := [2]float64{last[0] - 360, last[1]}
	for _, after := range append(siteHorizonDeg, [2]float64{siteHorizonDeg[0][0] + 360, siteHorizonDeg[0][1]}) {
		if azDeg <= after[0] {
			share := (azDeg - before[0]) / (after[0] - before[0])
			return math.Max(siteElevationDeg[0], before[1]+share*(after[1]-before[1]))
		}
		before = after
	}
	return siteElevationDeg[0]
}

// limitMarginDeg keeps the logged observations clear of the limits, so that neither refraction nor
// nutation nor a finer formula can put one of them outside.
const limitMarginDeg = 0.7

// visible tells whether a direction of date may be observed at an instant.
func visible(ofDate vector, mjdUT, sunLimitDeg float64) bool {
	az, el := azEl(ofDate, mjdUT)
	if el < lowestDeg(az)+limitMarginDeg || el > siteElevationDeg[1]-limitMarginDeg {
		return false
	}
	sun, _ := sunAt(mjdUT)
	return separationDeg(sun, ofDate) >= sunLimitDeg+limitMarginDeg
}

// barycentreMJD returns the TDB at which light received at the instant passes the barycentre.
//
//	t_B = t_obs + r·n/c
//
// Neglects: the Sun's own way about the barycentre (up to 5 s), the site's radius (21 ms)
func barycentreMJD(source vector, mjdUTC float64) float64 {
	sun, au := sunAt(mjdUTC)
	return mjdUTC + (tdbUtcSec-au*lightAuSec*sun.dot(precess(source, mjdUTC)))/secondsDay
}

// observedMJD is the inverse of barycentreMJD.
func observedMJD(source vector, barycentre float64) float64 {
	t := barycentre
	for range 5 {
		t += barycentre - barycentreMJD(source, t)
	}
	return t
}

// galacticDeg returns galactic longitude and latitude of a J2000 direction.
//
// Source: the IAU 1958 system with its J2000 pole (192.85948°, 27.12825°) and node 122.93192°
func galacticDeg(v vector) (l, b float64) {
	ra, dec := v.lonLatDeg()
	sp, cp := math.Sincos(27.12825 * degrees)
	sd, cd := math.Sincos(dec * degrees)
	sa, ca := math.Sincos((ra - 192.85948) * degrees)
	b = math.Asin(sp*sd+cp*cd*ca) / degrees
	l = 122.93192 - math.Atan2(cd*sa, cp*sd-sp*cd*ca)/degrees
	return math.Mod(l+360, 360), b
}
