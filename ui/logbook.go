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

// logbook records what became of the session's slots, and shows the entries of the past, the latest first.
type logbook struct {
	list   rows
	page   int
	filter field
	typing bool

	made    logbookKey // what the rows were made of
	slots   []logSlot
	past    []campaigns.Entry
	entries int // that count, without the filter
	asked   int // the slot that was last asked about, counted from 1; 0: none
}

// A logbookKey tells when the rows must be made anew.
type logbookKey struct {
	book   *campaigns.Logbook
	desk   *desk
	of     *reading
	filter string
}

// A logSlot is a slot of the session's plan with what the logbook says of it.
type logSlot struct {
	row   *campaigns.SlotRow
	entry *campaigns.Entry // nil: not recorded
}

func (v *logbook) title() string { return logbookTitle }

func (v *logbook) withoutSession() {}

func (v *logbook) hints(*world) []verb {
	return []verb{recordDone, recordPartial, recordLost, recordAll, filterRows, takeBackEntry, openChosen, nextView}
}

// prepare lists the session's slots and the entries that pass the filter, if anything has changed since.
func (v *logbook) prepare(w *world) {
	d := w.desk
	key := logbookKey{book: w.book, desk: d, filter: strings.ToLower(v.filter.String())}
	if d.prepared != nil {
		key.of = d.read()
	}
	if key == v.made {
		return
	}
	v.made = key
	all := w.book.Effective()
	v.entries = len(all)
	v.slots = nil
	if d.prepared != nil {
		for i := range d.read().rows {
			row := &d.read().rows[i]
			v.slots = append(v.slots, logSlot{row, entryAbout(all, d.session.Site, row)})
		}
	}
	want := strings.Fields(key.filter)
	v.past = nil
	for i := range slices.Backward(all) {
		if passes(&all[i], want) {
			v.past = append(v.past, all[i])
		}
	}
	if len(want) > 0 {
		v.slots = slices.DeleteFunc(v.slots, func(s logSlot) bool {
			e := campaigns.Entry{Start: s.row.Start, Source: s.row.Source, Receiver: s.row.Receiver}
			return !passes(&e, want)
		})
	}
	v.list.at = min(max(v.list.at, 0), max(v.count()-1, 0))
	v.goOn()
}

// goOn moves the cursor from a slot that has just been recorded to the next that is not.
func (v *logbook) goOn() {
	if at := v.asked - 1; at < 0 || at != v.list.at || at >= len(v.slots) || v.slots[at].entry == nil {
		return
	}
	for i := v.asked; i < len(v.slots); i++ {
		if v.slots[i].entry == nil {
			v.list.at = i
			break
		}
	}
	v.asked = 0
}

// passes says that an entry holds every word of a filter.
func passes(e *campaigns.Entry, words []string) bool {
	if len(words) == 0 {
		return true
	}
	text := strings.ToLower(strings.Join([]string{e.Start.UTC().Format("2006-01-02 15:04"), e.Source, e.Receiver, string(e.Outcome), e.Site, e.Note}, " "))
	for _, word := range words {
		if !strings.Contains(text, word) {
			return false
		}
	}
	return true
}

// entryAbout is the entry about a planned slot: one of that source and receiver which began within it.
func entryAbout(all []campaigns.Entry, site string, row *campaigns.SlotRow) *campaigns.Entry {
	from, _ := slices.BinarySearchFunc(all, row.Start, func(e campaigns.Entry, at time.Time) int { return e.Start.Compare(at) })
	for i := from; i < len(all) && all[i].Start.Before(row.End); i++ {
		if e := &all[i]; e.Site == site && e.Source == row.Source && e.Receiver == row.Receiver {
			return e
		}
	}
	return nil
}

// count is how many rows there are.
func (v *logbook) count() int { return len(v.slots) + len(v.past) }

func (v *logbook) typed(k tea.KeyMsg, _ *world) bool {
	took := typeFilter(k, &v.filter, &v.typing)
	if took {
		v.list = rows{}
	}
	return took
}

func (v *logbook) steer(verb verb, w *world) action {
	v.prepare(w)
	switch verb {
	case moveLeft:
		v.list.at = 0 // the session's slots
	case moveRight:
		v.list.at = min(len(v.slots), max(v.count()-1, 0)) // the past
	case filterRows:
		v.typing = true
	case goBack:
		v.filter = field{}
	case barSource:
		if s := v.subject(w); s != "" {
			return action{verb: barThisSource, text: s}
		}
	case recordDone:
		return v.record(w, campaigns.Done)
	case recordPartial:
		return v.record(w, campaigns.Partial)
	case recordLost:
		return v.record(w, campaigns.Lost)
	case recordAll:
		return v.recordRest(w)
	default:
		v.list.steer(verb, v.count(), max(v.page-1, 1))
	}
	return action{}
}

func (v *logbook) click(at, size image.Point, turn int, w *world) action {
	v.prepare(w)
	p := tableLayout(size.X, size.Y)
	switch i := v.list.top + at.Y - p.table.Min.Y - 1; {
	case turn < 0:
		v.list.steer(moveUp, v.count(), 1)
	case turn > 0:
		v.list.steer(moveDown, v.count(), 1)
	case at.In(p.table) && at.Y > p.table.Min.Y && i < v.count():
		v.list.at = i
	}
	return action{}
}

// chosen is the slot or the entry under the cursor; both nil where there is neither.
func (v *logbook) chosen(w *world) (*logSlot, *campaigns.Entry) {
	v.prepare(w)
	switch at := v.list.at; {
	case at < len(v.slots):
		return &v.slots[at], v.slots[at].entry
	case at < v.count():
		return nil, &v.past[at-len(v.slots)]
	}
	return nil, nil
}

func (v *logbook) subject(w *world) string {
	switch slot, entry := v.chosen(w); {
	case slot != nil:
		return slot.row.Source
	case entry != nil:
		return entry.Source
	}
	return ""
}

func (v *logbook) about(source string, w *world) string {
	n := 0
	var last campaigns.Entry
	for i := range w.book.Entries {
		if e := &w.book.Entries[i]; e.Source == source {
			n++
			if !e.Start.Before(last.Start) {
				last = *e
			}
		}
	}
	if n == 0 {
		return ""
	}
	return fmt.Sprintf("%s, the last %s of %s", count(n, "line"), last.Outcome, date(last.Start))
}

func (v *logbook) seek(source string, w *world) {
	v.filter, v.typing, v.list = newField(source), false, rows{}
	v.prepare(w)
}

// record asks for what belongs to an outcome of the chosen slot, or to a correction of the chosen entry.
func (v *logbook) record(w *world, o campaigns.Outcome) action {
	slot, entry := v.chosen(w)
	if slot == nil && entry == nil {
		return action{verb: sayThis, text: "nothing is chosen to record: the plan is empty and no entry is shown"}
	}
	if slot != nil && w.planning() {
		return action{verb: sayThis, text: beingPlanned}
	}
	v.asked = 0
	if slot != nil && entry == nil {
		v.asked = v.list.at + 1
	}
	return action{verb: openDialog, more: dialog(newRecordForm(w, slot, entry, o))}
}

// beingPlanned is why no slot is recorded: it could be gone before Enter is pressed.
const beingPlanned = "the plan is still being made: wait for it, or stop it with Esc"

// planning says that the plan on the desk is being made.
func (w *world) planning() bool { return w.work != nil && w.work.desk == w.desk }

// recordRest asks whether every slot that is not recorded was done. Of a session under way only what is over.
func (v *logbook) recordRest(w *world) action {
	if w.planning() {
		return action{verb: sayThis, text: beingPlanned}
	}
	var entries []campaigns.Entry
	open, ahead := 0, 0
	for i := range v.slots {
		s := &v.slots[i]
		if s.entry != nil {
			continue
		}
		open++
		if s.row.End.After(w.now) {
			ahead++
			if w.now.After(w.desk.session.Start) {
				continue
			}
		}
		entries = append(entries, entryOfRow(w.desk, s.row, campaigns.Done, 1))
	}
	if len(entries) == 0 {
		text := "every slot shown is recorded"
		if open > 0 {
			text = "no slot is over that is not recorded"
		}
		return action{verb: sayThis, text: text}
	}
	text := fmt.Sprintf("%s of session %s will be written into the logbook as done, with quality 1, at their planned times.", count(len(entries), "slot"), w.desk.session.Name)
	if ahead == len(entries) {
		text += " All of them are still to come!"
	}
	did := fmt.Sprintf("%s as done", count(len(entries), "slot"))
	return action{verb: openDialog, more: dialog(newQuestion("Record all as done?", text,
		answer{"y", "record them", action{verb: writeEntries, more: recording{did: did, entries: entries, desk: w.desk}}}))}
}

// entryOfRow is the entry about a slot as it was planned.
func entryOfRow(d *desk, r *campaigns.SlotRow, o campaigns.Outcome, quality float64) campaigns.Entry {
	return campaigns.Entry{
		Start: r.Start, End: r.End, Site: d.session.Site, Source: r.Source, Receiver: r.Receiver, Outcome: o, Quality: quality, Note: r.Note,
	}
}

func (v *logbook) draw(w *world, c *cell.Canvas, g *theme.Glyphs) {
	cw, ch := c.Size()
	p := tableLayout(cw, ch)
	v.prepare(w)
	v.drawHead(w, c.Sub(p.head))
	v.drawTable(w, c.Sub(p.table), g)
	if p.details.Empty() {
		return
	}
	title, lines := v.read(w)
	if p.beside {
		x := p.details.Min.X - 1
		c.Fill(image.Rect(x, p.details.Min.Y, x+1, p.details.Max.Y), g.Upright, theme.Muted)
	}
	if lines != nil {
		dw, dh := c.Sub(p.details).Size()
		drawPane(c.Sub(p.details), g, title, lines, dw, dh, p.beside)
	}
}

func (v *logbook) drawHead(w *world, c *cell.Canvas) {
	cw, _ := c.Size()
	if v.typing || v.filter.String() != "" {
		x := c.Put(1, 0, fmt.Sprintf("%d of %d entries, filter: ", len(v.past), v.entries), theme.Muted)
		if v.typing {
			v.filter.draw(c, x, 0)
		} else {
			c.Put(x, 0, cell.Fit(v.filter.String()+"  (Esc shows all)", max(cw-x, 0)), theme.Plain)
		}
		return
	}
	recorded := 0
	for i := range v.slots {
		if v.slots[i].entry != nil {
			recorded++
		}
	}
	text := fmt.Sprintf("%d of %s recorded; then %s, the latest first", recorded, count(len(v.slots), "slot"), entriesWords(v.entries))
	if len(v.slots) == 0 {
		text = "no slots in this plan; " + entriesWords(v.entries) + ", the latest first"
	}
	c.Put(1, 0, cell.Fit(text, cw-1), theme.Plain)
}

func entriesWords(n int) string {
	if n == 1 {
		return "1 entry"
	}
	return fmt.Sprintf("%d entries", n)
}

var logColumns = []textColumn{
	{"no", 3, true, 0}, {"date", 10, false, 2}, {"start", 5, false, 0}, {"min", 3, true, 1}, {"source", 12, false, 0}, {"rcvr", 4, false, 1},
	{"what", 7, false, 0}, {"quality", 7, true, 2}, {"S/N", 6, true, 3}, {"TOA us", 7, true, 4}, {"note", 12, false, 3},
}

func (v *logbook) drawTable(w *world, c *cell.Canvas, g *theme.Glyphs) {
	_, h := c.Size()
	v.page = max(h-1, 1)
	if v.count() == 0 {
		c.Put(1, 1, "no entry matches", theme.Plain)
		return
	}
	drawRows(c, g, logColumns, v.count(), v.rowCells, &v.list)
	if y := len(v.slots) - v.list.top + 1; len(v.slots) > 0 && y > 1 && y <= v.page {
		// Where the past begins, the number's place says so.
		c.Put(1, y, "log", theme.Muted)
	}
}

// rowCells are the texts of a row and its ink. A word tells what the ink tells.
func (v *logbook) rowCells(i int) ([]string, theme.Ink) {
	if i < len(v.slots) {
		s := &v.slots[i]
		if s.entry == nil {
			r := s.row
			return []string{fmt.Sprint(r.Slot), r.Start.UTC().Format("2006-01-02"), clock(r.Start), fmt.Sprintf("%.0f", r.End.Sub(r.Start).Minutes()),
				r.Source, r.Receiver, "-", "-", "-", "-", joined("planned", r.Note)}, theme.Plain
		}
		cells, ink := entryCells(s.entry)
		cells[0] = fmt.Sprint(s.row.Slot)
		return cells, ink
	}
	return entryCells(&v.past[i-len(v.slots)])
}

func entryCells(e *campaigns.Entry) ([]string, theme.Ink) {
	ink := theme.Plain
	switch e.Outcome {
	case campaigns.Done:
		ink = theme.Good
	case campaigns.Lost:
		ink = theme.Overdue
	}
	return []string{"", e.Start.UTC().Format("2006-01-02"), clock(e.Start), fmt.Sprintf("%.0f", e.End.Sub(e.Start).Minutes()), e.Source, e.Receiver,
		string(e.Outcome), fmt.Sprintf("%.2f", e.Quality), number(e.SNR), number(e.ToaUs), e.Note}, ink
}

// read is everything about the chosen slot or entry.
func (v *logbook) read(w *world) (string, []line) {
	slot, entry := v.chosen(w)
	var lines []line
	add := func(label, format string, args ...any) {
		lines = append(lines, line{label: label, text: fmt.Sprintf(format, args...)})
	}
	var title string
	switch {
	case slot != nil:
		r := slot.row
		title = fmt.Sprintf("slot %d: %s with %s", r.Slot, r.Source, r.Receiver)
		if entry == nil {
			add("recorded", "not yet: d done, p partial, f lost, then Enter")
		}
		planned := fmt.Sprintf("%s to %s UTC", r.Start.UTC().Format("2006-01-02 15:04"), clock(r.End))
		if r.SNR > 0 {
			planned += "; expected " + strings.TrimSuffix(expects(r), "; ")
		}
		add("planned", "%s", planned)
	case entry != nil:
		title = fmt.Sprintf("%s with %s on %s", entry.Source, entry.Receiver, date(entry.Start))
	default:
		return "", nil
	}
	if entry != nil {
		add("recorded", "%s, %s to %s UTC, quality %.2f", entry.Outcome, entry.Start.UTC().Format("2006-01-02 15:04:05"), entry.End.UTC().Format("15:04:05"), entry.Quality)
		add("measured", "S/N %s, TOA error %s us", number(entry.SNR), number(entry.ToaUs))
		if entry.Note != "" {
			add("note", "%s", entry.Note)
		}
		add("at", "%s", entry.Site)
		for _, old := range earlierLines(w.book, entry) {
			add("before", "corrected: was %s, quality %.2f%s", old.Outcome, old.Quality, noteWords(old.Note))
		}
	}
	source := v.subject(w)
	for i := range w.desk.accounts {
		if a := &w.desk.accounts[i]; a.Source == source {
			add("owed", "debt %.2f at the start of %s: %s", a.Debt, w.desk.session.Name, aimWords(a))
		}
	}
	return title, lines
}

func noteWords(note string) string {
	if note == "" {
		return ""
	}
	return ", " + note
}

// earlierLines are the lines that an entry has taken the place of, the latest first.
func earlierLines(book *campaigns.Logbook, e *campaigns.Entry) []campaigns.Entry {
	var all []campaigns.Entry
	for i := range book.Entries {
		if e.Corrects(book.Entries[i]) {
			all = append(all, book.Entries[i])
		}
	}
	if len(all) > 0 {
		all = all[:len(all)-1]
	}
	slices.Reverse(all)
	return all
}
