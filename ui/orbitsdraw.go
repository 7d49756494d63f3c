package ui

import (
	"fmt"
	"math"
	"strings"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/ui/cell"
	"example.org/tallystick/ui/theme"
)

// stripMargin is left of the strip for the names of its rows.
const stripMargin = 6

// A phaseAxis turns orbital phase into columns.
type phaseAxis struct{ columns int }

func (a phaseAxis) column(turns float64) int {
	return stripMargin + min(int(turns*float64(a.columns)), a.columns-1)
}

// cells are the parts of the orbit that a column stands for.
func (a phaseAxis) cells(column int) (from, to int) {
	from = (column - stripMargin) * campaigns.OrbitCells / a.columns
	to = (column - stripMargin + 1) * campaigns.OrbitCells / a.columns
	return from, max(to, from+1)
}

// drawStrip draws what has been seen against orbital phase: a title if there is nothing else to say it, then what
// was seen, the points of the orbit, the bins of the aim, the phase, and what the signs mean. What has no room is
// left out from the end.
func drawStrip(c *cell.Canvas, g *theme.Glyphs, o *campaigns.OrbitView, titled bool) {
	cw, h := c.Size()
	a := phaseAxis{max(cw-stripMargin-1, 1)}
	y := 0
	if h >= 4 {
		if titled {
			c.Put(0, y, strings.Repeat(g.Rule, cw), theme.Muted)
		}
		title := " " + o.Source + ": " + seenWords(o) + " "
		c.Put(1, y, cell.Fit(title, min(cell.Width(title), max(cw-2, 0))), theme.Strong)
		y++
	}
	for _, part := range []func(*cell.Canvas, int, *theme.Glyphs, phaseAxis, *campaigns.OrbitView){drawSeen, drawPoints, drawBins, drawPhase, drawSigns} {
		if y >= h {
			return
		}
		part(c, y, g, a, o)
		y++
	}
}

func drawSeen(c *cell.Canvas, y int, g *theme.Glyphs, a phaseAxis, o *campaigns.OrbitView) {
	c.Put(0, y, "seen", theme.Muted)
	for x := stripMargin; x < stripMargin+a.columns; x++ {
		from, to := a.cells(x)
		most := 0
		for i := from; i < min(to, campaigns.OrbitCells); i++ {
			most = max(most, o.Seen[i])
		}
		if most > 0 {
			c.Put(x, y, g.Full, theme.Good)
		} else {
			c.Put(x, y, g.Half, theme.Muted)
		}
	}
}

func drawPoints(c *cell.Canvas, y int, g *theme.Glyphs, a phaseAxis, o *campaigns.OrbitView) {
	c.Put(0, y, "at", theme.Muted)
	for x := stripMargin; x < stripMargin+a.columns; x++ {
		if o.Eclipsed((float64(x-stripMargin) + 0.5) / float64(a.columns)) {
			c.Put(x, y, g.Eclipse, theme.Limit)
		}
	}
	c.Put(a.column(o.NowTurns), y, g.Cursor, theme.Now)
	for _, p := range orbitPoints(o) {
		c.Put(a.column(p.turns), y, p.letter, theme.Accent)
	}
}

// An orbitPoint is a letter on the orbit.
type orbitPoint struct {
	letter string
	turns  float64
}

// orbitPoints are in the order in which they are drawn: a later one covers an earlier one in the same place.
func orbitPoints(o *campaigns.OrbitView) []orbitPoint {
	points := []orbitPoint{{"N", 0}}
	if o.PeriastronTurns != nil {
		points = append(points, orbitPoint{"P", *o.PeriastronTurns})
	}
	return append(points, orbitPoint{"I", o.InferiorTurns}, orbitPoint{"S", o.SuperiorTurns})
}

func drawBins(c *cell.Canvas, y int, g *theme.Glyphs, a phaseAxis, o *campaigns.OrbitView) {
	c.Put(0, y, "bins", theme.Muted)
	if o.Bins == nil {
		c.Put(stripMargin, y, cell.Fit("no aim asks for phase coverage", a.columns), theme.Muted)
		return
	}
	for _, b := range o.Bins {
		from, to := a.column(b.FromTurns), a.column(b.ToTurns)
		if b.ToTurns > 1-1e-9 {
			to = stripMargin + a.columns
		}
		text, ink := visits(b.Had)+"/"+fmt.Sprint(b.Wanted), theme.Good
		if !b.Full() {
			ink = theme.Overdue
		}
		switch room := to - from - 1; {
		case room >= cell.Width(text):
		case room >= 1:
			text = visits(math.Floor(b.Had + 1e-9))
			if cell.Width(text) > room {
				text = "+"
			}
		default:
			continue
		}
		c.Put(from, y, "|", theme.Muted)
		c.Put(from+1, y, text, ink)
	}
}

func drawPhase(c *cell.Canvas, y int, _ *theme.Glyphs, a phaseAxis, _ *campaigns.OrbitView) {
	c.Put(0, y, "phase", theme.Muted)
	step := 0.25
	if a.columns >= 70 {
		step = 0.1
	}
	for turns := 0.0; turns < 1.01; turns += step {
		label := strings.TrimSuffix(fmt.Sprintf("%.2f", turns), "0")
		x := a.column(turns)
		if turns > 0.99 {
			label, x = "1.0", stripMargin+a.columns-3
		}
		c.Put(x, y, label, theme.Plain)
	}
}

func drawSigns(c *cell.Canvas, y int, g *theme.Glyphs, a phaseAxis, o *campaigns.OrbitView) {
	cw, _ := c.Size()
	text := g.Full + " seen, " + g.Half + " not; S behind, I in front of the companion"
	for _, more := range []struct {
		text string
		when bool
	}{{", P periastron", o.PeriastronTurns != nil}, {", " + g.Eclipse + " eclipse", o.EclipseTurns != nil}, {", " + g.Cursor + " now", true}, {"; bins: visits had/wanted", o.Bins != nil}, {"; N ascending node", true}} {
		if more.when && cell.Width(text+more.text) <= cw-1 {
			text += more.text
		}
	}
	c.Put(0, y, cell.Fit(text, cw), theme.Muted)
}

// between is a point on the line from one to another.
func between(a, b campaigns.Point, part float64) campaigns.Point {
	return campaigns.Point{X: a.X + part*(b.X-a.X), Y: a.Y + part*(b.Y-a.Y)}
}

// drawShape draws the pulsar's orbit about the centre of mass as seen from its pole, with the Earth below.
func drawShape(c *cell.Canvas, g *theme.Glyphs, o *campaigns.OrbitView) {
	cw, h := c.Size()
	low, high, left, right := 0.0, 0.0, 0.0, 0.0
	for _, p := range o.Shape {
		low, high, left, right = math.Min(low, p.Y), math.Max(high, p.Y), math.Min(left, p.X), math.Max(right, p.X)
	}
	rows, columns := float64(h-2), float64(cw-2)
	if rows < 3 || columns < 6 {
		return
	}
	// A cell is about twice as high as it is wide.
	scale := math.Min(rows/(high-low), columns/2/(right-left)) * 0.98
	at := func(p campaigns.Point) (x, y int) {
		x = cw/2 + int(math.Round(2*scale*(p.X-(left+right)/2)))
		y = int(math.Round((rows-1)/2 - scale*(p.Y-(low+high)/2)))
		return x, min(max(y, 0), h-2)
	}
	// Where several fall into one cell, what was seen covers what was not, and the eclipse covers both. Gaps are
	// filled along straight lines.
	const unseen, seen, eclipsed = 0, 1, 2
	for layer := unseen; layer <= eclipsed; layer++ {
		for i, p := range o.Shape {
			is := unseen
			switch {
			case o.Eclipsed((float64(i) + 0.5) / campaigns.OrbitCells):
				is = eclipsed
			case o.Seen[i] > 0:
				is = seen
			}
			if is != layer {
				continue
			}
			from, to := between(o.Shape[(i+campaigns.OrbitCells-1)%campaigns.OrbitCells], p, 0.5), between(p, o.Shape[(i+1)%campaigns.OrbitCells], 0.5)
			glyph, ink := g.Half, theme.Muted
			switch layer {
			case seen:
				glyph, ink = g.Full, theme.Good
			case eclipsed:
				glyph, ink = g.Eclipse, theme.Limit
			}
			for _, part := range [][2]campaigns.Point{{from, p}, {p, to}} {
				steps := int(4*scale*math.Hypot(part[1].X-part[0].X, part[1].Y-part[0].Y)) + 1
				for k := range steps {
					x, y := at(between(part[0], part[1], float64(k)/float64(steps)))
					c.Put(x, y, glyph, ink)
				}
			}
		}
	}
	mark := func(turns float64, sign string, ink theme.Ink) {
		x, y := at(o.Shape[min(int(turns*campaigns.OrbitCells), campaigns.OrbitCells-1)])
		c.Put(x, y, sign, ink)
	}
	mark(o.NowTurns, g.Cursor, theme.Now)
	for _, p := range orbitPoints(o) {
		mark(p.turns, p.letter, theme.Accent)
	}
	x, y := at(campaigns.Point{})
	c.Put(x, y, "+", theme.Plain)
	text := g.Down + " to the Earth; + centre of mass"
	if cell.Width(text) > cw {
		text = g.Down + " Earth"
	}
	c.Put(max((cw-cell.Width(text))/2, 0), h-1, cell.Fit(text, cw), theme.Muted)
}
