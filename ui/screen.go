package ui

import (
	"fmt"
	"image"
	"strings"

	"example.org/tallystick/ui/cell"
	"example.org/tallystick/ui/theme"
)

// View draws the whole screen: exactly as many cells as the terminal has.
func (m *model) View() (frame string) {
	defer func() {
		if r := recover(); r != nil {
			m.fault = fmt.Sprint(r)
			frame = "a fault in the program: your work is being kept"
		}
	}()
	if m.w <= 0 || m.h <= 0 {
		return ""
	}
	c := cell.New(m.w, m.h, m.st.ASCII)
	m.draw(c)
	return c.String(&m.st)
}

func (m *model) draw(c *cell.Canvas) {
	f := frameOf(m.w, m.h)
	g := &m.st.Glyphs
	if f.tooSmall {
		m.drawTooSmall(c)
		return
	}
	m.drawTitle(c.Sub(f.title))
	m.drawWorth(c.Sub(f.worth))
	if m.world.desk.prepared == nil {
		if v, ok := m.views[m.at].(free); ok {
			v.draw(&m.world, c.Sub(f.body), g)
		} else {
			m.drawNotReady(c.Sub(f.body))
		}
	} else {
		m.views[m.at].draw(&m.world, c.Sub(f.body), g)
	}
	if d := m.world.desk; d.held != nil && len(d.held.breaches) > 0 {
		drawHeld(c.Sub(image.Rect(0, 2, m.w, f.message.Max.Y)), d.held)
	} else {
		m.drawMessage(c.Sub(image.Rect(0, 2, m.w, f.message.Max.Y)))
	}
	m.drawHints(c.Sub(f.hints))
	if m.over != nil {
		m.over.draw(&m.world, c, g)
	}
}

func (m *model) drawTooSmall(c *cell.Canvas) {
	w, h := c.Size()
	lines := cell.Wrap(fmt.Sprintf("Please make the window larger: %d by %d at least.", leastWidth, leastHeight), w)
	y := max((h-len(lines))/2, 0)
	for i, l := range lines {
		c.Put(0, y+i, l, theme.Plain)
	}
}

func (m *model) drawNotReady(c *cell.Canvas) {
	w, _ := c.Size()
	text, ink := "Preparing the session: where every source stands, minute by minute.", theme.Plain
	if t := m.world.desk.trouble; t != "" {
		text, ink = t, theme.Overdue
	}
	for i, l := range cell.Wrap(text, w-4) {
		c.Put(2, 1+i, l, ink)
	}
	if m.world.desk.trouble != "" {
		c.Put(2, 3+len(cell.Wrap(text, w-4)), "o goes to another session, q quits.", theme.Plain)
	}
}

// tabs are the view names in the title line, and the cells they take.
func (m *model) tabs() []image.Rectangle {
	x := 0
	var at []image.Rectangle
	for i := range m.views {
		n := cell.Width(m.tabName(i))
		at = append(at, image.Rect(x, 0, x+n, 1))
		x += n
	}
	return at
}

// tabName is a view's number and name; on a narrow screen without the blank behind, or the number alone
// of those not shown.
func (m *model) tabName(i int) string {
	switch v := m.views[i]; {
	case m.w < narrowTitle && i != m.at:
		return fmt.Sprintf(" %d", i+1)
	case m.w < wideTitle:
		return fmt.Sprintf(" %d %s", i+1, v.title())
	default:
		return fmt.Sprintf(" %d %s ", i+1, v.title())
	}
}

func (m *model) titleClick(x int) action {
	for i, r := range m.tabs() {
		if image.Pt(x, 0).In(r) {
			return action{verb: viewVerbs[i]}
		}
	}
	return action{}
}

// drawTitle writes the views, the campaign and session, and the time; the narrower, the less.
func (m *model) drawTitle(c *cell.Canvas) {
	w, _ := c.Size()
	x := 0
	for i := range m.views {
		ink, name := theme.Muted, m.tabName(i)
		if i == m.at {
			ink, name = theme.Chosen, strings.Replace(name, " ", m.st.Glyphs.Mark, 1)
		}
		x = c.Put(x, 0, name, ink)
	}
	now := m.world.now.UTC()
	clock := now.Format("2006-01-02 15:04:05 UTC")
	if w < wideTitle {
		clock = now.Format("15:04:05 UTC")
	}
	room := w - x - 2 - len(clock) - 1
	what := m.world.desk.session.Name
	if long := m.world.campaign.Name + ": " + what; cell.Width(long) <= room {
		what = long
	}
	if room > 4 {
		c.Put(x+1, 0, cell.Fit(what, room), theme.Strong)
	}
	c.Put(w-len(clock), 0, clock, theme.Plain)
}

// drawWorth keeps worth, ceiling and distance in sight.
func (m *model) drawWorth(c *cell.Canvas) {
	d := m.world.desk
	if d.prepared == nil {
		return
	}
	w, _ := c.Size()
	x := 1
	put := func(text string, ink theme.Ink) {
		if text == "" || x > 1 && x+2+cell.Width(text) > w {
			return
		}
		if x > 1 {
			x += 2
		}
		x = c.Put(x, 0, text, ink)
	}
	if m.world.work != nil && len(d.shown().plan.Slots) == 0 {
		put("no plan yet", theme.Plain)
		return
	}
	r := d.read()
	worth := "worth " + r.verdict.Worth.String()
	if d.held != nil {
		worth += ", was " + d.prepared.Problem.PlanWorth(d.state.plan).String()
	}
	put(worth, theme.Strong)
	put(m.world.distance(d, r), theme.Plain)
	if n := len(r.verdict.Breaches); n > 0 {
		put(fmt.Sprintf("! %s broken", count(n, "limit")), theme.Broken)
	}
	if d.unsaved() {
		put("not saved", theme.Overdue)
	}
	put(count(len(r.rows), "slot"), theme.Plain)
	if n := pinned(r); n > 0 {
		put(fmt.Sprintf("%d pinned", n), theme.Pinned)
	}
	if n := len(r.bars); n > 0 {
		put(count(n, "source")+" barred", theme.Plain)
	}
	if n := len(r.verdict.MissingMusts); n > 0 {
		put(fmt.Sprintf("! %s must be in", jobName(r.problem, r.verdict.MissingMusts[0])), theme.Overdue)
	}
	if m.world.folder.Demo() {
		put("invented demonstration", theme.Muted)
	}
}

func pinned(r *reading) int {
	n := 0
	for _, s := range r.plan.Slots {
		if s.Pinned {
			n++
		}
	}
	return n
}

// drawHeld writes at the bottom of a canvas what an edit breaks, in full where that takes no more than
// three lines.
func drawHeld(c *cell.Canvas, held *heldEdit) {
	w, h := c.Size()
	text := "! " + oneCell.Replace(strings.Join(held.breaches, "; "))
	lines := cell.Wrap(text, w-2)
	if len(lines) > 3 {
		lines = append(lines[:2], strings.Join(lines[2:], " "))
	}
	for i, l := range lines {
		c.Put(0, h-len(lines)+i, cell.Fit(" "+l, w), theme.ChosenBad)
	}
}

// drawMessage writes at the bottom of a canvas what just happened, or how far planning has come; a long
// message takes a line of the view above it, until the next key.
func (m *model) drawMessage(c *cell.Canvas) {
	w, h := c.Size()
	const most = 2
	switch {
	case m.world.work != nil:
		text := "planning"
		if r := m.world.work.reached; r.Worth > 0 {
			text += fmt.Sprintf(": worth %s so far", r.Worth)
			if r.HasCeiling {
				text += fmt.Sprintf(", ceiling %s", r.Ceiling)
			}
		}
		c.Put(1, h-1, cell.Fit(text+"; Esc stops it", w-1), theme.Now)
	case m.world.season.run != nil:
		c.Put(1, h-1, cell.Fit(m.world.season.run.words(), w-1), theme.Now)
	default:
		lines := cell.Wrap(oneCell.Replace(m.world.say.text), w-2)
		if len(lines) > most {
			lines = append(lines[:most-1], strings.Join(lines[most-1:], " "))
		}
		for i, l := range lines {
			c.Put(0, h-len(lines)+i, cell.Fit(" "+l, w), m.world.say.ink)
		}
	}
}

// drawHints writes the keys that matter most here and now.
func (m *model) drawHints(c *cell.Canvas) {
	w, _ := c.Size()
	c.Fill(image.Rect(0, 0, w, 1), " ", theme.Bar)
	verbs := m.views[m.at].hints(&m.world)
	if m.world.desk.held != nil {
		verbs = []verb{keepHeld, goBack, undoEdit, showHelp}
	}
	x := 1
	end := w
	for _, v := range []verb{leave, findAction, showHelp} { // always, at the right
		if v == findAction && w < 60 {
			continue
		}
		end = m.hint(c, end, v, true)
	}
	for _, v := range verbs {
		if v == showHelp {
			continue
		}
		cmd := commandOf[v]
		if x+cell.Width(hintText(cmd))+2 > end {
			break
		}
		x = m.hint(c, x, v, false)
	}
}

func hintText(c *command) string { return keyName(c.Keys()[0]) + " " + c.short }

func (m *model) hint(c *cell.Canvas, x int, v verb, left bool) int {
	cmd := commandOf[v]
	if left {
		x -= cell.Width(hintText(cmd)) + 1
		c.Put(x, 0, hintText(cmd), theme.Bar)
		return x - 1
	}
	return c.Put(x, 0, hintText(cmd), theme.Bar) + 2
}
