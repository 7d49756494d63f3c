package sched

import "slices"

// CarryCeiling returns a ceiling of the problem now that follows from one of the problem as it was, so that an
// edit need not wait for a proof.
//
// A bar, a pin that is a slot the planner could have made, a window or a slot length cut shorter and time gone
// by can only lower what the best plan is worth: the ceiling stays. What the planner could not have made is taken
// out of every plan in thought; where that leaves a plan of the problem as it was, the ceiling rises by what was
// taken out: a pin that breaks a limit, the slots of a job that is no longer barred or may have more than before.
// A pin that only begins too soon gives up its first minutes instead.
//
// It is false where nothing follows: when a pin is given up, or a job that must be there, by a bar or because no time
// is left for it; when a window opens; when the setups are others.
func CarryCeiling(was Bound, now *Problem) (Bound, bool) {
	old := was.Of
	if !sameSession(old, now) || now.GridMin%old.GridMin != 0 || now.FromMin < old.FromMin || !nodesWithin(now, old) {
		return Bound{}, false
	}
	c := carrying{was: &was, old: old, now: now, begins: now.Minutes, ends: now.Minutes}
	if !c.pins() || !c.jobs() || !c.breaks() {
		return Bound{}, false
	}
	return Bound{Of: now, Ceiling: was.Ceiling + c.more, Complete: was.Complete, ways: was.ways}, true
}

// carrying adds up what is taken out of the plans of a problem to make plans of the problem as it was.
type carrying struct {
	was      *Bound
	old, now *Problem
	more     Micro // what it is worth
	begins   int   // the first minute at which what is taken out may begin
	ends     int   // and may end
	pinCount []int // by job
}

// jobs takes out the slots of jobs that may have more of them than before.
func (c *carrying) jobs() bool {
	for j := range c.now.Jobs {
		old, job := &c.old.Jobs[j], &c.now.Jobs[j]
		if old.Source != job.Source || old.Receiver != job.Receiver || job.MinMin < old.MinMin || job.MaxMin > old.MaxMin ||
			c.was.Complete && c.pinCount[j] == 0 && c.old.mustHave(j) && !c.now.mustHave(j) {
			return false
		}
		free := 0 // slots that it may have beside its pins
		if !job.Barred {
			free = max(0, min(job.MaxSlots-c.pinCount[j], (c.now.Minutes-c.now.FromMin)/job.MinMin))
		}
		more := min(free, slotsOf(job)-slotsOf(old))
		if more > 0 && !c.mayLeave(j) {
			return false
		}
		switch {
		case !worthNoMore(job.Terms, old.Terms):
			c.more += Micro(free) * c.now.bestSlotWorth(j)
			for _, pin := range c.now.Pins {
				if c.now.Nodes[pin.Node].Job == j {
					c.more += c.now.JobWorth(j, pin.Start, pin.End)
				}
			}
		case more > 0:
			c.more += Micro(more) * c.now.bestSlotWorth(j)
		}
	}
	return true
}

func slotsOf(j *Job) int {
	if j.Barred {
		return 0
	}
	return j.MaxSlots
}

// worthNoMore tells whether no slot is worth more by the first terms than by the others.
func worthNoMore(terms, than []Term) bool {
	if len(terms) > len(than) {
		return false
	}
	for i := range terms {
		a, b := &terms[i], &than[i]
		if a.Scale > b.Scale || a.Curve != b.Curve || a.Wanted < b.Wanted || a.Least < b.Least || !alike(a.Cum, b.Cum) {
			return false
		}
	}
	return true
}

// mayLeave tells whether any free slot of the job can be taken out of any plan, and notes where it may be.
func (c *carrying) mayLeave(job int) bool {
	p, least := c.now, c.now.Jobs[job].MinMin
	for i := range p.Nodes {
		if p.Nodes[i].Job != job {
			continue
		}
		for _, w := range p.Nodes[i].Open {
			for _, s := range p.cut(w.Span) {
				if s.To-s.From < least {
					continue
				}
				if !c.ways().direct(p, p.Nodes[i].Place, s.From, s.To-least, 60*least+p.OverheadSec) {
					return false
				}
				c.begins, c.ends = min(c.begins, s.From), min(c.ends, s.From+least)
			}
		}
	}
	return true
}

func (c *carrying) ways() *ways {
	if c.was.ways == nil {
		c.was.ways = newWays(&c.old.Slew)
	}
	return c.was.ways
}

// pins finds every pin there was, and takes out of the new ones what the planner could not have made.
func (c *carrying) pins() bool {
	for _, pin := range c.old.Pins {
		if !slices.ContainsFunc(c.now.Pins, pin.same) {
			return false
		}
	}
	c.pinCount = make([]int, len(c.now.Jobs))
	kept := make([]int, len(c.now.Jobs)) // pins of each job in the plans of the problem as it was
	for _, pin := range c.now.Pins {
		job := c.now.Nodes[pin.Node].Job
		c.pinCount[job]++
		if slices.ContainsFunc(c.old.Pins, pin.same) {
			kept[job]++
		}
	}
	var before *Slot // the pin kept last
	new := false     // it is a new one
	for i := range c.now.Pins {
		pin := &c.now.Pins[i]
		job := c.now.Nodes[pin.Node].Job
		if i > 0 && pin.Start < c.now.Pins[i-1].End {
			return false // nothing fits around pins that overlap
		}
		if slices.ContainsFunc(c.old.Pins, pin.same) {
			if new && pin.Start < c.readyAfter(before, pin) {
				return false
			}
			before, new = pin, false
			continue
		}
		if kept[job] < slotsOf(&c.old.Jobs[job]) {
			if start, ok := c.soonest(before, pin); ok {
				c.more += c.now.JobWorth(job, pin.Start, pin.End) - c.now.JobWorth(job, start, pin.End)
				kept[job]++
				before, new = pin, true
				continue
			}
		}
		if !c.takeOut(i) {
			return false
		}
	}
	return true
}

// readyAfter returns when a pin may begin after the one before it, which may be nil.
func (c *carrying) readyAfter(before, pin *Slot) int {
	if before == nil {
		return c.now.SetupBetween(None, 0, pin.Node, pin.Start).ReadyMin
	}
	return c.now.SetupBetween(before.Node, before.End, pin.Node, pin.Start).ReadyMin
}

// soonest returns the minute, not before its start, from which on the pin is a slot that the planner could have
// made in the problem as it was; false if there is none.
func (c *carrying) soonest(before, pin *Slot) (int, bool) {
	p := c.old
	job := &p.Jobs[p.Nodes[pin.Node].Job]
	if pin.End%p.GridMin != 0 || job.Barred {
		return 0, false
	}
	if p.inBreak(*pin) {
		return 0, false
	}
	start := max(pin.Start, pin.End-job.MaxMin, c.readyAfter(before, pin))
	for _, w := range p.Nodes[pin.Node].Open {
		from, to := max(start, w.From, p.FromMin), min(w.To, p.Minutes)
		if pin.End <= to && pin.End-from >= job.MinMin {
			return from, true
		}
	}
	return 0, false
}

// takeOut takes the pin at an index out, if what stands around it then still keeps the limits.
func (c *carrying) takeOut(i int) bool {
	p, pin := c.now, &c.now.Pins[i]
	job := p.Nodes[pin.Node].Job
	if c.was.Complete && c.old.mustHave(job) {
		return false
	}
	spent := 60*(pin.End-pin.Start) + p.OverheadSec
	follows := i == 0 || pin.Start >= c.readyAfter(&p.Pins[i-1], pin)
	leads := i+1 == len(p.Pins) || p.Pins[i+1].Start >= c.readyAfter(pin, &p.Pins[i+1])
	switch w := c.ways(); {
	case !follows || !leads: // then its neighbours have no more than its own time between them
		if max(w.longest, p.longestChange())+p.OverheadSec > 60*(pin.End-pin.Start) {
			return false
		}
	case !w.direct(p, p.Nodes[pin.Node].Place, pin.Start, pin.Start, spent):
		return false
	}
	if p.inBreak(*pin) {
		return false
	}
	c.more += p.JobWorth(job, pin.Start, pin.End)
	c.begins, c.ends = min(c.begins, pin.Start), min(c.ends, pin.End)
	return true
}

func (p *Problem) longestChange() int {
	sec := 0
	for _, r := range p.Receivers {
		sec = max(sec, r.ChangeSec)
	}
	return sec
}

// breaks takes out what begins right after a break, for after it everything depends on where the telescope stood
// before, and something there was taken out.
func (c *carrying) breaks() bool {
	p := c.now
	if c.begins >= p.Minutes {
		return true // nothing was taken out
	}
	for i, b := range p.Breaks {
		// From then on whoever stood wherever may begin.
		settled := b.To + ceilMin(max(c.ways().afterBreak[i], p.longestChange())+p.OverheadSec)
		if c.ends > b.From && c.begins >= settled {
			continue
		}
		if slices.ContainsFunc(p.Pins, func(s Slot) bool { return s.Start < settled && s.End > b.From }) {
			return false // pins stay
		}
		most, apart, must := p.mostFrom(b.To, settled)
		if must && c.was.Complete {
			return false
		}
		c.more += most * Micro(1+max(0, settled-b.To-1)/apart)
	}
	return true
}

// mostFrom returns what a slot that begins from minute from on and before minute to is worth at most, how far
// apart the starts of two such slots are at least, and whether a job that must be there can have one.
func (p *Problem) mostFrom(from, to int) (most Micro, apart int, must bool) {
	apart = p.Minutes
	for i := range p.Nodes {
		n := &p.Nodes[i]
		job := &p.Jobs[n.Job]
		if job.Barred {
			continue
		}
		for _, w := range n.Open {
			if w.To < from+job.MinMin || w.From >= to {
				continue
			}
			apart, must = min(apart, job.MinMin+ceilMin(p.OverheadSec)), must || job.Must
			if p.JobWorth(n.Job, max(from, w.From), min(to+job.MaxMin, w.To)) <= most {
				continue
			}
			var sum Micro
			for k := range job.Terms {
				gathers := int32(0)
				for start := max(from, w.From); start < to; start++ {
					gathers = max(gathers, job.Terms[k].gathered(start, min(start+job.MaxMin, w.To)))
				}
				sum += job.Terms[k].worthOf(gathers)
			}
			most = max(most, sum)
		}
	}
	return most, max(1, apart), must
}

func sameSession(a, b *Problem) bool {
	return !a.Cropped && !b.Cropped && a.Start.Equal(b.Start) && a.Minutes == b.Minutes && a.OverheadSec == b.OverheadSec &&
		slices.Equal(a.Receivers, b.Receivers) && slices.Equal(a.Breaks, b.Breaks) && len(a.Jobs) == len(b.Jobs) &&
		a.Slew.Places == b.Slew.Places && a.Slew.BinMin == b.Slew.BinMin && a.Slew.Bins == b.Slew.Bins && alike(a.Slew.Sec, b.Slew.Sec)
}

// alike tells whether two lists are equal, at once where they are the same.
func alike[T comparable](a, b []T) bool {
	return len(a) == len(b) && (len(a) == 0 || &a[0] == &b[0] || slices.Equal(a, b))
}

// nodesWithin tells whether every node can be observed only when it could be before.
func nodesWithin(now, was *Problem) bool {
	if len(now.Nodes) != len(was.Nodes) {
		return false
	}
	if len(now.Nodes) == 0 || &now.Nodes[0] == &was.Nodes[0] {
		return true
	}
	for i := range now.Nodes {
		n, o := &now.Nodes[i], &was.Nodes[i]
		if n.Job != o.Job || n.Place != o.Place {
			return false
		}
		for _, w := range n.Open {
			if !slices.ContainsFunc(o.Open, func(o Window) bool { return o.From <= w.From && w.To <= o.To }) {
				return false
			}
		}
	}
	return true
}
