package sched

import "slices"

// The ceiling is a bound on the worth of any plan, by Lagrangian relaxation: the rule that a job has at most
// so many slots is given up, and a price is put on each slot of a job instead. The best sequence of slots at
// those prices, which may come back to a job, is a longest path that the sweep finds exactly; its value
// plus the price of every slot a job may have bounds every plan, at any prices that are not below
// zero. The bundle looks for the prices at which the bound is least; routes with memory bring it nearer
// to the best plan than the sweep can, and meet it in the end.
//
// Source: Fisher, "The Lagrangian relaxation method for solving integer programming problems", Management
// Science 27 (1981) 1
//
// Jobs that must be in the plan cost worth. Once a plan has them all, only plans that do are bounded: their
// price may then fall below zero, since every plan that counts pays it exactly once.

// A bounder looks for the prices of the lowest ceiling.
type bounder struct {
	t        *tables
	sweep    *sweeper
	router   *router
	used     []uint64 // slots of jobs that pins have
	gaps     []gap
	pins     Micro // the worth of the pins
	spread   int
	adjust   []Micro
	prices   *bundle
	begin    []float64 // the prices that it starts from
	stage    stage
	rounds   int
	proof    proof
	steps    int     // in this stage
	coarse   int     // the grid on which prices are learned first
	least    float64 // the worth of the best plan
	aimed    bool    // the trial is set
	changed  bool    // the bound at the centre has to be taken anew
	bitsUsed int
	ceiling  Micro // the lowest bound on the true grid
	valid    bool
	route    []Slot // the last best route, for a plan to be made of
	work     int
}

// newBounder starts at the given prices. It is nil where no ceiling can be proved: when jobs or slots
// had to be left out of the search, or a pin stands in a break, around which the search does not see every plan.
func newBounder(t *tables, prices []Micro, halt func() bool) *bounder {
	p := t.p
	if t.cropped || slices.ContainsFunc(p.Pins, p.inBreak) {
		return nil
	}
	b := &bounder{
		t: t, sweep: newSweeper(t), router: newRouter(t, halt), used: make([]uint64, t.words), spread: t.setupSpread(),
		adjust: make([]Micro, len(p.Jobs)), coarse: p.GridMin * max(1, coarseMin/p.GridMin),
	}
	low, high := make([]float64, len(p.Jobs)), make([]float64, len(p.Jobs))
	b.begin = make([]float64, len(p.Jobs))
	for j := range prices {
		high[j] = float64(t.best[j])                                              // at which nobody takes it
		b.begin[j] = max(0, min(float64(Micro(0.9*float64(prices[j]))), high[j])) // below zero only where force allows it
	}
	b.prices = newBundle(low, high, slices.Clone(b.begin))
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
		if bonus > 0 && b.t.left(b.used, j) == 1 && !b.t.begun(b.used, j) {
			b.prices.low[j] = -float64(bonus) // every plan that is bounded has exactly one slot of it
		}
	}
}

// charge puts prices on the jobs and returns what the bound is without any route.
func (b *bounder) charge(prices []float64, adjust []Micro) Micro {
	sum := b.pins
	for j, price := range prices {
		adjust[j] = -Micro(price)
		if b.t.chosen[j] {
			sum -= adjust[j] * Micro(b.t.left(b.used, j))
		}
	}
	return sum
}

// swept returns the bound at the trial's prices by the plain sweep, with ends on the given grid, and the
// routes it comes from. Only on the problem's own grid does it bound its plans.
func (b *bounder) swept(grid int) (Micro, []Slot) {
	sum := b.charge(b.prices.trial, b.adjust)
	var route []Slot
	for _, g := range b.gaps {
		value, path := b.sweep.relax(g, b.used, b.adjust, b.spread, grid)
		sum += value
		route = append(route, path...)
	}
	b.work += b.sweep.work
	b.sweep.work = 0
	return sum, route
}

// routed returns the bound by routes with memory likewise, or best, the worth of the best plan, and no
// route when none is better.
func (b *bounder) routed(grid int, best Micro) (Micro, []Slot) {
	sum := b.charge(b.prices.trial, b.adjust)
	value, route := b.router.route(b.gaps, b.used, b.adjust, best-sum, grid)
	b.work += b.router.work
	return sum + value, route
}

// relax returns the value and the slots of the best path through the gap on which a job may come again,
// though not twice in a row if it may have one slot only. Slots gain their worth and adjust[job].
func (s *sweeper) relax(g gap, used []uint64, adjust []Micro, spread, grid int) (Micro, []Slot) {
	s.relaxed, s.grid = true, grid
	if !s.enter(g, used, adjust) {
		return 0, nil
	}
	s.clear()
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

// cutOf returns the linear function of the prices that the routes stand for.
func (b *bounder) cutOf(route []Slot) cut {
	c := cut{slope: make([]float64, len(b.adjust)), route: route}
	for j := range c.slope {
		if b.t.chosen[j] {
			c.slope[j] = float64(b.t.left(b.used, j))
		}
	}
	worth := b.pins
	for _, s := range route {
		job := b.t.p.Nodes[s.Node].Job
		worth += b.t.p.JobWorth(job, s.Start, s.End)
		c.slope[job]--
	}
	c.value = float64(worth)
	return c
}
