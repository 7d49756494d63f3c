package sched

import (
	"context"
	"testing"
)

func benchmarkSolve(b *testing.B, in instance, o Options) {
	p := generate(in.with(1))
	dispatched := p.PlanWorth(Dispatch(p))
	b.ReportAllocs()
	var r Result
	for b.Loop() {
		r, _ = Solve(context.Background(), p, o)
	}
	b.ReportMetric(float64(r.Worth)/float64(dispatched), "x-dispatched")
	if r.HasCeiling {
		b.ReportMetric(100*(1-float64(r.Worth)/float64(r.Ceiling)), "%-below-ceiling")
	}
}

func BenchmarkFirstPlanDemo(b *testing.B)     { benchmarkSolve(b, demo, Options{Rounds: -1}) }
func BenchmarkSolveSmall(b *testing.B)        { benchmarkSolve(b, small, Options{}) }
func BenchmarkSolveMedium(b *testing.B)       { benchmarkSolve(b, medium, Options{}) }
func BenchmarkSolveDemo(b *testing.B)         { benchmarkSolve(b, demo, Options{}) }
func BenchmarkSolveDemoTwoCores(b *testing.B) { benchmarkSolve(b, demo, Options{Workers: 2}) }
func BenchmarkSolveLarge(b *testing.B)        { benchmarkSolve(b, large, Options{}) }

func BenchmarkVerify(b *testing.B) {
	p := generate(demo.with(1))
	plan := solve(b, p, Options{Rounds: -1}).Plan
	for b.Loop() {
		Verify(p, plan)
	}
}

func BenchmarkEditAndVerify(b *testing.B) {
	p := generate(demo.with(1))
	plan := solve(b, p, Options{Rounds: -1}).Plan
	for b.Loop() {
		edited, _ := Lengthen(p, plan, 3, 2)
		Verify(p, edited)
	}
}

func BenchmarkCandidates(b *testing.B) {
	p := generate(large.with(1))
	plan := solve(b, p, Options{Rounds: -1}).Plan
	for b.Loop() {
		Candidates(p, plan, 200)
	}
}

func BenchmarkLeftOut(b *testing.B) {
	p := generate(large.with(1))
	plan := solve(b, p, Options{Rounds: -1}).Plan
	for b.Loop() {
		LeftOut(p, plan)
	}
}
