package ui

import (
	"fmt"
	"slices"

	"example.org/tallystick/sched"
)

// split cuts the chosen slot at the cursor minute, or in the middle where the cursor is not inside it.
// What is cut off begins after the set-up that every slot has.
func (m *model) split() {
	d := m.world.desk
	s := d.shown()
	whole, _ := d.slot()
	p := d.prepared.Problem
	setUp := (p.OverheadSec + 59) / 60
	at := d.minute
	if at <= whole.Start || at+setUp >= whole.End {
		at = (whole.Start + whole.End - setUp) / 2
	}
	if at <= whole.Start || at+setUp >= whole.End {
		m.warn("too short to split: %d min on source, and the second part needs %d min of set-up", whole.End-whole.Start, setUp)
		return
	}
	plan := s.plan.Clone()
	first := &plan.Slots[d.chosen]
	first.End, first.Pinned = at, true
	second := whole
	second.Start, second.Pinned, second.Note = at+setUp, true, ""
	plan.Slots = slices.Insert(plan.Slots, d.chosen+1, second)
	m.propose(fmt.Sprintf("split %s at %s, both parts pinned", m.chosenName(), clock(d.prepared.Instant(at))), snapshot{plan, s.bars}, d.chosen)
}

// swap lets the slot at index first and the one after it change places. What was second starts where the
// first did, or as soon after as the way there allows, with its length; what was first follows as soon as
// it can and ends in time for the slot after it, shorter if need be.
func (m *model) swap(first int) {
	d := m.world.desk
	s := d.shown()
	if first < 0 || first+1 >= len(s.plan.Slots) {
		m.warn("there is no slot to swap with")
		return
	}
	r := d.read()
	p, slots := r.problem, s.plan.Slots
	a, b := slots[first], slots[first+1]
	did := fmt.Sprintf("swapped %s and %s, both pinned", r.slotName(first), r.slotName(first+1))

	starts := a.Start
	if first > 0 {
		starts = max(starts, p.ReadyMin(slots[first-1].Node, slots[first-1].End, b.Node, slots[first-1].End))
	}
	ends := starts + b.End - b.Start
	follows := p.ReadyMin(b.Node, ends, a.Node, ends)
	until := min(follows+a.End-a.Start, p.Minutes)
	if first+2 < len(slots) {
		for next := slots[first+2]; until > follows+1 && p.ReadyMin(a.Node, until, next.Node, until) > next.Start; {
			until--
		}
	}
	whole := follows + a.End - a.Start
	plan, at := sched.MoveSlot(p, s.plan, first, whole-a.End)
	a = plan.Slots[at]
	plan, at = sched.MoveSlot(p, plan, slices.Index(plan.Slots, b), ends-b.End)
	plan.Slots[at].Pinned = true
	second := at
	plan, at = sched.Lengthen(p, plan, slices.Index(plan.Slots, a), until-a.End)
	plan.Slots[at].Pinned = true
	if short := whole - until; short > 0 {
		did += fmt.Sprintf(", %s %d min shorter", r.slotName(first), short)
	}
	if d.chosen == first {
		second = at
	}
	m.propose(did, snapshot{plan, s.bars}, second)
}

// otherReceiver gives the chosen slot the next receiver that an aim of its source asks for.
func (m *model) otherReceiver() {
	d := m.world.desk
	s := d.shown()
	slot, _ := d.slot()
	p := d.read().problem
	is := p.Nodes[slot.Node].Job
	for k := 1; k < len(p.Jobs); k++ {
		job := (is + k) % len(p.Jobs)
		if p.Jobs[job].Source != p.Jobs[is].Source {
			continue
		}
		was := m.chosenName()
		plan, i := sched.Replace(p, s.plan, d.chosen, job)
		if plan.Slots[i].Node == slot.Node {
			continue // the mount cannot reach it so
		}
		plan.Slots[i].Pinned = true
		m.propose(fmt.Sprintf("%s instead of %s, pinned", jobName(p, job), was), snapshot{plan, s.bars}, i)
		return
	}
	m.warn("no aim of %s asks for another receiver in this session", p.Jobs[is].Source)
}

// note writes a note on the chosen slot and pins it, so that the note stays with it.
func (m *model) note(text string) {
	d := m.world.desk
	s := d.shown()
	plan := s.plan.Clone()
	slot := &plan.Slots[d.chosen]
	if slot.Note == text {
		return
	}
	did := "note on " + m.chosenName()
	if text == "" {
		did = "no note on " + m.chosenName()
	} else if !slot.Pinned {
		slot.Pinned = true
		did += ", pinned"
	}
	slot.Note = text
	m.propose(did, snapshot{plan, s.bars}, d.chosen)
}

// clear drops every slot that is neither pinned nor begun.
func (m *model) clear() {
	d := m.world.desk
	s := d.shown()
	from := m.world.planFrom()
	plan := sched.Plan{}
	for _, slot := range s.plan.Slots {
		if slot.Pinned || slot.Start < from {
			plan.Slots = append(plan.Slots, slot)
		}
	}
	n := len(s.plan.Slots) - len(plan.Slots)
	if n == 0 {
		m.warn("nothing to clear: every slot is pinned or has begun")
		return
	}
	m.propose("cleared "+count(n, "slot"), snapshot{plan, s.bars}, d.chosen)
}
