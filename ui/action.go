package ui

import (
	"fmt"
	"slices"

	tea "github.com/charmbracelet/bubbletea"

	"example.org/tallystick/sched"
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
	case pinSlot, replaceSlot, dropSlot, moveEarlier, moveLater, farEarlier, farLater, shorten, lengthen, startEarlier, startLater:
		if _, ok := d.slot(); !ok {
			return "no slot is chosen: the plan is empty (i inserts one, R plans)"
		}
	case insertSlot, planAgain, savePlan, exportPlan, barSource:
		if d.prepared == nil {
			return "the session is not ready yet"
		}
	}
	switch v {
	case planAgain, savePlan, exportPlan, leave, otherSession, pinSlot, replaceSlot, insertSlot, barSource:
		if d.held != nil {
			return "the last edit breaks a limit: keep it with ! or take it back with Esc first"
		}
	case keepHeld:
		if d.held == nil {
			return "no edit is waiting to be kept"
		}
	}
	switch v {
	case planAgain:
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
		w.desk.choose(a.n)
	case chooseMinute:
		w.desk.goTo(a.n)
	case nextView:
		m.at = (m.at + 1) % len(m.views)
	case lastView:
		m.at = (m.at + len(m.views) - 1) % len(m.views)
	case showSlate:
		m.at = 0
	case showArrears:
		m.at = 1
	case otherTime:
		w.zone = (w.zone + 1) % zones
		m.tell("beside UTC: %s", [zones]string{"local sidereal time (LST)", "the site's local time", "Modified Julian Date"}[w.zone])
	case goToSession:
		return m.goToSession(a.text), true
	case moveUp, moveDown, moveLeft, moveRight, farLeft, farRight, pageUp, pageDown, moveFirst, moveLast, openChosen,
		filterRows, sortNext, sortTurn:
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
		return m.startPlanning(false), true
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
	case openDialog:
		m.over = a.more.(dialog)
	case doVerb:
		m.over = nil
		return m.apply(action{verb: verb(a.text)})
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
		if !w.mouse {
			m.tell("mouse off: the terminal marks text as usual")
			return tea.DisableMouse
		}
		m.tell("mouse on: the wheel moves, a click chooses")
		return tea.EnableMouseCellMotion
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

// chosenName names the chosen slot.
func (m *model) chosenName() string {
	d := m.world.desk
	if d.prepared == nil {
		return ""
	}
	return d.read().slotName(d.chosen)
}

// propose makes an edit part of the plan if it breaks nothing that was not broken before, and shows
// it as held if it does.
func (m *model) propose(did string, to snapshot, chosen int) {
	d := m.world.desk
	before := d.settled()
	d.hold(did, to, nil)
	d.chosen = min(max(chosen, 0), max(len(to.plan.Slots)-1, 0))
	after := d.read()
	breaches := newBreaches(before, after)
	if s, ok := d.slot(); ok && chosen >= 0 {
		d.goTo(s.Start)
	}
	change := worthChange(before.verdict.Worth, after.verdict.Worth)
	if len(breaches) > 0 {
		d.held.breaches = breaches
		m.tell("%s; %s", did, change)
		return
	}
	d.commit(did, to)
	d.view = after
	m.tell("%s; %s", did, change)
}

// settled is the reading of the plan without what is held.
func (d *desk) settled() *reading {
	if d.held == nil {
		return d.read()
	}
	held := d.held
	d.held, d.view = nil, nil
	r := d.read()
	d.held, d.view = held, nil
	return r
}

// A shift is how an edit of times changes the chosen slot.
type shift struct {
	by   int // minutes
	edit func(p *sched.Problem, plan sched.Plan, i, byMin int) (sched.Plan, int)
}

var shifts = map[verb]shift{
	moveEarlier: {-1, sched.MoveSlot}, moveLater: {1, sched.MoveSlot},
	farEarlier: {-10, sched.MoveSlot}, farLater: {10, sched.MoveSlot},
	shorten: {-1, sched.Lengthen}, lengthen: {1, sched.Lengthen},
	startEarlier: {-1, sched.StretchStart}, startLater: {1, sched.StretchStart},
}

// editSlot changes the chosen slot's times and pins it, so that re-planning keeps what the observer
// did.
func (m *model) editSlot(by shift) {
	d := m.world.desk
	s := d.shown()
	was, _ := d.slot()
	plan, i := by.edit(d.read().problem, s.plan, d.chosen, by.by)
	is := &plan.Slots[i]
	if is.Start == was.Start && is.End == was.End {
		m.warn("it cannot go further: a slot has at least one minute and stays within the session")
		return
	}
	did := fmt.Sprintf("%s now %s to %s", m.chosenName(), clock(d.prepared.Instant(is.Start)), clock(d.prepared.Instant(is.End)))
	if !is.Pinned {
		is.Pinned = true
		did += ", pinned"
	}
	m.propose(did, snapshot{plan, s.bars}, i)
}

func (m *model) drop() {
	d := m.world.desk
	s := d.shown()
	plan := s.plan.Clone()
	did := "dropped " + m.chosenName()
	plan.Slots = slices.Delete(plan.Slots, d.chosen, d.chosen+1)
	m.propose(did, snapshot{plan, s.bars}, d.chosen)
}

func (m *model) pin() {
	d := m.world.desk
	s := d.shown()
	plan := s.plan.Clone()
	slot := &plan.Slots[d.chosen]
	slot.Pinned = !slot.Pinned
	did := "unpinned "
	if slot.Pinned {
		did = "pinned "
	}
	m.propose(did+m.chosenName(), snapshot{plan, s.bars}, d.chosen)
}

// bar excludes a source from the session, with every slot it has, or lets it in again.
func (m *model) bar(source string) {
	d := m.world.desk
	s := d.shown()
	if i, barred := slices.BinarySearch(s.bars, source); barred {
		m.propose("lifted the bar on "+source, snapshot{s.plan, slices.Delete(slices.Clone(s.bars), i, i+1)}, d.chosen)
		return
	}
	p := d.prepared.Problem
	plan := s.plan.Clone()
	plan.Slots = slices.DeleteFunc(plan.Slots, func(slot sched.Slot) bool { return sourceOf(p, slot) == source })
	did := "barred " + source
	if n := len(s.plan.Slots) - len(plan.Slots); n > 0 {
		did += fmt.Sprintf(" and dropped its %s", count(n, "slot"))
	}
	bars := append(slices.Clone(s.bars), source)
	slices.Sort(bars)
	m.propose(did, snapshot{plan, bars}, d.chosen)
}

// A placing is a candidate that the observer has picked, and the slot it replaces (or -1).
type placing struct {
	candidate sched.Candidate
	replaces  int
	displaces []int // slots that it was said to displace, as indices into the plan
}

func (m *model) place(pl placing) {
	m.over = nil
	d := m.world.desk
	s := d.shown()
	p := d.prepared.Problem
	slot := sched.Slot{Node: pl.candidate.Node, Start: pl.candidate.Start, End: pl.candidate.End, Pinned: true}
	did := "inserted " + jobName(p, pl.candidate.Job)
	if pl.replaces >= 0 {
		did = fmt.Sprintf("replaced %s by %s", m.chosenName(), jobName(p, pl.candidate.Job))
	}
	if n := len(pl.displaces); n > 0 {
		did += fmt.Sprintf(", dropping %s", m.slotNames(pl.displaces))
	}
	var plan sched.Plan
	for i, old := range s.plan.Slots {
		if i != pl.replaces && !slices.Contains(pl.displaces, i) {
			plan.Slots = append(plan.Slots, old)
		}
	}
	plan.Slots = append(plan.Slots, slot)
	plan = plan.Sorted()
	m.propose(did, snapshot{plan, s.bars}, slices.Index(plan.Slots, slot))
}

func (m *model) slotNames(slots []int) string {
	r := m.world.desk.read()
	text := ""
	for k, i := range slots {
		if k > 0 {
			text += ", "
		}
		text += r.slotName(i)
	}
	return text
}
