package sched

import (
	"context"
	"math/rand/v2"
	"slices"
	"testing"
)

// proven solves a tiny problem to the end.
func proven(t *testing.T, seed uint64, p *Problem) Micro {
	t.Helper()
	r := solve(t, p, Options{})
	judged(t, p, r.Plan, r.Worth)
	if !r.Proven {
		t.Logf("seed %d: worth %d, ceiling %d, not proven", seed, r.Worth, r.Ceiling)
		return bruteForce(p)
	}
	return r.Worth
}

// A source, a receiver or a minute more never lowers the best plan.
func TestMoreNeverLowersTheOptimum(t *testing.T) {
	rose := 0
	for seed := range uint64(40) {
		p := tiny(seed)
		optimum := proven(t, seed, p)

		fewer := *p
		fewer.Jobs = slices.Clone(p.Jobs)
		fewer.Jobs[len(fewer.Jobs)-1].Barred = true
		less := proven(t, seed, &fewer)
		if less > optimum {
			t.Errorf("seed %d: best %d without the last source, %d with it", seed, less, optimum)
		}
		if less < optimum {
			rose++
		}

		longer := *p
		longer.Minutes++
		longer.Jobs = slices.Clone(p.Jobs)
		for j := range longer.Jobs {
			term := longer.Jobs[j].Terms[0]
			term.Cum = append(slices.Clone(term.Cum), term.Cum[p.Minutes]+90)
			longer.Jobs[j].Terms = []Term{term}
		}
		longer.Nodes = slices.Clone(p.Nodes)
		for i := range longer.Nodes {
			w := longer.Nodes[i].Open[0]
			if w.To == p.Minutes {
				w.To++
				longer.Nodes[i].Open = []Window{w}
			}
		}
		if more := proven(t, seed, &longer); more < optimum {
			t.Errorf("seed %d: best %d, %d with a minute more", seed, optimum, more)
		}

		other := *p
		other.Receivers = append(slices.Clone(p.Receivers), Receiver{"K", 60})
		job := p.Jobs[0]
		job.Receiver = len(p.Receivers)
		other.Jobs = append(slices.Clone(p.Jobs), job)
		other.Nodes = append(slices.Clone(p.Nodes), Node{Job: len(p.Jobs), Place: p.Nodes[0].Place, Open: p.Nodes[0].Open})
		if more := proven(t, seed, &other); more < optimum {
			t.Errorf("seed %d: best %d, %d with another receiver on the first source", seed, optimum, more)
		}
	}
	if rose == 0 {
		t.Error("no source was worth anything")
	}
}

// Pinning what is in the best plan anyway changes nothing.
func TestPinInThePlanChangesNothing(t *testing.T) {
	for seed := range uint64(5) {
		p := generate(small.with(seed))
		free := solve(t, p, Options{})
		if !free.Proven {
			t.Fatalf("seed %d: not proven", seed)
		}
		p.Pins = []Slot{free.Plan.Slots[1], free.Plan.Slots[3]}
		pinned := solve(t, p, Options{})
		if pinned.Worth != free.Worth || pinned.Ceiling != free.Ceiling || !pinned.Proven {
			t.Errorf("seed %d: worth %d and ceiling %d, with pins %d and %d", seed, free.Worth, free.Ceiling, pinned.Worth, pinned.Ceiling)
		}
		for i := range pinned.Plan.Slots {
			pinned.Plan.Slots[i].Pinned = false
		}
		if warm := solve(t, p, Options{Rounds: -1, Warm: &free.Plan}); warm.Worth != free.Worth {
			t.Errorf("seed %d: worth %d from the plan itself, not %d", seed, warm.Worth, free.Worth)
		}
	}
}

// No plan that a search with other random numbers finds passes the ceiling, however early it is taken.
func TestCeilingIsAboveThePlansOfOtherSeeds(t *testing.T) {
	for seed := range uint64(2) {
		p := generate(medium.with(seed))
		var ceilings []Micro
		r, err := Solve(context.Background(), p, Options{Work: StepsPerSecond / 20, Progress: func(r Result) {
			if r.HasCeiling {
				ceilings = append(ceilings, r.Ceiling)
			}
		}})
		if err != nil || len(ceilings) == 0 {
			t.Fatalf("seed %d: %d ceilings, %v", seed, len(ceilings), err)
		}
		lowest := slices.Min(ceilings)
		tb := newTables(p, nil, 1)
		prices, perMin := tb.minutePrices()
		tb.layPull(perMin)
		for other := range uint64(3) {
			l := newLane(tb, prices, 100+other, never)
			first := l.complete(tb.fitting(r.Plan))
			l.start(first, tb.value(first))
			for range 2 {
				l.replan(0.8, 0)
			}
			plan := Plan{Slots: l.best}
			judged(t, p, plan, p.PlanWorth(plan))
			if worth := p.PlanWorth(plan); worth > lowest && len(Verify(p, plan).MissingMusts) == 0 {
				t.Errorf("seed %d: ceiling %d, another search found %d", seed, lowest, worth)
			}
		}
	}
}

// Where sources stand in the slew table means nothing.
func TestPlacesInAnyOrder(t *testing.T) {
	p := generate(small.with(3))
	q := *p
	n := p.Slew.Places
	perm := rand.New(rand.NewPCG(1, 2)).Perm(n)
	q.Nodes, q.Slew.Sec = slices.Clone(p.Nodes), make([]uint16, len(p.Slew.Sec))
	for i := range q.Nodes {
		q.Nodes[i].Place = perm[p.Nodes[i].Place]
	}
	for bin := range len(p.Slew.Sec) / (n * n) {
		for a := range n {
			for b := range n {
				q.Slew.Sec[(bin*n+perm[a])*n+perm[b]] = p.Slew.Sec[(bin*n+a)*n+b]
			}
		}
	}
	a, b := solve(t, p, Options{}), solve(t, &q, Options{Workers: 2})
	if !slices.Equal(a.Plan.Slots, b.Plan.Slots) || a.Ceiling != b.Ceiling || a.Work != b.Work {
		t.Errorf("worth %v and %v, ceiling %v and %v", a.Worth, b.Worth, a.Ceiling, b.Ceiling)
	}
}
