package sky

import "math"

// maskStep is the longest piece, in days, in which elevation less mask is taken to turn at most once. Pieces
// end at the mask's points and where the azimuth turns back, so in between both are smooth; four minutes is a degree.
const maskStep = 4.0 / 1440

// mask keeps what stands at or above the horizon mask.
func (c *scan) mask(lim *Limits) {
	least, greatest := lim.Mask.span()
	if greatest <= lim.LowDeg {
		return
	}
	sinLeast := math.Sin(lim.trueElevation(least))
	if least == greatest {
		c.elevation(sinLeast)
		c.keep(true, HorizonMask)
		return
	}
	sinGreatest := math.Sin(lim.trueElevation(greatest))
	az, el := c.lifted(c.x0, lim)
	c.flips.begin(el >= lim.Mask.At(az))
	for i := 0; i+1 < len(c.knots); i++ {
		a, b := c.knots[i], c.knots[i+1]
		if max(a.sinEl, b.sinEl) < sinLeast {
			c.flips.set(a.x, false)
			continue
		}
		if min(a.sinEl, b.sinEl) >= sinGreatest {
			c.flips.set(a.x, true)
			continue
		}
		// Only between the mask's least and greatest height is there something to look for.
		xa, xb := a.x, b.x
		if low := min(a.sinEl, b.sinEl) < sinLeast; low && a.sinEl < b.sinEl {
			xa = c.cross(i, sinLeast)
			c.flips.set(a.x, false)
		} else if low {
			xb = c.cross(i, sinLeast)
		}
		if high := max(a.sinEl, b.sinEl) > sinGreatest; high && a.sinEl < b.sinEl {
			xb = c.cross(i, sinGreatest)
		} else if high {
			xa = c.cross(i, sinGreatest)
			c.flips.set(a.x, true)
		}
		if t := c.azimuthTurns(i); t > xa && t < xb {
			c.maskArc(lim, xa, t)
			c.maskArc(lim, t, xb)
		} else {
			c.maskArc(lim, xa, xb)
		}
		switch {
		case xb < b.x && b.sinEl > a.sinEl:
			c.flips.set(xb, true)
		case xb < b.x:
			c.flips.set(xb, false)
		}
	}
	c.keep(true, HorizonMask)
}

// lifted returns azimuth and elevation in degrees, the elevation lifted by refraction if the limits carry one.
func (c *scan) lifted(x float64, lim *Limits) (azDeg, elDeg float64) {
	az, el := c.site.horizon(c.frame, &c.place, x).azEl()
	if lim.Refraction != nil {
		el += lim.Refraction.lift(math.Sin(el))
	}
	return positive(az) * degPerRad, el * degPerRad
}

// azimuthTurns returns about when, in the arc that begins at knot i, the azimuth turns back; NaN if it does not.
//
//	cos H = tan φ / tan δ
//
// Source:   greatest elongation, where the parallactic angle is a right angle
func (c *scan) azimuthTurns(i int) float64 {
	v := c.place.vector(c.knots[i].x)
	cosH := c.site.sinLat * math.Sqrt(v[0]*v[0]+v[1]*v[1]) / (c.site.cosLat * v[2])
	if !(math.Abs(cosH) < 1) {
		return math.NaN()
	}
	return c.atHourAngle(i, math.Acos(cosH))
}

// maskArc goes on with the flips from a to b, where azimuth and elevation are monotone.
func (c *scan) maskArc(lim *Limits, a, b float64) {
	n := max(1, int(math.Ceil((b-a)/maskStep)))
	az, _ := c.lifted(a, lim)
	for k := range n {
		xa, xb := a+(b-a)*float64(k)/float64(n), a+(b-a)*float64(k+1)/float64(n)
		azb, _ := c.lifted(xb, lim)
		c.maskCell(lim, xa, xb, az, azb)
		az = azb
	}
}

// maskCell cuts a piece at the points of the mask that the track passes.
func (c *scan) maskCell(lim *Limits, a, b, azA, azB float64) {
	way := half(azB-azA, 360)
	i, step := lim.Mask.segment(azA), -1
	if way > 0 {
		i, step = i+1, 1
	}
	n := len(lim.Mask)
	from := azA
	for range n {
		i = (i + n) % n
		at := lim.Mask[i].AzimuthDeg
		gone := mod(float64(step)*(at-azA), 360)
		if gone >= math.Abs(way) {
			break
		}
		if gone > 0 {
			x := c.atAzimuth(at*radPerDeg, a, b)
			c.maskPiece(lim, a, x, from, at)
			a, from = x, at
		}
		i += step
	}
	c.maskPiece(lim, a, b, from, azB)
}

// atAzimuth returns when the azimuth is az (radians) between a and b, on opposite sides of it.
func (c *scan) atAzimuth(az, a, b float64) float64 {
	sin, cos := math.Sincos(az)
	s := c.site
	// Which side of the vertical plane through az, and how fast it moves across.
	g := func(x float64) (v, d float64) {
		m, w, z := s.meridian(c.frame, &c.place, x)
		n := z*s.cosLat - m*s.sinLat
		return (s.spin-w)*cos - n*sin, (-m*cos - w*s.sinLat*sin) * earthRotationPerDay
	}
	va, _ := g(a)
	vb, _ := g(b)
	if (va >= 0) == (vb >= 0) { // one end lies on the plane, but for rounding
		if math.Abs(va) < math.Abs(vb) {
			return a
		}
		return b
	}
	return solve(g, a, b, vb >= 0)
}

// maskPiece goes on with the flips of one piece under one straight line of the mask.
func (c *scan) maskPiece(lim *Limits, a, b, azA, azB float64) {
	if !(a < b) {
		return
	}
	middle := mod(azA+half(azB-azA, 360)/2, 360)
	line := lim.Mask.line(lim.Mask.segment(middle))
	s := c.site
	g := func(x float64) (v, d float64) {
		h := s.horizon(c.frame, &c.place, x)
		q := h.e*h.e + h.n*h.n
		r := math.Sqrt(q)
		az, el := math.Atan2(h.e, h.n), math.Atan2(h.u, r)
		elRate := s.cosLat * h.e / r // of the sky's turn
		if lim.Refraction != nil {
			sinEl := max(h.u, lowest)
			elRate *= 1 - lim.Refraction.a/(sinEl*sinEl)
			el += lim.Refraction.lift(h.u)
		}
		azRate := s.sinLat - s.cosLat*h.n*h.u/q
		az = middle + half(az*degPerRad-middle, 360)
		return el*degPerRad - line.at(az), (elRate - line.slope*azRate) * earthRotationPerDay * degPerRad
	}
	c.flips.along(g, a, b)
}
