package sched

import (
	"fmt"
	"strings"
)

// ReasonKind says why a job has no slot.
type ReasonKind string

// The reasons, in the order in which they are looked for.
const (
	Barred      ReasonKind = "barred"        // excluded by the observer
	NotUp       ReasonKind = "not up"        // never long enough above its limits
	SunTooClose ReasonKind = "sun too close" // the Sun limit leaves too little of it
	Eclipsed    ReasonKind = "eclipsed"      // eclipses and breaks leave too little of it
	Past        ReasonKind = "past"          // its time in this session is over
	TooLow      ReasonKind = "too low"       // so low or so short that its best slot reaches too little to be of use
	NotDue      ReasonKind = "not due"       // its best slot is worth nothing to speak of
	NoRoom      ReasonKind = "no room"       // pins, breaks and setups leave no place for it
	Outranked   ReasonKind = "outranked"     // putting it in costs worth
	Free        ReasonKind = "fits"          // it fits as things are, and adds worth
)

// A Reason is the one reason why a job has no slot, with its number.
type Reason struct {
	Job  int
	Kind ReasonKind
	Text string
}

// LeftOut returns one reason for each job, source and receiver, that has no slot in the plan, in job order.
func LeftOut(p *Problem, plan Plan) []Reason {
	slots := plan.Sorted().Slots
	has := make([]bool, len(p.Jobs))
	worth := make([]Micro, len(slots))
	for i, s := range slots {
		job := p.Nodes[s.Node].Job
		has[job] = true
		worth[i] = p.JobWorth(job, s.Start, s.End)
	}
	var reasons []Reason
	for job := range p.Jobs {
		if !has[job] {
			reasons = append(reasons, p.whyNot(slots, worth, job))
		}
	}
	return reasons
}

func (p *Problem) whyNot(slots []Slot, worth []Micro, job int) Reason {
	j, f := &p.Jobs[job], p.Jobs[job].Facts
	longest, later := p.longestOpen(job)
	reason := func(kind ReasonKind, format string, args ...any) Reason {
		return Reason{Job: job, Kind: kind, Text: fmt.Sprintf(format, args...)}
	}
	switch {
	case j.Barred:
		return reason(Barred, "barred from this session")
	case longest < j.MinMin && f.UpMin < j.MinMin:
		return reason(NotUp, "within its limits for %d of the %d min needed; highest %.1f°", f.UpMin, j.MinMin, f.HighestEl)
	case longest < j.MinMin && f.SunMin < j.MinMin:
		return reason(SunTooClose, "%.1f° from the Sun, limit %.1f°: leaves %d of the %d min needed", f.SunDeg, f.SunLimit, f.SunMin, j.MinMin)
	case longest < j.MinMin && f.ClearMin < j.MinMin:
		return reason(Eclipsed, "eclipses and breaks leave %d of the %d min needed", f.ClearMin, j.MinMin)
	case longest < j.MinMin:
		return reason(NotUp, "the mount can stay on it for %d of the %d min needed", longest, j.MinMin)
	case later < j.MinMin:
		return reason(Past, "%d min of it are left after %s; %d min needed", later, p.clock(p.FromMin), j.MinMin)
	}
	if best := p.bestSlotWorth(job); best < tellable {
		if share, least := p.mostGathered(job); share < least {
			return reason(TooLow, "its best slot reaches %.2f of the wanted, of use from %.2f on; highest %.1f°", share, least, f.HighestEl)
		}
		if f.DebtAim == "" {
			return reason(NotDue, "not due: its best slot is worth %s", best)
		}
		return reason(NotDue, "not due: debt %.2f (%s); its best slot is worth %s", f.Debt, f.DebtAim, best)
	}
	return p.cheapest(slots, worth, job)
}

// longestOpen returns the job's longest stretch within limits, session and breaks, and the longest that
// is left of these after the time past.
func (p *Problem) longestOpen(job int) (all, later int) {
	whole := *p
	whole.FromMin = 0
	for _, n := range p.Nodes {
		if n.Job != job {
			continue
		}
		for _, w := range n.Open {
			for _, s := range whole.cut(w.Span) {
				all = max(all, s.To-s.From)
				later = max(later, s.To-max(s.From, p.FromMin))
			}
		}
	}
	return all, later
}

// bestSlotWorth returns the most that a slot of the job can be worth in this session.
func (p *Problem) bestSlotWorth(job int) Micro {
	j := &p.Jobs[job]
	var best Micro
	for _, n := range p.Nodes {
		if n.Job != job {
			continue
		}
		for _, w := range n.Open {
			for _, s := range p.cut(w.Span) {
				for end := s.From + j.MinMin; end <= s.To; end++ {
					if end%p.GridMin == 0 {
						best = max(best, p.JobWorth(job, max(s.From, end-j.MaxMin), end))
					}
				}
			}
		}
	}
	return best
}

// tellable is the least worth that is not shown as 0.00.
const tellable = Unit / 200

// mostGathered returns, for the term that is needed and comes nearest to being of use, the share of the
// wanted that the job's best slot reaches and the share from which on it is of use.
func (p *Problem) mostGathered(job int) (share, least float64) {
	j := &p.Jobs[job]
	nearest := -1.0
	for k := range j.Terms {
		t := &j.Terms[k]
		if t.Scale < tellable || t.Least == 0 {
			continue
		}
		var most int32
		for _, n := range p.Nodes {
			if n.Job != job {
				continue
			}
			for _, w := range n.Open {
				for _, s := range p.cut(w.Span) {
					for end := s.From + j.MinMin; end <= s.To; end++ {
						most = max(most, t.gathered(max(s.From, end-j.MaxMin), end))
					}
				}
			}
		}
		if near := float64(most) / float64(t.Least); near > nearest {
			nearest, share, least = near, float64(most)/float64(t.Wanted), float64(t.Least)/float64(t.Wanted)
		}
	}
	return share, least
}

// mostDisplaced is how many neighbouring slots an insertion may push out while looking for the cheapest.
const mostDisplaced = 3

// cheapest tries the job in every gap of the plan, with up to mostDisplaced neighbouring slots taken out,
// and tells what the cheapest way costs.
func (p *Problem) cheapest(slots []Slot, worth []Micro, job int) Reason {
	var best placement
	var way displacement
	found := false
	for at := 0; at <= len(slots); at++ {
		var lost Micro
		for gone := 0; gone <= mostDisplaced && at+gone <= len(slots); gone++ {
			if gone > 0 {
				if slots[at+gone-1].Pinned {
					break
				}
				lost += worth[at+gone-1]
			}
			h := holeAt(p, slots, at, gone)
			if found && lost-p.mostIn(h, job) >= way.cost-best.worth {
				continue
			}
			place, ok := h.most(job)
			if ok && (!found || lost-place.worth < way.cost-best.worth) {
				best, way, found = place, displacement{at: at, gone: gone, cost: lost}, true
			}
		}
	}
	if !found {
		return Reason{Job: job, Kind: NoRoom, Text: fmt.Sprintf("no room: no gap of %d min within its limits, even with %d slots taken out", p.Jobs[job].MinMin, mostDisplaced)}
	}
	span := p.clock(best.slot.Start) + "–" + p.clock(best.slot.End)
	if way.gone == 0 {
		return Reason{Job: job, Kind: Free, Text: fmt.Sprintf("fits at %s as things are, and would add %s", span, best.worth)}
	}
	names := make([]string, way.gone)
	for i := range names {
		names[i] = fmt.Sprintf("%s (%s)", p.nodeName(slots[way.at+i].Node), worth[way.at+i])
	}
	verb := "would cost"
	cost := way.cost - best.worth
	if cost < 0 {
		verb, cost = "would gain", -cost
	}
	return Reason{Job: job, Kind: Outranked, Text: fmt.Sprintf("%s %s: %s at %s displaces %s", verb, cost, best.worth, span, strings.Join(names, ", "))}
}

// mostIn bounds what the job can be worth in the hole, without looking at setups.
func (p *Problem) mostIn(h hole, job int) Micro {
	from, to := 0, p.Minutes
	if h.before != nil {
		from = h.before.End
	}
	if h.after != nil {
		to = h.after.Start
	}
	if to-from < p.Jobs[job].MinMin {
		return 0
	}
	return p.JobWorth(job, from, to)
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
