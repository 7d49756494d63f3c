package ui

import (
	"image"
	"slices"

	tea "github.com/charmbracelet/bubbletea"
	"github.com/sahilm/fuzzy"

	"example.org/tallystick/ui/cell"
	"example.org/tallystick/ui/theme"
)

// A chooser is a list from which one row is taken. What is typed narrows it; the order stays.
type chooser struct {
	title, does string
	names       []string // what the typed text is looked for in
	texts       []string
	actions     []action
	seen        []int // rows that match
	typed       field
	rows        rows
}

func (l *chooser) add(name, text string, does action, at bool) {
	if at {
		l.rows.at = len(l.names)
	}
	l.seen = append(l.seen, len(l.names))
	l.names, l.texts, l.actions = append(l.names, name), append(l.texts, text), append(l.actions, does)
}

func (l *chooser) narrow() {
	l.seen, l.rows = l.seen[:0], rows{}
	if l.typed.String() == "" {
		for i := range l.names {
			l.seen = append(l.seen, i)
		}
		return
	}
	for _, m := range fuzzy.Find(l.typed.String(), l.names) {
		l.seen = append(l.seen, m.Index)
	}
	slices.Sort(l.seen)
}

func (l *chooser) key(k tea.KeyMsg, _ *world) action {
	switch k.String() {
	case "esc":
		if l.typed.String() != "" {
			l.typed = field{}
			l.narrow()
			return action{}
		}
		return action{verb: closeDialog}
	case "ctrl+c":
		return action{verb: closeDialog}
	case "enter":
		if len(l.seen) == 0 {
			return action{}
		}
		return action{verb: takeRow, more: l.actions[l.seen[l.rows.at]]}
	case "up", "down", "pgup", "pgdown":
		l.rows.key(k, len(l.seen))
		return action{}
	}
	if l.typed.key(k) {
		l.narrow()
	}
	return action{}
}

func (l *chooser) draw(_ *world, c *cell.Canvas, g *theme.Glyphs) {
	sw, sh := c.Size()
	in := box(c, g, min(78, sw-4), max(min(len(l.names)+1, sh-4), 2), l.title, "type to narrow, Enter "+l.does+", Esc goes back")
	x := in.Put(0, 0, "find: ", theme.Muted)
	l.typed.draw(in, x, 0)
	w, h := in.Size()
	if len(l.seen) == 0 {
		in.Put(1, 1, "nothing matches", theme.Plain)
		return
	}
	if h <= 1 {
		return
	}
	l.rows.show(len(l.seen), h-1)
	list := in.Sub(image.Rect(0, 1, w, h))
	for i := range l.seen {
		l.rows.draw(list, g, i, l.texts[l.seen[i]])
	}
}
