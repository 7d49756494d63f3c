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
	open   []sched.Window // minutes at which it may be there, breaks and eclipses taken out
}

// slewTable measures how long the mount takes between every pair of places at every departure.
//
// A move ends where the target is on arrival, so each is measured to the target's position a first
// estimate of the move later. Where the target is not yet within its limits on arrival, the telescope
// waits at the place where it will come within them.
func slewTable(mount sky.Mount, places []place, minutes int, breaks []sched.Span) sched.SlewTable {
	n := len(places)
	bins := (minutes + slewBinMin) / slewBinMin
	t := sched.SlewTable{Places: n, BinMin: slewBinMin, Bins: bins, Sec: make([]uint16, (bins+len(breaks))*n*n)}
	m := mover{mount: mount, depart: make([][]sky.Axes, n), arrive: make([][]sky.Axes, n), last: minutes}
	for i := range places {
		m.depart[i], m.arrive[i] = holdBehind(places[i]), holdAhead(places[i])
	}

	var wg sync.WaitGroup
	workers := min(runtime.GOMAXPROCS(0), bins)
	for w := range workers {
		wg.Go(func() {
			for b := w; b < bins; b += workers {
				m.fill(t.Sec[b*n*n:(b+1)*n*n], b*slewBinMin, min((b+1)*slewBinMin, minutes))
			}
		})
	}
	wg.Wait()
	for i, b := range breaks {
		m.fillBreak(t.Sec[(bins+i)*n*n:(bins+i+1)*n*n], b)
	}
	return t
}

// A mover knows where each place is left from and arrived at, minute by minute.
type mover struct {
	mount          sky.Mount
	depart, arrive [][]sky.Axes
	last           int // the last minute
}

// fill writes one bin: the longest move of those that depart from minute first to minute last.
func (m *mover) fill(sec []uint16, first, last int) {
	n := len(m.depart)
	for from := range n {
		for to := range n {
			if from != to {
				sec[from*n+to] = ceilSec(m.longest(m.depart[from], m.arrive[to], first, last))
			}
		}
	}
}

// longest is the longest move from one place to another for departures from minute first to minute last. The
// first and the last of them say between which whole minutes all arrive; the longest ways, on either axis, to
// where the target is at those minutes bound every move.
func (m *mover) longest(depart, arrive []sky.Axes, first, last int) float64 {
	a, b := m.minutesToReach(depart, arrive, first), m.minutesToReach(depart, arrive, last)
	early, late := min(a, b), max(a, b)+1 // on arrival the target is between two whole minutes
	var wayA, wayB float64
	for d := first; d <= last; d++ {
		p := &depart[d]
		for at := d + early; at <= d+late; at++ {
			q := &arrive[min(at, m.last)]
			wayA, wayB = max(wayA, math.Abs(q.A-p.A)), max(wayB, math.Abs(q.B-p.B))
		}
	}
	return m.mount.MoveSec(sky.Axes{}, sky.Axes{A: wayA, B: wayB})
}

// minutesToReach is how many whole minutes a move takes that departs at a minute. The target goes on moving
// meanwhile, so it is asked again where it will be until that changes the answer no more.
func (m *mover) minutesToReach(depart, arrive []sky.Axes, at int) int {
	whole := 0
	for range mostPasses {
		sec := max(m.mount.MoveSec(depart[at], arrive[min(at+whole, m.last)]), m.mount.MoveSec(depart[at], arrive[min(at+whole+1, m.last)]))
		next := int(sec / 60)
		if next <= whole { // below it where the target comes towards the telescope
			return next
		}
		whole = next
	}
	return whole
}

// mostPasses ends the chase of a target that runs as fast as the mount; each pass gains what is left of the
// way times the ratio of the speeds.
const mostPasses = 12

// fillBreak writes the bin of a break: nothing moves in it, so the way is from where the telescope was
// when it began to where the target is when it has ended.
func (m *mover) fillBreak(sec []uint16, brk sched.Span) {
	n := len(m.depart)
	for from := range n {
		for to := range n {
			p, whole := m.depart[from][brk.From], 0
			longest := 0.0
			for range mostPasses {
				for _, at := range []int{whole, whole + 1} {
					longest = max(longest, m.mount.MoveSec(p, m.arrive[to][min(brk.To+at, m.last)]))
				}
				if next := int(longest / 60); next > whole {
					whole = next
					continue
				}
				break
			}
			sec[from*n+to] = ceilSec(longest)
		}
	}
}

func ceilSec(s float64) uint16 { return uint16(min(math.Ceil(s), math.MaxUint16)) }

// holdAhead returns a place's axes with every minute outside its windows replaced by where the next
// window begins, or where the last one ended.
func holdAhead(p place) []sky.Axes {
	axes := append([]sky.Axes(nil), p.axes...)
	next := len(p.open)
	for m := len(axes) - 1; m >= 0; m-- {
		for next > 0 && p.open[next-1].From > m {
			next--
		}
		switch {
		case next > 0 && m <= p.open[next-1].To: // inside a window
		case next < len(p.open):
			axes[m] = p.axes[p.open[next].From]
		case len(p.open) > 0:
			axes[m] = p.axes[p.open[len(p.open)-1].To]
		}
	}
	return axes
}

// holdBehind returns a place's axes with every minute outside its windows replaced by where the
// window before it ended, or where the first one begins.
func holdBehind(p place) []sky.Axes {
	axes := append([]sky.Axes(nil), p.axes...)
	prev := -1
	for m := range axes {
		for prev+1 < len(p.open) && p.open[prev+1].From <= m {
			prev++
		}
		switch {
		case prev >= 0 && m <= p.open[prev].To: // inside a window
		case prev >= 0:
			axes[m] = p.axes[p.open[prev].To]
		case len(p.open) > 0:
			axes[m] = p.axes[p.open[0].From]
		}
	}
	return axes
}
