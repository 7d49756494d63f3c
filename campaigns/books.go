package campaigns

import (
	"fmt"
	"math"
	"sort"
	"sync"
	"time"

	"example.org/tallystick/sched"
	"example.org/tallystick/sky/radiometer"
)

// books are the accounts of a campaign at one moment: a pure function of the campaign, the logbook and
// that moment. Goroutines may ask them side by side.
type books struct {
	at           time.Time
	now          time.Time           // sessions that end later are still to come; not after at
	opened       time.Time           // when the logbook begins
	entries      map[string][]*Entry // what was done or partly done before the moment, by source, in time order
	frames       *frames
	campaign     *Campaign
	known        sync.Mutex // guards what follows
	cadences     map[*Aim]cadenceAccount
	coverages    map[*Aim]coverage // what has been worked out already, by aim
	passings     map[*Aim]passages
	connections  map[*Aim]connection
	measurements map[*Aim]measurement
}

// once works out what an aim's account says, or remembers it: a job for each receiver and the account's own row ask.
func once[T any](b *books, known map[*Aim]T, aim *Aim, work func() (T, error)) (T, error) {
	b.known.Lock()
	have, ok := known[aim]
	b.known.Unlock()
	if ok {
		return have, nil
	}
	made, err := work()
	if err == nil {
		b.known.Lock()
		known[aim] = made
		b.known.Unlock()
	}
	return made, err
}

// open reads the logbook up to a moment. Lines that are later, or lost, pay nothing.
func open(c *Campaign, log *Logbook, at time.Time) *books {
	b := &books{at: at, now: at, opened: at, entries: map[string][]*Entry{}, frames: newFrames(), campaign: c,
		cadences: map[*Aim]cadenceAccount{}, coverages: map[*Aim]coverage{}, passings: map[*Aim]passages{}, connections: map[*Aim]connection{}, measurements: map[*Aim]measurement{}}
	if log == nil {
		return b
	}
	for _, e := range log.effective() {
		if !e.End.Before(at) && !e.Start.Before(at) {
			continue
		}
		if e.Start.Before(b.opened) {
			b.opened = e.Start
		}
		if e.paid() > 0 {
			b.entries[e.Source] = append(b.entries[e.Source], e)
		}
	}
	for _, list := range b.entries {
		sort.SliceStable(list, func(i, j int) bool { return list[i].Start.Before(list[j].Start) })
	}
	return b
}

// paid is the share of the wanted sensitivity that an observation reached.
func (e *Entry) paid() float64 {
	if e.Outcome == Lost {
		return 0
	}
	return e.Quality
}

func (e *Entry) middle() time.Time { return e.Start.Add(e.End.Sub(e.Start) / 2) }

// visits are the observations of a source with any of the receivers.
func (b *books) visits(source string, receivers []string) []sched.Visit {
	var out []sched.Visit
	for _, e := range b.entries[source] {
		for _, r := range receivers {
			if e.Receiver == r {
				out = append(out, sched.Visit{At: e.middle(), Receiver: r, Paid: e.paid()})
			}
		}
	}
	return out
}

// A cadenceAccount is what a cadence aim is owed, as a whole and by receiver.
type cadenceAccount struct {
	sched.Account
	needs   []sched.ReceiverNeed
	ramping bool // its interval is still growing towards every_days
}

// pairSpacing is within how many days the receivers of an epoch follow one another: as the aim says, closer near the
// Sun, where the wind's dispersion changes from hour to hour. Only pulsars are paired for their dispersion.
func (b *books) pairSpacing(source *Source, aim *Aim) func(time.Time) float64 {
	if len(aim.Receivers) < 2 || source.Spin == nil {
		return nil
	}
	return func(at time.Time) float64 { return radiometer.PairSpacingDays(aim.PairDays, b.sunDeg(source, at)) }
}

// sunDeg is how far a source is from the Sun.
func (b *books) sunDeg(source *Source, at time.Time) float64 {
	frame, at := b.frames.near(at)
	return frame.SunDeg(frame.Place(source.target()), at)
}

func (b *books) cadence(source *Source, aim *Aim) cadenceAccount {
	a, _ := once(b, b.cadences, aim, func() (cadenceAccount, error) { return b.balance(source, aim), nil })
	return a
}

func (b *books) balance(source *Source, aim *Aim) cadenceAccount {
	rule := aim.rule()
	rule.PairDaysAt = b.pairSpacing(source, aim)
	a := rule.Balance(b.opened, b.visits(source.Name, aim.Receivers), b.at)
	if rule.PairDaysAt != nil {
		a.Why += b.tighter(source, aim, rule.PairDaysAt(b.at))
	}
	return cadenceAccount{Account: a, needs: rule.Needs(a, b.at), ramping: rule.IntervalDaysAt(b.at) < rule.EveryDays}
}

// tighter says that the Sun brings the visits of a pair together; empty where it does not.
func (b *books) tighter(source *Source, aim *Aim, pairDays float64) string {
	if pairDays >= aim.PairDays {
		return ""
	}
	spacing := fmt.Sprintf("%.1f d", pairDays)
	if pairDays < 1 {
		spacing = fmt.Sprintf("%.0f h", math.Max(1, pairDays*24))
	}
	return fmt.Sprintf("; %.0f° from the Sun: pair within %s", b.sunDeg(source, b.at), spacing)
}
