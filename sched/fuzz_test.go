package sched

import (
	"context"
	"encoding/json"
	"testing"
)

// A problem that passes Check makes nobody panic, and its plan breaks no rule that its pins leave whole.
func FuzzProblem(f *testing.F) {
	for seed := range uint64(6) {
		text, err := json.Marshal(tiny(seed))
		if err != nil {
			f.Fatal(err)
		}
		f.Add(text)
	}
	text, err := json.Marshal(twoSources())
	if err != nil {
		f.Fatal(err)
	}
	f.Add(text)
	f.Fuzz(func(t *testing.T, text []byte) {
		var p Problem
		if json.Unmarshal(text, &p) != nil || p.Check() != nil {
			return
		}
		if p.Minutes > 300 || len(p.Jobs) > 20 {
			return // sound, but slow here
		}
		r, err := Solve(context.Background(), &p, Options{Rounds: 1})
		if err != nil {
			return
		}
		v := Verify(&p, r.Plan)
		if len(p.Pins) == 0 && len(v.Breaches) > 0 {
			t.Fatalf("breaches %+v", v.Breaches)
		}
		if v.Worth != r.Worth || r.HasCeiling && r.Worth > r.Ceiling {
			t.Fatalf("worth %d, found %d, ceiling %d", r.Worth, v.Worth, r.Ceiling)
		}
		LeftOut(&p, r.Plan)
		Candidates(&p, r.Plan, p.Minutes/2)
		for i := range r.Plan.Slots {
			Explain(&p, r.Plan, i)
		}
	})
}
