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
// median and worst certified distance after 0.3, 1 and 5 s, and the most memory that the search had in use after a round,
// garbage included; and the time, the median certified distance and the memory of a dispatched plan, and how much more
// than that the search's last is worth. Run it with -benchtime 1x.
func BenchmarkSet(b *testing.B) {
	benchmarkSet(b, 300*time.Millisecond, time.Second, 5*time.Second)
}

// BenchmarkSetMinute goes on for a minute a session, twenty in all, and prints besides how far the plan after 5 s is
// below that of the minute. Run it with -benchtime 1x -timeout 1h.
func BenchmarkSetMinute(b *testing.B) {
	benchmarkSet(b, 5*time.Second, time.Minute)
}

func benchmarkSet(b *testing.B, marks ...time.Duration) {
	for _, c := range classes {
		b.Run(c.name, func(b *testing.B) {
			for b.Loop() {
				report(b, c.sessions(), marks)
			}
		})
	}
}

func report(b *testing.B, problems []*Problem, marks []time.Duration) {
	var first, memory, below, gain, dispatchMs, dispatchOff, dispatchMB []float64
	distance := make([][]float64, len(marks))
	for _, p := range problems {
		var m runtime.MemStats
		inUse := func() float64 {
			runtime.ReadMemStats(&m)
			return float64(m.HeapAlloc) / 1e6
		}
		runtime.GC()
		before := inUse()
		began := time.Now()
		dispatched := p.PlanWorth(Dispatch(p))
		dispatchMs = append(dispatchMs, 1000*time.Since(began).Seconds())
		dispatchMB = append(dispatchMB, inUse()-before)
		runtime.GC()
		before = inUse()
		peak := before
		ctx, cancel := context.WithTimeout(context.Background(), marks[len(marks)-1])
		began = time.Now()
		at := make([]Result, 0, len(marks))
		var last Result
		r, _ := Solve(ctx, p, Options{Work: 1 << 60, Workers: 2, Progress: func(r Result) {
			peak = max(peak, inUse())
			if r.Rounds == 0 {
				first = append(first, 1000*time.Since(began).Seconds())
			}
			for len(at) < len(marks) && time.Since(began) > marks[len(at)] {
				at = append(at, last)
			}
			last = r
		}})
		cancel()
		for len(at) < len(marks) {
			at = append(at, r)
		}
		for i := range marks {
			distance[i] = append(distance[i], at[i].distance())
		}
		memory = append(memory, peak-before)
		below = append(below, 100*(1-float64(at[0].Worth)/float64(r.Worth)))
		gain = append(gain, 100*(float64(r.Worth)/float64(dispatched)-1))
		r.Worth = dispatched
		dispatchOff = append(dispatchOff, r.distance())
	}
	b.ReportMetric(0, "ns/op")
	b.ReportMetric(median(first), "ms-first")
	for i, mark := range marks {
		b.ReportMetric(median(distance[i]), fmt.Sprintf("%%-off-%.1fs", mark.Seconds()))
		b.ReportMetric(slices.Max(distance[i]), fmt.Sprintf("%%-worst-%.1fs", mark.Seconds()))
	}
	b.ReportMetric(median(below), fmt.Sprintf("%%-below-last-%.1fs", marks[0].Seconds()))
	b.ReportMetric(slices.Max(memory), "MB")
	b.ReportMetric(median(gain), "%-over-dispatched")
	b.ReportMetric(median(dispatchMs), "ms-dispatched")
	b.ReportMetric(median(dispatchOff), "%-off-dispatched")
	b.ReportMetric(slices.Max(dispatchMB), "MB-dispatched")
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
	const most = 128 << 20 // bytes that a search may hold
	thousand := generate(instance{sources: 1000, minutes: 30, grid: 5, receivers: 1, seed: 1})
	many := generate(instance{sources: 400, minutes: 480, grid: 1, receivers: 1, breaks: 1, calibrators: 1, long: 4, seed: 3})
	days := generate(instance{sources: 12, minutes: 48 * 60, grid: 10, receivers: 2, breaks: 3, calibrators: 1, long: 3, seed: 2})
	problems := map[string]*Problem{"1,000 sources": thousand, "48 hours": days}
	if !raced {
		problems["400 sources, 8 hours"] = many
	}
	for name, p := range problems {
		var m runtime.MemStats
		runtime.GC()
		runtime.ReadMemStats(&m)
		before, peak := m.HeapAlloc, m.HeapAlloc
		r := solve(t, p, Options{Rounds: 1, Progress: func(Result) {
			runtime.ReadMemStats(&m)
			peak = max(peak, m.HeapAlloc)
		}})
		judged(t, p, r.Plan, r.Worth)
		if len(r.Plan.Slots) == 0 || r.HasCeiling && r.Worth > r.Ceiling {
			t.Errorf("%s: %d slots, worth %v, ceiling %v", name, len(r.Plan.Slots), r.Worth, r.Ceiling)
		}
		if peak-before > most {
			t.Errorf("%s: %d MiB in use", name, (peak-before)>>20)
		}
		t.Logf("%s: %d MiB in use", name, (peak-before)>>20)
	}
}
