package sched

import (
	"context"
	"fmt"
	"slices"
	"testing"
	"time"
)

// edits returns what an observer does to a plan at night, each as the problem that it leaves behind: the source
// in the middle of the plan is barred, or its slot is pinned ten minutes later, or its window closes before the slot
// ends; half an hour is lost after a third of the plan; the source that is left out and could bring the most counts
// three times as much.
func edits(p *Problem, plan Plan) (problems []*Problem) {
	add := func(change func(q *Problem)) {
		q := *p
		q.Jobs, q.Nodes, q.Pins = slices.Clone(p.Jobs), slices.Clone(p.Nodes), slices.Clone(p.Pins)
		change(&q)
		if q.Check() == nil && q.checkPinsMeet() == nil {
			problems = append(problems, &q)
		}
	}
	middle := len(plan.Slots) / 2
	for middle < len(plan.Slots)-1 && (plan.Slots[middle].Pinned || p.Jobs[p.Nodes[plan.Slots[middle].Node].Job].Must) {
		middle++
	}
	slot := plan.Slots[middle]
	add(func(q *Problem) { q.Jobs[q.Nodes[slot.Node].Job].Barred = true })
	add(func(q *Problem) {
		slot.Pinned = true
		slot.End += 10
		slot.Start += 10
		q.Pins = append(q.Pins, slot)
		slices.SortFunc(q.Pins, compareSlots)
	})
	add(func(q *Problem) {
		at := plan.Slots[len(plan.Slots)/3]
		q.FromMin = at.End + 30
		q.Pins = nil
		for _, s := range plan.Slots {
			if s.Start < q.FromMin && s.End <= at.End {
				s.Pinned = true
				q.Pins = append(q.Pins, s)
			} else if s.Pinned && s.Start >= q.FromMin {
				q.Pins = append(q.Pins, s)
			}
		}
	})
	in := make([]bool, len(p.Jobs))
	for _, s := range plan.Slots {
		in[p.Nodes[s.Node].Job] = true
	}
	best := None
	for j := range p.Jobs {
		if !in[j] && (best == None || p.bestSlotWorth(j) > p.bestSlotWorth(best)) {
			best = j
		}
	}
	if best != None && p.bestSlotWorth(best) > 0 {
		add(func(q *Problem) {
			q.Jobs[best].Terms = slices.Clone(q.Jobs[best].Terms)
			for i := range q.Jobs[best].Terms {
				q.Jobs[best].Terms[i].Scale *= 3
			}
		})
	}
	add(func(q *Problem) {
		n := &q.Nodes[slot.Node]
		n.Open = slices.Clone(n.Open)
		for i := range n.Open {
			n.Open[i].To = min(n.Open[i].To, slot.End-10)
		}
		if n.Open[0].To <= n.Open[0].From {
			n.Open = nil
		}
	})
	return problems
}

// BenchmarkEdits plans each session of the set, makes each kind of edit, plans again on two cores, and prints for each
// class the median time to the first new plan, and how far the plans after 40 and 300 ms are below what a
// long run makes of them: median and worst. Run it with -benchtime 1x.
func BenchmarkEdits(b *testing.B) {
	for _, c := range classes {
		b.Run(c.name, func(b *testing.B) {
			for b.Loop() {
				reportEdits(b, c.sessions())
			}
		})
	}
}

func reportEdits(b *testing.B, problems []*Problem) {
	const long = 4 * StepsPerSecond
	marks := []time.Duration{40 * time.Millisecond, 300 * time.Millisecond}
	var first []float64
	below := make([][]float64, len(marks))
	for _, p := range problems {
		before, err := Solve(context.Background(), p, Options{Work: long, Workers: 2})
		if err != nil {
			b.Fatal(err)
		}
		for _, q := range edits(p, before.Plan) {
			at := make([]Result, len(marks))
			ctx, cancel := context.WithTimeout(context.Background(), marks[len(marks)-1])
			began := time.Now()
			last, _ := Solve(ctx, q, Options{Work: 1 << 60, Workers: 2, Warm: &before.Plan, Learned: before.Learned, Progress: func(r Result) {
				if r.Rounds == 0 {
					first = append(first, 1000*time.Since(began).Seconds())
				}
				for m := range at {
					if r.Rounds == 0 || time.Since(began) <= marks[m] {
						at[m] = r
					}
				}
			}})
			cancel()
			best, _ := Solve(context.Background(), q, Options{Work: long, Workers: 2, Warm: &last.Plan, Learned: last.Learned})
			for m := range at {
				below[m] = append(below[m], 100*(1-float64(at[m].Worth)/float64(best.Worth)))
			}
		}
	}
	b.ReportMetric(0, "ns/op")
	b.ReportMetric(median(first), "ms-first")
	for m, mark := range marks {
		b.ReportMetric(median(below[m]), fmt.Sprintf("%%-below-%v", mark))
		b.ReportMetric(slices.Max(below[m]), fmt.Sprintf("%%-worst-%v", mark))
	}
}
