package sched

import (
	"math"
	"slices"
)

// unreachable is below every value and far enough from the end of 64 bits that worth can be added to it.
const unreachable Micro = math.MinInt64 / 4

// tables is what the search looks up instead of working out again: the worth of every slot, when each
// node can be observed, which jobs are worth considering. It is made once and then only read.
type tables struct {
	labels  int // that a sweep for the ceiling keeps
	p       *Problem
	span    int         // Minutes + 1
	rows    []worthRows // by job
	winFrom []int32     // node·span + end: where the window of a slot with that end opens, or None
	windows [][]Span    // by node: cut at session, breaks and time past
	change  [][]int32   // receiver before, node: seconds
	after   []int32     // by minute: the first break that begins there or later, or len(Breaks)
	breakTo []bool      // by minute: a break ends there
	bits    []jobBits   // by job
	words   int         // of a set of jobs
	bonus   []Micro     // by job: what its first slot gains in the search beyond its worth
	best    []Micro     // by job: the worth of its best slot
	chosen  []bool      // by job: takes part in the search
	pull    []float64   // by job: the most that its slots are worth by the minute, over what a minute is worth
	cropped bool        // jobs or slots were left out that might have been in the best plan
}

// worthRows holds the worth of a job's slots, end by end.
type worthRows struct {
	offset []int32 // by end: into worth, or None
	worth  []Micro // from offset: lengths MinMin, MinMin+1, …
}

// jobBits are the bits of a job in a set of jobs: one for each slot that it may have. It is spent when
// the last is set.
type jobBits struct{ first, last int }

// MostSearched is how many jobs the search considers. It bounds its memory: a session has room for far fewer slots.
const MostSearched = 320

// maxSlotsSearched is the most slots of one job that the search will plan.
const maxSlotsSearched = 8

// newTables makes the tables of a problem on so many goroutines; they do not depend on their number. What an edit
// has left as it was is taken over from the older tables, if there are any.
func newTables(p *Problem, old *tables, workers int) *tables {
	t := &tables{p: p, span: p.Minutes + 1, labels: mostLabels, cropped: p.Cropped, breakTo: make([]bool, p.Minutes+1)}
	t.cutWindows()
	t.rows = make([]worthRows, len(p.Jobs))
	t.best = make([]Micro, len(p.Jobs))
	t.choose()
	var work []func()
	for w := range max(1, workers) {
		work = append(work, func() {
			var memo termMemo
			for j := w; j < len(p.Jobs); j += max(1, workers) {
				if t.chosen[j] {
					t.layRows(j, old, &memo)
				}
			}
		})
	}
	inParallel(workers, work)
	t.layBits()
	t.layBonus()
	t.layChanges()
	t.after = make([]int32, t.span+1)
	b := 0
	for m := range t.after {
		for b < len(p.Breaks) && p.Breaks[b].From < m {
			b++
		}
		t.after[m] = int32(b)
	}
	for _, b := range p.Breaks {
		if b.To >= 0 && b.To < t.span {
			t.breakTo[b.To] = true
		}
	}
	return t
}

func (t *tables) cutWindows() {
	p := t.p
	t.windows = make([][]Span, len(p.Nodes))
	t.winFrom = make([]int32, len(p.Nodes)*t.span)
	for i := range t.winFrom {
		t.winFrom[i] = None
	}
	for i, n := range p.Nodes {
		least := p.Jobs[n.Job].MinMin
		for _, w := range n.Open {
			for _, s := range p.cut(w.Span) {
				if s.To-s.From < least {
					continue
				}
				t.windows[i] = append(t.windows[i], s)
				for e := s.From + least; e <= s.To; e++ {
					t.winFrom[i*t.span+e] = int32(s.From)
				}
			}
		}
	}
}

// cut returns what is left of a window within the session and the time to come, between the breaks.
func (p *Problem) cut(w Span) []Span {
	w = Span{From: max(w.From, 0, p.FromMin), To: min(w.To, p.Minutes)}
	var parts []Span
	for _, b := range p.Breaks {
		if b.To <= w.From || b.From >= w.To {
			continue
		}
		parts = append(parts, Span{From: w.From, To: b.From})
		w.From = b.To
	}
	return append(parts, w)
}

// choose picks the jobs that take part: all of a usual session, and of a huge one the foremost.
func (t *tables) choose() {
	t.chosen = make([]bool, len(t.p.Jobs))
	order := t.foremost()
	if len(order) > MostSearched {
		order = order[:MostSearched]
		t.cropped = true
	}
	for _, j := range order {
		t.chosen[j] = true
	}
}

// Foremost returns the jobs that the search would consider, were there room for all: those that must be there first,
// then those whose whole window would bring the most; those that can have no slot are none of them. Slews do not count, and may be missing.
func Foremost(p *Problem) []int {
	t := &tables{p: p, span: p.Minutes + 1}
	t.cutWindows()
	return t.foremost()
}

func (t *tables) foremost() []int {
	p := t.p
	most := make([]Micro, len(p.Jobs))
	possible := make([]bool, len(p.Jobs))
	var order []int
	for i, n := range p.Nodes {
		for _, w := range t.windows[i] {
			possible[n.Job] = true
			most[n.Job] = max(most[n.Job], p.JobWorth(n.Job, w.From, w.To))
		}
	}
	for j := range p.Jobs {
		if !p.Jobs[j].Barred && possible[j] {
			order = append(order, j)
		}
	}
	sortByDesc(order, func(j int) Micro {
		if p.Jobs[j].Must {
			return math.MaxInt64
		}
		return most[j]
	})
	return order
}

// layRows works out what the slots of a job are worth, or takes it over, and leaves the job out if it can have none. One
// whose slots are worth nothing stays: a slot of it may bring the next receiver into the beam before a break.
func (t *tables) layRows(job int, old *tables, memo *termMemo) {
	if t.keepsRows(old, job) {
		t.rows[job], t.best[job] = old.rows[job], old.best[job]
	} else {
		t.rows[job] = t.worthRows(job, memo)
	}
	t.chosen[job] = len(t.rows[job].worth) > 0
}

func (t *tables) worthRows(job int, memo *termMemo) worthRows {
	p, j := t.p, &t.p.Jobs[job]
	opens := make([]int32, t.span) // by end: the earliest start that any node of the job allows
	for i := range opens {
		opens[i] = None
	}
	entries := 0
	for i, n := range p.Nodes {
		if n.Job != job {
			continue
		}
		for e := 0; e < t.span; e += p.GridMin {
			from := t.winFrom[i*t.span+e]
			if from != None && (opens[e] == None || from < opens[e]) {
				opens[e] = from
			}
		}
	}
	for e, from := range opens {
		if from != None {
			entries += min(j.MaxMin, e-int(from)) - j.MinMin + 1
		}
	}
	rows := worthRows{offset: opens, worth: make([]Micro, 0, entries)}
	memo.of(j)
	for e, from := range opens {
		if from == None {
			continue
		}
		rows.offset[e] = int32(len(rows.worth))
		for length := j.MinMin; length <= min(j.MaxMin, e-int(from)); length++ {
			w := memo.worth(e-length, e)
			t.best[job] = max(t.best[job], w)
			rows.worth = append(rows.worth, w)
		}
	}
	return rows
}

// row returns the worth of the job's slots that end at minute end, by length from MinMin on.
func (r *worthRows) row(end int) []Micro { return r.worth[r.offset[end]:] }

// A termMemo remembers the worth that a term gives for what a slot gathers: many slots gather the same.
type termMemo struct {
	job  *Job
	seen [][]Micro // by term, gathered; 0 is not known yet, else worth + 1
}

// maxMemo keeps the memory of a term small; what is gathered beyond it is worked out each time.
const maxMemo = 1 << 14

// of makes the memo that of a job; what it remembered of another is forgotten, its memory used again.
func (m *termMemo) of(j *Job) {
	m.job = j
	for len(m.seen) < len(j.Terms) {
		m.seen = append(m.seen, nil)
	}
	for i := range j.Terms {
		n := min(maxMemo, int(j.Terms[i].gathered(0, len(j.Terms[i].Cum)))+1)
		m.seen[i] = slices.Grow(m.seen[i][:0], n)[:n]
		clear(m.seen[i])
	}
}

func (m *termMemo) worth(start, end int) Micro {
	var sum Micro
	for i := range m.job.Terms {
		t := &m.job.Terms[i]
		g := t.Cum[end] - t.Cum[start]
		if int(g) >= len(m.seen[i]) {
			sum += t.worthOf(g)
			continue
		}
		if m.seen[i][g] == 0 {
			m.seen[i][g] = t.worthOf(g) + 1
		}
		sum += m.seen[i][g] - 1
	}
	return sum
}

func (t *tables) layBits() {
	t.bits = make([]jobBits, len(t.p.Jobs))
	next := 0
	for j := range t.p.Jobs {
		if !t.chosen[j] {
			continue
		}
		n := min(t.p.Jobs[j].MaxSlots, maxSlotsSearched)
		t.cropped = t.cropped || n < t.p.Jobs[j].MaxSlots
		t.bits[j] = jobBits{first: next, last: next + n - 1}
		next += n
	}
	t.words = max(1, (next+63)/64)
}

// layBonus makes a job that must be in the plan outrank everything else together.
func (t *tables) layBonus() {
	var all Micro
	for j := range t.p.Jobs {
		all += t.best[j] * Micro(min(t.p.Jobs[j].MaxSlots, maxSlotsSearched))
	}
	t.bonus = make([]Micro, len(t.p.Jobs))
	for j := range t.p.Jobs {
		if t.p.Jobs[j].Must && t.chosen[j] {
			t.bonus[j] = all + Unit
		}
	}
}

func (t *tables) layChanges() {
	p := t.p
	t.change = make([][]int32, len(p.Receivers))
	for old := range t.change {
		t.change[old] = make([]int32, len(p.Nodes))
		for i, n := range p.Nodes {
			if r := p.Jobs[n.Job].Receiver; r != old {
				t.change[old][i] = int32(p.Receivers[r].ChangeSec)
			}
		}
	}
}

// setupSpread returns how much longer the longest setup is than the shortest, in minutes, rounded up: of
// all departures, places and receivers.
func (t *tables) setupSpread() int {
	p := t.p
	low, high := 1<<30, 0
	for _, sec := range p.Slew.Sec {
		low, high = min(low, int(sec)), max(high, int(sec))
	}
	for _, r := range p.Receivers {
		high = max(high, r.ChangeSec)
	}
	return ceilMin(max(0, high-low)) + 1
}

// spend marks one more slot of the job in the set.
func (t *tables) spend(set []uint64, job int) {
	if !t.chosen[job] {
		return
	}
	b := t.bits[job]
	for i := b.first; i <= b.last; i++ {
		if set[i>>6]&(1<<(i&63)) == 0 {
			set[i>>6] |= 1 << (i & 63)
			return
		}
	}
}

func (t *tables) spent(set []uint64, job int) bool {
	last := t.bits[job].last
	return !t.chosen[job] || set[last>>6]&(1<<(last&63)) != 0
}

// left returns how many more slots the job may have.
func (t *tables) left(set []uint64, job int) int {
	n := 0
	for i := t.bits[job].first; i <= t.bits[job].last; i++ {
		if set[i>>6]&(1<<(i&63)) == 0 {
			n++
		}
	}
	return n
}

func (t *tables) begun(set []uint64, job int) bool {
	first := t.bits[job].first
	return t.chosen[job] && set[first>>6]&(1<<(first&63)) != 0
}

// value is what the search maximises: worth, and the bonus of the jobs that must be there.
func (t *tables) value(slots []Slot) Micro {
	set := make([]uint64, t.words)
	var sum Micro
	for _, s := range slots {
		job := t.p.Nodes[s.Node].Job
		sum += t.p.JobWorth(job, s.Start, s.End)
		if !t.begun(set, job) {
			sum += t.bonus[job]
		}
		t.spend(set, job)
	}
	return sum
}
