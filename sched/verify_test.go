package sched

import (
	"context"
	"math"
	"strings"
	"testing"
	"time"
)

// twoSources is a session of an hour from 19:00 with a break from 19:30 to 19:35. A and B are up all the
// time, A again on receiver S, C until 19:20 only; it takes 90 s from one to another and 150 s after the
// break, 240 s to bring S into the beam.
func twoSources() *Problem {
	p := &Problem{Session: "two sources", Start: time.Date(2031, 1, 1, 19, 0, 0, 0, time.UTC), Minutes: 60, GridMin: 1, OverheadSec: 60,
		Receivers: []Receiver{{"L", 120}, {"S", 240}}, Breaks: []Span{{30, 35}}}
	add := func(source string, receiver int, scale float64, to int) {
		p.Jobs = append(p.Jobs, Job{Source: source, Receiver: receiver, Priority: 1, MinMin: 5, MaxMin: 20, MaxSlots: 1,
			Terms: []Term{{Kind: Cadence, Label: "every 14 d", Scale: Micro(scale * 1e6), Curve: Root, Wanted: 1000, Cum: plainMinutes(60), Why: "debt 1.00"}},
			Facts: Facts{UpMin: to, SunMin: to, ClearMin: to, Debt: 1, DebtAim: "every 14 d", HighestEl: 50, SunDeg: 40, SunLimit: 5}})
		p.Nodes = append(p.Nodes, Node{Job: len(p.Jobs) - 1, Place: len(p.Nodes), Open: []Window{{Span{0, to}, "session start", "elevation 8°"}}})
	}
	add("A", 0, 1, 60)
	add("A", 1, 1, 60)
	add("B", 0, 0.5, 60)
	add("C", 0, 2, 20)
	p.Slew = SlewTable{Places: 4, BinMin: 60, Bins: 1}
	for _, sec := range []uint16{90, 150} {
		for a := range 4 {
			for b := range 4 {
				if a == b || a+b == 1 {
					p.Slew.Sec = append(p.Slew.Sec, 0)
				} else {
					p.Slew.Sec = append(p.Slew.Sec, sec)
				}
			}
		}
	}
	return p
}

const (
	nodeAL = iota
	nodeAS
	nodeBL
	nodeCL
)

func TestVerifySaysWhatIsBroken(t *testing.T) {
	for _, c := range []struct {
		name  string
		slots []Slot
		want  []string // rule: text
	}{
		{"a good plan", []Slot{{Node: nodeCL, Start: 1, End: 20}, {Node: nodeBL, Start: 23, End: 30}, {Node: nodeAL, Start: 39, End: 59}}, nil},
		{"the first slot needs the overhead", []Slot{{Node: nodeAL, Start: 0, End: 20}},
			[]string{"setup: starts 1 min too early: overhead 60 s after the start of the session at 19:00"}},
		{"slew", []Slot{{Node: nodeAL, Start: 1, End: 10}, {Node: nodeBL, Start: 11, End: 20}},
			[]string{"setup: starts 2 min too early: slew of 90 s and overhead 60 s after A L ends at 19:10"}},
		{"receiver", []Slot{{Node: nodeAL, Start: 1, End: 10}, {Node: nodeAS, Start: 12, End: 20}},
			[]string{"setup: starts 3 min too early: change to receiver S of 240 s and overhead 60 s after A L ends at 19:10"}},
		{"after the break", []Slot{{Node: nodeAL, Start: 1, End: 10}, {Node: nodeBL, Start: 36, End: 50}},
			[]string{"setup: starts 3 min too early: slew of 150 s and overhead 60 s after the break ends at 19:35"}},
		{"overlap", []Slot{{Node: nodeAL, Start: 1, End: 20}, {Node: nodeBL, Start: 17, End: 28}},
			[]string{"overlap: overlaps A L by 3 min: that ends at 19:20"}},
		{"into the break", []Slot{{Node: nodeAL, Start: 20, End: 32}},
			[]string{"break: runs 2 min into the break from 19:30 to 19:35"}},
		{"out of limits", []Slot{{Node: nodeCL, Start: 10, End: 24}},
			[]string{"window: ends 4 min after it leaves its limits at 19:20 (elevation 8°)"}},
		{"too short", []Slot{{Node: nodeAL, Start: 10, End: 12}}, []string{"length: 2 min on source: shorter than 5 min is of no use"}},
		{"too long", []Slot{{Node: nodeAL, Start: 3, End: 29}}, []string{"length: 26 min on source: at most 20 min are wanted"}},
		{"twice", []Slot{{Node: nodeAL, Start: 1, End: 10}, {Node: nodeAL, Start: 15, End: 22}}, []string{"once: slot 2 of A L: at most 1 in a session"}},
		{"beyond the session", []Slot{{Node: nodeBL, Start: 50, End: 63}},
			[]string{"session: ends 3 min after the session does at 20:00", "window: ends 3 min after it leaves its limits at 20:00 (elevation 8°)"}},
	} {
		p := twoSources()
		v := Verify(p, Plan{Slots: c.slots})
		var got []string
		for _, b := range v.Breaches {
			got = append(got, string(b.Rule)+": "+b.Text)
		}
		if strings.Join(got, "\n") != strings.Join(c.want, "\n") {
			t.Errorf("%s:\n%s\nwant\n%s", c.name, strings.Join(got, "\n"), strings.Join(c.want, "\n"))
		}
	}
}

func TestVerifyKeepsPinsBarsGridAndPast(t *testing.T) {
	p := twoSources()
	p.GridMin, p.FromMin = 5, 10
	p.Jobs[2].Barred, p.Jobs[3].Must = true, true
	p.Pins = []Slot{{Node: nodeAL, Start: 2, End: 12, Pinned: true}}
	v := Verify(p, Plan{Slots: []Slot{{Node: nodeAL, Start: 3, End: 13, Pinned: true}, {Node: nodeBL, Start: 17, End: 27}, {Node: nodeAS, Start: 8, End: 15}}})
	rules := map[Rule]int{}
	for _, b := range v.Breaches {
		rules[b.Rule]++
	}
	for _, r := range []Rule{RulePin, RuleBar, RuleGrid, RulePast} {
		if rules[r] != 1 {
			t.Errorf("%d breaches of %s: %+v", rules[r], r, v.Breaches)
		}
	}
	if len(v.MissingMusts) != 1 || v.MissingMusts[0] != 3 {
		t.Errorf("missing musts %v, want C", v.MissingMusts)
	}
}

func TestSolveSmallByHand(t *testing.T) {
	p := twoSources()
	r := solve(t, p, Options{})
	judged(t, p, r.Plan, r.Worth)
	if r.Worth < bruteForceFree(p) {
		t.Errorf("planned %v: %+v", r.Worth, r.Plan.Slots)
	}
}

// bruteForceFree is the worth of the plan found by hand: C until it sets, A with L until the break, A
// with S after it and B at the end.
func bruteForceFree(p *Problem) Micro {
	return p.PlanWorth(Plan{Slots: []Slot{{Node: nodeCL, Start: 1, End: 16}, {Node: nodeAL, Start: 19, End: 30}, {Node: nodeAS, Start: 40, End: 50}, {Node: nodeBL, Start: 54, End: 60}}})
}

func TestSolveRefusesPinsThatClash(t *testing.T) {
	p := twoSources()
	p.Pins = []Slot{{Node: nodeAL, Start: 1, End: 10}, {Node: nodeBL, Start: 11, End: 20}}
	_, err := Solve(context.Background(), p, Options{})
	want := "pins clash: B L from 19:11 starts 2 min too early after A L until 19:10: slew of 90 s and overhead 60 s; unpin or move one of them"
	if err == nil || err.Error() != want {
		t.Errorf("error %v\nwant  %s", err, want)
	}
	p.FromMin = 30
	if r, err := Solve(context.Background(), p, Options{}); err != nil || len(r.Plan.Slots) < 3 {
		t.Errorf("pins that clash in time past: %+v, %v", r.Plan, err)
	}
}

func TestSolveAnswersOddSessions(t *testing.T) {
	empty := &Problem{Minutes: 60, GridMin: 1}
	nothing := generate(small.with(1))
	for i := range nothing.Nodes {
		nothing.Nodes[i].Open = nil
	}
	worthless := generate(small.with(1))
	for i := range worthless.Jobs {
		for k := range worthless.Jobs[i].Terms {
			worthless.Jobs[i].Terms[k].Scale = 0
		}
		worthless.Jobs[i].Must = false
	}
	minute := generate(instance{sources: 3, minutes: 1, grid: 1, receivers: 1})
	one := generate(instance{sources: 1, minutes: 300, grid: 1, receivers: 1})
	if r := solve(t, one, Options{}); !r.Proven || len(r.Plan.Slots) > 1 {
		t.Errorf("one source: %d slots, proven %v", len(r.Plan.Slots), r.Proven)
	}
	for name, p := range map[string]*Problem{"no job": empty, "nothing up": nothing, "worth nothing": worthless, "one minute": minute} {
		r := solve(t, p, Options{})
		judged(t, p, r.Plan, r.Worth)
		if len(r.Plan.Slots) != 0 {
			t.Errorf("%s: %d slots", name, len(r.Plan.Slots))
		}
		LeftOut(p, r.Plan)
		Candidates(p, r.Plan, 0)
	}
}

func TestCheckNamesEveryFault(t *testing.T) {
	p := twoSources()
	p.GridMin, p.Jobs[0].MinMin, p.Jobs[1].Receiver, p.Nodes[2].Place = 0, 0, 7, 9
	p.Jobs[3].Terms[0].Cum = p.Jobs[3].Terms[0].Cum[:10]
	p.Slew.Sec = p.Slew.Sec[:5]
	err := p.Check()
	if err == nil || strings.Count(err.Error(), "\n")+1 != 6 {
		t.Errorf("six faults wanted:\n%v", err)
	}
}

func TestHalfLog(t *testing.T) {
	for x := 1e-6; x < 1e7; x *= 1.37 {
		if got, want := halfLog(x), 0.5*math.Log1p(x); math.Abs(got-want) > 2e-6 {
			t.Errorf("½ ln(1+%v) = %v, want %v", x, got, want)
		}
	}
}

func TestMicroReads(t *testing.T) {
	for m, want := range map[Micro]string{0: "0.00", 830_000: "0.83", -1_256_000: "-1.26", 12_004_999: "12.00"} {
		if got := m.String(); got != want {
			t.Errorf("%d reads %s, want %s", int64(m), got, want)
		}
	}
}
