package main

import (
	"fmt"
	"io"
	"math"
	"strings"
	"time"
)

// printFacts tells what a viewer of the demonstration should see: the past of every source, its orbit's
// passages in the coming sessions, and how far each session can serve it.
func printFacts(w io.Writer) {
	sources := inventSources()
	log := playHistory(sources)
	now := on(2026, 12, 3, 15, 0)
	tally := map[string]int{}
	for _, o := range log {
		tally[o.outcome]++
	}
	fmt.Fprintf(w, "%d sources, %d sessions past, %d lines of logbook: %d done, %d partial, %d lost\n\n",
		len(sources), len(past()), len(log), tally["done"], tally["partial"], tally["lost"])
	for _, c := range claimsOf(sources) {
		printClaim(w, c, log, now)
	}
	printPressure(w, sources, log, now)
	for i := range sources {
		s := &sources[i]
		if s.orbit != nil {
			fmt.Fprintf(w, "\n%s %s: %s", s.name, s.orbitKind(), s.role)
			printCoverage(w, s, log)
			printPassages(w, s)
			printCaught(w, s, log)
		}
	}
}

func (s *source) orbitKind() string {
	return fmt.Sprintf("%.4f d, e %.3f, x %.3f ls, advance %g deg/yr, decay %g", s.orbit.periodDays,
		s.orbit.eccentricity, s.orbit.semimajorLs, s.orbit.advanceDegPerYr, s.orbit.decay)
}

// printClaim gives the number of visits, the days since the last and those in cycles of the cadence.
func printClaim(w io.Writer, c *claim, log []observation, now time.Time) {
	visits, last := 0, time.Time{}
	for _, o := range log {
		if o.source == c.s.name && o.receiver == c.rx && o.outcome != "lost" {
			visits, last = visits+1, o.start
		}
	}
	if visits == 0 {
		fmt.Fprintf(w, "%-11s %-11s %s  never\n", c.s.chapter, c.s.name, c.rx)
		return
	}
	days := now.Sub(last).Hours() / 24
	if c.s.periodS == 0 {
		fmt.Fprintf(w, "%-11s %-11s %s %4d visits, last %5.1f d ago\n", c.s.chapter, c.s.name, c.rx, visits, days)
		return
	}
	snr := signal(*c.s, receiverNamed(c.rx), 60, c.a.minutes)
	fmt.Fprintf(w, "%-11s %-11s %s %4d visits, last %5.1f d ago (every %g: %.1f); S/N %.0f, TOA %.3g us in %g min at 60 deg\n",
		c.s.chapter, c.s.name, c.rx, visits, days, c.a.everyDays, days/c.a.everyDays, snr, toaUs(*c.s, snr, c.a.minutes), c.a.minutes)
}

// printPressure compares, for each coming session, its length with the minutes of all that is due by now and
// up long enough.
func printPressure(w io.Writer, sources []source, log []observation, now time.Time) {
	fmt.Fprintln(w)
	last := map[string]time.Time{}
	for _, o := range log {
		if o.outcome != "lost" {
			last[o.source+o.receiver] = o.start
		}
	}
	for _, t := range coming() {
		due, minutes := 0, 0
		for _, c := range claimsOf(sources) {
			cycles := now.Sub(last[c.s.name+c.rx]).Hours() / 24 / c.intervalDays(mjdOf(now))
			if (c.a.kind == "calibration" || cycles >= 0.8) && t.has(c.rx) && minutesUp(c.s, t) >= c.minutes {
				due, minutes = due+1, minutes+c.minutes+4
			}
		}
		hour := siderealDeg(mjdOf(t.start)) / 15
		fmt.Fprintf(w, "%-21s sidereal time %4.1f to %4.1f h: %3d visits due and possible, %4d minutes in %3d\n", t.name(),
			hour, math.Mod(hour+float64(t.minutes)/60*1.0027, 24), due, minutes, t.minutes)
	}
}

// minutesUp returns how long a source is inside all limits during a session.
func minutesUp(s *source, t session) int {
	up := 0
	ofDate := precess(s.position, mjdOf(t.start))
	for m := range t.minutes {
		if visible(ofDate, mjdOf(t.start)+float64(m)/1440, math.Max(siteSunLimitDeg, s.sunLimit)) {
			up++
		}
	}
	return up
}

// printCoverage counts the visits in each bin of orbital phase from the ascending node.
func printCoverage(w io.Writer, s *source, log []observation) {
	for _, a := range s.aims {
		if a.kind != "phase coverage" {
			continue
		}
		counts := make([]int, a.bins)
		for _, o := range log {
			if o.source == s.name && o.outcome != "lost" && o.receiver == "L" && mjdOf(o.start) >= mjdOfDate(a.since) {
				phase := s.orbit.phase(barycentreMJD(s.position, mjdOf(o.start)+o.end.Sub(o.start).Hours()/48))
				counts[int((phase-math.Floor(phase))*float64(a.bins))]++
			}
		}
		fmt.Fprintf(w, "\n    bins from the node since %s (want %d each): %v", a.since, a.perBin, counts)
	}
	fmt.Fprintln(w)
}

// printPassages lists the superior conjunctions that fall into the coming sessions.
func printPassages(w io.Writer, s *source) {
	if s.orbit.periodDays < 0.5 {
		return
	}
	if o := s.orbit; o.periastronMJD > 0 && o.periodDays > 2 {
		n := math.Ceil((mjdOf(coming()[0].start) - o.periastronMJD) / o.periodDays)
		next := observedMJD(s.position, o.periastronMJD+n*o.periodDays)
		fmt.Fprintf(w, "    next periastron %s UTC\n", timeOf(next).Format("2006-01-02 15:04:05"))
	}
	for _, t := range coming() {
		for _, c := range s.superiorConjunctions(mjdOf(t.start), mjdOf(t.end())) {
			az, el := azEl(precess(s.position, c), c)
			fmt.Fprintf(w, "    superior conjunction %s UTC in %s: azimuth %.0f, elevation %.1f (lowest %.1f)\n",
				timeOf(c).Format("2006-01-02 15:04:05"), t.name(), az, el, lowestDeg(az))
		}
	}
}

// printCaught lists the passages that past sessions held.
func printCaught(w io.Writer, s *source, log []observation) {
	for _, o := range log {
		if o.source == s.name && strings.Contains(o.note, "superior conjunction") {
			fmt.Fprintf(w, "    passage of %s: %s, quality %.2f, %s\n", o.start.Format("2006-01-02 15:04"), o.outcome, o.quality, o.note)
		}
	}
}
