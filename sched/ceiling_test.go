package sched

import (
	"context"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"
)

func never() bool { return false }

// A bound holds at any prices that are not below zero, for every plan there is.
func TestCeilingIsNeverBelowTheBestPlan(t *testing.T) {
	for seed := range uint64(150) {
		p := tiny(seed)
		best := bruteForce(p)
		tb := newTables(p, nil, 1)
		prices, _ := tb.minutePrices()
		b := newBounder(tb, prices, never)
		r := rand.New(rand.NewPCG(seed, 5))
		for range 4 {
			plain, _ := b.swept(p.GridMin)
			routed, _ := b.routed(p.GridMin, unreachable/4)
			if plain < best || routed < best {
				t.Fatalf("seed %d: bound %d by sweep, %d by routes, best of all plans %d", seed, plain, routed, best)
			}
			for j := range b.prices.trial {
				b.prices.trial[j] = float64(Micro(float64(tb.best[j]) * 1.5 * r.Float64()))
			}
		}
		got := solve(t, p, Options{})
		if !got.HasCeiling || got.Ceiling < best {
			t.Errorf("seed %d: ceiling %d, best of all plans %d", seed, got.Ceiling, best)
		}
		if got.Proven && got.Worth != best {
			t.Errorf("seed %d: %d said to be proven, best of all plans %d", seed, got.Worth, best)
		}
	}
}

// With a job that must be there the ceiling is that of the plans that have it.
func TestCeilingWithMusts(t *testing.T) {
	near := 0
	for seed := range uint64(150) {
		p := tiny(seed)
		for i := range p.Jobs {
			p.Jobs[i].MaxSlots = 1
		}
		free := bruteForce(p)
		p.Jobs[0].Must = true
		best := bruteForce(p, 0)
		r := solve(t, p, Options{})
		judged(t, p, r.Plan, r.Worth)
		if best < 0 {
			continue // it cannot be had
		}
		if has := len(Verify(p, r.Plan).MissingMusts) == 0; !has || r.Worth > best || r.Ceiling < best {
			t.Errorf("seed %d: must there %v, worth %d, best %d, ceiling %d", seed, has, r.Worth, best, r.Ceiling)
		}
		if best < free && r.Ceiling < free {
			near++
		}
	}
	if near == 0 {
		t.Error("no ceiling lies below what could be had without the must")
	}
}

func TestCeilingHoldsForPlansWithPins(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := drawProblem(t)
		r, err := Solve(context.Background(), p, Options{Rounds: 1})
		if err != nil {
			t.Fatal(err)
		}
		if !r.HasCeiling || r.Worth > r.Ceiling {
			t.Errorf("worth %v, ceiling %v (%v)", r.Worth, r.Ceiling, r.HasCeiling)
		}
		if d := Verify(p, Dispatch(p)); d.Worth > r.Ceiling && len(d.MissingMusts) == 0 {
			t.Errorf("a dispatched plan is worth %v, ceiling %v", d.Worth, r.Ceiling)
		}
	})
}

// More work never raises the ceiling, and a few rounds bring it near.
func TestCeilingComesNear(t *testing.T) {
	p := generate(medium.with(3))
	var last Result
	_, err := Solve(context.Background(), p, Options{Rounds: 4, Progress: func(r Result) {
		if last.HasCeiling && r.Ceiling > last.Ceiling || r.Worth < last.Worth {
			t.Errorf("round %d: worth %v after %v, ceiling %v after %v", r.Rounds, r.Worth, last.Worth, r.Ceiling, last.Ceiling)
		}
		last = r
	}})
	if err != nil {
		t.Fatal(err)
	}
	if float64(last.Worth) < 0.93*float64(last.Ceiling) {
		t.Errorf("worth %v, ceiling %v", last.Worth, last.Ceiling)
	}
}

// The search plans at most so many slots of one job: where more are allowed its paths bound nothing.
func TestNoCeilingWhereSlotsWereLeftOut(t *testing.T) {
	p := generate(small.with(2))
	p.Jobs[3].MaxSlots = maxSlotsSearched + 1
	r := solve(t, p, Options{Rounds: 1})
	judged(t, p, r.Plan, r.Worth)
	if r.HasCeiling || r.Proven || r.Ceiling != 0 {
		t.Errorf("ceiling %v, proven %v", r.Ceiling, r.Proven)
	}
}
