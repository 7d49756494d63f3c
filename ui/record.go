package ui

import (
	"fmt"
	"math"
	"strings"
	"time"

	tea "github.com/charmbracelet/bubbletea"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/sched"
)

// A recording is entries for the logbook, and what becomes of the plan once they are there.
type recording struct {
	did     string
	entries []campaigns.Entry
	desk    *desk
	edition int // of the plan that it was made from

	settles string   // an edit of the plan, "" for none
	to      snapshot // what the plan then is
	again   bool     // plan again afterwards
	undoes  bool     // it takes the last entry of this run back
}

// recordedMsg: the entries are in the logbook, or are not.
type recordedMsg struct {
	recording
	book *campaigns.Logbook // with the entries
	debt string             // what became of the accounts, in words
	err  error
}

// recordCmd appends to the logbook. It has happened when the answer comes.
func recordCmd(f *files, r recording) tea.Cmd {
	return guarded(func() tea.Msg {
		f.mu.Lock()
		defer f.mu.Unlock()
		for _, e := range r.entries {
			if err := e.Check(); err != nil {
				return recordedMsg{recording: r, err: err}
			}
		}
		before := f.Logbook
		if err := f.AppendLog(r.entries); err != nil {
			return recordedMsg{recording: r, err: err}
		}
		return recordedMsg{recording: r, book: f.Logbook, debt: debtWords(f.Campaign, before, f.Logbook, r.entries)}
	})
}

// receiveRecorded makes what has happened part of the plan, whatever limit it breaks: it is no wish.
func (m *model) receiveRecorded(msg recordedMsg) tea.Cmd {
	if msg.err != nil {
		m.warn("not recorded: %v", msg.err)
		return nil
	}
	d := msg.desk
	recorded := "recorded"
	if m.world.folder.Demo() {
		recorded = "recorded in memory" // W keeps it
	}
	m.tell("%s: %s%s", recorded, msg.did, msg.debt)
	refresh := m.bookChanged(msg)
	if msg.settles != "" {
		if d.edition != msg.edition {
			m.warn("recorded: %s; the plan has been edited meanwhile and stays", msg.did)
			return refresh
		}
		d.commit(msg.settles, msg.to)
		if m.world.follow && d == m.world.desk {
			m.world.followClock()
		}
	}
	if msg.again && d == m.world.desk {
		return withAlso(refresh, m.startPlanning(false, m.world.planFrom()))
	}
	return withAlso(refresh, m.stopStalePlanning())
}

// entryOf is the logbook's line about a slot, from its start to an end.
func (d *desk) entryOf(s sched.Slot, end time.Time, o campaigns.Outcome, quality float64) campaigns.Entry {
	job := d.prepared.Problem.Jobs[d.prepared.Problem.Nodes[s.Node].Job]
	return campaigns.Entry{
		Start: d.prepared.Instant(s.Start), End: end, Site: d.session.Site,
		Source: job.Source, Receiver: d.prepared.Problem.Receivers[job.Receiver].Name,
		Outcome: o, Quality: quality, Note: s.Note,
	}
}

// startsNow lets the chosen slot begin at the present minute. A late one keeps its end, so that the rest
// of the plan holds; an early one keeps its length.
func (m *model) startsNow() {
	d := m.world.desk
	now, _ := m.world.present()
	slot, _ := d.slot()
	if slot.End <= now.minute+1 {
		m.warn("%s is over: choose the slot that starts", m.chosenName())
		return
	}
	if slot.Start == now.minute {
		m.tell("%s starts now, as planned", m.chosenName())
		return
	}
	s := d.shown()
	edit := sched.MoveSlot
	if slot.Start < now.minute {
		edit = sched.StretchStart
	}
	p := d.read().problem
	plan, i := edit(p, s.plan, d.chosen, now.minute-slot.Start)
	plan.Slots[i].Pinned = true
	by, which := now.minute-slot.Start, "late"
	if by < 0 {
		by, which = -by, "early"
	}
	m.propose(fmt.Sprintf("%s starts now, %d min %s, pinned", m.chosenName(), by, which), snapshot{plan, s.bars}, i)
}

// done records a slot as done. One that is ended early is partial, with the share of the sensitivity
// that the time gives, and ends now in the plan.
func (m *model) done() tea.Cmd {
	w, d := &m.world, m.world.desk
	i, ok := w.recordable()
	if !ok {
		m.warn("nothing to record: no slot has begun that is not in the logbook")
		return nil
	}
	s := d.shown()
	slot := s.plan.Slots[i]
	r := recording{did: d.read().slotName(i) + " done", desk: d, edition: d.edition}
	now, _ := w.nowMinute()
	if now >= slot.End {
		r.entries = []campaigns.Entry{d.entryOf(slot, d.prepared.Instant(slot.End), campaigns.Done, 1)}
		return recordCmd(w.folder, r)
	}
	got, whole := now-slot.Start, slot.End-slot.Start
	// The signal-to-noise ratio grows as the root of the time (Dicke 1946).
	quality := math.Round(100*math.Sqrt(float64(got)/float64(whole))) / 100
	r.entries = []campaigns.Entry{d.entryOf(slot, d.prepared.Instant(now), campaigns.Partial, quality)}
	r.did = fmt.Sprintf("%s partial, %d of %d min, quality %.2f; R plans the rest again", d.read().slotName(i), got, whole, quality)
	plan := s.plan.Clone()
	plan.Slots[i].End, plan.Slots[i].Pinned = now, true
	r.settles, r.to = d.read().slotName(i)+" ended early", snapshot{plan, s.bars}
	return recordCmd(w.folder, r)
}

// lost records a slot as lost and takes it out of the plan, so that planning again may give its source
// another.
func (m *model) lost() tea.Cmd {
	w, d := &m.world, m.world.desk
	i, ok := w.recordable()
	if !ok {
		m.warn("nothing to record: no slot has begun that is not in the logbook")
		return nil
	}
	s := d.shown()
	slot := s.plan.Slots[i]
	name := d.read().slotName(i)
	now, _ := w.nowMinute()
	end := d.prepared.Instant(min(slot.End, now))
	plan, _ := sched.Drop(s.plan, i)
	return recordCmd(w.folder, recording{
		did: name + " lost; R plans the rest again", desk: d, edition: d.edition,
		entries: []campaigns.Entry{d.entryOf(slot, end, campaigns.Lost, 0)},
		settles: "lost " + name, to: snapshot{plan, s.bars},
	})
}

// askLostUntil asks when the telescope can be used again.
func (m *model) askLostUntil() {
	w, d := &m.world, m.world.desk
	now, _ := w.nowMinute()
	until := d.minute
	if until <= now {
		until = min(now+60, d.prepared.Problem.Minutes)
	}
	p := newPrompt("Time is lost", "until when (UTC, minutes from now as +45, or now)", clock(d.prepared.Instant(until)), func(text string) action {
		return action{verb: lostUntilIs, text: text}
	})
	m.over = p
}

// loseUntil records what cannot be observed before a minute as lost, takes it out of the plan, and plans
// again from there.
func (m *model) loseUntil(text string) tea.Cmd {
	w, d := &m.world, m.world.desk
	until, err := parseUntil(text, w)
	if err != nil {
		m.warn("%v", err)
		return nil
	}
	m.over = nil
	now, _ := w.nowMinute()
	if until == now { // it can be used again sooner than was thought
		d.lostTo = 0
		m.tell("no more time is lost")
		return m.startPlanning(false, w.planFrom())
	}
	s := d.shown()
	read := d.read()
	r := recording{desk: d, edition: d.edition, again: true, did: "time lost until " + clock(d.prepared.Instant(until))}
	plan := sched.Plan{}
	var names []string
	for i, slot := range s.plan.Slots {
		if slot.End <= now || slot.Start >= until || w.outcome(i) != "" {
			plan.Slots = append(plan.Slots, slot)
			continue
		}
		names = append(names, read.slotName(i))
		r.entries = append(r.entries, d.entryOf(slot, d.prepared.Instant(min(slot.End, until)), campaigns.Lost, 0))
	}
	d.lostTo = until
	if len(names) > 0 {
		r.did += ": " + strings.Join(names, ", ")
		r.settles, r.to = r.did, snapshot{plan, s.bars}
	}
	return recordCmd(w.folder, r)
}
