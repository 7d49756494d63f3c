package ui

import (
	"fmt"
	"slices"

	tea "github.com/charmbracelet/bubbletea"

	"example.org/tallystick/ui/theme"
)

// An action is what a key or a click comes to: a verb, and what it is about. Views and dialogs return
// actions; apply alone changes the world.
type action struct {
	verb verb
	n    int
	text string
	more any
}

// Verbs that no key of the table stands for: views and dialogs return them.
const (
	nothing       verb = ""
	chooseSlot    verb = "choose slot"
	chooseMinute  verb = "choose minute"
	closeDialog   verb = "close"
	takeRow       verb = "take row"
	openDialog    verb = "dialog"
	placeChosen   verb = "place"
	goToSession   verb = "go to session"
	exportTo      verb = "export to"
	exportOver    verb = "export over"
	campaignTo    verb = "campaign to"
	saveOver      verb = "save over"
	saveAndLeave  verb = "save and quit"
	loseAndLeave  verb = "discard and quit"
	restoreDraft  verb = "restore draft"
	deleteDraft   verb = "delete draft"
	doVerb        verb = "do"
	barThisSource verb = "bar this"
	goToSource    verb = "go to source" // n: the view, text: the source
	noteIs        verb = "note is"
	lostUntilIs   verb = "lost until is"
	writeEntries  verb = "write entries"
	sayThis       verb = "say"
)

func (m *model) tell(format string, args ...any) {
	m.world.say = saying{fmt.Sprintf(format, args...), theme.Plain}
}

func (m *model) warn(format string, args ...any) {
	m.world.say = saying{fmt.Sprintf(format, args...), theme.Overdue}
}

// apply does an action. What takes long comes back as a command.
func (m *model) apply(a action) tea.Cmd {
	if c, ok := commandOf[a.verb]; ok {
		if why := m.cannot(c.verb); why != "" {
			m.warn("%s", why)
			return nil
		}
	}
	if cmd, done := m.applyMove(a); done {
		return cmd
	}
	if cmd, done := m.applyEdit(a); done {
		return cmd
	}
	return m.applyRest(a)
}

// cannot says why something cannot be done now; "" if it can.
func (m *model) cannot(v verb) string {
	d := m.world.desk
	switch v {
	case pinSlot, replaceSlot, dropSlot, moveEarlier, moveLater, farEarlier, farLater, shorten, lengthen, startEarlier, startLater,
		splitSlot, swapAfter, swapBefore, otherRcvr, noteSlot, startNow:
		if _, ok := d.slot(); !ok {
			return "no slot is chosen: the plan is empty (i inserts one, R plans)"
		}
	case insertSlot, planAgain, planFromHere, savePlan, exportPlan, barSource, clearPlan, comparePlan, copyList:
		if d.prepared == nil {
			return "the session is not ready yet"
		}
	}
	switch v {
	case planAgain, planFromHere, savePlan, exportPlan, leave, otherSession, pinSlot, replaceSlot, insertSlot, barSource,
		splitSlot, swapAfter, swapBefore, otherRcvr, noteSlot, clearPlan, slotDone, slotLost, lostUntil, startNow:
		if d.held != nil {
			return "the last edit breaks a limit: keep it with ! or take it back with Esc first"
		}
	case keepHeld:
		if d.held == nil {
			return "no edit is waiting to be kept"
		}
	}
	switch v {
	case startNow, slotDone, slotLost, lostUntil, followNow:
		if _, ok := m.world.nowMinute(); !ok {
			return "the session is not under way"
		}
	}
	switch v {
	case planAgain, planFromHere:
		if m.world.work != nil {
			return "already planning: Esc stops it"
		}
	case undoEdit:
		if len(d.past) == 0 && d.held == nil {
			return "nothing to undo"
		}
	case redoEdit:
		if len(d.future) == 0 {
			return "nothing to redo"
		}
	case exportPlan:
		if m.cfg.Export == nil {
			return "nothing to export with here"
		}
	}
	return ""
}

// applyMove does what changes only what is looked at.
func (m *model) applyMove(a action) (tea.Cmd, bool) {
	w := &m.world
	switch a.verb {
	case chooseSlot:
		w.follow = false
		w.desk.choose(a.n)
	case chooseMinute:
		w.follow = false
		w.desk.goTo(a.n)
	case followNow:
		w.follow = true
		w.followClock()
		m.tell("following the clock")
	case seeElsewhere:
		m.elsewhere()
	case goToSource:
		m.goToSource(a.n, a.text)
	case comparePlan:
		m.over = newComparison(w.desk)
	case nextView:
		m.at = (m.at + 1) % len(m.views)
	case lastView:
		m.at = (m.at + len(m.views) - 1) % len(m.views)
	case showSlate, showArrears, showOrbits, showSeason, showLogbook:
		m.at = slices.Index(viewVerbs, a.verb)
	case otherTime:
		w.zone = (w.zone + 1) % zones
		m.tell("beside UTC: %s", [zones]string{"local sidereal time (LST)", "the site's local time", "Modified Julian Date"}[w.zone])
	case goToSession:
		return m.goToSession(a.text), true
	case moveUp, moveDown, moveLeft, moveRight, farLeft, farRight, pageUp, pageDown, moveFirst, moveLast, openChosen,
		filterRows, sortNext, sortTurn, recordDone, recordPartial, recordLost, recordAll:
		return m.then(m.views[m.at].steer(a.verb, w)), true
	default:
		return nil, false
	}
	return nil, true
}

// then does what a view answered, if anything.
func (m *model) then(a action) tea.Cmd {
	if a.verb == nothing {
		return nil
	}
	return m.apply(a)
}

// applyEdit does what changes the plan.
func (m *model) applyEdit(a action) (tea.Cmd, bool) {
	d := m.world.desk
	if by, ok := shifts[a.verb]; ok {
		m.editSlot(by)
		return m.stopStalePlanning(), true
	}
	switch a.verb {
	case dropSlot:
		m.drop()
	case pinSlot:
		m.pin()
	case barSource:
		return m.then(m.views[m.at].steer(barSource, &m.world)), true
	case barThisSource:
		m.bar(a.text)
	case placeChosen:
		m.place(a.more.(placing))
	case keepHeld:
		did := d.held.did
		d.commit(did+", although it breaks a limit", d.held.to)
		m.tell("kept: %s; it stays marked with ! in the plan and in exports", did)
	case undoEdit:
		if d.held != nil {
			m.tell("taken back: %s", d.letGo())
			break
		}
		was := d.read().verdict.Worth
		did, _ := d.back()
		m.tell("undone: %s; %s", did, worthChange(was, d.read().verdict.Worth))
	case redoEdit:
		if d.held != nil {
			d.letGo()
		}
		was := d.read().verdict.Worth
		did, _ := d.on()
		m.tell("done again: %s; %s", did, worthChange(was, d.read().verdict.Worth))
	case planAgain:
		return m.startPlanning(false, m.world.planFrom()), true
	case planFromHere:
		return m.startPlanning(false, max(m.world.planFrom(), d.minute)), true
	case splitSlot:
		m.split()
	case swapAfter:
		m.swap(d.chosen)
	case swapBefore:
		m.swap(d.chosen - 1)
	case otherRcvr:
		m.otherReceiver()
	case noteIs:
		m.over = nil
		m.note(a.text)
	case clearPlan:
		m.clear()
	case startNow:
		m.startsNow()
	case slotDone:
		return m.done(), true
	case slotLost:
		return m.lost(), true
	case lostUntilIs:
		return m.loseUntil(a.text), true
	default:
		return nil, false
	}
	return m.stopStalePlanning(), true
}

// applyRest does what concerns files, dialogs and the program itself.
func (m *model) applyRest(a action) tea.Cmd {
	w, d := &m.world, m.world.desk
	switch a.verb {
	case goBack:
		return m.goBack()
	case closeDialog:
		m.over = nil
	case takeRow:
		m.over = nil
		return m.apply(a.more.(action))
	case openDialog:
		m.over = a.more.(dialog)
	case doVerb:
		m.over = nil
		return m.apply(action{verb: verb(a.text)})
	case noteSlot:
		slot, _ := d.slot()
		m.over = newNotePrompt(m.chosenName(), slot.Note)
	case lostUntil:
		m.askLostUntil()
	case copyList:
		return m.copyCmd()
	case takeBackEntry:
		m.askToTakeBack()
	case sayThis:
		m.warn("%s", a.text)
	case writeEntries:
		m.over = nil
		return recordCmd(w.folder, a.more.(recording))
	case playSeason:
		return m.startSeason()
	case insertSlot:
		m.over = newPicker(w, -1)
	case replaceSlot:
		m.over = newPicker(w, d.chosen)
	case savePlan:
		return m.save(d, false)
	case saveOver:
		m.over = nil
		return m.save(d, true)
	case exportPlan:
		m.over = newExportForm(d, m.cfg.Formats...)
	case exportTo, exportOver:
		m.over = nil
		return m.export(a.text, a.more.(string), a.verb == exportOver)
	case saveCampaign:
		m.over = newPrompt("Save the whole campaign", "a new or empty folder", "", func(path string) action {
			return action{verb: campaignTo, text: path}
		})
	case campaignTo:
		m.over = nil
		return saveCampaignCmd(w.folder, a.text)
	case otherSession:
		m.over = newSessionList(w)
	case restoreDraft:
		m.over = nil
		m.restore(a.more.(draft))
	case deleteDraft:
		m.over = nil
		return deleteDraftCmd(a.more.(draft))
	case toggleMouse:
		w.mouse = !w.mouse
		keep := keepSettingsCmd(settings{MouseOff: !w.mouse})
		if !w.mouse {
			m.tell("%s", mouseWords(w.mouse, ""))
			return tea.Batch(tea.DisableMouse, keep)
		}
		m.tell("%s", mouseWords(w.mouse, ""))
		return tea.Batch(tea.EnableMouseCellMotion, keep)
	case findAction:
		m.over = newPalette(m)
	case showHelp:
		m.over = newHelp(m.views[m.at].title())
	case suspend:
		return tea.Suspend
	case leave:
		return m.leave()
	case saveAndLeave:
		m.over = nil
		return m.saveAndLeave()
	case loseAndLeave:
		m.discard = true
		return tea.Sequence(m.dropDraftsCmd(w.unsaved()), tea.Quit)
	}
	return nil
}

// goBack is Esc: it undoes the nearest thing that is open.
func (m *model) goBack() tea.Cmd {
	w := &m.world
	switch {
	case w.work != nil:
		first := w.work.first
		m.stopPlanning()
		m.tell("planning stopped; the plan is as it was")
		if first {
			m.tell("planning stopped: this is the best plan so far; R goes on")
		}
	case w.desk.held != nil:
		m.tell("taken back: %s", w.desk.letGo())
	case w.season.run != nil:
		m.stopSeason()
		m.tell("the season was stopped; P plays it from the start")
	default:
		return m.then(m.views[m.at].steer(goBack, w))
	}
	return nil
}

func (m *model) leave() tea.Cmd {
	if len(m.world.unsaved()) == 0 {
		return tea.Quit
	}
	m.over = newLeaveQuestion(m.world.unsaved())
	return nil
}
