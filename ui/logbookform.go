package ui

import (
	"errors"
	"fmt"
	"image"
	"strconv"
	"strings"
	"time"

	tea "github.com/charmbracelet/bubbletea"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/ui/cell"
	"example.org/tallystick/ui/theme"
)

// recordForm asks for what belongs to one entry of the logbook. What it shows at first can be written as it is.
type recordForm struct {
	title  string
	desk   *desk
	entry  campaigns.Entry // with the outcome; the fields hold the rest
	fixed  bool            // a correction: the start tells which entry, and stays
	ahead  bool            // it has not begun
	fields []formField
	at     int
	fault  string
}

type formField struct {
	label, hint string
	text        field
}

// The fields, in their order. The start is left out of a correction.
const (
	fieldQuality = iota
	fieldSNR
	fieldToa
	fieldNote
	fieldEnd
	fieldStart
)

// newRecordForm begins with what is planned or, for a correction, with what was recorded.
func newRecordForm(w *world, slot *logSlot, old *campaigns.Entry, o campaigns.Outcome) *recordForm {
	f := &recordForm{desk: w.desk}
	snrHint, toaHint := "as measured; empty if it was not", "microseconds, as measured; empty if it was not"
	if slot != nil {
		f.entry = entryOfRow(w.desk, slot.row, o, 0)
		if slot.row.SNR > 0 {
			snrHint = fmt.Sprintf("as measured; %s was expected", number(slot.row.SNR))
			toaHint = fmt.Sprintf("microseconds; %s was expected", number(slot.row.ToaUs))
		}
	}
	verb := "Record"
	if old != nil {
		f.entry, f.fixed, verb = *old, true, "Correct"
		f.entry.Line = 0
	}
	f.entry.Outcome = o
	f.entry.Quality = firstQuality(o, old)
	f.ahead = f.entry.Start.After(w.now)
	f.title = fmt.Sprintf("%s as %s: %s with %s", verb, o, f.entry.Source, f.entry.Receiver)
	given := func(x float64) field {
		if x == 0 {
			return field{}
		}
		return newField(strconv.FormatFloat(x, 'g', -1, 64))
	}
	f.fields = []formField{
		{"quality", "share of the wanted sensitivity, 0 to 1", newField(strconv.FormatFloat(f.entry.Quality, 'g', -1, 64))},
		{"S/N", snrHint, given(f.entry.SNR)},
		{"TOA error", toaHint, given(f.entry.ToaUs)},
		{"note", "anything worth remembering", newField(f.entry.Note)},
		{"end", "UTC", newField(formTime(f.entry.End))},
	}
	if !f.fixed {
		f.fields = append(f.fields, formField{"start", "UTC", newField(formTime(f.entry.Start))})
	}
	return f
}

// firstQuality is what is shown at first: all for done, half for partial, unless a correction had a better idea.
func firstQuality(o campaigns.Outcome, old *campaigns.Entry) float64 {
	switch {
	case o == campaigns.Lost:
		return 0
	case old != nil && old.Outcome == o:
		return old.Quality
	case o == campaigns.Partial:
		return 0.5
	}
	return 1
}

func formTime(t time.Time) string {
	if t.Second() == 0 {
		return t.UTC().Format("2006-01-02 15:04")
	}
	return t.UTC().Format("2006-01-02 15:04:05")
}

func (f *recordForm) key(k tea.KeyMsg, _ *world) action {
	n := len(f.fields)
	switch k.String() {
	case "esc", "ctrl+c":
		return action{verb: closeDialog}
	case "up", "shift+tab":
		f.at = (f.at + n - 1) % n
		return action{}
	case "down", "tab":
		f.at = (f.at + 1) % n
		return action{}
	case "enter":
		e, err := f.filled()
		if err != nil {
			f.fault = err.Error()
			return action{}
		}
		did := fmt.Sprintf("%s with %s %s", e.Source, e.Receiver, e.Outcome)
		return action{verb: writeEntries, more: recording{did: did, entries: []campaigns.Entry{e}, desk: f.desk}}
	}
	if f.fields[f.at].text.key(k) {
		f.fault = ""
	}
	return action{}
}

// filled reads the fields; the error says which is wrong and puts the cursor there.
func (f *recordForm) filled() (campaigns.Entry, error) {
	e := f.entry
	for i := range f.fields {
		text := strings.TrimSpace(f.fields[i].text.String())
		var err error
		switch i {
		case fieldQuality:
			e.Quality, err = formNumber(text)
		case fieldSNR:
			e.SNR, err = formNumber(text)
		case fieldToa:
			e.ToaUs, err = formNumber(text)
		case fieldNote:
			e.Note = text
		case fieldEnd:
			e.End, err = parseFormTime(text)
		case fieldStart:
			e.Start, err = parseFormTime(text)
		}
		if err != nil {
			f.at = i
			return e, fmt.Errorf("%s: %w", f.fields[i].label, err)
		}
	}
	return e, e.Check()
}

func formNumber(text string) (float64, error) {
	if text == "" {
		return 0, nil
	}
	x, err := strconv.ParseFloat(text, 64)
	if err != nil {
		return 0, fmt.Errorf("found %q; accepted: a number with a point, or nothing", text)
	}
	return x, nil
}

func parseFormTime(text string) (time.Time, error) {
	for _, layout := range []string{"2006-01-02 15:04", "2006-01-02 15:04:05", "2006-01-02T15:04Z", time.RFC3339} {
		if t, err := time.Parse(layout, text); err == nil {
			return t.UTC(), nil
		}
	}
	return time.Time{}, errors.New("found " + strconv.Quote(text) + "; accepted: UTC as 2026-12-03 18:02")
}

func (f *recordForm) draw(_ *world, c *cell.Canvas, g *theme.Glyphs) {
	sw, sh := c.Size()
	in := box(c, g, min(72, sw-4), min(len(f.fields)+3, sh-3), f.title, "Enter records it, Tab goes on, Esc goes back")
	w, h := in.Size()
	// Of a box that is too low the chosen field is seen.
	from := max(0, f.at-max(h-3, 0))
	y := 0
	for i := from; i < len(f.fields) && y < h; i++ {
		ff := &f.fields[i]
		ink := theme.Muted
		if i == f.at {
			ink = theme.Accent
		}
		in.Put(0, y, fitted(ff.label, 10, false), ink)
		rest := in.Sub(image.Rect(11, y, w, y+1))
		rw, _ := rest.Size()
		text := ff.text.String()
		if i == f.at {
			ff.text.draw(rest, 0, 0)
		} else {
			rest.Put(0, 0, cell.Fit(text, rw), theme.Plain)
		}
		used := cell.Width(text) + 2
		if room := rw - max(used, 18); room > 10 {
			rest.Put(max(used, 18), 0, cell.Fit(ff.hint, room), theme.Muted)
		}
		y++
	}
	text, ink := fmt.Sprintf("starts %s UTC", formTime(f.entry.Start)), theme.Muted
	switch {
	case f.fault != "":
		text, ink = f.fault, theme.Overdue
	case f.ahead:
		text, ink = text+", which is still to come", theme.Overdue
	case f.fixed:
		text += "; the line before stays in the file"
	}
	lines := cell.Wrap(oneCell.Replace(text), max(w, 1))
	y = max(min(y+1, h-len(lines)), 0)
	for _, l := range lines {
		in.Put(0, y, cell.Fit(l, w), ink)
		y++
	}
}
