package sky

import "github.com/soniakeys/meeus/v3/nutation"

// This file is the only one that knows the library, and it takes from it only a series that was
// measured to be right: nutation. What is left out, and why:
//
//   - precession and obliquity are those of 1976 and 1980, a third of an arcsecond out in a century
//   - longitude is positive west and azimuth from the south there; here nothing of it is passed on
//   - time arguments are Julian years, days of TT, days of UT or centuries; here always a Julian day of TT
//   - proper motion in right ascension is an hour angle without cos dec; here it is a vector
//   - package apparent multiplies by tan dec and breaks near the poles; here places are vectors
//   - coord.EqToHz divides nothing by nothing at the zenith; angle.Sep fails across 0h
//   - sidereal.Apparent0UT is right only at 0h; deltat is out by seconds today
//   - rise puts a transit on the wrong day and has one error for "always up" and "never up"
//   - refraction is optical
//   - the full solar theory wants data files at run time; sky/generate makes tables of it

// nutationOf returns the nutation in longitude and in obliquity, in radians.
//
// Given:    jd, Julian day of TT
// Neglects: terms under 0.0003 arcsec of the 1980 theory, and what the theory of 2000 added to it (0.01 arcsec)
// Source:   IAU 1980 theory, by way of Meeus, chapter 22
// Checked:  TestBookNutation
func nutationOf(jd float64) (psi, eps float64) {
	p, e := nutation.Nutation(jd)
	return p.Rad(), e.Rad()
}
