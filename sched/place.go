package sched

// A placement is where a slot of a job would go, and whether that breaks no rule.
type placement struct {
	slot  Slot
	worth Micro
	fits  bool
}

// hole returns the slot before and after a place in sorted slots: what a new slot there must respect.
// Slots skip..skip+gone are looked through, as if they were not there.
type hole struct {
	p      *Problem
	before *Slot
	after  *Slot
}

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

// ready returns the first minute at which a slot of the node may start in the hole.
func (h hole) ready(node int) int {
	from, end := None, 0
	if h.before != nil {
		from, end = h.before.Node, h.before.End
	}
	return h.p.ReadyMin(from, end, node, max(end, h.p.FromMin))
}

// latest returns the last minute at which a slot of the node may end in the hole, or None.
func (h hole) latest(node int) int {
	if h.after == nil {
		return h.p.Minutes - h.p.Minutes%h.p.GridMin
	}
	first := max(0, h.p.FromMin)
	if h.before != nil {
		first = max(first, h.before.End)
	}
	for end := min(h.after.Start, h.p.Minutes); end > first; end-- {
		if end%h.p.GridMin == 0 && h.p.SetupBetween(node, end, h.after.Node, h.after.Start).ReadyMin <= h.after.Start {
			return end
		}
	}
	return None
}

// best returns the placement of most worth for the job in the hole among those that cover minute at; if
// none does, the one that begins nearest to it. It is false if nothing fits.
func (h hole) best(job, at int) (best placement, ok bool) {
	far := 0
	for node := range h.p.Nodes {
		if h.p.Nodes[node].Job != job {
			continue
		}
		ready, latest := h.ready(node), h.latest(node)
		if latest == None {
			continue
		}
		for _, w := range h.p.Nodes[node].Open {
			for _, s := range h.p.cut(w.Span) {
				from, to := max(s.From, ready), min(s.To, latest)
				to -= to % h.p.GridMin
				place, away, found := h.within(node, Span{From: from, To: to}, at)
				if found && (!ok || away < far || away == far && place.worth > best.worth) {
					best, far, ok = place, away, true
				}
			}
		}
	}
	return best, ok
}

// within places a slot of the node inside the span, whose end lies on the grid. away is how far minute
// at is from the slot, 0 if the slot covers it.
func (h hole) within(node int, s Span, at int) (best placement, away int, ok bool) {
	job := h.p.Nodes[node].Job
	j := &h.p.Jobs[job]
	if s.To-s.From < j.MinMin {
		return placement{}, 0, false
	}
	try := func(end int) {
		start := max(s.From, end-j.MaxMin)
		if end-start < j.MinMin {
			return
		}
		off := max(0, start-at, at-end)
		worth := h.p.JobWorth(job, start, end)
		if !ok || off < away || off == away && worth > best.worth {
			best, away, ok = placement{Slot{Node: node, Start: start, End: end}, worth, true}, off, true
		}
	}
	// Every end within reach of the minute; beyond it, the nearest that is long enough.
	g := h.p.GridMin
	for end := min(s.To, max(at+j.MaxMin, s.From+j.MaxMin)); end >= max(s.From+j.MinMin, at); end-- {
		if end%g == 0 {
			try(end)
		}
	}
	if !ok {
		for end := s.To; end >= s.From+j.MinMin && !ok; end-- {
			if end%g == 0 {
				try(end)
			}
		}
	}
	return best, away, ok
}
