package campaigns

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"
	"time"
	"unicode"
	"unicode/utf8"
)

// A document is one TOML file that is being read.
type document struct {
	name   string // as it is called in messages
	order  int    // among the files of the campaign
	lines  lineIndex
	report *report
}

// A table is one table of a document. Every getter notes the key it was asked for, complains about
// whatever is wrong with its value, and goes on with a harmless one, so that one reading finds all that
// is wrong. In the end, done complains about the keys that nobody asked for.
type table struct {
	doc   *document
	place string // for the line: `source[3].aim[0]`
	label string // for messages: `source "J0214+3322", aim 1`
	keys  map[string]any
	known []string
	bad   map[string]bool // keys that were complained about
	lacks []lack
}

// A lack is a key that is needed and missing. It is complained about only when done has not found a key
// that was meant for it: one slip is one complaint.
type lack struct {
	keys            []string // any of them would do
	found, accepted string
}

func newTable(doc *document, place, label string, keys map[string]any) *table {
	return &table{doc: doc, place: place, label: label, keys: keys, bad: map[string]bool{}}
}

// line is where a key stands, or where its table begins when it does not stand anywhere.
func (t *table) line(key string) int {
	if n, ok := t.doc.lines[placeOf(t.place, key)]; ok {
		return n
	}
	return t.doc.lines[t.place]
}

// name is how messages call a key of this table.
func (t *table) name(key string) string {
	if t.label == "" {
		return key
	}
	if key == "" {
		return t.label
	}
	return t.label + ", " + key
}

func (t *table) complain(key, found, accepted, hint string) {
	t.complainAt(t.line(key), key, found, accepted, hint)
}

func (t *table) complainAt(line int, key, found, accepted, hint string) {
	t.bad[key] = true
	t.doc.report.add(t.doc.order, Complaint{
		File: t.doc.name, Line: line, Key: t.name(key), Found: found, Accepted: accepted, Hint: hint,
	})
}

// good says that none of the keys was complained about.
func (t *table) good(keys ...string) bool {
	return !slices.ContainsFunc(keys, func(k string) bool { return t.bad[k] })
}

// has says that a key stands in the table, whatever its value.
func (t *table) has(key string) bool {
	_, ok := t.keys[key]
	return ok
}

// lack notes that at least one of the keys is needed.
func (t *table) lack(found, accepted string, keys ...string) {
	for _, key := range keys {
		t.bad[key] = true
	}
	t.lacks = append(t.lacks, lack{keys, found, accepted})
}

// ask returns the value of a key, if it is there.
func (t *table) ask(key string, needed bool, accepted string) (any, bool) {
	t.known = append(t.known, key)
	v, ok := t.keys[key]
	if !ok && needed {
		t.lack("nothing", accepted, key)
	}
	return v, ok
}

// meantFor finds the unknown key of the table that could have been meant for one that is missing.
func (t *table) meantFor(key string) (string, bool) {
	var unknown []string
	for _, k := range sortedKeys(t.keys) {
		if !slices.Contains(t.known, k) {
			unknown = append(unknown, k)
		}
	}
	near := nearest(key, unknown, 1)
	return strings.Join(near, ""), len(near) > 0
}

// done complains about every key that was not asked for, and about those that are missing. The reason,
// if given, may know better than that a key is unknown.
func (t *table) done(reason func(key string) (found, accepted string, ok bool)) {
	meant := map[string]string{} // the missing key that an unknown one was meant for
	for _, l := range t.lacks {
		explained := false
		for _, key := range l.keys {
			if unknown, ok := t.meantFor(key); ok && meant[unknown] == "" {
				meant[unknown], explained = key, true
				break
			}
		}
		if !explained {
			t.complain(l.keys[0], l.found, l.accepted, "")
		}
	}
	for _, key := range sortedKeys(t.keys) {
		if !slices.Contains(t.known, key) {
			t.unknown(key, meant[key], reason)
		}
	}
}

func (t *table) unknown(key, meant string, reason func(key string) (found, accepted string, ok bool)) {
	if reason != nil && meant == "" {
		if found, accepted, ok := reason(key); ok {
			t.complain(key, found, accepted, "")
			return
		}
	}
	var hint string
	if near := nearest(key, t.known, 1); meant != "" {
		hint = fmt.Sprintf("did you mean %q?", meant)
	} else if len(near) > 0 && t.has(near[0]) {
		hint = fmt.Sprintf("%q is there already", near[0])
	} else {
		hint = didYouMean(key, t.known)
	}
	t.complain(key, "a key that is not known here", "one of the keys "+strings.Join(t.known, ", "), hint)
}

// bounds are the ends between which a number must lie, and whether it may lie on them.
type bounds struct {
	low, high           float64
	aboveLow, belowHigh bool // the end itself is not accepted
}

func between(low, high float64) bounds { return bounds{low: low, high: high} }
func above(low, high float64) bounds   { return bounds{low: low, high: high, aboveLow: true} }
func below(low, high float64) bounds   { return bounds{low: low, high: high, belowHigh: true} }
func strictly(low, high float64) bounds {
	return bounds{low: low, high: high, aboveLow: true, belowHigh: true}
}

func (b bounds) holds(x float64) bool {
	// Written so that a NaN is never held.
	return (x > b.low || x == b.low && !b.aboveLow) && (x < b.high || x == b.high && !b.belowHigh)
}

func (b bounds) String() string {
	low, high := plainNumber(b.low), plainNumber(b.high)
	switch {
	case b.aboveLow && b.belowHigh:
		return "above " + low + " and below " + high
	case b.aboveLow:
		return "above " + low + ", at most " + high
	case b.belowHigh:
		return "from " + low + " to below " + high
	}
	return "from " + low + " to " + high
}

// number reads a number that must be there.
func (t *table) number(key string, b bounds) float64 { return t.readNumber(key, b, true, 0) }

// numberOr reads a number that may be missing.
func (t *table) numberOr(key string, b bounds, otherwise float64) float64 {
	return t.readNumber(key, b, false, otherwise)
}

func (t *table) readNumber(key string, b bounds, needed bool, otherwise float64) float64 {
	v, ok := t.ask(key, false, "")
	if !ok {
		if needed {
			t.lack("nothing", "a number "+b.String(), key)
		}
		return otherwise
	}
	x, ok := asNumber(v)
	if !ok || !b.holds(x) {
		t.complain(key, describe(v), "a number "+b.String(), quotedNumber(v))
		return otherwise
	}
	return x
}

// count reads a whole number.
func (t *table) count(key string, low, high int, needed bool, otherwise int) int {
	accepted := fmt.Sprintf("a whole number from %d to %d", low, high)
	v, ok := t.ask(key, needed, accepted)
	if !ok {
		return otherwise
	}
	n, ok := v.(int64)
	if !ok || n < int64(low) || n > int64(high) {
		t.complain(key, describe(v), accepted, quotedNumber(v))
		return otherwise
	}
	return int(n)
}

// pair reads an array of two numbers.
func (t *table) pair(key string, b bounds, needed bool, otherwise [2]float64) [2]float64 {
	accepted := "two numbers " + b.String()
	v, ok := t.ask(key, needed, accepted)
	if !ok {
		return otherwise
	}
	p, ok := asPair(v)
	if !ok || !b.holds(p[0]) || !b.holds(p[1]) {
		t.complain(key, describe(v), accepted, "")
		return otherwise
	}
	return p
}

// limits reads two numbers of which the first is the lower.
func (t *table) limits(key string, b bounds) [2]float64 {
	p := t.pair(key, b, true, [2]float64{b.low, b.high})
	if t.good(key) && p[0] >= p[1] {
		t.complain(key, describe(t.keys[key]), "two numbers "+b.String()+", the lower one first", "")
	}
	return p
}

// pairs reads an array of arrays of two numbers.
func (t *table) pairs(key string, first, second bounds, what string) [][2]float64 {
	accepted := fmt.Sprintf("an array of pairs: %s", what)
	v, ok := t.ask(key, false, accepted)
	if !ok {
		return nil
	}
	list, ok := v.([]any)
	if !ok {
		t.complain(key, describe(v), accepted, "")
		return nil
	}
	var out [][2]float64
	for i, e := range list {
		p, ok := asPair(e)
		if !ok || !first.holds(p[0]) || !second.holds(p[1]) {
			t.complainAt(t.elementLine(key, i), key, "as pair "+strconv.Itoa(i+1)+" "+describe(e),
				fmt.Sprintf("%s: the first %s, the second %s", what, first, second), "")
			continue
		}
		out = append(out, p)
	}
	return out
}

func (t *table) elementLine(key string, i int) int {
	if n, ok := t.doc.lines[elementOf(placeOf(t.place, key), i)]; ok {
		return n
	}
	return t.line(key)
}

// longestName is the greatest length of a name, in letters: a name has to fit on a screen.
const longestName = 80

const acceptedName = "a name of 1 to 80 printable letters, without blanks at its ends, not beginning with = or @"

// nameOf reads the name by which an entry is called.
func (t *table) nameOf(key string) string {
	v, ok := t.ask(key, true, acceptedName)
	if !ok {
		return ""
	}
	s, ok := v.(string)
	if !ok || !goodName(s) {
		t.complain(key, describe(v), acceptedName, "")
		return ""
	}
	return s
}

// goodName keeps names printable on one line. A first = or @ would be taken for a formula when an
// exported table is opened as a spreadsheet.
func goodName(s string) bool {
	if s == "" || s != strings.TrimSpace(s) || s[0] == '=' || s[0] == '@' || utf8.RuneCountInString(s) > longestName {
		return false
	}
	for _, r := range s {
		if r == utf8.RuneError || !unicode.IsPrint(r) {
			return false
		}
	}
	return true
}

// word reads one of several words.
func (t *table) word(key string, words []string) string {
	accepted := "one of " + strings.Join(words, ", ")
	v, ok := t.ask(key, true, accepted)
	if !ok {
		return ""
	}
	s, ok := v.(string)
	if !ok || !slices.Contains(words, s) {
		t.complain(key, describe(v), accepted, didYouMean(s, words))
		return ""
	}
	return s
}

// text reads any text.
func (t *table) text(key string, needed bool) string {
	v, ok := t.ask(key, needed, "a text")
	if !ok {
		return ""
	}
	s, ok := v.(string)
	if !ok {
		t.complain(key, describe(v), "a text in quotes", "")
	}
	return s
}

// yes reads true or false; false when it is missing.
func (t *table) yes(key string) bool {
	v, ok := t.ask(key, false, "true or false")
	if !ok {
		return false
	}
	b, ok := v.(bool)
	if !ok {
		t.complain(key, describe(v), "true or false", "")
	}
	return b
}

// texts reads an array of texts; each may stand there once.
func (t *table) texts(key string, needed bool) []string {
	const accepted = "an array of texts, each of them once, such as [\"L\", \"S\"]"
	v, ok := t.ask(key, needed, accepted)
	if !ok {
		return nil
	}
	list, ok := v.([]any)
	if !ok {
		t.complain(key, describe(v), accepted, "")
		return nil
	}
	var out []string
	for i, e := range list {
		s, ok := e.(string)
		if !ok || slices.Contains(out, s) {
			t.complainAt(t.elementLine(key, i), key, describe(e)+" as element "+strconv.Itoa(i+1), accepted, "")
			continue
		}
		out = append(out, s)
	}
	return out
}

// table reads a table that may be missing, in which case it is nil.
func (t *table) table(key, label string, needed bool) *table {
	v, ok := t.ask(key, needed, "a table")
	if !ok {
		return nil
	}
	keys, ok := v.(map[string]any)
	if !ok {
		t.complain(key, describe(v), "one table", "")
		return nil
	}
	return newTable(t.doc, placeOf(t.place, key), t.name(label), keys)
}

// tables reads an array of tables. They are called by their name, or else by the kind of thing they are
// and their number.
func (t *table) tables(key string) []*table {
	accepted := "tables that begin with [[" + key + "]]"
	if t.place != "" {
		accepted = "tables that begin with [[" + strings.SplitN(t.place, "[", 2)[0] + "." + key + "]]"
	}
	v, ok := t.ask(key, false, accepted)
	if !ok {
		return nil
	}
	var list []any
	switch v := v.(type) {
	case []map[string]any:
		for _, m := range v {
			list = append(list, m)
		}
	case []any:
		list = v
	default:
		t.complain(key, describe(v), accepted, "")
		return nil
	}
	var out []*table
	for i, e := range list {
		keys, ok := e.(map[string]any)
		if !ok {
			t.complainAt(t.elementLine(key, i), key, describe(e), accepted, "")
			continue
		}
		label := fmt.Sprintf("%s %d", key, i+1)
		if name, ok := keys["name"].(string); ok && goodName(name) {
			label = fmt.Sprintf("%s %q", key, name)
		}
		out = append(out, newTable(t.doc, elementOf(placeOf(t.place, key), i), t.name(label), keys))
	}
	return out
}

// The first and last instants that are taken for possible: outside of them a date is a slip.
var (
	earliest = time.Date(1900, 1, 1, 0, 0, 0, 0, time.UTC)
	latest   = time.Date(2200, 1, 1, 0, 0, 0, 0, time.UTC)
)

const (
	acceptedInstant = "a date and time with its zone, in whole minutes, such as 2026-12-03T18:00:00Z"
	acceptedDay     = "a date such as 2026-09-01, or a date and time with its zone, such as 2026-09-01T12:00:00Z"
)

// minute reads an instant in whole minutes, as UTC.
func (t *table) minute(key string) time.Time {
	v, ok := t.ask(key, true, acceptedInstant)
	if !ok {
		return time.Time{}
	}
	when, ok := asMinute(v)
	if !ok {
		t.complain(key, describe(v), acceptedInstant, quotedDate(v))
	}
	return when
}

// day reads a date, which means its midnight in UTC, or an instant.
func (t *table) day(key string, needed bool) time.Time {
	v, ok := t.ask(key, needed, acceptedDay)
	if !ok {
		return time.Time{}
	}
	when, ok := v.(time.Time)
	if !ok || hasNoZone(when) && when.Location().String() != localDate {
		t.complain(key, describe(v), acceptedDay, quotedDate(v))
		return time.Time{}
	}
	if when.Location().String() == localDate {
		when = time.Date(when.Year(), when.Month(), when.Day(), 0, 0, 0, 0, time.UTC)
	}
	if when.Before(earliest) || !when.Before(latest) {
		t.complain(key, describe(v), "a date from 1900 to 2199", "")
		return time.Time{}
	}
	return when.UTC()
}

func asMinute(v any) (time.Time, bool) {
	when, ok := v.(time.Time)
	if !ok || hasNoZone(when) || when.Second() != 0 || when.Nanosecond() != 0 || when.Before(earliest) || !when.Before(latest) {
		return time.Time{}, false
	}
	return when.UTC(), true
}

// The TOML library marks dates and times without a zone by the name of their location.
const (
	localDate     = "date-local"
	localTime     = "time-local"
	localDateTime = "datetime-local"
)

func hasNoZone(when time.Time) bool {
	name := when.Location().String()
	return name == localDate || name == localTime || name == localDateTime
}

// asNumber takes whole numbers for numbers. What is too large to be exact is refused rather than rounded.
func asNumber(v any) (float64, bool) {
	switch v := v.(type) {
	case float64:
		return v, !math.IsNaN(v) && !math.IsInf(v, 0)
	case int64:
		return float64(v), v > -1<<53 && v < 1<<53
	}
	return 0, false
}

func asPair(v any) ([2]float64, bool) {
	list, ok := v.([]any)
	if !ok || len(list) != 2 {
		return [2]float64{}, false
	}
	a, aOK := asNumber(list[0])
	b, bOK := asNumber(list[1])
	return [2]float64{a, b}, aOK && bOK
}

func quotedNumber(v any) string {
	if s, ok := v.(string); ok {
		if _, err := strconv.ParseFloat(s, 64); err == nil {
			return "write the number without quotes"
		}
	}
	return ""
}

func quotedDate(v any) string {
	if s, ok := v.(string); ok && len(s) >= 10 && s[4] == '-' && s[7] == '-' {
		return "write the date without quotes"
	}
	return ""
}

// describe shows a value as it could have stood in the file, shortened.
func describe(v any) string {
	s := written(v, 2)
	if utf8.RuneCountInString(s) > 60 {
		s = string([]rune(s)[:57]) + "..."
	}
	return s
}

func written(v any, depth int) string {
	switch v := v.(type) {
	case string:
		return strconv.Quote(v)
	case float64:
		return plainNumber(v)
	case int64:
		return strconv.FormatInt(v, 10)
	case bool:
		return strconv.FormatBool(v)
	case time.Time:
		switch v.Location().String() {
		case localDate:
			return v.Format("2006-01-02")
		case localTime:
			return v.Format("15:04:05.999999999")
		case localDateTime:
			return v.Format("2006-01-02T15:04:05.999999999") + " without a zone"
		}
		return v.Format(time.RFC3339Nano)
	case []any:
		if depth == 0 {
			return "[...]"
		}
		var parts []string
		for _, e := range v[:min(len(v), 20)] {
			parts = append(parts, written(e, depth-1))
		}
		return "[" + strings.Join(parts, ", ") + "]"
	case map[string]any:
		return "a table"
	case []map[string]any:
		return "an array of tables"
	}
	return fmt.Sprint(v)
}

func plainNumber(x float64) string {
	switch {
	case math.IsNaN(x):
		return "nan"
	case math.IsInf(x, 0):
		return map[bool]string{true: "inf", false: "-inf"}[x > 0]
	case x == math.Trunc(x) && math.Abs(x) < 1e9:
		return strconv.FormatFloat(x, 'f', 0, 64)
	}
	return strconv.FormatFloat(x, 'g', -1, 64)
}

func sortedKeys(m map[string]any) []string {
	keys := make([]string, 0, len(m))
	for k := range m {
		keys = append(keys, k)
	}
	slices.Sort(keys)
	return keys
}
