package ui

import (
	"fmt"
	"math"
	"strings"
	"time"

	"example.org/tallystick/ui/cell"
	"example.org/tallystick/ui/theme"
)

// axis turns minutes of the session into columns of the screen and back.
type axis struct {
	left, columns, minutes int
}

func axisOf(d *desk, w int) axis {
	return axis{left: axisMargin, columns: max(w-axisMargin-1, 1), minutes: max(d.prepared.Problem.Minutes, 1)}
}

// column is where a minute is drawn; minutes outside the session land outside the plot.
func (a axis) column(minute int) int {
	return a.left + int(math.Floor(float64(minute)*float64(a.columns)/float64(a.minutes)))
}

// minute is the middle of what a column stands for.
func (a axis) minute(column int) int {
	m := int((float64(column-a.left) + 0.5) * float64(a.minutes) / float64(a.columns))
	return min(max(m, 0), a.minutes)
}

// drawAxis writes the hours in UTC, with the cursor and the present moment.
func drawAxis(w *world, c *cell.Canvas, g *theme.Glyphs, a axis) {
	d := w.desk
	cw, _ := c.Size()
	c.Put(0, 0, " UTC", theme.Muted)
	if now, ok := w.nowMinute(); ok {
		c.Put(min(max(a.column(now)-1, a.left), cw-3), 0, "now", theme.Now)
	}
	start := d.prepared.Problem.Start.UTC()
	step := tickStep(a)
	first := start.Truncate(step)
	for t := first; ; t = t.Add(step) {
		m := int(t.Sub(start) / time.Minute)
		if m > a.minutes {
			break
		}
		if m < 0 {
			continue
		}
		putLabel(c, a.column(m), cw, t.Format("15:04"), theme.Plain)
	}
}

// tickStep is a step between labels that leaves room for them.
func tickStep(a axis) time.Duration {
	for _, step := range []time.Duration{30 * time.Minute, time.Hour, 2 * time.Hour, 3 * time.Hour, 4 * time.Hour, 6 * time.Hour} {
		if float64(step/time.Minute)*float64(a.columns)/float64(a.minutes) >= 8 {
			return step
		}
	}
	return 12 * time.Hour
}

// drawSecondAxis writes LST, local time or MJD below the same ticks' room.
func drawSecondAxis(w *world, c *cell.Canvas, a axis) {
	d := w.desk
	cw, _ := c.Size()
	name := strings.TrimSuffix(w.zone.name(d.prepared.Site, d.session.Start), ":00") // +01:00 is as good as +01
	c.Put(0, 0, fmt.Sprintf("%4s", name), theme.Muted)
	step := int(tickStep(a) / time.Minute)
	switch w.zone {
	case zoneLST:
		// Ticks stand where the sidereal clock shows whole steps, not where UTC does.
		last := -1
		for m := 0; m <= a.minutes; m++ {
			k := int(d.prepared.LSTHours[m] * 60 / float64(step))
			if last >= 0 && k != last {
				putLabel(c, a.column(m), cw, hours(float64(k*step)/60), theme.Muted)
			}
			last = k
		}
	default:
		for m := 0; m <= a.minutes; m += step {
			putLabel(c, a.column(m), cw, w.zone.write(d.prepared, m), theme.Muted)
		}
	}
}

// putLabel writes a label where it runs into nothing that is there already.
func putLabel(c *cell.Canvas, x, w int, label string, ink theme.Ink) {
	for i := x - 1; i <= x+len(label); i++ {
		if i >= 0 && i < w && !c.Blank(i, 0) {
			return
		}
	}
	if x+len(label) <= w {
		c.Put(x, 0, label, ink)
	}
}

// drawBars writes every slot from its start to its end, with its number, a P where it is pinned and
// a ! where it breaks a limit; breaks of the session between them; the cursor.
func drawBars(w *world, c *cell.Canvas, g *theme.Glyphs, a axis) {
	d := w.desk
	r := d.read()
	c.Put(0, 0, "slot", theme.Muted)
	for _, b := range r.problem.Breaks {
		for x := a.column(b.From); x <= a.column(b.To); x++ {
			c.Put(x, 0, g.Break, theme.Muted)
		}
	}
	for i := range r.plan.Slots {
		if i != d.chosen {
			drawBar(c, g, a, r, i, false)
		}
	}
	if len(r.plan.Slots) > 0 {
		drawBar(c, g, a, r, d.chosen, true)
	}
	if s, ok := d.slot(); !ok || d.minute != s.Start {
		c.Put(a.column(d.minute), 0, g.Cursor, theme.Now)
	}
}

func drawBar(c *cell.Canvas, g *theme.Glyphs, a axis, r *reading, i int, chosen bool) {
	s := r.plan.Slots[i]
	from, to := a.column(s.Start), max(a.column(s.End)-1, a.column(s.Start))
	ink := theme.Plain
	flag := ""
	if s.Pinned {
		ink, flag = theme.Pinned, "P"
	}
	if len(r.rows[i].Breaches) > 0 {
		ink, flag = theme.Broken, "!"
	}
	if chosen {
		ink = theme.Chosen
		if flag == "!" {
			ink = theme.ChosenBad
		}
	}
	c.Put(from, 0, barText(g, to-from+1, fmt.Sprint(i+1), flag), ink)
}

// barText is a bar of n cells: its ends, and of number and flag what there is room for, the flag first.
func barText(g *theme.Glyphs, n int, number, flag string) string {
	switch {
	case n == 1 && flag != "":
		return flag
	case n == 1 && len(number) == 1:
		return number
	case n == 1:
		return g.SlotFrom
	}
	label := number + flag
	if len(label) > n-1 {
		label = flag
	}
	if n-1-len(label) < 2 {
		return g.SlotFrom + label + strings.Repeat(g.Slot, n-1-len(label))
	}
	left := (n - 2 - len(label)) / 2
	return g.SlotFrom + strings.Repeat(g.Slot, left) + label + strings.Repeat(g.Slot, n-2-len(label)-left) + g.SlotTo
}
