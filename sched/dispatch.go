package sched

// Dispatch plans as one would by taking, whenever the telescope is free, the source that brings the
// most at that moment: each at the length where it brings most per minute, setup included. It keeps the
// pins and every rule, and is what Solve is measured against.
func Dispatch(p *Problem) Plan {
	slots := pinned(p)
	for at := 0; at <= len(slots); {
		best, found := dispatchNext(p, slots, at)
		if !found {
			at++
			continue
		}
		slots = append(slots[:at], append([]Slot{best}, slots[at:]...)...)
		at++
	}
	return Plan{Slots: slots}
}

// dispatchNext returns the slot of most worth among those that can begin soonest before slots[at].
// Waiting for a source to rise counts as time spent on it.
func dispatchNext(p *Problem, slots []Slot, at int) (best Slot, found bool) {
	h := holeAt(p, slots, at, 0)
	free := p.FromMin
	if h.before != nil {
		free = max(free, h.before.End)
	}
	var most Micro
	for node := range p.Nodes {
		job := p.Nodes[node].Job
		if p.Jobs[job].Barred || spentOutside(p, slots, displacement{at: at}, job) {
			continue
		}
		slot, worth, ok := h.dispatchSlot(node, free)
		if ok && worth > most {
			best, most, found = slot, worth, true
		}
	}
	return best, found
}

// dispatchSlot returns the node's slot from the first minute it can be on source within the next ten
// minutes after its setup, at its best length.
func (h hole) dispatchSlot(node, free int) (best Slot, worth Micro, ok bool) {
	p := h.p
	j := &p.Jobs[p.Nodes[node].Job]
	soonest := h.ready(node, 0)
	for _, s := range h.rooms(node) {
		if s.From > soonest+10 {
			break
		}
		rate := -1.0
		for e := s.From + j.MinMin; e <= min(s.To, s.From+j.MaxMin); e++ {
			if !h.leaves(node, e) {
				continue
			}
			w := p.JobWorth(p.Nodes[node].Job, s.From, e)
			if r := float64(w) / float64(e-free); r > rate {
				best, worth, rate, ok = Slot{Node: node, Start: s.From, End: e}, w, r, true
			}
		}
		if ok {
			break
		}
	}
	return best, worth, ok
}
