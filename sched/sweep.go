package sched

import "slices"

// A gap is a stretch of the session that the search may fill: after one slot, before another.
type gap struct {
	prev, prevEnd int  // the slot before; None and 0 at the start of the session
	next          int  // node of the slot after, or None at the end of the session
	nextStart     int  // where it starts; kept if fixed, else only its end is kept
	nextEnd       int  //
	fixed         bool // the slot after may not be moved
}

// A sweeper fills gaps by dynamic programming over time. Its states are (node, minute at which the
// telescope is ready to start it) and (node, end of slot); each keeps its best value and, through its
// parents, its own path, and is never continued with a job that this path has spent: every path is a
// plan. The buffers are used again from gap to gap.
type sweeper struct {
	t    *tables
	from int
	wide int // minutes of the gap, both ends counted
	nw   int // words of a set of jobs, numbered anew for each gap

	targets []target // by falling latest start
	next    int      // index of the slot after the gap among them, or None
	picky   float64  // jobs that pull less are left out; see tables.pull
	relaxed bool     // jobs may come again, though not at once
	grid    int      // ends lie on multiples of this
	ready   []Micro  // target·wide + minute − from: best value when ready by then
	parent  []int32  // likewise: the ended state it comes from, or None

	ended []Micro  // target·wide + end − from
	came  []int32  // likewise: the ended state before
	start []int32  // likewise: minute
	set   []uint64 // likewise, ·nw: jobs spent on the way

	// By target, apart from the rest because every departure reads them.
	places []int32
	lasts  []int32
	words  []int32  // where in a set to find whether its job is spent
	bits   []uint64 // 0 for the slot after the gap, which is never spent
	change [][]int32

	prefix  []int32 // by target: its best ended state so far, or None
	best    []Micro // by minute: best of all ended states until then
	second  []Micro // by minute: the best of those with another job than that one's
	free    int     // the end of the last break
	spread  int     // minutes by which a state that is left earlier counts as ahead; beyond the gap when thorough
	jobBit  []int32 // by job: its first bit in this gap, or None
	carried []int32 // by target: ready is filled in up to this minute
	work    int     // steps done
}

// A target is a node that may follow.
type target struct {
	node, job  int
	last       int // latest minute at which it may start
	bit, slots int // its job's first bit and how many more slots it may have
	min, max   int
	adjust     Micro // what a slot gains beyond its worth
	rows       *worthRows
	windows    []int32 // winFrom of the node
}

func newSweeper(t *tables) *sweeper {
	return &sweeper{t: t, jobBit: make([]int32, len(t.p.Jobs)), change: make([][]int32, len(t.p.Receivers))}
}

// alwaysThorough is the number of states up to which leaving any of them out saves nothing worth having.
const alwaysThorough = 1000

// fill returns the best way found to fill the gap with jobs that are not spent in used, where a slot of a
// job gains its worth and adjust[job]; and the slot after the gap, moved to its new start if it is free.
// It is false if the slot after cannot be reached.
//
// A thorough sweep also follows the states that are behind whatever comes next: the one that is ahead may
// have spent the job that is wanted then.
func (s *sweeper) fill(g gap, used []uint64, adjust []Micro, thorough bool) (path []Slot, nextStart int, ok bool) {
	s.relaxed, s.grid = false, s.t.p.GridMin
	if !s.enter(g, used, adjust) {
		return nil, 0, false
	}
	if thorough || len(s.targets)*s.wide <= alwaysThorough {
		s.spread = s.wide
	}
	s.clear()
	last := s.run(g)
	if g.next == None {
		return s.path(last), 0, true
	}
	return s.reach(g)
}

// enter prepares the sweep of a gap; it is false if the gap has no length.
func (s *sweeper) enter(g gap, used []uint64, adjust []Micro) bool {
	to := s.t.p.Minutes
	if g.next != None {
		to = g.nextEnd
		if g.fixed {
			to = g.nextStart
		}
	}
	s.from, s.wide = g.prevEnd, to-g.prevEnd+1
	if s.wide < 1 {
		return false
	}
	s.pickTargets(g, to, used, adjust)
	return true
}

// run sweeps the gap and returns the best ended state, or None if nothing is better than no slot.
func (s *sweeper) run(g gap) int32 {
	p := s.t.p
	s.leaveStart(g)
	b := int(s.t.after[s.from])
	to := s.from + s.wide - 1
	bestEnd, bestValue := int32(None), Micro(0)
	running, runningJob, other := unreachable, None, unreachable
	s.free = s.from
	for e := s.from; e <= to; e++ {
		if e%s.grid == 0 {
			ahead := s.ahead(e)
			for l := range s.targets {
				id, ok := s.endSlot(l, e, ahead)
				if !ok {
					continue
				}
				v, job := s.ended[id], s.targets[l].job
				if v > bestValue {
					bestEnd, bestValue = id, v
				}
				switch {
				case v > running && job != runningJob:
					running, runningJob, other = v, job, running
				case v > running:
					running = v
				case job != runningJob:
					other = max(other, v)
				}
				s.keep(l, id, e, ahead)
			}
		}
		s.best[e-s.from], s.second[e-s.from] = running, other
		for b < len(p.Breaks) && p.Breaks[b].From == e {
			s.leaveBreak(g, b, to)
			s.free = p.Breaks[b].To
			b++
		}
	}
	return bestEnd
}

// ahead returns the value that a state ending at minute e has to exceed: with it some node was left so
// much earlier that from there one is at any other first. When jobs may come again that has to hold for two
// jobs, since neither may come again at once; and not across a break, which makes up for a late end.
func (s *sweeper) ahead(e int) Micro {
	i := e - s.from - s.spread
	switch {
	case i < 0:
		return unreachable
	case !s.relaxed:
		return s.best[i]
	case i+s.from < s.free:
		return unreachable
	}
	return s.second[i]
}

// keep takes an ended state in and leaves from it.
func (s *sweeper) keep(l int, id int32, e int, ahead Micro) {
	v := s.ended[id]
	q := s.prefix[l]
	if !s.relaxed {
		s.prefix[l] = id
		s.leave(l, id, e)
		return
	}
	if q == None || v > s.ended[q] {
		s.prefix[l] = id
	}
	if v > ahead {
		s.leave(l, id, e)
	}
}

func (s *sweeper) pickTargets(g gap, to int, used []uint64, adjust []Micro) {
	t, p := s.t, s.t.p
	s.targets = s.targets[:0]
	for j := range s.jobBit {
		s.jobBit[j] = None
	}
	bit := 0
	for i := range p.Nodes {
		job := p.Nodes[i].Job
		if !t.chosen[job] || t.spent(used, job) || s.picky > 0 && t.pull[job] < s.picky {
			continue
		}
		last := None
		for _, w := range t.windows[i] {
			if end := min(w.To, to); end-max(w.From, s.from) >= p.Jobs[job].MinMin {
				last = end - p.Jobs[job].MinMin
			}
		}
		if last == None {
			continue
		}
		a := s.target(i, last)
		a.slots = t.left(used, job)
		if s.jobBit[job] == None {
			s.jobBit[job] = int32(bit)
			bit += a.slots
		}
		a.bit, a.adjust = int(s.jobBit[job]), adjust[job]
		s.targets = append(s.targets, a)
	}
	s.nw = max(1, (bit+63)/64)
	if g.next != None {
		last := g.nextStart
		if !g.fixed {
			last = g.nextEnd - p.Jobs[p.Nodes[g.next].Job].MinMin
		}
		s.targets = append(s.targets, s.target(g.next, last))
	}
	// The later a target may still start the longer it is of interest: departures stop at the first
	// that is past.
	slices.SortFunc(s.targets, func(a, b target) int {
		if a.last != b.last {
			return b.last - a.last
		}
		return a.node - b.node
	})
	s.next = None
	for l := range s.targets {
		if s.targets[l].slots == 0 {
			s.next = l
		}
	}
	s.layColumns()
	s.spread = s.setupSpread()
}

// target describes a node. Until it is given slots it stands for the slot after the gap.
func (s *sweeper) target(node, last int) target {
	t := s.t
	job := t.p.Nodes[node].Job
	return target{
		node: node, job: job, last: last,
		min: t.p.Jobs[job].MinMin, max: t.p.Jobs[job].MaxMin,
		rows: &t.rows[job], windows: t.winFrom[node*t.span : (node+1)*t.span],
	}
}

func (s *sweeper) layColumns() {
	p := s.t.p
	n := len(s.targets)
	s.places, s.lasts = grow(s.places, n), grow(s.lasts, n)
	s.words, s.bits = grow(s.words, n), grow(s.bits, n)
	for r := range s.change {
		s.change[r] = grow(s.change[r], n)
	}
	for l := range s.targets {
		a := &s.targets[l]
		s.places[l], s.lasts[l] = int32(p.Nodes[a.node].Place), int32(a.last)
		s.words[l], s.bits[l] = 0, 0
		if a.slots > 0 {
			full := a.bit + a.slots - 1
			s.words[l], s.bits[l] = int32(full>>6), 1<<(full&63)
		}
		for r := range s.change {
			s.change[r][l] = s.t.change[r][a.node]
		}
	}
}

// setupSpread takes the setups of the gap's first bin for all, and half of how far they lie apart: a state
// left out on its account is less promising, not worthless, and sweeps are a third faster.
func (s *sweeper) setupSpread() int {
	p := s.t.p
	low, high := int32(1<<30), int32(0)
	bin := p.slewBin(s.from)
	for l := range s.targets {
		row := p.Slew.Sec[(bin*p.Slew.Places+int(s.places[l]))*p.Slew.Places:]
		change := s.change[p.Jobs[s.targets[l].job].Receiver]
		for k, place := range s.places {
			if k != l {
				sec := max(int32(row[place]), change[k])
				low, high = min(low, sec), max(high, sec)
			}
		}
	}
	return ceilMin(int(max(0, high-low)))/2 + 1
}

func (s *sweeper) clear() {
	n := len(s.targets)
	size := n * s.wide
	s.work += size
	s.ready, s.parent = grow(s.ready, size), grow(s.parent, size)
	s.ended, s.came, s.start = grow(s.ended, size), grow(s.came, size), grow(s.start, size)
	s.set = grow(s.set, size*s.nw)
	s.prefix, s.carried = grow(s.prefix, n), grow(s.carried, n)
	s.best, s.second = grow(s.best, s.wide), grow(s.second, s.wide)
	for i := range s.ready {
		s.ready[i] = unreachable
	}
	for l := range n {
		s.prefix[l] = None
		s.carried[l] = int32(s.from)
	}
}

func grow[T any](s []T, n int) []T { return slices.Grow(s[:0], n)[:n] }

// leaveStart makes every target ready at the first minute after the slot before the gap.
func (s *sweeper) leaveStart(g gap) {
	p := s.t.p
	for l := range s.targets {
		a := &s.targets[l]
		at := p.ReadyMin(g.prev, g.prevEnd, a.node, s.from)
		if at <= a.last {
			s.arrive(l, at)
		}
	}
}

// arrive makes a target ready without any slot before it in the gap.
func (s *sweeper) arrive(l, at int) {
	if i := l*s.wide + at - s.from; s.ready[i] < 0 {
		s.ready[i], s.parent[i] = 0, None
	}
}

// leave makes every target ready that can be reached before the next break from the ended state.
func (s *sweeper) leave(l int, id int32, e int) {
	p := s.t.p
	until := s.from + s.wide
	if b := int(s.t.after[e]); b < len(p.Breaks) {
		until = min(until, p.Breaks[b].From)
	}
	s.depart(l, p.slewBin(e), id, e, until)
}

// depart makes targets ready after target l is left at minute free, in a bin of the slew table, before
// minute until.
func (s *sweeper) depart(l, bin int, id int32, free, until int) {
	p := s.t.p
	row := p.Slew.Sec[(bin*p.Slew.Places+int(s.places[l]))*p.Slew.Places:]
	row = row[:p.Slew.Places]
	n := len(s.places)
	lasts, words, bits := s.lasts[:n], s.words[:n], s.bits[:n]
	change := s.change[p.Jobs[s.targets[l].job].Receiver][:n]
	set := s.set[int(id)*s.nw : (int(id)+1)*s.nw]
	v := s.ended[id]
	s.work += n
	overhead := uint32(p.OverheadSec + 59)
	base, wide := -s.from, s.wide
	for k, place := range s.places {
		last := int(lasts[k])
		if last < free {
			return
		}
		if set[words[k]]&bits[k] == 0 {
			sec := uint32(max(int32(row[place]), change[k])) + overhead
			if at := free + int(sec/60); at <= last && at < until {
				if i := base + at; v > s.ready[i] {
					s.ready[i], s.parent[i] = v, id
				}
			}
		}
		base += wide
	}
}

// leaveBreak makes targets ready after break b, from the best state of each node and from the start.
func (s *sweeper) leaveBreak(g gap, b, to int) {
	p := s.t.p
	until := to + 1
	if b+1 < len(p.Breaks) {
		until = min(until, p.Breaks[b+1].From+1)
	}
	for l := range s.targets {
		a := &s.targets[l]
		at := p.setupAfter(g.prev, g.prevEnd, a.node, b).ReadyMin
		if at <= a.last && at < until {
			s.arrive(l, at)
		}
	}
	for l, id := range s.prefix {
		if id != None {
			s.depart(l, p.Slew.Bins+b, id, p.Breaks[b].To, until)
		}
	}
}

// endSlot finds the best start of a slot of the target that ends at minute e. It is false when there is
// none, or none of interest: not better than leaving the same node earlier, nor than ahead, the value
// with which some node was left so much earlier that from there one is everywhere first.
func (s *sweeper) endSlot(l, e int, ahead Micro) (id int32, ok bool) {
	a := &s.targets[l]
	opens := int(a.windows[e])
	if opens == None || l == s.next {
		return 0, false
	}
	low, high := max(opens, e-a.max, s.from), e-a.min
	if low > high {
		return 0, false
	}
	if s.relaxed {
		ahead = unreachable / 2
	} else if q := s.prefix[l]; q != None {
		ahead = max(ahead, s.ended[q])
	}
	s.carry(l, high)
	row := a.rows.row(e)[:high-low+1]
	if s.ready[l*s.wide-s.from+high]+row[high-low]+a.adjust <= ahead {
		return 0, false
	}
	s.work += len(row)
	best, at := s.bestStart(l, low, high, row)
	best += a.adjust
	if at == None || best <= ahead {
		return 0, false
	}
	i := l*s.wide + e - s.from
	from := s.parent[l*s.wide+at-s.from]
	s.ended[i], s.came[i], s.start[i] = best, from, int32(at)
	set := s.set[i*s.nw : (i+1)*s.nw]
	if from == None || s.relaxed {
		clear(set)
	} else {
		copy(set, s.set[int(from)*s.nw:])
	}
	for bit := a.bit; bit < a.bit+a.slots; bit++ {
		if set[bit>>6]&(1<<(bit&63)) == 0 {
			set[bit>>6] |= 1 << (bit & 63)
			break
		}
	}
	return int32(i), true
}

// bestStart returns the best sum of being ready and worth over starts low to high; row is the worth by
// length, shortest first. The earliest of equals wins.
func (s *sweeper) bestStart(l, low, high int, row []Micro) (best Micro, at int) {
	base := l*s.wide - s.from
	ready := s.ready[base+low : base+high+1]
	row = row[:len(ready)]
	best, at = unreachable/2, None
	for i, v := range ready {
		if v += row[len(ready)-1-i]; v > best {
			best, at = v, low+i
		}
	}
	return best, at
}

// carry lets the telescope wait: ready by one minute is ready by the next, unless a break ends there.
func (s *sweeper) carry(l, until int) {
	base := l*s.wide - s.from
	for m := int(s.carried[l]) + 1; m <= until; m++ {
		if i := base + m; s.ready[i] < s.ready[i-1] && !s.t.breakTo[m] {
			s.ready[i], s.parent[i] = s.ready[i-1], s.parent[i-1]
		}
	}
	s.carried[l] = max(s.carried[l], int32(until))
}

func (s *sweeper) path(id int32) []Slot {
	var slots []Slot
	for ; id != None; id = s.came[id] {
		l, e := int(id)/s.wide, int(id)%s.wide+s.from
		slots = append(slots, Slot{Node: s.targets[l].node, Start: int(s.start[id]), End: e})
	}
	slices.Reverse(slots)
	return slots
}

// reach ends the gap at the slot after it.
func (s *sweeper) reach(g gap) (path []Slot, nextStart int, ok bool) {
	next := s.next
	a := &s.targets[next]
	if g.fixed {
		s.carry(next, g.nextStart)
		i := next*s.wide + g.nextStart - s.from
		return s.path(s.parentAt(i)), g.nextStart, s.ready[i] > unreachable/2
	}
	opens := int(a.windows[g.nextEnd])
	low, high := max(opens, g.nextEnd-a.max, s.from), g.nextEnd-a.min
	if opens == None || low > high {
		return nil, 0, false
	}
	s.carry(next, high)
	_, at := s.bestStart(next, low, high, a.rows.row(g.nextEnd))
	if at == None {
		return nil, 0, false
	}
	return s.path(s.parentAt(next*s.wide + at - s.from)), at, true
}

func (s *sweeper) parentAt(i int) int32 {
	if s.ready[i] <= unreachable/2 {
		return None
	}
	return s.parent[i]
}
