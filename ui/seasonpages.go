package ui

import (
	"fmt"
	"strings"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/ui/cell"
	"example.org/tallystick/ui/theme"
)

// cadencePage is the page of the cadences.
const cadencePage = 1

// seasonPages are the pages of the season, in their order.
var seasonPages = [...]seasonPage{
	{"Sessions", []textColumn{
		{"no", 2, true, 0}, {"session", 22, false, 0}, {"start, UTC", 16, false, 1}, {"hours", 5, true, 0}, {"on source", 9, true, 2}, {"slots", 5, true, 1},
		{"worth", 7, true, 2}, {"overdue", 7, true, 1},
	}, "Left and Right turn pages", sessionsPage},
	{"Cadences", []textColumn{
		{"season", 6, false, 0}, {"source", 12, false, 0}, {"aim", 20, false, 2}, {"up", 3, true, 2}, {"due", 3, true, 0}, {"planned", 7, true, 0}, {"overdue d", 9, true, 3},
		{"debt", 5, true, 1}, {"worst", 5, true, 4}, {"at end", 6, true, 1},
	}, "visits due, missed first", cadencesPage},
	{"Hours", []textColumn{
		{"LST", 5, false, 0}, {"wanted", 6, true, 0}, {"granted", 7, true, 0}, {"planned", 7, true, 2}, {"ask for", 7, true, 0}, {"", 12, false, 1},
	}, "hours by sidereal time", hoursPage},
	{"Connect", []textColumn{
		{"source", 12, false, 0}, {"observe by", 10, false, 0}, {"planned", 10, false, 1}, {"count", 7, false, 0}, {"then by", 14, false, 3},
	}, "dates that counts hang on", connectPage},
	{"Sun", []textColumn{
		{"source", 12, false, 0}, {"from", 10, false, 0}, {"to", 10, false, 0}, {"closest", 10, false, 2}, {"deg", 5, true, 1}, {"limit", 5, true, 1},
	}, "too close to the Sun", sunPage},
	{"Owed", []textColumn{
		{"debt", 5, true, 0}, {"source", 12, false, 0}, {"aim", 26, false, 1}, {"why", 30, false, 2},
	}, "debts at the end", owedPage},
	{"Phases", []textColumn{
		{"source", 12, false, 0}, {"site", 12, false, 3}, {"step, turns", 11, true, 2}, {"parts", 5, true, 1}, {"seen", 5, true, 0}, {"all seen after", 14, true, 0},
	}, "orbits in step with days", phasesPage},
	{"Array", []textColumn{
		{"source", 12, false, 0}, {"rcvr", 4, false, 2}, {"1 h, us", 8, true, 2}, {"floor", 5, true, 3}, {"up h", 5, true, 4}, {"least h", 7, true, 3},
		{"planned h", 9, true, 0}, {"best h", 6, true, 0}, {"error, us", 9, true, 1}, {"at best", 8, true, 1},
	}, "what other hours buy", arrayPage},
}

func sessionsPage(s *campaigns.Season) seasonTable {
	t := seasonTable{lines: func(i int) (string, []line) { return sessionLines(s, i) }}
	for i := range s.Sessions {
		x := &s.Sessions[i]
		t.cells = append(t.cells, []string{
			fmt.Sprint(i + 1), x.Session.Name, x.Session.Start.UTC().Format("2006-01-02 15:04"), fmt.Sprintf("%.1f", x.Hours),
			fmt.Sprintf("%.1f h", float64(x.OnSourceMin)/60), fmt.Sprint(len(x.Rows)), fmt.Sprintf("%.1f", x.Worth), fmt.Sprint(x.Overdue),
		})
	}
	return t
}

func sessionLines(s *campaigns.Season, i int) (string, []line) {
	x := &s.Sessions[i]
	lines := []line{
		{label: "when", text: fmt.Sprintf("%s to %s UTC at %s, with %s", x.Session.Start.UTC().Format("2006-01-02 15:04"), clock(x.Session.End), x.Session.Site, strings.Join(x.Session.Receivers, ", "))},
		{label: "time", text: fmt.Sprintf("%.1f h without breaks, %.1f h of them on source in %s, worth %.1f", x.Hours, float64(x.OnSourceMin)/60, count(len(x.Rows), "slot"), x.Worth)},
	}
	for j := range x.Rows {
		r := &x.Rows[j]
		lines = append(lines, line{label: clock(r.Start), text: fmt.Sprintf("to %s: %s with %s, worth %.2f", clock(r.End), r.Source, r.Receiver, r.Worth)})
	}
	return "session " + x.Session.Name + " as played", lines
}

func outcomeInk(o campaigns.CadenceOutcome) theme.Ink {
	switch o {
	case campaigns.CadenceMissed:
		return theme.Overdue
	case campaigns.CadenceKept:
		return theme.Good
	}
	return theme.Plain
}

func cadencesPage(s *campaigns.Season) seasonTable {
	t := seasonTable{lines: func(i int) (string, []line) { return cadenceLines(s, i) }}
	for i := range s.Cadences {
		c := &s.Cadences[i]
		t.cells = append(t.cells, []string{
			string(c.Outcome), c.Source, c.Aim, fmt.Sprint(c.Up), fmt.Sprint(c.Due), fmt.Sprint(c.Planned), fmt.Sprint(c.OverdueDays),
			fmt.Sprintf("%.2f", c.DebtNow), fmt.Sprintf("%.2f", c.DebtWorst), fmt.Sprintf("%.2f", c.DebtEnd),
		})
		t.inks = append(t.inks, outcomeInk(c.Outcome))
		t.sources = append(t.sources, c.Source)
	}
	return t
}

func cadenceLines(s *campaigns.Season, i int) (string, []line) {
	c := &s.Cadences[i]
	lines := []line{
		{label: "season", text: fmt.Sprintf("%s: %s above a debt of 1", c.Outcome, count(c.OverdueDays, "day"))},
		{label: "visits", text: fmt.Sprintf("%d fall due in the season, %d planned", c.Due, c.Planned)},
		{label: "up", text: fmt.Sprintf("it could be observed in %d of %s", c.Up, count(len(s.Sessions), "session"))},
		{label: "debt", text: fmt.Sprintf("%.2f now, %.2f at its worst, %.2f at the end; priority %.3g", c.DebtNow, c.DebtWorst, c.DebtEnd, c.Priority)},
	}
	for j := range s.Sessions {
		x := &s.Sessions[j]
		for k := range x.Rows {
			if r := &x.Rows[k]; r.Source == c.Source {
				lines = append(lines, line{label: r.Start.UTC().Format("01-02 15:04"), text: fmt.Sprintf("to %s with %s, session %s", clock(r.End), r.Receiver, x.Session.Name)})
			}
		}
	}
	return c.Source + ", " + c.Aim, lines
}

// hourBar is how wide the bar of an hour is in the table.
const hourBar = 24

func hoursPage(s *campaigns.Season) seasonTable {
	var t seasonTable
	type place struct{ site, hour int }
	var places []place
	for i := range s.Pressure {
		l := &s.Pressure[i]
		ask := l.AskH()
		most := mostHours(l)
		for h := range ask {
			had, rest, _ := pressureBar(hourBar, l.WantedH[h], l.GrantedH[h], most)
			t.cells = append(t.cells, []string{
				fmt.Sprintf("%02d-%02d", h, h+1), fmt.Sprintf("%.1f", l.WantedH[h]), fmt.Sprintf("%.1f", l.GrantedH[h]), fmt.Sprintf("%.1f", l.PlannedH[h]),
				fmt.Sprintf("%.1f", ask[h]), had + rest,
			})
			places = append(places, place{i, h})
		}
	}
	t.lines = func(i int) (string, []line) {
		l := &s.Pressure[places[i].site]
		h := places[i].hour
		ask, spare := l.AskH(), l.SpareH()
		return fmt.Sprintf("%02d h to %02d h LST at %s", h, h+1, l.Site), []line{
			{label: "hours", text: fmt.Sprintf("%.1f wanted, %.1f granted, %.1f planned on source", l.WantedH[h], l.GrantedH[h], l.PlannedH[h])},
			{label: "ask for", text: fmt.Sprintf("%.1f h more here; %.1f h to spare", ask[h], spare[h])},
			{label: "season", text: fmt.Sprintf("%.1f h wanted, %.1f granted, %.1f planned; %.1f to ask for, %.1f to spare",
				campaigns.SumH(l.WantedH), campaigns.SumH(l.GrantedH), campaigns.SumH(l.PlannedH), campaigns.SumH(ask), campaigns.SumH(spare))},
			{label: "signs", text: "# wanted and granted, + wanted and short, - granted and spare"},
			{label: "wanted", text: "is at the zenith, with set-up and without slews; measure and connect aims ask for no hours; it is put where time is granted while the source is up, and what finds no room is spread evenly over the time in which it is up"},
		}
	}
	return t
}

func connectPage(s *campaigns.Season) seasonTable {
	t := seasonTable{lines: func(i int) (string, []line) { return connectLines(&s.Connects[i]) }}
	for i := range s.Connects {
		c := &s.Connects[i]
		by, planned, verdict, ink := "no date", "-", "safe", theme.Plain
		if !c.By.IsZero() {
			by = date(c.By)
			if c.By.Before(s.To) {
				verdict = "kept"
			}
		}
		if !c.Planned.IsZero() {
			planned = date(c.Planned)
		}
		if c.Lost {
			verdict, ink = "at risk", theme.Overdue
		}
		after := "no date"
		if !c.ByAtEnd.IsZero() {
			after = date(c.ByAtEnd)
		}
		t.cells = append(t.cells, []string{c.Source, by, planned, verdict, after})
		t.inks = append(t.inks, ink)
		t.sources = append(t.sources, c.Source)
	}
	return t
}

func connectLines(c *campaigns.ConnectForecast) (string, []line) {
	by := "no date within ten years: the count is safe"
	if !c.By.IsZero() {
		by = c.By.UTC().Format("2006-01-02 15:04 UTC") + ": then the predicted error of the phase passes " + fmt.Sprintf("%g turns", c.LimitTurns)
	}
	planned := "not in this season"
	if !c.Planned.IsZero() {
		planned = c.Planned.UTC().Format("2006-01-02 15:04 UTC")
	}
	after := "no date within ten years"
	if !c.ByAtEnd.IsZero() {
		after = date(c.ByAtEnd)
	}
	return c.Source + ", keep count of its turns", []line{
		{label: "observe by", text: by}, {label: "planned", text: planned}, {label: "then by", text: after},
	}
}

func sunPage(s *campaigns.Season) seasonTable {
	var t seasonTable
	for _, g := range s.Sun {
		t.cells = append(t.cells, []string{g.Source, date(g.From), date(g.To), date(g.ClosestAt), fmt.Sprintf("%.1f", g.ClosestDeg), fmt.Sprintf("%.1f", g.LimitDeg)})
		t.sources = append(t.sources, g.Source)
	}
	t.lines = func(i int) (string, []line) {
		g := s.Sun[i]
		return g.Source + ", near the Sun", []line{
			{label: "not usable", text: fmt.Sprintf("%s to %s: nearer to the Sun than %.1f deg", g.From.UTC().Format("2006-01-02 15:04"), g.To.UTC().Format("2006-01-02 15:04 UTC"), g.LimitDeg)},
			{label: "closest", text: fmt.Sprintf("%.1f deg on %s", g.ClosestDeg, g.ClosestAt.UTC().Format("2006-01-02 15:04 UTC"))},
		}
	}
	return t
}

// phasesPage lists the orbits that keep step with the days.
func phasesPage(s *campaigns.Season) seasonTable {
	var t seasonTable
	for i := range s.Repeats {
		r := &s.Repeats[i]
		t.cells = append(t.cells, []string{
			r.Source, r.Site, fmt.Sprintf("%.4f", r.StepTurns), fmt.Sprint(r.Parts), fmt.Sprintf("%.0f %%", 100*r.SeenShare()), fmt.Sprintf("%.0f d", r.Days),
		})
		t.sources = append(t.sources, r.Source)
	}
	t.lines = func(i int) (string, []line) {
		r := &s.Repeats[i]
		return r.Source + ", in step with the days", []line{
			{label: "step", text: fmt.Sprintf("from one transit over %s to the next the orbital phase steps by %.4f turns", r.Site, r.StepTurns)},
			{label: "seen", text: fmt.Sprintf("%s of the orbit, %.3f turns wide, one a transit: %.0f %% of it", count(r.Parts, "part"), r.PartTurns, 100*r.SeenShare())},
			{label: "all seen", text: fmt.Sprintf("after %.0f days; what lies between the parts must be planned for long before", r.Days)},
		}
	}
	return t
}

func owedPage(s *campaigns.Season) seasonTable {
	t := seasonTable{lines: func(i int) (string, []line) {
		r := &s.Debts[i]
		return r.Source + ", " + aimWords(r), []line{
			{label: "at end", text: fmt.Sprintf("debt %.2f, priority %.3g", r.Debt, r.Priority)}, {label: "because", text: r.Why},
			{label: "flags", text: joined(r.Flags...)},
		}
	}}
	for i := range s.Debts {
		r := &s.Debts[i]
		ink := theme.Plain
		if r.Debt > 1 {
			ink = theme.Overdue
		}
		t.cells = append(t.cells, []string{fmt.Sprintf("%.2f", r.Debt), r.Source, aimWords(r), cell.Fit(r.Why, 60)})
		t.inks = append(t.inks, ink)
		t.sources = append(t.sources, r.Source)
	}
	return t
}
