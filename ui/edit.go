package ui

import (
	"fmt"
	"slices"

	"example.org/tallystick/sched"
)

// Edits are the observer's. None is ever made to fit: what breaks a limit is shown with the limit and
// its number, and kept only when the observer says so.

// chosenName names the chosen slot.
func (m *model) chosenName() string {
	d := m.world.desk
	if d.prepared == nil {
		return ""
	}
	return d.read().slotName(d.chosen)
}

// propose makes an edit part of the plan if it breaks nothing that was not broken before, and shows
// it as held if it does.
func (m *model) propose(did string, to snapshot, chosen int) {
	d := m.world.desk
	before := d.settled()
	d.hold(did, to, nil)
	d.chosen = min(max(chosen, 0), max(len(to.plan.Slots)-1, 0))
	after := d.read()
	breaches := newBreaches(before, after)
	if s, ok := d.slot(); ok && chosen >= 0 {
		d.goTo(s.Start)
	}
	change := worthChange(before.verdict.Worth, after.verdict.Worth)
	if loses := whoLoses(after.problem, before.plan, to.plan); loses != "" && after.verdict.Worth != before.verdict.Worth {
		change += ": " + loses
	}
	if len(breaches) > 0 {
		d.held.breaches = breaches
		m.tell("%s; %s", did, change)
		return
	}
	d.commit(did, to)
	d.view = after
	m.tell("%s; %s", did, change)
}

// settled is the reading of the plan without what is held.
func (d *desk) settled() *reading {
	if d.held == nil {
		return d.read()
	}
	held := d.held
	d.held, d.view = nil, nil
	r := d.read()
	d.held, d.view = held, nil
	return r
}

// A shift is how an edit of times changes the chosen slot.
type shift struct {
	by   int // minutes
	edit func(p *sched.Problem, plan sched.Plan, i, byMin int) (sched.Plan, int)
}

var shifts = map[verb]shift{
	moveEarlier: {-1, sched.MoveSlot}, moveLater: {1, sched.MoveSlot},
	farEarlier: {-10, sched.MoveSlot}, farLater: {10, sched.MoveSlot},
	shorten: {-1, sched.Lengthen}, lengthen: {1, sched.Lengthen},
	startEarlier: {-1, sched.StretchStart}, startLater: {1, sched.StretchStart},
}

// editSlot changes the chosen slot's times and pins it, so that re-planning keeps what the observer
// did.
func (m *model) editSlot(by shift) {
	d := m.world.desk
	s := d.shown()
	was, _ := d.slot()
	plan, i := by.edit(d.read().problem, s.plan, d.chosen, by.by)
	is := &plan.Slots[i]
	if is.Start == was.Start && is.End == was.End {
		m.warn("it cannot go further: a slot has at least one minute and stays within the session")
		return
	}
	did := fmt.Sprintf("%s now %s to %s", m.chosenName(), clock(d.prepared.Instant(is.Start)), clock(d.prepared.Instant(is.End)))
	if !is.Pinned {
		is.Pinned = true
		did += ", pinned"
	}
	m.propose(did, snapshot{plan, s.bars}, i)
}

func (m *model) drop() {
	d := m.world.desk
	s := d.shown()
	plan := s.plan.Clone()
	did := "dropped " + m.chosenName()
	gap := plan.Slots[d.chosen].Start
	plan.Slots = slices.Delete(plan.Slots, d.chosen, d.chosen+1)
	m.propose(did, snapshot{plan, s.bars}, d.chosen)
	d.goTo(gap) // what is inserted next is meant for the time that has become free
}

func (m *model) pin() {
	d := m.world.desk
	s := d.shown()
	plan := s.plan.Clone()
	slot := &plan.Slots[d.chosen]
	slot.Pinned = !slot.Pinned
	did := "unpinned "
	if slot.Pinned {
		did = "pinned "
	}
	m.propose(did+m.chosenName(), snapshot{plan, s.bars}, d.chosen)
}

// bar excludes a source from the session, with every slot it has, or lets it in again.
func (m *model) bar(source string) {
	d := m.world.desk
	s := d.shown()
	if i, barred := slices.BinarySearch(s.bars, source); barred {
		m.propose("lifted the bar on "+source, snapshot{s.plan, slices.Delete(slices.Clone(s.bars), i, i+1)}, d.chosen)
		return
	}
	p := d.prepared.Problem
	plan := s.plan.Clone()
	plan.Slots = slices.DeleteFunc(plan.Slots, func(slot sched.Slot) bool { return sourceOf(p, slot) == source })
	did := "barred " + source
	if n := len(s.plan.Slots) - len(plan.Slots); n > 0 {
		did += fmt.Sprintf(" and dropped its %s", count(n, "slot"))
	}
	bars := append(slices.Clone(s.bars), source)
	slices.Sort(bars)
	m.propose(did, snapshot{plan, bars}, d.chosen)
}

// A placing is a candidate that the observer has picked, and the slot it replaces (or -1).
type placing struct {
	candidate sched.Candidate
	replaces  int
	displaces []int // slots that it was said to displace, as indices into the plan
}

// in returns a plan with the candidate in it, pinned, and its index there.
func (pl placing) in(before sched.Plan) (sched.Plan, int) {
	slot := sched.Slot{Node: pl.candidate.Node, Start: pl.candidate.Start, End: pl.candidate.End, Pinned: true}
	var plan sched.Plan
	for i, old := range before.Slots {
		if i != pl.replaces && !slices.Contains(pl.displaces, i) {
			plan.Slots = append(plan.Slots, old)
		}
	}
	plan.Slots = append(plan.Slots, slot)
	plan = plan.Sorted()
	return plan, slices.Index(plan.Slots, slot)
}

func (m *model) place(pl placing) {
	m.over = nil
	d := m.world.desk
	s := d.shown()
	p := d.prepared.Problem
	did := "inserted " + jobName(p, pl.candidate.Job)
	if pl.replaces >= 0 {
		did = fmt.Sprintf("replaced %s by %s", m.chosenName(), jobName(p, pl.candidate.Job))
	}
	if n := len(pl.displaces); n > 0 {
		did += fmt.Sprintf(", dropping %s", m.slotNames(pl.displaces))
	}
	plan, at := pl.in(s.plan)
	m.propose(did, snapshot{plan, s.bars}, at)
}

func (m *model) slotNames(slots []int) string {
	r := m.world.desk.read()
	text := ""
	for k, i := range slots {
		if k > 0 {
			text += ", "
		}
		text += r.slotName(i)
	}
	return text
}
