package campaigns

import (
	"math"

	"example.org/tallystick/sched"
	"example.org/tallystick/sky"
)

// slewBinMin is the width of a departure bin of the slew table, minutes. A source drifts by about a
// degree in it, a few seconds of slewing, and the table keeps the longest move of each bin.
const slewBinMin = 5

// A place is where the mount may stand on a source: one cable turn of one source.
type place struct {
	source int
	turn   int
	axes   []sky.Axes     // where the mount's axes are at each minute, on this turn
	within sched.Window   // its window of the limits; empty where there is none
	open   []sched.Window // what is left of it outside breaks and eclipses
}

// slewTable measures how long the mount takes between every pair of places at every departure.
//
// A move ends where the target is on arrival. Where the target is not yet within its limits by then, the
// telescope waits at the place where it will come within them. Departures from a place outside its windows
// are only estimated, to where the target is when the move begins: no plan that keeps the limits has them.
func slewTable(mount sky.Mount, places []place, minutes int, breaks []sched.Span) sched.SlewTable {
	n := len(places)
	bins := (minutes + slewBinMin) / slewBinMin
	t := sched.SlewTable{Places: n, BinMin: slewBinMin, Bins: bins, Sec: make([]uint16, (bins+len(breaks))*n*n)}
	m := mover{pace: mount.Pace(), places: places, held: make([]heldTrack, n), last: minutes}
	for i := range places {
		m.held[i] = newHeldTrack(heldWithin(places[i]))
	}
	sideBySide(n, func(from int) { m.fill(&t, from, breaks) })
	return t
}

// A mover knows where each place is left from and arrived at, minute by minute.
type mover struct {
	pace   sky.Pace
	places []place
	held   []heldTrack // by place
	last   int         // the last minute
}

// fill writes all moves from one place. Of each bin it keeps the longest move.
func (m *mover) fill(t *sched.SlewTable, from int, breaks []sched.Span) {
	n := len(m.places)
	leaves := m.leaves(from, t.Bins)
	depart := &m.held[from]
	for to := range n {
		arrive := &m.held[to]
		if from != to {
			before := 0
			for b := range t.Bins {
				first, last := b*slewBinMin, min((b+1)*slewBinMin, m.last)
				sec := &t.Sec[(b*n+from)*n+to]
				if !leaves[b] {
					*sec = ceilSec(m.pace.MoveSec(arrive.axes[0][first]-depart.axes[0][first], arrive.axes[1][first]-depart.axes[1][first]))
					continue
				}
				if b == 0 || !leaves[b-1] {
					before = m.minutesToReach(depart, first, arrive, first, 0)
				}
				after := m.minutesToReach(depart, last, arrive, last, before)
				*sec = ceilSec(m.longest(depart, arrive, first, last, min(before, after), max(before, after)+1))
				before = after
			}
		}
		for i, b := range breaks {
			// Nothing moves in a break: the way is from where the telescope was when it began.
			whole := m.minutesToReach(depart, b.From, arrive, b.To, 0)
			t.Sec[((t.Bins+i)*n+from)*n+to] = ceilSec(m.wayTo(depart, b.From, arrive, b.To+whole, b.To+whole+2))
		}
	}
}

// leaves says in which bins a slot at a place may end.
func (m *mover) leaves(from, bins int) []bool {
	out := make([]bool, bins)
	for _, w := range m.places[from].open {
		for b := w.From / slewBinMin; b <= min(w.To/slewBinMin, bins-1); b++ {
			out[b] = true
		}
	}
	return out
}

// longest is the longest move for departures from minute first to minute last that arrive early to late whole
// minutes later: the longest ways, on either axis, to where the target is at those minutes bound every move.
// Where one axis takes longer whatever the other does meanwhile, only that one is looked at.
func (m *mover) longest(depart, arrive *heldTrack, first, last, early, late int) float64 {
	at := min(first+early, m.last)
	departures, arrivals := float64(last-first), float64(last-first+late-early)
	var least, most [2]float64
	for axis := range least {
		least[axis] = math.Abs(arrive.axes[axis][at] - depart.axes[axis][first])
		most[axis] = least[axis] + departures*depart.stepDeg[axis] + arrivals*arrive.stepDeg[axis] + 1e-9 // rounding
	}
	switch {
	case m.pace.Slower(0, least[0], most[1]):
		return m.pace.MoveSec(m.longestWay(0, depart, arrive, first, last, early, late), 0)
	case m.pace.Slower(1, least[1], most[0]):
		return m.pace.MoveSec(0, m.longestWay(1, depart, arrive, first, last, early, late))
	}
	return m.pace.MoveSec(m.longestWay(0, depart, arrive, first, last, early, late), m.longestWay(1, depart, arrive, first, last, early, late))
}

// longestWay is the longest way on one axis, degrees. Where the target only goes one way meanwhile, and stays on one
// side of the telescope, the longest is to where it is last, or first.
func (m *mover) longestWay(axis int, depart, arrive *heldTrack, first, last, early, late int) float64 {
	from, to := depart.axes[axis][first:last+1], arrive.axes[axis]
	lo, hi := first+early, last+late
	if hi > m.last {
		way := 0.0
		for i, p := range from {
			for at := lo + i; at <= first+late+i; at++ {
				way = max(way, math.Abs(to[min(at, m.last)]-p))
			}
		}
		return way
	}
	if rises := arrive.rises[axis][lo] >= int32(hi); rises || arrive.falls[axis][lo] >= int32(hi) {
		low, high := to[lo], to[hi]
		if !rises {
			low, high = high, low
		}
		room := float64(last-first)*depart.stepDeg[axis] + 1e-9
		switch {
		case low-from[0] > room && rises, from[0]-high > room && !rises:
			early = late
		case low-from[0] > room, from[0]-high > room:
			late = early
		}
	}
	way := 0.0
	for shift := early; shift <= late; shift++ {
		on := to[first+shift:][:len(from)]
		for i, p := range from {
			if d := math.Abs(on[i] - p); d > way {
				way = d
			}
		}
	}
	return way
}

// wayTo is the longest move, for a departure at a minute, to where the target is from minute first to minute last.
func (m *mover) wayTo(depart *heldTrack, minute int, arrive *heldTrack, first, last int) float64 {
	pa, pb := depart.axes[0][minute], depart.axes[1][minute]
	var a, b float64
	for at := first; at <= last; at++ {
		q := min(at, m.last)
		a, b = max(a, math.Abs(arrive.axes[0][q]-pa)), max(b, math.Abs(arrive.axes[1][q]-pb))
	}
	return m.pace.MoveSec(a, b)
}

// minutesToReach is how many whole minutes a move takes that departs at a minute, with the target where it is from
// minute at on: on arrival the target is between where it is then and a minute later. The target goes on moving
// meanwhile, so it is asked again where it will be until that changes the answer no more. The search begins at a guess.
func (m *mover) minutesToReach(depart *heldTrack, minute int, arrive *heldTrack, at, guess int) int {
	whole := guess
	for range mostPasses {
		next := int(m.wayTo(depart, minute, arrive, at+whole, at+whole+1) / 60)
		if next == whole || next == whole-1 { // one less where the target comes towards the telescope
			return next
		}
		whole = next
	}
	return whole
}

// mostPasses ends the chase of a target that runs as fast as the mount; each pass gains what is left of the
// way times the ratio of the speeds.
const mostPasses = 12

func ceilSec(s float64) uint16 { return uint16(min(math.Ceil(s), math.MaxUint16)) }

// heldWithin returns a place's axes with every minute before its window replaced by where that begins, every minute
// after it by where it ends. Within it, in eclipses and breaks too, the telescope follows.
func heldWithin(p place) []sky.Axes {
	axes := append([]sky.Axes(nil), p.axes...)
	if p.within.To <= p.within.From {
		return axes
	}
	for m := range axes {
		axes[m] = p.axes[min(max(m, p.within.From), p.within.To)]
	}
	return axes
}

// A heldTrack is where the telescope is left from or arrives at, by axis and minute.
type heldTrack struct {
	axes    [2][]float64
	stepDeg [2]float64 // the longest way in a minute
	rises   [2][]int32 // by minute: until when it does not fall
	falls   [2][]int32 // by minute: until when it does not rise
}

func newHeldTrack(held []sky.Axes) heldTrack {
	var h heldTrack
	n := len(held)
	for axis := range h.axes {
		h.axes[axis], h.rises[axis], h.falls[axis] = make([]float64, n), make([]int32, n), make([]int32, n)
	}
	for m, at := range held {
		h.axes[0][m], h.axes[1][m] = at.A, at.B
	}
	for axis, track := range h.axes {
		rises, falls := h.rises[axis], h.falls[axis]
		rises[n-1], falls[n-1] = int32(n-1), int32(n-1)
		for m := n - 2; m >= 0; m-- {
			step := track[m+1] - track[m]
			h.stepDeg[axis] = max(h.stepDeg[axis], math.Abs(step))
			rises[m], falls[m] = int32(m), int32(m)
			if step >= 0 {
				rises[m] = rises[m+1]
			}
			if step <= 0 {
				falls[m] = falls[m+1]
			}
		}
	}
	return h
}
