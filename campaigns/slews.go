package campaigns

import (
	"math"
	"runtime"
	"sync"

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
	m := mover{mount: mount, places: places, held: make([][]sky.Axes, n), last: minutes}
	for i := range places {
		m.held[i] = heldWithin(places[i])
	}

	var wg sync.WaitGroup
	workers := min(runtime.GOMAXPROCS(0), n)
	for w := range workers {
		wg.Go(func() {
			for from := w; from < n; from += workers {
				m.fill(&t, from, breaks)
			}
		})
	}
	wg.Wait()
	return t
}

// A mover knows where each place is left from and arrived at, minute by minute.
type mover struct {
	mount  sky.Mount
	places []place
	held   [][]sky.Axes // by place
	last   int          // the last minute
}

// fill writes all moves from one place. Of each bin it keeps the longest move.
func (m *mover) fill(t *sched.SlewTable, from int, breaks []sched.Span) {
	n := len(m.places)
	leaves := m.leaves(from, t.Bins)
	for to := range n {
		depart, arrive := m.held[from], m.held[to]
		if from != to {
			before := 0
			for b := range t.Bins {
				first, last := b*slewBinMin, min((b+1)*slewBinMin, m.last)
				sec := &t.Sec[(b*n+from)*n+to]
				if !leaves[b] {
					*sec = ceilSec(m.mount.MoveSec(depart[first], arrive[first]))
					continue
				}
				if b == 0 || !leaves[b-1] {
					before = m.minutesToReach(depart[first], arrive, first, 0)
				}
				after := m.minutesToReach(depart[last], arrive, last, before)
				*sec = ceilSec(m.longest(depart, arrive, first, last, min(before, after), max(before, after)+1))
				before = after
			}
		}
		for i, b := range breaks {
			// Nothing moves in a break: the way is from where the telescope was when it began.
			whole := m.minutesToReach(depart[b.From], arrive, b.To, 0)
			t.Sec[((t.Bins+i)*n+from)*n+to] = ceilSec(m.wayTo(depart[b.From], arrive, b.To+whole, b.To+whole+2))
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
func (m *mover) longest(depart, arrive []sky.Axes, first, last, early, late int) float64 {
	var a, b float64
	for d := first; d <= last; d++ {
		p := &depart[d]
		for at := d + early; at <= d+late; at++ {
			q := &arrive[min(at, m.last)]
			a, b = max(a, math.Abs(q.A-p.A)), max(b, math.Abs(q.B-p.B))
		}
	}
	return m.mount.MoveSec(sky.Axes{}, sky.Axes{A: a, B: b})
}

// wayTo is the longest move to where the target is from minute first to minute last.
func (m *mover) wayTo(p sky.Axes, arrive []sky.Axes, first, last int) float64 {
	var a, b float64
	for at := first; at <= last; at++ {
		q := &arrive[min(at, m.last)]
		a, b = max(a, math.Abs(q.A-p.A)), max(b, math.Abs(q.B-p.B))
	}
	return m.mount.MoveSec(sky.Axes{}, sky.Axes{A: a, B: b})
}

// minutesToReach is how many whole minutes a move takes that departs at a minute: on arrival the target is
// between where it is then and a minute later. The target goes on moving meanwhile, so it is asked again where
// it will be until that changes the answer no more. The search begins at a guess.
func (m *mover) minutesToReach(p sky.Axes, arrive []sky.Axes, at, guess int) int {
	whole := guess
	for range mostPasses {
		next := int(m.wayTo(p, arrive, at+whole, at+whole+1) / 60)
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
