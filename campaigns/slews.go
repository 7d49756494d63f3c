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
			if from == to {
				continue
			}
			var a, b float64 // the longest way on either axis
			way := func(depart, arrive int) {
				p, q := m.depart[from][depart], m.arrive[to][min(arrive, m.last)]
				a, b = max(a, math.Abs(q.A-p.A)), max(b, math.Abs(q.B-p.B))
			}
			for d := first; d <= last; d++ {
				way(d, d)
			}
			guess := int(m.mount.MoveSec(sky.Axes{}, sky.Axes{A: a, B: b}) / 60)
			a, b = 0, 0
			for d := first; d <= last; d++ {
				way(d, d+guess)
				way(d, d+guess+1)
			}
			sec[from*n+to] = ceilSec(m.mount.MoveSec(sky.Axes{}, sky.Axes{A: a, B: b}))
		}
	}
}

// fillBreak writes the bin of a break: nothing moves in it, so the way is from where the telescope was
// when it began to where the target is when it has ended.
func (m *mover) fillBreak(sec []uint16, brk sched.Span) {
	n := len(m.depart)
	for from := range n {
		for to := range n {
			p := m.depart[from][brk.From]
			first := m.mount.MoveSec(p, m.arrive[to][brk.To])
			then := min(brk.To+int(first/60), m.last)
			longest := first
			for _, at := range []int{then, min(then+1, m.last)} {
				longest = max(longest, m.mount.MoveSec(p, m.arrive[to][at]))
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
