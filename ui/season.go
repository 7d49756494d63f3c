package ui

import (
	"fmt"
	"image"
	"slices"
	"strings"
	"time"

	tea "github.com/charmbracelet/bubbletea"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/ui/cell"
	"example.org/tallystick/ui/theme"
)

// season shows the coming sessions and what they come to when they are played forward.
type season struct {
	at    int // page
	lists [len(seasonPages)]rows
	page  int

	made   *campaigns.Season // what tables were made of
	tables [len(seasonPages)]seasonTable

	filter field
	typing bool
	sieved sieved
}

// sieved is what a filter leaves of a page.
type sieved struct {
	of    *campaigns.Season
	page  int
	by    string
	table seasonTable
}

// A seasonTable is a page that is ready to be drawn, with the details of each row.
type seasonTable struct {
	cells   [][]string
	inks    []theme.Ink
	sources []string // of each row; nil: rows are not about sources
	lines   func(i int) (string, []line)
}

// row is what is drawn of a row.
func (t *seasonTable) row(i int) ([]string, theme.Ink) {
	if t.inks == nil {
		return t.cells[i], theme.Plain
	}
	return t.cells[i], t.inks[i]
}

// A seasonPage is one table of what a season comes to.
type seasonPage struct {
	name    string
	columns []textColumn
	about   string // one line, for the head
	make    func(*campaigns.Season) seasonTable
}

func (v *season) title() string { return seasonTitle }

func (v *season) withoutSession() {}

func (v *season) hints(w *world) []verb {
	if w.season.result == nil {
		return []verb{playSeason, nextView, otherSession}
	}
	return []verb{playSeason, filterRows, openChosen, seeElsewhere, nextView, otherSession}
}

func (v *season) typed(k tea.KeyMsg, _ *world) bool {
	took := typeFilter(k, &v.filter, &v.typing)
	if took {
		v.lists[v.at] = rows{}
	}
	return took
}

// table is the page shown, made anew when the season is another.
func (v *season) table(w *world) *seasonTable {
	s := w.season.result
	if s == nil {
		return nil
	}
	if v.made != s {
		v.made = s
		for i := range seasonPages {
			v.tables[i] = seasonPages[i].make(s)
			v.lists[i] = rows{at: min(v.lists[i].at, max(len(v.tables[i].cells)-1, 0))}
		}
	}
	return v.sieve()
}

// sieve is what the filter leaves of the page shown: rows that hold all of its words.
func (v *season) sieve() *seasonTable {
	whole := &v.tables[v.at]
	by := strings.ToLower(v.filter.String())
	want := strings.Fields(by)
	if len(want) == 0 {
		return whole
	}
	if s := &v.sieved; s.of == v.made && s.page == v.at && s.by == by {
		return &s.table
	}
	var left []int
	some := seasonTable{}
	for i, cells := range whole.cells {
		text := strings.ToLower(strings.Join(cells, " "))
		if slices.ContainsFunc(want, func(word string) bool { return !strings.Contains(text, word) }) {
			continue
		}
		left = append(left, i)
		some.cells = append(some.cells, cells)
		if whole.inks != nil {
			some.inks = append(some.inks, whole.inks[i])
		}
		if whole.sources != nil {
			some.sources = append(some.sources, whole.sources[i])
		}
	}
	some.lines = func(i int) (string, []line) { return whole.lines(left[i]) }
	v.sieved = sieved{v.made, v.at, by, some}
	v.lists[v.at].at = min(v.lists[v.at].at, max(len(left)-1, 0))
	return &v.sieved.table
}

func (v *season) steer(verb verb, w *world) action {
	t := v.table(w)
	if t == nil {
		return action{}
	}
	switch verb {
	case moveLeft:
		v.at = (v.at + len(seasonPages) - 1) % len(seasonPages)
	case moveRight:
		v.at = (v.at + 1) % len(seasonPages)
	case filterRows:
		v.typing = true
	case goBack:
		v.filter = field{}
	case barSource:
		if s := v.subject(w); s != "" {
			return action{verb: barThisSource, text: s}
		}
	default:
		v.lists[v.at].steer(verb, len(t.cells), max(v.page-1, 1))
	}
	return action{}
}

func (v *season) click(at, size image.Point, turn int, w *world) action {
	t := v.table(w)
	if t == nil {
		return action{}
	}
	list := &v.lists[v.at]
	if turn != 0 {
		list.steer(map[int]verb{-1: moveUp, 1: moveDown}[turn], len(t.cells), 1)
		return action{}
	}
	p := seasonLayout(size.X, size.Y)
	if at.In(p.head) {
		for i, r := range v.tabs(w, size.X) {
			if at.In(r) {
				v.at = i
			}
		}
		return action{}
	}
	if i := list.top + at.Y - p.table.Min.Y - 1; at.In(p.table) && at.Y > p.table.Min.Y && i < len(t.cells) {
		list.at = i
	}
	return action{}
}

func (v *season) subject(w *world) string {
	if t := v.table(w); t != nil && t.sources != nil && len(t.sources) > 0 {
		return t.sources[min(v.lists[v.at].at, len(t.sources)-1)]
	}
	return ""
}

// about says what the season makes of a source's first cadence.
func (v *season) about(source string, w *world) string {
	if w.season.result == nil {
		return ""
	}
	for _, c := range w.season.result.Cadences {
		if c.Source == source {
			return fmt.Sprintf("%s: %s due, %d planned", c.Outcome, count(c.Due, "visit"), c.Planned)
		}
	}
	return ""
}

func (v *season) seek(source string, w *world) {
	v.at, v.filter, v.typing = cadencePage, field{}, false
	t := v.table(w)
	for i, s := range t.sources {
		if s == source {
			v.lists[v.at].at = i
			return
		}
	}
}

func (v *season) read(w *world) (string, []line) {
	t := v.table(w)
	if t == nil || len(t.cells) == 0 {
		return "", nil
	}
	return t.lines(v.lists[v.at].at)
}

// tabs are the pages' names in the head, and the cells they take.
// On a narrow screen no blank stands behind a name, so that there is room for what the page is about.
func (v *season) tabs(_ *world, width int) []image.Rectangle {
	x, blanks := 0, 2
	if width < wideTitle {
		blanks = 1
	}
	var at []image.Rectangle
	for i := range seasonPages {
		n := cell.Width(seasonPages[i].name) + blanks
		at = append(at, image.Rect(x, 0, x+n, 1))
		x += n
	}
	return at
}

func (v *season) draw(w *world, c *cell.Canvas, g *theme.Glyphs) {
	cw, ch := c.Size()
	p := seasonLayout(cw, ch)
	t := v.table(w)
	if !p.strip.Empty() {
		drawCalendar(w, c.Sub(p.strip), g)
	}
	if t == nil {
		v.drawUnplayed(w, c.Sub(image.Rect(0, p.head.Min.Y, cw, ch)))
		return
	}
	v.drawHead(w, c.Sub(p.head), g)
	v.page = max(p.table.Dy()-1, 1)
	switch {
	case len(t.cells) == 0 && v.filter.String() != "":
		c.Sub(p.table).Put(1, 1, "no row matches", theme.Plain)
	case len(t.cells) == 0:
		c.Sub(p.table).Put(1, 1, "nothing to tell", theme.Plain)
	default:
		drawRows(c.Sub(p.table), g, seasonPages[v.at].columns, len(t.cells), t.row, &v.lists[v.at])
	}
	if !p.hours.Empty() {
		x := p.hours.Min.X - 1
		c.Fill(image.Rect(x, p.hours.Min.Y, x+1, p.hours.Max.Y), g.Upright, theme.Muted)
		drawHours(c.Sub(p.hours), w.season.result)
	}
	if !p.details.Empty() {
		title, lines := v.read(w)
		if lines == nil {
			return
		}
		in := c.Sub(p.details)
		iw, ih := in.Size()
		drawPane(in, g, title, lines, iw, ih, false)
	}
}

// drawUnplayed says what would be played, and how.
func (v *season) drawUnplayed(w *world, c *cell.Canvas) {
	cw, _ := c.Size()
	coming := 0
	for i := range w.campaign.Sessions {
		if w.campaign.Sessions[i].End.After(w.now) {
			coming++
		}
	}
	text := fmt.Sprintf("P plays the season: it plans the %s that are still to come quickly, one after the other, takes each plan as observed, and "+
		"shows which cadences are kept or missed, what is owed at the end, and at which sidereal hours time is short. "+
		"It takes some seconds and changes nothing; Esc stops it.", count(coming, "session"))
	ink := theme.Plain
	switch {
	case w.season.run != nil:
		text = "The season is being played" // the line below may be taken by planning
		if r := w.season.run.reached; r.all > 0 {
			text += fmt.Sprintf(": session %d of %d", r.done+1, r.all)
		}
		text += ". Everything else can be used meanwhile."
	case w.season.trouble != "":
		text, ink = w.season.trouble, theme.Overdue
	case coming == 0:
		text = "No session is still to come: there is no season to play. Sessions are added to campaign.toml."
	}
	for i, l := range cell.Wrap(oneCell.Replace(text), max(cw-4, 10)) {
		c.Put(2, 1+i, l, ink)
	}
}

func (v *season) drawHead(w *world, c *cell.Canvas, g *theme.Glyphs) {
	cw, _ := c.Size()
	for i, r := range v.tabs(w, cw) {
		if i == v.at {
			c.Fill(r, " ", theme.Chosen)
			c.Put(r.Min.X, 0, g.Mark+seasonPages[i].name, theme.Chosen)
		} else {
			c.Put(r.Min.X, 0, " "+seasonPages[i].name, theme.Muted)
		}
	}
	x := v.tabs(w, cw)[len(seasonPages)-1].Max.X + 1
	text := seasonPages[v.at].about
	ink := theme.Plain
	if v.typing || v.filter.String() != "" {
		if x+12 > cw {
			x = 0
			c.Fill(image.Rect(0, 0, cw, 1), " ", theme.Plain)
		}
		x = c.Put(x, 0, "filter: ", theme.Muted)
		if v.typing {
			v.filter.draw(c, x, 0)
		} else {
			c.Put(x, 0, cell.Fit(v.filter.String()+"  (Esc shows all)", max(cw-x, 0)), theme.Plain)
		}
		return
	}
	if w.season.edition != w.edition {
		text, ink = "out of date: P plays anew", theme.Overdue
		if over := x + cell.Width(text) - cw; over > 0 { // it matters more than the names of the last pages
			x = max(x-over, 1)
			c.Put(x-1, 0, " ", theme.Plain)
		}
	}
	if x+cell.Width(text) <= cw {
		c.Put(x, 0, text, ink)
	}
}

// drawCalendar draws the sessions on the days to come: what is granted each day, dates below.
func drawCalendar(w *world, c *cell.Canvas, g *theme.Glyphs) {
	cw, h := c.Size()
	first, last := w.now.UTC().Truncate(24*time.Hour), w.now
	for i := range w.campaign.Sessions {
		if e := w.campaign.Sessions[i].End; e.After(last) {
			last = e
		}
	}
	days := int(last.Sub(first).Hours()/24) + 1
	const margin = 5
	room := max(cw-margin-1, 1)
	column := func(t time.Time) int {
		return margin + min(int(t.Sub(first).Hours()/24*float64(room)/float64(days)), room-1)
	}
	c.Put(0, 0, "sess", theme.Muted)
	c.Fill(image.Rect(margin, 0, margin+room, 1), g.Other, theme.Muted)
	number := 0
	for i := range w.campaign.Sessions {
		s := &w.campaign.Sessions[i]
		if !s.End.After(w.now) {
			continue
		}
		number++
		ink := theme.Accent
		if s.Name == w.desk.session.Name {
			ink = theme.Strong
		}
		from, to := column(s.Start), column(s.End)
		for x := max(from, margin); x <= to; x++ {
			c.Put(x, 0, g.Full, ink)
		}
		if label := fmt.Sprint(number); from+cell.Width(label) < cw {
			c.Put(max(from, margin), 0, label, ink)
		}
	}
	if h < 2 {
		return
	}
	c.Put(0, 1, "date", theme.Muted)
	step := 1
	for step*room/days < 8 && step < days {
		step++
	}
	for d := 0; d < days; d += step {
		t := first.AddDate(0, 0, d)
		x := margin + d*room/days
		if x+5 <= cw {
			c.Put(x, 1, t.Format("01-02"), theme.Plain)
		}
	}
}

// drawHours draws hours wanted against hours granted, hour by hour of sidereal time.
func drawHours(c *cell.Canvas, s *campaigns.Season) {
	cw, h := c.Size()
	y := 0
	for i := range s.Pressure {
		l := &s.Pressure[i]
		if y >= h {
			return
		}
		c.Put(1, y, cell.Fit(fmt.Sprintf("%s: hours by LST, %.0f wanted, %.0f granted", l.Site, campaigns.SumH(l.WantedH), campaigns.SumH(l.GrantedH)), cw-1), theme.Strong)
		c.Put(1, y+1, cell.Fit(hoursSigns, cw-1), theme.Muted)
		y += 2
		most := mostHours(l)
		for hour := range l.WantedH {
			if y >= h {
				return
			}
			x := c.Put(1, y, fmt.Sprintf("%02d %5.1f %5.1f ", hour, l.WantedH[hour], l.GrantedH[hour]), theme.Plain)
			had, rest, short := pressureBar(max(cw-x-1, 1), l.WantedH[hour], l.GrantedH[hour], most)
			ink := theme.Muted
			if short {
				ink = theme.Overdue
			}
			c.Put(c.Put(x, y, had, theme.Good), y, rest, ink)
			y++
		}
	}
}

// hoursSigns says what stands in the columns of drawHours and what its bars mean.
const hoursSigns = "LST want grant  # had, + short, - spare"

func mostHours(l *campaigns.LSTPressure) float64 {
	most := 0.1
	for h := range l.WantedH {
		most = max(most, l.WantedH[h], l.GrantedH[h])
	}
	return most
}

// pressureBar draws one hour: # granted and wanted, + short, - spare.
func pressureBar(width int, wanted, granted, most float64) (had, rest string, short bool) {
	both, all := barCells(min(wanted, granted), most, width), barCells(max(wanted, granted), most, width)
	if short = wanted > granted; short {
		return strings.Repeat("#", both), strings.Repeat("+", all-both), short
	}
	return strings.Repeat("#", both), strings.Repeat("-", all-both), short
}

func barCells(v, most float64, width int) int {
	return min(max(int(v/most*float64(width)+0.5), 0), width)
}
