package sched

import (
	"context"
	"fmt"
	"slices"
	"sync"
)

// Options say how much work Solve does. The zero value is the default effort.
type Options struct {
	Rounds   int          // rounds of search after the first plan, at most; 0 is no limit but Work, below 0 none
	Work     int          // no round begins once this much has been done, in steps of the search; 0 is the default where Rounds is 0 too
	Warm     *Plan        // a plan to start from: its slots are kept where they still fit
	Learned  *Learned     // what an earlier search left to this one; of no effect if that was of another session
	Workers  int          // goroutines; the plan does not depend on their number; 0 is 1
	Progress func(Result) // called after the first plan and after every round, by the caller's goroutine
}

// A Result is the best plan found, and what is known of it.
type Result struct {
	Plan       Plan
	Worth      Micro
	Ceiling    Micro    // no plan with the same grid and rules is worth more, if it has all musts that this one has
	HasCeiling bool     // a ceiling has been proved; there is none otherwise
	Rounds     int      // rounds of search done
	Work       int      // steps of the search done
	Proven     bool     // the plan reaches the ceiling
	Learned    *Learned // what planning again after an edit can start from
}

const (
	defaultWork = 5 * StepsPerSecond / 2 // brings the demonstration's ten hours within 1 % of the ceiling
	lanes       = 2                      // searches side by side: fixed, so that the number of workers changes nothing
)

// StepsPerSecond is about how many steps of the search one core of a laptop makes in a second. Work is
// counted, not timed, so that the same effort gives the same plan everywhere.
const StepsPerSecond = 200_000_000

// Solve plans a session: it keeps the pins, leaves out what is barred, includes the jobs that must be
// there where that is possible, and otherwise maximises worth. The same problem and the same options give
// the same plan on any processor and with any number of workers.
//
// It fails, without a plan, on a malformed problem and on pins that cannot follow one another. When ctx
// ends it stops in the midst of a round and returns the best plan so far together with ctx's error.
func Solve(ctx context.Context, p *Problem, o Options) (Result, error) {
	if err := p.Check(); err != nil {
		return Result{}, fmt.Errorf("malformed problem: %w", err)
	}
	if err := p.checkPinsMeet(); err != nil {
		return Result{}, err
	}
	s := newSearch(p, o, func() bool { return ctx.Err() != nil })
	s.first(o.Workers)
	s.report(o)
	for s.goesOn(o) {
		if err := ctx.Err(); err != nil {
			return s.result(), err
		}
		s.round(o.Workers)
		s.report(o)
	}
	return s.result(), ctx.Err()
}

// budget is the work after which no round begins; 0 or less is without end.
func (o Options) budget() int {
	if o.Work == 0 && o.Rounds == 0 {
		return defaultWork
	}
	return o.Work
}

func (s *search) goesOn(o Options) bool {
	work := o.budget()
	switch {
	case s.proven(), o.Rounds < 0, o.Rounds > 0 && s.rounds >= o.Rounds, s.bound == nil && s.rounds >= mostRounds:
		return false
	}
	return work <= 0 || s.work < work
}

// mostRounds ends a search that cannot know how good its plan is.
const mostRounds = 64

// checkPinsMeet finds the pair of pins that cannot follow one another. In time past a setup may have been
// shorter than it is reckoned here, but no two slots were at the same time.
func (p *Problem) checkPinsMeet() error {
	for i := 1; i < len(p.Pins); i++ {
		a, b := p.Pins[i-1], p.Pins[i]
		if b.Start < a.End {
			return fmt.Errorf("pins clash: %s until %s overlaps %s from %s by %d min; unpin or move one of them",
				p.nodeName(a.Node), p.clock(a.End), p.nodeName(b.Node), p.clock(b.Start), a.End-b.Start)
		}
		if b.Start < p.FromMin {
			continue
		}
		if setup := p.SetupBetween(a.Node, a.End, b.Node, b.Start); b.Start < setup.ReadyMin {
			return fmt.Errorf("pins clash: %s from %s starts %d min too early after %s until %s: %s; unpin or move one of them",
				p.nodeName(b.Node), p.clock(b.Start), setup.ReadyMin-b.Start, p.nodeName(a.Node), p.clock(a.End), p.describe(setup, b.Node))
		}
	}
	return nil
}

// A search holds the best plan so far, the lanes that look for a better one, and the bound on both. They
// share what they have found after every round, never within one.
type search struct {
	t      *tables
	prices []Micro  // of jobs: shared by all lanes
	perMin Micro    // what a minute is worth
	bound  *bounder // nil if no ceiling can be proved
	lanes  []*lane
	best   []Slot
	value  Micro
	rounds int
	work   int
	notes  map[int]string // by node, from the warm plan
	warm   []Slot         // what that plan has become
}

func newSearch(p *Problem, o Options, halt func() bool) *search {
	s := &search{value: unreachable, notes: map[int]string{}}
	if l := o.Learned; l.serves(p) {
		s.t = newTables(p, l.tables, o.Workers)
		s.prices, s.perMin = s.t.pricesFrom(l), l.perMin
	} else {
		s.t = newTables(p, nil, o.Workers)
		s.prices, s.perMin = s.t.minutePrices()
	}
	t := s.t
	t.layPull(s.perMin)
	t.labels = labelsFor(o)
	s.bound = newBounder(t, s.prices, halt)
	if s.bound != nil && o.Learned.serves(p) {
		s.bound.take(o.Learned)
	}
	for i := range lanes {
		s.lanes = append(s.lanes, newLane(t, s.prices, uint64(i), halt))
	}
	if o.Warm != nil {
		if kept := t.fitting(*o.Warm); len(kept) > len(p.Pins) {
			s.warm = s.lanes[0].complete(s.lanes[0].fill(kept))
			s.offer(s.lanes[0].complete(kept)) // no plan is lost because another was made of it
			s.offer(s.warm)
		}
		for _, slot := range o.Warm.Slots {
			if slot.Note != "" && slot.Node >= 0 && slot.Node < len(p.Nodes) {
				s.notes[slot.Node] = slot.Note
			}
		}
	}
	return s
}

func (s *search) offer(slots []Slot) {
	if v := s.t.value(slots); v > s.value {
		s.best, s.value = slots, v
	}
}

// firstScales are the shares of the prices at which the lanes make their first plans. The paths of the sweep
// keep only their best past, so that the price at which jobs are best not taken too soon has to be tried.
// Of pairs from 0.6 to 1 these two brought the most on the benchmark set.
var firstScales = [lanes]float64{0.6, 1}

// first makes plans from nothing and of the warm plan, polishes them and keeps the best.
func (s *search) first(workers int) {
	var work []func()
	for i, l := range s.lanes {
		work = append(work, func() {
			if s.warm != nil && i == 0 {
				l.start(s.best, s.value)
			} else {
				plan := l.fromNothing(firstScales[i])
				l.start(plan, s.t.value(plan))
			}
			l.polish(3, 0.5)
			l.polish(2, 0.5)
		})
	}
	inParallel(workers, work)
	for _, l := range s.lanes {
		s.offer(l.best)
	}
	for _, l := range s.lanes {
		l.start(s.best, s.value)
	}
	if s.bound != nil {
		s.bound.force(s.best)
	}
	s.countWork()
}

// round lowers the ceiling while every lane re-plans for about as long, then gives the best plan to the lane
// that is furthest behind, and the prices that were learned to all.
func (s *search) round(workers int) {
	heat := 1 - float64(s.rounds%8)/8
	s.rounds++
	if s.warm != nil && s.rounds <= repairs {
		s.repair(heat, workers)
		return
	}
	var work []func()
	var route []Slot
	budget := 0
	worth := s.t.p.PlanWorth(Plan{Slots: s.best})
	if s.bound != nil {
		route, budget = s.bound.route, s.bound.work/(3*lanes)
		s.bound.prepare(worth)
		work = append(work, func() { s.bound.advance(worth) })
		if s.bound.proof.ready {
			work = append(work, func() { s.bound.proof.take(s.bound, worth) })
		}
	}
	for i, l := range s.lanes {
		work = append(work, func() {
			if s.rounds%lanes == i {
				l.take(l.fromNothing(freshScales[s.rounds/lanes%len(freshScales)]))
			} else {
				l.adopt(route)
			}
			l.replan(heat, budget)
		})
	}
	inParallel(workers, work)
	if s.bound != nil {
		s.bound.conclude(worth)
	}
	s.gather()
	if s.bound != nil {
		for j, price := range s.bound.prices.center {
			s.prices[j] = Micro(price)
		}
	}
	s.countWork()
}

// A plan that was edited is mended before anything is proved of it: so many rounds, each of so many steps in every lane.
const (
	repairs    = 2
	repairWork = StepsPerSecond / 100
)

func (s *search) repair(heat float64, workers int) {
	var work []func()
	for i, l := range s.lanes {
		work = append(work, func() {
			if i == 0 {
				l.start(s.best, s.value)
				l.polish(2+3*s.rounds, 0.5) // an edit may have made room for a long slot
			}
			l.replan(heat, repairWork)
		})
	}
	inParallel(workers, work)
	s.gather()
	s.countWork()
}

// gather takes the best plan of all lanes and gives it to the one that is furthest behind.
func (s *search) gather() {
	worst := s.lanes[0]
	for _, l := range s.lanes {
		if l.bestValue > s.value {
			s.best, s.value = l.best, l.bestValue
		}
		if l.value < worst.value {
			worst = l
		}
	}
	worst.start(s.best, s.value)
}

// countWork adds up what was done since it was last called.
func (s *search) countWork() {
	if s.bound != nil {
		s.work += s.bound.work
	}
	for _, l := range s.lanes {
		s.work += l.sweep.work
		l.sweep.work = 0
	}
}

// freshScales are the shares of the learned prices at which plans are made anew, by one lane each round. The
// other makes one of the best route.
var freshScales = []float64{1, 0.97, 0.93, 0.98, 0.95}

// inParallel does the work on so many goroutines, or on this one. Each piece works on what is its own.
func inParallel(workers int, work []func()) {
	if workers <= 1 {
		for _, w := range work {
			w()
		}
		return
	}
	var wg sync.WaitGroup
	room := make(chan struct{}, workers)
	for _, w := range work {
		room <- struct{}{}
		wg.Go(func() {
			defer func() { <-room }()
			w()
		})
	}
	wg.Wait()
}

// proven tells whether the best plan reaches the ceiling.
func (s *search) proven() bool {
	return s.bound != nil && s.bound.valid && s.t.p.PlanWorth(Plan{Slots: s.best}) >= s.bound.ceiling
}

func (s *search) result() Result {
	slots := slices.Clone(s.best)
	for i := range slots {
		if note, ok := s.notes[slots[i].Node]; ok && !slots[i].Pinned {
			slots[i].Note = note
		}
	}
	plan := Plan{Slots: slots}
	r := Result{Plan: plan, Worth: s.t.p.PlanWorth(plan), Rounds: s.rounds, Work: s.work, Proven: s.proven(), Learned: s.learned()}
	if s.bound != nil && s.bound.valid {
		r.Ceiling, r.HasCeiling = s.bound.ceiling, true
	}
	return r
}

func (s *search) report(o Options) {
	if o.Progress != nil {
		o.Progress(s.result())
	}
}

// fitting returns what of the plan fits the problem, with the problem's pins.
func (t *tables) fitting(plan Plan) []Slot {
	p := t.p
	slots := pinned(p)
	set := make([]uint64, t.words)
	for _, pin := range slots {
		t.spend(set, p.Nodes[pin.Node].Job)
	}
	for _, slot := range plan.Sorted().Slots {
		if slot.Node < 0 || slot.Node >= len(p.Nodes) || slices.ContainsFunc(slots, slot.same) {
			continue
		}
		slot.Pinned = false
		job := p.Nodes[slot.Node].Job
		if t.spent(set, job) || !t.allows(slot) {
			continue
		}
		at, _ := slices.BinarySearchFunc(slots, slot, compareSlots)
		if p.fitsAt(slots, at, slot) {
			slots = slices.Insert(slots, at, slot)
			t.spend(set, job)
		}
	}
	return slots
}

func (s Slot) same(o Slot) bool { return s.Node == o.Node && s.Start == o.Start && s.End == o.End }

// allows tells whether the search could have made this slot.
func (t *tables) allows(s Slot) bool {
	j := t.p.Jobs[t.p.Nodes[s.Node].Job]
	if s.Start < 0 || s.End > t.p.Minutes || s.End%t.p.GridMin != 0 || s.End-s.Start < j.MinMin || s.End-s.Start > j.MaxMin {
		return false
	}
	from := t.winFrom[s.Node*t.span+s.End]
	return from != None && int(from) <= s.Start
}

// fitsAt tells whether the slot can stand before slots[at], with the setups on both sides of it.
func (p *Problem) fitsAt(slots []Slot, at int, s Slot) bool {
	from, end := None, 0
	if at > 0 {
		from, end = slots[at-1].Node, slots[at-1].End
	}
	if s.Start < end || s.Start < p.SetupBetween(from, end, s.Node, s.Start).ReadyMin {
		return false
	}
	if at == len(slots) {
		return true
	}
	next := slots[at]
	return s.End <= next.Start && p.SetupBetween(s.Node, s.End, next.Node, next.Start).ReadyMin <= next.Start
}

// pinned returns the problem's pins as slots of a plan.
func pinned(p *Problem) []Slot {
	slots := slices.Clone(p.Pins)
	for i := range slots {
		slots[i].Pinned = true
	}
	return slots
}
