package sched

import (
	"fmt"
	"slices"
)

// ReasonKind says why a job has no slot.
type ReasonKind string

// The reasons, in the order in which they are looked for.
const (
	Barred      ReasonKind = "barred"        // excluded by the observer
	NotUp       ReasonKind = "not up"        // never long enough above its limits
	SunTooClose ReasonKind = "sun too close" // the Sun limit leaves too little of it
	Eclipsed    ReasonKind = "eclipsed"      // eclipses and breaks leave too little of it
	Crowded     ReasonKind = "crowded"       // of a huge campaign others promise more, and only those are looked at
	Past        ReasonKind = "past"          // its time in this session is over
	TooLow      ReasonKind = "too low"       // so low or so short that its best slot reaches too little to be of use
	NotDue      ReasonKind = "not due"       // its best slot is worth nothing to speak of
	NoRoom      ReasonKind = "no room"       // pins, breaks and setups leave no place for it
	Outranked   ReasonKind = "outranked"     // putting it in costs worth
	Free        ReasonKind = "fits"          // it fits as things are, and adds worth
)

// A Reason is the one reason why a job has no slot, with its number.
type Reason struct {
	Job  int
	Kind ReasonKind
	Cost Micro // of putting it in all the same, with Outranked; below zero: it would gain
	Text string
}

// LeftOut returns one reason for each job, source and receiver, that has no slot in the plan, in job order.
func LeftOut(p *Problem, plan Plan) []Reason {
	slots := plan.Sorted().Slots
	has := make([]bool, len(p.Jobs))
	for _, s := range slots {
		has[p.Nodes[s.Node].Job] = true
	}
	in := newInserter(p, slots)
	var reasons []Reason
	for job := range p.Jobs {
		if !has[job] {
			reasons = append(reasons, in.whyNot(job))
		}
	}
	return reasons
}

// Absent returns one reason for each source that has no slot in the plan, in the order of the jobs: of its
// receivers' reasons the one that comes nearest to letting it in.
func Absent(p *Problem, plan Plan) []Reason {
	planned := map[string]bool{}
	for _, s := range plan.Slots {
		planned[p.Jobs[p.Nodes[s.Node].Job].Source] = true
	}
	var absent []Reason
	for _, r := range LeftOut(p, plan) {
		source := p.Jobs[r.Job].Source
		last := len(absent) - 1
		switch {
		case planned[source]:
		case last < 0 || p.Jobs[absent[last].Job].Source != source:
			absent = append(absent, r)
		case r.nearer(absent[last]):
			absent[last] = r
		}
	}
	return absent
}

// kinds are the reasons from the firmest to the one that comes nearest to a place in the plan.
var kinds = []ReasonKind{Barred, NotUp, SunTooClose, Eclipsed, Crowded, Past, TooLow, NotDue, NoRoom, Outranked, Free}

func (r Reason) nearer(than Reason) bool {
	a, b := slices.Index(kinds, r.Kind), slices.Index(kinds, than.Kind)
	return a > b || a == b && r.Cost < than.Cost
}

func (in *inserter) whyNot(job int) Reason {
	p := in.p
	j, f := &p.Jobs[job], p.Jobs[job].Facts
	longest, later := p.longestOpen(job)
	reason := func(kind ReasonKind, format string, args ...any) Reason {
		return Reason{Job: job, Kind: kind, Text: fmt.Sprintf(format, args...)}
	}
	switch {
	case j.Barred:
		return reason(Barred, "barred from this session")
	case longest < j.MinMin && f.UpMin < j.MinMin:
		return reason(NotUp, "within its limits for %d of the %d min needed; highest %.1f°", f.UpMin, j.MinMin, f.HighestEl)
	case longest < j.MinMin && f.SunMin < j.MinMin:
		return reason(SunTooClose, "%.1f° from the Sun, limit %.1f°: leaves %d of the %d min needed", f.SunDeg, f.SunLimit, f.SunMin, j.MinMin)
	case longest < j.MinMin && f.ClearMin < j.MinMin:
		return reason(Eclipsed, "eclipses and breaks leave %d of the %d min needed", f.ClearMin, j.MinMin)
	case f.Crowded:
		return reason(Crowded, "%d others promise more in this session, and no more are looked at in so large a campaign", MostSearched)
	case longest < j.MinMin:
		return reason(NotUp, "the mount can stay on it for %d of the %d min needed", longest, j.MinMin)
	case later < j.MinMin:
		return reason(Past, "%d min of it are left after %s; %d min needed", later, p.clock(p.FromMin), j.MinMin)
	}
	if best := p.bestSlotWorth(job); best < tellable {
		if share, least := p.mostGathered(job); share < least {
			return reason(TooLow, "its best slot reaches %.2f of the wanted, of use from %.2f on; highest %.1f°", share, least, f.HighestEl)
		}
		if f.DebtAim == "" {
			return reason(NotDue, "not due: its best slot is worth %s", best)
		}
		return reason(NotDue, "not due: debt %.2f (%s); its best slot is worth %s", f.Debt, f.DebtAim, best)
	}
	return in.reason(job)
}

// longestOpen returns the job's longest stretch within limits, session and breaks, and the longest that
// is left of these after the time past.
func (p *Problem) longestOpen(job int) (all, later int) {
	whole := *p
	whole.FromMin = 0
	for _, n := range p.Nodes {
		if n.Job != job {
			continue
		}
		for _, w := range n.Open {
			for _, s := range whole.cut(w.Span) {
				all = max(all, s.To-s.From)
				later = max(later, s.To-max(s.From, p.FromMin))
			}
		}
	}
	return all, later
}

// bestSlotWorth returns the most that a slot of the job can be worth in this session.
func (p *Problem) bestSlotWorth(job int) Micro {
	j := &p.Jobs[job]
	var best Micro
	for _, n := range p.Nodes {
		if n.Job != job {
			continue
		}
		for _, w := range n.Open {
			for _, s := range p.cut(w.Span) {
				for end := s.From + j.MinMin; end <= s.To; end++ {
					if end%p.GridMin == 0 {
						best = max(best, p.JobWorth(job, max(s.From, end-j.MaxMin), end))
					}
				}
			}
		}
	}
	return best
}

// tellable is the least worth that is not shown as 0.00.
const tellable = Unit / 200

// mostGathered returns, for the term that is needed and comes nearest to being of use, the share of the
// wanted that the job's best slot reaches and the share from which on it is of use.
func (p *Problem) mostGathered(job int) (share, least float64) {
	j := &p.Jobs[job]
	nearest := -1.0
	for k := range j.Terms {
		t := &j.Terms[k]
		if t.Scale < tellable || t.Least == 0 {
			continue
		}
		var most int32
		for _, n := range p.Nodes {
			if n.Job != job {
				continue
			}
			for _, w := range n.Open {
				for _, s := range p.cut(w.Span) {
					for end := s.From + j.MinMin; end <= s.To; end++ {
						most = max(most, t.gathered(max(s.From, end-j.MaxMin), end))
					}
				}
			}
		}
		if near := float64(most) / float64(t.Least); near > nearest {
			nearest, share, least = near, float64(most)/float64(t.Wanted), float64(t.Least)/float64(t.Wanted)
		}
	}
	return share, least
}
