package sky

import (
	"math"
	"time"
)

// A TurnSpan is one way of counting a track's azimuth: the mount stands at the track's azimuth + 360·Turn. In
// holds, as pairs of sample numbers (with fractions) in order, where that is within the travel.
type TurnSpan struct {
	Turn int
	In   [][2]float64
}

// Turns returns in which turns, and where, a continuous track of azimuths (see Unwrap) lies within the mount's
// travel, in order of the turn. Between samples the track is taken to be straight. Mounts without azimuth
// travel have one turn, 0, that holds everything.
func (m Mount) Turns(azTrackDeg []float64) []TurnSpan {
	if len(azTrackDeg) == 0 {
		return nil
	}
	last := float64(len(azTrackDeg) - 1)
	if m.Kind != AltAz {
		return []TurnSpan{{0, [][2]float64{{0, last}}}}
	}
	lo, hi := azTrackDeg[0], azTrackDeg[0]
	for _, az := range azTrackDeg {
		lo, hi = min(lo, az), max(hi, az)
	}
	var all []TurnSpan
	first, end := m.turnsOf(lo, hi)
	for k := first; k <= end; k++ {
		a, b := m.TravelDeg[0]-360*float64(k), m.TravelDeg[1]-360*float64(k)
		t := TurnSpan{Turn: k}
		for i := range azTrackDeg {
			from, to := azTrackDeg[i], azTrackDeg[min(i+1, len(azTrackDeg)-1)]
			p, q, ok := within(from, to, a, b)
			if !ok {
				continue
			}
			p, q = float64(i)+p, float64(i)+q
			if i == len(azTrackDeg)-1 {
				p, q = last, last
			}
			if n := len(t.In); n > 0 && t.In[n-1][1] == p {
				t.In[n-1][1] = q
			} else {
				t.In = append(t.In, [2]float64{p, q})
			}
		}
		if len(t.In) > 0 {
			all = append(all, t)
		}
	}
	return all
}

// turnsOf returns the first and the last turn in which azimuths from lo to hi touch the travel.
func (m Mount) turnsOf(lo, hi float64) (first, last int) {
	return int(math.Ceil((m.TravelDeg[0] - hi) / 360)), int(math.Floor((m.TravelDeg[1] - lo) / 360))
}

// within returns which part of the straight line from one value to another lies in [a, b], as fractions.
func within(from, to, a, b float64) (p, q float64, ok bool) {
	if from == to {
		return 0, 1, from >= a && from <= b
	}
	p, q = (a-from)/(to-from), (b-from)/(to-from)
	if p > q {
		p, q = q, p
	}
	p, q = max(p, 0), min(q, 1)
	return p, q, p <= q
}

// A Turn is one way of counting azimuth while following a place: at the start of the interval the mount's azimuth
// would lie in [360·Turn, 360·Turn + 360), and goes on continuously from there. Open is when it is within the travel.
type Turn struct {
	Turn int
	Open []Window // never empty; ended by AzimuthStop or Interval
}

// Turns returns the turns in which a mount can follow a place of the frame f between two instants, and when the
// track would meet a stop, exact as Windows are. Other limits do not count: see Intersect. Mounts without azimuth
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

// Intersect returns what lies both in a and in b, each in time order and apart: a source's windows within its
// limits and a turn's within the travel, for one. Where both end at once the cause in a stays.
func Intersect(a, b []Window) []Window {
	var both []Window
	for i, j := 0, 0; i < len(a) && j < len(b); {
		s, l := a[i], b[j]
		if l.To.Before(s.To) {
			j++
		} else {
			i++
		}
		if l.From.After(s.From) {
			s.From, s.OpensBy = l.From, l.OpensBy
		}
		if l.To.Before(s.To) {
			s.To, s.ClosesBy = l.To, l.ClosesBy
		}
		if s.From.Before(s.To) {
			both = append(both, s)
		}
	}
	return both
}
