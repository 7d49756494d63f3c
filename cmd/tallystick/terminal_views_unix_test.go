//go:build unix

package main

import (
	"strings"
	"testing"
)

// A night is logged the morning after: one slot lost, the rest done, one slip put right; then the next session's
// accounts know of it.
func TestTerminalLogsANight(t *testing.T) {
	term := newTerminal(t)
	term.start(80, 24, evening+" plan --save >plan.out")
	term.ends("0")
	before := strings.Count(term.file("logbook.csv"), "\n")
	term.start(80, 24, "tallystick --at 2026-12-04T07:00:00Z --session '2026-12-03 night'")
	term.shows("the saved plan of")
	term.keys("5")
	term.shows(" 0 of ", "slots recorded", "d done")
	term.keys("f")
	term.shows("Record as lost")
	term.keys("Tab", "Tab", "Tab")
	term.types("rain on the feed")
	term.keys("Enter")
	term.shows("recorded: ", " 1 of ", "rain on the")
	term.keys("A")
	term.shows("Record all as done?")
	term.keys("y")
	term.shows("recorded: ", "as done")
	term.keys("g", "p")
	term.shows("Correct as partial", "the line before stays")
	term.keys("C-u")
	term.types("0.4")
	term.keys("Enter")
	term.shows("partial;")
	term.keys("q")
	term.ends("0")
	lines := strings.Split(strings.TrimSpace(term.file("logbook.csv")), "\n")[before:]
	slots := strings.Count(term.file("plans", "2026-12-03 night.toml"), "[[slot]]")
	if len(lines) != slots+1 || !strings.Contains(lines[0], ",lost,0,,,rain on the feed") || !strings.Contains(lines[slots], ",partial,0.4,,,rain on the feed") {
		t.Errorf("%d slots, and in the logbook:\n%s", slots, strings.Join(lines, "\n"))
	}
	first := strings.Split(lines[0], ",")
	if !strings.HasPrefix(lines[slots], first[0]+",") {
		t.Errorf("%q does not correct %q", lines[slots], lines[0])
	}
	term.start(80, 24, "tallystick arrears --at 2026-12-04T07:00:00Z --format csv >arrears.csv")
	term.ends("0")
	if !strings.Contains(term.file("arrears.csv"), ",2026-12-03T") {
		t.Error("the arrears know nothing of the night")
	}
}

// The season is played while the other views are used, stopped and played again; the orbits are drawn.
func TestTerminalPlaysTheSeason(t *testing.T) {
	term := newTerminal(t)
	term.start(120, 40, evening)
	term.shows("planned ")
	term.keys("4")
	term.shows("P plays the season", "2 sessions")
	term.keys("P")
	term.shows("the season is played: of 5 cadences")
	term.keys("Right")
	term.shows("missed J1347-4410")
	term.keys("Right")
	term.shows("ask for", "10-11")
	term.keys("3")
	term.shows("J0231+1905", "to the Earth", "caught by 2026-12-03")
	term.resize(40, 10)
	term.shows("seen", "bins lack")
	term.keys("4")
	term.shows("Hours", "wanted")
	term.keys("q")
	term.ends("0")
}
