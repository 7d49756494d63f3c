package cell

import (
	"image"
	"strings"

	"github.com/charmbracelet/x/ansi"

	"example.org/tallystick/ui/theme"
)

// A Canvas is a block of cells. Writing outside it does nothing, so what comes out of String has
// exactly the size it was made with.
type Canvas struct {
	all    *sheet
	bounds image.Rectangle // the part of the sheet that this canvas may write
}

type sheet struct {
	w, h  int
	cells []one
	ascii bool
}

// one cell: a grapheme cluster, "" for a blank. The right half of a wide one is marked tail.
type one struct {
	text string
	ink  theme.Ink
	tail bool
}

// New returns a blank canvas. With ascii set whatever is written becomes ASCII.
func New(w, h int, ascii bool) *Canvas {
	w, h = max(w, 0), max(h, 0)
	return &Canvas{
		all:    &sheet{w: w, h: h, cells: make([]one, w*h), ascii: ascii},
		bounds: image.Rect(0, 0, w, h),
	}
}

// Size returns the canvas's width and height.
func (c *Canvas) Size() (w, h int) { return c.bounds.Dx(), c.bounds.Dy() }

// Sub returns a part of a canvas as a canvas of its own; r counts from the corner of c, and what lies
// outside c is left off.
func (c *Canvas) Sub(r image.Rectangle) *Canvas {
	return &Canvas{all: c.all, bounds: r.Add(c.bounds.Min).Intersect(c.bounds)}
}

// Put writes one line of text at x, y and returns the x after it. Control characters become blanks.
func (c *Canvas) Put(x, y int, s string, ink theme.Ink) int {
	if y < 0 || y >= c.bounds.Dy() {
		return x + Width(s)
	}
	if plain(s) {
		for i := 0; i < len(s); i++ {
			c.set(x+i, y, s[i:i+1], 1, ink)
		}
		return x + len(s)
	}
	var state byte
	for len(s) > 0 {
		text, w, n, next := ansi.DecodeSequence(s, state, nil)
		state = next
		s = s[n:]
		switch {
		case w == 0 && len(text) == 1:
			text, w = " ", 1 // a tab, a line feed
		case w == 0:
			continue // a terminal sequence, or a mark with nothing to stand on
		case c.all.ascii:
			text = asciiTwin(text, w)
		}
		c.set(x, y, text, w, ink)
		x += w
	}
	return x
}

// Fill writes the same one-cell glyph over a rectangle.
func (c *Canvas) Fill(r image.Rectangle, glyph string, ink theme.Ink) {
	for y := max(r.Min.Y, 0); y < min(r.Max.Y, c.bounds.Dy()); y++ {
		for x := max(r.Min.X, 0); x < min(r.Max.X, c.bounds.Dx()); x++ {
			c.set(x, y, glyph, 1, ink)
		}
	}
}

// Blank reports whether nothing has been written at x, y.
func (c *Canvas) Blank(x, y int) bool {
	if x < 0 || y < 0 || x >= c.bounds.Dx() || y >= c.bounds.Dy() {
		return false
	}
	o := c.all.cells[(y+c.bounds.Min.Y)*c.all.w+x+c.bounds.Min.X]
	return !o.tail && (o.text == "" || o.text == " ")
}

func (c *Canvas) set(x, y int, text string, w int, ink theme.Ink) {
	if x < 0 || y < 0 || x >= c.bounds.Dx() || y >= c.bounds.Dy() {
		return
	}
	if x+w > c.bounds.Dx() {
		text, w = Cut, 1
	}
	row := c.all.cells[(y+c.bounds.Min.Y)*c.all.w : (y+c.bounds.Min.Y+1)*c.all.w]
	at := x + c.bounds.Min.X
	if row[at].tail && at > 0 {
		row[at-1] = one{ink: row[at-1].ink}
	}
	if end := at + w; end < len(row) && row[end].tail {
		row[end] = one{ink: row[end].ink}
	}
	row[at] = one{text: text, ink: ink}
	if w == 2 {
		row[at+1] = one{ink: ink, tail: true}
	}
}

// String returns the canvas as lines joined by line feeds, every one exactly as wide as the canvas.
func (c *Canvas) String(s *theme.Styles) string {
	var b strings.Builder
	b.Grow(len(c.all.cells)*2 + 64)
	for y := c.bounds.Min.Y; y < c.bounds.Max.Y; y++ {
		if y > c.bounds.Min.Y {
			b.WriteByte('\n')
		}
		open, ink := "", theme.Plain
		for x := c.bounds.Min.X; x < c.bounds.Max.X; x++ {
			o := c.all.cells[y*c.all.w+x]
			if o.tail {
				continue
			}
			blank := o.text == "" || o.text == " "
			if blank && !s.Paints(ink) && !s.Paints(o.ink) {
				b.WriteByte(' ') // looks the same in any ink: no need to change
				continue
			}
			if want := s.Open(o.ink); want != open {
				if open != "" {
					b.WriteString(theme.Close)
				}
				b.WriteString(want)
				open, ink = want, o.ink
			}
			if o.text == "" {
				b.WriteByte(' ')
			} else {
				b.WriteString(o.text)
			}
		}
		if open != "" {
			b.WriteString(theme.Close)
		}
	}
	return b.String()
}

// asciiTwin returns something in ASCII for a cluster of w cells.
func asciiTwin(text string, w int) string {
	if plain(text) {
		return text
	}
	if t, ok := twins[text]; ok {
		return t
	}
	return strings.Repeat("?", w)
}

var twins = map[string]string{
	"°": "d", "µ": "u", "μ": "u", "σ": "s", "·": ".", "×": "x", "−": "-", "–": "-", "—": "-", "…": "~",
	"’": "'", "‘": "'", "“": "\"", "”": "\"", "±": "~", "≤": "<", "≥": ">", "→": ">", "√": "r",
	"½": "h", "¼": "q", "²": "2", "³": "3", "π": "p", "ω": "w", "′": "'", "″": "\"",
	"é": "e", "è": "e", "á": "a", "à": "a", "ä": "a", "ö": "o", "ü": "u", "ñ": "n", "ç": "c", "ó": "o", "í": "i",
}
