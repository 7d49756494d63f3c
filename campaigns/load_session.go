package campaigns

import (
	"fmt"
	"slices"
	"time"
)

// longestSession is the greatest length of a session.
const longestSession = 48 * time.Hour

const timeFormat = "2006-01-02T15:04Z"

// readSessions reads the telescope time.
func (l *loader) readSessions(top *table) {
	type entry struct {
		t *table
		s Session
	}
	var read []entry
	for _, t := range top.tables("session") {
		s := l.session(t)
		if s.Name == NextSession {
			t.complain("name", fmt.Sprintf("%q", s.Name), "another name: this one means the session that comes next", "")
		} else {
			l.once(t, "session", s.Name)
		}
		for _, other := range read {
			if s.Site != "" && s.Site == other.s.Site && t.good("start", "end") && other.t.good("start", "end") &&
				s.Start.Before(other.s.End) && other.s.Start.Before(s.End) {
				t.complain("start", fmt.Sprintf("a time within %s", other.t.label), "sessions of a site one after the other", "")
				break
			}
		}
		t.done(nil)
		read = append(read, entry{t, s})
	}
	for _, e := range read {
		l.campaign.Sessions = append(l.campaign.Sessions, e.s)
	}
	slices.SortStableFunc(l.campaign.Sessions, func(a, b Session) int { return a.Start.Compare(b.Start) })
}

func (l *loader) session(t *table) Session {
	s := Session{
		Name:            t.nameOf("name"),
		Site:            l.siteName(t),
		Start:           t.minute("start"),
		End:             t.minute("end"),
		Receivers:       l.receiverNames(t, true),
		SlotOverheadMin: t.number("slot_overhead_min", between(0, 120)),
	}
	if t.good("start", "end") {
		switch long := s.End.Sub(s.Start); {
		case long <= 0:
			t.complain("end", describe(s.End), "a time after the start, "+s.Start.Format(timeFormat), "")
		case long > longestSession:
			t.complain("end", fmt.Sprintf("%s, %s after the start", describe(s.End), long), "at most 48 hours after the start", "")
		}
	}
	l.receiversOfSite(t, s)
	s.Breaks = t.breaks(s)
	return s
}

// receiversOfSite refuses receivers that stand at another site than the session's.
func (l *loader) receiversOfSite(t *table, s Session) {
	if s.Site == "" || !t.good("receivers") {
		return
	}
	var here []string
	for _, r := range l.campaign.Receivers {
		if r.Site == s.Site {
			here = append(here, r.Name)
		}
	}
	for i, name := range s.Receivers {
		for _, r := range l.campaign.Receivers {
			if r.Name == name && r.Site != "" && r.Site != s.Site {
				t.complainAt(t.elementLine("receivers", i), "receivers", fmt.Sprintf("%q, which is at %s", name, r.Site), fmt.Sprintf("receivers of %s: %s", s.Site, someOf(here)), "")
			}
		}
	}
}

// breaks reads the times in which nothing moves or observes, and puts them in order.
func (t *table) breaks(s Session) [][2]time.Time {
	const key, accepted = "breaks", "an array of pairs of times in whole minutes, such as [[2026-12-03T23:00:00Z, 2026-12-03T23:20:00Z]]"
	v, ok := t.ask(key, false, accepted)
	if !ok {
		return nil
	}
	list, ok := v.([]any)
	if !ok {
		t.complain(key, describe(v), accepted, "")
		return nil
	}
	var out [][2]time.Time
	sound := t.good("start", "end")
	for i, e := range list {
		line := t.elementLine(key, i)
		b, ok := asTimes(e)
		switch {
		case !ok:
			t.complainAt(line, key, describe(e), accepted, "")
			continue
		case !b[0].Before(b[1]):
			t.complainAt(line, key, describe(e), "breaks that end after they start", "")
			continue
		case sound && (b[0].Before(s.Start) || b[1].After(s.End)):
			t.complainAt(line, key, describe(e), fmt.Sprintf("breaks within the session, %s to %s", s.Start.Format(timeFormat), s.End.Format(timeFormat)), "")
			continue
		}
		for _, other := range out {
			if !b[0].After(other[1]) && !other[0].After(b[1]) {
				t.complainAt(line, key, describe(e), "breaks apart from one another: join this one with "+describe([]any{other[0], other[1]}), "")
				ok = false
				break
			}
		}
		if ok {
			out = append(out, b)
		}
	}
	slices.SortFunc(out, func(a, b [2]time.Time) int { return a[0].Compare(b[0]) })
	return out
}

func asTimes(v any) ([2]time.Time, bool) {
	list, ok := v.([]any)
	if !ok || len(list) != 2 {
		return [2]time.Time{}, false
	}
	from, fromOK := asMinute(list[0])
	to, toOK := asMinute(list[1])
	return [2]time.Time{from, to}, fromOK && toOK
}

// NextSession is the name by which the first session that has not ended can be asked for.
const NextSession = "next"

// Session finds a session by its name, or the first that has not ended at the instant now when the name
// is "next" or empty. The error lists names that could have been meant.
func (c *Campaign) Session(name string, now time.Time) (*Session, error) {
	if name == "" || name == NextSession {
		for i := range c.Sessions {
			if c.Sessions[i].End.After(now) {
				return &c.Sessions[i], nil
			}
		}
		if len(c.Sessions) == 0 {
			return nil, fmt.Errorf("the campaign %q has no sessions; accepted: one with [[session]] in %s", c.Name, CampaignFile)
		}
		last := c.Sessions[len(c.Sessions)-1]
		return nil, fmt.Errorf("no session is left after %s: the last one, %q, began %s; accepted: the name of a session, or a new [[session]] in %s",
			now.UTC().Format(timeFormat), last.Name, last.Start.Format(timeFormat), CampaignFile)
	}
	var names []string
	for i := range c.Sessions {
		if c.Sessions[i].Name == name {
			return &c.Sessions[i], nil
		}
		names = append(names, c.Sessions[i].Name)
	}
	if near := nearest(name, names, 3); len(near) > 0 {
		return nil, fmt.Errorf("found no session %q; accepted: a name such as %s\n    hint: %s", name, quotedNames(near), didYouMean(name, near))
	}
	return nil, fmt.Errorf("found no session %q; accepted: %q or one of %s", name, NextSession, someOf(names))
}

func quotedNames(names []string) string {
	s := ""
	for i, n := range names {
		if i > 0 {
			s += ", "
		}
		s += fmt.Sprintf("%q", n)
	}
	return s
}
