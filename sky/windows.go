package sky

import (
	"math"
	"time"
)

// Windows returns when a place of the frame f can be observed from this site between two instants, in time
// order: every stretch in which all limits are kept, with what opens and closes it. Limits must have passed
// Check. An end is exact to 0.05 s plus what 0.05 arcsec of elevation takes there.
//
// The interval should lie within FrameReach of the frame's instant; for longer ones see Season.
//
// Neglects: refraction unless the limits carry one; the Sun's parallax (8.8 arcsec) in its distance
// Checked:  TestPasses, TestWindowsAgainstScan
func (s *Site) Windows(f *Frame, p Place, from, to time.Time, lim Limits) []Window {
	var c scan
	return c.windows(nil, s, f, &p, from, to, &lim)
}

// Season returns the windows of a target over any length of time, with frames that NewFrames has made for at
// least that interval. A window across the edge of two frames is one window.
func (s *Site) Season(frames []*Frame, t Target, from, to time.Time, lim Limits) []Window {
	var (
		c    scan
		all  []Window
		some []Window
		v    [3]vec
	)
	course := t.course()
	for i, f := range frames {
		a, b := from, to
		if start := f.at.Add(-12 * time.Hour); i > 0 && start.After(a) {
			a = start
		}
		if end := f.at.Add(12 * time.Hour); i+1 < len(frames) && end.Before(b) {
			b = end
		}
		if !a.Before(b) {
			continue
		}
		// A day's frame begins with two of the three instants of the day before.
		if i > 0 && v != [3]vec{} && f.nodes[0].days == frames[i-1].nodes[1].days {
			v = [3]vec{v[1], v[2], f.nodes[2].place(&course)}
		} else {
			v = [3]vec{f.nodes[0].place(&course), f.nodes[1].place(&course), f.nodes[2].place(&course)}
		}
		p := placeThrough(v)
		some = c.windows(some[:0], s, f, &p, a, b, &lim)
		if n := len(all); n > 0 && len(some) > 0 && all[n-1].ClosesBy.Kind == Interval && some[0].OpensBy.Kind == Interval && all[n-1].To.Equal(some[0].From) {
			all[n-1].To, all[n-1].ClosesBy = some[0].To, some[0].ClosesBy
			some = some[1:]
		}
		all = append(all, some...)
	}
	return all
}

// windows appends to dst.
func (c *scan) windows(dst []Window, s *Site, f *Frame, p *Place, from, to time.Time, lim *Limits) []Window {
	x0, x1 := f.days(from), f.days(to)
	if !(x0 < x1) {
		return dst
	}
	c.begin(s, f, p, x0, x1)
	c.have = append(c.have[:0], span{x0, x1, Interval, Interval})
	c.elevation(math.Sin(lim.trueElevation(lim.LowDeg)))
	c.keep(true, LowElevation)
	if len(c.have) > 0 && lim.HighDeg != 0 && lim.HighDeg < 90 {
		c.elevation(math.Sin(lim.trueElevation(lim.HighDeg)))
		c.keep(false, HighElevation)
	}
	if len(c.have) > 0 && lim.HourAngleDeg != [2]float64{} {
		c.hourAngles(lim.HourAngleDeg)
	}
	if len(c.have) > 0 && lim.AzimuthDegPerMin > 0 {
		c.azimuthRate(lim.AzimuthDegPerMin)
	}
	if len(c.have) > 0 && len(lim.Mask) > 0 {
		c.mask(lim)
	}
	if len(c.have) > 0 && lim.SunDeg > 0 {
		c.sunDistance(lim.SunDeg)
	}
	for _, w := range c.have {
		dst = append(dst, Window{
			From: c.instant(w.a, from, to), To: c.instant(w.b, from, to),
			OpensBy: c.cause(w.opens, w.a, 0, lim), ClosesBy: c.cause(w.end, w.b, 1, lim),
		})
	}
	return dst
}

// instant is the frame's, but the ends of the interval come back exactly as they were asked for.
func (c *scan) instant(x float64, from, to time.Time) time.Time {
	switch x {
	case c.x0:
		return from
	case c.x1:
		return to
	}
	return c.frame.instant(x)
}

// cause adds the limit's value where a window ends; side 0 is its beginning, 1 its end.
func (c *scan) cause(kind CauseKind, x float64, side int, lim *Limits) Cause {
	switch kind {
	case LowElevation:
		return Cause{kind, lim.LowDeg}
	case HighElevation:
		return Cause{kind, lim.HighDeg}
	case HorizonMask:
		az, _ := c.site.horizon(c.frame, &c.place, x).azEl()
		return Cause{kind, lim.Mask.At(az * degPerRad)}
	case SunDistance:
		return Cause{kind, lim.SunDeg}
	case HourAngle:
		return Cause{kind, lim.HourAngleDeg[side]}
	case AzimuthRate:
		return Cause{kind, lim.AzimuthDegPerMin}
	}
	return Cause{Kind: kind}
}

// trueElevation returns the elevation without air, in radians, that a limit in degrees stands for.
func (l *Limits) trueElevation(elDeg float64) float64 {
	if l.Refraction == nil {
		return elDeg * radPerDeg
	}
	return l.Refraction.trueElevation(elDeg * radPerDeg)
}

// hourAngles keeps what lies between two hour angles.
func (c *scan) hourAngles(limits [2]float64) {
	east, west := limits[0]*radPerDeg, limits[1]*radPerDeg
	if west-east >= turn {
		return
	}
	c.limit = c.limit[:0]
	const day = turn / earthRotationPerDay
	h0 := c.knots[0].hourAngle
	first := c.x0 + (mod(east-h0, turn)-turn)/earthRotationPerDay
	for k := 0; ; k++ {
		a := c.meets(first+float64(k)*day, east)
		if a >= c.x1 {
			break
		}
		b := c.meets(first+float64(k)*day+(west-east)/earthRotationPerDay, west)
		c.limit = append(c.limit, span{a, b, HourAngle, HourAngle})
	}
	c.intersect()
}

// meets returns when the hour angle is h, near x.
func (c *scan) meets(x, h float64) float64 {
	for range 3 {
		now, _ := c.hourAngle(x)
		step := halfTurn(now-h) / earthRotationPerDay
		step = min(max(step, -0.02), 0.02) // close to the pole hour angle means little
		x -= step
		if math.Abs(step) < 1e-9 {
			break
		}
	}
	return x
}

// sunDistance keeps what is far enough from the Sun.
func (c *scan) sunDistance(limitDeg float64) {
	cosLimit := math.Cos(limitDeg * radPerDeg)
	g := func(x float64) (v, d float64) {
		s, p := c.frame.sun.vector(x), c.place.vector(x)
		return cosLimit*math.Sqrt(s.dot(s)*p.dot(p)) - s.dot(p), -c.frame.sun.slope(x).dot(p)
	}
	// The Sun moves 1.02° a day at most: where it is far from the limit there is nothing to find.
	middle := (c.x0 + c.x1) / 2
	v, _ := g(middle)
	off := math.Abs(between(c.frame.sun.vector(middle), c.place.vector(middle))*degPerRad - limitDeg)
	if off > 1.03*(c.x1-c.x0)/2 {
		if v < 0 {
			c.have = c.have[:0]
		}
		return
	}
	c.search(g, c.x0, c.x1, 0.25)
	c.keep(true, SunDistance)
}

// slope returns the change of a place a day.
func (p *Place) slope(x float64) vec { return p.rate.plus(2*x, p.bend) }

// search finds where g ≥ 0 between a and b in steps of at most the given length.
func (c *scan) search(g func(x float64) (v, d float64), a, b, step float64) {
	v, _ := g(a)
	c.flips.begin(v >= 0)
	c.walk(g, a, b, step)
}

// walk goes on with the flips of g ≥ 0 from a to b.
func (c *scan) walk(g func(x float64) (v, d float64), a, b, step float64) {
	n := max(1, int(math.Ceil((b-a)/step)))
	for i := range n {
		c.flips.along(g, a+(b-a)*float64(i)/float64(n), a+(b-a)*float64(i+1)/float64(n))
	}
}

// azimuthRate keeps what is slow enough in azimuth to be followed.
//
//	d az/dt = ω (sin φ − cos φ N U / (E² + N²))
//
// Source:   the sky's turning about the pole, in east, north and up
// Checked:  TestAzimuthRate, TestWindowsAgainstScan
func (c *scan) azimuthRate(degPerMin float64) {
	s := c.site
	fastest := degPerMin * radPerDeg * 1440 / earthRotationPerDay // in turns of the sky
	margin := func(x float64) float64 {
		h := s.horizon(c.frame, &c.place, x)
		q := h.e*h.e + h.n*h.n
		// The sign is that of fastest − |rate|, without dividing by zero at the zenith.
		return fastest*q - math.Abs(s.sinLat*q-s.cosLat*h.n*h.u)
	}
	g := func(x float64) (v, d float64) {
		const e = 1e-7
		v = margin(x)
		return v, (margin(x+e) - margin(x-e)) / (2 * e)
	}
	// The rate is at most |sin φ| + cos φ tan el: lower than this there is nothing to look for, and what is
	// below the horizontal plane, where the rate grows again, is not followed anyway.
	steep := math.Atan2(fastest-math.Abs(s.sinLat), s.cosLat)
	sinSteep := math.Sin(steep)
	v, _ := g(c.x0)
	c.flips.begin(v >= 0)
	for i := 0; i+1 < len(c.knots); i++ {
		a, b := c.knots[i], c.knots[i+1]
		if steep > 0 && max(a.sinEl, b.sinEl) <= sinSteep {
			c.flips.set(a.x, true)
			continue
		}
		xa, xb := a.x, b.x
		if steep > 0 && a.sinEl < sinSteep {
			xa = c.cross(i, sinSteep)
			c.flips.set(a.x, true)
		}
		if steep > 0 && b.sinEl < sinSteep {
			xb = c.cross(i, sinSteep)
		}
		c.walk(g, xa, xb, 0.01)
		if xb < b.x {
			c.flips.set(xb, true)
		}
	}
	c.keep(true, AzimuthRate)
}
