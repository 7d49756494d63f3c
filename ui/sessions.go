package ui

import (
	"fmt"

	tea "github.com/charmbracelet/bubbletea"

	"example.org/tallystick/ui/cell"
	"example.org/tallystick/ui/theme"
)

// sessionList chooses another session.
type sessionList struct {
	names []string
	texts []string
	rows  rows
}

func newSessionList(w *world) *sessionList {
	l := &sessionList{}
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
		if s.Name == w.desk.session.Name {
			l.rows.at = len(l.names)
		}
		l.names, l.texts = append(l.names, s.Name), append(l.texts, text)
	}
	return l
}

func (l *sessionList) key(k tea.KeyMsg, _ *world) action {
	switch k.String() {
	case "esc", "ctrl+c", "q":
		return action{verb: closeDialog}
	case "enter":
		if len(l.names) > 0 {
			return action{verb: goToSession, text: l.names[l.rows.at]}
		}
	}
	l.rows.key(k, len(l.names))
	return action{}
}

func (l *sessionList) draw(_ *world, c *cell.Canvas, g *theme.Glyphs) {
	sw, sh := c.Size()
	in := box(c, g, min(78, sw-4), max(min(len(l.names), sh-4), 1), "Sessions", "Enter goes there, Esc goes back")
	_, h := in.Size()
	l.rows.show(len(l.names), h)
	for i := range l.texts {
		l.rows.draw(in, g, i, l.texts[i])
	}
}
