package sched

import (
	"cmp"
	"math/rand/v2"
	"slices"
)

// A lane is one search for better plans: it takes a few neighbouring slots out, fills the gap again at
// other prices, and keeps the result if it is better or not much worse.
type lane struct {
	t        *tables
	halt     func() bool // tells whether to stop at once
	prices   []Micro
	sweep    *sweeper
	rand     *rand.Rand
	adjust   []Micro
	thorough bool
	used     []uint64

	slots     []Slot // where it is
	value     Micro
	best      []Slot // the best it has seen
	bestValue Micro
}

func newLane(t *tables, prices []Micro, seed uint64, halt func() bool) *lane {
	return &lane{
		t: t, halt: halt, prices: prices, sweep: newSweeper(t), rand: rand.New(rand.NewPCG(seed, 20)),
		adjust: make([]Micro, len(t.p.Jobs)), used: make([]uint64, t.words),
	}
}

func (l *lane) start(slots []Slot, value Micro) {
	l.slots, l.value, l.best, l.bestValue = slots, value, slots, value
}

// look sets how the next sweeps look: thoroughly or not, and at which jobs. One that brings less by the minute
// than picky times what a minute is worth in the whole session is hardly ever in the best plan, and there are
// many of those: to leave them out makes a sweep several times cheaper.
func (l *lane) look(thorough bool, picky float64) { l.thorough, l.sweep.picky = thorough, picky }

// pickiness is tried at random: what is left out by one move is looked at by another.
var pickiness = []float64{0, 0.7, 0.85, 1}

// fromNothing plans around the pins, at a share of the prices.
func (l *lane) fromNothing(scale float64) []Slot {
	l.look(false, 0.7)
	for j, price := range l.prices {
		l.adjust[j] = -Micro(float64(price) * scale)
	}
	slots := pinned(l.t.p)
	for at := 0; at <= len(slots); at++ {
		added := len(slots)
		slots, _ = l.refill(slots, at, at) // between pins that clash in time past nothing fits
		at += len(slots) - added
	}
	return l.complete(slots)
}

// complete puts in the jobs that must be there and are missing, each where it costs least. Sweeping with
// their bonus would take them wherever they come first.
func (l *lane) complete(slots []Slot) []Slot {
	l.look(l.thorough, 0)
	for job, bonus := range l.t.bonus {
		l.spendAll(slots)
		if bonus == 0 || l.t.begun(l.used, job) {
			continue
		}
		best, value := slots, l.t.value(slots)
		for _, size := range []int{1, 3, 6} {
			for a := 0; a+min(size, len(slots)) <= len(slots); a++ {
				b := min(a+size, len(slots))
				if slices.ContainsFunc(slots[a:b], func(s Slot) bool { return s.Pinned }) {
					continue
				}
				l.spendAll(slots[:a], slots[b:])
				l.price(0.5, 0)
				if try, ok := l.refill(slots, a, b); ok && l.t.value(try) > value {
					best, value = try, l.t.value(try)
				}
			}
			if value > l.t.value(slots)+bonus/2 {
				break
			}
		}
		slots = best
	}
	return slots
}

// spendAll sets used to the jobs of these slots.
func (l *lane) spendAll(parts ...[]Slot) {
	clear(l.used)
	for _, part := range parts {
		for _, s := range part {
			l.t.spend(l.used, l.t.p.Nodes[s.Node].Job)
		}
	}
}

// price sets what each job that is not begun gains or loses in the next sweep: its bonus, less a share of
// its price that differs from job to job by up to noise.
func (l *lane) price(share, noise float64) {
	for j, price := range l.prices {
		if !l.t.chosen[j] {
			continue
		}
		l.adjust[j] = 0
		if !l.t.begun(l.used, j) {
			l.adjust[j] = l.t.bonus[j]
		}
		if l.t.bonus[j] == 0 {
			l.adjust[j] -= Micro(float64(price) * share * (1 + noise*(2*l.rand.Float64()-1)))
		}
	}
}

// refill replaces slots a up to b, none of them pinned, by the best the sweep finds with the jobs that are
// spent elsewhere, at the present prices. If the slot after them cannot be reached it returns the slots
// as they are, and false.
func (l *lane) refill(slots []Slot, a, b int) ([]Slot, bool) {
	g := gap{prev: None, next: None}
	if a > 0 {
		g.prev, g.prevEnd = slots[a-1].Node, slots[a-1].End
	}
	if b < len(slots) {
		n := slots[b]
		g.next, g.nextStart, g.nextEnd, g.fixed = n.Node, n.Start, n.End, n.Pinned
	}
	l.spendAll(slots[:a], slots[b:])
	path, nextStart, ok := l.sweep.fill(g, l.used, l.adjust, l.thorough)
	if !ok {
		return slots, false
	}
	filled := make([]Slot, 0, len(slots)+len(path)-(b-a))
	filled = append(append(append(filled, slots[:a]...), path...), slots[b:]...)
	if g.next != None {
		filled[a+len(path)].Start = nextStart
	}
	return filled, true
}

// A lane makes so many moves in a round, and more as long as its share of the round's work lasts.
const (
	fewestMoves = 8
	mostMoves   = 60
)

// replan makes a round of moves. The hotter, the more worth it gives up to get out of a dead end.
func (l *lane) replan(heat float64, work int) {
	tolerance := Micro(float64(l.t.p.PlanWorth(Plan{Slots: l.slots})) * 0.004 * heat)
	for moves := 0; moves < mostMoves && (moves < fewestMoves || l.sweep.work < work) && !l.halt(); moves++ {
		slots, ok := l.move()
		if !ok {
			continue
		}
		value := l.t.value(slots)
		if value >= l.value-tolerance {
			l.slots, l.value = slots, value
		}
		if value > l.bestValue {
			l.best, l.bestValue = slots, value
		}
	}
}

// take goes on from the slots if they are better.
func (l *lane) take(slots []Slot) {
	if v := l.t.value(slots); v > l.value {
		l.slots, l.value = slots, v
		if v > l.bestValue {
			l.best, l.bestValue = slots, v
		}
	}
}

// adopt makes a plan of a route: of the slots of a job that may not all stay those that are worth most do,
// and what room the others leave is filled. At the right prices routes are nearly plans.
func (l *lane) adopt(route []Slot) {
	if len(route) == 0 {
		return
	}
	p := l.t.p
	order := slices.Clone(route)
	slices.SortStableFunc(order, func(a, b Slot) int {
		return cmp.Compare(p.JobWorth(p.Nodes[b.Node].Job, b.Start, b.End), p.JobWorth(p.Nodes[a.Node].Job, a.Start, a.End))
	})
	clear(l.used)
	var kept []Slot
	for _, s := range order {
		if job := p.Nodes[s.Node].Job; !l.t.spent(l.used, job) {
			l.t.spend(l.used, job)
			kept = append(kept, s)
		}
	}
	l.take(l.complete(l.fill(l.t.fitting(Plan{Slots: kept}))))
}

// fill puts more slots in where there is room.
func (l *lane) fill(slots []Slot) []Slot {
	l.look(false, 0)
	for at := 0; at <= len(slots); at++ {
		l.spendAll(slots)
		l.price(0.5, 0)
		n := len(slots)
		slots, _ = l.refill(slots, at, at)
		at += len(slots) - n
	}
	return slots
}

// polish re-plans every so many neighbouring slots, from first to last: what an edit has left behind is made
// good at once wherever it is.
func (l *lane) polish(size int, share float64) {
	l.look(false, 0.8)
	for a := 0; a+size <= len(l.slots) && !l.halt(); a++ {
		if slices.ContainsFunc(l.slots[a:a+size], func(s Slot) bool { return s.Pinned }) {
			continue
		}
		l.spendAll(l.slots[:a], l.slots[a+size:])
		l.price(share, 0)
		if slots, ok := l.refill(l.slots, a, a+size); ok {
			l.take(slots)
		}
	}
}

// move re-plans one stretch, and half the time another one with it, so that jobs can change places. One
// time in four the prices differ so much that some jobs are priced out of the stretch; what room that
// leaves is then filled without prices.
func (l *lane) move() ([]Slot, bool) {
	a, b := l.stretch(1 + l.rand.IntN(5))
	share, noise := l.rand.Float64(), 0.3
	l.look(l.rand.IntN(8) == 0, pickiness[l.rand.IntN(len(pickiness))])
	switch l.rand.IntN(4) {
	case 0, 1:
		l.spendAll(l.slots[:a], l.slots[b:])
		l.price(share, noise)
		return l.refill(l.slots, a, b)
	case 2:
		return l.shuffle(a, b)
	}
	c, d := l.stretch(1 + l.rand.IntN(2))
	if c > a {
		a, b, c, d = c, d, a, b // now c comes first
	}
	if d >= a {
		l.spendAll(l.slots[:min(a, c)], l.slots[max(b, d):])
		l.price(share, noise)
		return l.refill(l.slots, min(a, c), max(b, d))
	}
	l.spendAll(l.slots[:c], l.slots[d:a], l.slots[b:])
	l.price(share, noise)
	if l.rand.IntN(2) == 0 {
		gone := d - c
		slots, ok := l.refill(slices.Delete(slices.Clone(l.slots), c, d), a-gone, b-gone)
		if !ok {
			return nil, false
		}
		return l.refill(slots, c, c)
	}
	slots := slices.Delete(slices.Clone(l.slots), a, b)
	left := len(slots)
	slots, ok := l.refill(slots, c, d)
	if !ok {
		return nil, false
	}
	a += len(slots) - left
	return l.refill(slots, a, a)
}

// shuffle fills slots a up to b at prices from nothing to twice what they are, then the room that is left.
func (l *lane) shuffle(a, b int) ([]Slot, bool) {
	l.spendAll(l.slots[:a], l.slots[b:])
	l.price(1, 1)
	slots, ok := l.refill(l.slots, a, b)
	if !ok {
		return nil, false
	}
	last := a + len(slots) - len(l.slots) + b - a
	l.price(0, 0)
	l.look(l.thorough, 0)
	for at := a; at <= last; at++ {
		n := len(slots)
		slots, _ = l.refill(slots, at, at)
		at += len(slots) - n
		last += len(slots) - n
	}
	return slots, true
}

// stretch picks up to n neighbouring slots without a pin among them.
func (l *lane) stretch(n int) (a, b int) {
	a = l.rand.IntN(len(l.slots) + 1)
	b = a
	for b-a < n {
		left := a > 0 && !l.slots[a-1].Pinned
		right := b < len(l.slots) && !l.slots[b].Pinned
		switch {
		case left && (!right || l.rand.IntN(2) == 0):
			a--
		case right:
			b++
		default:
			return a, b
		}
	}
	return a, b
}
