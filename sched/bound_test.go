package sched

import (
	"context"
	"testing"
)

// A job that must be there and can have no slot in this session does not make a ceiling say more than was proved: of
// all plans it bounds at least those that keep the limits and that it is said to hold of.
func TestCeilingBesideAMustThatCannotBe(t *testing.T) {
	held, complete := 0, 0
	for seed := range uint64(400) {
		p, r := tinyToEdit(seed)
		never := r.IntN(len(p.Jobs))
		for i := range p.Nodes {
			if p.Nodes[i].Job == never {
				p.Nodes[i].Open = nil
			}
		}
		p.Jobs[never].Must, p.Jobs[never].Barred, p.Pins = true, false, nil
		other := (never + 1) % len(p.Jobs)
		p.Jobs[other].Must, p.Jobs[other].Barred = true, false
		p.Jobs[other].Terms[0].Scale /= 1000 // so that the best plan is without it, if it may be
		solved, err := Solve(context.Background(), p, Options{Rounds: 8})
		if err != nil {
			t.Fatal(err)
		}
		bound, ok := BoundOf(p, solved)
		if !ok {
			continue
		}
		held++
		if best := bestAround(p, bound.Complete); best > bound.Ceiling {
			t.Errorf("seed %d: ceiling %d, complete %t, best of all plans %d", seed, bound.Ceiling, bound.Complete, best)
		}
		if bound.Complete {
			complete++
			if !bound.Holds(solved.Plan) {
				t.Errorf("seed %d: the ceiling does not hold of its own plan", seed)
			}
		}
	}
	if held < 100 || complete == 0 {
		t.Errorf("%d ceilings, %d of complete plans", held, complete)
	}
}
