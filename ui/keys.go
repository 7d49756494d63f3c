package ui

import (
	"strings"

	"github.com/charmbracelet/bubbles/key"
)

// A verb is one thing that can be done from the keyboard.
type verb string

// Moving about. They mean the same in every view.
const (
	moveUp     verb = "up"
	moveDown   verb = "down"
	moveLeft   verb = "left"
	moveRight  verb = "right"
	farLeft    verb = "far left"
	farRight   verb = "far right"
	pageUp     verb = "page up"
	pageDown   verb = "page down"
	moveFirst  verb = "first"
	moveLast   verb = "last"
	openChosen verb = "open"
	goBack     verb = "back"
	filterRows verb = "filter"
)

// The plan.
const (
	pinSlot      verb = "pin"
	barSource    verb = "bar"
	moveEarlier  verb = "earlier"
	moveLater    verb = "later"
	farEarlier   verb = "far earlier"
	farLater     verb = "far later"
	shorten      verb = "shorten"
	lengthen     verb = "lengthen"
	startEarlier verb = "start earlier"
	startLater   verb = "start later"
	insertSlot   verb = "insert"
	replaceSlot  verb = "replace"
	dropSlot     verb = "drop"
	planAgain    verb = "re-plan"
	undoEdit     verb = "undo"
	redoEdit     verb = "redo"
	keepHeld     verb = "keep"
	splitSlot    verb = "split"
	swapAfter    verb = "swap with the next"
	swapBefore   verb = "swap with the one before"
	otherRcvr    verb = "receiver"
	noteSlot     verb = "note"
	clearPlan    verb = "clear"
	planFromHere verb = "re-plan from the cursor"
	comparePlan  verb = "compare"
)

// The session under way.
const (
	startNow  verb = "start now"
	slotDone  verb = "done"
	slotLost  verb = "lost"
	lostUntil verb = "lost until"
	followNow verb = "follow"
)

// The rest.
const (
	savePlan     verb = "save"
	exportPlan   verb = "export"
	saveCampaign verb = "save campaign"
	otherSession verb = "session"
	sortNext     verb = "sort"
	sortTurn     verb = "turn round"
	nextView     verb = "next view"
	lastView     verb = "last view"
	showSlate    verb = "slate"
	showArrears  verb = "arrears"
	showOrbits   verb = "orbits"
	showSeason   verb = "season"
	showLogbook  verb = "logbook"
	otherTime    verb = "time"
	toggleMouse  verb = "mouse"
	findAction   verb = "actions"
	showHelp     verb = "help"
	suspend      verb = "suspend"
	leave        verb = "quit"
	copyList     verb = "copy"
	seeElsewhere verb = "see elsewhere"
)

// The logbook and the season.
const (
	recordDone    verb = "record done"
	recordPartial verb = "record partial"
	recordLost    verb = "record lost"
	recordAll     verb = "record all"
	takeBackEntry verb = "take back"
	playSeason    verb = "play"
)

// A command is a verb with the keys that do it and the words it is known by. Key handling, the bottom
// line, the help, the search for actions and the table in the documentation all read these.
type command struct {
	key.Binding
	verb  verb
	group string
	short string // one or two words for the bottom line
	name  string // what it does, as a person would look for it
	view  string // the only view in which it works; "" for everywhere
}

func bind(v verb, group, view, short, name string, keys ...string) command {
	return command{
		Binding: key.NewBinding(key.WithKeys(keys...), key.WithHelp(keyNames(keys), name)),
		verb:    v, group: group, short: short, name: name, view: view,
	}
}

// The names of the views, as the user reads them.
const (
	slateTitle   = "Slate"
	arrearsTitle = "Arrears"
	orbitsTitle  = "Orbits"
	seasonTitle  = "Season"
	logbookTitle = "Logbook"
)

const (
	moving  = "Moving about"
	editing = "The plan"
	onSky   = "Session under way"
	logging = "The logbook"
	keeping = "Keeping and leaving"
	looking = "Looking"
)

var commands = []command{
	bind(moveUp, moving, "", "up", "one row up", "up", "k"),
	bind(moveDown, moving, "", "down", "one row down", "down", "j"),
	bind(moveLeft, moving, "", "left", "left: 5 minutes back in the slate, the column or page before in another view", "left", "h"),
	bind(moveRight, moving, "", "right", "right: 5 minutes on in the slate, the next column or page in another view", "right", "l"),
	bind(farLeft, moving, slateTitle, "hour back", "an hour back", "shift+left", "H"),
	bind(farRight, moving, slateTitle, "hour on", "an hour on", "shift+right", "L"),
	bind(pageUp, moving, "", "page up", "one page up", "pgup"),
	bind(pageDown, moving, "", "page down", "one page down", "pgdown"),
	bind(moveFirst, moving, "", "first", "first row", "home", "g"),
	bind(moveLast, moving, "", "last", "last row", "end", "G"),
	bind(openChosen, moving, "", "details", "everything about the chosen row", "enter"),
	bind(goBack, moving, "", "back", "back one step: close, stop planning, take back an edit", "esc"),
	bind(filterRows, moving, "", "filter", "show only rows that hold what is typed", "/"),

	bind(insertSlot, editing, slateTitle, "insert", "insert a slot: what could be observed at the cursor minute, and what it would cost", "i"),
	bind(replaceSlot, editing, slateTitle, "replace", "put another source in place of the chosen slot", "r"),
	bind(dropSlot, editing, slateTitle, "drop", "drop the chosen slot (planning again may choose it again; b keeps the source out)", "x", "delete"),
	bind(moveEarlier, editing, slateTitle, "earlier", "move the chosen slot 1 minute earlier", ","),
	bind(moveLater, editing, slateTitle, "later", "move the chosen slot 1 minute later", "."),
	bind(farEarlier, editing, slateTitle, "10 earlier", "move the chosen slot 10 minutes earlier", "<"),
	bind(farLater, editing, slateTitle, "10 later", "move the chosen slot 10 minutes later", ">"),
	bind(shorten, editing, slateTitle, "shorten", "end the chosen slot 1 minute earlier", "-"),
	bind(lengthen, editing, slateTitle, "lengthen", "end the chosen slot 1 minute later", "+", "="),
	bind(startEarlier, editing, slateTitle, "start earlier", "start the chosen slot 1 minute earlier, same end", "["),
	bind(startLater, editing, slateTitle, "start later", "start the chosen slot 1 minute later, same end", "]"),
	bind(pinSlot, editing, slateTitle, "pin", "pin or unpin the chosen slot: re-planning leaves pinned slots alone", "p"),
	bind(barSource, editing, "", "bar", "bar the chosen source from this session, or lift the bar", "b"),
	bind(splitSlot, editing, slateTitle, "split", "split the chosen slot at the cursor minute, or in the middle", "|"),
	bind(swapAfter, editing, slateTitle, "swap next", "swap the chosen slot with the one after it", "J"),
	bind(swapBefore, editing, slateTitle, "swap before", "swap the chosen slot with the one before it", "K"),
	bind(otherRcvr, editing, slateTitle, "receiver", "change the receiver of the chosen slot", "c"),
	bind(noteSlot, editing, slateTitle, "note", "write a note on the chosen slot", "n"),
	bind(clearPlan, editing, slateTitle, "clear", "drop every slot that is neither pinned nor begun", "X"),
	bind(planAgain, editing, "", "re-plan", "plan again around the pinned slots, from now on if the session is under way", "R"),
	bind(planFromHere, editing, slateTitle, "re-plan here", "plan again from the cursor minute on", "C"),
	bind(comparePlan, editing, slateTitle, "compare", "compare the plan with the last planned version", "D"),
	bind(undoEdit, editing, "", "undo", "undo the last edit", "u"),
	bind(redoEdit, editing, "", "redo", "redo what was undone", "U", "ctrl+r"),
	bind(keepHeld, editing, "", "keep", "keep an edit although it breaks a limit", "!"),

	bind(startNow, onSky, slateTitle, "start now", "the chosen slot starts now: a late one keeps its end, an early one its length", "a"),
	bind(slotDone, onSky, slateTitle, "done", "record the slot in progress as done, into the logbook", "d"),
	bind(slotLost, onSky, slateTitle, "lost", "record the slot in progress as lost, into the logbook", "f"),
	bind(lostUntil, onSky, slateTitle, "lost until", "time is lost until ...: record what is lost and plan the rest again", "F"),
	bind(followNow, onSky, slateTitle, "follow", "go to the present moment and follow the clock", "N"),

	bind(recordDone, logging, logbookTitle, "done", "record the chosen slot as done, or correct the chosen entry so", "d"),
	bind(recordPartial, logging, logbookTitle, "partial", "record the chosen slot as partial, or correct the chosen entry so", "p"),
	bind(recordLost, logging, logbookTitle, "lost", "record the chosen slot as lost, or correct the chosen entry so", "f"),
	bind(recordAll, logging, logbookTitle, "all done", "record every slot that is not recorded yet as done", "A"),
	bind(takeBackEntry, logging, logbookTitle, "take back", "take back the last entry of this run by a correcting line", "z"),

	bind(savePlan, keeping, "", "save", "save the plan", "w", "ctrl+s"),
	bind(exportPlan, keeping, "", "export", "export the slot list to a file", "e"),
	bind(saveCampaign, keeping, "", "save campaign", "save the whole campaign into a new folder", "W"),
	bind(otherSession, keeping, "", "session", "go to another session", "o"),
	bind(suspend, keeping, "", "stop", "stop the program for a while (fg in the shell brings it back)", "ctrl+z"),
	bind(leave, keeping, "", "quit", "quit; asks if something is not saved", "q", "ctrl+c"),

	bind(nextView, looking, "", "next view", "next view", "tab"),
	bind(lastView, looking, "", "view before", "view before", "shift+tab"),
	bind(showSlate, looking, "", "slate", "slate: the session and its plan", "1"),
	bind(showArrears, looking, "", "arrears", "arrears: what every source is owed", "2"),
	bind(showOrbits, looking, "", "orbits", "orbits: what has been seen of each binary, and what comes", "3"),
	bind(showSeason, looking, "", "season", "season: the coming sessions, hours wanted and granted", "4"),
	bind(showLogbook, looking, "", "logbook", "logbook: record this session's slots, see past entries", "5"),
	bind(playSeason, looking, seasonTitle, "play", "play the coming sessions forward", "P"),
	bind(sortNext, looking, arrearsTitle, "sort", "sort by the next column", "s"),
	bind(sortTurn, looking, arrearsTitle, "turn", "turn the order of the rows round", "S"),
	bind(seeElsewhere, looking, "", "see in", "see the chosen source in another view", "v"),
	bind(copyList, looking, "", "copy", "copy the slot list to the clipboard of the terminal", "y"),
	bind(otherTime, looking, "", "LST/local", "second time: LST, local time or MJD", "t"),
	bind(toggleMouse, looking, "", "mouse", "mouse off, so that text can be marked, or on", "m"),
	bind(findAction, looking, "", "actions", "find an action by its name", ":", "ctrl+p"),
	bind(showHelp, looking, "", "help", "keys and words of this view", "?"),
}

var commandOf = func() map[verb]*command {
	m := map[verb]*command{}
	for i := range commands {
		m[commands[i].verb] = &commands[i]
	}
	return m
}()

// commandFor finds what a key does in a view.
func commandFor(pressed, view string) (*command, bool) {
	for i := range commands {
		c := &commands[i]
		if c.view != "" && c.view != view {
			continue
		}
		for _, k := range c.Keys() {
			if k == pressed {
				return c, true
			}
		}
	}
	return nil, false
}

// worksIn reports whether a command can be meant in a view.
func (c *command) worksIn(view string) bool { return c.view == "" || c.view == view }

// keyNames writes keys as they are printed on a keyboard.
func keyNames(keys []string) string {
	names := make([]string, len(keys))
	for i, k := range keys {
		names[i] = keyName(k)
	}
	return strings.Join(names, " ")
}

func keyName(k string) string {
	switch k {
	case "up", "down", "left", "right", "home", "end", "tab", "enter", "esc", "delete":
		return strings.ToUpper(k[:1]) + k[1:]
	case "pgup":
		return "PgUp"
	case "pgdown":
		return "PgDn"
	}
	if rest, ok := strings.CutPrefix(k, "ctrl+"); ok {
		return "Ctrl-" + strings.ToUpper(rest)
	}
	if rest, ok := strings.CutPrefix(k, "shift+"); ok {
		return "Shift-" + keyName(rest)
	}
	return k
}

// A KeyHelp is one line of the table of keys.
type KeyHelp struct{ Group, Keys, Does, View string }

// Keys returns every key with what it does, for the documentation. View is "" where it works in all.
func Keys() []KeyHelp {
	var all []KeyHelp
	for _, c := range commands {
		all = append(all, KeyHelp{Group: c.group, Keys: c.Help().Key, Does: c.name, View: c.view})
	}
	return all
}
