package sched

// cycles visits each way in which the route comes back to a job more often than it may.
func (b *bounder) cycles(route []Slot, visit func(job int, between []Slot)) (some bool) {
	stops := map[int][]int{}
	for i, s := range route {
		job := b.t.p.Nodes[s.Node].Job
		stops[job] = append(stops[job], i)
		if n := len(stops[job]) - 1 - b.t.left(b.used, job); n >= 0 {
			some = true
			visit(job, route[stops[job][n]+1:i])
		}
	}
	return some
}

// remember makes the nodes within each cycle of the route keep its job in mind, so that the route is none any
// more. It tells whether the route had cycles, and whether anything is remembered that was not.
func (b *bounder) remember(route []Slot) (cyclic, more bool) {
	r := b.router
	cyclic = b.cycles(route, func(job int, between []Slot) {
		if r.jobs[job].slots == 0 {
			slots := b.t.left(b.used, job)
			if b.bitsUsed+slots > memoryBits {
				return
			}
			r.jobs[job] = jobMemory{b.bitsUsed, slots}
			b.bitsUsed += slots
		}
		for _, s := range between {
			if keep := r.keep[s.Node].whole(r.jobs[job]); keep != r.keep[s.Node] {
				r.keep[s.Node], more = keep, true
			}
		}
	})
	return cyclic, more
}

// rememberShares remembers what the routes come back to that make the bound what it is at the centre: no
// prices bring it lower while they are there. It is false if all of them are plans.
func (b *bounder) rememberShares() (more bool) {
	for i := range b.prices.cuts {
		if b.prices.cuts[i].share > 0 {
			_, m := b.remember(b.prices.cuts[i].route)
			more = more || m
		}
	}
	if more {
		b.lowerCuts()
	}
	return more
}

// lowerCuts lowers the cuts of routes that are none any more, once, by all that the best bound lies above the best plan. They
// are no longer true, but still tell which jobs are asked for too often; the bound itself never comes from a cut. The
// newest waits for the next one: it says where the trial was.
func (b *bounder) lowerCuts() {
	for i := range max(0, len(b.prices.cuts)-1) {
		c := &b.prices.cuts[i]
		if !c.lowered && !b.router.allows(c.route) {
			c.lowered = true
			c.value -= max(0, b.prices.height-b.least)
		}
	}
}

// allows tells whether the route comes back to no job that is still remembered.
func (r *router) allows(route []Slot) bool {
	var m memory
	for _, s := range route {
		job := r.jobs[r.t.p.Nodes[s.Node].Job]
		if m.full(job) {
			return false
		}
		m = m.and(r.keep[s.Node]).with(job)
	}
	return true
}
