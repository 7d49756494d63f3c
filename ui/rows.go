package ui

import (
	tea "github.com/charmbracelet/bubbletea"

	"example.org/tallystick/ui/cell"
	"example.org/tallystick/ui/theme"
)

// rows is the cursor and scroll of a list.
type rows struct{ at, top int }

// key moves the cursor among n rows; false if the key does not move.
func (r *rows) key(k tea.KeyMsg, n int) bool {
	c, ok := commandFor(k.String(), "")
	return ok && r.steer(c.verb, n, 10)
}

func (r *rows) steer(v verb, n, page int) bool {
	switch v {
	case moveUp:
		r.at--
	case moveDown:
		r.at++
	case pageUp:
		r.at -= page
	case pageDown:
		r.at += page
	case moveFirst:
		r.at = 0
	case moveLast:
		r.at = n - 1
	default:
		return false
	}
	r.at = min(max(r.at, 0), max(n-1, 0))
	return true
}

// show scrolls so that the cursor is seen in a window of h out of n rows. It scrolls by half a window,
// so that most keys leave most rows where they are.
func (r *rows) show(n, h int) {
	r.at = min(max(r.at, 0), max(n-1, 0))
	if r.at < r.top || r.at >= r.top+h {
		r.top = r.at - h/2
	}
	r.top = max(min(r.top, n-h), 0)
}

// draw writes row i, if it is in sight.
func (r *rows) draw(c *cell.Canvas, g *theme.Glyphs, i int, text string) {
	w, h := c.Size()
	y := i - r.top
	if y < 0 || y >= h {
		return
	}
	ink, mark := theme.Plain, " "
	if i == r.at {
		ink, mark = theme.Chosen, g.Mark
	}
	c.Put(0, y, cell.Fit(mark+text, w), ink)
}
