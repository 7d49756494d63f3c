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
	nw   int
	from int
	wide int // minutes of the gap, both ends counted

	active []target
	ready  []Micro // target·wide + minute − from: best value when ready by then
	parent []int32 // likewise: the ended state it comes from, or None

	ended []Micro  // target·wide + end − from
	came  []int32  // likewise: the ended state before
	start []int32  // likewise: minute
	set   []uint64 // likewise, ·nw: jobs spent
	used  []uint64 // jobs spent outside the gap

	prefix   []int32 // by target: its best ended state so far, or None
	carried  []int32 // by target: ready is filled in up to this minute
	best     []Micro // by minute: best of all ended states until then
	spread   int     // the longest setup less the shortest
	adjusted []Micro // by target: what a slot gains beyond its worth
}

// A target is a node that may follow.
type target struct {
	node     int
	job      int
	place    int32
	last     int32 // latest minute at which it may start
	word     int32 // where to find whether its job is spent
	bit      uint64
	first    uint64 // bit of the first slot, in the same word; 0 unless only one slot is allowed
	min, max int
	rows     *worthRows
	windows  []int32 // winFrom of the node
}

func newSweeper(t *tables) *sweeper {
	return &sweeper{t: t, nw: t.words}
}

// fill returns the best way found to fill the gap with jobs that are not spent in used, where a slot of a
// job gains its worth and adjust[job]; and the slot after the gap, moved to its new start if it is free.
// It is false if the slot after cannot be reached.
func (s *sweeper) fill(g gap, used []uint64, adjust []Micro) (path []Slot, nextStart int, ok bool) {
	to := s.t.p.Minutes
	if g.next != None {
		to = g.nextEnd
		if g.fixed {
			to = g.nextStart
		}
	}
	s.from, s.wide = g.prevEnd, to-g.prevEnd+1
	if s.wide < 1 {
		return nil, 0, false
	}
	s.used = used
	s.pickTargets(g, to, adjust)
	s.clear()
	s.leaveStart(g)
	next := len(s.active) - 1 // where the slot after stands, if there is one
	searched := len(s.active)
	if g.next != None {
		searched--
	}
	p := s.t.p
	b := int(s.t.after[s.from])
	bestEnd, bestValue := int32(None), Micro(0)
	running := unreachable
	for e := s.from; e <= to; e++ {
		if e%p.GridMin == 0 {
			for l := range searched {
				id, ok := s.endSlot(l, e)
				if !ok {
					continue
				}
				v := s.ended[id]
				if v > bestValue {
					bestEnd, bestValue = id, v
				}
				running = max(running, v)
				if q := s.prefix[l]; q != None && s.ended[q] >= v {
					continue // whoever left this node earlier with as much is ahead
				}
				s.prefix[l] = id
				if e-s.from >= s.spread && s.best[e-s.from-s.spread] >= v {
					continue // some other node was left so much earlier that it is everywhere first
				}
				s.leave(l, id, e)
			}
		}
		s.best[e-s.from] = running
		for b < len(p.Breaks) && p.Breaks[b].From == e {
			s.leaveBreak(g, b, to)
			b++
		}
	}
	if g.next == None {
		return s.path(bestEnd), 0, true
	}
	return s.reach(g, next)
}

func (s *sweeper) pickTargets(g gap, to int, adjust []Micro) {
	t, p := s.t, s.t.p
	s.active, s.adjusted = s.active[:0], s.adjusted[:0]
	for i := range p.Nodes {
		job := p.Nodes[i].Job
		if !t.chosen[job] || t.spent(s.used, job) {
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
		s.add(i, last, adjust[job])
	}
	if g.next != None {
		last := g.nextStart
		if !g.fixed {
			last = g.nextEnd - p.Jobs[p.Nodes[g.next].Job].MinMin
		}
		s.add(g.next, last, 0)
		s.active[len(s.active)-1].bit = 0
	}
	s.spread = s.setupSpread()
}

func (s *sweeper) add(node, last int, adjust Micro) {
	t := s.t
	job := t.p.Nodes[node].Job
	b := t.bits[job]
	a := target{
		node: node, job: job, place: int32(t.p.Nodes[node].Place), last: int32(last),
		word: int32(b.last >> 6), bit: 1 << (b.last & 63),
		min: t.p.Jobs[job].MinMin, max: t.p.Jobs[job].MaxMin,
		rows: &t.rows[job], windows: t.winFrom[node*t.span : (node+1)*t.span],
	}
	if b.first == b.last {
		a.first = a.bit
	}
	s.active = append(s.active, a)
	s.adjusted = append(s.adjusted, adjust)
}

// setupSpread samples the setups of the gap's first bin: the state left out on its account is only
// less promising, never wrong.
func (s *sweeper) setupSpread() int {
	p := s.t.p
	low, high := 1<<30, 0
	bin := p.slewBin(s.from)
	for _, a := range s.active {
		row := p.Slew.Sec[(bin*p.Slew.Places+int(a.place))*p.Slew.Places:]
		change := s.t.change[p.Jobs[a.job].Receiver]
		for _, b := range s.active {
			if a.place == b.place {
				continue
			}
			sec := max(int(row[b.place]), int(change[b.node]))
			low, high = min(low, sec), max(high, sec)
		}
	}
	return max(0, ceilMin(high-low)) + 1
}

func (s *sweeper) clear() {
	n := len(s.active)
	size := n * s.wide
	s.ready = grow(s.ready, size)
	s.parent = grow(s.parent, size)
	s.ended = grow(s.ended, size)
	s.came = grow(s.came, size)
	s.start = grow(s.start, size)
	s.set = grow(s.set, size*s.nw)
	s.prefix = grow(s.prefix, n)
	s.carried = grow(s.carried, n)
	s.best = grow(s.best, s.wide)
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
	for l := range s.active {
		a := &s.active[l]
		at := p.ReadyMin(g.prev, g.prevEnd, a.node, s.from)
		if at <= int(a.last) {
			s.arrive(l, at, 0, None)
		}
	}
}

func (s *sweeper) arrive(l, at int, v Micro, id int32) {
	if i := l*s.wide + at - s.from; v > s.ready[i] {
		s.ready[i], s.parent[i] = v, id
	}
}

// leave makes every target ready that can be reached before the next break from the ended state.
func (s *sweeper) leave(l int, id int32, e int) {
	p := s.t.p
	a := &s.active[l]
	until := s.from + s.wide
	if b := int(s.t.after[e]); b < len(p.Breaks) {
		until = min(until, p.Breaks[b].From)
	}
	s.depart(a.place, s.t.change[p.Jobs[a.job].Receiver], p.slewBin(e), id, e, until)
}

// depart makes targets ready from a place at minute free, in a bin of the slew table, before minute until.
func (s *sweeper) depart(place int32, change []int32, bin int, id int32, free, until int) {
	p := s.t.p
	row := p.Slew.Sec[(bin*p.Slew.Places+int(place))*p.Slew.Places:]
	row = row[:p.Slew.Places]
	set := s.set[int(id)*s.nw : (int(id)+1)*s.nw]
	v := s.ended[id]
	base := -s.from
	for k := range s.active {
		to := &s.active[k]
		if set[to.word]&to.bit != 0 {
			base += s.wide
			continue
		}
		sec := max(int(row[to.place]), int(change[to.node])) + p.OverheadSec
		at := free + int(uint32(sec+59)/60)
		if at <= int(to.last) && at < until {
			if i := base + at; v > s.ready[i] {
				s.ready[i], s.parent[i] = v, id
			}
		}
		base += s.wide
	}
}

// leaveBreak makes targets ready after break b, from the best state of each node and from the start.
func (s *sweeper) leaveBreak(g gap, b, to int) {
	p := s.t.p
	brk := p.Breaks[b]
	until := to + 1
	if b+1 < len(p.Breaks) {
		until = min(until, p.Breaks[b+1].From+1)
	}
	for l := range s.active {
		a := &s.active[l]
		at := p.setupAfter(g.prev, g.prevEnd, a.node, b).ReadyMin
		if at <= int(a.last) && at < until {
			s.arrive(l, at, 0, None)
		}
	}
	for l, id := range s.prefix {
		if id != None {
			a := &s.active[l]
			s.depart(a.place, s.t.change[p.Jobs[a.job].Receiver], p.Slew.Bins+b, id, brk.To, until)
		}
	}
}

// endSlot finds the best start of a slot of the target that ends at minute e.
func (s *sweeper) endSlot(l, e int) (id int32, ok bool) {
	a := &s.active[l]
	opens := int(a.windows[e])
	if opens == None {
		return 0, false
	}
	low, high := max(opens, e-a.max, s.from), e-a.min
	if low > high {
		return 0, false
	}
	s.carry(l, high)
	best, at := s.bestStart(l, low, high, a.rows.row(e))
	if at == None {
		return 0, false
	}
	i := l*s.wide + e - s.from
	from := s.parent[l*s.wide+at-s.from]
	s.ended[i], s.came[i], s.start[i] = best+s.adjusted[l], from, int32(at)
	set := s.set[i*s.nw : (i+1)*s.nw]
	if from == None {
		copy(set, s.used)
	} else {
		copy(set, s.set[int(from)*s.nw:])
	}
	if a.first != 0 {
		set[a.word] |= a.first
	} else {
		s.t.spend(set, a.job)
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
		slots = append(slots, Slot{Node: s.active[l].node, Start: int(s.start[id]), End: e})
	}
	slices.Reverse(slots)
	return slots
}

// reach ends the gap at the slot after it.
func (s *sweeper) reach(g gap, next int) (path []Slot, nextStart int, ok bool) {
	a := &s.active[next]
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
