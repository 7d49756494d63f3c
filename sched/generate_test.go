package sched

import (
	"fmt"
	"math"
	"math/rand/v2"
	"time"
)

// An instance says what a generated session looks like. Sources, sky and debts are invented.
type instance struct {
	sources, minutes, grid int
	receivers              int
	breaks                 int
	long                   int // sources with a conjunction to be stayed on
	calibrators            int
	seed                   uint64
}

var (
	small  = instance{sources: 15, minutes: 240, grid: 1, receivers: 1, calibrators: 1, long: 1}
	medium = instance{sources: 40, minutes: 480, grid: 1, receivers: 2, breaks: 1, calibrators: 1, long: 2}
	demo   = instance{sources: 45, minutes: 630, grid: 1, receivers: 2, breaks: 1, calibrators: 1, long: 3}
	large  = instance{sources: 80, minutes: 720, grid: 1, receivers: 2, breaks: 1, calibrators: 2, long: 4}
)

func (in instance) with(seed uint64) instance { in.seed = seed; return in }

// generate makes a session with the spread of rise times, elevations, debts and slews of a real one.
func generate(in instance) *Problem {
	r := rand.New(rand.NewPCG(in.seed, 7))
	p := &Problem{
		Session: fmt.Sprintf("generated %d", in.seed), Start: time.Date(2031, 3, 4, 18, 0, 0, 0, time.UTC),
		Minutes: in.minutes, GridMin: in.grid, OverheadSec: 90,
	}
	for i := range in.receivers {
		p.Receivers = append(p.Receivers, Receiver{Name: string(rune('L' + 7*i)), ChangeSec: 360})
	}
	for i := range in.breaks {
		from := in.minutes * (i + 1) / (in.breaks + 1)
		p.Breaks = append(p.Breaks, Span{From: from, To: from + 20})
	}
	type sky struct{ az, el float64 }
	var places []sky
	for s := range in.sources {
		transit := r.Float64()*float64(in.minutes+600) - 300
		half := 100 + r.Float64()*260
		top := 30 + r.Float64()*50
		priority := []float64{1, 1, 1, 2, 3}[r.IntN(5)]
		debt := r.Float64() * 2.5
		calibrator := s < in.calibrators
		elevation := func(m int) float64 {
			x := (float64(m) - transit) / half
			return top * (1 - x*x)
		}
		window := Window{Span: Span{From: in.minutes, To: 0}, OpensBy: "elevation 8°", ClosesBy: "elevation 8°"}
		for m := range in.minutes + 1 {
			if elevation(m) >= 8 {
				window.From, window.To = min(window.From, m), max(window.To, m)
			}
		}
		cum := make([]int32, in.minutes+1)
		for m := range in.minutes {
			weight := math.Max(0, math.Min(1, (elevation(m)+20)/70))
			cum[m+1] = cum[m] + int32(100*weight)
		}
		wanted := 15 + r.IntN(31)
		for rec := range in.receivers {
			if rec > 0 && (calibrator || r.IntN(3) == 0) {
				continue
			}
			job := Job{Source: fmt.Sprintf("X%04d+%02d", s*53, s), Receiver: rec, Priority: priority,
				MinMin: max(5, wanted*6/10), MaxMin: wanted * 2, MaxSlots: 1}
			if calibrator {
				job.MinMin, job.MaxMin, job.Must = 5, 10, true
				job.Terms = []Term{{Kind: Calibration, Label: "once a session", Scale: Unit / 2, Curve: Step, Wanted: 500, Cum: plainMinutes(in.minutes), Why: "a must"}}
			} else {
				job.Terms = []Term{{Kind: Cadence, Label: "every 14 d", Scale: Micro(priority * CadenceNeed(debt) * 1e6), Curve: Root,
					Wanted: int32(wanted * 100), Least: int32(wanted * 60), Cum: cum, Why: fmt.Sprintf("debt %.2f", debt)}}
			}
			job.Facts = Facts{UpMin: max(0, window.To-window.From), SunMin: max(0, window.To-window.From), SunDeg: 60, SunLimit: 5,
				ClearMin: max(0, window.To-window.From), HighestEl: top, Debt: debt, DebtAim: "every 14 d"}
			if s >= in.sources-in.long && rec == 0 {
				job.MaxMin = 150
				job.Terms = append(job.Terms, Term{Kind: Conjunction, Label: "superior conjunction", Scale: 4 * Unit, Curve: Share,
					Wanted: 9000, Least: 3000, Cum: hump(in.minutes, r.IntN(in.minutes), 45), Why: "4 of 6 passages missing"})
			}
			p.Jobs = append(p.Jobs, job)
			turns := 1 + r.IntN(2)
			for turn := range turns {
				n := Node{Job: len(p.Jobs) - 1, Place: len(places), Turn: turn}
				if window.To > window.From {
					n.Open = []Window{window}
				}
				p.Nodes = append(p.Nodes, n)
				places = append(places, sky{az: math.Mod(transit*0.7+3600, 360) + 360*float64(turn), el: top * 0.7})
			}
		}
	}
	p.Slew = SlewTable{Places: len(places), BinMin: 5, Bins: (in.minutes + 4) / 5}
	for bin := range p.Slew.Bins + len(p.Breaks) {
		for _, a := range places {
			for _, b := range places {
				drift := math.Sin(float64(bin)/20+a.el) * 10
				sec := math.Max(math.Abs(a.az-b.az+drift)/24, math.Abs(a.el-b.el)/12)*60 + 24
				if a == b {
					sec = 0
				}
				p.Slew.Sec = append(p.Slew.Sec, uint16(sec))
			}
		}
	}
	return p
}

func plainMinutes(n int) []int32 {
	cum := make([]int32, n+1)
	for m := range n {
		cum[m+1] = cum[m] + 100
	}
	return cum
}

// hump is what a minute near the conjunction at minute centre gathers: most at its middle.
func hump(n, centre, half int) []int32 {
	cum := make([]int32, n+1)
	for m := range n {
		x := float64(m-centre) / float64(half)
		cum[m+1] = cum[m] + int32(200*math.Max(0, 1-x*x))
	}
	return cum
}
