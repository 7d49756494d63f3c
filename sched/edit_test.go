package sched

import (
	"strings"
	"testing"
)

func TestInsertTakesTheBestPlaceInTheGap(t *testing.T) {
	p := twoSources()
	plan := Plan{Slots: []Slot{{Node: nodeAL, Start: 1, End: 10}, {Node: nodeAS, Start: 40, End: 50}}}
	got, i, err := Insert(p, plan, 2, 20)
	if want := (Slot{Node: nodeBL, Start: 13, End: 30}); err != nil || i != 1 || got.Slots[1] != want {
		t.Errorf("inserted %+v at %d, want %+v: %v", got.Slots[i], i, want, err)
	}
	if v := Verify(p, got); len(v.Breaches) > 0 {
		t.Errorf("breaches %+v", v.Breaches)
	}
	got, i, err = Insert(p, plan, 3, 45) // C has set, and A is there: inserted all the same
	if err != nil || got.Slots[i] != (Slot{Node: nodeCL, Start: 45, End: 50}) {
		t.Errorf("inserted %+v: %v", got.Slots[i], err)
	}
	if v := Verify(p, got); len(v.Breaches) == 0 {
		t.Error("the judge finds nothing wrong with a source below its limits during another slot")
	}
	if _, _, err := Insert(p, plan, 4, 0); err == nil {
		t.Error("a job that does not exist was inserted")
	}
}

func TestEditsSnapToTheGrid(t *testing.T) {
	p := twoSources()
	p.GridMin = 5
	plan := Plan{Slots: []Slot{{Node: nodeAL, Start: 11, End: 20}}}
	for _, c := range []struct {
		name string
		got  Plan
		want Slot
	}{
		{"moved on", first(MoveSlot(p, plan, 0, 1)), Slot{Node: nodeAL, Start: 16, End: 25}},
		{"moved back", first(MoveSlot(p, plan, 0, -1)), Slot{Node: nodeAL, Start: 6, End: 15}},
		{"moved to the end", first(MoveSlot(p, plan, 0, 500)), Slot{Node: nodeAL, Start: 51, End: 60}},
		{"moved to the start", first(MoveSlot(p, plan, 0, -500)), Slot{Node: nodeAL, Start: 0, End: 9}},
		{"longer", first(Lengthen(p, plan, 0, 1)), Slot{Node: nodeAL, Start: 11, End: 25}},
		{"shorter", first(Lengthen(p, plan, 0, -1)), Slot{Node: nodeAL, Start: 11, End: 15}},
		{"never empty", first(Lengthen(p, plan, 0, -50)), Slot{Node: nodeAL, Start: 11, End: 12}},
		{"earlier start", first(StretchStart(p, plan, 0, -3)), Slot{Node: nodeAL, Start: 8, End: 20}},
		{"pinned", first(SetPinned(plan, 0, true)), Slot{Node: nodeAL, Start: 11, End: 20, Pinned: true}},
		{"replaced", first(Replace(p, plan, 0, 3)), Slot{Node: nodeCL, Start: 1, End: 20}},
	} {
		if c.got.Slots[0] != c.want {
			t.Errorf("%s: %+v, want %+v", c.name, c.got.Slots[0], c.want)
		}
	}
	if plan.Slots[0] != (Slot{Node: nodeAL, Start: 11, End: 20}) {
		t.Error("an edit changed the plan it was given")
	}
}

func first(plan Plan, _ int) Plan { return plan }

func TestCandidatesInAGapAndOnASlot(t *testing.T) {
	p := twoSources()
	plan := Plan{Slots: []Slot{{Node: nodeAL, Start: 1, End: 10}, {Node: nodeAS, Start: 40, End: 50}}}
	in := Candidates(p, plan, 22)
	if c := in[0]; c.Job != 3 || !c.Fits || c.Start != 13 || c.End != 20 {
		t.Errorf("best in the gap %+v, want C while it is up", c)
	}
	if c := in[1]; c.Job != 2 || !c.Fits || c.Start != 13 || c.End != 30 {
		t.Errorf("next best in the gap %+v, want B until the break", c)
	}
	on := Candidates(p, plan, 5)
	if c := on[0]; c.Job != 3 || c.Fits || len(c.Displaces) != 1 || c.Displaces[0] != 0 || c.Cost != p.JobWorth(0, 1, 10) {
		t.Errorf("best on the slot of A %+v", c)
	}
}

func TestEveryReasonIsTold(t *testing.T) {
	p := twoSources()
	plan := Plan{Slots: []Slot{{Node: nodeAL, Start: 1, End: 20}, {Node: nodeAS, Start: 40, End: 60}}}
	told := func(kind ReasonKind, job int, text string) {
		t.Helper()
		for _, r := range LeftOut(p, plan) {
			if r.Job == job && (r.Kind != kind || r.Text != text) {
				t.Errorf("%s: %s\nwant %s: %s", r.Kind, r.Text, kind, text)
			}
		}
	}
	told(Free, 2, "fits at 19:23–19:30 as things are, and would add 0.42")
	told(Outranked, 3, "would gain 1.51: 1.67 at 19:01–19:08 takes 10 min (0.16) from A L")
	p.Jobs[3].MinMin, p.Jobs[3].Terms[0].Scale = 18, Unit
	told(Outranked, 3, "would cost 0.00: 1.11 at 19:01–19:20 displaces A L (1.11)")
	p.Jobs[3].MinMin = 5
	p.Jobs[3].Facts.Debt, p.Jobs[3].Terms[0].Scale = 0.04, 1000
	told(NotDue, 3, "not due: debt 0.04 (every 14 d); its best slot is worth 0.00")
	p.Jobs[3].Terms[0].Scale, p.Jobs[3].Terms[0].Least = Unit, 2500
	told(TooLow, 3, "its best slot reaches 2.00 of the wanted, of use from 2.50 on; highest 50.0°")
	p.FromMin = 18
	told(Past, 3, "2 min of it are left after 19:18; 5 min needed")
	p.Nodes[nodeCL].Open[0].To = 4
	told(NotUp, 3, "the mount can stay on it for 4 of the 5 min needed")
	p.Jobs[3].Facts.ClearMin = 4
	told(Eclipsed, 3, "eclipses and breaks leave 4 of the 5 min needed")
	p.Jobs[3].Facts.SunMin, p.Jobs[3].Facts.SunDeg = 3, 3.14
	told(SunTooClose, 3, "3.1° from the Sun, limit 5.0°: leaves 3 of the 5 min needed")
	p.Jobs[3].Facts.UpMin, p.Jobs[3].Facts.HighestEl = 2, 9.4
	told(NotUp, 3, "within its limits for 2 of the 5 min needed; highest 9.4°")
	p.Jobs[3].Barred = true
	told(Barred, 3, "barred from this session")
}

func TestExplainNamesTheBounds(t *testing.T) {
	p := twoSources()
	plan := Plan{Slots: []Slot{{Node: nodeCL, Start: 1, End: 20}, {Node: nodeAL, Start: 23, End: 30}, {Node: nodeAS, Start: 40, End: 60}}}
	for i, want := range []struct{ start, end, next string }{
		{"overhead 60 s after the session's start", "within its limits until 19:20 (elevation 8°)", "B L from 19:01 to 19:20 would bring 0.56 here"},
		{"slew of 90 s and overhead 60 s after C L", "the break from 19:30", "B L from 19:23 to 19:30 would bring 0.42 here"},
		{"change to receiver S of 240 s and overhead 60 s after the break", "20 min are the most that are wanted", "B L from 19:40 to 20:00 would bring 0.56 here"},
	} {
		got := Explain(p, plan, i)
		if got.StartBy != want.start || got.EndBy != want.end || got.NextBest != want.next {
			t.Errorf("slot %d:\nstart %s\nend %s\nnext %s", i, got.StartBy, got.EndBy, got.NextBest)
		}
		if !strings.Contains(got.Terms[0].Why, "debt") || got.Terms[0].Worth == 0 {
			t.Errorf("slot %d: terms %+v", i, got.Terms)
		}
	}
}

// A pass that a limit cuts in two has a node for each part; a slot moved across takes the other.
func TestASlotMovedAcrossALimitTakesTheOtherNode(t *testing.T) {
	window := func(from, to int) []Window {
		return []Window{{Span: Span{From: from, To: to}, OpensBy: "elevation 8°", ClosesBy: "elevation 8°"}}
	}
	p := twoSources()
	p.Nodes = []Node{
		{Job: 0, Place: 0, Turn: 0, Open: window(0, 20)},
		{Job: 0, Place: 1, Turn: -1, Open: window(25, 60)},
		{Job: 0, Place: 2, Turn: 0, Open: window(25, 60)},
	}
	plan := Plan{Slots: []Slot{{Node: 0, Start: 5, End: 15}}}
	for by, want := range map[int]Slot{
		3:  {Node: 0, Start: 8, End: 18},
		10: {Node: 0, Start: 15, End: 25}, // in the gap: it stays, and the judge says what it breaks
		20: {Node: 2, Start: 25, End: 35}, // same cable turn
	} {
		if got := first(MoveSlot(p, plan, 0, by)).Slots[0]; got != want {
			t.Errorf("moved by %d: %+v, want %+v", by, got, want)
		}
	}
}

func TestASourceIsAbsentForTheReasonNearestToLettingItIn(t *testing.T) {
	p := twoSources()
	p.Jobs[0].Barred = true // A with L
	absent := Absent(p, Plan{Slots: []Slot{{Node: nodeBL, Start: 13, End: 30}}})
	for _, r := range absent {
		switch source := p.Jobs[r.Job].Source; source {
		case p.Jobs[2].Source:
			t.Errorf("%s is in the plan and called absent", source)
		case p.Jobs[0].Source:
			if r.Job != 1 || r.Kind == Barred {
				t.Errorf("%s: %+v; its other receiver is not barred", source, r)
			}
		}
	}
	if len(absent) != 2 {
		t.Errorf("%d sources absent, want 2: %+v", len(absent), absent)
	}
}
