package sched

import (
	"math/rand/v2"
	"slices"
	"testing"
	"time"
)

// bruteForce returns the worth of the best plan by trying every sequence of slots with every start and
// every end. It knows the rules from their definition alone. Only plans with the jobs named count; it is
// below zero if there is none.
func bruteForce(p *Problem, with ...int) Micro {
	count := make([]int, len(p.Jobs))
	best := Micro(-1)
	var extend func(from, end int, sum Micro)
	extend = func(from, end int, sum Micro) {
		if !slices.ContainsFunc(with, func(job int) bool { return count[job] == 0 }) {
			best = max(best, sum)
		}
		for node, n := range p.Nodes {
			j := p.Jobs[n.Job]
			if j.Barred || count[n.Job] == j.MaxSlots {
				continue
			}
			for start := max(end, p.FromMin); start < p.Minutes; start++ {
				if start < p.SetupBetween(from, end, node, start).ReadyMin {
					continue
				}
				for stop := start + j.MinMin; stop <= min(p.Minutes, start+j.MaxMin); stop++ {
					if stop%p.GridMin != 0 || !openFor(p, node, start, stop) {
						continue
					}
					count[n.Job]++
					extend(node, stop, sum+p.JobWorth(n.Job, start, stop))
					count[n.Job]--
				}
			}
		}
	}
	extend(None, 0, 0)
	return best
}

func openFor(p *Problem, node, start, stop int) bool {
	for _, b := range p.Breaks {
		if start < b.To && stop > b.From {
			return false
		}
	}
	for _, w := range p.Nodes[node].Open {
		if start >= w.From && stop <= w.To {
			return true
		}
	}
	return false
}

// tiny makes a problem small enough for bruteForce, with everything in it that can interact: a break,
// receivers, two wrap sides, several windows, slews that break the triangle inequality.
func tiny(seed uint64) *Problem {
	r := rand.New(rand.NewPCG(seed, 3))
	p := &Problem{Session: "tiny", Start: time.Date(2031, 1, 1, 0, 0, 0, 0, time.UTC), Minutes: 18 + r.IntN(10), GridMin: 1 + r.IntN(2), OverheadSec: r.IntN(100),
		Receivers: []Receiver{{"L", 60 + r.IntN(120)}, {"S", 60 + r.IntN(120)}}}
	if r.IntN(2) == 0 {
		from := 5 + r.IntN(8)
		p.Breaks = []Span{{from, from + 1 + r.IntN(4)}}
	}
	if r.IntN(4) == 0 {
		p.FromMin = r.IntN(8)
	}
	for range 3 {
		cum := make([]int32, p.Minutes+1)
		for m := range p.Minutes {
			cum[m+1] = cum[m] + int32(r.IntN(200))
		}
		least := 2 + r.IntN(3)
		j := Job{Source: "X" + string(rune('a'+len(p.Jobs))), Receiver: r.IntN(2), Priority: 1, MinMin: least, MaxMin: least + r.IntN(5), MaxSlots: 1 + r.IntN(5)/4,
			Terms: []Term{{Kind: Cadence, Scale: Micro(1+r.IntN(3000)) * 1000, Curve: []Curve{Root, Share, Log, Step}[r.IntN(4)], Wanted: int32(200 + r.IntN(600)), Least: int32(r.IntN(200)), Cum: cum}}}
		p.Jobs = append(p.Jobs, j)
		for range 1 + r.IntN(2) {
			n := Node{Job: len(p.Jobs) - 1, Place: len(p.Nodes)}
			from := r.IntN(p.Minutes / 2)
			to := from + 2 + r.IntN(p.Minutes)
			n.Open = []Window{{Span: Span{from, min(to, p.Minutes)}}}
			p.Nodes = append(p.Nodes, n)
		}
	}
	p.Slew = SlewTable{Places: len(p.Nodes), BinMin: 5, Bins: (p.Minutes + 4) / 5}
	for range (p.Slew.Bins + len(p.Breaks)) * p.Slew.Places * p.Slew.Places {
		p.Slew.Sec = append(p.Slew.Sec, uint16(r.IntN(200)))
	}
	return p
}

// On problems so small the search is carried on until the ceiling is met, so it finds the best of all plans even where
// slews are as wild as here.
func TestSolveEqualsBruteForce(t *testing.T) {
	const problems = 600
	for seed := range uint64(problems) {
		p := tiny(seed)
		if err := p.Check(); err != nil {
			t.Fatal(err)
		}
		want := bruteForce(p)
		r := solve(t, p, Options{})
		judged(t, p, r.Plan, r.Worth)
		if r.Worth != want {
			t.Errorf("seed %d: planned %d, best of all plans %d", seed, r.Worth, want)
		}
		if r.HasCeiling && r.Ceiling < want {
			t.Errorf("seed %d: ceiling %d below the best of all plans, %d", seed, r.Ceiling, want)
		}
	}
}
