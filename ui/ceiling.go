package ui

import (
	"fmt"
	"slices"

	"example.org/tallystick/sched"
)

// mostProofs is how many ceilings a desk keeps: an edit may take away what the latest was proved with and leave
// what an earlier one needs.
const mostProofs = 6

// prove keeps a ceiling, and lets go those that say no more than it.
func (d *desk) prove(b sched.Bound) {
	d.proofs = slices.DeleteFunc(d.proofs, func(old sched.Bound) bool {
		c, ok := sched.CarryCeiling(b, old.Of)
		return ok && c.Ceiling <= old.Ceiling && (old.Complete || !c.Complete)
	})
	if len(d.proofs) == mostProofs {
		d.proofs = slices.Delete(d.proofs, 1, 2) // the first is of the session before it was edited
	}
	d.proofs = append(d.proofs, b)
	if d.view != nil {
		d.view.ceilingKnown = false
	}
}

// proveAnew carries the ceilings over to the session as it is after the logbook has changed.
func (d *desk) proveAnew(p *sched.Problem) {
	old := d.proofs
	d.proofs = nil
	for _, b := range old {
		q := *p
		q.FromMin, q.Pins, q.Jobs = b.Of.FromMin, b.Of.Pins, slices.Clone(p.Jobs)
		for j := range min(len(q.Jobs), len(b.Of.Jobs)) {
			q.Jobs[j].Barred = b.Of.Jobs[j].Barred
		}
		if c, ok := sched.CarryCeiling(b, &q); ok {
			d.prove(c)
		}
	}
}

// settled is the minute of a session before which nothing can be changed any more.
func (w *world) settled(d *desk) int {
	switch {
	case d.prepared == nil || w.now.Before(d.session.Start):
		return 0
	case w.now.After(d.session.End):
		return d.prepared.Problem.Minutes
	}
	return max(d.prepared.Minute(w.now)+1, d.lostTo)
}

// around returns the problem of planning around the pins of a plan and what begins before a minute.
func around(p *sched.Problem, plan sched.Plan, minute int) *sched.Problem {
	q := startingAt(p, minute)
	for _, s := range plan.Slots {
		if s.Pinned || s.Start < minute {
			q.Pins = append(q.Pins, s)
		}
	}
	return q
}

// ceilingOf returns the lowest ceiling that follows for a plan from what was proved; p carries its bars. One that
// counts time before which nothing need be settled yet serves only where there is no other.
func (d *desk) ceilingOf(p *sched.Problem, plan sched.Plan, settled int) (sched.Bound, bool) {
	var best sched.Bound
	found := false
	now := around(p, plan, settled)
	for _, b := range d.proofs {
		q := now
		if b.Of.FromMin > settled {
			q = around(p, plan, b.Of.FromMin)
		}
		c, ok := sched.CarryCeiling(b, q)
		if ok && (!found || q.FromMin < best.Of.FromMin || q.FromMin == best.Of.FromMin && c.Ceiling < best.Ceiling) {
			best, found = c, true
		}
	}
	return best, found
}

// provenFor returns the ceiling of a plan, if there is one and it holds of the plan itself.
func (w *world) provenFor(d *desk, s snapshot) sched.Bound {
	b, ok := d.ceilingOf(d.preparedWith(s.bars).Problem, s.plan, w.settled(d))
	if !ok || !b.Holds(s.plan) {
		return sched.Bound{}
	}
	return b
}

// distance says how far the plan shown is from the best there can be, as far as that was proved.
func (w *world) distance(d *desk, r *reading) string {
	settled := w.settled(d)
	if !r.ceilingKnown || r.ceilingAt != settled {
		r.ceiling, r.ceilingFound = d.distanceWords(r, settled)
		r.ceilingKnown, r.ceilingAt = true, settled
	}
	if !r.ceilingFound && w.work != nil && w.work.desk == d {
		return "ceiling being sought"
	}
	return r.ceiling
}

// distanceWords is false where no ceiling follows.
func (d *desk) distanceWords(r *reading, settled int) (words string, found bool) {
	b, ok := d.ceilingOf(r.problem, r.plan, settled)
	worth := r.verdict.Worth
	switch {
	case !ok && len(d.proofs) > 0:
		return "ceiling out of date: R plans again", false
	case !ok:
		return "no ceiling yet", false
	case b.Holds(r.plan):
		text := fmt.Sprintf("ceiling %s", b.Ceiling)
		if b.Of.FromMin > settled {
			text += " as from " + clock(d.prepared.Instant(b.Of.FromMin))
		}
		if worth >= b.Ceiling {
			return text + ": none can be better", true
		}
		return fmt.Sprintf("%s, within %.1f %%", text, 100*float64(b.Ceiling-worth)/float64(b.Ceiling)), true
	case len(r.verdict.Breaches) > 0:
		return fmt.Sprintf("within the limits: %s at most", b.Ceiling), true
	}
	return fmt.Sprintf("if complete: %s at most", b.Ceiling), true
}
