package ui

import (
	tea "github.com/charmbracelet/bubbletea"

	"example.org/tallystick/ui/cell"
	"example.org/tallystick/ui/theme"
)

// A reader shows text that may be longer than the screen.
type reader struct {
	title string
	lines []line
	top   int
}

// A line of details: what it is about, and the text.
type line struct {
	label, text string
	ink         theme.Ink
}

func (r *reader) key(k tea.KeyMsg, _ *world) action {
	switch k.String() {
	case "esc", "enter", "q", "ctrl+c", "?":
		return action{verb: closeDialog}
	}
	if c, ok := commandFor(k.String(), ""); ok {
		switch c.verb {
		case moveUp:
			r.top--
		case moveDown:
			r.top++
		case pageUp:
			r.top -= 10
		case pageDown:
			r.top += 10
		case moveFirst:
			r.top = 0
		case moveLast:
			r.top = 1 << 20
		}
	}
	return action{}
}

func (r *reader) draw(_ *world, c *cell.Canvas, g *theme.Glyphs) {
	sw, sh := c.Size()
	w := min(100, sw-4)
	all := wrapLines(r.lines, w)
	in := box(c, g, w, min(len(all), sh-3), r.title, "Esc closes")
	_, h := in.Size()
	r.top = min(max(r.top, 0), max(len(all)-h, 0))
	drawLines(in, all[r.top:], labelWidth(r.lines))
	if r.top+h < len(all) && h > 0 {
		iw, _ := in.Size()
		in.Put(iw-1, h-1, g.Down, theme.Accent)
	}
	if r.top > 0 {
		iw, _ := in.Size()
		in.Put(iw-1, 0, g.Up, theme.Accent)
	}
}

// labelWidth is what the labels of details take: as much as they need, and a blank.
func labelWidth(lines []line) int {
	n := 0
	for _, l := range lines {
		n = max(n, cell.Width(l.label))
	}
	return min(n+2, 16)
}

// wrapLines breaks details into lines of at most w cells; a label stands before its first line only.
func wrapLines(lines []line, w int) []line {
	var out []line
	labels := labelWidth(lines)
	for _, l := range lines {
		room := w
		if l.label != "" {
			room = w - labels
		}
		for i, t := range cell.Wrap(oneCell.Replace(l.text), max(room, 8)) {
			label := l.label
			if i > 0 && label != "" {
				label = " "
			}
			out = append(out, line{label, t, l.ink})
		}
	}
	return out
}

// drawLines writes wrapped lines from the top.
func drawLines(c *cell.Canvas, lines []line, labels int) {
	w, h := c.Size()
	for y, l := range lines {
		if y >= h {
			return
		}
		x := 0
		if l.label != "" {
			c.Put(0, y, cell.Fit(l.label, labels-1), theme.Muted)
			x = labels
		}
		s, _ := cell.Short(l.text, w-x)
		c.Put(x, y, s, l.ink)
	}
}
