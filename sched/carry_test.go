package sched

import (
	"cmp"
	"context"
	"fmt"
	"math/rand/v2"
	"slices"
	"testing"
)

// bestAround returns the worth of the best plan around the problem's pins by trying every sequence of slots, whatever
// limits the pins break; below zero if there is none. If complete, only plans with every job that must be there count.
func bestAround(p *Problem, complete bool) Micro {
	count := make([]int, len(p.Jobs))
	var pins Micro
	for _, s := range p.Pins {
		count[p.Nodes[s.Node].Job]++
		pins += p.JobWorth(p.Nodes[s.Node].Job, s.Start, s.End)
	}
	best := Micro(-1)
	var extend func(from, end int, fixed bool, next int, sum Micro)
	extend = func(from, end int, fixed bool, next int, sum Micro) {
		until := p.Minutes
		if next == len(p.Pins) {
			lacks := false
			for j := range p.Jobs {
				lacks = lacks || p.mustHave(j) && count[j] == 0
			}
			if !complete || !lacks {
				best = max(best, sum)
			}
		} else {
			pin := p.Pins[next]
			until = pin.Start
			if fixed || end <= pin.Start && pin.Start >= p.SetupBetween(from, end, pin.Node, pin.Start).ReadyMin {
				extend(pin.Node, pin.End, true, next+1, sum)
			}
		}
		for node, n := range p.Nodes {
			j := &p.Jobs[n.Job]
			if j.Barred || count[n.Job] >= j.MaxSlots {
				continue
			}
			for start := max(end, p.FromMin); start < until; start++ {
				if start < p.SetupBetween(from, end, node, start).ReadyMin {
					continue
				}
				for stop := start + j.MinMin; stop <= min(until, start+j.MaxMin); stop++ {
					if stop%p.GridMin != 0 || !openFor(p, node, start, stop) {
						continue
					}
					count[n.Job]++
					extend(node, stop, false, next, sum+p.JobWorth(n.Job, start, stop))
					count[n.Job]--
				}
			}
		}
	}
	extend(None, 0, true, 0, pins)
	return best
}

// copied shares nothing that an edit changes.
func (p *Problem) copied() *Problem {
	q := *p
	q.Jobs, q.Nodes, q.Pins = slices.Clone(p.Jobs), slices.Clone(p.Nodes), slices.Clone(p.Pins)
	return &q
}

func (p *Problem) pin(s Slot) {
	s.Pinned = true
	p.Pins = append(p.Pins, s)
	slices.SortFunc(p.Pins, compareSlots)
}

// tinyEdits are what may happen to a tiny problem.
var tinyEdits = map[string]func(r *rand.Rand, p *Problem, plan Plan){
	"bar": func(r *rand.Rand, p *Problem, _ Plan) { p.Jobs[r.IntN(len(p.Jobs))].Barred = true },
	"unbar": func(_ *rand.Rand, p *Problem, _ Plan) {
		for j := range p.Jobs {
			p.Jobs[j].Barred = false
		}
	},
	"window": func(r *rand.Rand, p *Problem, _ Plan) {
		n := &p.Nodes[r.IntN(len(p.Nodes))]
		if len(n.Open) == 0 {
			return
		}
		w := n.Open[0]
		w.To = w.From + (w.To-w.From)/2
		n.Open = []Window{w}
	},
	"closed": func(r *rand.Rand, p *Problem, _ Plan) { p.Nodes[r.IntN(len(p.Nodes))].Open = nil },
	"must":   func(r *rand.Rand, p *Problem, _ Plan) { j := &p.Jobs[r.IntN(len(p.Jobs))]; j.Must = !j.Must },
	"later":  func(r *rand.Rand, p *Problem, _ Plan) { p.FromMin += r.IntN(p.Minutes) },
	"past":   func(r *rand.Rand, p *Problem, _ Plan) { p.FromMin += 1 + r.IntN(4) },
	"begun": func(r *rand.Rand, p *Problem, plan Plan) {
		p.FromMin += r.IntN(10)
		for _, s := range plan.Slots {
			if s.Start < p.FromMin && !slices.ContainsFunc(p.Pins, s.same) {
				p.pin(s)
			}
		}
	},
	"worth": func(r *rand.Rand, p *Problem, _ Plan) {
		j := &p.Jobs[r.IntN(len(p.Jobs))]
		j.Terms = slices.Clone(j.Terms)
		j.Terms[0].Scale = Micro(float64(j.Terms[0].Scale) * (0.2 + 2*r.Float64()))
	},
	"slots":  func(r *rand.Rand, p *Problem, _ Plan) { p.Jobs[r.IntN(len(p.Jobs))].MaxSlots++ },
	"length": func(r *rand.Rand, p *Problem, _ Plan) { j := &p.Jobs[r.IntN(len(p.Jobs))]; j.MaxMin = j.MinMin },
	"pin": func(r *rand.Rand, p *Problem, plan Plan) {
		if len(plan.Slots) > 0 {
			if s := plan.Slots[r.IntN(len(plan.Slots))]; !slices.ContainsFunc(p.Pins, s.same) {
				p.pin(s)
			}
		}
	},
	"unpin": func(r *rand.Rand, p *Problem, _ Plan) {
		if len(p.Pins) > 0 {
			i := r.IntN(len(p.Pins))
			p.Pins = slices.Delete(p.Pins, i, i+1)
		}
	},
	"move": func(r *rand.Rand, p *Problem, plan Plan) { // breaks limits more often than not
		if len(plan.Slots) > 0 {
			s := plan.Slots[r.IntN(len(plan.Slots))]
			p.Pins = slices.DeleteFunc(p.Pins, s.same)
			moved, at := MoveSlot(p, plan, slices.IndexFunc(plan.Slots, s.same), r.IntN(9)-4)
			if r.IntN(2) == 0 {
				moved, at = StretchStart(p, moved, at, -r.IntN(4))
			}
			p.pin(moved.Slots[at])
		}
	},
	"anywhere": func(r *rand.Rand, p *Problem, _ Plan) {
		start := r.IntN(p.Minutes - 2)
		p.pin(Slot{Node: r.IntN(len(p.Nodes)), Start: start, End: min(p.Minutes, start+1+r.IntN(7))})
	},
}

func tinyKinds() []string {
	var kinds []string
	for kind := range tinyEdits {
		kinds = append(kinds, kind)
	}
	slices.SortFunc(kinds, cmp.Compare[string])
	return kinds
}

// tinyToEdit is a tiny problem with musts, bars and pins, of slews that are alike as often as not, so that jobs can be
// left out.
func tinyToEdit(seed uint64) (*Problem, *rand.Rand) {
	p := tiny(seed)
	r := rand.New(rand.NewPCG(seed, 77))
	if r.IntN(2) == 0 {
		p.Breaks, p.Slew.Sec = nil, p.Slew.Sec[:p.Slew.Bins*p.Slew.Places*p.Slew.Places]
	}
	switch r.IntN(4) {
	case 0:
		for i := range p.Slew.Sec {
			p.Slew.Sec[i] = 60
		}
	case 1: // as on a line, with longest ways of some minutes
		n := p.Slew.Places
		for i := range p.Slew.Sec {
			a, b := i/n%n, i%n
			p.Slew.Sec[i] = uint16(60 * max(a-b, b-a))
		}
	case 2: // there and back is no way to reckon
		for i := range p.Slew.Sec {
			p.Slew.Sec[i] = uint16(r.IntN(4) * r.IntN(200))
		}
	}
	p.Jobs[r.IntN(len(p.Jobs))].Must = r.IntN(3) == 0
	if j := &p.Jobs[r.IntN(len(p.Jobs))]; r.IntN(2) == 0 {
		j.Barred = true
		j.Terms[0].Scale /= Micro([]int{1, 1000}[r.IntN(2)]) // where it brings little, it must not open ways either
	}
	if r.IntN(3) == 0 {
		tinyEdits["anywhere"](r, p, Plan{})
	}
	return p, r
}

// After any edits a ceiling that is carried over is one: no plan of a tiny problem around its pins is worth more.
func TestCarriedCeilingHolds(t *testing.T) {
	kinds := tinyKinds()
	carried, breaks := map[string]int{}, map[string]int{}
	problems := uint64(6000)
	if testing.Short() || raced {
		problems = 500
	}
	for seed := range problems {
		was, r := tinyToEdit(seed)
		solved, err := Solve(context.Background(), was, Options{Rounds: -1})
		if err != nil {
			continue
		}
		// No ceiling is lower than the best plan, and none puts what is carried over to a harder test.
		bound := Bound{Of: was, Complete: r.IntN(2) == 0}
		if bound.Ceiling = bestAround(was, bound.Complete); bound.Ceiling < 0 {
			continue
		}
		now, first, did := was.copied(), bound, ""
		for n := 1 + r.IntN(3); n > 0; n-- {
			kind := kinds[r.IntN(len(kinds))]
			tinyEdits[kind](r, now, solved.Plan)
			did += " " + kind
			if now.Check() != nil {
				break
			}
			if did == " "+kind {
				if _, ok := CarryCeiling(bound, now); ok {
					carried[kind]++
					if len(was.Breaks) > 0 {
						breaks[kind]++
					}
				}
			}
			for i, b := range []Bound{first, bound} { // at once, and edit by edit
				got, ok := CarryCeiling(b, now)
				if !ok {
					continue
				}
				if best := bestAround(now, got.Complete); best > got.Ceiling {
					t.Errorf("seed %d,%s: ceiling %d carried from %d (%d), best of all plans %d", seed, did, got.Ceiling, b.Ceiling, i, best)
				}
				if i == 1 {
					bound = got
				}
			}
			if bound.Of == was {
				bound = first
			}
			now = now.copied()
		}
	}
	t.Log(carried, breaks)
	for _, kind := range kinds {
		if carried[kind] == 0 || breaks[kind] == 0 {
			t.Errorf("no ceiling was carried over: %s", kind)
		}
	}
}

// What is worth more than the ceiling is never among the plans that it is said to hold of.
func TestCeilingHoldsOfPlansBelowIt(t *testing.T) {
	above, below := 0, 0
	for seed := range uint64(600) {
		was, r := tinyToEdit(seed)
		solved, err := Solve(context.Background(), was, Options{Rounds: 4})
		if err != nil {
			continue
		}
		bound, ok := BoundOf(was, solved)
		if !ok {
			continue
		}
		for range 20 {
			plan := solved.Plan.Clone()
			for range 1 + r.IntN(3) {
				s := Slot{Node: r.IntN(len(was.Nodes)), Start: r.IntN(was.Minutes - 2)}
				s.End = min(was.Minutes, s.Start+1+r.IntN(8))
				plan.Slots = append(plan.Slots, s)
				if r.IntN(2) == 0 {
					plan, _ = Drop(plan, r.IntN(len(plan.Slots)))
				}
			}
			plan = plan.Sorted()
			worth := was.PlanWorth(plan)
			switch {
			case worth > bound.Ceiling && bound.Holds(plan):
				t.Errorf("seed %d: ceiling %d of a plan worth %d: %v", seed, bound.Ceiling, worth, plan)
			case worth > bound.Ceiling:
				above++
			case bound.Holds(plan):
				below++
			}
		}
	}
	if above == 0 || below == 0 {
		t.Errorf("%d plans above, %d below", above, below)
	}
}

func TestCeilingIsNotCarried(t *testing.T) {
	base := func() *Problem {
		p := generate(small.with(1))
		p.GridMin = 2
		p.Pins = Dispatch(p).Slots[:2]
		return p
	}
	edits := map[string]func(*Problem){
		"a pin is gone":     func(p *Problem) { p.Pins = p.Pins[:1] },
		"a must is barred":  func(p *Problem) { p.Jobs[0].Barred = true },
		"a window opens":    func(p *Problem) { p.Nodes[5].Open = []Window{{Span: Span{0, p.Minutes}}} },
		"another grid":      func(p *Problem) { p.GridMin = 7 },
		"slews are quicker": func(p *Problem) { p.Slew.Sec[3]-- },
		"longer slots":      func(p *Problem) { p.Jobs[2].MaxMin++ },
		"pins overlap":      func(p *Problem) { s := p.Pins[1]; s.Node++; p.Pins = append(p.Pins, s) },
		"time comes back":   func(p *Problem) { p.FromMin = 0 },
	}
	for name, edit := range edits {
		was, now := base(), base()
		was.FromMin, now.FromMin = 5, 5
		bound := Bound{Of: was, Ceiling: 100 * Unit, Complete: true}
		if _, ok := CarryCeiling(bound, now); !ok {
			t.Fatal("the same problem loses its ceiling")
		}
		edit(now)
		if c, ok := CarryCeiling(bound, now); ok {
			t.Errorf("%s: ceiling %v", name, c.Ceiling)
		}
	}
}

// What the edits of an observer do to a ceiling, in numbers.
func TestCarriedCeilingInNumbers(t *testing.T) {
	free := generate(small.with(1))
	plan := Dispatch(free)
	bound := Bound{Of: free, Ceiling: 100 * Unit}
	jobOf := func(s Slot) int { return free.Nodes[s.Node].Job }
	first := plan.Slots[slices.IndexFunc(plan.Slots, func(s Slot) bool { return free.Nodes[s.Node].Open[0].From > 5 })]
	carry := func(bound Bound, edit func(*Problem)) string {
		now := free.copied()
		edit(now)
		got, ok := CarryCeiling(bound, now)
		if !ok {
			return "none"
		}
		return fmt.Sprint(got.Ceiling - bound.Ceiling)
	}
	early := first
	early.Start = free.Nodes[first.Node].Open[0].From - 1
	early.End = early.Start + 1 + free.Jobs[jobOf(first)].MaxMin
	lost := free.JobWorth(jobOf(first), early.Start, early.End) - free.JobWorth(jobOf(first), early.Start+1, early.End)
	barred := free.copied()
	barred.Jobs[3].Barred = true
	short := first
	short.End = short.Start + free.Jobs[jobOf(first)].MinMin - 1
	for _, c := range []struct {
		name      string
		got, want string
	}{
		{"a slot of the plan is pinned", carry(bound, func(p *Problem) { p.pin(first) }), "0.00"},
		{"a source is barred", carry(bound, func(p *Problem) { p.Jobs[3].Barred = true }), "0.00"},
		{"a bar is lifted", carry(Bound{Of: barred, Ceiling: 100 * Unit}, func(*Problem) {}), fmt.Sprint(free.bestSlotWorth(3))},
		{"a pin begins a minute too soon", carry(bound, func(p *Problem) { p.pin(early) }), fmt.Sprint(lost)},
		{"a pin is too short", carry(bound, func(p *Problem) { p.pin(short) }), fmt.Sprint(free.JobWorth(jobOf(short), short.Start, short.End))},
	} {
		if c.got != c.want {
			t.Errorf("%s: the ceiling rises by %s, want %s", c.name, c.got, c.want)
		}
	}
}

// A source that brings next to nothing may still lie on the way between two others: where the way past it is longer
// than the way by it, or where the telescope stands on it in a break.
func TestASourceOnTheWay(t *testing.T) {
	problem := func(brk []Span) *Problem {
		p := &Problem{Session: "way", Minutes: 24, GridMin: 1, Receivers: []Receiver{{"L", 0}}, Breaks: brk,
			Slew: SlewTable{Places: 3, BinMin: 24, Bins: 1}}
		for j, open := range []Span{{0, 4}, {5, 9}, {11, 16}} {
			scale := Unit
			if j == 1 {
				scale = 1
			}
			p.Jobs = append(p.Jobs, Job{Source: string(rune('a' + j)), MinMin: 4, MaxMin: 4, MaxSlots: 1, Barred: j == 1,
				Terms: []Term{{Kind: Cadence, Scale: scale, Curve: Share, Wanted: 400, Cum: plainMinutes(24)}}})
			p.Nodes = append(p.Nodes, Node{Job: j, Place: j, Open: []Window{{Span: open}}})
		}
		for range brk {
			p.Slew.Sec = append(p.Slew.Sec, 0, 60, 60, 60, 0, 60, 60, 60, 0)
		}
		p.Slew.Sec = append(p.Slew.Sec, 0, 60, 900, 60, 0, 60, 900, 60, 0) // from a to c takes a quarter of an hour
		return p
	}
	for name, brk := range map[string][]Span{"none": nil, "a break": {{9, 10}}} {
		was := problem(brk)
		now := was.copied()
		now.Jobs[1].Barred = false
		bound := Bound{Of: was, Ceiling: bestAround(was, false)}
		best := bestAround(now, false)
		if bound.Ceiling+now.bestSlotWorth(1) >= best {
			t.Fatalf("%s: not on the way: %d, then %d", name, bound.Ceiling, best)
		}
		got, ok := CarryCeiling(bound, now)
		if ok && got.Ceiling < best || ok != (brk != nil) {
			t.Errorf("%s: ceiling %d (%v) where the best plan is worth %d", name, got.Ceiling, ok, best)
		}
		bound.Complete, was.Jobs[2].Must, now.Jobs[2].Must = true, true, true
		if _, ok := CarryCeiling(bound, now); ok {
			t.Errorf("%s: what must be there was taken out", name)
		}
	}
}

// BenchmarkCarryCeiling is a ceiling carried over edits of a session of 15 hours with 120 sources.
func BenchmarkCarryCeiling(b *testing.B) {
	was := generate(instance{sources: 120, minutes: 900, grid: 1, receivers: 2, breaks: 1, calibrators: 2, long: 4, seed: 1})
	plan := Dispatch(was)
	bound, _ := BoundOf(was, Result{Ceiling: 100 * Unit, HasCeiling: true})
	bound.Complete = false
	begun := was.copied()
	begun.FromMin = 600
	for _, s := range plan.Slots {
		if s.Start < 600 {
			begun.pin(s)
		}
	}
	barred := was.copied()
	barred.Jobs[40].Barred = true
	without := bound
	without.Of = barred
	broken := was.copied()
	s := plan.Slots[3]
	s.End = s.Start + 1
	broken.pin(s)
	for _, c := range []struct {
		name  string
		bound Bound
		now   *Problem
	}{{"bar", bound, barred}, {"unbar", without, was}, {"begun", bound, begun}, {"broken", bound, broken}} {
		b.Run(c.name, func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				CarryCeiling(c.bound, c.now)
			}
			if _, ok := CarryCeiling(c.bound, c.now); !ok {
				b.Fatal("not carried")
			}
		})
	}
}
