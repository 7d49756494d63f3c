package sched

import (
	"context"
	"encoding/json"
	"reflect"
	"slices"
	"testing"

	"pgregory.net/rapid"
)

// drawProblem draws a small session with bars, time past, and pins taken from a plan.
func drawProblem(t *rapid.T) *Problem {
	in := instance{
		sources: rapid.IntRange(1, 12).Draw(t, "sources"), minutes: rapid.IntRange(1, 200).Draw(t, "minutes"),
		grid: rapid.IntRange(1, 5).Draw(t, "grid"), receivers: rapid.IntRange(1, 2).Draw(t, "receivers"),
		calibrators: rapid.IntRange(0, 1).Draw(t, "calibrators"), long: rapid.IntRange(0, 1).Draw(t, "long"),
		seed: rapid.Uint64().Draw(t, "seed"),
	}
	if in.minutes > 60 {
		in.breaks = rapid.IntRange(0, 1).Draw(t, "breaks")
	}
	p := generate(in)
	for i := range p.Jobs {
		p.Jobs[i].Barred = rapid.IntRange(0, 9).Draw(t, "bar") == 0
		p.Jobs[i].MaxSlots = 1 + rapid.IntRange(0, 9).Draw(t, "slots")/9
	}
	if rapid.Bool().Draw(t, "pinned") {
		for _, s := range Dispatch(p).Slots {
			if rapid.IntRange(0, 2).Draw(t, "pin") == 0 && p.fitsAt(p.Pins, len(p.Pins), s) {
				p.Pins = append(p.Pins, s)
			}
		}
	}
	p.FromMin = rapid.IntRange(0, in.minutes/2).Draw(t, "from")
	return p
}

func TestEveryPlanPassesTheJudge(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := drawProblem(t)
		if err := p.Check(); err != nil {
			t.Fatal(err)
		}
		r, err := Solve(context.Background(), p, Options{Rounds: 1})
		if err != nil {
			t.Fatal(err)
		}
		for _, plan := range []Plan{r.Plan, Dispatch(p)} {
			v := Verify(p, plan)
			for _, b := range v.Breaches {
				t.Errorf("%+v breaks %s: %s", plan.Slots[b.Slot], b.Rule, b.Text)
			}
		}
		if v := Verify(p, r.Plan); v.Worth != r.Worth {
			t.Errorf("worth %d claimed, %d found", r.Worth, v.Worth)
		}
		explained(t, p, r.Plan)
	})
}

// explained asks for every explanation there is: each job has a slot or a reason.
func explained(t *rapid.T, p *Problem, plan Plan) {
	has := make([]bool, len(p.Jobs))
	for i, s := range plan.Slots {
		has[p.Nodes[s.Node].Job] = true
		why := Explain(p, plan, i)
		var sum Micro
		for _, term := range why.Terms {
			sum += term.Worth
		}
		if sum != p.JobWorth(p.Nodes[s.Node].Job, s.Start, s.End) || why.StartBy == "" || why.EndBy == "" || why.NextBest == "" {
			t.Errorf("slot %d explained as %+v", i, why)
		}
	}
	for _, r := range LeftOut(p, plan) {
		if has[r.Job] || r.Text == "" || r.Kind == "" {
			t.Errorf("reason %+v for a job with a slot, or an empty one", r)
		}
		has[r.Job] = true
	}
	if slices.Contains(has, false) {
		t.Error("a job has neither slot nor reason")
	}
}

func TestEditsKeepOtherSlots(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := drawProblem(t)
		plan := Dispatch(p)
		for range rapid.IntRange(1, 12).Draw(t, "edits") {
			before := plan.Sorted()
			i := rapid.IntRange(-1, len(plan.Slots)).Draw(t, "slot")
			by := rapid.IntRange(-300, 300).Draw(t, "by")
			job := rapid.IntRange(0, len(p.Jobs)-1).Draw(t, "job")
			at := i
			gone, came := 1, 1
			switch rapid.IntRange(0, 6).Draw(t, "kind") {
			case 0:
				plan, at = MoveSlot(p, plan, i, by)
			case 1:
				plan, at = Lengthen(p, plan, i, by)
			case 2:
				plan, at = StretchStart(p, plan, i, by)
			case 3:
				plan, at = Drop(plan, i)
				came = 0
			case 4:
				plan, at = SetPinned(plan, i, by > 0)
			case 5:
				plan, at = Replace(p, plan, i, job)
			case 6:
				var err error
				if plan, at, err = Insert(p, plan, job, by); err != nil {
					t.Fatal(err)
				}
				gone = 0
			}
			if gone == 1 && (i < 0 || i >= len(before.Slots)) {
				if !slices.Equal(plan.Slots, before.Slots) {
					t.Fatal("an edit of no slot changed the plan")
				}
				continue
			}
			kept := slices.Clone(plan.Slots)
			if came == 1 {
				kept = slices.Delete(kept, at, at+1)
			}
			if gone == 1 {
				before.Slots = slices.Delete(before.Slots, i, i+1)
			}
			if !slices.Equal(kept, before.Slots) {
				t.Fatal("an edit changed another slot")
			}
			for _, s := range plan.Slots {
				if s.Start < 0 || s.End > p.Minutes || s.Start >= s.End {
					t.Fatalf("slot %+v leaves the session", s)
				}
			}
			Verify(p, plan)
			LeftOut(p, plan)
		}
		for _, c := range Candidates(p, plan, rapid.IntRange(-10, p.Minutes+10).Draw(t, "at")) {
			if p.Jobs[c.Job].Barred || c.Fits && len(c.Displaces) > 0 || c.Worth != p.JobWorth(c.Job, c.Start, c.End) {
				t.Fatalf("candidate %+v", c)
			}
		}
	})
}

// What a candidate promises holds when it is put in.
func TestCandidatesFit(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := drawProblem(t)
		plan := Dispatch(p)
		for _, c := range Candidates(p, plan, rapid.IntRange(0, p.Minutes).Draw(t, "at")) {
			if !c.Fits && len(c.Displaces) == 0 {
				continue
			}
			with := plan.Clone()
			for k := len(c.Displaces) - 1; k >= 0; k-- {
				with.Slots = slices.Delete(with.Slots, c.Displaces[k], c.Displaces[k]+1)
			}
			before := len(Verify(p, with).Breaches) // taking a slot out may leave too little time for the next
			with.Slots = append(with.Slots, Slot{Node: c.Node, Start: c.Start, End: c.End})
			if v := Verify(p, with); len(v.Breaches) > before {
				t.Fatalf("candidate %+v breaks %v", c, v.Breaches)
			}
		}
	})
}

func TestWorthNeverFallsWhenASlotGrows(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(2, 60).Draw(t, "minutes")
		cum := make([]int32, n+1)
		for m := range n {
			cum[m+1] = cum[m] + rapid.Int32Range(0, 300).Draw(t, "gain")
		}
		term := Term{Scale: Micro(rapid.Int64Range(0, int64(maxScale)).Draw(t, "scale")), Curve: rapid.SampledFrom([]Curve{Root, Share, Log, Step}).Draw(t, "curve"),
			Wanted: rapid.Int32Range(1, 5000).Draw(t, "wanted"), Least: rapid.Int32Range(0, 1000).Draw(t, "least"), Cum: cum}
		if w := term.Worth(0, 0); w != 0 {
			t.Fatalf("nothing gathered is worth %d", w)
		}
		for s := range n + 1 {
			for e := s + 1; e <= n; e++ {
				w := term.Worth(s, e)
				if w < term.Worth(s, e-1) || w < term.Worth(s+1, e) {
					t.Fatalf("worth falls when the slot grows to %d–%d", s, e)
				}
			}
		}
	})
}

func TestProblemReadsBack(t *testing.T) {
	p := generate(small.with(5))
	p.Pins = Dispatch(p).Slots[:2]
	text, err := json.Marshal(p)
	if err != nil {
		t.Fatal(err)
	}
	var back Problem
	if err := json.Unmarshal(text, &back); err != nil {
		t.Fatal(err)
	}
	if !reflect.DeepEqual(p, &back) {
		t.Error("the problem changes on its way through JSON")
	}
	again, err := json.Marshal(&back)
	if err != nil || !slices.Equal(text, again) {
		t.Error("the problem is written differently the second time")
	}
}

func TestSamePlanWithAnyWorkers(t *testing.T) {
	p := generate(small.with(8))
	a, b := solve(t, p, Options{Rounds: 3}), solve(t, p, Options{Rounds: 3, Workers: 4})
	if !reflect.DeepEqual(a, b) {
		t.Error("the plan depends on the number of workers")
	}
}

func TestWarmPlanIsNeverLost(t *testing.T) {
	p := generate(medium.with(9))
	good := solve(t, p, Options{Rounds: 1})
	again := solve(t, p, Options{Rounds: -1, Warm: &good.Plan})
	if again.Worth < good.Worth {
		t.Errorf("worth %v from a plan of %v", again.Worth, good.Worth)
	}
	p.Pins = []Slot{good.Plan.Slots[3], good.Plan.Slots[9]}
	for i := range p.Pins {
		p.Pins[i].Pinned = true
	}
	pinnedPlan := solve(t, p, Options{Rounds: -1, Warm: &good.Plan})
	judged(t, p, pinnedPlan.Plan, pinnedPlan.Worth)
	if pinnedPlan.Worth < good.Worth {
		t.Errorf("pins that are in the plan lower it from %v to %v", good.Worth, pinnedPlan.Worth)
	}
}

func TestCancelledSolveReturnsWhatItHas(t *testing.T) {
	p := generate(small.with(1))
	ctx, cancel := context.WithCancel(context.Background())
	calls := 0
	r, err := Solve(ctx, p, Options{Rounds: 50, Progress: func(Result) {
		if calls++; calls == 3 {
			cancel()
		}
	}})
	if err != context.Canceled || r.Rounds != 2 || len(r.Plan.Slots) == 0 {
		t.Errorf("after a cancel: %d rounds, %d slots, error %v", r.Rounds, len(r.Plan.Slots), err)
	}
	judged(t, p, r.Plan, r.Worth)
}
