package sched

import (
	"context"
	"fmt"
	"runtime"
	"slices"
	"testing"
	"time"
)

// A class of the benchmark set: five sessions of one size.
type class struct {
	name string
	base instance
}

var classes = []class{
	{"small", small},
	{"medium", medium},
	{"large", large},
	{"xl", instance{sources: 120, minutes: 900, grid: 1, receivers: 2, breaks: 1, calibrators: 2, long: 4}},
}

// sessions makes the class's five: as it is; with pins; two receivers everywhere and no break; many long slots;
// and twice as many sources for the time, which is far over-subscribed.
func (c class) sessions() []*Problem {
	in := c.base
	plain := generate(in.with(11))
	pins := generate(in.with(12))
	slots := Dispatch(pins).Slots
	for i := 2; i < len(slots); i += 5 {
		pins.Pins = append(pins.Pins, slots[i])
	}
	two := in
	two.receivers, two.breaks = 2, 0
	long := in
	long.long = in.sources / 5
	crowded := in
	crowded.minutes = in.minutes / 2
	return []*Problem{plain, pins, generate(two.with(13)), generate(long.with(14)), generate(crowded.with(15))}
}

// BenchmarkSet plans the set on two cores and prints for each class the median time to the first plan, the
// median and worst certified distance after 0.3, 1 and 5 s, how much more the plan is worth than a dispatched one, and the
// most memory that the search had in use after a round, garbage included. Run it with -benchtime 1x.
func BenchmarkSet(b *testing.B) {
	for _, c := range classes {
		b.Run(c.name, func(b *testing.B) {
			for b.Loop() {
				report(b, c.sessions())
			}
		})
	}
}

func report(b *testing.B, problems []*Problem) {
	marks := []time.Duration{300 * time.Millisecond, time.Second, 5 * time.Second}
	var first, gain, memory []float64
	distance := make([][]float64, len(marks))
	for _, p := range problems {
		var m runtime.MemStats
		runtime.GC()
		runtime.ReadMemStats(&m)
		before, peak := m.HeapAlloc, m.HeapAlloc
		ctx, cancel := context.WithTimeout(context.Background(), marks[len(marks)-1])
		began := time.Now()
		var last Result
		passed := 0
		note := func(r Result) {
			runtime.ReadMemStats(&m)
			peak = max(peak, m.HeapAlloc)
			if r.Rounds == 0 {
				first = append(first, 1000*time.Since(began).Seconds())
			}
			for passed < len(marks) && time.Since(began) > marks[passed] {
				distance[passed] = append(distance[passed], last.distance())
				passed++
			}
			last = r
		}
		r, _ := Solve(ctx, p, Options{Work: 1 << 60, Workers: 2, Progress: note})
		cancel()
		for ; passed < len(marks); passed++ {
			distance[passed] = append(distance[passed], r.distance())
		}
		memory = append(memory, float64(peak-before)/1e6)
		gain = append(gain, 100*(float64(r.Worth)/float64(p.PlanWorth(Dispatch(p)))-1))
	}
	b.ReportMetric(0, "ns/op")
	b.ReportMetric(median(first), "ms-first")
	for i, mark := range marks {
		b.ReportMetric(median(distance[i]), fmt.Sprintf("%%-off-%.1fs", mark.Seconds()))
		b.ReportMetric(slices.Max(distance[i]), fmt.Sprintf("%%-worst-%.1fs", mark.Seconds()))
	}
	b.ReportMetric(median(gain), "%-over-dispatched")
	b.ReportMetric(slices.Max(memory), "MB")
}

// distance is how far the plan can be from the best, in percent; 100 without a ceiling.
func (r Result) distance() float64 {
	if !r.HasCeiling {
		return 100
	}
	return 100 * (1 - float64(r.Worth)/float64(r.Ceiling))
}

func median(v []float64) float64 {
	s := slices.Sorted(slices.Values(v))
	return s[len(s)/2]
}

// The sessions of the set are what their classes say, and are planned by the rules.
func TestSetIsPlannedByTheRules(t *testing.T) {
	for _, c := range classes[:2] {
		for i, p := range c.sessions()[1:4] {
			if err := p.Check(); err != nil {
				t.Fatal(err)
			}
			r := solve(t, p, Options{Rounds: 1})
			v := Verify(p, r.Plan)
			if len(v.Breaches) > 0 || v.Worth != r.Worth || r.HasCeiling && r.Worth > r.Ceiling {
				t.Errorf("%s %d: worth %v, ceiling %v, %v", c.name, i, r.Worth, r.Ceiling, v.Breaches)
			}
			if dispatched := p.PlanWorth(Dispatch(p)); r.Worth < dispatched {
				t.Errorf("%s %d: worth %v, dispatched %v", c.name, i, r.Worth, dispatched)
			}
		}
	}
}

// Sessions far beyond the usual are planned within the rules and within bounds of memory.
func TestHugeSessions(t *testing.T) {
	thousand := generate(instance{sources: 1000, minutes: 30, grid: 5, receivers: 1, seed: 1})
	days := generate(instance{sources: 12, minutes: 48 * 60, grid: 10, receivers: 2, breaks: 3, calibrators: 1, long: 3, seed: 2})
	for name, p := range map[string]*Problem{"1,000 sources": thousand, "48 hours": days} {
		r := solve(t, p, Options{Rounds: 1})
		judged(t, p, r.Plan, r.Worth)
		if len(r.Plan.Slots) == 0 || r.HasCeiling && r.Worth > r.Ceiling {
			t.Errorf("%s: %d slots, worth %v, ceiling %v", name, len(r.Plan.Slots), r.Worth, r.Ceiling)
		}
	}
}
