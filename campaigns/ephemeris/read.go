package ephemeris

import (
	"bytes"
	"cmp"
	"errors"
	"fmt"
	"io"
	"maps"
	"path/filepath"
	"slices"
	"strings"
	"unicode"
	"unicode/utf8"
)

// largestFile is the most bytes a file may have; those with twenty years of dispersion steps have a tenth.
const largestFile = 1 << 20

// mostRemarks is how many are kept: whoever has more than this has given a wrong file.
const mostRemarks = 200

// A Remark is something that whoever imports a file should know: a contradiction, an assumption, what was
// derived and what was left out.
type Remark struct {
	File string
	Line int // 0 when it is about the file
	Text string
}

// String says it in one line.
func (r Remark) String() string {
	if r.Line == 0 {
		return fmt.Sprintf("%s: %s", r.File, r.Text)
	}
	return fmt.Sprintf("%s:%d: %s", r.File, r.Line, r.Text)
}

// A File is one ephemeris that was read.
type File struct {
	Name    string // of the pulsar
	Path    string // as Read was told
	Remarks []Remark

	// How many lines there are of each kind, comments and empty lines aside.
	Used     int // what the entry is made from
	Needless int // matters to timing, not to planning
	Unknown  int // kept as comments in the entry

	lines     map[string]*Line // the parameters that were understood
	glitches  []*Line
	unknown   []*Line
	placeless map[string]bool // keys that are understood and have no place in a campaign

	source source
	untold int // remarks beyond those that are kept
}

// Read reads one ephemeris; name is what the file is called in messages. It errs where no entry can be made:
// the file cannot be read, is no text, or gives no name or no position; the File then has remarks and nothing else
// that counts. Everything else that is wrong is a Remark, and what it concerns is left out.
func Read(r io.Reader, name string) (*File, error) {
	f := &File{Path: name, lines: map[string]*Line{}, placeless: map[string]bool{}}
	data, err := io.ReadAll(io.LimitReader(r, largestFile+1))
	switch {
	case err != nil:
		return f, err
	case len(data) > largestFile:
		return f, fmt.Errorf("%s: larger than %d MB; accepted: an ephemeris file", name, largestFile>>20)
	case bytes.IndexByte(data, 0) >= 0:
		return f, fmt.Errorf("%s: not a text file; accepted: an ephemeris file, a parameter a line", name)
	}
	f.read(string(data))
	err = f.interpret()
	if f.untold > 0 {
		f.Remarks = append(f.Remarks, Remark{f.Path, 0, fmt.Sprintf("%d more remarks are left out: is this the right file?", f.untold)})
	}
	slices.SortStableFunc(f.Remarks, func(a, b Remark) int { return cmp.Compare(uint(a.Line-1), uint(b.Line-1)) }) // those about the file last
	if err != nil {
		return f, fmt.Errorf("%s: %w", name, err)
	}
	return f, nil
}

func (f *File) remark(line int, form string, a ...any) {
	if len(f.Remarks) >= mostRemarks {
		f.untold++
		return
	}
	f.Remarks = append(f.Remarks, Remark{f.Path, line, fmt.Sprintf(form, a...)})
}

func (f *File) read(text string) {
	further := 0
	number := 0
	for line := range strings.SplitSeq(text, "\n") {
		number++
		l, ok, err := ParseLine(line)
		if !ok {
			continue
		}
		l.Number = number
		switch _, isKnown := known(l.Key); {
		case furtherOrbit.MatchString(l.Key):
			further++
			f.Needless++
			continue
		case needless.MatchString(l.Key):
			f.Needless++
			continue
		case !isKnown:
			f.unknown = append(f.unknown, &l)
			continue
		}
		if err != nil {
			f.remark(number, "%v", err)
		}
		if l.Text == "" || l.exact.text == "" && l.parts == "" && !l.isText() {
			f.Needless++
			continue
		}
		f.take(&l)
	}
	f.Unknown = len(f.unknown)
	if further > 0 {
		f.remark(0, "several orbits: only the first is planned; %d lines of the others are left out", further)
	}
	f.sayUnknown()
}

// take keeps a parameter. One that stands twice with different values is a contradiction; the later one counts,
// as with a correction that was added at the end.
func (f *File) take(l *Line) {
	k, _ := known(l.Key)
	switch {
	case glitchKey.MatchString(l.Key):
		f.glitches = append(f.glitches, l)
		f.Used++
		return
	case k.placeless:
		f.Needless++
		f.placeless[l.Key] = true
		if spinTerms.MatchString(l.Key) {
			f.lines[l.Key] = l // a glitch moves the spin to another date
		}
		return
	}
	before, twice := f.lines[l.Key]
	if twice && l.Key == "PSR" {
		f.Needless++
		if before.Text != l.Text {
			f.remark(l.Number, "a second name, %s; %s in line %d is taken", plain(l.Text), plain(before.Text), before.Number)
		}
		return
	}
	if twice {
		f.Needless++
		f.Used--
		if before.Text != l.Text {
			f.remark(l.Number, "contradiction: %s is %s here and %s in line %d; this one is taken", l.Key, plain(l.Text), plain(before.Text), before.Number)
		}
	}
	f.Used++
	f.lines[l.Key] = l
}

func (f *File) sayUnknown() {
	var names []string
	for _, l := range f.unknown {
		names = append(names, fmt.Sprintf("%s (line %d)", plain(l.Key), l.Number))
	}
	switch len(f.unknown) {
	case 0:
	case 1:
		f.remark(0, "1 line with a key that is not known, kept as a comment: %s", names[0])
	default:
		f.remark(0, "%d lines with keys that are not known, kept as comments: %s", len(names), strings.Join(firstOf(names), ", "))
	}
}

// firstOf cuts a list to what can be read in a message.
func firstOf(names []string) []string {
	const most = 12
	if len(names) <= most {
		return names
	}
	return append(names[:most:most], fmt.Sprintf("and %d more", len(names)-most))
}

// line is a parameter, or nil.
func (f *File) line(key string) *Line { return f.lines[key] }

// drop takes a parameter out and says why.
func (f *File) drop(key, form string, a ...any) {
	l := f.lines[key]
	f.remark(l.Number, "%s %s: %s; left out", key, plain(l.Text), fmt.Sprintf(form, a...))
	delete(f.lines, key)
	f.Used--
	f.Needless++
}

// within drops a parameter outside the values that are possible.
func (f *File) within(key string, holds func(float64) bool, accepted string) {
	if l := f.lines[key]; l != nil && !holds(l.Value) {
		f.drop(key, "accepted: %s", accepted)
	}
}

// interpret finds out what the parameters mean together.
func (f *File) interpret() error {
	if len(f.lines) == 0 {
		return errors.New("found no line that belongs to an ephemeris; accepted: lines such as `F0 44.0540691 1 2e-13`")
	}
	name := f.line("PSR")
	switch {
	case name == nil:
		return errors.New("found no name of the pulsar; accepted: a line such as `PSR J0737-3039A`")
	case !goodName(name.Text):
		return fmt.Errorf("line %d: found %s as the name; accepted: at most %d printable letters that do not begin with = or @", name.Number, quote(name.Text), longestName)
	}
	f.Name = name.Text
	f.impossible()
	scale := f.timeScale()
	if err := f.position(scale); err != nil {
		return err
	}
	f.spin(scale)
	f.glitched(scale)
	f.orbit(scale)
	if len(f.placeless) > 0 {
		names := slices.Sorted(maps.Keys(f.placeless))
		f.remark(0, "a campaign has no place for %s: left out", strings.Join(firstOf(names), ", "))
	}
	return nil
}

// impossible drops what no pulsar has, so that nothing is derived from it.
func (f *File) impossible() {
	between := func(low, high float64) func(float64) bool {
		return func(x float64) bool { return x >= low && x <= high }
	}
	above := func(high float64) func(float64) bool {
		return func(x float64) bool { return x > 0 && x <= high }
	}
	for _, key := range []string{"POSEPOCH", "PEPOCH", "T0", "TASC", "START", "FINISH"} {
		f.within(key, between(firstMJD+1, lastMJD-1), "a modified Julian date from 1900 to 2200")
	}
	for _, key := range []string{"PMRA", "PMDEC", "PMELONG", "PMELAT"} {
		f.within(key, between(-20000, 20000), "-20000 to 20000 mas/yr")
	}
	f.within("ELONG", between(-360, 360), "-360 to 360 degrees")
	f.within("ELAT", between(-90, 90), "-90 to 90 degrees")
	f.within("PX", between(0, 1000), "0 to 1000 mas; a parallax below 0 is noise")
	f.within("F0", above(1999), "above 0, at most 1999 Hz")
	f.within("P0", func(x float64) bool { return x >= 1.0/1999 && x <= 1e7 }, "1/1999 to 1e7 s")
	f.within("F1", between(-1e-6, 1e-6), "within 1e-6 Hz/s of 0")
	f.within("P1", between(-1e-3, 1e-3), "within 1e-3 of 0")
	f.within("DM", between(0, 10000), "0 to 10000 pc/cm3")
	f.within("PB", between(shortestOrbitDays, 1e5), "0.001 to 100000 d")
	f.within("FB0", between(1.0/(99999*secPerDay), 1/(shortestOrbitDays*secPerDay)), "that of an orbit of 0.001 to 99999 d")
	for n := 1; n < 20; n++ {
		f.within(fmt.Sprintf("FB%d", n), between(-1, 1), "within 1 of 0")
	}
	f.within("A1", between(1e-9, 1e5), "1e-9 to 100000 light-seconds")
	f.within("ECC", func(x float64) bool { return x >= 0 && x < 1 }, "0 to below 1: an orbit that is closed")
	f.within("EPS1", between(-1, 1), "-1 to 1")
	f.within("EPS2", between(-1, 1), "-1 to 1")
	f.within("OM", between(-360, 360), "-360 to 360 degrees")
	f.within("OMDOT", between(-1000, 1000), "-1000 to 1000 deg/yr")
	f.within("PBDOT", between(-1e-7, 1e-7), "within 1e-7 of 0")
	f.within("GAMMA", between(0, 100), "0 to 100 s; an amplitude below 0 is noise")
	f.within("M2", above(100), "a mass above 0, at most 100 Msun")
	if s := f.line("SINI"); s != nil && !s.isText() {
		f.within("SINI", above(1), "a sine above 0, at most 1")
	}
	f.within("KIN", func(x float64) bool { return x > 0 && x < 180 }, "above 0 and below 180 degrees")
	f.within("SHAPMAX", above(50), "above 0, at most 50")
	f.within("H3", above(1e-3), "above 0, at most 1 ms")
	f.within("H4", above(1e-3), "above 0, at most 1 ms")
	f.within("STIG", above(1), "above 0, at most 1")
	for _, e := range largestErrors {
		if l := f.line(e.key); l != nil && l.Sigma > e.most {
			f.remark(l.Number, "%s has an error of %.3g %s, more than the %g that is accepted: taken as not known", e.key, l.Sigma, l.Unit, e.most)
			l.Sigma = 0
		}
	}
	if a, b := f.line("START"), f.line("FINISH"); a != nil && b != nil && b.Value < a.Value {
		f.remark(b.Number, "contradiction: FINISH %s lies before START %s in line %d", plain(b.Text), plain(a.Text), a.Number)
	}
}

// Dates that are possible: 1900 to 2200.
const firstMJD, lastMJD = 15020, 124594

// shortestOrbitDays is a minute and a half; no pulsar's orbit comes near it. A campaign accepts 0.001 d, and a period in
// TCB becomes shorter by 1.6e-8 of itself.
const shortestOrbitDays = 0.001 * (1 + 1e-7)

// largestErrors are the most that a campaign accepts as errors.
var largestErrors = []struct {
	key  string
	most float64
}{
	{"F0", 100}, {"F1", 1e-6}, {"PB", 100}, {"A1", 1e5}, {"PBDOT", 1e-7}, {"OMDOT", 1000}, {"GAMMA", 100}, {"T0", 1000}, {"TASC", 1000}, {"RAJ", 27}, {"DECJ", 27}, {"ELONG", 27}, {"ELAT", 27},
}

const longestName = 80

func goodName(s string) bool {
	if s == "" || s[0] == '=' || s[0] == '@' || utf8.RuneCountInString(s) > longestName {
		return false
	}
	return !strings.ContainsFunc(s, func(r rune) bool { return r == utf8.RuneError || !unicode.IsPrint(r) })
}

// plain makes text out of a file fit for a message or a comment: one line that can be printed.
func plain(s string) string {
	const most = 200
	if len(s) > most {
		s = s[:most] + "..."
	}
	return strings.Map(func(r rune) rune {
		switch {
		case r == '\t':
			return ' '
		case r == utf8.RuneError || !unicode.IsPrint(r):
			return '?'
		}
		return r
	}, strings.TrimRight(s, " \t\r"))
}

// base is the file's name without its folder: an entry is no place for the paths of a machine.
func (f *File) base() string { return plain(filepath.Base(f.Path)) }
