package ui

import (
	"fmt"
	"strings"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/ui/cell"
	"example.org/tallystick/ui/theme"
)

// A slotColumn is one column of the slot table. A narrow screen drops the highest ranks first.
type slotColumn struct {
	head  string
	width int
	right bool
	rank  int
	text  func(w *world, r *campaigns.SlotRow, i int) string
}

// sourceColumn takes what the others leave, between these widths.
const (
	sourceLeast = 10
	sourceMost  = 24
)

func slotColumns(w *world) []slotColumn {
	d := w.desk
	p := d.prepared
	zone := w.zone.name(p.Site, d.session.Start)
	zoneWidth := 6
	if w.zone == zoneMJD {
		zoneWidth = 9
	}
	return []slotColumn{
		{"no", 2, true, 0, func(_ *world, _ *campaigns.SlotRow, i int) string { return fmt.Sprint(i + 1) }},
		{"start", 5, false, 0, func(_ *world, r *campaigns.SlotRow, _ int) string { return clock(r.Start) }},
		{"end", 5, false, 0, func(_ *world, r *campaigns.SlotRow, _ int) string { return clock(r.End) }},
		{zone, zoneWidth, false, 6, func(w *world, _ *campaigns.SlotRow, i int) string {
			return w.zone.write(p, w.desk.shown().plan.Slots[i].Start)
		}},
		{"source", 0, false, 0, func(_ *world, r *campaigns.SlotRow, _ int) string { return r.Source }},
		{"rcvr", 4, false, 1, func(_ *world, r *campaigns.SlotRow, _ int) string { return r.Receiver }},
		{"min", 3, true, 1, func(_ *world, r *campaigns.SlotRow, _ int) string {
			return fmt.Sprintf("%.0f", r.End.Sub(r.Start).Minutes())
		}},
		{"el", 3, true, 2, func(_ *world, r *campaigns.SlotRow, _ int) string { return fmt.Sprintf("%.0f", r.ElStartDeg) }},
		{"to", 3, true, 4, func(_ *world, r *campaigns.SlotRow, _ int) string { return fmt.Sprintf("%.0f", r.ElEndDeg) }},
		{"az", 4, true, 3, func(_ *world, r *campaigns.SlotRow, _ int) string { return fmt.Sprintf("%.0f", r.AzStartDeg) }},
		{"to", 4, true, 5, func(_ *world, r *campaigns.SlotRow, _ int) string { return fmt.Sprintf("%.0f", r.AzEndDeg) }},
		{"turn", 4, true, 10, func(_ *world, r *campaigns.SlotRow, _ int) string { return fmt.Sprint(r.Turn) }},
		{"HA", 6, true, 12, func(_ *world, r *campaigns.SlotRow, _ int) string { return signedHours(r.HAStartH) }},
		{"phase", 9, false, 9, func(_ *world, r *campaigns.SlotRow, _ int) string { return phases(r) }},
		{"S/N", 5, true, 8, func(_ *world, r *campaigns.SlotRow, _ int) string { return number(r.SNR) }},
		{"TOA us", 6, true, 8, func(_ *world, r *campaigns.SlotRow, _ int) string { return number(r.ToaUs) }},
		{"move s", 6, true, 7, func(_ *world, r *campaigns.SlotRow, _ int) string { return fmt.Sprint(r.MoveSec) }},
		{"wait s", 6, true, 11, func(w *world, _ *campaigns.SlotRow, i int) string { return fmt.Sprint(waitSec(w, i)) }},
		{"worth", 5, true, 1, func(_ *world, r *campaigns.SlotRow, _ int) string { return fmt.Sprintf("%.2f", r.Worth) }},
		{"flags", 5, false, 0, func(w *world, r *campaigns.SlotRow, i int) string { return rowFlags(w, r, i) }},
		{"note", 20, false, 13, func(_ *world, r *campaigns.SlotRow, _ int) string { return r.Note }},
	}
}

func slotFlags(r *campaigns.SlotRow) string {
	var f []string
	if r.Pinned {
		f = append(f, "P")
	}
	if len(r.Breaches) > 0 {
		f = append(f, "!")
	}
	return strings.Join(f, " ")
}

// rowFlags are a slot's flags on the screen: what the logbook says of it comes before the pin.
func rowFlags(w *world, r *campaigns.SlotRow, i int) string {
	o := w.outcome(i)
	if o == "" {
		return slotFlags(r)
	}
	word := map[campaigns.Outcome]string{campaigns.Done: "done", campaigns.Partial: "part", campaigns.Lost: "lost"}[o]
	if len(r.Breaches) > 0 {
		word += "!"
	}
	return word
}

func phases(r *campaigns.SlotRow) string {
	if r.PhaseStart == nil || r.PhaseEnd == nil {
		return "-"
	}
	return fmt.Sprintf("%.2f-%.2f", *r.PhaseStart, *r.PhaseEnd)
}

// fitColumns keeps the columns that have room in w cells, in their order, and sets the source's width.
func fitColumns(all []slotColumn, w int) []slotColumn {
	const mark, gap = 1, 1
	used := mark + sourceLeast
	keep := make([]bool, len(all))
	for rank := 0; rank <= 13; rank++ {
		need := 0
		for _, c := range all {
			if c.rank == rank {
				need += c.width + gap
			}
		}
		if rank > 0 && used+need > w {
			break
		}
		used += need
		for i, c := range all {
			keep[i] = keep[i] || c.rank == rank
		}
	}
	var kept []slotColumn
	for i, c := range all {
		if !keep[i] {
			continue
		}
		if c.width == 0 {
			c.width = min(sourceLeast+max(w-used, 0), sourceMost)
		}
		kept = append(kept, c)
	}
	return kept
}

func (v *slate) drawTable(w *world, c *cell.Canvas, g *theme.Glyphs) {
	cw, h := c.Size()
	d := w.desk
	r := d.read()
	columns := fitColumns(slotColumns(w), cw)
	v.page = max(h-1, 1)
	drawRow(c, 0, columns, theme.Muted, " ", func(col slotColumn) string { return col.head })
	if len(r.rows) == 0 {
		text := "The plan is empty: R plans the session, i inserts a slot."
		if w.work != nil {
			text = "Planning."
		}
		c.Put(1, 1, cell.Fit(text, cw-1), theme.Plain)
		return
	}
	list := rows{at: d.chosen, top: v.top}
	list.show(len(r.rows), v.page)
	v.top = list.top
	for i := v.top; i < min(v.top+v.page, len(r.rows)); i++ {
		row := &r.rows[i]
		ink, mark := theme.Plain, " "
		switch {
		case i == d.chosen && len(row.Breaches) > 0:
			ink, mark = theme.ChosenBad, g.Mark
		case i == d.chosen:
			ink, mark = theme.Chosen, g.Mark
		case len(row.Breaches) > 0:
			ink = theme.Broken
		case row.Pinned:
			ink = theme.Pinned
		}
		drawRow(c, i-v.top+1, columns, ink, mark, func(col slotColumn) string { return col.text(w, row, i) })
	}
	drawMore(c, g, v.top, len(r.rows), v.page)
}

func drawRow(c *cell.Canvas, y int, columns []slotColumn, ink theme.Ink, mark string, text func(slotColumn) string) {
	w, _ := c.Size()
	if mark != " " {
		c.Put(0, y, cell.Fit("", w), ink)
	}
	c.Put(0, y, mark, ink)
	x := 1
	for _, col := range columns {
		t := text(col)
		if col.right {
			t = cell.Right(t, col.width)
		} else {
			t = cell.Fit(t, col.width)
		}
		c.Put(x, y, t, ink)
		x += col.width + 1
	}
}

// drawMore marks a table that goes on above or below what is in sight.
func drawMore(c *cell.Canvas, g *theme.Glyphs, top, n, page int) {
	w, h := c.Size()
	if top > 0 {
		c.Put(w-1, 1, g.Up, theme.Accent)
	}
	if top+page < n {
		c.Put(w-1, h-1, g.Down, theme.Accent)
	}
}
