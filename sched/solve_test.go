package sched

import (
	"context"
	"testing"
)

func solve(t testing.TB, p *Problem, o Options) Result {
	t.Helper()
	r, err := Solve(context.Background(), p, o)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// judged fails the test if the plan breaks a rule or does not add up to the worth it claims.
func judged(t testing.TB, p *Problem, plan Plan, worth Micro) {
	t.Helper()
	v := Verify(p, plan)
	for _, b := range v.Breaches {
		t.Errorf("slot %d breaks %s: %s", b.Slot, b.Rule, b.Text)
	}
	if v.Worth != worth {
		t.Errorf("worth %d claimed, %d found", worth, v.Worth)
	}
}

// Taking the best source at each moment loses a fifth to a third of what these sessions can bring.
func TestSolveBeatsDispatch(t *testing.T) {
	var planned, dispatched Micro
	for seeds, in := range []instance{medium, small} {
		for seed := range uint64(2 * (seeds + 1)) {
			p := generate(in.with(seed))
			r := solve(t, p, Options{Rounds: 1})
			judged(t, p, r.Plan, r.Worth)
			if v := Verify(p, r.Plan); len(v.MissingMusts) > 0 {
				t.Errorf("%d sources, seed %d: musts %v missing", in.sources, seed, v.MissingMusts)
			}
			d := Dispatch(p)
			judged(t, p, d, p.PlanWorth(d))
			if r.Worth < p.PlanWorth(d) {
				t.Errorf("%d sources, seed %d: planned %v, dispatched %v", in.sources, seed, r.Worth, p.PlanWorth(d))
			}
			planned += r.Worth
			dispatched += p.PlanWorth(d)
		}
	}
	if float64(planned) < 1.2*float64(dispatched) {
		t.Errorf("planned %v in all, dispatched %v: less than a fifth more", planned, dispatched)
	}
}
