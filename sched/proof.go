package sched

// A proof is a second bound on the true grid that is taken beside the step of a round: on a coarse grid at the best
// prices so far, since only the true grid's bound is a ceiling; on the true grid on the way to the trial, where the bound
// often is lower than at its end.
type proof struct {
	router *router
	adjust []Micro
	trial  []float64 // the prices it is taken at
	sum    Micro     // the bound without any route
	bound  Micro
	route  []Slot
	fine   bool // it is a step of the bundle on the true grid
	ready  bool // it has prices to be taken at
}

// partWay is how far on the way to the trial the second bound is taken.
const partWay = 0.4

// prepare sets the proof to prices and to what is remembered by now.
func (b *bounder) prepare(best Micro) {
	f := &b.proof
	switch b.stage {
	case coarseRouting:
		f.ready = b.rounds%proveEvery == 0
	case routing:
		b.aim(best)
		f.ready = !b.changed
	default:
		f.ready = false
	}
	if !f.ready {
		return
	}
	if f.router == nil {
		f.router = newRouter(b.t, b.router.halt)
		f.adjust, f.trial = make([]Micro, len(b.adjust)), make([]float64, len(b.adjust))
	}
	copy(f.trial, b.prices.center)
	f.fine = b.stage == routing
	if f.fine {
		for j, c := range b.prices.center {
			f.trial[j] = float64(Micro(c + float64(partWay*(b.prices.trial[j]-c))))
		}
	}
	f.sum = b.charge(f.trial, f.adjust)
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
	if f.fine {
		copy(b.prices.trial, f.trial)
		b.prices.predict()
		b.prices.add(b.cutOf(f.route), float64(f.bound), float64(best))
	}
	b.learnFrom(f.route)
	if float64(f.bound-best) > learned*(b.prices.height-float64(best)) && b.stage == coarseRouting {
		b.enter(routing) // what is still to be learned on the coarse grid is not what keeps the true one up
	}
}
