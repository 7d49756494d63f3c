package ui

import (
	"strings"

	"example.org/tallystick/ui/theme"
)

// newHelp is the help of one view: its keys, the words it uses, and what must be said about safety.
func newHelp(view string) *reader {
	var lines []line
	group := ""
	for i := range commands {
		c := &commands[i]
		if !c.worksIn(view) {
			continue
		}
		if c.group != group {
			if group != "" {
				lines = append(lines, line{})
			}
			group = c.group
			lines = append(lines, line{text: group, ink: theme.Strong})
		}
		lines = append(lines, line{label: c.Help().Key, text: c.name})
	}
	lines = append(lines, line{}, line{text: "What the screen says", ink: theme.Strong})
	lines = append(lines, words[view]...)
	lines = append(lines, line{}, line{text: "Safety", ink: theme.Strong},
		line{text: safety})
	return &reader{title: "Keys and words: " + strings.ToLower(view), lines: lines}
}

// safety stands in the help of every view.
const safety = "This list is advice. The program moves nothing. The observatory's interlocks, its wind and stow limits, " +
	"its rules on pointing near the Sun, its lock-out procedures for people on the structure and the judgement of the " +
	"authorised operator come first."

var words = map[string][]line{
	slateTitle: {
		{label: "worth", text: "what the planner adds up; 1 is one observation that is exactly due, of a source of priority 1"},
		{label: "ceiling", text: "no plan of this session with these pins and bars can be worth more: that is proved"},
		{label: "within", text: "how far from the ceiling the plan can be at most; a better plan may not exist at all"},
		{label: "slot", text: "time on source with one receiver, after move and set-up; its number counts in order of time"},
		{label: "P", text: "pinned: fixed by the observer; re-planning leaves it alone"},
		{label: "!", text: "breaks a limit; kept because the observer said so"},
		{label: "done", text: "as part and lost: recorded in the logbook as done, partial or lost"},
		{label: "held", text: "an edit that breaks a limit is shown but is not yet part of the plan: ! keeps it, Esc takes it back"},
		{label: "bar", text: "keep a source out of this session altogether"},
		{label: "behind", text: "the slot in progress began so much later than it was planned to"},
		{label: "curves", text: "elevation over the session: the chosen source drawn through, the other planned ones dotted, double or heavy where they are observed; x where it is eclipsed, o where it is too close to the Sun"},
		{label: "limit", text: "the dashed line: the lowest elevation allowed where the chosen source stands, the horizon mask included"},
		{label: "el, az", text: "elevation and azimuth of the mount, in degrees; azimuth counts on over the cable's turns"},
		{label: "turn", text: "turn of the cable: the mount's azimuth is the compass azimuth plus 360 degrees for each turn"},
		{label: "HA", text: "hour angle in hours and minutes; west, after transit, is positive"},
		{label: "phase", text: "orbital phase in turns from the ascending node"},
		{label: "TOA", text: "the expected error of the time of arrival, in microseconds"},
		{label: "move", text: "slew or receiver change before the slot, whichever takes longer"},
	},
	arrearsTitle: {
		{label: "account", text: "what one aim of one source is owed; an aim is a reason to observe it"},
		{label: "debt", text: "what an aim is owed; 1 is due now, above 1 is overdue"},
		{label: "due", text: "when the debt reaches 1"},
		{label: "next", text: "when the source can next be observed in a coming session"},
		{label: "year", text: "the past 52 weeks, the oldest first: how often it was observed in each, x where it was only lost"},
		{label: "plan", text: "its slot in the plan of this session, or barred"},
	},
}
