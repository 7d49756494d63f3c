package campaigns

import (
	"fmt"
	"math"
	"slices"
	"sync"
	"time"

	"example.org/tallystick/sched"
)

// Saved is the plan as it is kept in the campaign's folder. What was proved is kept with it if it bounds the plan;
// a bound of no problem is none.
func (p *Prepared) Saved(plan sched.Plan, proved sched.Bound, version string) *SavedPlan {
	s := &SavedPlan{
		Session: p.Session.Name, Campaign: p.Campaign.Name, MadeAt: p.At.UTC(), Version: version,
		GridMin: p.Problem.GridMin, Worth: inUnits(p.Problem.PlanWorth(plan)),
	}
	if proved.Of != nil && proved.Holds(plan) {
		s.Ceiling, s.ProvedFor = inUnits(proved.Ceiling), proved.Fingerprint(p.ground())
		if proved.Of.FromMin > 0 {
			s.ProvedFrom = p.Instant(proved.Of.FromMin)
		}
	}
	barred := map[string]bool{}
	for _, j := range p.Problem.Jobs {
		if j.Barred && !barred[j.Source] {
			barred[j.Source] = true
			s.Bars = append(s.Bars, j.Source)
		}
	}
	for _, slot := range plan.Slots {
		node := p.Problem.Nodes[slot.Node]
		job := p.Problem.Jobs[node.Job]
		s.Slots = append(s.Slots, SavedSlot{
			Source: job.Source, Receiver: p.Problem.Receivers[job.Receiver].Name,
			Start: p.Instant(slot.Start), End: p.Instant(slot.End),
			Turn: p.turnAt(node, slot.Start), Pinned: slot.Pinned, Note: slot.Note,
		})
	}
	return s
}

func inUnits(m sched.Micro) float64 { return float64(m) / float64(sched.Unit) }

// Proved returns what was proved of a saved plan, if the session is still the problem that it was proved for; plan is
// what Bind made of it. Where the plan has a ceiling and this is false, something has changed since.
func (p *Prepared) Proved(saved *SavedPlan, plan sched.Plan) (sched.Bound, bool) {
	if !saved.HasProof() {
		return sched.Bound{}, false
	}
	q := *p.Problem
	q.GridMin, q.FromMin, q.Pins = saved.GridMin, 0, nil
	if !saved.ProvedFrom.IsZero() {
		q.FromMin = p.Minute(saved.ProvedFrom)
	}
	q.Jobs = slices.Clone(q.Jobs)
	for i := range q.Jobs {
		q.Jobs[i].Barred = slices.Contains(saved.Bars, q.Jobs[i].Source)
	}
	for _, slot := range plan.Slots {
		if slot.Pinned || slot.Start < q.FromMin {
			q.Pins = append(q.Pins, slot)
		}
	}
	ceiling := sched.Micro(math.Round(saved.Ceiling * float64(sched.Unit)))
	b, ok := sched.BoundOf(&q, sched.Result{Plan: plan, Ceiling: ceiling, HasCeiling: true})
	if !ok || b.Fingerprint(p.ground()) != saved.ProvedFor {
		return sched.Bound{}, false
	}
	return b, true
}

// HasProof tells whether a ceiling was saved with the plan and with what it was proved for.
func (s *SavedPlan) HasProof() bool { return s.Ceiling > 0 && s.ProvedFor != "" }

// ProofLost is said of a plan whose ceiling no longer is one.
const ProofLost = "the campaign or the logbook changed since: no ceiling yet"

// ground is worked out once for a prepared session and all that share its problem.
func (p *Prepared) ground() sched.Ground {
	p.digest.once.Do(func() { p.digest.ground = p.Problem.Ground() })
	return p.digest.ground
}

// A groundOnce is the digest of a problem, once it is asked for.
type groundOnce struct {
	once   sync.Once
	ground sched.Ground
}

// Bind finds a saved plan's slots in the prepared session. What no longer fits anything there, because
// the campaign has changed since, comes back in words.
func (p *Prepared) Bind(saved *SavedPlan) (plan sched.Plan, lost []string) {
	for _, s := range saved.Slots {
		node, ok := p.nodeFor(s)
		switch {
		case !ok:
			lost = append(lost, fmt.Sprintf("%s with %s at %s: no aim of this campaign asks for it in this session",
				s.Source, s.Receiver, s.Start.UTC().Format("15:04")))
		case s.Start.After(p.Session.End) || s.End.Before(p.Session.Start):
			lost = append(lost, fmt.Sprintf("%s with %s at %s: outside the session",
				s.Source, s.Receiver, s.Start.UTC().Format(time.RFC3339)))
		default:
			plan.Slots = append(plan.Slots, sched.Slot{
				Node: node, Start: p.Minute(s.Start), End: p.Minute(s.End), Pinned: s.Pinned, Note: s.Note,
			})
		}
	}
	return plan.Sorted(), lost
}

// nodeFor finds the node of a saved slot: its source and receiver, on the cable turn it was saved with or, where
// that is no longer to be had, the nearest; of several, the one whose windows are nearest to its start.
func (p *Prepared) nodeFor(s SavedSlot) (int, bool) {
	best, bestTurns, bestMinutes := sched.None, 0, 0
	start := p.Minute(s.Start)
	for i, n := range p.Problem.Nodes {
		j := p.Problem.Jobs[n.Job]
		if j.Source != s.Source || p.Problem.Receivers[j.Receiver].Name != s.Receiver {
			continue
		}
		turns, minutes := max(p.turnAt(n, start)-s.Turn, s.Turn-p.turnAt(n, start)), n.MinutesFrom(start)
		if best == sched.None || turns < bestTurns || turns == bestTurns && minutes < bestMinutes {
			best, bestTurns, bestMinutes = i, turns, minutes
		}
	}
	return best, best != sched.None
}

// turnAt is the cable turn of a node at a minute: mount azimuth = compass azimuth + 360 × turn.
func (p *Prepared) turnAt(n sched.Node, minute int) int {
	return int(math.Floor(p.mountAzimuth(n, p.clamp(minute)) / 360))
}
