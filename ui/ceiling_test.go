package ui

import (
	"context"
	"fmt"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"
	"time"

	"example.org/tallystick/sched"
)

// worthLine is the line that keeps worth and ceiling in sight.
func (h *harness) worthLine() string { return strings.Split(h.screen(), "\n")[1] }

// holdsByPinsAndBars is the least that a ceiling must outlive: every pin and bar that it was proved with still stands,
// and nothing is barred that every plan was proved to have.
func holdsByPinsAndBars(b sched.Bound, s snapshot) bool {
	for _, pin := range b.Of.Pins {
		if !slices.ContainsFunc(s.plan.Slots, func(is sched.Slot) bool {
			return is.Node == pin.Node && is.Start == pin.Start && is.End == pin.End && is.Pinned
		}) {
			return false
		}
	}
	for _, j := range b.Of.Jobs {
		if barred := slices.Contains(s.bars, j.Source); j.Barred && !barred || j.Must && barred && !j.Barred {
			return false
		}
	}
	return true
}

// After any edits the ceiling shown is one: no plan around the pins as they stand is worth more, and least of all the
// plan itself. It is shown wherever the pins and bars of the last proof still stand.
func TestTheCeilingShownHolds(t *testing.T) {
	verbs := []verb{pinSlot, pinSlot, dropSlot, moveEarlier, farEarlier, farLater, shorten, lengthen, startEarlier, startLater, splitSlot, swapAfter,
		otherRcvr, clearPlan, undoEdit, undoEdit, redoEdit, keepHeld, keepHeld, planAgain, planFromHere, lostUntilIs, startNow, slotLost, slotDone}
	shown, kept, broken := 0, 0, 0
	for seed := range uint64(8) {
		r := rand.New(rand.NewPCG(seed, 5))
		now := evening
		h := start(t, openCampaign(t), func(c *Config) { c.Now = func() time.Time { return now } })
		h.rounds = 3
		d := h.world.desk
		for step := range 60 {
			did := verbs[r.IntN(len(verbs))]
			if n := len(d.shown().plan.Slots); n > 0 {
				d.choose(r.IntN(n))
			}
			switch {
			case step == 40 && seed%2 == 0: // the second half under way
				now = d.prepared.Instant(60 + r.IntN(120))
				h.run(h.tick())
			case r.IntN(6) == 0:
				did = barThisSource
				if d.held != nil {
					break
				}
				jobs := d.prepared.Problem.Jobs
				h.run(h.apply(action{verb: did, text: jobs[r.IntN(len(jobs))].Source}))
			case did == lostUntilIs:
				if now != evening && d.held == nil {
					h.run(h.apply(action{verb: did, text: "+30"}))
				}
			default:
				h.run(h.apply(action{verb: did}))
			}
			view, line := d.read(), h.worthLine()
			settled := h.world.settled(d)
			b, ok := d.ceilingOf(view.problem, view.plan, settled)
			if len(d.proofs) > 0 && settled == 0 {
				last := d.proofs[len(d.proofs)-1]
				if last.Of.FromMin == 0 && len(view.verdict.Breaches) == 0 && holdsByPinsAndBars(last, snapshot{view.plan, view.bars}) {
					kept++
					if !ok {
						t.Errorf("seed %d, step %d, %s: no ceiling although all pins and bars stand: %s", seed, step, did, line)
					}
				}
			}
			if !ok {
				continue
			}
			shown++
			if !strings.Contains(line, b.Ceiling.String()) {
				t.Errorf("seed %d, step %d, %s: ceiling %s is not shown: %s", seed, step, did, b.Ceiling, line)
			}
			worth := view.verdict.Worth
			if holds := b.Holds(view.plan); holds && worth > b.Ceiling || holds != strings.Contains(line, "ceiling "+b.Ceiling.String()) {
				t.Errorf("seed %d, step %d, %s: worth %s, ceiling %s, holds %v: %s", seed, step, did, worth, b.Ceiling, holds, line)
			}
			if len(view.verdict.Breaches) > 0 && b.Holds(view.plan) {
				broken++
			}
			best, err := sched.Solve(context.Background(), b.Of, sched.Options{Rounds: 2})
			if err != nil {
				continue // pins clash
			}
			if best.Worth > b.Ceiling && b.Holds(best.Plan) {
				t.Errorf("seed %d, step %d, %s: ceiling %s, a plan worth %s", seed, step, did, b.Ceiling, best.Worth)
			}
		}
	}
	t.Logf("%d ceilings shown, %d had to be, %d with limits broken", shown, kept, broken)
	if kept < 50 || broken == 0 {
		t.Error("too few")
	}
}

func TestTheFirstCeilingComesBack(t *testing.T) {
	h := start(t, openCampaign(t))
	d := h.world.desk
	ceiling := func() sched.Micro {
		b, ok := d.ceilingOf(d.read().problem, d.read().plan, 0)
		if !ok || !strings.Contains(h.worthLine(), fmt.Sprintf("ceiling %s", b.Ceiling)) {
			t.Fatalf("no ceiling: %s", h.worthLine())
		}
		return b.Ceiling
	}
	first := ceiling()
	h.keys("home", "-", "-", "R") // the first slot, two minutes shorter and pinned
	h.keys("p")
	if got := ceiling(); got != first {
		t.Errorf("pinned, planned and unpinned: ceiling %s, first it was %s", got, first)
	}
	h.keys("u", "u")
	source := d.prepared.Problem.Jobs[1].Source
	h.run(h.apply(action{verb: barThisSource, text: source}))
	h.keys("R")
	if got := ceiling(); got >= first {
		t.Errorf("with a bar the ceiling is %s, without it %s", got, first)
	}
	h.run(h.apply(action{verb: barThisSource, text: source}))
	if got := ceiling(); got > first {
		t.Errorf("barred, planned and let in again: ceiling %s, first it was %s", got, first)
	}
}

// What was proved is saved with the plan, and is there again when nothing has changed; a plan of another
// logbook has none.
func TestACeilingIsSavedWithThePlan(t *testing.T) {
	f := openCampaign(t)
	h := start(t, f)
	h.keys("p", "w")
	line := h.worthLine()
	if !strings.Contains(line, "ceiling") {
		t.Fatal(line)
	}
	again := open(t, f)
	again.shows("the saved plan of")
	if got := again.worthLine(); strings.TrimSpace(got) != strings.TrimSpace(line) {
		t.Errorf("reopened: %s; saved: %s", got, line)
	}
	f.Campaign.Sources[0].Priority *= 2
	changed := open(t, f)
	changed.shows("no ceiling yet")
	changed.shows("the campaign or the logbook changed")
}
