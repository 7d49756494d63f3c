package ui

import (
	"fmt"
	"image"
	"math"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/sched"
	"example.org/tallystick/ui/cell"
	"example.org/tallystick/ui/theme"
)

// scale turns elevations into heights of the plot.
type scale struct {
	rows    int
	low, up float64 // degrees at the bottom and at the top edge
}

// at returns the row of an elevation, counted from the top, and how far down within the cell it is,
// in fifths. It is false outside the plot.
func (s scale) at(el float64) (row, fifth int, ok bool) {
	f := (s.up - el) / (s.up - s.low) * float64(s.rows)
	if f < 0 || f >= float64(s.rows) || math.IsNaN(f) {
		return 0, 0, false
	}
	row = int(f)
	return row, min(int((f-float64(row))*5), 4), true
}

// drawDegrees writes round elevations beside the rows they fall in.
func drawDegrees(c *cell.Canvas, s scale) {
	step := 30
	switch {
	case s.rows >= 14:
		step = 10
	case s.rows >= 5:
		step = 20
	}
	for el := step; el < 90; el += step {
		if y, _, ok := s.at(float64(el)); ok {
			c.Put(0, y, fmt.Sprintf("%4d", el), theme.Plain)
		}
	}
	if c.Blank(3, 0) {
		c.Put(1, 0, "deg", theme.Muted)
	}
}

// dotEvery is how many columns lie between the dots of another source's curve.
const dotEvery = 3

// A crowd of curves is drawn only about the slots they belong to.
const (
	crowd       = 6
	aroundHours = 1
)

// drawCurves draws where the planned sources stand, the chosen one drawn through, and the lowest
// elevation allowed where the chosen one stands.
func drawCurves(w *world, c *cell.Canvas, g *theme.Glyphs, a axis) {
	d := w.desk
	r := d.read()
	_, h := c.Size()
	s := scale{rows: h, low: 0, up: 90}
	drawDegrees(c, s)
	drawBackdrop(w, c, g, a, h)
	drawSun(d.prepared, c, g, a, s)

	chosen, _ := d.slot()
	crowded := len(r.plan.Slots) > crowd
	for i, slot := range r.plan.Slots {
		job := r.problem.Nodes[slot.Node].Job
		t := d.prepared.Track(job)
		if t != d.track() && (!crowded || i != d.chosen) {
			from, to := 0, a.minutes
			if crowded {
				from, to = slot.Start-60*aroundHours, slot.End+60*aroundHours
			}
			drawOther(c, g, a, s, t, from, to)
		}
		if i != d.chosen {
			drawSpan(c, a, s, t, slot.Start, slot.End, g.OtherOnSource, theme.Plain)
		}
	}
	if t := d.track(); t != nil {
		drawLimit(c, g, a, s, t)
		drawChosen(w, c, g, a, s, t)
		drawSpan(c, a, s, t, chosen.Start, chosen.End, g.OnSource, theme.Accent)
	}
}

// drawBackdrop shades the breaks and draws the present moment and the cursor minute.
func drawBackdrop(w *world, c *cell.Canvas, g *theme.Glyphs, a axis, h int) {
	for _, b := range w.desk.prepared.Problem.Breaks {
		c.Fill(image.Rect(a.column(b.From), 0, a.column(b.To)+1, h), g.Break, theme.Muted)
	}
	if now, ok := w.nowMinute(); ok {
		x := a.column(now)
		c.Fill(image.Rect(x, 0, x+1, h), g.Now, theme.Now)
	}
}

// drawSun draws where the Sun stands above the horizon.
func drawSun(p *campaigns.Prepared, c *cell.Canvas, g *theme.Glyphs, a axis, s scale) {
	for x := a.left + 1; x < a.left+a.columns; x += dotEvery {
		if el := p.SunElDeg[a.minute(x)]; el > 0 {
			if row, _, ok := s.at(el); ok {
				c.Put(x, row, g.Sun, theme.Sun)
			}
		}
	}
}

func drawOther(c *cell.Canvas, g *theme.Glyphs, a axis, s scale, t *campaigns.Track, from, to int) {
	for x := a.left; x < a.left+a.columns; x += dotEvery {
		m := a.minute(x)
		if m < from || m > to {
			continue
		}
		if row, _, ok := s.at(t.ElDeg[m]); ok {
			c.Put(x, row, g.Other, theme.Plain)
		}
	}
}

func drawSpan(c *cell.Canvas, a axis, s scale, t *campaigns.Track, from, to int, glyph string, ink theme.Ink) {
	for x := a.column(from); x <= max(a.column(to)-1, a.column(from)); x++ {
		if x < a.left || x >= a.left+a.columns {
			continue
		}
		m := min(max(a.minute(x), from), to)
		if m < 0 || m >= len(t.ElDeg) {
			continue
		}
		if row, _, ok := s.at(t.ElDeg[m]); ok {
			c.Put(x, row, glyph, ink)
		}
	}
}

func drawLimit(c *cell.Canvas, g *theme.Glyphs, a axis, s scale, t *campaigns.Track) {
	for x := a.left; x < a.left+a.columns; x += 2 {
		if row, _, ok := s.at(t.LimitDeg[a.minute(x)]); ok {
			c.Put(x, row, g.Limit, theme.Limit)
		}
	}
}

func drawChosen(w *world, c *cell.Canvas, g *theme.Glyphs, a axis, s scale, t *campaigns.Track) {
	for x := a.left; x < a.left+a.columns; x++ {
		m := a.minute(x)
		row, fifth, ok := s.at(t.ElDeg[m])
		if !ok {
			continue
		}
		glyph, ink := g.Curve[fifth], theme.Accent
		switch {
		case within(t.Eclipsed, m):
			glyph = g.Eclipse
		case nearSun(w, t, m):
			glyph, ink = g.NearSun, theme.Sun
		}
		c.Put(x, row, glyph, ink)
	}
}

// drawElevationWords says in words what the curves show of the chosen source, and where the Sun is.
func drawElevationWords(w *world, c *cell.Canvas) {
	d := w.desk
	cw, _ := c.Size()
	p := d.prepared
	m := d.minute
	sun := "Sun " + sunWords(p.SunElDeg[m])
	x := cw - cell.Width(sun) - 1
	c.Put(max(x, 1), 0, sun, theme.Sun)
	at := "at " + clock(p.Instant(m)) + " UTC"
	t := d.track()
	if t == nil {
		c.Put(1, 0, cell.Fit("cursor "+at, max(x-2, 0)), theme.Accent)
		return
	}
	high := highest(t.ElDeg)
	text := fmt.Sprintf("%s %s: el %.0f deg%s", p.Campaign.Sources[t.Source].Name, at, t.ElDeg[m], limitWords(w, t, m))
	for _, more := range []string{
		fmt.Sprintf("; highest %.0f at %s", t.ElDeg[high], clock(p.Instant(high))),
		fmt.Sprintf("; %.0f deg from the Sun", sunDistance(p, t, m)),
	} {
		if cell.Width(text+more)+2 <= x {
			text += more
		}
	}
	c.Put(1, 0, cell.Fit(text, max(x-2, 0)), theme.Accent)
}

// limitWords say which limit forbids a source at a minute, with its number.
func limitWords(w *world, t *campaigns.Track, m int) string {
	p := w.desk.prepared
	low, high := p.Site.ElevationLimitsDeg[0], p.Site.ElevationLimitsDeg[1]
	switch {
	case t.ElDeg[m] < t.LimitDeg[m] && t.LimitDeg[m] > low:
		return fmt.Sprintf(", below the horizon mask at %.1f", t.LimitDeg[m])
	case t.ElDeg[m] < t.LimitDeg[m]:
		return fmt.Sprintf(", below the limit of %.0f", low)
	case t.ElDeg[m] > high:
		return fmt.Sprintf(", above the limit of %.0f", high)
	case nearSun(w, t, m):
		return fmt.Sprintf(", %.1f deg from the Sun, limit %.0f", sunDistance(p, t, m), sunLimit(p, t))
	case within(t.Eclipsed, m):
		return ", eclipsed"
	}
	return ""
}

func within(spans []sched.Span, m int) bool {
	for _, s := range spans {
		if m >= s.From && m <= s.To {
			return true
		}
	}
	return false
}

// nearSun reports whether the Sun forbids a source at a minute.
func nearSun(w *world, t *campaigns.Track, m int) bool {
	p := w.desk.prepared
	limit := sunLimit(p, t)
	return t.SunDeg < limit && sunDistance(p, t, m) < limit
}

// sunLimit is how close to the Sun a source may be observed.
func sunLimit(p *campaigns.Prepared, t *campaigns.Track) float64 {
	return max(p.Site.SunLimitDeg, p.Campaign.Sources[t.Source].SunLimitDeg)
}

// sunDistance is how far from the Sun a source stands at a minute, in degrees.
//
// Formulas: haversine of the great circle between two points,
// hav(d) = hav(e1 - e2) + cos e1 cos e2 hav(a1 - a2), hav(x) = sin^2(x/2) (Sinnott 1984, Sky and Telescope 68, 159).
func sunDistance(p *campaigns.Prepared, t *campaigns.Track, m int) float64 {
	const deg = math.Pi / 180
	hav := func(x float64) float64 { s := math.Sin(x * deg / 2); return s * s }
	h := hav(t.ElDeg[m]-p.SunElDeg[m]) + math.Cos(t.ElDeg[m]*deg)*math.Cos(p.SunElDeg[m]*deg)*hav(t.AzDeg[m]-p.SunAzDeg[m])
	return 2 * math.Asin(math.Min(1, math.Sqrt(h))) / deg
}

func sunWords(el float64) string {
	switch {
	case el > -0.8:
		return fmt.Sprintf("up, %.0f deg", el)
	case el > -18:
		return fmt.Sprintf("%.0f deg, twilight", el)
	}
	return fmt.Sprintf("%.0f deg, dark", el)
}

func highest(el []float64) int {
	best := 0
	for i, e := range el {
		if e > el[best] {
			best = i
		}
	}
	return best
}
