package campaigns

import (
	"fmt"
	"slices"
	"strings"
	"time"

	"example.org/tallystick/sky"
)

// A PassRow is one usable window of one pass of a source over a site, or a pass without any. Times are
// zero where there is none: a source that never sets has no rise, a pass out of reach no usable window.
type PassRow struct {
	Rise, Transit, Set     time.Time
	UsableStart, UsableEnd time.Time
	HighestDeg             float64 // elevation at transit
	LimitedBy              string  // what opens and closes the window: "elevation 8°; horizon mask 14.5°"
}

// Passes returns the passes of a source over a site that begin or last between two instants, in time
// order. A source that never sets has one from each lower transit to the next.
func Passes(site *Site, source *Source, from, to time.Time) ([]PassRow, error) {
	place, err := site.onEarth()
	if err != nil {
		return nil, err
	}
	limits := site.limits(source)
	// A day more on either side, so that every pass has both of its ends.
	first, last := from.AddDate(0, 0, -1), to.AddDate(0, 0, 1)
	frames, err := sky.NewFrames(first, last)
	if err != nil {
		return nil, err
	}
	target := source.target()
	windows := place.Season(frames, target, first, last, limits)
	var rows []PassRow
	for _, p := range passesOf(place, frames, target, first, last, limits) {
		if !p.to.After(from) || !p.from.Before(to) {
			continue
		}
		rows = append(rows, p.rows(windows, func() string { return whyUnusable(place, frames, target, p, limits) })...)
	}
	return rows, nil
}

// A pass lasts from rise to set or, where the source never sets, from one lower transit to the next.
type pass struct {
	from, to time.Time
	transit  sky.Event
	rises    bool
}

// passesOf joins what happens day by day.
func passesOf(place *sky.Site, frames []*sky.Frame, target sky.Target, first, last time.Time, limits sky.Limits) []pass {
	var events []sky.Event
	standing := sky.RisesAndSets
	for _, f := range frames {
		a, b := later(f.At().Add(-12*time.Hour), first), earlier(f.At().Add(12*time.Hour), last)
		if !a.Before(b) {
			continue
		}
		day := place.Passes(f, f.Place(target), a, b, limits)
		events = append(events, day.Events...)
		standing = day.Standing
	}
	begins, ends := sky.Rise, sky.Set
	if standing == sky.NeverSets {
		begins, ends = sky.LowerTransit, sky.LowerTransit
	}
	var passes []pass
	var now *pass
	for _, e := range events {
		if now != nil && e.Kind == sky.UpperTransit {
			now.transit = e
		}
		if now != nil && e.Kind == ends {
			now.to = e.At
			passes = append(passes, *now)
			now = nil
		}
		if e.Kind == begins {
			now = &pass{from: e.At, rises: standing == sky.RisesAndSets}
		}
	}
	return passes
}

// rows gives a pass a row for each of its usable windows, or one that says why there is none.
func (p pass) rows(windows []sky.Window, why func() string) []PassRow {
	row := PassRow{Transit: p.transit.At, HighestDeg: p.transit.ElDeg}
	if p.rises {
		row.Rise, row.Set = p.from, p.to
	}
	var rows []PassRow
	for _, w := range windows {
		start, end := later(w.From, p.from), earlier(w.To, p.to)
		if !start.Before(end) {
			continue
		}
		r := row
		r.UsableStart, r.UsableEnd = start, end
		var by []string
		if start.Equal(w.From) {
			by = append(by, w.OpensBy.String())
		}
		if end.Equal(w.To) && !slices.Contains(by, w.ClosesBy.String()) {
			by = append(by, w.ClosesBy.String())
		}
		if len(by) == 0 {
			by = append(by, "never sets")
		}
		r.LimitedBy = strings.Join(by, "; ")
		rows = append(rows, r)
	}
	if len(rows) == 0 {
		row.LimitedBy = why()
		rows = append(rows, row)
	}
	return rows
}

// whyUnusable finds the limit without which the pass would have a window.
func whyUnusable(place *sky.Site, frames []*sky.Frame, target sky.Target, p pass, limits sky.Limits) string {
	usable := func(l sky.Limits) bool { return len(place.Season(frames, target, p.from, p.to, l)) > 0 }
	without := limits
	without.SunDeg = 0
	if usable(without) {
		return fmt.Sprintf("Sun %g°", limits.SunDeg)
	}
	without.Mask = nil
	if usable(without) {
		return "horizon mask"
	}
	return "mount limits"
}

func later(a, b time.Time) time.Time {
	if a.After(b) {
		return a
	}
	return b
}

func earlier(a, b time.Time) time.Time {
	if a.Before(b) {
		return a
	}
	return b
}
