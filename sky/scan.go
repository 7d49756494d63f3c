package sky

import "math"

// A scan is one place seen from one site over one interval: times in days from the frame's instant. Elevation
// rises and falls in arcs between the place's culminations; in each arc it is monotone, so a limit is crossed
// at most once there, and whether it is crossed is told by the two ends.
type scan struct {
	site   *Site
	frame  *Frame
	place  Place
	x0, x1 float64

	knots []knot // x0, the culminations between, x1
	flips flips
	have  []span // what is left
	next  []span // scratch
	limit []span // scratch
}

// knot is an end of an arc.
type knot struct {
	x         float64
	sinEl     float64
	hourAngle float64 // at the start of the arc that begins here: −π to 0 on a rising arc, 0 to π on a falling one
	kind      culmination
}

type culmination int

const (
	none culmination = iota
	upper
	lower
)

// begin lays out the arcs of a new place or interval; the scan's memory is used again.
func (c *scan) begin(s *Site, f *Frame, p *Place, x0, x1 float64) {
	c.site, c.frame, c.place, c.x0, c.x1 = s, f, *p, x0, x1
	c.knots = c.knots[:0]
	h0, sin0 := c.hourAngle(x0)
	c.knots = append(c.knots, knot{x0, sin0, h0, none})
	// The culminations are half a turn apart, but for what the place itself moves.
	isUpper := h0 < 0
	first := x0 - h0/earthRotationPerDay
	if !isUpper {
		first += math.Pi / earthRotationPerDay
	}
	const halfDay = math.Pi / earthRotationPerDay
	for k := 0; ; k++ {
		x := first + float64(k)*halfDay
		var sinEl float64
		for range 3 {
			var h float64
			h, sinEl = c.hourAngle(x)
			if !isUpper {
				h = halfTurn(h + math.Pi)
			}
			// Within an arcsecond of the celestial pole hour angle means little: never step far.
			step := min(max(h/earthRotationPerDay, -halfDay/8), halfDay/8)
			x -= step
			if math.Abs(step) < 1e-6 { // a tenth of a second: the elevation there is good to 1e−11
				break
			}
		}
		if x >= x1 {
			break
		}
		if x > c.knots[len(c.knots)-1].x {
			if isUpper {
				c.knots = append(c.knots, knot{x, sinEl, 0, upper})
			} else {
				c.knots = append(c.knots, knot{x, sinEl, -math.Pi, lower})
			}
		}
		isUpper = !isUpper
	}
	_, sin1 := c.hourAngle(x1)
	c.knots = append(c.knots, knot{x1, sin1, 0, none})
}

// hourAngle returns the hour angle in [−π, π] and the sine of the elevation.
func (c *scan) hourAngle(x float64) (h, sinEl float64) {
	m, w, z := c.site.meridian(c.frame, &c.place, x)
	w -= c.site.spin
	s := c.site
	u := z*s.sinLat + m*s.cosLat - c.place.parallax
	return math.Atan2(w, m), u / math.Sqrt(m*m+w*w+z*z)
}

// sinElevation returns the sine of the elevation and its slope a day.
func (c *scan) sinElevation(x float64) (v, d float64) {
	s := c.site
	m, w, z := s.meridian(c.frame, &c.place, x)
	w -= s.spin
	u := z*s.sinLat + m*s.cosLat - c.place.parallax
	return u / math.Sqrt(m*m+w*w+z*z), -s.cosLat * w * earthRotationPerDay
}

// atHourAngle returns about when, in the arc that begins at knot i, the place stands at an hour angle of a size
// between 0 and π.
func (c *scan) atHourAngle(i int, size float64) float64 {
	k := &c.knots[i]
	if k.hourAngle < 0 { // rising: the hour angle is negative
		size = -size
	}
	return k.x + (size-k.hourAngle)/earthRotationPerDay
}

// cross returns when the sine of the elevation passes a value in the arc that begins at knot i; the value lies
// between those at the arc's ends. The closed form gives the start, Newton's method the rest, held in the arc.
//
//	cos H = (sin el − sin φ sin δ) / (cos φ cos δ)
//
// Source:   Meeus, Astronomical Algorithms, eq. 15.1
// Checked:  TestPasses, TestWindowsAgainstScan
func (c *scan) cross(i int, sinEl float64) float64 {
	a, b := c.knots[i], c.knots[i+1]
	lo, hi := a.x, b.x
	rising := b.sinEl > a.sinEl
	v := c.place.vector((lo + hi) / 2)
	cosH := (sinEl + c.place.parallax - v[2]*c.site.sinLat) / (c.site.cosLat * math.Sqrt(v[0]*v[0]+v[1]*v[1]))
	x := c.atHourAngle(i, math.Acos(min(max(cosH, -1), 1)))
	for range 80 {
		if !(x > lo && x < hi) {
			x = (lo + hi) / 2
		}
		s, d := c.sinElevation(x)
		s -= sinEl
		if (s >= 0) == rising {
			hi = x
		} else {
			lo = x
		}
		step := s / d
		x -= step
		// Newton's error is the step squared times curvature over slope.
		if step = math.Abs(step); step < fine || step < 1e-7 && math.Abs(d) > 0.1 || hi-lo < fine {
			break
		}
	}
	return min(max(x, a.x), b.x)
}

// elevation finds when the place stands at or above an elevation, given by its sine.
func (c *scan) elevation(sinEl float64) {
	c.flips.begin(c.knots[0].sinEl >= sinEl)
	for i := 0; i+1 < len(c.knots); i++ {
		if above := c.knots[i+1].sinEl >= sinEl; above != c.flips.now {
			c.flips.set(c.cross(i, sinEl), above)
		}
	}
}

// span is a stretch of time and what ends it.
type span struct {
	a, b       float64
	opens, end CauseKind
}

// keep leaves of the windows only what lies where the condition just found holds (or does not).
func (c *scan) keep(holds bool, kind CauseKind) {
	c.limit = c.limit[:0]
	open, since := c.flips.starts == holds, c.x0
	for _, x := range c.flips.at {
		if open {
			c.limit = append(c.limit, span{since, x, kind, kind})
		}
		open, since = !open, x
	}
	if open {
		c.limit = append(c.limit, span{since, c.x1, kind, kind})
	}
	c.intersect()
}

// intersect leaves what is both in have and in limit. Where both end at once the older cause stays.
func (c *scan) intersect() {
	c.next = c.next[:0]
	i, j := 0, 0
	for i < len(c.have) && j < len(c.limit) {
		s, l := c.have[i], c.limit[j]
		if l.b < s.b {
			j++
		} else {
			i++
		}
		if l.a > s.a {
			s.a, s.opens = l.a, l.opens
		}
		if l.b < s.b {
			s.b, s.end = l.b, l.end
		}
		if s.a < s.b {
			c.next = append(c.next, s)
		}
	}
	c.have, c.next = c.next, c.have
}
