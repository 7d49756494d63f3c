package ui

import (
	"fmt"
	"math"
	"strings"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/ui/cell"
	"example.org/tallystick/ui/theme"
)

// orbitLines tell all there is to tell of a binary, what is coming first. Gauges are drawn where there are glyphs.
func orbitLines(w *world, g *theme.Glyphs, o *campaigns.OrbitView) []line {
	var lines []line
	add := func(label string, ink theme.Ink, format string, args ...any) {
		lines = append(lines, line{label, fmt.Sprintf(format, args...), ink})
	}
	if o.Void {
		add("orbit", theme.Overdue, "its elements mean nothing at this date: check the period's derivatives in the ephemeris")
	} else {
		add("seen", theme.Plain, "%s", seenWords(o))
	}
	if missing := missingBins(o); missing != "" {
		add("missing", theme.Overdue, "%s", missing)
	}
	for i := range o.Aims {
		a := &o.Aims[i]
		add(aimLabel(a), theme.Plain, "%s", progressWords(a, g))
	}
	caught, other := 0, 0
	for i := range o.Events {
		e := &o.Events[i]
		if e.At.Before(w.now) {
			continue
		}
		if e.Session != "" && e.Usable {
			caught++
		} else {
			other++
		}
	}
	add("comes", theme.Plain, "%s that a session catches, %d that none does, until %s", count(caught, "event"), other, date(o.To))
	for _, inSession := range []bool{true, false} {
		told := 0
		for i := range o.Events {
			e := &o.Events[i]
			if e.At.Before(w.now) || inSession != (e.Session != "" && e.Usable) {
				continue
			}
			if told++; told > 24 {
				add(" ", theme.Muted, "and more, later")
				break
			}
			ink := theme.Plain
			if inSession {
				ink = theme.Good
			}
			add(e.At.UTC().Format("01-02 15:04"), ink, "%s, el %.0f deg, %s%s", shortKind(e.Kind), e.ElevationDeg, caughtWords(e), trustWords(e))
		}
	}
	if o.Limited {
		add(" ", theme.Muted, "of an orbit under a day only what falls within sessions is listed")
	}
	if o.Void {
		return lines
	}
	add("orbit", theme.Plain, "period %s, eccentricity %s; phase %.3f now", periodWords(o.PeriodDays), eccentricityWords(o.Eccentricity), o.NowTurns)
	add("points", theme.Plain, "%s", pointWords(o))
	if o.Sizes != nil {
		add("delays", theme.Plain, "%s", sizeWords(o.Sizes))
		if s := o.Sizes; s.PulsarMsun > 0 {
			add("relativity", theme.Plain, "%s", relativityWords(s))
		}
	}
	return lines
}

func seenWords(o *campaigns.OrbitView) string {
	since := "in the logbook"
	if !o.Since.IsZero() {
		since = "since " + date(o.Since)
	}
	return fmt.Sprintf("%.0f %% of the orbit in %s %s", 100*o.SeenShare(), count(o.Visits, "observation"), since)
}

// missingBins names the bins that lack visits.
func missingBins(o *campaigns.OrbitView) string {
	var said []string
	for _, b := range o.Bins {
		if !b.Full() {
			said = append(said, fmt.Sprintf("%.2f-%.2f %s/%d", b.FromTurns, b.ToTurns, visits(b.Had), b.Wanted))
		}
	}
	if said == nil {
		return ""
	}
	return "visits at phase " + strings.Join(said, ", ")
}

// visits writes shares of visits: whole ones without a point.
func visits(n float64) string {
	if math.Abs(n-math.Round(n)) < 0.05 {
		return fmt.Sprintf("%.0f", n)
	}
	return fmt.Sprintf("%.1f", n)
}

func aimLabel(a *campaigns.OrbitAim) string {
	switch a.Kind {
	case campaigns.PhaseCoverage:
		return "coverage"
	case campaigns.Conjunction:
		return "passages"
	}
	return string(a.Kind)
}

// gaugeCells is how wide a gauge in a line is.
const gaugeCells = 10

// progressWords says how far an aim has come, with a gauge that is full when it has arrived.
func progressWords(a *campaigns.OrbitAim, g *theme.Glyphs) string {
	gauge := func(share float64) string {
		if g.Full == "" {
			return ""
		}
		return "  [" + cell.Gauge(share, 1, gaugeCells, g.Full, g.Half) + "]"
	}
	switch a.Kind {
	case campaigns.Measure:
		name := strings.TrimPrefix(a.Aim, "measure ")
		if a.Sigma == 0 {
			return fmt.Sprintf("%s: not determined yet; goal %.2g %s", name, a.Goal, a.Unit) + gauge(0)
		}
		text := fmt.Sprintf("%s: error now %.2g %s, goal %.2g", name, a.Sigma, a.Unit, a.Goal)
		if a.Sigma <= a.Goal {
			text += ", reached"
		}
		return text + gauge(a.Goal/a.Sigma)
	case campaigns.Connect:
		if math.IsInf(a.Predicted, 1) {
			return "the count of turns is not connected"
		}
		text := fmt.Sprintf("phase error %.2g turns at the next session, limit %.2g", a.Predicted, a.Limit)
		switch {
		case a.Predicted > a.Limit:
			text += ": the count may be lost by then"
		case a.Deadline.IsZero():
			text += "; no date within ten years"
		default:
			text += "; observe by " + date(a.Deadline)
		}
		return text
	case campaigns.PhaseCoverage, campaigns.Conjunction:
		return a.Why + gauge(1-a.Debt)
	}
	return fmt.Sprintf("%s: debt %.2f", aimWords(&a.AccountRow), a.Debt)
}

// caughtWords says which session catches an event, if one does.
func caughtWords(e *campaigns.ConjunctionRow) string {
	switch {
	case e.Session != "" && e.Usable:
		return "caught by " + e.Session
	case e.Session != "":
		return "not usable in " + e.Session
	case !e.Usable:
		return "no session, not usable"
	}
	return "no session"
}

// trustWords says how far a predicted time can be trusted, where that needs saying.
func trustWords(e *campaigns.ConjunctionRow) string {
	switch m := e.Prediction.SigmaDays * 24 * 60; {
	case !e.SigmaKnown:
		return "; error not known"
	case m < 0.5 && e.Trust() == "trustworthy":
		return ""
	default:
		return fmt.Sprintf("; +/- %.2g min, %s", m, e.Trust())
	}
}

// sizeWords says what there is to be seen of the Shapiro delay.
func sizeWords(s *campaigns.OrbitSizes) string {
	text := fmt.Sprintf("Shapiro delay of %.3g us from least to most, H3 %.3g us, third harmonic %.3g us; companion of %.3g Msun, sin i %.6g",
		s.ShapiroUs, s.H3Us, s.ThirdUs, s.CompanionMsun, s.SinI)
	if s.Assumed != "" {
		text += ", with " + s.Assumed
	}
	return text
}

// relativityWords says what general relativity wants of the orbit with these masses.
func relativityWords(s *campaigns.OrbitSizes) string {
	text := fmt.Sprintf("wants a pulsar of %.3g Msun, advance %.3g deg/yr, decay %.2g", s.PulsarMsun, s.AdvanceDegPerYr, s.Decay)
	if s.EinsteinUs >= 0.01 {
		text += fmt.Sprintf(", Einstein delay %.3g us", s.EinsteinUs)
	}
	return text
}

func pointWords(o *campaigns.OrbitView) string {
	text := fmt.Sprintf("S behind the companion at %.3f, I in front at %.3f", o.SuperiorTurns, o.InferiorTurns)
	if o.PeriastronTurns != nil {
		text += fmt.Sprintf(", P periastron at %.3f", *o.PeriastronTurns)
	}
	if o.EclipseTurns != nil {
		text += fmt.Sprintf(", x eclipse from %.3f to %.3f", o.EclipseTurns[0], o.EclipseTurns[1])
	}
	return text + "; N ascending node at 0"
}
