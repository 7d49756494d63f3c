package sched

import (
	"fmt"
	"slices"
	"time"
)

// A CadenceRule says how often a source is to be observed, and how its account is kept.
//
// Debt grows by 1 in every interval. A visit that reached the share q of the wanted sensitivity pays q,
// and what is left above zero is multiplied by 1 − q (1 − Carry): with carry 0 a full visit clears the
// account, with carry 1 nothing is ever forgiven. Debt never falls below 0: observing early earns no
// credit, it restarts the clock. With several receivers each pays its share of the epoch, and shares
// lapse when the others do not follow within PairDays.
type CadenceRule struct {
	EveryDays float64 // the interval; above 0
	PairDays  float64 // all receivers of an epoch lie within this
	// PairDaysAt, where it is given, is what holds instead of PairDays for an epoch that begins at a time: what the
	// receivers are paired for may change faster at some times than at others.
	PairDaysAt  func(time.Time) float64
	Carry       float64 // 0 to 1
	MinGapDays  float64 // nothing is wanted sooner after a complete epoch than this
	MinFraction float64 // a visit that reached less pays, but does not hold back the next one
	Receivers   []string
	Ramp        *Ramp
}

// A Ramp makes the interval grow geometrically after a discovery or a glitch: FirstDays, then Factor
// times as long, and so on, until the usual interval is reached. At From a visit is due at once: what was
// known before is void.
type Ramp struct {
	From      time.Time
	FirstDays float64 // above 0
	Factor    float64 // above 1
}

// A Visit is an observation that was made.
type Visit struct {
	At       time.Time // its middle
	Receiver string
	Paid     float64 // share of the wanted sensitivity that was reached, 0 to 1; lost is 0
}

// An Account is the state of a cadence aim at one time.
type Account struct {
	Debt       float64   // cycles owed: 1 is due now, above 1 overdue; never below 0, never capped
	Last       time.Time // the last visit that paid; zero: never
	Due        time.Time // when the debt reaches, or reached, 1; zero: it was due from the start
	ByReceiver []ReceiverAccount
	Open       bool      // an epoch is begun and lacks receivers
	LapsesAt   time.Time // when the shares of the open epoch lapse
	Owed       float64   // the debt if the open epoch counts for nothing
	LastEpoch  time.Time // the last complete epoch's last visit that reached MinFraction
	Why        string    // one line
}

// A ReceiverAccount is what one receiver has done for the aim, in the order of the rule's receivers.
type ReceiverAccount struct {
	Receiver string
	Last     time.Time // zero: never
	Paid     float64   // its share of the open epoch, 0 to 1
}

// Balance returns the account at a time, from the visits until then. An account is opened with a debt of
// 1 at the start of the logbook; if that is not known (zero) and there is no visit, it is simply due now.
// Visits with receivers that are not the aim's, and those that paid nothing, do not count; their order
// does not matter.
func (r CadenceRule) Balance(opened time.Time, visits []Visit, at time.Time) Account {
	visits = r.counting(visits, at)
	if opened.IsZero() || len(visits) > 0 && visits[0].At.Before(opened) {
		opened = at
		if len(visits) > 0 {
			opened = visits[0].At
		}
	}
	if r.Ramp != nil && opened.Before(r.Ramp.From) && (len(visits) == 0 || !visits[0].At.Before(r.Ramp.From)) {
		opened = r.Ramp.From // a discovery: nothing was owed before it
	}
	b := balance{rule: r, debt: 1, since: opened, due: opened}
	for _, v := range visits {
		b.visit(v)
	}
	b.lapse(at)
	return b.account(opened, visits, at)
}

// counting returns the visits that pay, in time order.
func (r CadenceRule) counting(visits []Visit, at time.Time) []Visit {
	var paid []Visit
	for _, v := range visits {
		if v.Paid > 0 && !v.At.After(at) && slices.Contains(r.Receivers, v.Receiver) {
			v.Paid = min(v.Paid, 1)
			paid = append(paid, v)
		}
	}
	slices.SortStableFunc(paid, func(a, b Visit) int {
		if c := a.At.Compare(b.At); c != 0 {
			return c
		}
		return slices.Index(r.Receivers, a.Receiver) - slices.Index(r.Receivers, b.Receiver)
	})
	return paid
}

// balance runs through the visits. debt is what is owed at since if the open epoch counts for nothing.
type balance struct {
	rule  CadenceRule
	debt  float64
	since time.Time
	due   time.Time // last known time at which the debt was 1 on its way up; at the start, the opening

	open      []float64 // by receiver: its share of the open epoch; nil: none is open
	openAt    time.Time // its first visit
	paidAt    time.Time // its last visit
	full      bool      // that reached MinFraction
	booked    bool      // an epoch has been booked
	lastEpoch time.Time
}

// visit takes a visit into the open epoch, or begins one.
func (b *balance) visit(v Visit) {
	b.lapse(v.At)
	r := slices.Index(b.rule.Receivers, v.Receiver)
	if b.open != nil && b.open[r] >= 1 {
		b.close()
	}
	if b.open == nil {
		b.open = make([]float64, len(b.rule.Receivers))
		b.openAt, b.full = v.At, true
	}
	b.open[r] = min(1, b.open[r]+v.Paid)
	b.paidAt = v.At
	b.full = b.full && v.Paid >= b.rule.MinFraction
}

// lapse closes the open epoch if it is older than PairDays. An epoch of one receiver closes at once.
func (b *balance) lapse(at time.Time) {
	if b.open == nil {
		return
	}
	if len(b.open) == 1 || at.Sub(b.openAt) > days(b.rule.pairDays(b.openAt)) {
		b.close()
	}
}

func (r CadenceRule) pairDays(at time.Time) float64 {
	if r.PairDaysAt != nil {
		return r.PairDaysAt(at)
	}
	return r.PairDays
}

// close books the open epoch: its payment if every receiver took part, nothing otherwise.
func (b *balance) close() {
	if !slices.Contains(b.open, 0) {
		b.debt = b.paidDebt()
		b.since, b.booked = b.paidAt, true
		if b.full {
			b.lastEpoch = b.paidAt
		}
	}
	b.open = nil
}

// owed returns the debt at a time if the open epoch counts for nothing.
func (b *balance) owed(at time.Time) float64 { return b.rule.grow(b.debt, b.since, at) }

// paidDebt returns the debt right after the last visit of the open epoch, paid with the shares so far.
func (b *balance) paidDebt() float64 {
	q := 0.0
	for _, share := range b.open {
		q += share / float64(len(b.open))
	}
	left := max(0, b.owed(b.paidAt)-q)
	return left * (1 - q*(1-b.rule.Carry))
}

func (b *balance) account(opened time.Time, visits []Visit, at time.Time) Account {
	r := b.rule
	a := Account{Owed: b.owed(at), LastEpoch: b.lastEpoch, ByReceiver: make([]ReceiverAccount, len(r.Receivers))}
	debt, since := b.debt, b.since
	if b.open != nil {
		debt, since = b.paidDebt(), b.paidAt
		if slices.Contains(b.open, 0) {
			a.Open, a.LapsesAt = true, b.openAt.Add(days(r.pairDays(b.openAt)))
		} else if b.full {
			a.LastEpoch = b.paidAt
		}
	}
	a.Debt = r.grow(debt, since, at)
	if !a.Open {
		a.Owed = a.Debt
	}
	for i, name := range r.Receivers {
		a.ByReceiver[i].Receiver = name
		if a.Open {
			a.ByReceiver[i].Paid = b.open[i]
		}
	}
	for _, v := range visits {
		a.Last = v.At
		a.ByReceiver[slices.Index(r.Receivers, v.Receiver)].Last = v.At
	}
	if len(visits) > 0 || opened.Before(at) {
		a.Due = r.dueAfter(debt, since)
	}
	a.Why = r.say(a, debt, since, b.booked || b.open != nil, at)
	return a
}

// say explains a debt in one line that adds up. left is what was owed at since: right after the last epoch that was
// booked, if one was, else at the opening.
func (r CadenceRule) say(a Account, left float64, since time.Time, booked bool, at time.Time) string {
	every := fmt.Sprintf("every %.3g d", r.EveryDays)
	if r.ramped(at) {
		every = fmt.Sprintf("every %.3g d now and %.3g d later", r.IntervalDaysAt(at), r.EveryDays)
	}
	never := "due now, " + every
	if since.Before(at) {
		never = fmt.Sprintf("due since %s, %s", since.UTC().Format(time.DateOnly), every)
	}
	if a.Last.IsZero() {
		return fmt.Sprintf("never observed: debt %.2f, %s", a.Debt, never)
	}
	if a.Open {
		return fmt.Sprintf("debt %.2f; %.2f unless %s follows by %s", a.Debt, a.Owed, join(a.lacking(time.Time{})), a.LapsesAt.UTC().Format("2006-01-02 15:04"))
	}
	s := fmt.Sprintf("debt %.2f: last %.1f d ago", a.Debt, daysBetween(a.Last, at))
	if !booked || since.Before(a.Last) { // the last epoch was no complete epoch, and paid nothing
		if lacking := a.lacking(a.Last.Add(-days(r.pairDays(a.Last)))); len(lacking) > 0 {
			s += " without " + join(lacking)
		}
		if booked {
			s += fmt.Sprintf(", complete %.1f d ago", daysBetween(since, at))
		} else {
			return s + ", never complete, " + never
		}
	}
	s += ", " + every
	if left >= 0.005 {
		s += fmt.Sprintf(", %.2f left from before", left)
	}
	return s
}

// lacking are the receivers whose last visit is not after a time; with the zero time those that have not paid a share of
// the open epoch.
func (a *Account) lacking(after time.Time) []string {
	var names []string
	for _, b := range a.ByReceiver {
		if after.IsZero() && b.Paid == 0 || !after.IsZero() && !b.Last.After(after) {
			names = append(names, b.Receiver)
		}
	}
	return names
}

// grow returns the debt at a time, given what it was before.
func (r CadenceRule) grow(debt float64, since, at time.Time) float64 {
	if !at.After(since) {
		return debt
	}
	if r.Ramp != nil && since.Before(r.Ramp.From) && !at.Before(r.Ramp.From) {
		before := debt + daysBetween(since, r.Ramp.From)/r.EveryDays
		return max(1, before) + r.cyclesOnRamp(daysBetween(r.Ramp.From, at))
	}
	if r.Ramp == nil || at.Before(r.Ramp.From) {
		return debt + daysBetween(since, at)/r.EveryDays
	}
	return debt + r.cyclesOnRamp(daysBetween(r.Ramp.From, at)) - r.cyclesOnRamp(daysBetween(r.Ramp.From, since))
}

// dueAfter returns when a debt reaches 1; if it stood above that already, the time at which it was known.
func (r CadenceRule) dueAfter(debt float64, since time.Time) time.Time {
	if debt >= 1 {
		return since
	}
	need := 1 - debt
	plain := since.Add(days(need * r.EveryDays))
	switch {
	case r.Ramp == nil:
		return plain
	case since.Before(r.Ramp.From):
		if plain.After(r.Ramp.From) {
			return r.Ramp.From
		}
		return plain
	}
	return r.Ramp.From.Add(days(r.daysOnRamp(r.cyclesOnRamp(daysBetween(r.Ramp.From, since)) + need)))
}

// cyclesOnRamp returns how many intervals have passed in the given days since the ramp began.
func (r CadenceRule) cyclesOnRamp(elapsed float64) float64 {
	cycles, interval := 0.0, r.firstInterval()
	for interval < r.EveryDays && elapsed > interval {
		elapsed -= interval
		cycles++
		interval = r.longer(interval)
	}
	return cycles + elapsed/min(interval, r.EveryDays)
}

// daysOnRamp is the inverse of cyclesOnRamp.
func (r CadenceRule) daysOnRamp(cycles float64) float64 {
	elapsed, interval := 0.0, r.firstInterval()
	for interval < r.EveryDays && cycles > 1 {
		elapsed += interval
		cycles--
		interval = r.longer(interval)
	}
	return elapsed + cycles*min(interval, r.EveryDays)
}

func (r CadenceRule) firstInterval() float64 {
	if r.Ramp.FirstDays <= 0 {
		return r.EveryDays
	}
	return min(r.Ramp.FirstDays, r.EveryDays)
}

// longer never stands still, so that a factor of 1 ends the ramp instead of never doing so.
func (r CadenceRule) longer(interval float64) float64 {
	if r.Ramp.Factor <= 1 {
		return r.EveryDays
	}
	return min(interval*r.Ramp.Factor, r.EveryDays)
}

func (r CadenceRule) ramped(at time.Time) bool {
	return r.Ramp != nil && !at.Before(r.Ramp.From) && r.IntervalDaysAt(at) < r.EveryDays
}

// IntervalDaysAt returns the interval that holds at a time, in days.
func (r CadenceRule) IntervalDaysAt(at time.Time) float64 {
	if r.Ramp == nil || at.Before(r.Ramp.From) {
		return r.EveryDays
	}
	elapsed, interval := daysBetween(r.Ramp.From, at), r.firstInterval()
	for interval < r.EveryDays && elapsed > interval {
		elapsed -= interval
		interval = r.longer(interval)
	}
	return interval
}

func days(d float64) time.Duration { return time.Duration(d * 24 * float64(time.Hour)) }

func daysBetween(from, to time.Time) float64 { return to.Sub(from).Hours() / 24 }

func join(names []string) string {
	switch n := len(names); n {
	case 0:
		return ""
	case 1:
		return names[0]
	default:
		s := names[0]
		for _, name := range names[1 : n-1] {
			s += ", " + name
		}
		return s + " and " + names[n-1]
	}
}
