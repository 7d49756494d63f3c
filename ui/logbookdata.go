package ui

import (
	"fmt"
	"math"
	"slices"
	"time"

	tea "github.com/charmbracelet/bubbletea"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/sched"
)

// written is an entry of this run, with the one that counted before it.
type written struct {
	entry campaigns.Entry
	was   *campaigns.Entry // nil: there was none
}

// refreshedMsg: a session has been prepared anew because the logbook has changed.
type refreshedMsg struct {
	session  string
	edition  int // of the logbook
	prepared *campaigns.Prepared
	err      error
}

// bookChanged takes up the new logbook: what depends on it is worked out again, aside.
func (m *model) bookChanged(msg recordedMsg) tea.Cmd {
	if msg.book == nil {
		return nil
	}
	w := &m.world
	for _, e := range msg.entries {
		if msg.undoes {
			w.written = w.written[:max(len(w.written)-1, 0)]
			break
		}
		done := written{entry: e}
		for i := range w.book.Entries {
			if old := w.book.Entries[i]; e.Corrects(old) {
				done.was = &old
			}
		}
		w.written = append(w.written, done)
	}
	w.book = msg.book
	w.edition++
	var cmds []tea.Cmd
	for _, s := range w.campaign.Sessions {
		d, ok := w.desks[s.Name]
		if ok && d.prepared != nil && d.countsOn(msg.entries) {
			cmds = append(cmds, refreshCmd(w.folder, d.session, d.prepared.At, w.edition, d.prepared.TakingPart()))
		}
	}
	return tea.Batch(cmds...)
}

// countsOn says that the accounts at the session's start depend on entries. What is observed in the session itself
// counts from the next one on.
func (d *desk) countsOn(entries []campaigns.Entry) bool {
	for i := range entries {
		if entries[i].Start.Before(d.session.Start) {
			return true
		}
	}
	return false
}

func refreshCmd(f *files, s *campaigns.Session, at time.Time, edition int, keep []string) tea.Cmd {
	return guarded(func() tea.Msg {
		p, err := campaigns.Prepare(f.Campaign, f.book(), s, campaigns.PrepareOptions{At: at, Keep: keep})
		return refreshedMsg{s.Name, edition, p, err}
	})
}

// receiveRefreshed puts the new accounts and worths under the plan, which stays as it is. The sky has not changed, so
// every slot finds its node again.
func (m *model) receiveRefreshed(msg refreshedMsg) tea.Cmd {
	w := &m.world
	d, ok := w.desks[msg.session]
	if !ok || msg.edition != w.edition {
		return nil // a newer one is on its way
	}
	if msg.err != nil {
		m.warn("what is owed could not be worked out again: %v", msg.err)
		return nil
	}
	if !sameNodes(msg.prepared.Problem.Nodes, d.prepared.Problem.Nodes) {
		m.warn("the session has changed: leave and open it again to see what is owed now")
		return nil
	}
	if w.work != nil && w.work.desk == d {
		m.stopPlanning() // it works with the old worths
	}
	d.prepared, d.accounts, d.reviewed, d.planned = msg.prepared, msg.prepared.Accounts, false, false
	d.proveAnew(msg.prepared.Problem)
	d.changed()
	return reviewCmd(w.folder, d.session)
}

func sameNodes(a, b []sched.Node) bool {
	return slices.EqualFunc(a, b, func(a, b sched.Node) bool { return a.Job == b.Job && a.Place == b.Place && a.Turn == b.Turn })
}

// debtWords say what entries have done to the accounts of the source whose debt they change most.
func debtWords(c *campaigns.Campaign, before, after *campaigns.Logbook, entries []campaigns.Entry) string {
	best, said := 0.0, ""
	for _, e := range entries {
		at := e.End.Add(time.Minute)
		was, err := campaigns.Accounts(c, before, e.Source, at)
		if err != nil {
			continue
		}
		is, err := campaigns.Accounts(c, after, e.Source, at)
		if err != nil || len(is) != len(was) {
			continue
		}
		for i := range is {
			if change := math.Abs(is[i].Debt - was[i].Debt); change > best+0.005 {
				best, said = change, fmt.Sprintf("; owed %.2f, now %.2f (%s)", was[i].Debt, is[i].Debt, aimWords(&is[i]))
				if len(entries) > 1 {
					said = "; " + e.Source + " " + said[2:]
				}
			}
		}
		if len(entries) > manyEntries {
			break // of a whole night one is enough
		}
	}
	return said
}

// manyEntries is from how many entries on only the first is told of.
const manyEntries = 6

// askToTakeBack asks whether the last entry of this run was a slip.
func (m *model) askToTakeBack() {
	w := &m.world
	if len(w.written) == 0 {
		m.warn("nothing was recorded in this run; d, p or f on an entry corrects it")
		return
	}
	last := w.written[len(w.written)-1]
	e := last.entry
	text := fmt.Sprintf("%s with %s at %s UTC was recorded as %s. The line stays in the file; a line after it will say ", e.Source, e.Receiver, formTime(e.Start), e.Outcome)
	back := e
	if last.was != nil {
		back = *last.was
		back.Line = 0
		text += fmt.Sprintf("what stood there before: %s, quality %.2f.", back.Outcome, back.Quality)
	} else {
		back.Outcome, back.Quality, back.SNR, back.ToaUs, back.Note = campaigns.Lost, 0, 0, 0, "recorded by mistake"
		text += "lost, with the note \"recorded by mistake\"."
	}
	m.over = newQuestion("Take the last entry back?", text,
		answer{"y", "take it back", action{verb: writeEntries, more: recording{did: e.Source + " with " + e.Receiver + " taken back", entries: []campaigns.Entry{back}, desk: w.desk, undoes: true}}})
}
