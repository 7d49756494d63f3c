package ui

import (
	"fmt"
	"strings"
	"time"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/ui/cell"
	"example.org/tallystick/ui/theme"
)

// While the session is under way the slate follows the clock. What the mount does the program cannot
// see: it takes the plan for what happens until the observer says otherwise.

// A present is where the session stands.
type present struct {
	minute  int
	slot    int // in progress, or -1
	next    int // the next to begin, or -1
	missing int // slots that are over and not in the logbook
	last    int // the last of those, or -1
}

// present reports where the session stands; false when it is not under way.
func (w *world) present() (present, bool) {
	minute, ok := w.nowMinute()
	if !ok {
		return present{}, false
	}
	now := present{minute: minute, slot: -1, next: -1, last: -1}
	for i, s := range w.desk.shown().plan.Slots {
		switch {
		case s.Start > minute:
			if now.next < 0 {
				now.next = i
			}
		case s.End > minute:
			now.slot = i
		case w.outcome(i) == "":
			now.missing++
			now.last = i
		}
	}
	return now, true
}

// follow puts the cursor on the slot in progress, or on the next.
func (w *world) followClock() {
	now, ok := w.present()
	if !ok {
		return
	}
	switch {
	case now.slot >= 0:
		w.desk.choose(now.slot)
	case now.next >= 0:
		w.desk.choose(now.next)
	case now.last >= 0:
		w.desk.choose(now.last)
	}
	w.desk.goTo(now.minute)
}

// planFrom is the first minute in which something new may begin: after the present moment, and after
// what the observer has given up as lost.
func (w *world) planFrom() int {
	now, ok := w.nowMinute()
	if !ok {
		return 0
	}
	return max(now+1, w.desk.lostTo)
}

// outcome is what the logbook says of a slot of the plan shown; "" if it says nothing.
func (w *world) outcome(i int) campaigns.Outcome {
	d := w.desk
	d.readLog(w.folder)
	if len(d.outcomes) == 0 {
		return ""
	}
	s := d.shown().plan.Slots[i]
	job := d.prepared.Problem.Jobs[d.prepared.Problem.Nodes[s.Node].Job]
	return d.outcomes[logKey{job.Source, d.prepared.Problem.Receivers[job.Receiver].Name, d.prepared.Instant(s.Start).Unix()}]
}

// A logKey is what a logbook entry is known by, at one site.
type logKey struct {
	source, receiver string
	start            int64
}

// readLog notes what the logbook says of this session, if it has changed since. While it is being
// written what is known stays.
func (d *desk) readLog(f *files) {
	if !f.mu.TryLock() {
		return
	}
	log := f.Logbook
	f.mu.Unlock()
	if log == d.logRead {
		return
	}
	d.logRead, d.outcomes = log, map[logKey]campaigns.Outcome{}
	if log == nil {
		return
	}
	for i := range log.Entries {
		e := &log.Entries[i]
		if e.Site == d.session.Site && !e.Start.Before(d.session.Start) && !e.Start.After(d.session.End) {
			d.outcomes[logKey{e.Source, e.Receiver, e.Start.Unix()}] = e.Outcome // a later line corrects an earlier
		}
	}
}

// nowWords say in order of their weight what is going on.
func nowWords(w *world, now present) []string {
	d := w.desk
	r := d.read()
	var said []string
	if now.slot >= 0 {
		s := r.plan.Slots[now.slot]
		text := fmt.Sprintf("%s, %d min left", r.slotName(now.slot), s.End-now.minute)
		if late := behind(d, now.slot); late > 0 {
			text += fmt.Sprintf(", %d min behind the plan", late)
		}
		said = append(said, text)
	}
	if d.lostTo > now.minute {
		said = append(said, "time lost until "+clock(d.prepared.Instant(d.lostTo)))
	}
	switch {
	case now.next >= 0:
		row := &r.rows[now.next]
		way := "move " + seconds(row.MoveSec)
		if row.MoveSec == 0 {
			way = "set-up " + seconds(row.OverheadSec)
		}
		lead := time.Duration(row.MoveSec+row.OverheadSec) * time.Second
		leave := row.Start.Add(-lead)
		text := fmt.Sprintf("next %s %s", r.slotName(now.next), clock(row.Start))
		switch left := leave.Sub(w.now); {
		case now.slot >= 0:
			text += ", " + way
		case left > 0:
			text += fmt.Sprintf(": in %d min %s", int(left.Minutes()), way)
		default:
			text += ": now " + way
		}
		said = append(said, text)
	case now.slot < 0:
		said = append(said, "nothing more is planned")
	}
	if now.missing > 0 {
		said = append(said, count(now.missing, "slot")+" not recorded")
	}
	return said
}

// behind is by how many minutes a slot begins later than it was planned to.
func behind(d *desk, i int) int {
	p := d.prepared.Problem
	for _, c := range differences(p, d.base.plan, d.shown().plan) {
		if c.was != nil && c.is != nil && *c.is == d.shown().plan.Slots[i] {
			return c.is.Start - c.was.Start
		}
	}
	return 0
}

// drawNow writes where the session stands, as much of it as there is room for.
func drawNow(w *world, c *cell.Canvas, now present) {
	cw, _ := c.Size()
	text := ""
	if cw >= 60 {
		text = "now " + clock(w.now) + ": " // else the clock above says it
	}
	for i, s := range nowWords(w, now) {
		if i > 0 {
			s = "; " + s
		}
		if i > 0 && cell.Width(text+s) > cw-1 {
			continue
		}
		text += s
	}
	if rest := "  (N follows)"; !w.follow && cell.Width(text+rest) < cw {
		text += rest
	}
	c.Put(1, 0, cell.Fit(text, cw-1), theme.Now)
}

// recordable is the slot that is meant by done and lost: the chosen one if it has begun, else the one in
// progress, else the last that is over and not recorded.
func (w *world) recordable() (int, bool) {
	now, ok := w.present()
	if !ok {
		return 0, false
	}
	d := w.desk
	if s, ok := d.slot(); ok && s.Start < now.minute && w.outcome(d.chosen) == "" {
		return d.chosen, true
	}
	switch {
	case now.slot >= 0 && d.shown().plan.Slots[now.slot].Start < now.minute && w.outcome(now.slot) == "":
		return now.slot, true
	case now.last >= 0:
		return now.last, true
	}
	return 0, false
}

// acceptedUntil is what parseUntil takes.
const acceptedUntil = "a time of day in UTC as 02:10, minutes from now as +45, or now"

// parseUntil reads the end of lost time into a minute of the session.
func parseUntil(text string, w *world) (int, error) {
	d := w.desk
	now, _ := w.nowMinute()
	text = strings.TrimSpace(strings.TrimSuffix(strings.TrimSpace(text), "UTC"))
	var minute int
	if text == "now" {
		return now, nil
	}
	if rest, ok := strings.CutPrefix(text, "+"); ok {
		if _, err := fmt.Sscanf(rest+" ", "%d ", &minute); err != nil || minute < 1 {
			return 0, fmt.Errorf("found %q; accepted: %s", text, acceptedUntil)
		}
		minute += now
	} else {
		at, err := time.Parse("15:04", text)
		if err != nil {
			return 0, fmt.Errorf("found %q; accepted: %s", text, acceptedUntil)
		}
		start := d.prepared.Problem.Start.UTC()
		day := time.Date(start.Year(), start.Month(), start.Day(), at.Hour(), at.Minute(), 0, 0, time.UTC)
		for minute = d.prepared.Minute(day); minute <= now; minute += 24 * 60 {
		}
	}
	if minute > d.prepared.Problem.Minutes {
		return 0, fmt.Errorf("%s is after the session's end at %s UTC", text, clock(d.session.End))
	}
	return minute, nil
}
