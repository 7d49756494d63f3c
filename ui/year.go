package ui

import (
	"fmt"
	"strings"
	"time"

	"example.org/tallystick/campaigns"
)

// weeksShown is the past that is told of every source, a sign for each week.
const weeksShown = 52

// pastYear tells for every source what the logbook has of it in the year before an instant: a sign for
// each week, the oldest first, and the longest gap in words. A figure is how often it was observed (9
// stands for more too), x a week in which it was only lost, a dot a week with nothing.
func pastYear(log *campaigns.Logbook, at time.Time) map[string]string {
	if log == nil {
		return nil
	}
	const week = 7 * 24 * time.Hour
	first := at.Add(-weeksShown * week)
	type visits struct {
		made, lost [weeksShown]int
		times      []time.Time
	}
	all := map[string]*visits{}
	for _, e := range log.Effective() {
		if e.Start.Before(first) || !e.Start.Before(at) {
			continue
		}
		v := all[e.Source]
		if v == nil {
			v = &visits{}
			all[e.Source] = v
		}
		k := min(int(e.Start.Sub(first)/week), weeksShown-1)
		if e.Outcome == campaigns.Lost {
			v.lost[k]++
			continue
		}
		v.made[k]++
		v.times = append(v.times, e.Start)
	}
	told := map[string]string{}
	for source, v := range all {
		var b strings.Builder
		for k := range weeksShown {
			switch {
			case v.made[k] > 0:
				fmt.Fprint(&b, min(v.made[k], 9))
			case v.lost[k] > 0:
				b.WriteByte('x')
			default:
				b.WriteByte('.')
			}
		}
		told[source] = b.String() + " " + gapWords(v.times, first, at)
	}
	return told
}

// gapWords says how long a source was left alone at most within a span.
func gapWords(times []time.Time, first, at time.Time) string {
	if len(times) == 0 {
		return "never observed in it"
	}
	from, to := first, times[0]
	for i, t := range times {
		next := at
		if i+1 < len(times) {
			next = times[i+1]
		}
		if next.Sub(t) > to.Sub(from) {
			from, to = t, next
		}
	}
	return fmt.Sprintf("%d times; longest gap %.0f days, %s to %s", len(times), to.Sub(from).Hours()/24, date(from), date(to))
}
