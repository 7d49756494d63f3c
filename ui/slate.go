package ui

import (
	"image"

	tea "github.com/charmbracelet/bubbletea"

	"example.org/tallystick/ui/cell"
	"example.org/tallystick/ui/theme"
)

// slate is the view in which a session's plan is made and edited: the time axis with its curves and
// bars, the slot table, the chosen slot in full.
type slate struct {
	top  int // first row of the table in sight
	page int // rows of the table, as last drawn
}

// cursorStep is how far left and right move the cursor minute.
const cursorStep = 5

func (v *slate) title() string { return slateTitle }

func (v *slate) typed(tea.KeyMsg, *world) bool { return false }

func (v *slate) hints(w *world) []verb {
	if _, ok := w.desk.slot(); !ok {
		return []verb{insertSlot, planAgain, otherSession, nextView}
	}
	if _, ok := w.nowMinute(); ok {
		return []verb{startNow, slotDone, slotLost, lostUntil, planAgain, undoEdit, savePlan, followNow, insertSlot, replaceSlot, moveLater, lengthen, pinSlot, exportPlan, openChosen, nextView}
	}
	return []verb{insertSlot, pinSlot, planAgain, undoEdit, savePlan, moveLater, lengthen, replaceSlot, dropSlot, barSource, exportPlan, openChosen, nextView, otherSession}
}

func (v *slate) steer(verb verb, w *world) action {
	d := w.desk
	if d.prepared == nil {
		return action{}
	}
	switch verb {
	case moveLeft:
		return action{verb: chooseMinute, n: d.minute - cursorStep}
	case moveRight:
		return action{verb: chooseMinute, n: d.minute + cursorStep}
	case farLeft:
		return action{verb: chooseMinute, n: d.minute - 60}
	case farRight:
		return action{verb: chooseMinute, n: d.minute + 60}
	case filterRows:
		if _, ok := d.slot(); ok {
			return action{verb: openDialog, more: dialog(newSlotFinder(w))}
		}
	case barSource:
		s, ok := d.slot()
		if !ok {
			return action{}
		}
		return action{verb: barThisSource, text: sourceOf(d.prepared.Problem, s)}
	}
	r := rows{at: d.chosen}
	if r.steer(verb, len(d.shown().plan.Slots), max(v.page-1, 1)) {
		return action{verb: chooseSlot, n: r.at}
	}
	return action{}
}

func (v *slate) click(at, size image.Point, turn int, w *world) action {
	d := w.desk
	if d.prepared == nil {
		return action{}
	}
	if turn != 0 {
		return action{verb: chooseSlot, n: d.chosen + turn}
	}
	_, underWay := w.nowMinute()
	p := slateLayout(size.X, size.Y, underWay)
	if i := v.top + at.Y - p.table.Min.Y - 1; at.In(p.table) && at.Y > p.table.Min.Y && i < len(d.shown().plan.Slots) {
		return action{verb: chooseSlot, n: i}
	}
	if at.X < axisMargin || !at.In(p.plot.Union(p.bars).Union(p.utc).Union(p.second)) {
		return action{}
	}
	a := axisOf(d, size.X)
	minute := a.minute(at.X)
	if at.In(p.bars) {
		for i, s := range d.shown().plan.Slots {
			if at.X >= a.column(s.Start) && at.X <= a.column(s.End) {
				return action{verb: chooseSlot, n: i}
			}
		}
	}
	return action{verb: chooseMinute, n: minute}
}

func (v *slate) draw(w *world, c *cell.Canvas, g *theme.Glyphs) {
	cw, ch := c.Size()
	now, underWay := w.present()
	p := slateLayout(cw, ch, underWay)
	d := w.desk
	a := axisOf(d, cw)
	if !p.now.Empty() {
		drawNow(w, c.Sub(p.now), now)
	}
	if !p.words.Empty() {
		drawElevationWords(w, c.Sub(p.words))
	}
	if !p.plot.Empty() {
		drawCurves(w, c.Sub(p.plot), g, a)
	}
	if !p.bars.Empty() {
		drawBars(w, c.Sub(p.bars), g, a)
		drawAxis(w, c.Sub(p.utc), g, a)
	}
	if !p.second.Empty() {
		drawSecondAxis(w, c.Sub(p.second), a)
	}
	v.drawTable(w, c.Sub(p.table), g)
	if p.details.Empty() {
		return
	}
	if p.beside {
		x := p.details.Min.X - 1
		c.Fill(image.Rect(x, p.details.Min.Y, x+1, p.details.Max.Y), g.Upright, theme.Muted)
	}
	v.drawDetails(w, c.Sub(p.details), g, p.beside)
}
