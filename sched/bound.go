package sched

import "slices"

// A Bound is a ceiling and what it was proved for. It bounds the plans that contain the problem's pins as they
// are and beside them only slots that keep every limit; whether pins break limits, alone or with one another,
// does not matter.
type Bound struct {
	Of       *Problem // with its pins, bars and time past
	Ceiling  Micro
	Complete bool // it bounds only plans that have a slot of every job that must be there and can be

	ways *ways // of the problem's slews; made when they are asked for
}

// BoundOf returns what was proved of a problem by solving it; false if that is nothing.
func BoundOf(p *Problem, r Result) (Bound, bool) {
	// The search proves of all plans what it proves while its own lacks a job that must be there.
	if !r.HasCeiling {
		return Bound{}, false
	}
	return Bound{Of: p, Ceiling: r.Ceiling, Complete: p.completeWith(r.Plan), ways: newWays(&p.Slew)}, true
}

// inBreak tells whether the slot overlaps a break.
func (p *Problem) inBreak(s Slot) bool {
	return slices.ContainsFunc(p.Breaks, func(b Span) bool { return s.Start < b.To && s.End > b.From })
}

// completeWith tells whether the plan has a slot of every job that must be there and can be.
func (p *Problem) completeWith(plan Plan) bool {
	for j := range p.Jobs {
		if p.mustHave(j) && !slices.ContainsFunc(plan.Slots, func(s Slot) bool { return p.Nodes[s.Node].Job == j }) {
			return false
		}
	}
	return true
}

// mustHave tells whether a plan must have a slot of the job: one that is barred, or for which there is no room in time
// to come, is not asked for, neither here nor by the search.
func (p *Problem) mustHave(job int) bool {
	j := &p.Jobs[job]
	return j.Must && !j.Barred && slices.ContainsFunc(p.Nodes, func(n Node) bool {
		return n.Job == job && slices.ContainsFunc(n.Open, func(w Window) bool {
			return slices.ContainsFunc(p.cut(w.Span), func(s Span) bool { return s.To-s.To%p.GridMin-s.From >= j.MinMin })
		})
	})
}

// Holds tells whether the plan is among those that are bounded. Which slots are pins is the problem's to say.
func (b Bound) Holds(plan Plan) bool {
	p := b.Of
	if b.Complete && !p.completeWith(plan) {
		return false
	}
	judged := plan.Clone()
	free := make([]bool, len(p.Jobs)) // jobs with a slot that is no pin
	for i := range judged.Slots {
		s := &judged.Slots[i]
		s.Pinned = slices.ContainsFunc(p.Pins, s.same) && !slices.ContainsFunc(judged.Slots[:i], s.same)
		if !s.Pinned {
			free[p.Nodes[s.Node].Job] = true
		}
	}
	for _, breach := range Verify(p, judged).Breaches {
		switch {
		case breach.Rule == RulePin: // it is missing
			return false
		case breach.Rule == RuleOnce && free[p.Nodes[judged.Slots[breach.Slot].Node].Job]:
			return false
		case !judged.Slots[breach.Slot].Pinned, breach.Other != None && !judged.Slots[breach.Other].Pinned:
			return false
		}
	}
	return true
}
