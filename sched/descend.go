package sched

// stage says how the next bounds are taken. Each stage is dearer than the one before and starts from its
// prices.
type stage int

const (
	sweeping      stage = iota // the plain sweep on a coarse grid: prices are learned there as well as on a fine one
	coarseRouting              // routes with memory on that grid
	routing                    // routes with memory on the true grid
	proved                     // no better plan is left
)

// How much is done in a round, and when a stage ends.
const (
	coarseMin      = 5 // minutes: what is learned on this grid serves on a finer one, and costs a fifth
	sweepsPerRound = 5
	mostSweeps     = 25
	routesPerRound = 3
	mostCoarse     = 36
	proveEvery     = 2    // rounds, while on the coarse grid
	slow           = 0.05 // share of the distance that a step must promise for sweeps to go on
	learned        = 2    // times as far from the plan as on the coarse grid: then that has no more to teach
	settled        = 0.1  // likewise, for prices to be good enough to see which routes must go
)

// advance lowers the ceiling by a round of work; best is the worth of the best plan.
func (b *bounder) advance(best Micro) {
	b.least = float64(best)
	b.work = 0
	b.rounds++
	if b.stage != sweeping {
		b.sweep = nil // its memory is wanted elsewhere
	}
	switch b.stage {
	case sweeping:
		b.sweepOn(best)
	case coarseRouting:
		for range routesPerRound {
			if !b.step(b.coarse, best) || b.steps >= mostCoarse {
				b.enter(routing)
				break
			}
		}
	case routing:
		if !b.step(b.t.p.GridMin, best) {
			b.enter(proved)
		}
	}
}

func (b *bounder) enter(next stage) {
	if next == coarseRouting && b.coarse == b.t.p.GridMin {
		next = routing
	}
	b.changed = next == routing
	b.stage, b.steps = next, 0
}

// sweepOn makes steps with the plain sweep until they promise little, then takes the bound on the true grid.
func (b *bounder) sweepOn(best Micro) {
	for range sweepsPerRound {
		if b.router.halt() {
			return
		}
		if b.steps > 0 {
			b.prices.next(float64(best))
		}
		b.steps++
		bound, route := b.swept(b.coarse)
		if bound <= best && b.coarse != b.t.p.GridMin {
			b.coarse, b.steps = b.t.p.GridMin, 0 // the session is too short for a coarse grid
			b.prices.restart(b.begin)
			break
		}
		b.prices.add(b.cutOf(route), float64(bound), float64(best))
		promised := b.prices.height - b.prices.model
		if b.steps >= mostSweeps || b.steps > 8 && promised < slow*(b.prices.height-float64(best)) {
			b.enter(coarseRouting)
			break
		}
	}
	copy(b.prices.trial, b.prices.center)
	bound, _ := b.swept(b.t.p.GridMin)
	b.lower(bound)
}

// aim sets the trial to the next prices, or back to the best so far if what routes remember has changed.
func (b *bounder) aim(best Micro) {
	b.aimed = true
	if !b.changed {
		b.prices.next(float64(best))
		if b.prices.height-b.prices.model < settled*(b.prices.height-float64(best)) {
			b.changed = b.rememberShares()
			if !b.changed && b.prices.dropLowered(float64(best)) {
				b.prices.next(float64(best))
			}
		}
	}
	if b.changed {
		copy(b.prices.trial, b.prices.center)
	}
}

// step takes the bound by routes with memory at the next prices. It is false when no route is better than
// the best plan.
func (b *bounder) step(grid int, best Micro) bool {
	if !b.aimed {
		b.aim(best)
	}
	b.aimed = false
	b.steps++
	bound, route := b.routed(grid, best)
	if b.router.halted {
		return true
	}
	if grid == b.t.p.GridMin {
		b.lower(bound)
	}
	if bound <= best {
		return false
	}
	if b.changed {
		b.changed = false
		b.prices.recentre(float64(bound))
		b.prices.model = float64(bound)
	}
	b.prices.add(b.cutOf(route), float64(bound), float64(best))
	b.learnFrom(route)
	return true
}

// learnFrom remembers what the route comes back to, and keeps it for a plan to be made of. A route that still
// has cycles although all of them are remembered comes from merged labels: more are kept from then on.
func (b *bounder) learnFrom(route []Slot) {
	const widest = 128
	b.route = route
	cyclic, more := b.remember(route)
	b.lowerCuts()
	if cyclic && !more && b.router.width < widest {
		b.router.width *= 2
	}
}

func (b *bounder) lower(bound Micro) {
	if !b.valid || bound < b.ceiling {
		b.ceiling, b.valid = bound, true
	}
}
