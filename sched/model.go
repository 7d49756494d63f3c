package sched

import (
	"errors"
	"fmt"
	"slices"
)

// A Model is the whole problem as a mixed-integer program that any general solver can read, so that what
// the search claims can be checked from outside. It is built from the problem, the worth and the setups
// alone; the search has no part in it. One unit of flow runs through the session:
//
//	begin ──► ready(node, minute) ──slot──► ended(node, end) ──► ready(next node, minute) ──► …
//
// Slots are binaries; moving, waiting and standing through a break are continuous flows that follow
// them. Since worth never falls when a slot grows, only starts at which something can arrive, or which
// a window or the longest slot sets, are needed.
type Model struct {
	p       *Problem
	columns []column
	rows    []row
	ready   map[[2]int]int // node, minute: row
	ended   map[[2]int]int // node, minute: row
	parked  map[[2]int]int // node, break: row
	jobs    map[int]int    // job: row
	musts   map[int]int    // job: row
	best    map[int]Micro  // job: the worth of its best slot
	most    int
}

// A column of the program: a slot, a flow, or a job that must be there and is not.
type column struct {
	kind    columnKind
	of      [4]int
	entries [4]entry
	used    int
	worth   Micro
	fixed   bool // at 1
}

type entry struct{ row, coefficient int }

type columnKind string

const (
	slotColumn    columnKind = "slot"    // node, start, end
	moveColumn    columnKind = "move"    // node, end, next node, minute ready
	firstColumn   columnKind = "first"   // gap, node, minute ready
	waitColumn    columnKind = "wait"    // node, minute, minute
	parkColumn    columnKind = "park"    // node, end, break
	stayColumn    columnKind = "stay"    // node, break, next break
	resumeColumn  columnKind = "resume"  // node, break, next node, minute ready
	reachColumn   columnKind = "reach"   // node, end, pin
	missingColumn columnKind = "missing" // job
)

// numbers is how many numbers follow the kind in a column's name.
func (k columnKind) numbers() int {
	switch k {
	case moveColumn, resumeColumn:
		return 4
	case missingColumn:
		return 1
	}
	return 3
}

// A row says that its sum is at most its limit, or at least it.
type row struct {
	name    string
	limit   int
	atLeast bool
}

// MaxColumns is the size up to which a model is built: a file of some 60 MB.
const MaxColumns = 600_000

// A TooLargeError says that a model was not built.
type TooLargeError struct {
	Most    int // columns that were accepted
	GridMin int // the grid it was asked for
	Fits    int // the finest grid on which it can be built, or 0
}

func (e *TooLargeError) Error() string {
	if e.Fits == 0 {
		return fmt.Sprintf("the problem has more than %d columns on any grid up to %d min", e.Most, grids[len(grids)-1])
	}
	return fmt.Sprintf("the problem has more than %d columns on a grid of %d min; a grid of %d min would do", e.Most, e.GridMin, e.Fits)
}

// grids are what is offered when a model is too large: what divides an hour.
var grids = []int{1, 2, 3, 4, 5, 6, 10, 12, 15, 20, 30, 60}

var errTooLarge = errors.New("too large")

// NewModel builds the model of a problem. It fails on what Solve fails on, and with a *TooLargeError.
func NewModel(p *Problem) (*Model, error) { return newModel(p, MaxColumns) }

func newModel(p *Problem, most int) (*Model, error) {
	if err := p.Check(); err != nil {
		return nil, fmt.Errorf("malformed problem: %w", err)
	}
	if err := p.checkPinsMeet(); err != nil {
		return nil, err
	}
	m, err := buildModel(p, most)
	if !errors.Is(err, errTooLarge) {
		return m, err
	}
	large := &TooLargeError{Most: most, GridMin: p.GridMin}
	for _, grid := range grids {
		coarser := *p
		coarser.GridMin = grid
		if grid <= p.GridMin {
			continue
		}
		if _, err := buildModel(&coarser, most); err == nil {
			large.Fits = grid
			break
		}
	}
	return nil, large
}

// Size returns how many columns the model has, how many of them are binaries, and how many rows.
func (m *Model) Size() (columns, binaries, rows int) {
	for i := range m.columns {
		if m.columns[i].kind == slotColumn {
			binaries++
		}
	}
	return len(m.columns), binaries, len(m.rows)
}

func buildModel(p *Problem, most int) (*Model, error) {
	m := &Model{p: p, most: most, ready: map[[2]int]int{}, ended: map[[2]int]int{}, parked: map[[2]int]int{},
		jobs: map[int]int{}, musts: map[int]int{}, best: map[int]Micro{}}
	pinnedSlots := map[int]int{}
	for _, pin := range p.Pins {
		pinnedSlots[p.Nodes[pin.Node].Job]++
	}
	m.addJobs(pinnedSlots)
	g := modelGap{prev: None, row: m.addRow(row{name: "begin", limit: 1}), to: p.Minutes}
	for i, pin := range p.Pins {
		g.to, g.pin = pin.Start, m.addRow(row{name: fmt.Sprintf("pin_%d", i)})
		if err := m.addGap(g); err != nil {
			return nil, err
		}
		after := m.addRow(row{name: fmt.Sprintf("after_%d", i)})
		m.add(column{kind: slotColumn, of: [4]int{pin.Node, pin.Start, pin.End}, fixed: true,
			worth: p.JobWorth(p.Nodes[pin.Node].Job, pin.Start, pin.End)}, entry{g.pin, 1}, entry{after, -1})
		g = modelGap{index: i + 1, prev: pin.Node, from: pin.End, row: after, to: p.Minutes}
	}
	if err := m.addGap(g); err != nil {
		return nil, err
	}
	m.addMissing()
	return m, nil
}

// addJobs makes a row for each job that may have slots besides its pins, and one more if it must.
func (m *Model) addJobs(pinnedSlots map[int]int) {
	possible := make([]bool, len(m.p.Jobs))
	for _, n := range m.p.Nodes {
		j := &m.p.Jobs[n.Job]
		for _, w := range m.windowsOf(n) {
			for end := upTo(w.From+j.MinMin, m.p.GridMin); end <= w.To; end += m.p.GridMin {
				possible[n.Job] = true
				start := max(w.From, end-j.MaxMin)
				m.best[n.Job] = max(m.best[n.Job], m.p.JobWorth(n.Job, start, end))
			}
		}
	}
	for i := range m.p.Jobs {
		j := &m.p.Jobs[i]
		left := j.MaxSlots - pinnedSlots[i]
		if j.Barred || left < 1 || !possible[i] {
			continue
		}
		m.jobs[i] = m.addRow(row{name: fmt.Sprintf("job_%d", i), limit: left})
		if j.Must && pinnedSlots[i] == 0 {
			m.musts[i] = m.addRow(row{name: fmt.Sprintf("must_%d", i), limit: 1, atLeast: true})
		}
	}
}

// addMissing lets a plan do without a job that must be there, at a cost above all that it could gain.
func (m *Model) addMissing() {
	cost := Unit
	for i, best := range m.best {
		cost += best * Micro(min(m.p.Jobs[i].MaxSlots, m.p.Minutes))
	}
	for i := range m.p.Jobs {
		if must, ok := m.musts[i]; ok {
			m.add(column{kind: missingColumn, of: [4]int{i}, worth: -cost}, entry{must, 1})
		}
	}
}

// A modelGap is a stretch between two pins, or between one and an end of the session.
type modelGap struct {
	index    int
	prev     int // node before it, or None
	from, to int
	row      int // of the flow that enters it
	pin      int // row of the pin after it, or 0
}

// A lander is a node as it may be observed in a gap.
type lander struct {
	node, job int
	windows   []Span
	arrivals  []bool // by minute − gap start: the flow can arrive here, or a slot may have to start here
}

// addGap adds everything between two pins.
func (m *Model) addGap(g modelGap) error {
	landers := m.landers(g)
	if m.markArrivals(g, landers) > m.most {
		return errTooLarge
	}
	for i := range landers {
		m.addReady(g, &landers[i])
	}
	m.addFirst(g, landers)
	for i := range landers {
		if m.addSlots(g, &landers[i]); len(m.columns) > m.most {
			return errTooLarge
		}
	}
	return m.addMoves(g, landers)
}

func (m *Model) landers(g modelGap) []lander {
	var landers []lander
	for i, n := range m.p.Nodes {
		if _, ok := m.jobs[n.Job]; !ok {
			continue
		}
		l := lander{node: i, job: n.Job}
		for _, w := range m.windowsOf(n) {
			w = Span{From: max(w.From, g.from), To: min(w.To, g.to)}
			if w.To-w.From >= m.p.Jobs[n.Job].MinMin {
				l.windows = append(l.windows, w)
			}
		}
		if len(l.windows) > 0 {
			l.arrivals = make([]bool, g.to-g.from+1)
			landers = append(landers, l)
		}
	}
	return landers
}

// windowsOf returns when slots of the node may stand, breaks and time past taken out.
func (m *Model) windowsOf(n Node) []Span {
	var all []Span
	for _, w := range n.Open {
		for _, s := range m.p.cut(w.Span) {
			if s.To-s.From >= m.p.Jobs[n.Job].MinMin {
				all = append(all, s)
			}
		}
	}
	return all
}

// land returns the first minute from at on at which a slot of the lander may start, such that no setup has
// to be made again after a break on the way.
func (m *Model) land(l *lander, at int) (minute int, ok bool) {
	least := m.p.Jobs[l.job].MinMin
	for _, w := range l.windows {
		if w.To-least < at {
			continue
		}
		minute = max(at, w.From)
		for _, b := range m.p.Breaks {
			if at < b.To && b.To <= minute {
				return 0, false
			}
		}
		return minute, true
	}
	return 0, false
}

// nextBreak returns the break that comes next after a minute, or one past the last.
func (m *Model) nextBreak(minute int) int {
	for b := range m.p.Breaks {
		if m.p.Breaks[b].From >= minute {
			return b
		}
	}
	return len(m.p.Breaks)
}

// arrive returns where a setup that begins after break b (None for the end of a slot) lets the lander start.
// It must be before the break that comes next.
func (m *Model) arrive(from, end int, l *lander, b, next int) (minute int, ok bool) {
	at := m.p.setupAfter(from, max(end, 0), l.node, b).ReadyMin
	if next < len(m.p.Breaks) && at >= m.p.Breaks[next].From {
		return 0, false
	}
	return m.land(l, at)
}

// markArrivals finds the minutes at which each lander needs a row, and counts the moves that lead there until
// they are too many.
func (m *Model) markArrivals(g modelGap, landers []lander) (moves int) {
	first := m.nextBreak(g.from)
	mark := func(from, end int, b, next int) {
		for k := range landers {
			l := &landers[k]
			if minute, ok := m.arrive(from, end, l, b, next); ok && minute >= g.from {
				l.arrivals[minute-g.from] = true
			}
		}
	}
	mark(g.prev, g.from, None, first)
	for b := first; b < len(m.p.Breaks) && m.p.Breaks[b].To <= g.to; b++ {
		mark(g.prev, g.from, b, b+1)
		for i := range landers {
			mark(landers[i].node, m.p.Breaks[b].From, b, b+1)
		}
	}
	for i := range landers {
		l := &landers[i]
		m.eachEnd(l, func(_ Span, end int) {
			if moves > m.most {
				return
			}
			next := m.nextBreak(end)
			for k := range landers {
				if minute, ok := m.arrive(l.node, end, &landers[k], None, next); ok && m.mayFollow(l, &landers[k]) {
					landers[k].arrivals[minute-g.from] = true
					moves++
				}
			}
		})
	}
	for i := range landers {
		l := &landers[i]
		earliest := slices.Index(l.arrivals, true)
		m.eachEnd(l, func(w Span, end int) {
			if start := max(w.From, end-m.p.Jobs[l.job].MaxMin); earliest >= 0 && start-g.from >= earliest {
				l.arrivals[start-g.from] = true
			}
		})
	}
	return moves
}

// eachEnd visits every end that a slot of the lander may have.
func (m *Model) eachEnd(l *lander, visit func(w Span, end int)) {
	for _, w := range l.windows {
		for end := upTo(w.From+m.p.Jobs[l.job].MinMin, m.p.GridMin); end <= w.To; end += m.p.GridMin {
			visit(w, end)
		}
	}
}

func upTo(minute, grid int) int { return (minute + grid - 1) / grid * grid }

// addReady adds the rows of a lander, and the waiting from one to the next.
func (m *Model) addReady(g modelGap, l *lander) {
	before := None
	for i, here := range l.arrivals {
		if !here {
			continue
		}
		minute := g.from + i
		m.ready[[2]int{l.node, minute}] = m.addRow(row{name: fmt.Sprintf("ready_%d_%d", l.node, minute)})
		resets := slices.ContainsFunc(m.p.Breaks, func(b Span) bool { return before < b.To && b.To <= minute })
		if before != None && !resets {
			m.add(column{kind: waitColumn, of: [4]int{l.node, before, minute}},
				entry{m.ready[[2]int{l.node, before}], 1}, entry{m.ready[[2]int{l.node, minute}], -1})
		}
		before = minute
	}
}

// addFirst adds the ways into the gap: straight to a first slot, at once or after a break, and straight
// to the pin at its end.
func (m *Model) addFirst(g modelGap, landers []lander) {
	first := m.nextBreak(g.from)
	enter := func(b, next int) {
		for k := range landers {
			if minute, ok := m.arrive(g.prev, g.from, &landers[k], b, next); ok {
				m.add(column{kind: firstColumn, of: [4]int{g.index, landers[k].node, minute}},
					entry{g.row, 1}, entry{m.ready[[2]int{landers[k].node, minute}], -1})
			}
		}
	}
	enter(None, first)
	for b := first; b < len(m.p.Breaks) && m.p.Breaks[b].To <= g.to; b++ {
		enter(b, b+1)
	}
	if g.pin != 0 {
		m.add(column{kind: firstColumn, of: [4]int{g.index, m.p.Pins[g.index].Node, g.to}}, entry{g.row, 1}, entry{g.pin, -1})
	}
}

// addSlots adds the slots of a lander.
func (m *Model) addSlots(g modelGap, l *lander) {
	j := &m.p.Jobs[l.job]
	m.eachEnd(l, func(w Span, end int) {
		ended, opened := 0, false
		for start := max(w.From, end-j.MaxMin); start <= end-j.MinMin; start++ {
			if !l.arrivals[start-g.from] {
				continue
			}
			if !opened {
				ended, opened = m.addRow(row{name: fmt.Sprintf("ended_%d_%d", l.node, end)}), true
				m.ended[[2]int{l.node, end}] = ended
			}
			c := column{kind: slotColumn, of: [4]int{l.node, start, end}, worth: m.p.JobWorth(l.job, start, end)}
			entries := []entry{{m.ready[[2]int{l.node, start}], 1}, {ended, -1}, {m.jobs[l.job], 1}}
			if must, ok := m.musts[l.job]; ok {
				entries = append(entries, entry{must, 1})
			}
			m.add(c, entries...)
		}
	})
}

// addMoves adds what follows a slot: another one, the pin at the end of the gap, or a break.
func (m *Model) addMoves(g modelGap, landers []lander) error {
	for i := range landers {
		l := &landers[i]
		m.eachEnd(l, func(_ Span, end int) {
			ended, ok := m.ended[[2]int{l.node, end}]
			if !ok || len(m.columns) > m.most {
				return
			}
			next := m.nextBreak(end)
			for k := range landers {
				if minute, ok := m.arrive(l.node, end, &landers[k], None, next); ok && m.mayFollow(l, &landers[k]) {
					m.add(column{kind: moveColumn, of: [4]int{l.node, end, landers[k].node, minute}},
						entry{ended, 1}, entry{m.ready[[2]int{landers[k].node, minute}], -1})
				}
			}
			if g.pin != 0 && m.p.SetupBetween(l.node, end, m.p.Pins[g.index].Node, g.to).ReadyMin <= g.to {
				m.add(column{kind: reachColumn, of: [4]int{l.node, end, g.index}}, entry{ended, 1}, entry{g.pin, -1})
			}
			if next < len(m.p.Breaks) && m.p.Breaks[next].To <= g.to {
				m.add(column{kind: parkColumn, of: [4]int{l.node, end, next}}, entry{ended, 1}, entry{m.parkedRow(l.node, next), -1})
			}
		})
		m.addResumes(g, l, landers)
		if len(m.columns) > m.most {
			return errTooLarge
		}
	}
	return nil
}

// addResumes adds what follows the breaks of the gap when the lander was observed before them.
func (m *Model) addResumes(g modelGap, l *lander, landers []lander) {
	for b := m.nextBreak(g.from); b < len(m.p.Breaks) && m.p.Breaks[b].To <= g.to; b++ {
		parked, ok := m.parked[[2]int{l.node, b}]
		if !ok {
			continue
		}
		for k := range landers {
			if minute, ok := m.arrive(l.node, m.p.Breaks[b].From, &landers[k], b, b+1); ok && m.mayFollow(l, &landers[k]) {
				m.add(column{kind: resumeColumn, of: [4]int{l.node, b, landers[k].node, minute}},
					entry{parked, 1}, entry{m.ready[[2]int{landers[k].node, minute}], -1})
			}
		}
		if b+1 < len(m.p.Breaks) && m.p.Breaks[b+1].To <= g.to {
			m.add(column{kind: stayColumn, of: [4]int{l.node, b, b + 1}}, entry{parked, 1}, entry{m.parkedRow(l.node, b+1), -1})
		}
	}
}

func (m *Model) mayFollow(l, next *lander) bool {
	return l.job != next.job || m.p.Jobs[l.job].MaxSlots > 1
}

func (m *Model) parkedRow(node, b int) int {
	at, ok := m.parked[[2]int{node, b}]
	if !ok {
		at = m.addRow(row{name: fmt.Sprintf("parked_%d_%d", node, b)})
		m.parked[[2]int{node, b}] = at
	}
	return at
}

func (m *Model) addRow(r row) int {
	m.rows = append(m.rows, r)
	return len(m.rows) - 1
}

func (m *Model) add(c column, entries ...entry) {
	c.used = copy(c.entries[:], entries)
	m.columns = append(m.columns, c)
}
