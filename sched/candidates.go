package sched

import "slices"

// A Candidate is what a job could do at a minute of the plan.
type Candidate struct {
	Job, Node  int
	Start, End int
	Worth      Micro
	Fits       bool  // without moving or displacing another slot
	Displaces  []int // slots of the plan (as given) that would have to go
	Cost       Micro // their worth
}

// Candidates returns every job that is not barred and that the mount can reach, best first by what it
// gains less what it displaces; those that can't be placed at all come last, at the minute as asked.
// Each has its best placement that covers the minute or begins nearest to it. Pins are never displaced.
func Candidates(p *Problem, plan Plan, atMin int) []Candidate {
	order := make([]int, len(plan.Slots))
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, func(a, b int) int { return compareSlots(plan.Slots[a], plan.Slots[b]) })
	slots := make([]Slot, len(order))
	for i, k := range order {
		slots[i] = plan.Slots[k]
	}
	holes := holesAround(p, slots, atMin)
	var list []Candidate
	for job := range p.Jobs {
		if p.Jobs[job].Barred {
			continue
		}
		if c, ok := bestCandidate(p, slots, holes, job, atMin); ok {
			for i := range c.Displaces {
				c.Displaces[i] = order[c.Displaces[i]]
			}
			list = append(list, c)
		}
	}
	slices.SortStableFunc(list, compareCandidates)
	return list
}

func compareCandidates(a, b Candidate) int {
	placedA, placedB := a.Fits || len(a.Displaces) > 0, b.Fits || len(b.Displaces) > 0
	switch gainA, gainB := a.Worth-a.Cost, b.Worth-b.Cost; {
	case placedA != placedB:
		if placedA {
			return -1
		}
		return 1
	case gainA != gainB:
		if gainA > gainB {
			return -1
		}
		return 1
	}
	return a.Job - b.Job
}

// A displacement is a hole and the slots at..at+gone that were taken out to make it.
type displacement struct {
	at, gone int
	cost     Micro
}

// holesAround returns the ways to make room at the minute: the gap as it is, if the minute lies in one,
// then without the slot there, without its neighbours, without both.
func holesAround(p *Problem, slots []Slot, atMin int) []displacement {
	at, covered := gapAt(slots, atMin)
	var ways []displacement
	add := func(a, b int) {
		if a < 0 || b > len(slots) {
			return
		}
		way := displacement{at: a, gone: b - a}
		for _, s := range slots[a:b] {
			if s.Pinned {
				return
			}
			way.cost += p.JobWorth(p.Nodes[s.Node].Job, s.Start, s.End)
		}
		ways = append(ways, way)
	}
	if covered {
		add(at, at+1)
		add(at-1, at+1)
		add(at, at+2)
		add(at-1, at+2)
		return ways
	}
	add(at, at)
	add(at-1, at)
	add(at, at+1)
	add(at-1, at+1)
	return ways
}

func bestCandidate(p *Problem, slots []Slot, ways []displacement, job, atMin int) (Candidate, bool) {
	node := p.nodeAt(job, atMin)
	if node == None {
		return Candidate{}, false
	}
	s := p.shortestAt(node, atMin)
	best := Candidate{Job: job, Node: node, Start: s.Start, End: s.End, Worth: p.JobWorth(job, s.Start, s.End)}
	placed := false
	for _, way := range ways {
		if spentOutside(p, slots, way, job) {
			continue
		}
		place, ok := holeAt(p, slots, way.at, way.gone).best(job, atMin)
		if !ok || placed && place.worth-way.cost <= best.Worth-best.Cost {
			continue
		}
		best.Node, best.Start, best.End = place.slot.Node, place.slot.Start, place.slot.End
		best.Worth, best.Cost, best.Fits = place.worth, way.cost, way.gone == 0
		best.Displaces = nil
		for i := range way.gone {
			best.Displaces = append(best.Displaces, way.at+i)
		}
		placed = true
		if best.Fits {
			break // what fits is not weighed against what has to go
		}
	}
	return best, true
}

// spentOutside tells whether the job has all its slots already, apart from those displaced.
func spentOutside(p *Problem, slots []Slot, way displacement, job int) bool {
	n := 0
	for i, s := range slots {
		if p.Nodes[s.Node].Job == job && (i < way.at || i >= way.at+way.gone) {
			n++
		}
	}
	return n >= p.Jobs[job].MaxSlots
}
