package demo_test

import (
	"context"
	"strings"
	"testing"
	"time"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/campaigns/demo"
	"example.org/tallystick/sched"
)

// planned plans one session of the demonstration.
func planned(t *testing.T, session int) (*campaigns.Prepared, sched.Plan) {
	t.Helper()
	f, err := campaigns.OpenDemo()
	if err != nil {
		t.Fatal(err)
	}
	p, err := campaigns.Prepare(f.Campaign, f.Logbook, &f.Campaign.Sessions[session], campaigns.PrepareOptions{At: demo.Now()})
	if err != nil {
		t.Fatal(err)
	}
	r, err := sched.Solve(context.Background(), p.Problem, sched.Options{Rounds: -1})
	if err != nil {
		t.Fatal(err)
	}
	return p, r.Plan
}

// slotOf is the plan's slot of a source with a receiver.
func slotOf(p *campaigns.Prepared, plan sched.Plan, source, receiver string) (campaigns.SlotRow, sched.Slot, bool) {
	for i, r := range p.SlotRows(plan) {
		if r.Source == source && r.Receiver == receiver {
			return r, plan.Slots[i], true
		}
	}
	return campaigns.SlotRow{}, sched.Slot{}, false
}

// termOf is the term of a slot's job for one kind of aim.
func termOf(p *campaigns.Prepared, s sched.Slot, kind sched.TermKind) *sched.Term {
	job := &p.Problem.Jobs[p.Problem.Nodes[s.Node].Job]
	for i := range job.Terms {
		if job.Terms[i].Kind == kind {
			return &job.Terms[i]
		}
	}
	return nil
}

// Where one of the next sessions holds a passage of the edge-on binary, the plan is on it, for a third or more of what the
// window weighs although the session is over-subscribed, and one line says why.
func TestTheEdgeOnBinaryIsPlannedAtItsConjunction(t *testing.T) {
	for session, at := range map[int]time.Time{
		0: time.Date(2026, 12, 4, 0, 52, 0, 0, time.UTC),
		3: time.Date(2026, 12, 16, 19, 56, 0, 0, time.UTC),
	} {
		p, plan := planned(t, session)
		row, slot, ok := slotOf(p, plan, "J0512+1730", "L")
		if !ok || !row.Start.Before(at) || !row.End.After(at) {
			t.Errorf("%s: planned from %v to %v, the conjunction is at %v", p.Session.Name, row.Start, row.End, at)
			continue
		}
		term := termOf(p, slot, sched.Conjunction)
		if term == nil {
			t.Fatalf("%s: no term for the passage", p.Session.Name)
		}
		if got, whole := term.Cum[slot.End]-term.Cum[slot.Start], term.Cum[len(term.Cum)-1]; 3*got < whole {
			t.Errorf("%s: %d of %d of the window's weight", p.Session.Name, got, whole)
		}
		if !strings.Contains(term.Why, "passages caught") || !strings.Contains(term.Why, "trustworthy") || strings.Contains(term.Why, "missed") {
			t.Errorf("%s: %q", p.Session.Name, term.Why)
		}
	}
}

// The newly found pulsar's count is a guess by the second session, so it is planned in the first, and the line says by when.
func TestTheNewOneIsPlannedBeforeItsCountIsLost(t *testing.T) {
	p, plan := planned(t, 0)
	row, slot, ok := slotOf(p, plan, "J0212+1858", "L")
	if !ok {
		t.Fatal("it is not in the first session's plan")
	}
	for _, a := range p.Accounts {
		if a.Source == row.Source && a.Kind == campaigns.Connect && !row.End.Before(a.Due) {
			t.Errorf("planned until %v, the count is lost on %v", row.End, a.Due)
		}
	}
	if term := termOf(p, slot, sched.Connect); term == nil || !strings.Contains(term.Why, "the count may be lost by then") {
		t.Errorf("%+v", term)
	}
}

// The eclipsing one is observed between its eclipses, in a slot that one of them bounds or that lies clear of them.
func TestTheEclipsingOneIsPlannedOutsideEclipse(t *testing.T) {
	for _, session := range []int{0, 6} {
		isOutsideEclipse(t, session)
	}
}

func isOutsideEclipse(t *testing.T, session int) {
	p, plan := planned(t, session)
	row, slot, ok := slotOf(p, plan, "J0454+4741", "L")
	if !ok {
		t.Fatal("it is not in the plan")
	}
	rows, _, err := campaigns.Conjunctions(p.Campaign, p.Site, p.Session.Start, p.Session.End)
	if err != nil {
		t.Fatal(err)
	}
	ends := 0
	for _, r := range rows {
		if r.Source != row.Source || r.Kind != campaigns.EclipseStart && r.Kind != campaigns.EclipseEnd {
			continue
		}
		ends++
		// An eclipse lasts 12 min, a slot 18 or more: one of its ends would lie within.
		if r.At.After(row.Start) && r.At.Before(row.End) {
			t.Errorf("%s at %v, planned from %v to %v", r.Kind, r.At, row.Start, row.End)
		}
	}
	if ends < 8 {
		t.Errorf("%d ends of eclipses in a session of ten hours and an orbit of one and a half", ends)
	}
	for _, w := range p.Problem.Nodes[slot.Node].Open {
		if w.From <= slot.Start && slot.End <= w.To && w.OpensBy != "eclipse, ±0.065 turns" && w.ClosesBy != "eclipse, ±0.065 turns" {
			t.Errorf("the window from %q to %q is not one between eclipses", w.OpensBy, w.ClosesBy)
		}
	}
}
