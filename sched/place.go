package sched

// A placement is where a slot of a job would go, and what it would be worth.
type placement struct {
	slot  Slot
	worth Micro
}

// A hole is a place in a plan: the slots before and after it are what a new slot there must respect.
type hole struct {
	p      *Problem
	before *Slot
	after  *Slot
}

// holeAt returns the hole before slots[at] in sorted slots, as if gone slots from there on were not there.
func holeAt(p *Problem, slots []Slot, at, gone int) hole {
	h := hole{p: p}
	if at > 0 {
		h.before = &slots[at-1]
	}
	if at+gone < len(slots) {
		h.after = &slots[at+gone]
	}
	return h
}

// ready returns the first minute, not before notBefore, at which a slot of the node may start in the hole.
func (h hole) ready(node, notBefore int) int {
	from, end := None, 0
	if h.before != nil {
		from, end = h.before.Node, h.before.End
	}
	return h.p.ReadyMin(from, end, node, max(notBefore, end, h.p.FromMin))
}

// leaves tells whether a slot of the node may end at minute end: on the grid and in time for the slot
// after the hole.
func (h hole) leaves(node, end int) bool {
	if end%h.p.GridMin != 0 {
		return false
	}
	return h.after == nil || end <= h.after.Start && h.p.SetupBetween(node, end, h.after.Node, h.after.Start).ReadyMin <= h.after.Start
}

// rooms returns the stretches of the hole in which the node may be on source: between breaks, and after
// its setup. Not every end in them is in time for the slot after the hole.
func (h hole) rooms(node int) []Span {
	least := h.p.Jobs[h.p.Nodes[node].Job].MinMin
	from, to := 0, h.p.Minutes
	if h.before != nil {
		from = h.before.End
	}
	if h.after != nil {
		to = h.after.Start
	}
	var rooms []Span
	for _, w := range h.p.Nodes[node].Open {
		if min(w.To, to)-max(w.From, from) < least {
			continue
		}
		for _, s := range h.p.cut(w.Span) {
			s.To = min(s.To, to)
			if s.To-max(s.From, from) < least {
				continue
			}
			if s.From = h.ready(node, s.From); s.To-s.From >= least {
				rooms = append(rooms, s)
			}
		}
	}
	return rooms
}

// best returns the placement of most worth for the job in the hole among those that cover minute at; if
// none does, the one that begins nearest to it. It is false if nothing fits.
func (h hole) best(job, at int) (best placement, ok bool) {
	far := 0
	for node := range h.p.Nodes {
		if h.p.Nodes[node].Job != job {
			continue
		}
		for _, s := range h.rooms(node) {
			place, away, found := h.within(node, s, at)
			if found && (!ok || away < far || away == far && place.worth > best.worth) {
				best, far, ok = place, away, true
			}
		}
	}
	return best, ok
}

// within places a slot of the node inside the span. away is how far minute
// at is from the slot, 0 if the slot covers it.
func (h hole) within(node int, s Span, at int) (best placement, away int, ok bool) {
	job := h.p.Nodes[node].Job
	j := &h.p.Jobs[job]
	try := func(end int) {
		start := max(s.From, end-j.MaxMin)
		if end-start < j.MinMin || !h.leaves(node, end) {
			return
		}
		off := max(0, start-at, at-end)
		worth := h.p.JobWorth(job, start, end)
		if !ok || off < away || off == away && worth > best.worth {
			best, away, ok = placement{Slot{Node: node, Start: start, End: end}, worth}, off, true
		}
	}
	// Every end within reach of the minute; beyond it, the nearest that is long enough.
	for end := min(s.To, max(at, s.From)+j.MaxMin); end >= max(s.From+j.MinMin, at); end-- {
		try(end)
	}
	for end := s.To; end >= s.From+j.MinMin && !ok; end-- {
		try(end)
	}
	return best, away, ok
}

// most returns the placement of most worth in the hole.
func (h hole) most(job int) (best placement, ok bool) {
	j := &h.p.Jobs[job]
	for node := range h.p.Nodes {
		if h.p.Nodes[node].Job != job {
			continue
		}
		for _, s := range h.rooms(node) {
			for end := s.To; end >= s.From+j.MinMin; end-- {
				if !h.leaves(node, end) {
					continue
				}
				start := max(s.From, end-j.MaxMin)
				if worth := h.p.JobWorth(job, start, end); !ok || worth > best.worth {
					best, ok = placement{Slot{Node: node, Start: start, End: end}, worth}, true
				}
				if start == s.From {
					break // shorter slots from here on are worth no more
				}
			}
		}
	}
	return best, ok
}
