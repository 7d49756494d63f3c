package ui

import (
	"errors"
	"fmt"
	"slices"

	tea "github.com/charmbracelet/bubbletea"

	"example.org/tallystick/campaigns"
)

// receive takes the answers of commands.
func (m *model) receive(msg tea.Msg) tea.Cmd {
	switch msg := msg.(type) {
	case preparedMsg:
		return m.receivePrepared(msg)
	case reviewedMsg:
		d, ok := m.world.desks[msg.session]
		switch {
		case !ok:
		case msg.err != nil:
			m.warn("the coming windows are not known: %v", msg.err)
		default:
			d.accounts, d.reviewed, d.year = msg.accounts, true, msg.year
		}
	case progressMsg:
		if m.world.work == msg.work {
			m.receiveProgress(msg)
		}
		return withAlso(listenCmd(msg.work), m.review(msg.work.desk))
	case plannedMsg:
		m.receivePlanned(msg)
		return m.review(msg.work.desk)
	case recordedMsg:
		return m.receiveRecorded(msg)
	case refreshedMsg:
		return m.receiveRefreshed(msg)
	case orbitsMsg:
		m.receiveOrbits(msg)
	case seasonProgressMsg:
		return m.receiveSeasonProgress(msg)
	case seasonMsg:
		m.receiveSeason(msg)
	case copiedMsg:
		m.receiveCopied(msg)
	case settingsKeptMsg:
		if msg.err != nil {
			m.warn("the setting holds for now only: %v", msg.err)
		} else {
			m.tell("%s", mouseWords(!msg.settings.MouseOff, ", and remembered"))
		}
	case savedMsg:
		return m.receiveSaved(msg)
	case exportedMsg:
		m.receiveExported(msg)
	case campaignSavedMsg:
		if msg.err != nil {
			m.warn("the campaign was not saved: %v", msg.err)
			break
		}
		m.tell("the campaign is in %s: open it with tallystick %s", msg.dir, msg.dir)
	case draftsMsg:
		m.pendingOpen = msg.drafts
		m.offerDraft()
	case draftKeptMsg:
		m.draftsDue, m.draftsAt = false, m.machine()
		if msg.err != nil {
			m.warn("no draft could be kept: %v", msg.err)
		}
	}
	return nil
}

func (m *model) receivePrepared(msg preparedMsg) tea.Cmd {
	d, ok := m.world.desks[msg.session]
	if !ok || d.prepared != nil {
		return nil
	}
	m.waiting = false
	if msg.prepared == nil {
		d.trouble = msg.err.Error()
		return nil
	}
	d.prepared, d.trouble = msg.prepared, ""
	d.accounts = msg.prepared.Accounts
	if msg.err != nil {
		m.warn("the saved plan could not be read: %v", msg.err)
	}
	if msg.saved == nil {
		return m.startPlanning(true, m.world.planFrom()) // the review waits until there is a plan to look at
	}
	d.state = m.bindSaved(d, msg.saved)
	d.saved, d.onDisk = d.state, true
	d.base, d.baseIs = d.state, "the plan as it was saved"
	d.changed()
	d.choose(0)
	m.takeUpClock(d)
	if m.world.say.text == "" {
		text := "the saved plan of " + msg.saved.MadeAt.UTC().Format("2006-01-02 15:04 UTC")
		if msg.saved.HasProof() && len(d.proofs) == 0 {
			text += "; " + campaigns.ProofLost
		}
		m.tell("%s", text)
	}
	m.offerDraft()
	return m.review(d)
}

// review lets the accounts of a desk be worked out, with when each source can next be observed, unless that was begun
// already.
func (m *model) review(d *desk) tea.Cmd {
	if d.reviewing {
		return nil
	}
	d.reviewing = true
	return reviewCmd(m.world.folder, d.session)
}

// bindSaved finds a saved plan in the prepared session, and tells what it lost.
func (m *model) bindSaved(d *desk, s *campaigns.SavedPlan) snapshot {
	plan, lost := d.prepared.Bind(s)
	if len(lost) > 0 {
		more := ""
		if len(lost) > 1 {
			more = fmt.Sprintf(" (and %d more)", len(lost)-1)
		}
		m.warn("left out of the saved plan: %s%s", lost[0], more)
	}
	if b, ok := d.prepared.Proved(s, plan); ok {
		d.prove(b)
	}
	bars := slices.Clone(s.Bars)
	slices.Sort(bars)
	return snapshot{plan, bars}
}

// offerDraft asks about work left behind, once its session is ready.
func (m *model) offerDraft() {
	d := m.world.desk
	if d.prepared == nil || m.over != nil || m.world.work != nil {
		return
	}
	for i, dr := range m.pendingOpen {
		if dr.Session == d.session.Name {
			m.pendingOpen = slices.Delete(m.pendingOpen, i, i+1)
			m.over = newDraftQuestion(dr, d, m.machine())
			return
		}
	}
}

func (m *model) restore(dr draft) {
	d := m.world.desk
	s := m.bindSaved(d, dr.Plan)
	d.commit("restored the draft", s)
	m.drafts[dr.Session] = append(m.drafts[dr.Session], dr) // it goes when this work is saved
	d.choose(0)
	m.tell("draft restored: u goes back to the plan without it")
}

func (m *model) goToSession(name string) tea.Cmd {
	m.over = nil
	w := &m.world
	s, err := w.campaign.Session(name, w.now)
	if err != nil {
		m.warn("%v", err)
		return nil
	}
	m.stopPlanning()
	w.desk = w.deskOf(s)
	if w.desk.prepared == nil {
		return prepareCmd(w.folder, s, w.now)
	}
	if d := w.desk; !d.planned && !d.onDisk && len(d.past) == 0 {
		return m.startPlanning(true, w.planFrom())
	}
	m.offerDraft()
	return nil
}

func (m *model) save(d *desk, over bool) tea.Cmd {
	m.closing = 0
	return m.saveOne(d, over, false)
}

func (m *model) saveOne(d *desk, over, leave bool) tea.Cmd {
	s := d.state
	plan := d.preparedWith(s.bars).Saved(s.plan, m.world.provenFor(d, s), m.cfg.Version)
	if d.held == nil {
		plan.Accepted = d.read().accepted()
	}
	return saveCmd(m.world.folder, d, s, plan, over, leave)
}

// saveAndLeave saves every session that has something to save, then quits if all went well.
func (m *model) saveAndLeave() tea.Cmd {
	var cmds []tea.Cmd
	for _, d := range m.world.unsaved() {
		cmds = append(cmds, m.saveOne(d, false, true))
	}
	m.closing = len(cmds)
	return tea.Sequence(cmds...)
}

func (m *model) receiveSaved(msg savedMsg) tea.Cmd {
	switch {
	case errors.Is(msg.err, campaigns.ErrChanged):
		m.closing = 0
		m.over = newQuestion("The saved plan has changed",
			"Somebody else has saved a plan of "+msg.desk.session.Name+" since this one was read.",
			answer{"o", "overwrite theirs with this one", action{verb: saveOver}})
		return nil
	case msg.err != nil:
		m.closing = 0
		m.warn("not saved: %v", msg.err)
		return nil
	}
	msg.desk.saved, msg.desk.onDisk = msg.saved, true
	m.tell("%s", msg.note)
	level := m.levelDrafts()
	if msg.leave && m.closing > 0 {
		if m.closing--; m.closing == 0 {
			return tea.Sequence(level, tea.Quit)
		}
	}
	return level
}

func (m *model) export(path, format string, over bool) tea.Cmd {
	d := m.world.desk
	return exportCmd(&m.cfg, format, path, d.preparedWith(d.state.bars), d.state.plan.Clone(), m.world.provenFor(d, d.state), over)
}

func (m *model) receiveExported(msg exportedMsg) {
	switch {
	case msg.exists:
		m.over = newQuestion("The file exists", msg.path+" is already there.",
			answer{"o", "overwrite it", action{verb: exportOver, text: msg.path, more: msg.format}})
	case msg.err != nil:
		m.warn("not exported: %v", msg.err)
	case msg.note == "":
		m.tell("wrote %s", msg.path)
	default:
		m.tell("%s", msg.note)
	}
}

// takeUpClock lets the cursor follow the clock if the session of a desk is under way.
func (m *model) takeUpClock(d *desk) {
	if d != m.world.desk {
		return
	}
	if _, ok := m.world.nowMinute(); ok {
		m.world.follow = true
		m.world.followClock()
	}
}

// accepted tells in words the limits that a plan breaks and the observer has kept.
func (r *reading) accepted() []string {
	var all []string
	for _, b := range r.verdict.Breaches {
		all = append(all, r.breachWords(b))
	}
	return all
}
