package sky

import (
	"fmt"
	"math"
	"time"
)

// A SunGap is a stretch of time in which a target is nearer to the Sun than a limit.
type SunGap struct {
	From, To   time.Time // an end of the interval asked for where the gap goes on beyond it
	ClosestAt  time.Time
	ClosestDeg float64 // elongation then
}

// SunGaps returns when a target is nearer to the Sun's centre than a limit, seen from the Earth's centre, between two
// instants years apart if need be. The limit is above 0 and below 180°.
//
// Neglects: aberration, which moves both nearly alike: 20 arcsec, or 8 minutes of time
// Checked:  TestSunGaps (BAR-030 to BAR-034)
func SunGaps(t Target, limitDeg float64, from, to time.Time) ([]SunGap, error) {
	if !(limitDeg > 0 && limitDeg < 180) {
		return nil, fmt.Errorf("Sun limit %g°: accepted are above 0 to below 180", limitDeg)
	}
	for _, at := range [...]time.Time{from, to} {
		if err := checkDate(at); err != nil {
			return nil, err
		}
	}
	span := to.Sub(from).Hours() / 24
	if span <= 0 {
		return nil, nil
	}
	start := jdTT(from)
	cosLimit := math.Cos(limitDeg * radPerDeg)
	toward := func(x float64) float64 { // cosine of the elongation
		jd := start + x
		earth, _ := earthFromSun(jd)
		sun := earth.unit().times(-1)
		return sun.dot(t.direction(jd - mjdOffset - j2000MJD))
	}
	near := func(x float64) (v, d float64) {
		const e = 0.01
		v = toward(x) - cosLimit
		return v, (toward(x+e) - toward(x-e)) / (2 * e)
	}
	var f flips
	v, _ := near(0)
	f.begin(v >= 0)
	n := int(math.Ceil(span / 5))
	for i := range n {
		f.along(near, span*float64(i)/float64(n), span*float64(i+1)/float64(n))
	}
	instant := func(x float64) time.Time { return from.Add(time.Duration(x * secondsPerDay * 1e9)).Round(time.Second) }
	var gaps []SunGap
	inside, since := f.starts, 0.0
	for _, x := range append(f.at, span) {
		if inside {
			at := closest(near, since, x)
			v, _ := near(at)
			gap := SunGap{from, to, instant(at), math.Acos(min(v+cosLimit, 1)) * degPerRad}
			if since > 0 {
				gap.From = instant(since)
			}
			if x < span {
				gap.To = instant(x)
			}
			gaps = append(gaps, gap)
		}
		inside, since = !inside, x
	}
	return gaps, nil
}

// ClosestSunDeg returns a place's least angle from the Sun's centre between two instants within the frame's reach,
// in degrees, and when that is: within the interval, not only at its ends.
func (f *Frame) ClosestSunDeg(p Place, from, to time.Time) (deg float64, at time.Time) {
	toward := func(x float64) (v, d float64) {
		s, q := f.sun.vector(x), p.vector(x)
		return s.dot(q), f.sun.slope(x).dot(q) + s.dot(p.slope(x))
	}
	x := closest(toward, f.days(from), f.days(to))
	return between(f.sun.vector(x), p.vector(x)) * degPerRad, f.instant(x)
}

// closest returns where g is greatest between a and b.
func closest(g func(x float64) (v, d float64), a, b float64) float64 {
	va, da := g(a)
	vb, db := g(b)
	switch {
	case da > 0 && db < 0:
		return turning(g, a, b, false)
	case vb > va:
		return b
	}
	return a
}
