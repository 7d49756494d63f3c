package sched

import (
	"context"
	"math/rand/v2"
	"slices"
	"testing"
)

// edited returns the tiny problem after a random edit.
func edited(was *Problem, plan Plan, r *rand.Rand) (string, *Problem) {
	now := *was
	now.Jobs, now.Nodes, now.Pins = slices.Clone(was.Jobs), slices.Clone(was.Nodes), slices.Clone(was.Pins)
	j := r.IntN(len(now.Jobs))
	kind := []string{"bar", "unbar", "window", "wider", "past", "worth", "slots", "pin", "unpin", "length", "must"}[r.IntN(11)]
	switch kind {
	case "bar":
		now.Jobs[j].Barred = true
	case "unbar":
		now.Jobs[j].Barred = false
	case "window", "wider":
		w := Window{Span: Span{To: now.Minutes}}
		if kind == "window" && len(was.Nodes[0].Open) > 0 {
			w = was.Nodes[0].Open[0]
			w.To = w.From + (w.To-w.From)/2
		}
		now.Nodes[0].Open = []Window{w}
	case "past":
		now.FromMin += 3
	case "worth":
		now.Jobs[j].Terms = slices.Clone(now.Jobs[j].Terms)
		now.Jobs[j].Terms[0].Scale *= Micro(1 + r.IntN(3))
		now.Jobs[j].Terms[0].Scale /= 2
	case "slots":
		now.Jobs[j].MaxSlots++
	case "pin":
		if len(plan.Slots) > 0 {
			now.Pins = plan.Slots[:1:1]
		}
	case "unpin":
		now.Pins = nil
	case "length":
		now.Jobs[j].MaxMin = now.Jobs[j].MinMin
	case "must":
		now.Jobs[j].Must = !now.Jobs[j].Must
	}
	return kind, &now
}

// bestOf is the worth of the best of all plans with the jobs that must be there; it is not known with pins.
func bestOf(p *Problem) (Micro, bool) {
	if len(p.Pins) > 0 {
		return 0, false
	}
	var musts []int
	for j := range p.Jobs {
		if p.Jobs[j].Must && !p.Jobs[j].Barred {
			musts = append(musts, j)
		}
	}
	best := bruteForce(p, musts...)
	return best, best >= 0
}

// What was learned changes how soon the best plan of an edited problem is found and proved, and nothing else: on tiny problems the
// plan is the best there is, and the ceiling is no less.
func TestLearnedPlansAreTheBest(t *testing.T) {
	proved, seeds := 0, uint64(30)
	if raced {
		seeds = 3
	}
	for seed := range seeds {
		was := tiny(seed)
		r := rand.New(rand.NewPCG(seed, 3))
		was.Jobs[r.IntN(len(was.Jobs))].Barred = r.IntN(3) == 0
		before := solve(t, was, Options{Rounds: 4})
		for range 3 { // what was learned is learned on
			kind, now := edited(was, before.Plan, r)
			if now.Check() != nil || now.checkPinsMeet() != nil {
				break
			}
			warm := before.Plan
			after := solve(t, now, Options{Warm: &warm, Learned: before.Learned})
			if len(now.Pins) == 0 { // a later edit may break a rule for a slot that was pinned
				judged(t, now, after.Plan, after.Worth)
			}
			if best, ok := bestOf(now); ok && (after.Worth != best || after.HasCeiling && best > after.Ceiling) {
				t.Fatalf("seed %d, %s: worth %v, best %v, ceiling %v", seed, kind, after.Worth, best, after.Ceiling)
			}
			if after.Proven {
				proved++
			}
			was, before = now, after
		}
	}
	if proved < 2*int(seeds) {
		t.Errorf("only %d plans were proved the best", proved)
	}
}

// Tables that were taken over say the same of every slot as those that are made anew.
func TestTablesTakenOver(t *testing.T) {
	for seed := range uint64(60) {
		p := generate(small.with(seed))
		old := newTables(p, nil, 1)
		r := rand.New(rand.NewPCG(seed, 4))
		for range 4 {
			_, q := edited(p, Plan{}, r)
			anew, over := newTables(q, nil, 1), newTables(q, old, 2)
			for i, n := range q.Nodes {
				j := q.Jobs[n.Job]
				for e := range anew.span {
					from := anew.winFrom[i*anew.span+e]
					if from != over.winFrom[i*anew.span+e] {
						t.Fatalf("seed %d, node %d, end %d: window from %d, taken over %d", seed, i, e, from, over.winFrom[i*anew.span+e])
					}
					if from == None || e%q.GridMin != 0 || !anew.chosen[n.Job] {
						continue
					}
					lengths := min(j.MaxMin, e-int(from)) - j.MinMin + 1
					if a, b := anew.rows[n.Job].row(e)[:lengths], over.rows[n.Job].row(e)[:lengths]; !slices.Equal(a, b) {
						t.Fatalf("seed %d, job %d, end %d: %v, taken over %v", seed, n.Job, e, a, b)
					}
				}
			}
			for j := range q.Jobs {
				if anew.best[j] > over.best[j] || anew.chosen[j] && !over.chosen[j] {
					t.Fatalf("seed %d, job %d: best %v and chosen %t, taken over %v and %t", seed, j, anew.best[j], anew.chosen[j], over.best[j], over.chosen[j])
				}
			}
			p, old = q, over
		}
	}
}

// The plan after an edit does not depend on the number of workers, nor on what was learned of another session.
func TestLearnedIsDeterministic(t *testing.T) {
	p := generate(small.with(3))
	before := solve(t, p, Options{Rounds: 6})
	_, q := edited(p, before.Plan, rand.New(rand.NewPCG(1, 1)))
	o := Options{Rounds: 6, Warm: &before.Plan, Learned: before.Learned}
	one := solve(t, q, o)
	o.Workers = 3
	if three := solve(t, q, o); !slices.Equal(one.Plan.Slots, three.Plan.Slots) || one.Ceiling != three.Ceiling || one.Work != three.Work {
		t.Errorf("one worker: %v under %v, three: %v under %v", one.Worth, one.Ceiling, three.Worth, three.Ceiling)
	}
	other := generate(medium.with(3))
	plain := solve(t, other, Options{Rounds: 2})
	foreign := solve(t, other, Options{Rounds: 2, Learned: before.Learned})
	if !slices.Equal(plain.Plan.Slots, foreign.Plan.Slots) || plain.Ceiling != foreign.Ceiling {
		t.Error("what was learned of another session made a difference")
	}
}

// A search that is stopped at once still leaves something to learn from.
func TestLearnedOfAStoppedSearch(t *testing.T) {
	p := generate(small.with(5))
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	r, err := Solve(ctx, p, Options{})
	if err == nil || r.Learned == nil {
		t.Fatal("nothing learned")
	}
	again := solve(t, p, Options{Warm: &r.Plan, Learned: r.Learned})
	if fresh := solve(t, p, Options{}); again.Worth != fresh.Worth {
		t.Errorf("worth %v, anew %v", again.Worth, fresh.Worth)
	}
}

// A session with other nodes is another session, even where jobs and slews are as many as before.
func TestLearnedOfOtherNodes(t *testing.T) {
	p := generate(small.with(7))
	fewer := *p
	fewer.Nodes = p.Nodes[:len(p.Nodes)-1]
	before := solve(t, &fewer, Options{Rounds: 2})
	plain, foreign := solve(t, p, Options{Rounds: 2}), solve(t, p, Options{Rounds: 2, Learned: before.Learned})
	if !slices.Equal(plain.Plan.Slots, foreign.Plan.Slots) || plain.Ceiling != foreign.Ceiling {
		t.Error("what was learned of another session made a difference")
	}
}

// A job that may have more slots than when it was last planned is not held to what routes remembered of it then.
func TestLearnedMemoriesDoNotForbidMoreSlots(t *testing.T) {
	remembered := 0
	for seed := range uint64(40) {
		p := generate(instance{sources: 10, minutes: 240, grid: 5, receivers: 1, seed: seed})
		before := solve(t, p, Options{Rounds: 12})
		more := *p
		more.Jobs = slices.Clone(p.Jobs)
		for j := range more.Jobs {
			if before.Learned.jobs[j].slots > 0 {
				more.Jobs[j].MaxSlots = 3
				remembered++
			}
		}
		fresh := solve(t, &more, Options{})
		after := solve(t, &more, Options{Learned: before.Learned})
		if after.HasCeiling && after.Ceiling < fresh.Worth {
			t.Errorf("seed %d: ceiling %v by what was learned, a plan worth %v", seed, after.Ceiling, fresh.Worth)
		}
	}
	if remembered == 0 {
		t.Error("nothing was remembered")
	}
}

// A price below zero is learned for a job that costs worth and must be there. When it need not be there any more, plans without
// it are bounded too.
func TestLearnedPricesOfAMustGoWithIt(t *testing.T) {
	below := 0
	for seed := range uint64(40) {
		p := generate(instance{sources: 10, minutes: 240, grid: 5, receivers: 1, calibrators: 3, seed: seed})
		for j := range p.Jobs {
			if p.Jobs[j].Must {
				p.Jobs[j].Terms[0].Scale = Unit / 1000
			}
		}
		before := solve(t, p, Options{Rounds: 12})
		for _, price := range before.Learned.prices {
			if price < 0 {
				below++
			}
		}
		free := *p
		free.Jobs = slices.Clone(p.Jobs)
		for j := range free.Jobs {
			free.Jobs[j].Must = false
		}
		fresh := solve(t, &free, Options{})
		after := solve(t, &free, Options{Learned: before.Learned, Rounds: 3})
		if after.HasCeiling && after.Ceiling < fresh.Worth {
			t.Errorf("seed %d: ceiling %v by what was learned, a plan worth %v", seed, after.Ceiling, fresh.Worth)
		}
	}
	if below == 0 {
		t.Error("no price is below zero")
	}
}
