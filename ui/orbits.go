package ui

import (
	"fmt"
	"image"
	"strings"

	tea "github.com/charmbracelet/bubbletea"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/ui/cell"
	"example.org/tallystick/ui/theme"
)

// orbits shows every binary: what has been seen of its orbit, what is missing, what comes.
type orbits struct {
	list   rows
	page   int
	filter field
	typing bool
	shown  []int // indices into orbitState.views
}

func (v *orbits) title() string { return orbitsTitle }

func (v *orbits) withoutSession() {}

func (v *orbits) hints(*world) []verb {
	return []verb{filterRows, openChosen, seeElsewhere, nextView, otherSession}
}

func (v *orbits) rows(w *world) []int {
	v.shown = v.shown[:0]
	if len(w.orbits.views) == 0 {
		return nil // the cursor stays where seek has put it
	}
	want := strings.ToLower(v.filter.String())
	for i := range w.orbits.views {
		o := &w.orbits.views[i]
		if want == "" || strings.Contains(strings.ToLower(o.Source), want) {
			v.shown = append(v.shown, i)
		}
	}
	v.list.at = min(max(v.list.at, 0), max(len(v.shown)-1, 0))
	return v.shown
}

func (v *orbits) chosen(w *world) (*campaigns.OrbitView, bool) {
	shown := v.rows(w)
	if len(shown) == 0 {
		return nil, false
	}
	return &w.orbits.views[shown[v.list.at]], true
}

func (v *orbits) typed(k tea.KeyMsg, _ *world) bool {
	took := typeFilter(k, &v.filter, &v.typing)
	if took {
		v.list = rows{}
	}
	return took
}

// typeFilter takes the keys of a filter that is being typed; false for a key that is no text.
func typeFilter(k tea.KeyMsg, filter *field, typing *bool) bool {
	if !*typing {
		return false
	}
	switch k.String() {
	case "esc":
		*typing, *filter = false, field{}
	case "enter":
		*typing = false
	case "ctrl+c":
		return false
	default:
		if !filter.key(k) {
			*typing = false
			return false
		}
	}
	return true
}

func (v *orbits) steer(verb verb, w *world) action {
	n := len(v.rows(w))
	if len(w.orbits.views) == 0 {
		return action{}
	}
	switch verb {
	case moveLeft:
		v.list.steer(moveUp, n, 1)
	case moveRight:
		v.list.steer(moveDown, n, 1)
	case filterRows:
		v.typing = true
	case goBack:
		v.filter = field{}
	case barSource:
		if o, ok := v.chosen(w); ok {
			return action{verb: barThisSource, text: o.Source}
		}
	default:
		v.list.steer(verb, n, max(v.page-1, 1))
	}
	return action{}
}

func (v *orbits) click(at, size image.Point, turn int, w *world) action {
	p := orbitLayout(size.X, size.Y)
	n := len(v.rows(w))
	switch i := v.list.top + at.Y - p.list.Min.Y - 1; {
	case turn < 0:
		v.list.steer(moveUp, n, 1)
	case turn > 0:
		v.list.steer(moveDown, n, 1)
	case at.In(p.list) && at.Y > p.list.Min.Y && i < n:
		v.list.at = i
	}
	return action{}
}

func (v *orbits) subject(w *world) string {
	if o, ok := v.chosen(w); ok {
		return o.Source
	}
	return ""
}

func (v *orbits) about(source string, w *world) string {
	for i := range w.campaign.Sources {
		if s := &w.campaign.Sources[i]; s.Name == source && s.Orbit != nil {
			return fmt.Sprintf("a binary with a period of %s", periodWords(s.Orbit.PeriodDays))
		}
	}
	return ""
}

func (v *orbits) seek(source string, w *world) {
	v.filter, v.typing = field{}, false
	// The list has every binary in the order of the campaign, also before it is worked out.
	at := 0
	for i := range w.campaign.Sources {
		if w.campaign.Sources[i].Orbit == nil {
			continue
		}
		if w.campaign.Sources[i].Name == source {
			v.list.at = at
		}
		at++
	}
}

func (v *orbits) draw(w *world, c *cell.Canvas, g *theme.Glyphs) {
	cw, ch := c.Size()
	p := orbitLayout(cw, ch)
	shown := v.rows(w)
	v.drawHead(w, c.Sub(p.head), len(shown))
	if len(w.orbits.views) == 0 {
		return
	}
	v.drawList(w, c.Sub(p.list), g, shown)
	o, ok := v.chosen(w)
	if !ok {
		return
	}
	if p.beside {
		x := p.list.Max.X
		c.Fill(image.Rect(x, p.list.Min.Y, x+1, p.list.Max.Y), g.Upright, theme.Muted)
	}
	if o.Void {
		p.strip, p.shape = image.Rectangle{}, image.Rectangle{}
	}
	if !p.strip.Empty() {
		drawStrip(c.Sub(p.strip), g, o, !p.beside)
	}
	if !p.shape.Empty() {
		drawShape(c.Sub(p.shape), g, o)
	}
	if !p.words.Empty() {
		in := c.Sub(p.words)
		iw, ih := in.Size()
		lines := orbitLines(w, g, o)
		all := wrapLines(lines, iw)
		drawLines(in, all, labelWidth(lines))
		if more := " Enter: all "; len(all) > ih && ih > 0 {
			in.Put(iw-len(more), ih-1, more, theme.Accent)
		}
	}
}

func (v *orbits) drawHead(w *world, c *cell.Canvas, n int) {
	cw, _ := c.Size()
	o := &w.orbits
	binaries := 0
	for i := range w.campaign.Sources {
		if w.campaign.Sources[i].Orbit != nil {
			binaries++
		}
	}
	switch {
	case binaries == 0:
		c.Put(1, 0, cell.Fit("no source of this campaign has an orbit", cw-1), theme.Plain)
	case o.trouble != "":
		c.Put(1, 0, cell.Fit(oneCell.Replace(o.trouble), cw-1), theme.Overdue)
	case len(o.views) == 0:
		c.Put(1, 0, cell.Fit("looking at the orbits", cw-1), theme.Plain)
	case v.typing || v.filter.String() != "":
		x := c.Put(1, 0, fmt.Sprintf("%d of %d, filter: ", n, binaries), theme.Muted)
		if v.typing {
			v.filter.draw(c, x, 0)
		} else {
			c.Put(x, 0, cell.Fit(v.filter.String()+"  (Esc shows all)", max(cw-x, 0)), theme.Plain)
		}
	default:
		to := o.views[0].To
		text := fmt.Sprintf("%s at %s UTC from %s; events until %s", binariesWords(binaries), o.views[0].At.UTC().Format("2006-01-02 15:04"), o.known.site, date(to))
		c.Put(1, 0, cell.Fit(text, cw-1), theme.Plain)
	}
}

func binariesWords(n int) string {
	if n == 1 {
		return "1 binary"
	}
	return fmt.Sprintf("%d binaries", n)
}

var orbitColumns = []textColumn{
	{"source", 12, false, 0}, {"period", 8, true, 1}, {"e", 5, true, 4}, {"seen", 5, true, 0}, {"bins lack", 9, true, 2}, {"next", 26, false, 3},
}

func (v *orbits) drawList(w *world, c *cell.Canvas, g *theme.Glyphs, shown []int) {
	_, h := c.Size()
	v.page = max(h-1, 1)
	if len(shown) == 0 {
		c.Put(1, 1, "no binary matches", theme.Plain)
		return
	}
	drawRows(c, g, orbitColumns, len(shown), func(i int) ([]string, theme.Ink) {
		return orbitCells(w, &w.orbits.views[shown[i]]), theme.Plain
	}, &v.list)
}

// orbitCells are the texts of a binary's row.
func orbitCells(w *world, o *campaigns.OrbitView) []string {
	bins := "-"
	if o.Bins != nil {
		bins = fmt.Sprintf("%d of %d", o.BinsMissing(), len(o.Bins))
	}
	next := "nothing usable"
	if e := nextUsable(w, o); e != nil {
		next = shortKind(e.Kind) + " " + e.At.UTC().Format("01-02 15:04")
	}
	return []string{o.Source, periodWords(o.PeriodDays), eccentricityWords(o.Eccentricity), fmt.Sprintf("%.0f %%", 100*o.SeenShare()), bins, next}
}

// nextUsable is the next event that a session catches, or the next that could be observed.
func nextUsable(w *world, o *campaigns.OrbitView) *campaigns.ConjunctionRow {
	var first *campaigns.ConjunctionRow
	for i := range o.Events {
		e := &o.Events[i]
		if e.At.Before(w.now) || !e.Usable {
			continue
		}
		if e.Session != "" {
			return e
		}
		if first == nil {
			first = e
		}
	}
	return first
}

func shortKind(k campaigns.ConjunctionKind) string {
	return strings.TrimSuffix(string(k), " conjunction")
}

func periodWords(days float64) string {
	switch {
	case days < 1./24:
		return fmt.Sprintf("%.1f min", days*24*60)
	case days < 1:
		return fmt.Sprintf("%.2f h", days*24)
	case days < 100:
		return fmt.Sprintf("%.2f d", days)
	}
	return fmt.Sprintf("%.0f d", days)
}

func eccentricityWords(e float64) string {
	if e < 0.001 {
		return "0"
	}
	return fmt.Sprintf("%.3f", e)
}

func (v *orbits) read(w *world) (string, []line) {
	o, ok := v.chosen(w)
	if !ok {
		return "", nil
	}
	return o.Source + ", a binary", orbitLines(w, &theme.Glyphs{}, o)
}
