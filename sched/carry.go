package sched

import (
	"reflect"
	"slices"
)

// CarryCeiling returns a ceiling of the problem now that follows from the ceiling of the problem as it was,
// so that an edit need not wait for a proof. A bar, a pin that is a slot the planner could have made, a window
// or a slot length cut shorter and time gone by can only lower what the best plan is worth: the ceiling stays.
// A job that may have more slots than before, or is worth something else, raises it by what all its slots can be worth at most.
// It is false where nothing follows: when a pin or a job that must be there is given up, a window opens, or
// the setups are others.
func CarryCeiling(was *Problem, ceiling Micro, now *Problem) (Micro, bool) {
	if !sameSession(was, now) || now.GridMin%was.GridMin != 0 || now.FromMin < was.FromMin || !pinsCarry(was, now) {
		return 0, false
	}
	for i := range now.Nodes {
		if !nodeWithin(&now.Nodes[i], &was.Nodes[i]) {
			return 0, false
		}
	}
	for j := range now.Jobs {
		old, job := &was.Jobs[j], &now.Jobs[j]
		if old.Source != job.Source || old.Receiver != job.Receiver || job.MinMin < old.MinMin || job.MaxMin > old.MaxMin ||
			old.Must && !old.Barred && (job.Barred || !job.Must) {
			return 0, false
		}
		more := slotsOf(job) > slotsOf(old)
		if more && !now.mayBeLeftOut(j) {
			return 0, false // without its slots the rest of a plan may be none
		}
		if !job.Barred && (more || !reflect.DeepEqual(old.Terms, job.Terms)) {
			ceiling += Micro(min(job.MaxSlots, now.Minutes/job.MinMin)) * now.bestSlotWorth(j)
		}
	}
	return ceiling, true
}

func slotsOf(j *Job) int {
	if j.Barred {
		return 0
	}
	return j.MaxSlots
}

func sameSession(a, b *Problem) bool {
	return a.Start.Equal(b.Start) && a.Minutes == b.Minutes && a.OverheadSec == b.OverheadSec &&
		slices.Equal(a.Receivers, b.Receivers) && slices.Equal(a.Breaks, b.Breaks) &&
		len(a.Jobs) == len(b.Jobs) && len(a.Nodes) == len(b.Nodes) &&
		a.Slew.Places == b.Slew.Places && a.Slew.BinMin == b.Slew.BinMin && a.Slew.Bins == b.Slew.Bins && slices.Equal(a.Slew.Sec, b.Slew.Sec)
}

// pinsCarry tells whether all pins there were still stand, and each new one is a slot that the planner could have made.
func pinsCarry(was, now *Problem) bool {
	for _, pin := range was.Pins {
		if !slices.ContainsFunc(now.Pins, pin.same) {
			return false
		}
	}
	added := false
	for _, pin := range now.Pins {
		job := &was.Jobs[was.Nodes[pin.Node].Job]
		length := pin.End - pin.Start
		if slices.ContainsFunc(was.Pins, pin.same) {
			continue
		}
		open := slices.ContainsFunc(was.Nodes[pin.Node].Open, func(w Window) bool {
			return slices.ContainsFunc(was.cut(w.Span), func(s Span) bool { return s.From <= pin.Start && pin.End <= s.To })
		})
		if job.Barred || length < job.MinMin || length > job.MaxMin || pin.End%was.GridMin != 0 || !open {
			return false
		}
		added = true
	}
	return !added || len(Verify(now, Plan{Slots: pinned(now)}).Breaches) == 0
}

// nodeWithin tells whether a node can be observed only when it could be before.
func nodeWithin(now, was *Node) bool {
	if now.Job != was.Job || now.Place != was.Place {
		return false
	}
	for _, w := range now.Open {
		if !slices.ContainsFunc(was.Open, func(o Window) bool { return o.From <= w.From && w.To <= o.To }) {
			return false
		}
	}
	return true
}

// mayBeLeftOut tells whether any slot of the job can be taken out of any plan and leave a plan: no way between two
// other nodes is longer than the way by it. After a break everything depends on where the telescope stood
// before, so that with breaks it is not known.
func (p *Problem) mayBeLeftOut(job int) bool {
	if len(p.Breaks) > 0 {
		return false
	}
	setup := func(from, to, bin int) int {
		return ceilMin(max(p.slewInBin(from, to, bin), p.changeSec(from, to)) + p.OverheadSec)
	}
	for n := range p.Nodes {
		if p.Nodes[n].Job != job {
			continue
		}
		for to := range p.Nodes {
			soonest := 1 << 30 // from n to there, in this bin or later
			for bin := p.Slew.Bins - 1; bin >= 0; bin-- {
				soonest = min(soonest, setup(n, to, bin))
				for from := range p.Nodes {
					if setup(from, to, bin) > setup(from, n, bin)+p.Jobs[job].MinMin+soonest {
						return false
					}
				}
			}
		}
	}
	return true
}
