package sky

import (
	"math"
	"time"
)

// turnsOf returns the first and the last turn in which azimuths from lo to hi touch the travel.
func (m Mount) turnsOf(lo, hi float64) (first, last int) {
	return int(math.Ceil((m.TravelDeg[0] - hi) / 360)), int(math.Floor((m.TravelDeg[1] - lo) / 360))
}

// A Turn is one way of counting azimuth while following a place: at the start of the interval the mount's azimuth
// would lie in [360·Turn, 360·Turn + 360), and goes on continuously from there. Open is when it is within the travel.
type Turn struct {
	Turn int
	Open []Window // never empty; ended by AzimuthStop or Interval
}

// Turns returns the turns in which a mount can follow a place of the frame f between two instants, and when the
// track would meet a stop, exact as Windows are. Other limits do not count. Mounts without azimuth
// travel have one turn, 0, that is open throughout.
func (s *Site) Turns(m Mount, f *Frame, p Place, from, to time.Time) []Turn {
	x0, x1 := f.days(from), f.days(to)
	if !(x0 < x1) {
		return nil
	}
	if m.Kind != AltAz {
		return []Turn{{0, []Window{{From: from, To: to}}}}
	}
	var c scan
	c.begin(s, f, &p, x0, x1)
	track := c.azimuths()
	lo, hi := track[0].az, track[0].az
	for _, t := range track {
		lo, hi = min(lo, t.az), max(hi, t.az)
	}
	var all []Turn
	first, last := m.turnsOf(lo, hi)
	for k := first; k <= last; k++ {
		turned := 360 * float64(k)
		c.have = append(c.have[:0], span{x0, x1, Interval, Interval})
		c.azimuthPasses(track, m.TravelDeg[0]-turned)
		c.keep(true, AzimuthStop)
		c.azimuthPasses(track, m.TravelDeg[1]-turned)
		c.keep(false, AzimuthStop)
		t := Turn{Turn: k}
		for _, w := range c.have {
			t.Open = append(t.Open, Window{
				From: c.instant(w.a, from, to), To: c.instant(w.b, from, to),
				OpensBy: c.stop(m, w.opens, w.a, track, turned), ClosesBy: c.stop(m, w.end, w.b, track, turned),
			})
		}
		if len(t.Open) > 0 {
			all = append(all, t)
		}
	}
	return all
}

// stop names the end of travel that a mount is at.
func (c *scan) stop(m Mount, kind CauseKind, x float64, track []azimuthAt, turned float64) Cause {
	if kind != AzimuthStop {
		return Cause{Kind: kind}
	}
	i := 0
	for i+1 < len(track) && track[i+1].x <= x {
		i++
	}
	h, _ := c.site.horizon(c.frame, &c.place, x).azEl()
	az := track[i].az + half(h*degPerRad-track[i].az, 360) + turned
	if math.Abs(az-m.TravelDeg[0]) < math.Abs(az-m.TravelDeg[1]) {
		return Cause{kind, m.TravelDeg[0]}
	}
	return Cause{kind, m.TravelDeg[1]}
}

// azimuthAt is a sample of a continuous azimuth, degrees.
type azimuthAt struct{ x, az float64 }

// azimuths returns a continuous azimuth, from 0 to 360 at the start, at instants between which it is monotone and
// turns by less than half a turn: the culminations and where it turns back.
func (c *scan) azimuths() []azimuthAt {
	var all []azimuthAt
	add := func(x float64) {
		h, _ := c.site.horizon(c.frame, &c.place, x).azEl()
		az := positive(h) * degPerRad
		if n := len(all); n > 0 {
			az = all[n-1].az + half(az-all[n-1].az, 360)
		}
		all = append(all, azimuthAt{x, az})
	}
	for i, k := range c.knots {
		add(k.x)
		if i+1 == len(c.knots) {
			break
		}
		// The halfway point keeps each step well below half a turn.
		next := c.knots[i+1].x
		inner := [2]float64{(k.x + next) / 2, c.azimuthTurns(i)}
		if inner[1] < inner[0] {
			inner[0], inner[1] = inner[1], inner[0]
		}
		for _, x := range inner {
			if x > k.x && x < next {
				add(x)
			}
		}
	}
	return all
}

// azimuthPasses finds when a continuous azimuth is at or above a value in degrees.
func (c *scan) azimuthPasses(track []azimuthAt, az float64) {
	c.flips.begin(track[0].az >= az)
	for i := 1; i < len(track); i++ {
		if above := track[i].az >= az; above != c.flips.now {
			c.flips.set(c.atAzimuth(az*radPerDeg, track[i-1].x, track[i].x), above)
		}
	}
}
