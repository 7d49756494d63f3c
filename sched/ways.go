package sched

import "slices"

// ways knows how long the longest of the ways from each place are, so that most need not be looked at again.
type ways struct {
	shortest, longest int      // seconds, of all departures outside breaks
	row               []uint16 // bin·Places + from: the longest way
	afterBreak        []int    // by break: the longest way when it has ended
}

func newWays(t *SlewTable) *ways {
	w := &ways{shortest: 1 << 30, row: make([]uint16, t.Bins*t.Places)}
	for i := range w.row {
		low, high := uint16(1<<16-1), uint16(0)
		for _, sec := range t.Sec[i*t.Places : (i+1)*t.Places] {
			low, high = min(low, sec), max(high, sec)
		}
		w.row[i] = high
		w.shortest, w.longest = min(w.shortest, int(low)), max(w.longest, int(high))
	}
	for i := t.Bins * t.Places * t.Places; i < len(t.Sec); i += t.Places * t.Places {
		w.afterBreak = append(w.afterBreak, int(slices.Max(t.Sec[i:i+t.Places*t.Places])))
	}
	return w
}

// direct tells whether no way between two places is longer than the way by a third, with so many seconds spent
// there from a minute not before from to one not after to. Then what is observed at the third place can be left
// out of any plan: receiver changes never take longer for leaving one out.
func (w *ways) direct(p *Problem, by, from, to, spentSec int) bool {
	if w.longest <= spentSec+2*w.shortest {
		return true
	}
	t := &p.Slew
	n := t.Places
	// Who left earlier than this is there in time by any way; so is who arrives by the third place later.
	reach := ceilMin(w.longest + p.OverheadSec)
	last := p.slewBin(to)
	soonest := make([]uint16, n)
	for bin := p.slewBin(max(0, from+spentSec/60-reach)); bin <= last; bin++ {
		least := uint16(1<<16 - 1)
		for q := range soonest {
			soonest[q] = 1<<16 - 1
		}
		for later := bin; later <= p.slewBin((bin+1)*t.BinMin+reach); later++ {
			for q, sec := range t.Sec[(later*n+by)*n : (later*n+by+1)*n] {
				soonest[q] = min(soonest[q], sec)
				least = min(least, sec)
			}
		}
		for a := range n {
			there := int(t.Sec[(bin*n+a)*n+by]) + spentSec
			row := int(w.row[bin*n+a])
			if row <= there+int(least) || from+spentSec/60-(bin+1)*t.BinMin >= ceilMin(row+p.OverheadSec) {
				continue
			}
			for q, sec := range t.Sec[(bin*n+a)*n : (bin*n+a+1)*n] {
				if int(sec) > there+int(soonest[q]) {
					return false
				}
			}
		}
	}
	return true
}
