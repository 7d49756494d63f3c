package sched

// A proof is a bound on the true grid that is taken beside the steps on a coarse one: those learn prices
// faster, but only the true grid's bound is a ceiling.
type proof struct {
	router *router
	adjust []Micro
	sum    Micro // the bound without any route
	bound  Micro
	route  []Slot
	ready  bool // it has prices to be taken at
}

// prepare sets the proof to the best prices so far and to what is remembered by now.
func (b *bounder) prepare() {
	f := &b.proof
	f.ready = b.stage == coarseRouting && b.rounds%proveEvery == 0
	if !f.ready {
		if b.stage > coarseRouting {
			f.router = nil // its memory is wanted elsewhere
		}
		return
	}
	if f.router == nil {
		f.router = newRouter(b.t, b.router.halt)
		f.adjust = make([]Micro, len(b.adjust))
	}
	f.sum = b.charge(b.prices.center, f.adjust)
	f.router.width = b.router.width
	copy(f.router.jobs, b.router.jobs)
	copy(f.router.keep, b.router.keep)
}

// take takes the bound; best is the worth of the best plan.
func (f *proof) take(b *bounder, best Micro) {
	value, route := f.router.route(b.gaps, b.used, f.adjust, best-f.sum, b.t.p.GridMin)
	f.bound, f.route = f.sum+value, route
}

// conclude lowers the ceiling to the bound and learns from its route.
func (b *bounder) conclude(best Micro) {
	f := &b.proof
	if !f.ready || f.router.halted {
		return
	}
	b.work += f.router.work
	b.lower(f.bound)
	for i, dead := range f.router.deadReady {
		b.router.deadReady[i] = b.router.deadReady[i] || dead
	}
	for i, dead := range f.router.deadEnd {
		b.router.deadEnd[i] = b.router.deadEnd[i] || dead
	}
	if f.bound <= best {
		b.enter(proved)
		return
	}
	b.learnFrom(f.route)
	if float64(f.bound-best) > learned*(b.prices.height-float64(best)) && b.stage == coarseRouting {
		b.enter(routing) // what is still to be learned on the coarse grid is not what keeps the true one up
	}
}
