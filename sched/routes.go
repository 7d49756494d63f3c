package sched

import "slices"

// The ceiling of the plain sweep counts paths that come back to a job after one other. Routes with memory
// forbid most of that: a path remembers the jobs it has had, but only while all nodes it passes since keep
// them in mind. Which nodes keep which jobs in mind grows from the cycles of the best paths. Every plan is
// such a route, so the best route bounds them all.
//
// Source: Baldacci, Mingozzi & Roberti, "New route relaxation and pricing strategies for the vehicle
// routing problem", Operations Research 59 (2011) 1269; growing sets after Roberti & Mingozzi, "Dynamic
// ng-path relaxation for the delivery man problem", Transportation Science 48 (2014) 413

// A memory is a set of jobs among those that have come back so far: as many as have bits.
type memory [2]uint64

const memoryBits = 128

// jobMemory is where a job stands in memories: a bit for each slot that it may have, set one after the other.
// The zero value is a job that is never remembered.
type jobMemory struct{ first, slots int }

func (m memory) has(bit int) bool { return m[bit>>6]&(1<<(bit&63)) != 0 }

// full tells whether all slots of the job are remembered.
func (m memory) full(j jobMemory) bool { return j.slots > 0 && m.has(j.first+j.slots-1) }

// with returns the memory with one more slot of the job.
func (m memory) with(j jobMemory) memory {
	for bit := j.first; bit < j.first+j.slots; bit++ {
		if !m.has(bit) {
			m[bit>>6] |= 1 << (bit & 63)
			break
		}
	}
	return m
}

// whole returns the memory with all slots of the job.
func (m memory) whole(j jobMemory) memory {
	for bit := j.first; bit < j.first+j.slots; bit++ {
		m[bit>>6] |= 1 << (bit & 63)
	}
	return m
}

func (m memory) and(o memory) memory { return memory{m[0] & o[0], m[1] & o[1]} }

// within tells whether all of m is in o.
func (m memory) within(o memory) bool { return m[0]&^o[0] == 0 && m[1]&^o[1] == 0 }

// A routeLabel is a path to being ready for a node, or to the end of a slot of it.
type routeLabel struct {
	value  Micro
	memory memory
	came   int32 // the ended label before it, or None
	next   int32 // of the same bucket, or None
	node   int32
	start  int32 // when ready; of an ended label the start of its slot
	end    int32 // of an ended label
}

// A waiting label is ready for a target: what is looked up of it again and again, side by side.
type waiting struct {
	value  Micro
	memory memory
	start  int32
	id     int32
}

// A way leads from the end of a slot to being ready for a target.
type way struct {
	target, at int32
	index      int32 // target·wide + at − from
}

// A router finds the best route through a session at given prices, from pin to pin.
type router struct {
	t      *tables
	grid   int
	width  int // labels kept of each state; more are merged
	jobs   []jobMemory
	keep   []memory // by node: the jobs it keeps in mind; pins keep all
	sweeps []*sweeper
	rests  []*completion
	labels labelStore
	least  Micro // values up to this are of no interest
	best   Micro
	last   int32
	work   int
	halt   func() bool // tells whether to stop at once
	halted bool        // it did: the last route says nothing

	// By node·span + minute. A state that no route of interest comes by is dead for good: whatever the
	// prices were, they proved that no better plan comes by it.
	deadReady, deadEnd   []bool
	aliveReady, aliveEnd []bool // in the sweep in progress

	// Of the gap in progress.
	s      *sweeper
	rest   *completion
	bucket []int32     // target·wide + minute − from: first label that is ready there, or None
	live   [][]waiting // by target: labels that are ready, in time order
	taken  []int32     // by target: buckets before this minute are in live
	parked [][]int32   // by target: the ended labels to go on from after a break
	job    []jobMemory // by target
	ways   []way       // out of the slot that is being left
	front  []routeLabel
	atPin  []routeLabel // labels that reach the pin after the gap
}

func newRouter(t *tables, halt func() bool) *router {
	size := len(t.p.Nodes) * t.span
	return &router{
		t: t, halt: halt, width: 8, jobs: make([]jobMemory, len(t.p.Jobs)), keep: make([]memory, len(t.p.Nodes)),
		deadReady: make([]bool, size), deadEnd: make([]bool, size), aliveReady: make([]bool, size), aliveEnd: make([]bool, size),
	}
}

// route returns the value of the best route through the gaps and its slots. Where no route is worth more
// than least it returns least, and no slots.
func (r *router) route(gaps []gap, used []uint64, adjust []Micro, least Micro, grid int) (Micro, []Slot) {
	r.labels.clear()
	r.grid, r.least, r.best, r.last, r.work = grid, least, least, None, 0
	for len(r.sweeps) < len(gaps) {
		r.sweeps, r.rests = append(r.sweeps, newSweeper(r.t)), append(r.rests, &completion{})
	}
	after := Micro(0)
	for i := len(gaps) - 1; i >= 0; i-- {
		s := r.sweeps[i]
		s.relaxed, s.grid = true, grid
		s.enter(gaps[i], used, adjust)
		r.rests[i].of(s, gaps[i], after, r.deadReady, r.deadEnd)
		after = r.rests[i].origin
		r.work += s.wide * len(s.targets) * len(s.targets) / grid
	}
	if after <= least {
		return least, nil
	}
	clear(r.aliveReady)
	clear(r.aliveEnd)
	origins := []routeLabel{{came: None, next: None}}
	for i, g := range gaps {
		r.begin(i)
		r.atPin = nil
		for _, o := range origins {
			r.enter(g, o)
		}
		r.run()
		origins = r.atPin
	}
	if grid == r.t.p.GridMin && !r.halted {
		r.bury()
	}
	return r.best, r.slots(r.last)
}

// bury marks what no route came by.
func (r *router) bury() {
	for i, alive := range r.aliveReady {
		r.deadReady[i] = r.deadReady[i] || !alive
	}
	for i, alive := range r.aliveEnd {
		r.deadEnd[i] = r.deadEnd[i] || !alive
	}
}

// begin makes ready for a gap.
func (r *router) begin(i int) {
	r.s, r.rest = r.sweeps[i], r.rests[i]
	s := r.s
	n := len(s.targets)
	r.bucket = grow(r.bucket, n*s.wide)
	for i := range r.bucket {
		r.bucket[i] = None
	}
	r.job, r.taken = grow(r.job, n), grow(r.taken, n)
	for len(r.live) < n {
		r.live, r.parked = append(r.live, nil), append(r.parked, nil)
	}
	for l := range s.targets {
		a := &s.targets[l]
		r.live[l], r.parked[l], r.taken[l] = r.live[l][:0], r.parked[l][:0], int32(s.from)
		r.job[l] = jobMemory{}
		if l != s.next {
			r.job[l] = r.jobs[a.job]
		}
	}
}

// enter goes into the gap with the label of a path to its start.
func (r *router) enter(g gap, from routeLabel) {
	s := r.s
	if s.next == None {
		if from.value > r.best {
			r.best, r.last = from.value, from.came
		}
	} else if from.value+r.rest.after > r.least {
		r.atPin = offer(r.atPin, from, 4*r.width)
	}
	s.eachEntry(g, func(l, at int) {
		if from.value+r.rest.come[l*s.wide+at-s.from] > r.least && !from.memory.full(r.job[l]) {
			r.arrive(l, at, from)
		}
	})
}

// How many labels a sweep keeps, 48 bytes each: beyond it only one of each state. A search that is to end in seconds,
// as the screen's, must stay small beside what else an observer runs, and loses nothing by it; a long one needs them.
const (
	mostLabels = 1_500_000
	fewLabels  = 300_000
	longWork   = 2 * defaultWork
)

func labelsFor(o Options) int {
	if work := o.budget(); work > 0 && work <= longWork {
		return fewLabels
	}
	return mostLabels
}

// room returns how many labels of a state are kept now.
func (r *router) room() int {
	if r.labels.len() > r.t.labels {
		return 1
	}
	return r.width
}

func (r *router) run() {
	s, p := r.s, r.s.t.p
	b := int(s.t.after[s.from])
	to := s.from + s.wide - 1
	for e := s.from; e <= to; e++ {
		if r.halted = r.halted || r.halt(); r.halted {
			return
		}
		if e%s.grid == 0 {
			for l := range s.targets {
				r.endSlots(l, e)
			}
		}
		for b < len(p.Breaks) && p.Breaks[b].From == e {
			r.leaveBreak(b, to)
			b++
		}
	}
}

// endSlots makes the labels of slots of target l that end at minute e, and leaves from them.
func (r *router) endSlots(l, e int) {
	s := r.s
	a := &s.targets[l]
	opens := int(a.windows[e])
	if opens == None || l == s.next {
		return
	}
	low, high := max(opens, e-a.max, s.from), e-a.min
	if low > high {
		return
	}
	rest := r.rest.ended[l*s.wide+e-s.from]
	if rest <= unreachable/2 {
		return
	}
	r.take(l, high, low)
	row := a.rows.row(e)[:high-low+1]
	least := r.least - rest - a.adjust
	r.front = r.front[:0]
	width := r.room()
	live := r.live[l]
	for i := range live {
		start := max(int(live[i].start), low)
		v := live[i].value + row[high-start]
		if v <= least {
			continue
		}
		came := r.labels.at(live[i].id).came
		r.front = offer(r.front, routeLabel{value: v, memory: live[i].memory, came: came, next: None, node: int32(a.node), start: int32(start), end: int32(e)}, width)
	}
	r.work += len(live)
	if len(r.front) == 0 {
		return
	}
	r.aliveEnd[a.node*s.t.span+e] = true
	p := s.t.p
	until, next := s.from+s.wide, int(s.t.after[e])
	rest = unreachable
	if next < len(p.Breaks) {
		until = min(until, p.Breaks[next].From)
		rest = r.rest.parked[next*len(s.targets)+l]
	}
	r.reach(l, p.slewBin(e), e, until)
	for _, label := range r.front {
		label.value += a.adjust
		label.memory = label.memory.with(r.job[l])
		id := r.labels.add(label)
		if s.next == None && label.value > r.best {
			r.best, r.last = label.value, id
		}
		if rest > unreachable/2 && label.value+rest > r.least {
			r.park(l, id)
		}
		r.depart(id)
	}
}

// offer puts a label into the front of those that none other dominates: none that is worth as much
// remembers no more. Beyond the width it is merged with the last: worth what the better one is,
// remembering what both do, which can only raise the bound.
func offer(front []routeLabel, label routeLabel, width int) []routeLabel {
	for i := range front {
		if front[i].value >= label.value && front[i].memory.within(label.memory) {
			return front
		}
	}
	kept := front[:0]
	for i := range front {
		if !(label.value >= front[i].value && label.memory.within(front[i].memory)) {
			kept = append(kept, front[i])
		}
	}
	front = kept
	if len(front) < width {
		return append(front, label)
	}
	worst := 0
	for i := range front {
		if front[i].value < front[worst].value {
			worst = i
		}
	}
	both := front[worst].memory.and(label.memory)
	if label.value > front[worst].value {
		front[worst] = label
	}
	front[worst].memory = both
	return front
}

// take moves the labels that are ready up to minute high into the live ones, without those that an
// earlier one dominates. Before low they all start at low, so that of these only a front is kept.
func (r *router) take(l, high, low int) {
	s := r.s
	live := r.live[l]
	for m := int(r.taken[l]); m <= high; m++ {
		if s.t.breakTo[m] {
			live = live[:0]
		}
	arrivals:
		for id := r.bucket[l*s.wide+m-s.from]; id != None; id = r.labels.at(id).next {
			label := r.labels.at(id)
			for i := range live {
				if live[i].value >= label.value && live[i].memory.within(label.memory) {
					continue arrivals
				}
			}
			live = append(live, waiting{label.value, label.memory, label.start, id})
		}
	}
	r.taken[l] = max(r.taken[l], int32(high+1))
	stale := 0
	for stale < len(live) && int(live[stale].start) <= low {
		stale++
	}
	if stale > r.width {
		live = thin(live, stale)
	}
	r.live[l] = live
}

// thin drops those of the first labels that a later one of them dominates.
func thin(live []waiting, stale int) []waiting {
	kept := live[:0]
next:
	for i, label := range live[:stale] {
		for _, other := range live[i+1 : stale] {
			if other.value >= label.value && other.memory.within(label.memory) {
				continue next
			}
		}
		kept = append(kept, label)
	}
	return append(kept, live[stale:]...)
}

// park keeps the ended label among the front of its target's, to go on from after the next break.
func (r *router) park(l int, id int32) {
	label := *r.labels.at(id)
	kept := r.parked[l][:0]
	worst := 0
	for _, other := range r.parked[l] {
		if o := r.labels.at(other); o.value >= label.value && o.memory.within(label.memory) {
			return
		}
	}
	for _, other := range r.parked[l] {
		o := r.labels.at(other)
		if label.value >= o.value && label.memory.within(o.memory) {
			continue
		}
		kept = append(kept, other)
		if o.value < r.labels.at(kept[worst]).value {
			worst = len(kept) - 1
		}
	}
	if len(kept) >= 4*r.width {
		both := r.labels.at(kept[worst]).memory.and(label.memory)
		if r.labels.at(kept[worst]).value > label.value {
			label = *r.labels.at(kept[worst])
		}
		label.memory = both
		id = r.labels.add(label)
		kept = slices.Delete(kept, worst, worst+1)
	}
	r.parked[l] = append(kept, id)
}

func (r *router) leaveBreak(b, to int) {
	s, p := r.s, r.s.t.p
	until := to + 1
	if b+1 < len(p.Breaks) {
		until = min(until, p.Breaks[b+1].From+1)
	}
	for l := range s.targets {
		if len(r.parked[l]) > 0 {
			r.reach(l, p.Slew.Bins+b, p.Breaks[b].To, until)
		}
		for _, id := range r.parked[l] {
			r.depart(id)
		}
	}
}

// reach finds the ways out of target l when it is left at minute free, in a bin of the slew table, to other targets
// before minute until.
func (r *router) reach(l, bin, free, until int) {
	s, p := r.s, r.s.t.p
	row := p.Slew.Sec[(bin*p.Slew.Places+int(s.places[l]))*p.Slew.Places:][:p.Slew.Places]
	n := len(s.places)
	lasts := s.lasts[:n]
	change := s.change[p.Jobs[s.targets[l].job].Receiver][:n]
	overhead := uint32(p.OverheadSec + 59)
	r.ways = r.ways[:0]
	base := -s.from
	for k, place := range s.places {
		last := int(lasts[k])
		if last < free {
			break
		}
		sec := uint32(max(int32(row[place]), change[k])) + overhead
		if at := free + int(sec/60); at <= last && at < until && r.rest.come[base+at] > unreachable/2 && !s.repeats(l, k) {
			r.ways = append(r.ways, way{int32(k), int32(at), int32(base + at)})
		}
		base += s.wide
	}
	r.work += n
}

// depart makes targets ready by the ways out of the ended label's slot.
func (r *router) depart(id int32) {
	from := *r.labels.at(id)
	from.came = id
	worth := r.least - from.value
	for i := range r.ways {
		w := &r.ways[i]
		if r.rest.come[w.index] > worth && !from.memory.full(r.job[w.target]) {
			r.arrive(int(w.target), int(w.at), from)
		}
	}
	r.work += len(r.ways)
}

// arrive adds a label that is ready for target k, unless one that is ready at the same minute dominates it.
func (r *router) arrive(k, at int, label routeLabel) {
	s := r.s
	i := k*s.wide + at - s.from
	if k == s.next {
		r.atPin = offer(r.atPin, label, 4*r.width)
		return
	}
	label.memory = label.memory.and(r.keep[s.targets[k].node])
	label.node, label.start = int32(s.targets[k].node), int32(at)
	r.aliveReady[s.targets[k].node*s.t.span+at] = true
	size := 0
	worst := int32(None)
	before := int32(None)
	for id := r.bucket[i]; id != None; id = r.labels.at(id).next {
		other := r.labels.at(id)
		if other.value >= label.value && other.memory.within(label.memory) {
			return
		}
		if label.value >= other.value && label.memory.within(other.memory) {
			if before == None {
				r.bucket[i] = other.next
			} else {
				r.labels.at(before).next = other.next
			}
			continue
		}
		if worst == None || other.value < r.labels.at(worst).value {
			worst = id
		}
		before = id
		size++
	}
	if size >= r.room() {
		both := r.labels.at(worst).memory.and(label.memory)
		if label.value > r.labels.at(worst).value {
			r.labels.at(worst).value, r.labels.at(worst).came = label.value, label.came
		}
		r.labels.at(worst).memory = both
		return
	}
	label.next = r.bucket[i]
	r.bucket[i] = r.labels.add(label)
}

// slots returns the slots of the route that ends with the label.
func (r *router) slots(id int32) []Slot {
	var slots []Slot
	for ; id != None; id = r.labels.at(id).came {
		a := r.labels.at(id)
		slots = append(slots, Slot{Node: int(a.node), Start: int(a.start), End: int(a.end)})
	}
	slices.Reverse(slots)
	return slots
}
