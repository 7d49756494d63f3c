package sched

import (
	"fmt"
	"math"
	"slices"
)

// The edits below are what an observer does by hand. Each returns a new plan in time order and the index
// of the slot concerned, and leaves every other slot alone, pinned or not; a pinned slot changes only when
// it is the one that is edited, and stays pinned. None checks the limits: Verify does.

// Clone returns a plan that shares nothing with this one.
func (plan Plan) Clone() Plan { return Plan{Slots: slices.Clone(plan.Slots)} }

// Sorted returns a copy in time order.
func (plan Plan) Sorted() Plan {
	c := plan.Clone()
	slices.SortStableFunc(c.Slots, compareSlots)
	return c
}

// MoveSlot shifts slot i by byMin minutes, rounded onward so that its end lies on the grid, and keeps its
// length. It stops at the ends of the session.
func MoveSlot(p *Problem, plan Plan, i, byMin int) (Plan, int) {
	return change(plan, i, func(s *Slot) {
		length := s.End - s.Start
		s.End = max(min(length, p.Minutes), min(p.step(s.End, byMin), p.Minutes))
		s.Start = max(0, s.End-length)
		p.rehome(s)
	})
}

// Lengthen moves the end of slot i by byMin minutes (below zero: shortens it), rounded onward to the grid.
// A slot keeps at least one minute.
func Lengthen(p *Problem, plan Plan, i, byMin int) (Plan, int) {
	return change(plan, i, func(s *Slot) {
		s.End = max(s.Start+1, min(p.step(s.End, byMin), p.Minutes))
		p.rehome(s)
	})
}

// StretchStart moves the start of slot i by byMin minutes: below zero it begins earlier.
func StretchStart(p *Problem, plan Plan, i, byMin int) (Plan, int) {
	return change(plan, i, func(s *Slot) {
		s.Start = min(s.End-1, max(0, s.Start+byMin))
		p.rehome(s)
	})
}

// Drop takes slot i out. The index is that of the slot now in its place, or of the last.
func Drop(plan Plan, i int) (Plan, int) {
	c := plan.Sorted()
	if i < 0 || i >= len(c.Slots) {
		return c, i
	}
	c.Slots = slices.Delete(c.Slots, i, i+1)
	return c, min(i, len(c.Slots)-1)
}

// SetPinned pins slot i or lets it go.
func SetPinned(plan Plan, i int, pinned bool) (Plan, int) {
	return change(plan, i, func(s *Slot) { s.Pinned = pinned })
}

// Replace puts another job where slot i was: the best that fits between its neighbours and covers the
// slot's middle or begins nearest to it, else the same minutes. Pin and note stay.
func Replace(p *Problem, plan Plan, i, job int) (Plan, int) {
	sorted := plan.Sorted().Slots
	return change(plan, i, func(s *Slot) {
		middle := (s.Start + s.End) / 2
		place, ok := holeAt(p, sorted, i, 1).best(job, middle)
		switch node := p.nodeAt(job, middle); {
		case ok:
			s.Node, s.Start, s.End = place.slot.Node, place.slot.Start, place.slot.End
		case node != None:
			s.Node = node
		}
	})
}

// Insert adds a slot of the job: in the gap at minute atMin the one of most worth that covers the minute
// or begins nearest to it, without moving other slots. If none fits, the slot has the job's least
// length from that minute on, whatever it breaks.
func Insert(p *Problem, plan Plan, job, atMin int) (Plan, int, error) {
	c := plan.Sorted()
	if job < 0 || job >= len(p.Jobs) {
		return c, None, fmt.Errorf("insert: no job %d: the session has %d", job, len(p.Jobs))
	}
	node := p.nodeAt(job, atMin)
	if node == None {
		return c, None, fmt.Errorf("insert: %s cannot be reached by the mount in this session", p.jobName(job))
	}
	slot := p.shortestAt(node, atMin)
	if at, covered := gapAt(c.Slots, atMin); !covered {
		if place, ok := holeAt(p, c.Slots, at, 0).best(job, atMin); ok {
			slot = place.slot
		}
	}
	at, _ := slices.BinarySearchFunc(c.Slots, slot, compareSlots)
	c.Slots = slices.Insert(c.Slots, at, slot)
	return c, at, nil
}

// change edits slot i of the sorted plan and finds it again.
func change(plan Plan, i int, edit func(*Slot)) (Plan, int) {
	c := plan.Sorted()
	if i < 0 || i >= len(c.Slots) {
		return c, i
	}
	edit(&c.Slots[i])
	slot := c.Slots[i]
	c.Slots = slices.Delete(c.Slots, i, i+1)
	at, _ := slices.BinarySearchFunc(c.Slots, slot, compareSlots)
	c.Slots = slices.Insert(c.Slots, at, slot)
	return c, at
}

// step returns the minute by minutes on, rounded onward in the same direction to the grid.
func (p *Problem) step(minute, by int) int {
	to, g := minute+by, p.GridMin
	over := ((to % g) + g) % g
	switch {
	case over == 0:
		return to
	case by > 0:
		return to + g - over
	default:
		return to - over
	}
}

// nodeAt returns the node of the job whose window is nearest to the minute, or None if it has no node.
func (p *Problem) nodeAt(job, minute int) int {
	best, away := None, 0
	for i, n := range p.Nodes {
		if n.Job != job {
			continue
		}
		off := n.MinutesFrom(minute)
		if best == None || off < away {
			best, away = i, off
		}
	}
	return best
}

// MinutesFrom returns how many minutes the node's nearest window is away from a minute: 0 inside one. A node without
// windows is further away than any session is long.
func (n Node) MinutesFrom(minute int) int {
	off := math.MaxInt
	for _, w := range n.Open {
		off = min(off, max(0, w.From-minute, minute-w.To))
	}
	return off
}

// rehome gives a slot that its edit has taken out of its node's windows to another node of its job that holds it,
// one on the same cable turn if there is any: a pass that a limit cuts in two has a node for each part.
func (p *Problem) rehome(s *Slot) {
	if p.Nodes[s.Node].holds(s) {
		return
	}
	home := None
	for i := range p.Nodes {
		n := &p.Nodes[i]
		if n.Job == p.Nodes[s.Node].Job && n.holds(s) && (home == None || n.Turn == p.Nodes[s.Node].Turn && p.Nodes[home].Turn != n.Turn) {
			home = i
		}
	}
	if home != None {
		s.Node = home
	}
}

func (n *Node) holds(s *Slot) bool {
	return slices.ContainsFunc(n.Open, func(w Window) bool { return w.From <= s.Start && s.End <= w.To })
}

// shortestAt returns the slot of the node's least length from the minute on, within the session and
// ending on the grid.
func (p *Problem) shortestAt(node, minute int) Slot {
	length := min(p.Jobs[p.Nodes[node].Job].MinMin, p.Minutes)
	end := p.step(max(0, minute)+length-1, 1)
	if end > p.Minutes {
		end = max(p.Minutes-p.Minutes%p.GridMin, min(length, p.Minutes))
	}
	start := max(0, min(minute, end-length))
	return Slot{Node: node, Start: start, End: end}
}

// gapAt returns where in the sorted slots a slot at this minute belongs, and whether one is there already:
// then it is that one's index.
func gapAt(slots []Slot, minute int) (at int, covered bool) {
	for i, s := range slots {
		if minute < s.Start {
			return i, false
		}
		if minute < s.End {
			return i, true
		}
	}
	return len(slots), false
}
