package sched

import (
	"math/rand/v2"
	"testing"
)

// After any edit a ceiling that is carried over is one: every plan of tiny problems is worth no more.
func TestCarriedCeilingHolds(t *testing.T) {
	carried := map[string]int{}
	for seed := range uint64(400) {
		was := tiny(seed)
		r := rand.New(rand.NewPCG(seed, 77))
		if r.IntN(2) == 0 {
			was.Breaks, was.Slew.Sec = nil, was.Slew.Sec[:was.Slew.Bins*was.Slew.Places*was.Slew.Places]
		}
		if r.IntN(2) == 0 {
			for i := range was.Slew.Sec {
				was.Slew.Sec[i] = 60
			}
		}
		unbarred := r.IntN(len(was.Jobs))
		if r.IntN(3) == 0 {
			was.Jobs[unbarred].Barred = true
		}
		solved := solve(t, was, Options{Rounds: 4})
		now := *was
		now.Jobs = append([]Job(nil), was.Jobs...)
		now.Nodes = append([]Node(nil), was.Nodes...)
		kind := []string{"bar", "window", "past", "worth", "slots", "unbar", "pin", "length"}[r.IntN(8)]
		j := r.IntN(len(now.Jobs))
		switch kind {
		case "bar":
			now.Jobs[j].Barred = true
		case "window":
			w := now.Nodes[0].Open[0]
			w.To = w.From + (w.To-w.From)/2
			now.Nodes[0].Open = []Window{w}
		case "past":
			now.FromMin += 3
		case "worth":
			now.Jobs[j].Terms = append([]Term(nil), now.Jobs[j].Terms...)
			now.Jobs[j].Terms[0].Scale *= 2
		case "slots":
			now.Jobs[j].MaxSlots++
		case "unbar":
			now.Jobs[unbarred].Barred = false
		case "pin":
			if len(solved.Plan.Slots) > 0 {
				now.Pins = solved.Plan.Slots[:1]
			}
		case "length":
			now.Jobs[j].MaxMin = now.Jobs[j].MinMin
		}
		ceiling, ok := CarryCeiling(was, solved.Ceiling, &now)
		if !ok {
			continue
		}
		carried[kind]++
		if best := bruteForce(&now); kind != "pin" && best > ceiling {
			t.Errorf("seed %d, %s: ceiling %d, best of all plans %d", seed, kind, ceiling, best)
		}
		if again := solve(t, &now, Options{Rounds: 4}); again.Worth > ceiling {
			t.Errorf("seed %d, %s: ceiling %d, worth %d", seed, kind, ceiling, again.Worth)
		}
	}
	for _, kind := range []string{"bar", "window", "past", "worth", "slots", "unbar", "pin", "length"} {
		if carried[kind] == 0 {
			t.Errorf("no ceiling was carried over: %s", kind)
		}
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
		"a pin is gone":      func(p *Problem) { p.Pins = p.Pins[:1] },
		"a must is barred":   func(p *Problem) { p.Jobs[0].Barred = true },
		"a window opens":     func(p *Problem) { p.Nodes[5].Open = []Window{{Span: Span{0, p.Minutes}}} },
		"another grid":       func(p *Problem) { p.GridMin = 7 },
		"slews are quicker":  func(p *Problem) { p.Slew.Sec[3]-- },
		"a pin off its grid": func(p *Problem) { p.GridMin, p.Pins = 1, append(p.Pins, Slot{Node: 3, Start: 200, End: 201}) },
		"longer slots":       func(p *Problem) { p.Jobs[2].MaxMin++ },
	}
	for name, edit := range edits {
		was, now := base(), base()
		if _, ok := CarryCeiling(was, 100*Unit, now); !ok {
			t.Fatal("the same problem loses its ceiling")
		}
		edit(now)
		if c, ok := CarryCeiling(was, 100*Unit, now); ok {
			t.Errorf("%s: ceiling %v", name, c)
		}
	}
}
