package main

import (
	"math"
	"sort"
	"time"
)

// The past is played forward session by session. At each free moment the dispatcher takes the source and
// receiver with the largest need for its price in minutes. It keeps the same limits as the telescope, so that
// no line of the logbook shows the impossible.

// An observation is one line of the logbook.
type observation struct {
	start, end time.Time
	source     string
	receiver   string
	outcome    string // done, partial, lost
	quality    float64
	snr, toaUs float64
	note       string
}

// An account is the running balance of one aim, in cycles of its cadence. The rules are those of the program: an
// epoch pays only when every receiver of the aim has had its visit within the pair's days.
type account struct {
	s         *source
	a         *aim
	debt      float64
	open      map[string]float64 // shares of the epoch that has been begun, by receiver
	openedMJD float64
	lastEpoch float64 // MJD; 0: none yet
	visits    int     // since the ramp began
}

// A claim is what an account wants of one receiver.
type claim struct {
	*account
	rx      string
	minutes int
	doneIn  int // number of the last session that held it
}

func claimsOf(sources []source) []*claim {
	var out []*claim
	for i := range sources {
		s := &sources[i]
		for j := range s.aims {
			a := &s.aims[j]
			if a.kind != "cadence" && a.kind != "calibration" {
				continue
			}
			// A campaign does not begin with everything due on one day.
			acc := &account{s: s, a: a, debt: newDice("first debt of "+s.name+a.receivers[0]).between(0.2, 1), open: map[string]float64{}}
			for _, rx := range a.receivers {
				out = append(out, &claim{account: acc, rx: rx, minutes: int(a.minutes), doneIn: -1})
			}
		}
	}
	return out
}

// intervalDays is the present interval of the cadence: shorter while a ramp runs.
func (c *account) intervalDays(mjd float64) float64 {
	r := c.a.ramp
	if r == nil || mjd < mjdOfDate(r.from) {
		return c.a.everyDays
	}
	return math.Min(c.a.everyDays, r.firstDays*math.Pow(r.factor, float64(c.visits)))
}

func mjdOfDate(date string) float64 {
	t, err := time.Parse("2006-01-02", date)
	if err != nil {
		panic(err)
	}
	return mjdOf(t)
}

// grow lets the debt grow by some days, and a begun epoch lapse.
func (c *account) grow(days, mjd float64) {
	if c.a.kind != "cadence" {
		return
	}
	if mjd >= mjdOf(c.s.found) {
		c.debt += days / c.intervalDays(mjd)
	}
	if mjd-c.openedMJD > c.a.pairDays {
		clear(c.open)
	}
}

// pay books a visit that reached a share of the wanted sensitivity.
func (c *account) pay(rx string, share, mjd float64) {
	if share <= 0 {
		return
	}
	if len(c.open) == 0 {
		c.openedMJD = mjd
	}
	c.open[rx] = share
	if len(c.open) < len(c.a.receivers) {
		return
	}
	paid := 0.0
	for _, r := range c.a.receivers {
		paid += c.open[r] / float64(len(c.a.receivers))
	}
	clear(c.open)
	carry := c.a.carry
	if carry == 0 {
		carry = 0.5
	}
	c.debt = math.Max(0, c.debt-paid) * (1 - paid*(1-carry))
	c.lastEpoch = mjd
	if c.a.ramp != nil && mjd >= mjdOfDate(c.a.ramp.from) {
		c.visits++
	}
}

// need is what a visit with the claim's receiver is worth for a source of priority 1. To finish an epoch is worth
// more than to begin one, since what has been begun lapses.
func (c *claim) need(mjd float64) float64 {
	const due, finish = 0.6, 1.6
	if c.a.kind == "calibration" {
		return 5
	}
	if mjd < mjdOf(c.s.found) || !c.s.missed.IsZero() && mjd > mjdOf(c.s.missed) {
		return 0
	}
	worth := c.debt * c.debt
	if c.debt > 1 {
		worth = 2*math.Min(c.debt, 5) - 1
	}
	if _, had := c.open[c.rx]; had {
		return 0
	}
	if len(c.open) > 0 {
		return finish * worth
	}
	if c.debt < due || mjd-c.lastEpoch < c.a.minGap {
		return 0
	}
	return worth
}

// A telescope is what the dispatcher knows about the dish: where it points and what is in the beam.
type telescope struct {
	az, el float64
	rx     string
}

// setupMin is the time from the end of one slot to the start of the next.
func (t telescope) setupMin(az, el float64, rx string) int {
	if t.rx == "" {
		return int(math.Ceil(overheadMin))
	}
	turn := math.Abs(az - t.az)
	turn = math.Min(turn, 360-turn)
	move := math.Max(turn/slewAzDegPerMin, math.Abs(el-t.el)/slewElDegPerMin) + 0.3 + settleMin
	if rx != t.rx {
		move = math.Max(move, changeMin)
	}
	return int(math.Ceil(move + overheadMin))
}

// A night is one past session while it is played.
type night struct {
	session
	number int
	ofDate map[string]vector
	dish   telescope
	dice   dice
	log    []observation
}

func playHistory(sources []source) []observation {
	claims := claimsOf(sources)
	var log []observation
	before := mjdOf(campaignBegan)
	for i, s := range past() {
		now := mjdOf(s.start)
		for _, c := range claims {
			if c.rx == c.a.receivers[0] { // once for each account
				c.grow(now-before, now)
			}
		}
		before = now
		n := night{session: s, number: i, ofDate: map[string]vector{}, dice: newDice("weather of " + s.name())}
		for k := range sources {
			n.ofDate[sources[k].name] = precess(sources[k].position, now)
		}
		n.play(claims, n.passages(sources))
		log = append(log, n.log...)
	}
	return log
}

// A passage is a superior conjunction that a session can hold from first to last minute.
type passage struct {
	s        *source
	from, to time.Time
}

// passages finds them, for the sources that want them, in order of time.
func (n *night) passages(sources []source) []passage {
	var out []passage
	for i := range sources {
		s := &sources[i]
		for _, a := range s.aims {
			if a.kind != "conjunction" || mjdOf(n.start) < mjdOfDate(a.since) || !n.has(a.receivers[0]) {
				continue
			}
			half := a.halfWidth * s.orbit.periodDays
			for _, t := range s.superiorConjunctions(mjdOf(n.start)+half, mjdOf(n.end())-half) {
				from := timeOf(t - half).Truncate(time.Minute)
				to := timeOf(t + half).Truncate(time.Minute).Add(time.Minute)
				if !from.Before(n.start.Add(comeFromAnywhere)) && !to.After(n.end()) && n.up(s, from, to) {
					out = append(out, passage{s, from, to})
				}
			}
		}
	}
	sort.Slice(out, func(i, j int) bool { return out[i].from.Before(out[j].from) })
	// Of two passages that overlap, the first is taken.
	var apart []passage
	for _, p := range out {
		if k := len(apart); k == 0 || p.from.After(apart[k-1].to.Add(comeFromAnywhere)) {
			apart = append(apart, p)
		}
	}
	return apart
}

// comeFromAnywhere is enough for the longest slew, a receiver change and the overhead.
const comeFromAnywhere = 20 * time.Minute

// up tells whether a source stays inside all limits, and out of eclipse, for a whole slot.
func (n *night) up(s *source, from, to time.Time) bool {
	limit := math.Max(siteSunLimitDeg, s.sunLimit)
	for t := from; ; t = t.Add(3 * time.Minute) {
		if t.After(to) {
			t = to
		}
		if !visible(n.ofDate[s.name], mjdOf(t), limit) {
			return false
		}
		if t.Equal(to) {
			return !s.eclipsed(mjdOf(from), mjdOf(to))
		}
	}
}

// play fills the session, keeping the passages free for their sources.
func (n *night) play(claims []*claim, passages []passage) {
	now := n.start
	for _, p := range passages {
		n.fill(claims, now, p.from.Add(-comeFromAnywhere))
		now = n.observe(claimFor(claims, p.s, "L"), p.from, p.to, "superior conjunction")
	}
	n.fill(claims, now, n.end())
}

// fill observes whatever is most worth its price until an instant.
func (n *night) fill(claims []*claim, now, until time.Time) {
	for now.Before(until) {
		c, start := n.best(claims, now, until)
		if c == nil {
			now = now.Add(5 * time.Minute)
			continue
		}
		now = n.observe(c, start, start.Add(time.Duration(c.minutes)*time.Minute), "")
	}
}

func claimFor(claims []*claim, s *source, rx string) *claim {
	for _, c := range claims {
		if c.s == s && c.rx == rx {
			return c
		}
	}
	panic("nobody claims " + s.name + " in " + rx)
}

// best returns the claim with the largest need for its price that can start now and end before the limit.
func (n *night) best(claims []*claim, now, limit time.Time) (*claim, time.Time) {
	var found *claim
	var at time.Time
	var most float64
	for _, c := range claims {
		need := c.need(mjdOf(now)) * c.s.priority
		if need == 0 || c.doneIn == n.number || !n.has(c.rx) {
			continue
		}
		az, el := azEl(n.ofDate[c.s.name], mjdOf(now))
		setup := n.dish.setupMin(az, el, c.rx)
		value := need / float64(setup+c.minutes)
		start := now.Add(time.Duration(setup) * time.Minute)
		end := start.Add(time.Duration(c.minutes) * time.Minute)
		if value <= most || end.After(limit) || !n.up(c.s, start, end) || !n.canFinish(c, end) {
			continue
		}
		found, at, most = c, start, value
	}
	return found, at
}

// canFinish tells whether the other receivers of an epoch can still follow in this session. Where a receiver is out of
// order, the others are used all the same.
func (n *night) canFinish(c *claim, end time.Time) bool {
	missing := len(c.a.receivers) - len(c.open) - 1
	if missing <= 0 || len(n.rx) < len(c.a.receivers) {
		return true
	}
	last := end.Add(time.Duration(missing*(c.minutes+15)) * time.Minute)
	return !last.After(n.end()) && n.up(c.s, last.Add(-time.Duration(c.minutes)*time.Minute), last)
}

// observe writes one slot into the log, with whatever became of it, and returns when the dish is free.
func (n *night) observe(c *claim, start, end time.Time, note string) time.Time {
	c.doneIn = n.number
	n.dish.az, n.dish.el = azEl(n.ofDate[c.s.name], mjdOf(end))
	n.dish.rx = c.rx
	if len(n.log) == 0 {
		note = joinNotes(n.note, note)
	}
	o := observation{start: start, end: end, source: c.s.name, receiver: c.rx, outcome: "done", note: note}
	wanted := float64(c.minutes)
	minutes, why := n.kept(start, end)
	kept := 1.0
	if why != "" {
		o.note = joinNotes(o.note, why)
		kept = minutes / end.Sub(start).Minutes()
	}
	switch {
	case kept < 0.25:
		o.outcome = "lost"
	case kept < 1:
		o.outcome = "partial"
		o.end = start.Add(time.Duration(minutes) * time.Minute)
	}
	if o.outcome != "lost" {
		n.measure(&o, c, minutes, wanted)
		c.pay(c.rx, o.quality, mjdOf(start))
	}
	n.log = append(n.log, o)
	return end
}

func joinNotes(a, b string) string {
	if a == "" || b == "" {
		return a + b
	}
	return a + "; " + b
}

// kept returns how many minutes of a slot were left before an outage, and why the rest was lost.
func (n *night) kept(start, end time.Time) (float64, string) {
	for _, x := range n.outages {
		from, to := n.start.Add(time.Duration(x.from)*time.Minute), n.start.Add(time.Duration(x.to)*time.Minute)
		if start.Before(to) && end.After(from) {
			return math.Max(0, from.Sub(start).Minutes()), x.note
		}
	}
	return end.Sub(start).Minutes(), ""
}

// measure gives an observation its S/N, TOA error and quality: what the radiometer equation expects, times
// the luck of scintillation, less what interference took.
func (n *night) measure(o *observation, c *claim, minutes, wanted float64) {
	rx := receiverNamed(c.rx)
	middle := o.start.Add(o.end.Sub(o.start) / 2)
	_, el := azEl(n.ofDate[c.s.name], mjdOf(middle))
	clean := n.dice.between(0.95, 1)
	if rain := n.dice.unit(); c.rx == "U" && rain < 0.06 || rain < 0.015 {
		clean = n.dice.between(0.35, 0.75)
		o.outcome = "partial"
		o.note = joinNotes(o.note, n.dice.one("strong interference", "interference in half the band", "radar"))
	}
	o.quality = roundTo(math.Min(1, math.Sqrt(minutes/wanted*clean)), 2)
	if o.outcome == "partial" {
		o.quality = roundTo(math.Min(0.95, minutes/wanted*clean), 2)
	}
	if c.s.periodS == 0 {
		return
	}
	scintles := 1.5 + 6*minutes/30
	if c.s.periodS > 0.05 {
		scintles *= 4
	}
	luck := math.Exp(n.dice.normal()/math.Sqrt(scintles) - 0.5/scintles)
	o.snr = roundFigures(signal(*c.s, rx, el, minutes*clean)*luck, 3)
	o.toaUs = roundFigures(toaUs(*c.s, o.snr, minutes), 3)
}
