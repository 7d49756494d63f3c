package campaigns

import (
	"context"
	"slices"
	"testing"

	"example.org/tallystick/sched"
)

// A ceiling that was saved is known again for the same problem with the same pins, bars, grid and time past, and for no
// other.
func TestASavedCeilingIsKnownAgain(t *testing.T) {
	p, _ := firstSession()
	r, err := sched.Solve(context.Background(), p.Problem, sched.Options{Rounds: 2})
	if err != nil || !r.HasCeiling {
		t.Fatal(err, r.HasCeiling)
	}
	q := *p.Problem
	q.FromMin = r.Plan.Slots[2].Start + 1
	r.Plan.Slots[7].Pinned = true
	q.Pins = append(slices.Clone(r.Plan.Slots[:3]), r.Plan.Slots[7])
	whole, _ := sched.BoundOf(p.Problem, r)
	proved, ok := sched.CarryCeiling(whole, &q)
	if !ok {
		t.Fatal("the ceiling is not carried")
	}
	saved := func() *SavedPlan {
		s, complaints := decodePlan(string(p.Saved(r.Plan, proved, "test").encode()), "plan")
		if len(complaints) > 0 {
			t.Fatal(complaints)
		}
		return s
	}
	for _, c := range []struct {
		name   string
		change func(*SavedPlan)
		known  bool
	}{
		{"nothing", func(*SavedPlan) {}, true},
		{"a slot that is no pin", func(s *SavedPlan) { s.Slots[9].End = s.Slots[9].End.Add(-60e9) }, true},
		{"a pin is let go", func(s *SavedPlan) { s.Slots[7].Pinned = false }, false},
		{"a pin more", func(s *SavedPlan) { s.Slots[9].Pinned = true }, false},
		{"a pin is moved", func(s *SavedPlan) { s.Slots[7].Start = s.Slots[7].Start.Add(60e9) }, false},
		{"what had begun is gone", func(s *SavedPlan) { s.Slots = s.Slots[1:] }, false},
		{"a bar", func(s *SavedPlan) { s.Bars = []string{s.Slots[0].Source} }, false},
		{"another grid", func(s *SavedPlan) { s.GridMin = 5 }, false},
		{"another time past", func(s *SavedPlan) { s.ProvedFrom = s.ProvedFrom.Add(60e9) }, false},
		{"another ceiling", func(s *SavedPlan) { s.Ceiling -= 0.001 }, false},
		{"of before fingerprints", func(s *SavedPlan) { s.ProvedFor = "" }, false},
	} {
		s := saved()
		c.change(s)
		plan, lost := p.Bind(s)
		if len(lost) > 0 {
			t.Fatal(lost)
		}
		got, ok := p.Proved(s, plan)
		if ok != c.known || ok && got.Ceiling != r.Ceiling {
			t.Errorf("%s: known %v, ceiling %v of %v", c.name, ok, got.Ceiling, r.Ceiling)
		}
	}
}
