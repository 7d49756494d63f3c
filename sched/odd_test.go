package sched

import (
	"cmp"
	"context"
	"slices"
	"testing"

	"pgregory.net/rapid"
)

// Problems that no campaign makes but that Check accepts: windows and breaks that reach out of the session
// or touch, breaks of no length, pins in breaks and below the limits, no overhead at all.
func TestOddProblemsAreAnswered(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := tiny(rapid.Uint64().Draw(t, "seed"))
		minute := rapid.IntRange(-10, p.Minutes+10)
		span := func(name string) Span {
			a, b := minute.Draw(t, name), minute.Draw(t, name)
			return Span{min(a, b), max(a, b)}
		}
		if rapid.Bool().Draw(t, "no overhead") {
			p.OverheadSec = 0
		}
		if rapid.Bool().Draw(t, "no slew") {
			clear(p.Slew.Sec)
		}
		p.Breaks = nil
		for range rapid.IntRange(0, 2).Draw(t, "breaks") {
			p.Breaks = append(p.Breaks, span("break"))
		}
		slices.SortFunc(p.Breaks, func(a, b Span) int { return cmp.Or(a.From-b.From, a.To-b.To) })
		p.Slew.Sec = append(p.Slew.Sec, make([]uint16, 2*p.Slew.Places*p.Slew.Places)...)
		p.Slew.Sec = p.Slew.Sec[:(p.Slew.Bins+len(p.Breaks))*p.Slew.Places*p.Slew.Places]
		for i := range p.Nodes {
			p.Nodes[i].Open = []Window{{Span: span("window")}}
		}
		for range rapid.IntRange(0, 2).Draw(t, "pins") {
			start := rapid.IntRange(0, p.Minutes-1).Draw(t, "pin")
			end := min(p.Minutes, start+rapid.IntRange(1, 10).Draw(t, "length"))
			p.Pins = append(p.Pins, Slot{Node: rapid.IntRange(0, len(p.Nodes)-1).Draw(t, "node"), Start: start, End: end})
		}
		slices.SortFunc(p.Pins, compareSlots)
		p.FromMin = minute.Draw(t, "from")
		p.Jobs[0].Must = rapid.Bool().Draw(t, "must")
		if p.Check() != nil {
			return
		}
		r, err := Solve(context.Background(), p, Options{Rounds: 1})
		if err != nil {
			return
		}
		v := Verify(p, r.Plan)
		for _, b := range v.Breaches {
			if !p.concernsPin(r.Plan, b) {
				t.Errorf("%+v breaks %s: %s", r.Plan.Slots[b.Slot], b.Rule, b.Text)
			}
		}
		if v.Worth != r.Worth || r.HasCeiling && r.Worth > r.Ceiling {
			t.Errorf("worth %d, found %d, ceiling %d", r.Worth, v.Worth, r.Ceiling)
		}
		explained(t, p, r.Plan)
		Candidates(p, r.Plan, minute.Draw(t, "at"))
		again, err := Solve(context.Background(), p, Options{Rounds: -1, Warm: &r.Plan})
		if err != nil || again.Worth < r.Worth && len(v.MissingMusts) == 0 && len(v.Breaches) == 0 {
			t.Errorf("from its own plan of %v: %v, %v", r.Worth, again.Worth, err)
		}
	})
}

// concernsPin tells whether the breach is one that pins make by themselves.
func (p *Problem) concernsPin(plan Plan, b Breach) bool {
	return plan.Slots[b.Slot].Pinned && (b.Other == None || plan.Slots[b.Other].Pinned) && b.Rule != RulePin
}
