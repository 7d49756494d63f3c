package sched

// None stands for a node, slot or break that is not there.
const None = -1

// A Setup is what happens between one slot and the next: the mount moves and the receiver is changed at
// the same time, then comes the overhead. Nothing moves in a break, so with breaks between the slots all
// of it happens after the last one.
type Setup struct {
	FreeMin     int // the minute from which it counts: the end of the slot before, of the last break, or 0
	Break       int // the last break between the slots, or None
	SlewSec     int // 0 for the first slot: the telescope waits on source
	ChangeSec   int // 0 when the receiver stays
	OverheadSec int
	ReadyMin    int // the first minute at which the next slot may start
}

// SlewSec returns how long the mount takes from one node to another when it leaves at minute departMin.
func (p *Problem) SlewSec(from, to, departMin int) int {
	return p.slewInBin(from, to, p.slewBin(departMin))
}

// SetupBetween returns what lies between the end of a slot of node from at minute endMin and the start
// of a slot of node to at minute startMin. With from = None the slot is the first of the session, and
// endMin is ignored.
func (p *Problem) SetupBetween(from, endMin, to, startMin int) Setup {
	if from == None {
		endMin = 0
	}
	return p.setupAfter(from, endMin, to, p.breakBetween(endMin, startMin))
}

// ReadyMin returns the first minute, not before notBefore, at which a slot of node to may start after a
// slot of node from that ends at minute endMin, such that its start lies outside the breaks. With
// from = None it is the first slot of the session.
func (p *Problem) ReadyMin(from, endMin, to, notBefore int) int {
	if from == None {
		endMin = 0
	}
	ready := notBefore
	for {
		// Each pass can only bring later breaks between the slots, so this ends.
		next := max(ready, p.SetupBetween(from, endMin, to, ready).ReadyMin)
		for _, b := range p.Breaks {
			if next >= b.From && next < b.To {
				next = b.To
			}
		}
		if next == ready {
			return ready
		}
		ready = next
	}
}

func (p *Problem) setupAfter(from, endMin, to, brk int) Setup {
	s := Setup{FreeMin: endMin, Break: brk, OverheadSec: p.OverheadSec}
	bin := p.slewBin(endMin)
	if brk != None {
		s.FreeMin = p.Breaks[brk].To
		bin = p.Slew.Bins + brk
	}
	if from != None {
		s.SlewSec = p.slewInBin(from, to, bin)
		s.ChangeSec = p.changeSec(from, to)
	}
	s.ReadyMin = s.FreeMin + ceilMin(max(s.SlewSec, s.ChangeSec)+s.OverheadSec)
	return s
}

func (p *Problem) breakBetween(endMin, startMin int) int {
	last := None
	for i, b := range p.Breaks {
		if b.From >= endMin && b.To <= startMin {
			last = i
		}
	}
	return last
}

func (p *Problem) slewBin(minute int) int {
	return max(0, min(minute/max(1, p.Slew.BinMin), p.Slew.Bins-1))
}

func (p *Problem) slewInBin(from, to, bin int) int {
	a, b := p.Nodes[from].Place, p.Nodes[to].Place
	return int(p.Slew.Sec[(bin*p.Slew.Places+a)*p.Slew.Places+b])
}

func (p *Problem) changeSec(from, to int) int {
	old, new := p.Jobs[p.Nodes[from].Job].Receiver, p.Jobs[p.Nodes[to].Job].Receiver
	if old == new {
		return 0
	}
	return p.Receivers[new].ChangeSec
}

func ceilMin(sec int) int { return (sec + 59) / 60 }
