package campaigns

import (
	"fmt"
	"time"

	"example.org/tallystick/sky"
)

// A nextWindow is when a source can next be observed in a session.
type nextWindow struct {
	start, end time.Time
	session    string
}

// comingSessions finds, one session after the other, when sources are within limits.
type comingSessions struct {
	campaign *Campaign
	at       time.Time
	skies    []sessionSky
	sources  map[string]*Source
}

// A sessionSky is the sky of one coming session.
type sessionSky struct {
	session *Session
	site    *Site
	where   *sky.Site
	frame   *sky.Frame
}

func nextWindows(c *Campaign, at time.Time) (*comingSessions, error) {
	n := &comingSessions{campaign: c, at: at, sources: map[string]*Source{}}
	for i := range c.Sources {
		n.sources[c.Sources[i].Name] = &c.Sources[i]
	}
	for i := range c.Sessions {
		s := &c.Sessions[i]
		if !s.End.After(at) {
			continue
		}
		site := c.site(s.Site)
		where, err := site.onEarth()
		if err != nil {
			return nil, fmt.Errorf("site %q: %w", site.Name, err)
		}
		frame, err := sky.NewFrame(s.Start.Add(s.End.Sub(s.Start) / 2))
		if err != nil {
			return nil, fmt.Errorf("session %q: %w", s.Name, err)
		}
		n.skies = append(n.skies, sessionSky{session: s, site: site, where: where, frame: frame})
	}
	return n, nil
}

// of is the first window in which a source may be observed with one of the receivers. Eclipses and breaks are
// left aside: they are the plan's business.
func (n *comingSessions) of(source string, receivers []string) (nextWindow, bool) {
	src := n.sources[source]
	for _, s := range n.skies {
		if !shareOne(receivers, s.session.Receivers) {
			continue
		}
		from := s.session.Start
		if n.at.After(from) {
			from = n.at
		}
		for _, w := range s.where.Windows(s.frame, s.frame.Place(src.target()), from, s.session.End, s.site.limits(src)) {
			if w.To.Sub(w.From) >= time.Minute {
				return nextWindow{start: w.From, end: w.To, session: s.session.Name}, true
			}
		}
	}
	return nextWindow{}, false
}

func shareOne(a, b []string) bool {
	for _, x := range a {
		for _, y := range b {
			if x == y {
				return true
			}
		}
	}
	return false
}
