package sched

import "time"

// Micro is worth in millionths of the unit of worth. One unit is one observation that is exactly
// due, at full wanted sensitivity, of a source of priority 1. Integers make sums exact, so the same
// problem has the same worth on every processor.
type Micro int64

// Unit is the worth of one observation that is exactly due, of a source of priority 1.
const Unit Micro = 1_000_000

// A Problem is one session to be planned, as plain data: it prints, reads back, and knows nothing of
// campaigns or of the sky. Minutes count from Start; instants are whole minutes.
type Problem struct {
	Session     string     `json:"session"`
	Start       time.Time  `json:"start"`        // UTC, a whole minute
	Minutes     int        `json:"minutes"`      // length of the session
	GridMin     int        `json:"grid_min"`     // slot ends lie on multiples of this; starts on any minute
	FromMin     int        `json:"from_min"`     // nothing unpinned may start before this minute: time already past
	OverheadSec int        `json:"overhead_sec"` // set-up and calibration at the head of every slot
	Receivers   []Receiver `json:"receivers"`
	Breaks      []Span     `json:"breaks"` // in time order, apart from one another; nothing moves or observes in a break
	Slew        SlewTable  `json:"slew"`
	Jobs        []Job      `json:"jobs"`              // sorted by source, then receiver
	Nodes       []Node     `json:"nodes"`             // sorted by job, then place
	Pins        []Slot     `json:"pins"`              // in time order; the planner keeps these as they are
	Cropped     bool       `json:"cropped,omitempty"` // jobs that might have had a slot were left without nodes: no ceiling holds
}

// A Receiver is named by its index in Problem.Receivers.
type Receiver struct {
	Name      string `json:"name"`
	ChangeSec int    `json:"change_sec"` // time to bring it into the beam when another was there
}

// A Span holds the minutes From to To, both ends included as instants: a slot may start at From and end at To.
type Span struct {
	From int `json:"from"`
	To   int `json:"to"`
}

// A Window is a Span in which a node may be observed at every second, with what opens and closes it.
type Window struct {
	Span
	OpensBy  string `json:"opens_by"`  // in plain words: "elevation 8°", "horizon mask 14.5°", "session start"
	ClosesBy string `json:"closes_by"` // likewise
}

// A Job is one source with one receiver: what a slot does.
type Job struct {
	Source   string  `json:"source"`
	Receiver int     `json:"receiver"` // index into Problem.Receivers
	Priority float64 `json:"priority"`
	MinMin   int     `json:"min_min"`   // shortest slot that is of use
	MaxMin   int     `json:"max_min"`   // longest slot that is wanted
	MaxSlots int     `json:"max_slots"` // 1 unless an aim says otherwise
	Must     bool    `json:"must"`      // a plan without it is incomplete, if it could have been had
	Barred   bool    `json:"barred"`    // excluded from this session by the observer
	Terms    []Term  `json:"terms"`     // its worth is their sum
	Facts    Facts   `json:"facts"`
}

// Facts are what the reason for leaving a job out is told from; they do not constrain the plan.
type Facts struct {
	UpMin     int     `json:"up_min"`            // longest stretch above elevation limits, mask and within the mount's travel, in minutes
	SunMin    int     `json:"sun_min"`           // the longest that is left of it outside the Sun limit
	SunDeg    float64 `json:"sun_deg"`           // least distance from the Sun in the session, degrees
	SunLimit  float64 `json:"sun_limit"`         // the limit that holds, degrees
	ClearMin  int     `json:"clear_min"`         // the longest that is left of that outside eclipses and breaks
	HighestEl float64 `json:"highest_deg"`       // greatest elevation in the session, degrees
	Debt      float64 `json:"debt"`              // the greatest debt of its aims, cycles
	DebtAim   string  `json:"debt_aim"`          // the aim that owes it
	Crowded   bool    `json:"crowded,omitempty"` // it has no node because others of a huge campaign promised more
}

// A Node is a job on one wrap side of the mount, in one window of its limits: the cable has one state
// throughout a slot, and where a limit cuts a pass in two the mount has to be brought across.
type Node struct {
	Job   int      `json:"job"`
	Place int      `json:"place"` // index into the slew table
	Turn  int      `json:"turn"`  // mount azimuth is within [360·Turn, 360·Turn+360) when the session starts, and goes on continuously
	Open  []Window `json:"open"`  // in time order, apart from one another; empty if it can never be observed
}

// A SlewTable holds how long the mount takes from one place (a source on a wrap side, in one window) to another, in
// seconds, acceleration and settling included, rounded up. The telescope leaves at once at a slot's
// end, and arrives where the target then is or, if it is not yet within limits, will first be.
// Bin b holds for departures from minute b·BinMin up to (b+1)·BinMin: the largest value in the bin.
// After these, one bin for each break: from where the source stood when the break began to where the
// target is when the break has ended.
type SlewTable struct {
	Places int      `json:"places"`
	BinMin int      `json:"bin_min"`
	Bins   int      `json:"bins"` // ordinary bins; len(Sec) = (Bins + breaks) · Places²
	Sec    []uint16 `json:"sec"`  // index (bin·Places + from)·Places + to
}

// TermKind says which aim a term of worth comes from.
type TermKind string

// The aims.
const (
	Cadence       TermKind = "cadence"
	PhaseCoverage TermKind = "phase coverage"
	Conjunction   TermKind = "conjunction"
	Measure       TermKind = "measure"
	Connect       TermKind = "connect"
	Calibration   TermKind = "calibration"
)

// Curve says how what a slot gathers becomes credit; x is gathered over wanted. Every curve is zero at
// zero and never falls.
type Curve string

// The curves.
const (
	Root  Curve = "root"  // √x up to 1, then a quarter of the slope it has there: TOA precision goes as the root of time
	Share Curve = "share" // x up to 1, then flat
	Log   Curve = "log"   // ½ ln(1+x): the shrinking of a parameter's ln σ
	Step  Curve = "step"  // 0 below 1, then 1
)

// A Term is one aim's part in a job's worth: Scale × Curve(gathered / Wanted), zero while gathered is
// below Least. What a slot from minute s to minute e gathers is Cum[e] − Cum[s].
type Term struct {
	Kind   TermKind `json:"kind"`
	Label  string   `json:"label"`  // the aim in a few words: "every 14 d with L+S"
	Scale  Micro    `json:"scale"`  // priority × need
	Curve  Curve    `json:"curve"`  //
	Wanted int32    `json:"wanted"` // above 0; the unit is the term's own, hundredths of an effective minute for most
	Least  int32    `json:"least"`  //
	Cum    []int32  `json:"cum"`    // Minutes+1 values that never fall; minutes that may not be observed count too
	Why    string   `json:"why"`    // one line: where Scale comes from
}
