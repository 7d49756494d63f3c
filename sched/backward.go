package sched

// completion bounds what can still be gathered from each state of a gap to its end, when jobs may come
// again though not at once: the sweep run backwards. A path is worth following only if its value and this
// together pass the best plan.
type completion struct {
	s      *sweeper
	ready  []Micro // target·wide + minute − from: when ready by then
	come   []Micro // likewise, when it becomes ready just then
	ended  []Micro // target·wide + end − from: after a slot that ends then
	parked []Micro // break·targets + target: after standing through that break
	origin Micro   // from the gap's start
	after  Micro

	deadReady, deadEnd []bool
}

// of fills the bounds for the gap that the sweeper has entered, with ends on its grid. after is what can be
// gathered after the gap; dead states, by node and minute, are left out.
func (c *completion) of(s *sweeper, g gap, after Micro, deadReady, deadEnd []bool) {
	c.s, c.after, c.deadReady, c.deadEnd = s, after, deadReady, deadEnd
	n, p := len(s.targets), s.t.p
	c.ready, c.come, c.ended = grow(c.ready, n*s.wide), grow(c.come, n*s.wide), grow(c.ended, n*s.wide)
	c.parked = grow(c.parked, n*len(p.Breaks))
	for i := range c.ready {
		c.ready[i], c.ended[i] = unreachable, unreachable
	}
	for i := range c.parked {
		c.parked[i] = unreachable
	}
	if s.next != None {
		c.ready[s.next*s.wide+g.nextStart-s.from] = after
	}
	to := s.from + s.wide - 1
	b := len(p.Breaks) - 1
	for e := to; e >= s.from; e-- {
		c.wait(e)
		for b >= 0 && p.Breaks[b].From > e {
			b--
		}
		for at := b; at >= 0 && p.Breaks[at].From == e; at-- {
			c.park(at, to)
		}
		if e%s.grid == 0 {
			c.end(e)
		}
	}
	c.origin = c.fromStart(g)
}

// wait carries being ready at the next minute back to this one, unless a break ends there.
func (c *completion) wait(e int) {
	s := c.s
	waits := e+1 < s.from+s.wide && !s.t.breakTo[e+1]
	i := e - s.from
	for l := range s.targets {
		if waits {
			c.ready[i] = max(c.ready[i], c.ready[i+1])
		}
		c.come[i] = c.ready[i]
		if l != s.next && c.deadReady[s.targets[l].node*s.t.span+e] {
			c.come[i] = unreachable
		}
		i += s.wide
	}
}

// park bounds what follows break b for each target that was observed before it.
func (c *completion) park(b, to int) {
	s, p := c.s, c.s.t.p
	n := len(s.targets)
	until := to + 1
	if b+1 < len(p.Breaks) {
		until = min(until, p.Breaks[b+1].From+1)
	}
	if p.Breaks[b].To > to {
		return
	}
	for l := range s.targets {
		if l == s.next {
			continue
		}
		best := c.following(l, p.Slew.Bins+b, p.Breaks[b].To, until)
		if b+1 < len(p.Breaks) {
			best = max(best, c.parked[(b+1)*n+l])
		}
		c.parked[b*n+l] = best
	}
}

// end bounds what follows a slot that ends at minute e, then what a slot with that end brings to its starts.
func (c *completion) end(e int) {
	s, p := c.s, c.s.t.p
	n := len(s.targets)
	until := s.from + s.wide
	next := int(s.t.after[e])
	if next < len(p.Breaks) {
		until = min(until, p.Breaks[next].From)
	}
	bin := p.slewBin(e)
	for l := range s.targets {
		a := &s.targets[l]
		opens := int(a.windows[e])
		if opens == None || l == s.next || c.deadEnd[a.node*s.t.span+e] {
			continue
		}
		low, high := max(opens, e-a.max, s.from), e-a.min
		if low > high {
			continue
		}
		best := c.following(l, bin, e, until)
		if s.next == None {
			best = max(best, 0)
		}
		if next < len(p.Breaks) {
			best = max(best, c.parked[next*n+l])
		}
		c.ended[l*s.wide+e-s.from] = best
		if best += a.adjust; best <= unreachable/2 {
			continue
		}
		row := a.rows.row(e)[:high-low+1]
		ready := c.ready[l*s.wide+low-s.from:][:len(row)]
		for i := range ready {
			if v := best + row[len(row)-1-i]; v > ready[i] {
				ready[i] = v
			}
		}
	}
}

// following returns the best of what can follow when target l is left at minute free, in a bin of the slew
// table, before minute until.
func (c *completion) following(l, bin, free, until int) Micro {
	s, p := c.s, c.s.t.p
	row := p.Slew.Sec[(bin*p.Slew.Places+int(s.places[l]))*p.Slew.Places:][:p.Slew.Places]
	n := len(s.places)
	lasts := s.lasts[:n]
	a := &s.targets[l]
	change := s.change[p.Jobs[a.job].Receiver][:n]
	overhead := uint32(p.OverheadSec + 59)
	base, wide := -s.from, s.wide
	best := unreachable
	for k, place := range s.places {
		last := int(lasts[k])
		if last < free {
			break
		}
		sec := uint32(max(int32(row[place]), change[k])) + overhead
		if at := free + int(sec/60); at <= last && at < until {
			if v := c.come[base+at]; v > best && !s.repeats(l, k) {
				best = v
			}
		}
		base += wide
	}
	return best
}

// repeats tells whether target k would observe at once again what target l observes, and may not.
func (s *sweeper) repeats(l, k int) bool {
	return s.targets[l].job == s.targets[k].job && s.targets[k].slots == 1
}

func (c *completion) fromStart(g gap) Micro {
	s := c.s
	best := c.after // with nothing in the gap
	s.eachEntry(g, func(l, at int) { best = max(best, c.come[l*s.wide+at-s.from]) })
	return best
}

// eachEntry visits the targets that can be the first of the gap with when they are ready: at once, or
// after each of its breaks.
func (s *sweeper) eachEntry(g gap, visit func(l, at int)) {
	p := s.t.p
	to := s.from + s.wide - 1
	for l := range s.targets {
		a := &s.targets[l]
		if at := p.ReadyMin(g.prev, g.prevEnd, a.node, s.from); at <= a.last {
			visit(l, at)
		}
		for b := int(s.t.after[s.from]); b < len(p.Breaks) && p.Breaks[b].From <= to; b++ {
			until := to + 1
			if b+1 < len(p.Breaks) {
				until = min(until, p.Breaks[b+1].From+1)
			}
			if at := p.setupAfter(g.prev, g.prevEnd, a.node, b).ReadyMin; at <= a.last && at < until {
				visit(l, at)
			}
		}
	}
}
