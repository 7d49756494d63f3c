package ui

import (
	"context"
	"fmt"
	"maps"
	"slices"
	"time"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/sched"
	"example.org/tallystick/ui/theme"
)

// A world is everything the views show. Only apply and receive change it.
type world struct {
	folder   *files
	campaign *campaigns.Campaign
	now      time.Time
	desks    map[string]*desk // by session, so that no edit is lost by looking at another session
	desk     *desk            // the session being looked at; never nil
	say      saying           // the last message
	zone     zone
	work     *planning // a plan being made, or nil
	mouse    bool
	follow   bool // the cursor follows the clock while the session is under way

	book    *campaigns.Logbook // as it was when it was last written here; only read
	edition int                // counts changes of the book
	written []written          // entries of this run, for taking back
	orbits  orbitState
	season  seasonState
}

// A saying is a message to the user.
type saying struct {
	text string
	ink  theme.Ink
}

// A desk is one session with the plan being worked on.
type desk struct {
	session  *campaigns.Session
	prepared *campaigns.Prepared // its problem carries the bars and no pins; nil until prepared
	trouble  string              // why it could not be prepared

	accounts  []campaigns.AccountRow // at the start of the session
	reviewing bool                   // it has been begun to find out
	reviewed  bool                   // the accounts say when each source can next be observed

	state   snapshot // the plan as it stands
	held    *heldEdit
	past    []step // what undo goes back to, the last step last
	future  []step // what redo goes on to, the next step last
	saved   snapshot
	onDisk  bool           // saved is the plan in the campaign's folder, not one that was just made
	planned bool           // planning has come to an end since the session was prepared
	learned *sched.Learned // by the last planning run
	proofs  []sched.Bound  // the ceilings that may still serve, the first proved first
	edition int            // counts changes of state, so that an answer to an older one can be told

	base       snapshot  // the plan as it was last planned, or read
	baseBefore *snapshot // what stood when it was last planned again
	baseIs     string    // what that was, in words
	lostTo     int       // minute until which the observer has given the session up as lost
	logRead    *campaigns.Logbook
	outcomes   map[logKey]campaigns.Outcome // of this session, from logRead
	year       map[string]string            // the past year's observations by source, week by week

	chosen int // index into the slots shown
	minute int // under the cursor

	view *reading
}

// A snapshot is what undo brings back.
type snapshot struct {
	plan sched.Plan
	bars []string // sorted
}

func (s snapshot) equal(o snapshot) bool {
	return slices.Equal(s.plan.Slots, o.plan.Slots) && slices.Equal(s.bars, o.bars)
}

// A step is an edit that was made, with what was there before (in past) or after (in future).
type step struct {
	did string
	to  snapshot
}

// A heldEdit is an edit that breaks a limit which was not broken before. It is shown, and becomes
// part of the plan only when the observer says so.
type heldEdit struct {
	did      string
	to       snapshot
	breaches []string
}

// planning is a plan being made.
type planning struct {
	desk    *desk
	first   bool // the session's first plan, which is no edit
	edition int
	cancel  context.CancelFunc
	problem *sched.Problem
	reached sched.Result
	reports chan sched.Result
}

// A reading is what is worked out from a plan once, and read by every frame until it changes.
type reading struct {
	problem  *sched.Problem
	plan     sched.Plan
	bars     []string
	rows     []campaigns.SlotRow
	verdict  sched.Verdict
	why      map[int]sched.SlotWhy // by slot
	whyFrom  int                   // the minute that why holds for
	leftOut  []sched.Reason
	leftFrom int // the minute that leftOut holds for

	ceiling      string // ceiling and distance in words
	ceilingAt    int    // the minute before which nothing can be changed that they hold for
	ceilingKnown bool
	ceilingFound bool // they tell a ceiling
}

// shown is the plan on the screen: the one that is held, if any.
func (d *desk) shown() snapshot {
	if d.held != nil {
		return d.held.to
	}
	return d.state
}

// read returns what is worked out from the plan shown. It needs a prepared session.
func (d *desk) read() *reading {
	if d.view != nil {
		return d.view
	}
	s := d.shown()
	p := d.preparedWith(s.bars)
	d.view = &reading{
		problem: p.Problem, plan: s.plan, bars: s.bars,
		rows: p.SlotRows(s.plan), verdict: sched.Verify(p.Problem, s.plan),
		why: map[int]sched.SlotWhy{},
	}
	return d.view
}

// explain returns where a slot's worth comes from and what bounds it, as from a minute on if the slot has
// not begun then.
func (r *reading) explain(slot, from int) sched.SlotWhy {
	if r.plan.Slots[slot].Start < from {
		from = 0
	}
	if r.whyFrom != from {
		clear(r.why)
		r.whyFrom = from
	}
	why, ok := r.why[slot]
	if !ok {
		why = sched.Explain(startingAt(r.problem, from), r.plan, slot)
		r.why[slot] = why
	}
	return why
}

// missing returns the reason for every job that has no slot, as from a minute on.
func (r *reading) missing(from int) []sched.Reason {
	if r.leftOut == nil || r.leftFrom != from {
		r.leftOut, r.leftFrom = sched.LeftOut(startingAt(r.problem, from), r.plan), from
	}
	return r.leftOut
}

// startingAt returns the problem with everything before a minute past. What is judged on the screen is
// judged without that: a slot that has begun is no fault of the plan.
func startingAt(p *sched.Problem, minute int) *sched.Problem {
	q := *p
	q.FromMin = minute
	return &q
}

// preparedWith returns the prepared session with these sources barred. It shares all that bars do not
// touch.
func (d *desk) preparedWith(bars []string) *campaigns.Prepared {
	p := *d.prepared
	q := *p.Problem
	q.Jobs = slices.Clone(q.Jobs)
	for i := range q.Jobs {
		_, q.Jobs[i].Barred = slices.BinarySearch(bars, q.Jobs[i].Source)
	}
	q.Pins = nil
	q.FromMin = 0
	p.Problem = &q
	return &p
}

// unsaved reports whether there is work here that would be lost.
func (d *desk) unsaved() bool {
	return d.prepared != nil && (d.held != nil || !d.state.equal(d.saved))
}

// slot returns the chosen slot.
func (d *desk) slot() (sched.Slot, bool) {
	s := d.shown().plan.Slots
	if d.prepared == nil || d.chosen < 0 || d.chosen >= len(s) {
		return sched.Slot{}, false
	}
	return s[d.chosen], true
}

// track is where the source to be drawn stands: the chosen slot's.
func (d *desk) track() *campaigns.Track {
	if s, ok := d.slot(); ok {
		return d.prepared.Track(d.prepared.Problem.Nodes[s.Node].Job)
	}
	return nil
}

// choose puts the cursor on a slot.
func (d *desk) choose(i int) {
	n := len(d.shown().plan.Slots)
	d.chosen = min(max(i, 0), max(n-1, 0))
	if s, ok := d.slot(); ok {
		d.goTo(s.Start)
	}
}

// goTo puts the cursor on a minute.
func (d *desk) goTo(minute int) {
	if d.prepared != nil {
		d.minute = min(max(minute, 0), d.prepared.Problem.Minutes)
	}
}

// changed forgets what was worked out from the plan before.
func (d *desk) changed() {
	d.edition++
	d.view = nil
	d.chosen = min(max(d.chosen, 0), max(len(d.shown().plan.Slots)-1, 0))
}

// commit makes an edit part of the plan.
func (d *desk) commit(did string, to snapshot) {
	d.past = append(d.past, step{did, d.state})
	d.future = nil
	d.state, d.held = to, nil
	d.changed()
}

// hold shows an edit without making it part of the plan.
func (d *desk) hold(did string, to snapshot, breaches []string) {
	d.held = &heldEdit{did, to, breaches}
	d.changed()
}

// letGo takes a held edit back.
func (d *desk) letGo() string {
	did := d.held.did
	d.held = nil
	d.changed()
	return did
}

// back and on move through the edits; they return what was undone or redone.
func (d *desk) back() (string, bool) {
	if len(d.past) == 0 {
		return "", false
	}
	s := d.past[len(d.past)-1]
	d.past = d.past[:len(d.past)-1]
	d.future = append(d.future, step{s.did, d.state})
	d.state = s.to
	d.changed()
	return s.did, true
}

func (d *desk) on() (string, bool) {
	if len(d.future) == 0 {
		return "", false
	}
	s := d.future[len(d.future)-1]
	d.future = d.future[:len(d.future)-1]
	d.past = append(d.past, step{s.did, d.state})
	d.state = s.to
	d.changed()
	return s.did, true
}

// nowMinute is the present minute of the session; false before and after it.
func (w *world) nowMinute() (int, bool) {
	d := w.desk
	if d.prepared == nil || w.now.Before(d.session.Start) || w.now.After(d.session.End) {
		return 0, false
	}
	return d.prepared.Minute(w.now), true
}

// unsaved returns the sessions with work that would be lost, in order of their names.
func (w *world) unsaved() []*desk {
	var all []*desk
	for _, name := range slices.Sorted(maps.Keys(w.desks)) {
		if d := w.desks[name]; d.unsaved() {
			all = append(all, d)
		}
	}
	return all
}

// newBreaches returns in words what a plan breaks that another did not.
func newBreaches(before, after *reading) []string {
	known := map[string]bool{}
	for _, b := range before.verdict.Breaches {
		known[before.breachKey(b)] = true
	}
	var found []string
	for _, b := range after.verdict.Breaches {
		if !known[after.breachKey(b)] {
			found = append(found, after.breachWords(b))
		}
	}
	return found
}

func (r *reading) breachKey(b sched.Breach) string {
	return fmt.Sprint(r.slotName(b.Slot), b.Rule, b.Text)
}

func (r *reading) breachWords(b sched.Breach) string {
	if b.Slot < 0 {
		return b.Text
	}
	return r.slotName(b.Slot) + " " + b.Text
}

// slotName names a slot's source and receiver.
func (r *reading) slotName(i int) string {
	if i < 0 || i >= len(r.plan.Slots) {
		return ""
	}
	return jobName(r.problem, r.problem.Nodes[r.plan.Slots[i].Node].Job)
}

func sourceOf(p *sched.Problem, s sched.Slot) string { return p.Jobs[p.Nodes[s.Node].Job].Source }

// jobName names a job's source and receiver.
func jobName(p *sched.Problem, job int) string {
	j := p.Jobs[job]
	return j.Source + " " + p.Receivers[j.Receiver].Name
}
