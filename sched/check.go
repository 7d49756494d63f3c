package sched

import (
	"errors"
	"fmt"
	"slices"
)

// Check reports every way in which the problem is malformed: lengths, indices, order, ranges. The search
// and the judge rely on it; a problem that passes cannot make them panic.
func (p *Problem) Check() error {
	var faults []error
	fault := func(format string, args ...any) { faults = append(faults, fmt.Errorf(format, args...)) }
	if p.Minutes < 1 || p.Minutes > maxMinutes {
		fault("session of %d min: 1 to %d accepted", p.Minutes, maxMinutes)
	}
	if p.GridMin < 1 {
		fault("grid of %d min: 1 or more accepted", p.GridMin)
	}
	if p.OverheadSec < 0 || p.OverheadSec > maxSec {
		fault("overhead of %d s: 0 to %d accepted", p.OverheadSec, maxSec)
	}
	for i, r := range p.Receivers {
		if r.ChangeSec < 0 || r.ChangeSec > maxSec {
			fault("receiver %d (%s): change of %d s: 0 to %d accepted", i, r.Name, r.ChangeSec, maxSec)
		}
	}
	if where, ok := spansInOrder(p.Breaks); !ok {
		fault("break %d: breaks lie apart from one another in time order, each with from before to", where)
	}
	p.checkSlew(fault)
	for i := range p.Jobs {
		p.checkJob(i, fault)
	}
	p.checkNodes(fault)
	p.checkPins(fault)
	return errors.Join(faults...)
}

// maxMinutes is a month: longer than any session, small enough for every sum in 32 bits.
const maxMinutes = 31 * 24 * 60

// maxSec is a day: longer than any setup.
const maxSec = 24 * 60 * 60

func (p *Problem) checkSlew(fault func(string, ...any)) {
	t := p.Slew
	switch {
	case len(p.Nodes) == 0:
	case t.Places < 1 || t.BinMin < 1 || t.Bins < 1:
		fault("slew table of %d places, %d bins of %d min: 1 or more of each accepted", t.Places, t.Bins, t.BinMin)
	case len(t.Sec) != (t.Bins+len(p.Breaks))*t.Places*t.Places:
		fault("slew table has %d values: (%d bins + %d breaks) · %d places² wanted", len(t.Sec), t.Bins, len(p.Breaks), t.Places)
	}
}

func (p *Problem) checkJob(i int, fault func(string, ...any)) {
	j := &p.Jobs[i]
	if j.Receiver < 0 || j.Receiver >= len(p.Receivers) {
		fault("job %d (%s): receiver %d of %d", i, j.Source, j.Receiver, len(p.Receivers))
	}
	if j.MinMin < 1 || j.MaxMin < j.MinMin {
		fault("job %d (%s): slots of %d to %d min: at least 1, and the least not above the most", i, j.Source, j.MinMin, j.MaxMin)
	}
	if j.MaxSlots < 1 {
		fault("job %d (%s): at most %d slots: 1 or more accepted", i, j.Source, j.MaxSlots)
	}
	worth := 0.0
	for k := range j.Terms {
		t := &j.Terms[k]
		switch {
		case t.Wanted < 1:
			fault("job %d (%s), term %d: wanted %d: 1 or more accepted", i, j.Source, k, t.Wanted)
		case t.Scale < 0 || t.Scale > maxScale:
			fault("job %d (%s), term %d: scale %d: 0 to %d accepted", i, j.Source, k, t.Scale, maxScale)
		case !slices.Contains([]Curve{Root, Share, Log, Step}, t.Curve):
			fault("job %d (%s), term %d: curve %q: root, share, log or step accepted", i, j.Source, k, t.Curve)
		case len(t.Cum) != p.Minutes+1:
			fault("job %d (%s), term %d: %d sums: one for each of %d minutes and one more wanted", i, j.Source, k, len(t.Cum), p.Minutes)
		case !slices.IsSorted(t.Cum) || t.Cum[0] < 0:
			fault("job %d (%s), term %d: sums that fall or start below zero", i, j.Source, k)
		default:
			worth += float64(t.Scale) * t.Credit(0, p.Minutes)
		}
	}
	if worth > float64(maxScale) {
		fault("job %d (%s): worth up to %.3g units in the session: at most %.3g accepted", i, j.Source, worth/float64(Unit), float64(maxScale/Unit))
	}
}

// maxScale is a million units: sums over a session stay far from the ends of 64 bits.
const maxScale = 1_000_000 * Unit

func (p *Problem) checkNodes(fault func(string, ...any)) {
	for i, n := range p.Nodes {
		if n.Job < 0 || n.Job >= len(p.Jobs) {
			fault("node %d: job %d of %d", i, n.Job, len(p.Jobs))
		}
		if n.Place < 0 || n.Place >= p.Slew.Places {
			fault("node %d: place %d of %d", i, n.Place, p.Slew.Places)
		}
		if i > 0 && p.Nodes[i-1].Job > n.Job {
			fault("node %d: nodes are sorted by job", i)
		}
		spans := make([]Span, len(n.Open))
		for k, w := range n.Open {
			spans[k] = w.Span
		}
		if where, ok := spansInOrder(spans); !ok {
			fault("node %d, window %d: windows lie apart from one another in time order", i, where)
		}
	}
}

func (p *Problem) checkPins(fault func(string, ...any)) {
	for i, s := range p.Pins {
		if s.Node < 0 || s.Node >= len(p.Nodes) {
			fault("pin %d: node %d of %d", i, s.Node, len(p.Nodes))
		}
		if s.Start < 0 || s.End <= s.Start || s.End > p.Minutes {
			fault("pin %d: from minute %d to %d: within the session of %d min, the end after the start", i, s.Start, s.End, p.Minutes)
		}
		if i > 0 && p.Pins[i-1].Start > s.Start {
			fault("pin %d: pins are in time order", i)
		}
	}
}

func spansInOrder(spans []Span) (where int, ok bool) {
	for i, s := range spans {
		if s.To < s.From || i > 0 && s.From < spans[i-1].To {
			return i, false
		}
	}
	return 0, true
}
