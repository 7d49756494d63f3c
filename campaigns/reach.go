package campaigns

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"
	"time"
	"unicode/utf8"

	"example.org/tallystick/sky"
	"example.org/tallystick/sky/radiometer"
)

// setup is a receiver of a site pointed at a source.
func (s *Source) setup(r *Receiver) radiometer.Setup {
	l, b := sky.GalacticDeg(s.RADeg, s.DecDeg)
	return radiometer.Setup{Receiver: r.radiometer(), Pulsar: s.pulsar(l, b)}
}

// scintillation is how a source scintillates at a frequency.
func (s *Source) scintillation(mhz float64) radiometer.Scintillation {
	if s.Scintillation == nil {
		return radiometer.Scintillation{}
	}
	at := radiometer.Scintillation{TimescaleS: s.Scintillation.Minutes * 60, BandwidthMHz: s.Scintillation.MHz}
	return at.At(s.Scintillation.AtMHz, mhz)
}

// A reach is what a wanted TOA error takes with one receiver.
type reach struct {
	receiver string
	minutes  float64 // at the zenith; 0: no amount of time reaches it
	reason   string  // why there is no answer, in plain words
	chance   float64 // that a visit of so many minutes reaches it, the source scintillating; 1 for a steady one
}

// reaches says for each receiver of an aim what its wanted TOA error takes, at the site where that is least. It is nil
// for an aim that wants minutes.
func (b *books) reaches(src *Source, aim *Aim) []reach {
	if aim.ToaUs == 0 {
		return nil
	}
	var out []reach
	for i := range b.campaign.Receivers {
		rec := &b.campaign.Receivers[i]
		if !aim.wants(rec.Name) {
			continue
		}
		r := reachWith(src, rec, aim.ToaUs)
		at := slices.IndexFunc(out, func(o reach) bool { return o.receiver == rec.Name })
		switch {
		case at < 0:
			out = append(out, r)
		case r.minutes > 0 && (out[at].minutes == 0 || r.minutes < out[at].minutes):
			out[at] = r
		}
	}
	return out
}

func reachWith(src *Source, rec *Receiver, toaUs float64) reach {
	r := reach{receiver: rec.Name, chance: 1}
	set := src.setup(rec)
	minutes, err := set.MinutesFor(toaUs, 90)
	if err != nil {
		r.reason = noAnswer(err)
		return r
	}
	r.minutes = minutes
	if src.Scintillation != nil {
		r.chance = set.ChanceOfTOA(toaUs, minutes, 90, src.scintillation(set.Receiver.CentreMHz()))
	}
	return r
}

// noAnswer is the reason of a NoAnswer, in one line.
func noAnswer(err error) string {
	var n radiometer.NoAnswer
	switch {
	case errors.As(err, &n) && n.Cause != nil:
		first, _, _ := strings.Cut(n.Cause.Error(), "\n")
		return "the expected signal is not known: " + first
	case n.Reason == radiometer.BelowFloor:
		return fmt.Sprintf("%.3g µs is wanted, and no amount of time goes below the floor, %.3g µs", n.AimUs, n.FloorUs)
	}
	return strings.TrimPrefix(err.Error(), "no answer: ")
}

// longestSession is the length of the longest session that is granted; without sessions the longest there may be.
func (c *Campaign) longestSession() time.Duration {
	longest := time.Duration(0)
	for i := range c.Sessions {
		longest = max(longest, c.Sessions[i].End.Sub(c.Sessions[i].Start))
	}
	if longest == 0 {
		return longestVisitMin * time.Minute
	}
	return longest
}

// tellReach adds to an account what its wanted TOA error takes, where that is not simply had.
func (b *books) tellReach(row *AccountRow, src *Source, aim *Aim) {
	if aim.Kind == Conjunction {
		return // a passage is wanted as long as its window lasts, whatever each arrival time is good to
	}
	longest := b.campaign.longestSession()
	unreached := map[string]string{} // receivers by the reason that they share
	var reasons []string
	for _, r := range b.reaches(src, aim) {
		switch least := aim.MinFraction * r.minutes; {
		case r.minutes == 0:
			row.Flags = append(row.Flags, "no answer with "+r.receiver)
			if unreached[r.reason] == "" {
				reasons = append(reasons, r.reason)
				unreached[r.reason] = r.receiver
			} else {
				unreached[r.reason] += "+" + r.receiver
			}
		case least > longest.Minutes():
			row.Flags = append(row.Flags, "too faint for "+r.receiver)
			row.add(fmt.Sprintf("%.3g µs takes %.0f h with %s, longer than any session", aim.ToaUs, r.minutes/60, r.receiver))
		case r.chance < 0.995:
			row.Flags = append(row.Flags, "scintillates")
			row.add(r.chanceWords(aim.ToaUs))
		}
	}
	for _, reason := range reasons {
		row.add("no answer with " + unreached[reason] + ": " + reason)
	}
}

// mostInLine is how long a line that explains a number may be: it is read at 3 a.m.
const mostInLine = 200

// add appends to the account's line what still has room in it; the flag beside it says the rest.
func (row *AccountRow) add(words string) {
	if longer := row.Why + "; " + words; utf8.RuneCountInString(longer) <= mostInLine {
		row.Why = longer
	}
}

// chanceWords says how many visits reach what is wanted.
func (r *reach) chanceWords(toaUs float64) string {
	return fmt.Sprintf("scintillation lets %.0f %% of visits of %.0f min with %s reach %.3g µs", 100*r.chance, math.Ceil(r.minutes), r.receiver, toaUs)
}
