package ui

import (
	"fmt"

	"example.org/tallystick/ui/cell"
)

// newSessionList goes to another session.
func newSessionList(w *world) *chooser {
	l := &chooser{title: "Sessions", does: "goes there"}
	for _, s := range w.campaign.Sessions {
		text := fmt.Sprintf("%s  %s to %s UTC, %.1f h", cell.Fit(s.Name, 22), s.Start.UTC().Format("2006-01-02 15:04"), clock(s.End), s.End.Sub(s.Start).Hours())
		switch {
		case s.End.Before(w.now):
			text += ", over"
		case s.Start.Before(w.now):
			text += ", under way"
		}
		if d, ok := w.desks[s.Name]; ok && d.unsaved() {
			text += ", not saved"
		}
		at := s.Name == w.desk.session.Name
		l.add(s.Name, text, action{verb: goToSession, text: s.Name}, at)
	}
	return l
}

// newSlotFinder chooses one of the slots of the plan.
func newSlotFinder(w *world) *chooser {
	l := &chooser{title: "Slots", does: "chooses"}
	r := w.desk.read()
	for i := range r.rows {
		row := &r.rows[i]
		name := r.slotName(i)
		text := fmt.Sprintf("%2d %s-%s %s %s", row.Slot, clock(row.Start), clock(row.End), cell.Fit(name, 18), slotFlags(row))
		l.add(name, text, action{verb: chooseSlot, n: i}, i == w.desk.chosen)
	}
	return l
}
