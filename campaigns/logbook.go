package campaigns

import (
	"cmp"
	"fmt"
	"io"
	"math"
	"slices"
	"strconv"
	"strings"
	"time"
	"unicode/utf8"
)

// LogbookFile is the logbook's name in the folder of a campaign.
const LogbookFile = "logbook.csv"

// Outcome is what became of a slot.
type Outcome string

// The outcomes.
const (
	Done    Outcome = "done"
	Partial Outcome = "partial"
	Lost    Outcome = "lost"
)

// An Entry is one line of the logbook: one observation that was made or lost.
type Entry struct {
	Start, End             time.Time // UTC
	Site, Source, Receiver string
	Outcome                Outcome
	Quality                float64 // share of the wanted sensitivity that was reached, 0 to 1; 0 when lost
	SNR, ToaUs             float64 // 0: not given
	Note                   string
	Extra                  []string // cells of the columns that are not ours, in the order of the header
	Line                   int      // 1 is the header's; 0 when not read from a file
}

// A Logbook is the entries in the order of the file. Lines are only ever added: what was wrong is put
// right by a later line, see Effective.
type Logbook struct {
	Header  []string // the columns, in the order of the file
	Entries []Entry
	Torn    string // what a save that was cut short has left at the end; not an entry

	column [10]int // where each of logbookColumns stands in the header; -1: nowhere
}

// logbookColumns are the columns of a logbook, in the order in which a new one is begun.
var logbookColumns = []string{"start_utc", "end_utc", "site", "source", "receiver", "outcome", "quality", "snr", "toa_us", "note"}

// Their indices in logbookColumns.
const (
	colStart = iota
	colEnd
	colSite
	colSource
	colReceiver
	colOutcome
	colQuality
	colSNR
	colToa
	colNote
)

// Ends that no logbook comes near.
const (
	longestLine    = 64 << 10  // bytes of one entry
	largestLogbook = 256 << 20 // bytes of all
	mostComplaints = 1000      // after as many, damage is only counted
)

// ReadLogbook reads a logbook; name is what it is called in messages. A damaged line is complained
// about, and everything else is read. A torn end is no entry and no complaint: see Logbook.Torn.
func ReadLogbook(r io.Reader, name string) (*Logbook, Complaints) {
	var b strings.Builder
	if sized, ok := r.(interface{ Len() int }); ok {
		b.Grow(min(sized.Len(), largestLogbook+1))
	}
	_, err := io.Copy(&b, io.LimitReader(r, largestLogbook+1))
	if err != nil {
		return emptyLogbook(), Complaints{{File: name, Found: "an unreadable file (" + reason(err).Error() + ")", Accepted: "a CSV file"}}
	}
	if b.Len() > largestLogbook {
		return emptyLogbook(), Complaints{{File: name, Found: fmt.Sprintf("more than %d MB", largestLogbook>>20), Accepted: "a smaller logbook"}}
	}
	return parseLogbook(b.String(), name)
}

func parseLogbook(text, name string) (*Logbook, Complaints) {
	p := logParser{name: name, text: strings.TrimPrefix(text, "\uFEFF"), book: emptyLogbook()}
	p.read()
	if p.unnamed > 0 {
		p.faults = append(p.faults, Complaint{File: name, Found: fmt.Sprintf("%d more damaged lines", p.unnamed), Accepted: "entries"})
	}
	return p.book, p.faults
}

func emptyLogbook() *Logbook {
	book := &Logbook{Header: slices.Clone(logbookColumns)}
	for i := range book.column {
		book.column[i] = i
	}
	return book
}

type logParser struct {
	name    string
	text    string
	line    int // of the record being read
	book    *Logbook
	extra   []int // where the others stand
	faults  Complaints
	unnamed int
	cells   []string
}

func (p *logParser) read() {
	p.book.Entries = make([]Entry, 0, strings.Count(p.text, "\n"))
	rest, begun := p.text, false
	for p.line = 1; rest != ""; {
		record, lines, closed := nextRecord(rest)
		here := rest
		rest = rest[len(record):]
		switch {
		case blank(record) && closed:
		case !begun && !beginsEntry(record):
			begun = true
			if !p.header(record, closed, rest) {
				p.book.Torn = here
				return
			}
		default:
			if !begun {
				begun = true
				p.complain(Complaint{File: p.name, Line: p.line, Found: "an entry", Accepted: "the header " + strings.Join(logbookColumns, ",") + " as first line"})
			}
			if fault := p.entry(record, closed); fault != nil {
				if p.torn(here, record, closed, fault) {
					p.book.Torn = here
					return
				}
				p.complain(*fault)
			}
		}
		p.line += lines
	}
}

// torn says that a record which cannot be read is what a save that was cut short has left: the last of
// the file, and without its newline, or of zero bytes, or with too few columns.
func (p *logParser) torn(here, record string, closed bool, fault *Complaint) bool {
	if !closed && len(here) <= longestLine && !entryBelow(here) {
		return true // of an entry of several lines, more than one may be there
	}
	if len(record) < len(here) || len(record) > longestLine {
		return false
	}
	return !closed || !strings.HasSuffix(record, "\n") || strings.ContainsRune(record, 0) || fault.Key == tooFew
}

func (p *logParser) complain(c Complaint) {
	if len(p.faults) >= mostComplaints {
		p.unnamed++
		return
	}
	p.faults = append(p.faults, c)
}

// nextRecord cuts the first record off a text, with its newline, and counts its lines. A quoted cell may
// go on over several lines, but not into one that begins as an entry does: then, and when it is never
// closed, the record is its first line alone, and not closed.
func nextRecord(text string) (record string, lines int, closed bool) {
	end := strings.IndexByte(text, '\n') + 1
	if end == 0 {
		end = len(text)
	}
	line := text[:end]
	if strings.IndexByte(line, '"') < 0 {
		return line, 1, true
	}
	open := oddQuotes(line)
	for lines = 1; open; lines++ {
		if end == len(text) || end > longestLine || beginsEntry(text[end:]) {
			return line, 1, false
		}
		next := strings.IndexByte(text[end:], '\n') + 1
		if next == 0 {
			next = len(text) - end
		}
		if oddQuotes(text[end : end+next]) {
			open = false
		}
		end += next
	}
	return text[:end], lines, true
}

func oddQuotes(s string) bool { return strings.Count(s, `"`)%2 == 1 }

// beginsEntry says that a text begins with a date and time and a comma.
func beginsEntry(s string) bool {
	comma := strings.IndexByte(s[:min(len(s), 40)], ',')
	if comma < 0 {
		return false
	}
	_, ok := parseUTC(s[:comma])
	return ok
}

// entryBelow says that a line after the first begins as an entry does.
func entryBelow(text string) bool {
	for {
		newline := strings.IndexByte(text, '\n')
		if newline < 0 {
			return false
		}
		if text = text[newline+1:]; beginsEntry(text) {
			return true
		}
	}
}

// firstEntry finds the first record that begins as an entry does, if there is one among the first few;
// otherwise it is the first record.
func firstEntry(text string) string {
	first, _, _ := nextRecord(text)
	for range 5 {
		record, _, _ := nextRecord(text)
		if beginsEntry(record) {
			return record
		}
		text = text[len(record):]
	}
	return first
}

func blank(record string) bool { return record == "\n" || record == "\r\n" }

// header reads the first line; next is the text after it. It is false when the line is only the
// beginning of a header, and all there is.
func (p *logParser) header(record string, closed bool, next string) bool {
	cells, sound := splitCells(nil, record)
	for i := range cells {
		cells[i] = strings.TrimSpace(cells[i])
	}
	sound = sound && closed && strings.IndexByte(record, 0) < 0 && utf8.ValidString(record)
	missing := slices.ContainsFunc(logbookColumns, func(c string) bool { return !slices.Contains(cells, c) })
	if missing && next == "" && !strings.HasSuffix(record, "\n") && len(record) <= longestLine {
		return false
	}
	// A damaged header must not make every line unreadable: the lines below tell how many columns there are.
	swallowed := slices.ContainsFunc(cells, func(c string) bool { _, ok := parseUTC(c); return ok })
	following := firstEntry(next)
	if n := countCells(following); !sound || (missing || swallowed) && n > 0 && n != len(cells) {
		p.complain(Complaint{File: p.name, Line: p.line, Found: "a damaged header", Accepted: strings.Join(logbookColumns, ",")})
		for i := len(logbookColumns); i < n; i++ {
			p.book.Header = append(p.book.Header, fmt.Sprintf("column_%d", i+1))
		}
	} else {
		p.book.Header = cells
	}
	p.findColumns()
	return true
}

// countCells is the number of cells of an entry, or 0 when it cannot be told.
func countCells(record string) int {
	cells, ok := splitCells(nil, record)
	if record == "" || len(record) > longestLine || !ok {
		return 0
	}
	return len(cells)
}

// findColumns finds our columns in the header. A column that is missing stands where it would in a new
// logbook, if a name that nobody knows stands there: it was misspelt.
func (p *logParser) findColumns() {
	header := p.book.Header
	for i, want := range logbookColumns {
		at := slices.Index(header, want)
		if at >= 0 && slices.Contains(header[at+1:], want) {
			p.complain(Complaint{File: p.name, Line: p.line, Key: want, Found: "the column twice", Accepted: "each column once"})
		}
		if at < 0 {
			c := Complaint{File: p.name, Line: p.line, Key: want, Found: "no such column", Accepted: "the columns " + strings.Join(logbookColumns, ",")}
			if i < len(header) && !slices.Contains(logbookColumns, header[i]) {
				c.Found = fmt.Sprintf("%q in its place", header[i])
				at = i
			}
			p.complain(c)
		}
		p.book.column[i] = at
	}
	for i := range header {
		if !slices.Contains(p.book.column[:], i) {
			p.extra = append(p.extra, i)
		}
	}
}

// tooFew is the key of the complaint about a line that ends too early.
const tooFew = "columns"

// entry reads one record and adds it to the book, or says what is wrong with it.
func (p *logParser) entry(record string, closed bool) *Complaint {
	fault := func(key, found, accepted string) *Complaint {
		return &Complaint{File: p.name, Line: p.line, Key: key, Found: found, Accepted: accepted}
	}
	switch {
	case len(record) > longestLine:
		return fault("", fmt.Sprintf("an entry of %d bytes", len(record)), fmt.Sprintf("at most %d", longestLine))
	case strings.IndexByte(record, 0) >= 0:
		return fault("", "zero bytes", "text")
	case !utf8.ValidString(record):
		return fault("", "bytes that are not UTF-8", "text in UTF-8")
	case !closed:
		return fault("", "a quote that is not closed", "cells with quotes at both ends, or none")
	}
	cells, ok := splitCells(p.cells[:0], record)
	p.cells = cells
	if !ok {
		return fault("", "a quote inside a cell", "cells in quotes, with the quotes inside them doubled")
	}
	if len(cells) < len(p.book.Header) {
		return fault(tooFew, strconv.Itoa(len(cells)), fmt.Sprintf("%d, as in the header", len(p.book.Header)))
	}
	if len(cells) > len(p.book.Header) {
		return fault("columns", strconv.Itoa(len(cells)), fmt.Sprintf("%d, as in the header", len(p.book.Header)))
	}
	e := Entry{Line: p.line}
	if column, found, accepted := p.fill(&e, cells); accepted != "" {
		return fault(logbookColumns[column], found, accepted)
	}
	for _, i := range p.extra {
		e.Extra = append(e.Extra, cells[i])
	}
	p.book.Entries = append(p.book.Entries, e)
	return nil
}

const acceptedUTC = "a time in UTC such as 2026-12-03T18:00:00Z"

// fill reads the cells of our columns. When one is at fault it says which, what was found and what is accepted.
func (p *logParser) fill(e *Entry, cells []string) (column int, found, accepted string) {
	cell := func(column int) string {
		if at := p.book.column[column]; at >= 0 {
			return cells[at]
		}
		return ""
	}
	for _, c := range [...]struct {
		column int
		to     *time.Time
	}{{colStart, &e.Start}, {colEnd, &e.End}} {
		var ok bool
		if *c.to, ok = parseUTC(cell(c.column)); !ok {
			if strings.Contains(cell(c.column), ":60") {
				return c.column, describe(cell(c.column)), acceptedUTC + "; a leap second is written as the second after it"
			}
			return c.column, describe(cell(c.column)), acceptedUTC
		}
	}
	if long := e.End.Sub(e.Start); long <= 0 || long > longestSession {
		return colEnd, describe(cell(colEnd)), "a time after start_utc, by at most 48 hours"
	}
	for _, c := range [...]struct {
		column int
		to     *string
	}{{colSite, &e.Site}, {colSource, &e.Source}, {colReceiver, &e.Receiver}} {
		if *c.to = cell(c.column); *c.to == "" || *c.to != strings.TrimSpace(*c.to) {
			return c.column, describe(*c.to), "a name without blanks at its ends"
		}
	}
	switch e.Outcome = Outcome(cell(colOutcome)); e.Outcome {
	case Done, Partial, Lost:
	default:
		return colOutcome, describe(string(e.Outcome)), "done, partial or lost"
	}
	var ok bool
	if e.Quality, ok = parsePlain(cell(colQuality)); !ok || e.Quality > 1 {
		if e.Outcome != Lost || cell(colQuality) != "" {
			return colQuality, describe(cell(colQuality)), "a number from 0 to 1, the share of the wanted sensitivity that was reached"
		}
	}
	if e.Outcome == Lost && e.Quality > 0 {
		return colQuality, describe(cell(colQuality)) + " of what was lost", "0 or nothing; what was reached in part is partial"
	}
	for _, c := range [...]struct {
		column int
		to     *float64
	}{{colSNR, &e.SNR}, {colToa, &e.ToaUs}} {
		if s := cell(c.column); s != "" {
			if *c.to, ok = parsePlain(s); !ok {
				return c.column, describe(s), "a number from 0, or nothing"
			}
		}
	}
	e.Note = cell(colNote)
	return 0, "", ""
}

// splitCells splits a record into its cells (RFC 4180). It is false when a quote stands where none may.
func splitCells(cells []string, record string) ([]string, bool) {
	record = strings.TrimSuffix(strings.TrimSuffix(record, "\n"), "\r")
	for {
		if !strings.HasPrefix(record, `"`) {
			comma := strings.IndexByte(record, ',')
			cell := record
			if comma >= 0 {
				cell = record[:comma]
			}
			if strings.IndexByte(cell, '"') >= 0 || strings.IndexByte(cell, '\r') >= 0 {
				return cells, false
			}
			cells = append(cells, cell)
			if comma < 0 {
				return cells, true
			}
			record = record[comma+1:]
			continue
		}
		end, doubled := 1, false
		for {
			n := strings.IndexByte(record[end:], '"')
			if n < 0 {
				return cells, false
			}
			end += n + 1
			if end >= len(record) || record[end] != '"' {
				break
			}
			doubled = true
			end++
		}
		cell := record[1 : end-1]
		if doubled {
			cell = strings.ReplaceAll(cell, `""`, `"`)
		}
		cells = append(cells, cell)
		if end == len(record) {
			return cells, true
		}
		if record[end] != ',' {
			return cells, false
		}
		record = record[end+1:]
	}
}

// parseUTC reads "2006-01-02T15:04:05Z", also without seconds or with a fraction of them.
// The usual length is read by hand: time.Parse would take half the time of reading a logbook.
func parseUTC(s string) (time.Time, bool) {
	if len(s) < 17 || s[len(s)-1] != 'Z' {
		return time.Time{}, false
	}
	if len(s) == 20 && s[4] == '-' && s[7] == '-' && s[10] == 'T' && s[13] == ':' && s[16] == ':' {
		year, month, day := digits(s[0:4]), digits(s[5:7]), digits(s[8:10])
		hour, minute, second := digits(s[11:13]), digits(s[14:16]), digits(s[17:19])
		if year < 1900 || year >= 2200 || month < 1 || month > 12 || day < 1 || hour < 0 || hour > 23 ||
			minute < 0 || minute > 59 || second < 0 || second > 59 {
			return time.Time{}, false
		}
		t := time.Date(year, time.Month(month), day, hour, minute, second, 0, time.UTC)
		return t, t.Day() == day // the 30th of February is the 2nd of March
	}
	layout := "2006-01-02T15:04:05Z"
	if len(s) == 17 {
		layout = "2006-01-02T15:04Z"
	}
	t, err := time.Parse(layout, s)
	return t, err == nil && !t.Before(earliest) && t.Before(latest)
}

// digits reads a number without sign, or returns −1.
func digits(s string) int {
	n := 0
	for i := range len(s) {
		if s[i] < '0' || s[i] > '9' {
			return -1
		}
		n = 10*n + int(s[i]-'0')
	}
	return n
}

// parsePlain reads a decimal number that is not negative: no infinities, no hexadecimals.
func parsePlain(s string) (float64, bool) {
	for i := range len(s) {
		if c := s[i]; (c < '0' || c > '9') && c != '.' && c != 'e' && c != 'E' && c != '-' && c != '+' {
			return 0, false
		}
	}
	x, err := strconv.ParseFloat(s, 64)
	return x, err == nil && x >= 0 && !math.IsInf(x, 0)
}

// Effective returns the entries that count, in order of their start: a later line with the same start,
// site, source and receiver replaces the earlier one, which is how a slip is put right.
func (l *Logbook) Effective() []Entry {
	counting := l.effective()
	out := make([]Entry, len(counting))
	for i, e := range counting {
		out[i] = *e
	}
	return out
}

// effective is Effective without a copy of the entries.
func (l *Logbook) effective() []*Entry {
	// Most logbooks are in order already, and few entries share their start.
	type place struct {
		start int64 // µs
		index int32
	}
	order := make([]place, len(l.Entries))
	for i := range order {
		order[i] = place{l.Entries[i].Start.UnixMicro(), int32(i)}
	}
	byStart := func(a, b place) int { return cmp.Or(cmp.Compare(a.start, b.start), cmp.Compare(a.index, b.index)) }
	if !slices.IsSortedFunc(order, byStart) {
		slices.SortFunc(order, byStart)
	}
	out := make([]*Entry, 0, len(order))
	for from := 0; from < len(order); {
		to := from + 1
		for to < len(order) && order[to].start == order[from].start {
			to++
		}
		begun := len(out)
		for _, p := range order[from:to] {
			out = append(out, &l.Entries[p.index])
		}
		out = append(out[:begun], lastOfEach(out[begun:])...)
		from = to
	}
	return out
}

// lastOfEach sorts entries of the same start by site, source and receiver, and keeps the last of those that
// have the same.
func lastOfEach(entries []*Entry) []*Entry {
	if len(entries) == 1 {
		return entries
	}
	what := func(a, b *Entry) int {
		return cmp.Or(strings.Compare(a.Site, b.Site), strings.Compare(a.Source, b.Source), strings.Compare(a.Receiver, b.Receiver))
	}
	slices.SortStableFunc(entries, what)
	kept := entries[:0]
	for i, e := range entries {
		if i+1 == len(entries) || what(e, entries[i+1]) != 0 {
			kept = append(kept, e)
		}
	}
	return kept
}
