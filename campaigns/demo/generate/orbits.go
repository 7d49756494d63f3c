package main

import "math"

// sunSec is G M_sun/c³.
const sunSec = 4.925490947e-6

// semimajorLs returns the projected semimajor axis of the pulsar's orbit in light-seconds.
//
//	4π² x³/(T PB²) = (m2 s)³/(m1+m2)²
//
// Given: period in days, masses in Msun, s = sin i
func semimajorLs(periodDays, m1, m2, sinI float64) float64 {
	pb := periodDays * secondsDay
	f := math.Pow(m2*sinI, 3) / ((m1 + m2) * (m1 + m2))
	return math.Cbrt(f * sunSec * pb * pb / (4 * math.Pi * math.Pi))
}

// advanceDegPerYr returns the advance of periastron in general relativity.
//
//	OMDOT = 3 n^(5/3) (T M)^(2/3)/(1-e²), n = 2π/PB
func advanceDegPerYr(periodDays, e, m1, m2 float64) float64 {
	n := 2 * math.Pi / (periodDays * secondsDay)
	radPerSec := 3 * math.Pow(n, 5.0/3) * math.Pow(sunSec*(m1+m2), 2.0/3) / (1 - e*e)
	return radPerSec / degrees * daysYear * secondsDay
}

// decay returns dPb/dt (s/s) from gravitational waves.
//
//	PBDOT = -(192π/5)(n T)^(5/3) f(e) m1 m2 M^(-1/3),  f = (1+73e²/24+37e⁴/96)/(1-e²)^(7/2)
//
// Source: Peters 1964
func decay(periodDays, e, m1, m2 float64) float64 {
	n := 2 * math.Pi / (periodDays * secondsDay)
	f := (1 + 73*e*e/24 + 37*math.Pow(e, 4)/96) / math.Pow(1-e*e, 3.5)
	return -192 * math.Pi / 5 * math.Pow(n*sunSec, 5.0/3) * f * m1 * m2 / math.Cbrt(m1+m2)
}

// An orbit is what the file will say about a binary.
type orbit struct {
	periodDays      float64
	nodeMJD         float64 // ascending node, TDB; or
	periastronMJD   float64
	semimajorLs     float64
	eccentricity    float64
	periastronDeg   float64
	advanceDegPerYr float64
	decay           float64
	companionMsun   float64 // 0: not known
	sinI            float64 // 0: not known
	sigmaPeriodDays float64
	sigmaEpochDays  float64
	eclipse         *eclipse
}

type eclipse struct{ halfWidthTurns, centreTurns, marginTurns float64 }

// phase returns the orbital longitude from the ascending node in turns, counted on from the epoch, at a
// TDB of the barycentre. The delay across the orbit itself (some seconds) is neglected.
func (o *orbit) phase(mjd float64) float64 {
	if o.periastronMJD == 0 {
		return (mjd - o.nodeMJD) / o.periodDays
	}
	orbits := (mjd - o.periastronMJD) / o.periodDays
	orbits -= o.decay * orbits * orbits / 2
	whole := math.Round(orbits)
	m := 2 * math.Pi * (orbits - whole)
	e := o.eccentricity
	low, high := -math.Pi, math.Pi // bisection cannot fail, and speed does not matter here
	for range 60 {
		mid := (low + high) / 2
		if mid-e*math.Sin(mid) < m {
			low = mid
		} else {
			high = mid
		}
	}
	sn, cs := math.Sincos(low / 2)
	anomaly := 2*math.Atan2(math.Sqrt(1+e)*sn, math.Sqrt(1-e)*cs)/(2*math.Pi) + whole
	k := o.advanceDegPerYr * o.periodDays / (360 * daysYear)
	return o.periastronDeg/360 + (1+k)*anomaly
}

// superiorConjunctions returns when, on the observatory's clock (MJD, UTC), the pulsar stands behind its
// companion between two instants.
func (s source) superiorConjunctions(fromMJD, toMJD float64) []float64 {
	o := s.orbit
	from, to := barycentreMJD(s.position, fromMJD), barycentreMJD(s.position, toMJD)
	var out []float64
	for target := math.Ceil(o.phase(from)-0.25) + 0.25; target < o.phase(to); target++ {
		low, high := from, to
		for range 60 {
			mid := (low + high) / 2
			if o.phase(mid) < target {
				low = mid
			} else {
				high = mid
			}
		}
		out = append(out, observedMJD(s.position, low+o.semimajorLs/secondsDay))
	}
	return out
}

// eclipsed tells whether an eclipse or its margin touches the interval (MJD, UTC).
func (s source) eclipsed(fromMJD, toMJD float64) bool {
	if s.orbit == nil || s.orbit.eclipse == nil {
		return false
	}
	ecl := s.orbit.eclipse
	half := ecl.halfWidthTurns + ecl.marginTurns
	for t := fromMJD; t <= toMJD; t += 0.5 / 1440 {
		away := s.orbit.phase(barycentreMJD(s.position, t)) - ecl.centreTurns
		if math.Abs(away-math.Round(away)) < half+0.005 {
			return true
		}
	}
	return false
}
