package ui

import (
	"time"

	tea "github.com/charmbracelet/bubbletea"

	"example.org/tallystick/campaigns"
)

// An orbitKey says what the views of the orbits were worked out for.
type orbitKey struct {
	edition int // of the logbook
	site    string
	hour    time.Time
}

// orbitState is what is known of the binaries.
type orbitState struct {
	asked   orbitKey // the newest question, which may still be open
	known   orbitKey // what views answers
	views   []campaigns.OrbitView
	trouble string
}

// orbitsMsg: every binary's orbit has been looked at.
type orbitsMsg struct {
	key   orbitKey
	views []campaigns.OrbitView
	err   error
}

// orbitSite is the site whose sky counts: the session's, else the campaign's first.
func (w *world) orbitSite() *campaigns.Site {
	for i := range w.campaign.Sites {
		if w.campaign.Sites[i].Name == w.desk.session.Site {
			return &w.campaign.Sites[i]
		}
	}
	if len(w.campaign.Sites) == 0 {
		return nil
	}
	return &w.campaign.Sites[0]
}

// fetchOrbits looks at the orbits anew when the logbook, the site or the hour is another.
func (m *model) fetchOrbits() tea.Cmd {
	w := &m.world
	site := w.orbitSite()
	if site == nil {
		return nil
	}
	key := orbitKey{edition: w.edition, site: site.Name, hour: w.now.Truncate(time.Hour)}
	if key == w.orbits.asked {
		return nil
	}
	w.orbits.asked = key
	return orbitsCmd(w.folder, site, w.now, key)
}

func orbitsCmd(f *files, site *campaigns.Site, at time.Time, key orbitKey) tea.Cmd {
	return guarded(func() tea.Msg {
		views, err := campaigns.Orbits(f.Campaign, f.book(), site, at)
		return orbitsMsg{key, views, err}
	})
}

func (m *model) receiveOrbits(msg orbitsMsg) {
	o := &m.world.orbits
	if msg.key != o.asked {
		return // a newer question is open
	}
	o.known, o.trouble = msg.key, ""
	if msg.err != nil {
		o.trouble = msg.err.Error()
		return
	}
	o.views = msg.views
}
