package sched

import (
	"fmt"
	"strings"
)

// What an insertion may do to the slots around it while the cheapest is looked for.
const (
	mostDisplaced = 3 // neighbouring slots that may go
	mostAround    = 1 // with more than this gone, those that stay are not shortened as well
)

// shortenings are the minutes by which a neighbour may be shortened; rounded up to the grid.
var shortenings = []int{3, 6, 10, 15, 20}

// A shortened slot is one of the plan's with some minutes taken from its end or its start.
type shortened struct {
	slot Slot
	min  int
	loss Micro
}

// An insertion is a way to put a job into a plan.
type insertion struct {
	place         placement
	at, gone      int // slots at..at+gone go
	before, after *shortened
	lost          Micro // worth of what goes and of what is taken from the neighbours
}

func (i insertion) cost() Micro { return i.lost - i.place.worth }

// An inserter tries jobs in every gap of a plan.
type inserter struct {
	p     *Problem
	slots []Slot
	worth []Micro
	ends  [][]shortened // by slot: as it is, then with less and less of its end
	heads [][]shortened // likewise of its start
}

func newInserter(p *Problem, slots []Slot) *inserter {
	in := &inserter{p: p, slots: slots}
	for _, s := range slots {
		job := p.Nodes[s.Node].Job
		worth := p.JobWorth(job, s.Start, s.End)
		in.worth = append(in.worth, worth)
		ends, heads := []shortened{{slot: s}}, []shortened{{slot: s}}
		for _, by := range shortenings {
			by = (by + p.GridMin - 1) / p.GridMin * p.GridMin
			if s.Pinned || s.End-s.Start-by < p.Jobs[job].MinMin {
				continue
			}
			if s.End-by >= p.FromMin {
				end := s
				end.End -= by
				ends = append(ends, shortened{end, by, worth - p.JobWorth(job, end.Start, end.End)})
			}
			if s.Start >= p.FromMin {
				head := s
				head.Start += by
				heads = append(heads, shortened{head, by, worth - p.JobWorth(job, head.Start, head.End)})
			}
		}
		in.ends, in.heads = append(in.ends, ends), append(in.heads, heads)
	}
	return in
}

// none stands for the neighbour that is not there at the ends of the session.
var none = []shortened{{}}

// free finds the gap of the plan as it is in which the job is worth most.
func (in *inserter) free(job int) (best placement, found bool) {
	for at := 0; at <= len(in.slots); at++ {
		if place, ok := holeAt(in.p, in.slots, at, 0).most(job); ok && (!found || place.worth > best.worth) {
			best, found = place, true
		}
	}
	return best, found && best.worth >= tellable
}

// cheapest finds the way of putting the job in that costs the least worth: in every gap, with up to
// mostDisplaced neighbouring slots taken out and those beside them shortened. Pins stay, and so do the jobs
// that must be there.
func (in *inserter) cheapest(job int) (best insertion, found bool) {
	for at := 0; at <= len(in.slots); at++ {
		var lost Micro
		for gone := 0; gone <= mostDisplaced && at+gone <= len(in.slots); gone++ {
			if gone > 0 {
				if s := in.slots[at+gone-1]; s.Pinned || in.p.Jobs[in.p.Nodes[s.Node].Job].Must {
					break
				}
				lost += in.worth[at+gone-1]
			}
			in.try(job, insertion{at: at, gone: gone, lost: lost}, &best, &found)
		}
	}
	return best, found
}

// try looks for the cheapest shortening of the neighbours for an insertion with these slots gone.
func (in *inserter) try(job int, way insertion, best *insertion, found *bool) {
	ends, heads := none, none
	if way.at > 0 {
		ends = in.ends[way.at-1]
	}
	if next := way.at + way.gone; next < len(in.slots) {
		heads = in.heads[next]
	}
	if way.gone > mostAround {
		ends, heads = ends[:1], heads[:1]
	}
	for e := range ends {
		for a := range heads {
			now := way
			h := hole{p: in.p}
			if way.at > 0 {
				now.before, h.before = &ends[e], &ends[e].slot
			}
			if way.at+way.gone < len(in.slots) {
				now.after, h.after = &heads[a], &heads[a].slot
			}
			now.lost += ends[e].loss + heads[a].loss
			if *found && now.lost-h.mostWorth(job) >= best.cost() {
				continue
			}
			place, ok := h.most(job)
			now.place = place
			if ok && (!*found || now.cost() < best.cost()) {
				*best, *found = now, true
			}
		}
	}
}

// mostWorth bounds what the job can be worth in the hole, without looking at limits and setups.
func (h hole) mostWorth(job int) Micro {
	from, to := 0, h.p.Minutes
	if h.before != nil {
		from = h.before.End
	}
	if h.after != nil {
		to = h.after.Start
	}
	if to-from < h.p.Jobs[job].MinMin {
		return 0
	}
	return h.p.JobWorth(job, from, to)
}

// reason tells what the cheapest way of putting the job in would do.
func (in *inserter) reason(job int) Reason {
	p := in.p
	if place, ok := in.free(job); ok {
		return Reason{Job: job, Kind: Free, Text: fmt.Sprintf("fits at %s as things are, and would add %s", p.span(place.slot), place.worth)}
	}
	best, found := in.cheapest(job)
	if !found {
		return Reason{Job: job, Kind: NoRoom, Text: fmt.Sprintf(
			"no room: no gap of %d min within its limits, even with %d slots taken out", p.Jobs[job].MinMin, mostDisplaced)}
	}
	verb, cost := "would cost", best.cost()
	if cost < 0 {
		verb, cost = "would gain", -cost
	}
	return Reason{Job: job, Kind: Outranked, Cost: best.cost(), Text: fmt.Sprintf("%s %s: %s at %s %s", verb, cost, best.place.worth, p.span(best.place.slot), in.effects(best))}
}

// effects names what an insertion takes from the rest of the plan.
func (in *inserter) effects(i insertion) string {
	var effects []string
	for k := range i.gone {
		name := in.p.nodeName(in.slots[i.at+k].Node)
		effects = append(effects, fmt.Sprintf("displaces %s (%s)", name, in.worth[i.at+k]))
	}
	for _, s := range []*shortened{i.before, i.after} {
		if s != nil && s.min > 0 {
			effects = append(effects, fmt.Sprintf("takes %d min (%s) from %s", s.min, s.loss, in.p.nodeName(s.slot.Node)))
		}
	}
	if len(effects) == 0 {
		return "fits as things are"
	}
	return strings.Join(effects, ", ")
}
