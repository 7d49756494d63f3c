package sched

import "fmt"

// A TermShare is one aim's part in the worth of a slot.
type TermShare struct {
	Kind   TermKind
	Label  string
	Worth  Micro
	Credit float64 // the curve's value: 1 where the wanted is reached
	Why    string  // where the need comes from
}

// SlotWhy takes a slot apart: where its worth comes from, and what bounds it.
type SlotWhy struct {
	Terms    []TermShare
	StartBy  string // what keeps it from beginning earlier
	EndBy    string // what keeps it from ending later
	NextBest string // the best other use of its time
}

// Explain says where the worth of a slot comes from, what bounds its start and its end, and what else its
// time could bring. The slot is named by its index in the plan as given.
func Explain(p *Problem, plan Plan, slot int) SlotWhy {
	if slot < 0 || slot >= len(plan.Slots) {
		return SlotWhy{}
	}
	s := plan.Slots[slot]
	slots := plan.Sorted().Slots
	at := 0
	for at < len(slots)-1 && slots[at] != s {
		at++
	}
	h := holeAt(p, slots, at, 1)
	return SlotWhy{
		Terms:    p.shares(s),
		StartBy:  h.startBy(s),
		EndBy:    h.endBy(s),
		NextBest: h.nextBest(slots, at),
	}
}

func (p *Problem) shares(s Slot) []TermShare {
	terms := p.Jobs[p.Nodes[s.Node].Job].Terms
	shares := make([]TermShare, len(terms))
	for i := range terms {
		t := &terms[i]
		shares[i] = TermShare{Kind: t.Kind, Label: t.Label, Worth: t.Worth(s.Start, s.End), Credit: t.Credit(s.Start, s.End), Why: t.Why}
	}
	return shares
}

// startBy names the latest of the things that bound the start.
func (h hole) startBy(s Slot) string {
	p := h.p
	if s.Pinned {
		return "pinned at " + p.clock(s.Start)
	}
	from, end := None, 0
	after := "the session's start"
	if h.before != nil {
		from, end = h.before.Node, h.before.End
		after = p.nodeName(from)
	}
	setup := p.SetupBetween(from, end, s.Node, s.Start)
	if setup.Break != None {
		after = "the break"
	}
	w, inside := p.windowOf(s)
	switch {
	case s.Start <= setup.ReadyMin:
		return fmt.Sprintf("%s after %s", p.describe(setup, s.Node), after)
	case inside && s.Start == w.From:
		return fmt.Sprintf("within its limits from %s%s", p.clock(w.From), limit(w.OpensBy))
	case s.Start == p.FromMin:
		return "it is " + p.clock(p.FromMin) + " already"
	case s.End-s.Start >= p.Jobs[p.Nodes[s.Node].Job].MaxMin:
		return fmt.Sprintf("%d min are the most that are wanted; it could begin at %s", s.End-s.Start, p.clock(max(setup.ReadyMin, w.From)))
	}
	return fmt.Sprintf("nothing: it could begin at %s", p.clock(max(setup.ReadyMin, w.From)))
}

// endBy names the first of the things that bound the end.
func (h hole) endBy(s Slot) string {
	p := h.p
	if s.Pinned {
		return "pinned until " + p.clock(s.End)
	}
	w, inside := p.windowOf(s)
	switch g := p.GridMin; {
	case s.End-s.Start+g > p.Jobs[p.Nodes[s.Node].Job].MaxMin:
		return fmt.Sprintf("%d min are the most that are wanted", p.Jobs[p.Nodes[s.Node].Job].MaxMin)
	case inside && s.End+g > w.To:
		return fmt.Sprintf("within its limits until %s%s", p.clock(w.To), limit(w.ClosesBy))
	case s.End+g > p.Minutes:
		return "the session's end at " + p.clock(p.Minutes)
	}
	for _, b := range p.Breaks {
		if b.From >= s.End && b.From < s.End+p.GridMin {
			return "the break from " + p.clock(b.From)
		}
	}
	if h.after == nil {
		return "nothing: the rest of the session is free"
	}
	setup := p.SetupBetween(s.Node, s.End+p.GridMin, h.after.Node, h.after.Start)
	name := p.nodeName(h.after.Node)
	if setup.ReadyMin > h.after.Start {
		return fmt.Sprintf("%s before %s at %s", p.describe(setup, h.after.Node), name, p.clock(h.after.Start))
	}
	return fmt.Sprintf("nothing: there is time until %s at %s", name, p.clock(h.after.Start))
}

// windowOf returns the window of the slot's node that it lies in.
func (p *Problem) windowOf(s Slot) (Window, bool) {
	for _, w := range p.Nodes[s.Node].Open {
		if s.Start >= w.From && s.End <= w.To {
			return w, true
		}
	}
	return Window{}, false
}

// nextBest finds the job that would bring most in the slot's place.
func (h hole) nextBest(slots []Slot, at int) string {
	p := h.p
	own := p.Nodes[slots[at].Node].Job
	var best placement
	found := false
	for job := range p.Jobs {
		if job == own || p.Jobs[job].Barred || spentOutside(p, slots, displacement{at: at, gone: 1}, job) {
			continue
		}
		if place, ok := h.most(job); ok && (!found || place.worth > best.worth) {
			best, found = place, true
		}
	}
	if !found || best.worth == 0 {
		return "nothing else fits here"
	}
	return fmt.Sprintf("%s from %s to %s would bring %s here", p.nodeName(best.slot.Node), p.clock(best.slot.Start), p.clock(best.slot.End), best.worth)
}
