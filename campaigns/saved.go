package campaigns

import (
	"cmp"
	"fmt"
	"math"
	"path"
	"slices"
	"strconv"
	"strings"
	"time"
	"unicode"
	"unicode/utf8"
)

// A SavedPlan is the plan of a session as it is kept in plans/, with what it was computed from.
type SavedPlan struct {
	Session  string
	Campaign string
	MadeAt   time.Time // UTC, whole seconds
	Version  string    // of the program
	GridMin  int       // slot ends lie on multiples of this
	Worth    float64   // in units of worth
	Ceiling  float64   // likewise; 0: none was computed
	Bars     []string  // sources that are excluded from the session
	Accepted []string  // broken limits that were kept deliberately, in words
	Slots    []SavedSlot

	ProvedFor  string    // the fingerprint of all that the ceiling was proved for; "" in older files
	ProvedFrom time.Time // what stood before it was settled; zero: nothing was
}

// A SavedSlot is time on source.
type SavedSlot struct {
	Source, Receiver string
	Start, End       time.Time // UTC, whole minutes
	Turn             int       // wrap side of the mount
	Pinned           bool
	Note             string
}

const plansFolder = "plans"

// planFile is the name of the file in which the plan of a session is kept. Letters, digits, blanks and
// a few signs stay as they are; anything else, which could lead into another folder or be refused by a
// file system, becomes % and two hexadecimal digits for each byte. Different sessions have different files.
func planFile(session string) string {
	var b strings.Builder
	for i, r := range session {
		plain := unicode.IsLetter(r) || unicode.IsDigit(r) || strings.ContainsRune(" -_+.,()", r)
		edge := i == 0 || i+utf8.RuneLen(r) == len(session)
		if plain && !(edge && (r == '.' || r == ' ')) {
			b.WriteRune(r)
			continue
		}
		for _, c := range []byte(string(r)) {
			fmt.Fprintf(&b, "%%%02X", c)
		}
	}
	name := b.String()
	if len(name) > longestPlanName {
		name = fmt.Sprintf("%s%%%016x", strings.ToValidUTF8(name[:longestPlanName-20], ""), fnv64(session))
	}
	return path.Join(plansFolder, name+".toml")
}

// longestPlanName leaves room for what is put before and behind it within the 255 bytes of a file name.
const longestPlanName = 200

// fnv64 is the 64-bit FNV-1a hash (Fowler, Noll and Vo; RFC 9923).
func fnv64(s string) uint64 {
	h := uint64(14695981039346656037)
	for i := range len(s) {
		h = (h ^ uint64(s[i])) * 1099511628211
	}
	return h
}

// encode writes the plan as TOML, the same plan always as the same bytes.
func (p *SavedPlan) encode() []byte {
	var b strings.Builder
	b.WriteString("# A plan, written by tallystick. It is read again and can be mended by hand; times are UTC.\n")
	fmt.Fprintf(&b, "format = %d\n", Format)
	fmt.Fprintf(&b, "session = %s\n", tomlText(p.Session))
	fmt.Fprintf(&b, "campaign = %s\n", tomlText(p.Campaign))
	fmt.Fprintf(&b, "made_at = %s\n", p.MadeAt.UTC().Truncate(time.Second).Format(time.RFC3339))
	fmt.Fprintf(&b, "version = %s\n", tomlText(p.Version))
	fmt.Fprintf(&b, "grid_min = %d\n", p.GridMin)
	fmt.Fprintf(&b, "worth = %s\n", tomlNumber(p.Worth))
	fmt.Fprintf(&b, "ceiling = %s\n", tomlNumber(p.Ceiling))
	if p.ProvedFor != "" {
		b.WriteString("# The ceiling is proved for exactly one problem, of which this is the fingerprint: campaign, logbook, pins and bars.\n")
		fmt.Fprintf(&b, "proved_for = %s\n", tomlText(p.ProvedFor))
		if !p.ProvedFrom.IsZero() {
			fmt.Fprintf(&b, "proved_from = %s\n", p.ProvedFrom.UTC().Truncate(time.Minute).Format(time.RFC3339))
		}
	}
	fmt.Fprintf(&b, "bars = %s\n", tomlTexts(p.Bars))
	fmt.Fprintf(&b, "accepted = %s\n", tomlTexts(p.Accepted))
	for _, s := range p.Slots {
		b.WriteString("\n[[slot]]\n")
		fmt.Fprintf(&b, "source = %s\n", tomlText(s.Source))
		fmt.Fprintf(&b, "receiver = %s\n", tomlText(s.Receiver))
		fmt.Fprintf(&b, "start = %s\n", s.Start.UTC().Truncate(time.Minute).Format(time.RFC3339))
		fmt.Fprintf(&b, "end = %s\n", s.End.UTC().Truncate(time.Minute).Format(time.RFC3339))
		fmt.Fprintf(&b, "turn = %d\n", s.Turn)
		fmt.Fprintf(&b, "pinned = %t\n", s.Pinned)
		if s.Note != "" {
			fmt.Fprintf(&b, "note = %s\n", tomlText(s.Note))
		}
	}
	return []byte(b.String())
}

// decodePlan reads what encode wrote, or what somebody made of it.
func decodePlan(text, name string) (*SavedPlan, Complaints) {
	var r report
	top := parseTOML(&document{name: name, report: &r}, text)
	if top == nil || !top.format(true) {
		return nil, r.complaints()
	}
	p := &SavedPlan{
		Session:  top.nameOf("session"),
		Campaign: top.text("campaign", true),
		MadeAt:   top.day("made_at", true),
		Version:  top.text("version", true),
		GridMin:  top.count("grid_min", 1, 1440, true, 1),
		Worth:    top.number("worth", between(-1e9, 1e9)),
		Ceiling:  top.numberOr("ceiling", between(0, 1e9), 0),
		Bars:     top.texts("bars", false),
		Accepted: top.texts("accepted", false),

		ProvedFor: top.text("proved_for", false),
	}
	if _, ok := top.keys["proved_from"]; ok {
		p.ProvedFrom = top.minute("proved_from")
	}
	for _, t := range top.tables("slot") {
		s := SavedSlot{
			Source:   t.nameOf("source"),
			Receiver: t.nameOf("receiver"),
			Start:    t.minute("start"),
			End:      t.minute("end"),
			Turn:     t.count("turn", -10, 10, true, 0),
			Pinned:   t.yes("pinned"),
			Note:     t.text("note", false),
		}
		if t.good("start", "end") && !s.Start.Before(s.End) {
			t.complain("end", describe(s.End), "a time after the start, "+s.Start.Format(timeFormat), "")
		}
		t.done(nil)
		p.Slots = append(p.Slots, s)
	}
	top.done(nil)
	slices.SortStableFunc(p.Slots, func(a, b SavedSlot) int {
		return cmp.Or(a.Start.Compare(b.Start), a.End.Compare(b.End))
	})
	return p, r.complaints()
}

// tomlText is a text as a TOML basic string.
func tomlText(s string) string {
	var b strings.Builder
	b.WriteByte('"')
	for _, r := range strings.ToValidUTF8(s, "\uFFFD") {
		switch {
		case r == '"' || r == '\\':
			b.WriteByte('\\')
			b.WriteRune(r)
		case r == '\n':
			b.WriteString(`\n`)
		case r == '\t':
			b.WriteString(`\t`)
		case r < ' ' || r == 0x7f:
			fmt.Fprintf(&b, `\u%04X`, r)
		default:
			b.WriteRune(r)
		}
	}
	b.WriteByte('"')
	return b.String()
}

// tomlTexts writes each text once, as it is read.
func tomlTexts(list []string) string {
	var parts []string
	for _, s := range list {
		if text := tomlText(s); !slices.Contains(parts, text) {
			parts = append(parts, text)
		}
	}
	return "[" + strings.Join(parts, ", ") + "]"
}

// tomlNumber is a number as a TOML float, which needs a point or an exponent. What is not finite is
// written as 0: there is no worth without end.
func tomlNumber(x float64) string {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		return "0.0"
	}
	s := strconv.FormatFloat(x, 'g', -1, 64)
	if !strings.ContainsAny(s, ".e") {
		s += ".0"
	}
	return s
}
