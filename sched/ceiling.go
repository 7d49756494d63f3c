package sched

// The ceiling is a bound on the worth of any plan, by Lagrangian relaxation: the rule that a job has at most
// so many slots is given up, and a price is put on each slot of a job instead. The best sequence of slots at
// those prices, which may come back to a job, is a longest path that the sweep finds exactly; its value
// plus the price of every slot a job may have bounds every plan, at any prices that are not below
// zero. The subgradient method looks for the prices at which the bound is least.
//
// Source: Fisher, "The Lagrangian relaxation method for solving integer programming problems", Management
// Science 27 (1981) 1; step length after Polyak (1969)
//
// Jobs that must be in the plan cost worth. Once a plan has them all, only plans that do are bounded: their
// price may then fall below zero, since every plan that counts pays it exactly once.
//
// Slots that are worth nothing are not part of the plans that it bounds.

// A bounder looks for the prices of the lowest ceiling.
type bounder struct {
	t       *tables
	sweep   *sweeper
	used    []uint64 // slots of jobs that pins have
	gaps    []gap
	pins    Micro // the worth of the pins
	spread  int
	adjust  []Micro
	price   []float64
	towards []float64 // smoothed subgradient
	count   []int     // by job: slots in the best paths
	forced  []bool    // by job: every plan that is bounded has exactly one slot of it
	learned []float64 // the prices of the lowest bound so far
	low     Micro     // that bound, on the grid it was found with
	stale   int       // steps since
	reach   float64   // share of the Polyak step
	ceiling Micro     // the lowest bound on the true grid
	valid   bool
}

// newBounder starts at the given prices. It is nil where no ceiling can be proved: when jobs or slots
// had to be left out of the search.
func newBounder(t *tables, prices []Micro) *bounder {
	if t.cropped {
		return nil
	}
	p := t.p
	b := &bounder{
		t: t, sweep: newSweeper(t), used: make([]uint64, t.words), spread: t.setupSpread(),
		adjust: make([]Micro, len(p.Jobs)), count: make([]int, len(p.Jobs)), forced: make([]bool, len(p.Jobs)), reach: 0.25,
		price: make([]float64, len(p.Jobs)), towards: make([]float64, len(p.Jobs)), learned: make([]float64, len(p.Jobs)),
	}
	for j := range prices {
		b.price[j] = 0.9 * float64(prices[j])
	}
	g := gap{prev: None, next: None}
	for _, pin := range p.Pins {
		g.next, g.nextStart, g.nextEnd, g.fixed = pin.Node, pin.Start, pin.End, true
		b.gaps = append(b.gaps, g)
		g = gap{prev: pin.Node, prevEnd: pin.End, next: None}
		job := p.Nodes[pin.Node].Job
		b.pins += p.JobWorth(job, pin.Start, pin.End)
		t.spend(b.used, job)
	}
	b.gaps = append(b.gaps, g)
	return b
}

// force bounds only plans that have every job that must be there, if these slots do. It comes before any
// bound is taken.
func (b *bounder) force(slots []Slot) {
	set := make([]uint64, b.t.words)
	for _, s := range slots {
		b.t.spend(set, b.t.p.Nodes[s.Node].Job)
	}
	for j, bonus := range b.t.bonus {
		if bonus > 0 && !b.t.begun(set, j) {
			return
		}
	}
	for j, bonus := range b.t.bonus {
		b.forced[j] = bonus > 0 && b.t.left(b.used, j) == 1 && !b.t.begun(b.used, j)
	}
}

// bound returns the bound at the present prices with ends on the given grid, and counts the slots of each
// job in its paths. Only on the problem's own grid does it bound its plans.
func (b *bounder) bound(grid int) Micro {
	sum := b.pins
	for j := range b.price {
		b.adjust[j] = -Micro(b.price[j])
		b.count[j] = 0
		if b.t.chosen[j] {
			sum -= b.adjust[j] * Micro(b.t.left(b.used, j))
		}
	}
	for _, g := range b.gaps {
		value, path := b.sweep.relax(g, b.used, b.adjust, b.spread, grid)
		sum += value
		for _, s := range path {
			b.count[b.t.p.Nodes[s.Node].Job]++
		}
	}
	return sum
}

// relax returns the value and the slots of the best path through the gap on which a job may come again,
// though not twice in a row if it may have one slot only. Slots gain their worth and adjust[job].
func (s *sweeper) relax(g gap, used []uint64, adjust []Micro, spread, grid int) (Micro, []Slot) {
	s.relaxed, s.grid = true, grid
	if !s.enter(g, used, adjust) {
		return 0, nil
	}
	s.spread = spread
	last := s.run(g)
	if g.next != None {
		s.carry(s.next, g.nextStart)
		i := s.next*s.wide + g.nextStart - s.from
		if s.ready[i] <= unreachable/2 {
			return 0, nil
		}
		return s.ready[i], s.path(s.parent[i])
	}
	if last == None {
		return 0, nil
	}
	return s.ended[last], s.path(last)
}

// learn makes steps towards better prices on a grid, given the worth of the best plan.
func (b *bounder) learn(steps, grid int, plan Micro) {
	for range steps {
		bound := b.bound(grid)
		b.note(bound, grid)
		b.step(bound, plan)
	}
}

// note remembers the bound at the present prices.
func (b *bounder) note(bound Micro, grid int) {
	if b.low == 0 || bound < b.low {
		b.low, b.stale = bound, 0
		copy(b.learned, b.price)
	} else if b.stale++; b.stale >= 4 {
		b.stale = 0
		b.reach *= 0.6
		copy(b.price, b.learned)
		clear(b.towards)
	}
	if grid == b.t.p.GridMin && (!b.valid || bound < b.ceiling) {
		b.ceiling, b.valid = bound, true
	}
}

// step moves the prices against the smoothed subgradient.
func (b *bounder) step(bound, plan Micro) {
	const memory = 0.5 // of the former directions: without it the prices of rivals swing to and fro
	square := 0.0
	for j := range b.price {
		if !b.t.chosen[j] {
			continue
		}
		b.towards[j] = memory*b.towards[j] + (1-memory)*float64(b.t.left(b.used, j)-b.count[j])
		if b.price[j] == 0 && b.towards[j] > 0 && !b.forced[j] {
			continue
		}
		square += b.towards[j] * b.towards[j]
	}
	if square == 0 {
		return
	}
	length := b.reach * float64(bound-plan) / square
	for j := range b.price {
		b.price[j] -= length * b.towards[j]
		if !b.forced[j] {
			b.price[j] = max(0, b.price[j])
		}
	}
}

// prove takes the bound at the best prices learned so far on the problem's own grid.
func (b *bounder) prove() {
	now := append([]float64(nil), b.price...)
	copy(b.price, b.learned)
	if bound := b.bound(b.t.p.GridMin); !b.valid || bound < b.ceiling {
		b.ceiling, b.valid = bound, true
	}
	copy(b.price, now)
}
