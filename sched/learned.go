package sched

import "slices"

// Learned is what a search has found out that is still of use when its problem is planned again after an edit:
// the worth of slots, the prices of jobs and what routes have to remember. It is only read, and any number of
// searches may start from it; the problem it comes from must not be changed any more.
type Learned struct {
	tables *tables
	perMin Micro   // the price of a minute
	prices []Micro // of jobs
	jobs   []jobMemory
	keep   []memory
	bits   int // of memories that are taken
}

// serves tells whether the problem is the one that was learned from but for edits.
func (l *Learned) serves(p *Problem) bool {
	return l != nil && sameSession(l.tables.p, p) && l.tables.p.GridMin == p.GridMin && len(l.tables.p.Nodes) == len(p.Nodes)
}

// sameWorth tells whether the slots of both jobs are worth the same and are as long.
func sameWorth(a, b *Job) bool {
	return a.MinMin == b.MinMin && a.MaxMin == b.MaxMin && slices.EqualFunc(a.Terms, b.Terms, func(a, b Term) bool {
		return a.Scale == b.Scale && a.Curve == b.Curve && a.Wanted == b.Wanted && a.Least == b.Least && slices.Equal(a.Cum, b.Cum)
	})
}

// keepsRows tells whether the worth of the job's slots is what it was for older tables, which hold all of them.
func (t *tables) keepsRows(old *tables, job int) bool {
	if old == nil || !old.chosen[job] || !sameWorth(&t.p.Jobs[job], &old.p.Jobs[job]) {
		return false
	}
	for i := range t.p.Nodes {
		if t.p.Nodes[i].Job != job {
			continue
		}
		if old.p.Nodes[i].Job != job {
			return false
		}
		was := old.winFrom[i*t.span : (i+1)*t.span]
		for e, from := range t.winFrom[i*t.span : (i+1)*t.span] {
			if from != None && (was[e] == None || was[e] > from) {
				return false
			}
		}
	}
	return true
}

// pricesFrom returns the learned prices, and for jobs that are new or worth something else what a minute is worth.
func (t *tables) pricesFrom(l *Learned) []Micro {
	prices := slices.Clone(l.prices)
	for j := range prices {
		if t.chosen[j] && (!l.tables.chosen[j] || !sameWorth(&t.p.Jobs[j], &l.tables.p.Jobs[j])) {
			prices[j] = t.minutePrice(j, t.bestByLength(j), l.perMin)
		}
	}
	return prices
}

// take starts from what was learned: the prices are good enough for routes with memory from the beginning. Of a job
// that may have more slots than then nothing is kept in mind: as many as there were then would seem to be all.
func (b *bounder) take(l *Learned) {
	copy(b.router.keep, l.keep)
	for j, m := range l.jobs {
		if left := b.t.left(b.used, j); b.t.chosen[j] && left <= m.slots {
			b.router.jobs[j] = jobMemory{first: m.first, slots: left}
		}
	}
	b.bitsUsed = l.bits
	b.enter(coarseRouting)
	b.changed = true
}

func (s *search) learned() *Learned {
	l := &Learned{tables: s.t, perMin: s.perMin, prices: slices.Clone(s.prices)}
	if b := s.bound; b != nil {
		l.jobs, l.keep, l.bits = slices.Clone(b.router.jobs), slices.Clone(b.router.keep), b.bitsUsed
	}
	return l
}
