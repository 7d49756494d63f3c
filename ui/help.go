package ui

import (
	"strings"

	"example.org/tallystick/ui/theme"
)

// newHelp is the help of one view: its keys, what can be done first and how to move about last; the words
// it uses, then those of the other views; and what must be said about safety.
func newHelp(view string) *reader {
	var lines []line
	heading := func(text string) {
		if len(lines) > 0 {
			lines = append(lines, line{})
		}
		lines = append(lines, line{text: text, ink: theme.Strong})
	}
	for _, group := range helpOrder {
		begun := false
		for i := range commands {
			c := &commands[i]
			if c.group != group || !c.worksIn(view) {
				continue
			}
			if !begun {
				heading(group)
				begun = true
			}
			lines = append(lines, line{label: c.Help().Key, text: c.name})
		}
	}
	heading("What the screen says")
	lines = append(lines, words[view]...)
	heading("Safety")
	lines = append(lines, line{text: safety})
	heading("Words of the other views")
	said := map[string]bool{}
	for _, l := range words[view] {
		said[l.label] = true
	}
	for _, v := range newViews() {
		for _, l := range words[v.title()] {
			if !said[l.label] {
				said[l.label] = true
				lines = append(lines, l)
			}
		}
	}
	return &reader{title: "Keys and words: " + strings.ToLower(view), lines: lines}
}

// helpOrder are the groups of keys as the help shows them.
var helpOrder = []string{logging, editing, onSky, keeping, looking, moving}

// safety stands in the help of every view.
const safety = "This list is advice. The program moves nothing. The observatory's interlocks, its wind and stow limits, " +
	"its rules on pointing near the Sun, its lock-out procedures for people on the structure and the judgement of the " +
	"authorised operator come first."

var words = map[string][]line{
	slateTitle: {
		{label: "worth", text: "what the planner adds up; 1 is one observation that is exactly due, of a source of priority 1"},
		{label: "ceiling", text: "no plan of this session with these pins and bars can be worth more: that is proved, and carried over edits and saving as long as it follows"},
		{label: "at most", text: "no plan within the limits (or with all that must be in) can be worth more; the plan shown is none of them, so that it may be"},
		{label: "as from", text: "only for plans that keep what stands before that time"},
		{label: "within", text: "how far from the ceiling the plan can be at most; a better plan may not exist at all"},
		{label: "slot", text: "time on source with one receiver, after move and set-up; its number counts in order of time"},
		{label: "P", text: "pinned: fixed by the observer; re-planning leaves it alone"},
		{label: "!", text: "breaks a limit; kept because the observer said so"},
		{label: "done", text: "as part and lost: recorded in the logbook as done, partial or lost"},
		{label: "held", text: "an edit that breaks a limit is shown but is not yet part of the plan: ! keeps it, Esc takes it back"},
		{label: "bar", text: "keep a source out of this session altogether"},
		{label: "behind", text: "the slot in progress began so much later than it was planned to"},
		{label: "curves", text: "elevation over the session: the chosen source drawn through, the other planned ones dotted, double or heavy where they are observed; x where it is eclipsed, o where it is too close to the Sun; S is the Sun itself"},
		{label: "limit", text: "the dashed line: the lowest elevation allowed where the chosen source stands, the horizon mask included"},
		{label: "el, az", text: "elevation and azimuth of the mount, in degrees; azimuth counts on over the cable's turns"},
		{label: "turn", text: "turn of the cable: the mount's azimuth is the compass azimuth plus 360 degrees for each turn"},
		{label: "HA", text: "hour angle in hours and minutes; west, after transit, is positive"},
		{label: "phase", text: "orbital phase in turns from the ascending node"},
		{label: "TOA", text: "the expected error of the time of arrival, in microseconds: of noise, jitter and floor"},
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
	orbitsTitle: {
		{label: "phase", text: "where in its orbit the pulsar is: turns from the ascending node, where it crosses the plane of the sky going away"},
		{label: "S", text: "superior conjunction: the pulsar is behind its companion"},
		{label: "I", text: "inferior conjunction: the pulsar is in front of its companion"},
		{label: "P", text: "periastron: the pulsar is nearest to its companion"},
		{label: "N", text: "the ascending node, phase 0"},
		{label: "x", text: "eclipse: the pulsar is not heard"},
		{label: "bin", text: "a part of the orbit that an aim wants visited so often; 1/3 is one visit of the three wanted"},
		{label: "seen", text: "observed at least once since the date of the aim, or ever without one"},
		{label: "usable", text: "within elevation limits, horizon mask and Sun limit at that moment"},
		{label: "trust", text: "nothing is said of a prediction that is trustworthy and good to half a minute; trustworthy: three times the error of the prediction lies inside the window that is wanted; widened: one does; refused: none"},
	},
	seasonTitle: {
		{label: "season", text: "from now to the end of the last session that is listed"},
		{label: "played", text: "every session planned quickly, one after the other, and taken as observed: the best to be hoped for"},
		{label: "overdue", text: "of a session: cadences that are overdue when it starts; of a cadence: days with a debt above 1"},
		{label: "kept", text: "a cadence that is never overdue; late: overdue for a while; missed: overdue at the end"},
		{label: "up", text: "sessions in which it is within limits at some time and a receiver of the aim is mounted"},
		{label: "due", text: "visits that fall due in the season, with those owed now"},
		{label: "wanted", text: "hours that aims ask for at the zenith, put where time is granted while their source is up, as far as there is room"},
		{label: "granted", text: "hours of the sessions, without breaks"},
		{label: "ask", text: "what finds no room, spread over the sidereal time in which its source is up"},
		{label: "connect", text: "observe by this date, or the turns of the pulsar can no longer be counted"},
		{label: "best", text: "of the array: hours so divided that one more is worth the same on every pulsar, above a least; advice for asking for time, no plan follows it"},
	},
	logbookTitle: {
		{label: "done", text: "observed as planned; partial: in part, quality says how much; lost: nothing that counts"},
		{label: "quality", text: "the share of the wanted sensitivity that was reached, 0 to 1"},
		{label: "correct", text: "nothing is ever removed: a later line with the same start, source and receiver takes the place of the earlier one"},
		{label: "-", text: "not recorded yet"},
	},
}
