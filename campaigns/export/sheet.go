// Package export writes a session's slot list for people and programs outside: the operator's sheet
// as text, the columns that scripts rely on as CSV, and everything as JSON.
//
// Make a [Sheet] with [New] and hand it to [Write] with one of [Formats]. The same sheet gives the
// same bytes on every machine: nothing here asks a clock, a locale or a terminal. Instants are UTC
// and end in Z, angles are decimal degrees, and every format except CSV, whose columns are fixed,
// carries the campaign, the session, the site, when it was made, the program's version and the
// advisory [Safety].
package export

import (
	"fmt"
	"io"
	"slices"
	"strings"
	"time"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/sched"
)

// Safety is what every export and the help say about what a slot list is and is not. Sentences only,
// no line ends.
const Safety = "A slot list is advisory. The program that made it moves nothing and knows nothing of people, wind or machinery. " +
	"The observatory's interlocks, wind and stow limits, Sun-pointing rules and lock-out procedures for people on the structure, " +
	"and the judgement of the authorised operator, come first, always."

// A Sheet is a slot list with all that its exports say.
type Sheet struct {
	Campaign string
	Site     campaigns.Site
	Session  campaigns.Session
	Rows     []campaigns.SlotRow // in time order
	LeftOut  []LeftOut           // sources and receivers without a slot
	Absent   []LeftOut           // sources without any slot, each with the one reason that comes nearest to letting it in

	MadeAt  time.Time // when the plan was made
	Version string    // of the program
	Saved   bool      // the plan was read from the campaign's plans, not made for this sheet

	Worth   float64
	Ceiling float64 // of the worth of any plan; meaningful if HasCeiling
	// HasCeiling is false while nothing has been proved.
	HasCeiling bool
	GridMin    int
	Rounds     int // of search that made the plan; 0 when not known

	Receivers            []campaigns.Receiver // those of the session
	LSTStartH, LSTEndH   float64
	SourceCount, Entries int      // sources of the campaign, lines of its logbook
	Missing              []string // what the plan had to hold and does not: "C Bright with L"
}

// LeftOut is one source and receiver that has no slot, and why.
type LeftOut struct {
	Source   string `json:"source"`
	Receiver string `json:"receiver"`
	Reason   string `json:"reason"`
}

// Origin is what a sheet cannot learn from the prepared session: where its plan comes from.
type Origin struct {
	MadeAt     time.Time
	Version    string
	Saved      bool
	Ceiling    sched.Micro
	HasCeiling bool
	Rounds     int
	Entries    int // lines of the logbook
}

// New makes the sheet of a plan of the prepared session.
func New(p *campaigns.Prepared, plan sched.Plan, o Origin) Sheet {
	s := Sheet{
		Campaign: p.Campaign.Name, Site: *p.Site, Session: *p.Session,
		Rows:   p.SlotRows(plan),
		MadeAt: o.MadeAt, Version: o.Version, Saved: o.Saved,
		Worth:   units(p.Problem.PlanWorth(plan)),
		Ceiling: units(o.Ceiling), HasCeiling: o.HasCeiling,
		GridMin: p.Problem.GridMin, Rounds: o.Rounds,
		SourceCount: len(p.Campaign.Sources), Entries: o.Entries,
	}
	for _, r := range p.Campaign.Receivers {
		if r.Site == s.Site.Name && slices.Contains(s.Session.Receivers, r.Name) {
			s.Receivers = append(s.Receivers, r)
		}
	}
	if n := len(p.LSTHours); n > 0 {
		s.LSTStartH, s.LSTEndH = p.LSTHours[0], p.LSTHours[n-1]
	}
	job := func(i int) (source, receiver string) {
		j := p.Problem.Jobs[i]
		return j.Source, p.Problem.Receivers[j.Receiver].Name
	}
	told := func(reasons []sched.Reason) (out []LeftOut) {
		for _, r := range reasons {
			source, receiver := job(r.Job)
			out = append(out, LeftOut{source, receiver, r.Text})
		}
		return out
	}
	s.LeftOut, s.Absent = told(sched.LeftOut(p.Problem, plan)), told(sched.Absent(p.Problem, plan))
	for _, i := range sched.Verify(p.Problem, plan).MissingMusts {
		source, receiver := job(i)
		s.Missing = append(s.Missing, source+" with "+receiver)
	}
	return s
}

// Distance is how far the worth may lie below the best possible, as a share of the ceiling.
func (s Sheet) Distance() (share float64, known bool) {
	if !s.HasCeiling || s.Ceiling <= 0 {
		return 0, false
	}
	return max(0, 1-s.Worth/s.Ceiling), true
}

// Broken counts the slots that break a limit.
func (s Sheet) Broken() int {
	n := 0
	for _, r := range s.Rows {
		if len(r.Breaches) > 0 {
			n++
		}
	}
	return n
}

// A format is one outward form of a sheet.
type format struct {
	name  string
	about string // for completion and help
	write func(io.Writer, Sheet) error
}

var formats = []format{
	{"text", "the operator's sheet: 80 columns, ASCII, prints on paper", Text},
	{"csv", "the columns that scripts rely on (RFC 4180)", CSV},
	{"json", "everything, with worth, ceiling and grid_min at the top", JSON},
}

// Formats names the formats that Write knows, each with a few words about it.
func Formats() (names, abouts []string) {
	for _, f := range formats {
		names = append(names, f.name)
		abouts = append(abouts, f.about)
	}
	return names, abouts
}

// Write writes the sheet in the named format.
func Write(w io.Writer, name string, s Sheet) error {
	for _, f := range formats {
		if f.name == name {
			return f.write(w, s)
		}
	}
	names, _ := Formats()
	return fmt.Errorf("format: found %q; accepted: %s", name, strings.Join(names, ", "))
}

func units(m sched.Micro) float64 { return float64(m) / float64(sched.Unit) }

func utc(t time.Time) string { return t.UTC().Format(time.RFC3339) }
