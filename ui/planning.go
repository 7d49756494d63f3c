package ui

import (
	"context"

	tea "github.com/charmbracelet/bubbletea"

	"example.org/tallystick/sched"
)

// startPlanning plans around the pins. The first plan of a session is no edit: it can be had again at
// any time, so leaving without saving it loses nothing.
func (m *model) startPlanning(first bool, from int) tea.Cmd {
	d := m.world.desk
	m.stopPlanning()
	ctx, cancel := context.WithCancel(context.Background())
	work := &planning{desk: d, edition: d.edition, first: first, cancel: cancel, reports: make(chan sched.Result, 4)}
	m.world.work = work
	p := d.preparedWith(d.state.bars).Problem
	work.problem = around(p, d.state.plan, from)
	return tea.Batch(planCmd(ctx, work, p, d.state, from, first, m.rounds), listenCmd(work))
}

func (m *model) stopPlanning() {
	if w := m.world.work; w != nil {
		w.cancel()
		if b, ok := sched.BoundOf(w.problem, w.reached); ok {
			w.desk.prove(b) // what it has proved so far stays proved
		}
		w.desk.learn(w.reached)
		m.world.work = nil
	}
}

// learn keeps what the next planning of the session can start from.
func (d *desk) learn(r sched.Result) {
	if r.Learned != nil {
		d.learned = r.Learned
	}
}

// stopStalePlanning ends a planning run whose plan has been edited in the meantime.
func (m *model) stopStalePlanning() tea.Cmd {
	if w := m.world.work; w != nil && w.edition != w.desk.edition {
		m.stopPlanning()
		m.world.say.text += "; planning stopped"
	}
	return nil
}

// receiveProgress says how far planning has come. A session without a plan shows the first one there
// is; what is found after that waits until planning has ended, so that the screen stays calm.
func (m *model) receiveProgress(msg progressMsg) {
	msg.work.reached = msg.result
	d := msg.work.desk
	if !msg.work.first || len(d.state.plan.Slots) > 0 || d.edition != msg.work.edition || len(msg.result.Plan.Slots) == 0 {
		return
	}
	d.state.plan = msg.result.Plan.Clone()
	d.saved = d.state
	d.base, d.baseIs = d.state, "the first plan"
	d.changed()
	d.choose(0)
	msg.work.edition = d.edition
}

func (m *model) receivePlanned(msg plannedMsg) {
	w := &m.world
	if w.work != msg.work {
		return // stopped, or overtaken
	}
	w.work.cancel()
	w.work = nil
	d := msg.work.desk
	if d.edition != msg.work.edition {
		return
	}
	if msg.err != nil {
		m.warn("no plan: %v", msg.err)
		return
	}
	to := snapshot{msg.result.Plan, msg.bars}
	d.planned = true
	d.learn(msg.result)
	if msg.proved.Of != nil {
		d.prove(msg.proved)
	}
	if msg.first {
		d.state, d.saved = to, to
		d.base, d.baseIs = to, "the plan as it was first made"
		d.changed()
		d.choose(d.chosen)
		m.takeUpClock(d)
		if w.say.text == "" {
			m.tell("planned %s; ? shows the keys", count(len(to.plan.Slots), "slot"))
		}
		m.offerDraft()
		return
	}
	was, before := d.read().verdict.Worth, d.state.plan
	stood := d.state
	d.baseBefore = &stood
	d.base, d.baseIs = to, "the plan as it was last made, at "+clock(w.now)+" UTC"
	if d.state.equal(to) {
		m.tell("planned again: the plan stays as it is, nothing better was found")
		return
	}
	d.commit("re-planned", to)
	d.choose(d.chosen)
	if w.follow && d == w.desk {
		w.followClock()
	}
	m.tell("planned again: %s%s", worthChange(was, d.read().verdict.Worth), inAndOut(d.prepared.Problem, before, to.plan))
}
