package campaigns

import (
	"fmt"
	"strconv"
	"strings"
	"time"
)

// Check says what is wrong with an entry that is about to be written, in the words of its column.
func (e Entry) Check() error {
	bad := func(column, found, accepted string) error {
		return fmt.Errorf("%s: found %s; accepted: %s", column, found, accepted)
	}
	if e.Start.Before(earliest) || !e.Start.Before(latest) {
		return bad("start_utc", e.Start.UTC().Format(time.RFC3339), acceptedUTC)
	}
	if long := e.End.Sub(e.Start); long < time.Second || long > longestSession {
		return bad("end_utc", e.End.UTC().Format(time.RFC3339), "a time after start_utc, by at most 48 hours")
	}
	for _, c := range [...]struct{ column, name string }{{"site", e.Site}, {"source", e.Source}, {"receiver", e.Receiver}} {
		if !goodName(c.name) {
			return bad(c.column, strconv.Quote(c.name), acceptedName)
		}
	}
	if e.Outcome != Done && e.Outcome != Partial && e.Outcome != Lost {
		return bad("outcome", strconv.Quote(string(e.Outcome)), "done, partial or lost")
	}
	if !between(0, 1).holds(e.Quality) || e.Outcome == Lost && e.Quality > 0 {
		return bad("quality", plainNumber(e.Quality), "a number from 0 to 1, and 0 when lost")
	}
	if !between(0, 1e300).holds(e.SNR) {
		return bad("snr", plainNumber(e.SNR), "a number from 0")
	}
	if !between(0, 1e300).holds(e.ToaUs) {
		return bad("toa_us", plainNumber(e.ToaUs), "a number from 0")
	}
	for _, cell := range append([]string{e.Note}, e.Extra...) {
		if len(cell) > longestLine/4 || strings.ContainsRune(cell, 0) {
			return bad("note", fmt.Sprintf("%d bytes", len(cell)), fmt.Sprintf("at most %d bytes of text", longestLine/4))
		}
	}
	return nil
}

// record writes an entry as a line of this logbook.
func (l *Logbook) record(b []byte, e Entry, newline string) []byte {
	cells := make([]string, len(l.Header))
	ours := make([]bool, len(l.Header))
	for column, at := range l.column {
		if at >= 0 {
			cells[at], ours[at] = e.cell(column), true
		}
	}
	extra := e.Extra
	for i := range cells {
		if !ours[i] && len(extra) > 0 {
			cells[i], extra = extra[0], extra[1:]
		}
	}
	return appendCells(b, cells, newline)
}

func appendCells(b []byte, cells []string, newline string) []byte {
	for i, c := range cells {
		if i > 0 {
			b = append(b, ',')
		}
		b = appendCell(b, c)
	}
	return append(b, newline...)
}

// saysAsMuchAs says that nothing of another entry was lost in this one, which was made from its line.
func (e Entry) saysAsMuchAs(other Entry) bool {
	for column := range logbookColumns {
		if e.cell(column) != strings.ToValidUTF8(other.cell(column), "\uFFFD") {
			return false
		}
	}
	for i, cell := range other.Extra {
		if cell != "" && (i >= len(e.Extra) || e.Extra[i] != strings.ToValidUTF8(cell, "\uFFFD")) {
			return false
		}
	}
	return true
}

// cell is what stands in one of our columns.
func (e Entry) cell(column int) string {
	number := func(x float64) string {
		if x == 0 {
			return ""
		}
		return strconv.FormatFloat(x, 'g', -1, 64)
	}
	switch column {
	case colStart:
		return utcCell(e.Start)
	case colEnd:
		return utcCell(e.End)
	case colSite:
		return e.Site
	case colSource:
		return e.Source
	case colReceiver:
		return e.Receiver
	case colOutcome:
		return string(e.Outcome)
	case colQuality:
		return strconv.FormatFloat(e.Quality, 'g', -1, 64)
	case colSNR:
		return number(e.SNR)
	case colToa:
		return number(e.ToaUs)
	}
	return e.Note
}

func utcCell(t time.Time) string { return t.UTC().Truncate(time.Second).Format("2006-01-02T15:04:05Z") }

// appendCell quotes a cell where RFC 4180 asks for it.
func appendCell(b []byte, cell string) []byte {
	cell = strings.ToValidUTF8(cell, "\uFFFD")
	if !strings.ContainsAny(cell, ",\"\r\n") {
		return append(b, cell...)
	}
	b = append(b, '"')
	b = append(b, strings.ReplaceAll(cell, `"`, `""`)...)
	return append(b, '"')
}
