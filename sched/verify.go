package sched

import (
	"fmt"
	"slices"
)

// Rule is one of the things a plan must respect.
type Rule string

// The rules.
const (
	RuleSession Rule = "session" // within the session
	RuleBreak   Rule = "break"   // outside the breaks
	RuleWindow  Rule = "window"  // within the node's limits for every second on source
	RuleOverlap Rule = "overlap" // one slot at a time
	RuleSetup   Rule = "setup"   // slew, receiver change and overhead have room before the slot
	RuleLength  Rule = "length"  // neither shorter nor longer than is of use
	RuleOnce    Rule = "once"    // not more slots than the job may have
	RuleGrid    Rule = "grid"    // ends on the session's grid
	RulePin     Rule = "pin"     // pins exactly as pinned
	RuleBar     Rule = "bar"     // nothing barred
	RulePast    Rule = "past"    // nothing new in time already past
)

// A Breach is one rule broken by one slot.
type Breach struct {
	Slot  int    // index into the plan's slots; None for a pin that is missing
	Other int    // the other slot concerned, or None
	Rule  Rule   //
	Text  string // in plain words, with names, UTC and numbers
}

// A Verdict is what the judge finds in a plan.
type Verdict struct {
	Breaches     []Breach // in slot order
	Worth        Micro
	MissingMusts []int // jobs that must be in the plan, could be observed, and have no slot
}

// Verify judges a plan: every rule it breaks, and its worth added up again. It needs a problem that
// passes Check and a plan whose slots name existing nodes; their order does not matter.
func Verify(p *Problem, plan Plan) Verdict {
	v := verifier{p: p, slots: plan.Slots}
	order := make([]int, len(plan.Slots))
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, func(a, b int) int { return compareSlots(v.slots[a], v.slots[b]) })
	previous := None
	for _, i := range order {
		v.alone(i)
		v.after(previous, i)
		if previous == None || v.slots[i].End >= v.slots[previous].End {
			previous = i
		}
	}
	v.once(order)
	v.pins()
	slices.SortStableFunc(v.breaches, func(a, b Breach) int { return a.Slot - b.Slot })
	return Verdict{Breaches: v.breaches, Worth: p.PlanWorth(plan), MissingMusts: v.missingMusts()}
}

type verifier struct {
	p        *Problem
	slots    []Slot
	breaches []Breach
}

func (v *verifier) breach(slot, other int, rule Rule, format string, args ...any) {
	v.breaches = append(v.breaches, Breach{Slot: slot, Other: other, Rule: rule, Text: fmt.Sprintf(format, args...)})
}

// alone judges a slot by itself.
func (v *verifier) alone(i int) {
	p, s := v.p, v.slots[i]
	job := p.Jobs[p.Nodes[s.Node].Job]
	if s.Start < 0 {
		v.breach(i, None, RuleSession, "starts %d min before the session does at %s", -s.Start, p.clock(0))
	}
	if s.End > p.Minutes {
		v.breach(i, None, RuleSession, "ends %d min after the session does at %s", s.End-p.Minutes, p.clock(p.Minutes))
	}
	length := s.End - s.Start
	switch {
	case length <= 0:
		v.breach(i, None, RuleLength, "ends at %s, not after its start at %s", p.clock(s.End), p.clock(s.Start))
	case length < job.MinMin:
		v.breach(i, None, RuleLength, "%d min on source: shorter than %d min is of no use", length, job.MinMin)
	case length > job.MaxMin:
		v.breach(i, None, RuleLength, "%d min on source: at most %d min are wanted", length, job.MaxMin)
	}
	for _, b := range p.Breaks {
		if s.Start < b.To && s.End > b.From {
			v.breach(i, None, RuleBreak, "runs %d min into the break from %s to %s",
				min(s.End, b.To)-max(s.Start, b.From), p.clock(b.From), p.clock(b.To))
		}
	}
	v.window(i)
	if job.Barred {
		v.breach(i, None, RuleBar, "%s is barred from this session", job.Source)
	}
	if s.Pinned {
		return
	}
	if s.End%p.GridMin != 0 {
		v.breach(i, None, RuleGrid, "ends at minute %d of the session: not a multiple of the %d min grid", s.End, p.GridMin)
	}
	if s.Start < p.FromMin {
		v.breach(i, None, RulePast, "starts at %s, but it is already %s", p.clock(s.Start), p.clock(p.FromMin))
	}
}

// window tells by which limit a slot is out, measured from the window it overlaps most.
func (v *verifier) window(i int) {
	p, s := v.p, v.slots[i]
	open := p.Nodes[s.Node].Open
	if len(open) == 0 {
		v.breach(i, None, RuleWindow, "%s is never within its limits in this session", p.nodeName(s.Node))
		return
	}
	best, bestIn := 0, s.inside(open[0].Span)
	for k, w := range open {
		if in := s.inside(w.Span); in > bestIn {
			best, bestIn = k, in
		}
	}
	w := open[best]
	if s.Start < w.From {
		v.breach(i, None, RuleWindow, "starts %d min before it is within limits at %s%s", w.From-s.Start, p.clock(w.From), limit(w.OpensBy))
	}
	if s.End > w.To {
		v.breach(i, None, RuleWindow, "ends %d min after it leaves its limits at %s%s", s.End-w.To, p.clock(w.To), limit(w.ClosesBy))
	}
}

func limit(by string) string {
	if by == "" {
		return ""
	}
	return " (" + by + ")"
}

// inside returns the minutes of the slot within the span; below zero, how far apart they are.
func (s Slot) inside(w Span) int { return min(s.End, w.To) - max(s.Start, w.From) }

// after judges the time between a slot and the one before it.
func (v *verifier) after(previous, i int) {
	p, s := v.p, v.slots[i]
	from, end := None, 0
	if previous != None {
		from, end = v.slots[previous].Node, v.slots[previous].End
		if s.Start < end {
			v.breach(i, previous, RuleOverlap, "overlaps %s by %d min: that ends at %s",
				p.nodeName(from), min(end, s.End)-s.Start, p.clock(end))
			return
		}
	}
	setup := p.SetupBetween(from, end, s.Node, s.Start)
	if s.Start >= setup.ReadyMin {
		return
	}
	after := "the start of the session at " + p.clock(0)
	switch {
	case setup.Break != None:
		after = "the break ends at " + p.clock(setup.FreeMin)
	case previous != None:
		after = p.nodeName(from) + " ends at " + p.clock(end)
	}
	v.breach(i, previous, RuleSetup, "starts %d min too early: %s after %s", setup.ReadyMin-s.Start, p.describe(setup, s.Node), after)
}

// describe names what a setup is made of: the longer of slew and receiver change, and the overhead.
func (p *Problem) describe(s Setup, to int) string {
	overhead := fmt.Sprintf("overhead %d s", s.OverheadSec)
	switch {
	case s.SlewSec == 0 && s.ChangeSec == 0:
		return overhead
	case s.ChangeSec > s.SlewSec:
		receiver := p.Receivers[p.Jobs[p.Nodes[to].Job].Receiver].Name
		return fmt.Sprintf("change to receiver %s of %d s and %s", receiver, s.ChangeSec, overhead)
	}
	return fmt.Sprintf("slew of %d s and %s", s.SlewSec, overhead)
}

func (v *verifier) once(order []int) {
	first := make([]int, len(v.p.Jobs))
	count := make([]int, len(v.p.Jobs))
	for _, i := range order {
		job := v.p.Nodes[v.slots[i].Node].Job
		if count[job] == 0 {
			first[job] = i
		}
		if count[job]++; count[job] > v.p.Jobs[job].MaxSlots {
			v.breach(i, first[job], RuleOnce, "slot %d of %s: at most %d in a session", count[job], v.p.jobName(job), v.p.Jobs[job].MaxSlots)
		}
	}
}

func (v *verifier) pins() {
	for _, pin := range v.p.Pins {
		same := func(s Slot) bool {
			return s.Node == pin.Node && s.Start == pin.Start && s.End == pin.End && s.Pinned
		}
		if slices.ContainsFunc(v.slots, same) {
			continue
		}
		at := slices.IndexFunc(v.slots, func(s Slot) bool { return s.Node == pin.Node })
		v.breach(at, None, RulePin, "%s is pinned from %s to %s", v.p.nodeName(pin.Node), v.p.clock(pin.Start), v.p.clock(pin.End))
	}
}

func (v *verifier) missingMusts() []int {
	var missing []int
	for i, job := range v.p.Jobs {
		has := slices.ContainsFunc(v.slots, func(s Slot) bool { return v.p.Nodes[s.Node].Job == i })
		if job.Must && !job.Barred && !has && v.p.everOpen(i) {
			missing = append(missing, i)
		}
	}
	return missing
}

// everOpen tells whether the job has a window with room for its shortest slot after the time past.
func (p *Problem) everOpen(job int) bool {
	for _, n := range p.Nodes {
		if n.Job != job {
			continue
		}
		for _, w := range n.Open {
			if w.To-max(w.From, p.FromMin) >= p.Jobs[job].MinMin {
				return true
			}
		}
	}
	return false
}

func compareSlots(a, b Slot) int {
	if a.Start != b.Start {
		return a.Start - b.Start
	}
	if a.End != b.End {
		return a.End - b.End
	}
	return a.Node - b.Node
}
