package sched

import "testing"

// A slot that is worth nothing changes the receiver before the break, so that what follows the break begins in time.
func TestASlotWorthNothingIsOnTheWay(t *testing.T) {
	p := &Problem{Session: "way", Minutes: 20, GridMin: 1, OverheadSec: 60, Receivers: []Receiver{{"L", 60}, {"S", 240}}, Breaks: []Span{{10, 12}},
		Slew: SlewTable{Places: 3, BinMin: 20, Bins: 1, Sec: make([]uint16, 18)}}
	for j, open := range []Span{{1, 4}, {5, 10}, {12, 17}} {
		cum, curve := plainMinutes(20), Share
		if j == 1 {
			curve = Step
		}
		p.Jobs = append(p.Jobs, Job{Source: string(rune('a' + j)), Receiver: min(j, 1), MinMin: []int{3, 1, 4}[j], MaxMin: []int{3, 5, 4}[j], MaxSlots: 1,
			Terms: []Term{{Kind: Cadence, Scale: []Micro{Unit, 1000, 2 * Unit}[j], Curve: curve, Wanted: []int32{300, 900, 400}[j], Cum: cum}}})
		p.Nodes = append(p.Nodes, Node{Job: j, Place: j, Open: []Window{{Span: open}}})
	}
	if err := p.Check(); err != nil {
		t.Fatal(err)
	}
	r := solve(t, p, Options{Rounds: 6})
	if best := bruteForce(p); r.Worth != best || r.HasCeiling && r.Ceiling < best {
		t.Errorf("planned %d, ceiling %d, best of all plans %d: %v", r.Worth, r.Ceiling, best, r.Plan)
	}
}

// Around a pin that stands in a break the search does not see every plan, and claims nothing.
func TestNoCeilingAroundAPinInABreak(t *testing.T) {
	p := generate(medium.with(2))
	b := p.Breaks[0]
	for i, n := range p.Nodes {
		if len(n.Open) > 0 && n.Open[0].From < b.From-5 && n.Open[0].To > b.To+5 && p.Jobs[n.Job].MaxMin > 20 {
			p.Pins = []Slot{{Node: i, Start: b.From - 5, End: b.From + 15}}
			break
		}
	}
	if len(p.Pins) == 0 {
		t.Fatal("nothing can be pinned")
	}
	if r := solve(t, p, Options{Rounds: 4}); r.HasCeiling || r.Proven {
		t.Errorf("ceiling %v", r.Ceiling)
	}
}
