package ui

import (
	"context"
	"errors"
	"fmt"
	"image"
	"slices"
	"strings"
	"time"

	tea "github.com/charmbracelet/bubbletea"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/sched"
	"example.org/tallystick/ui/cell"
	"example.org/tallystick/ui/theme"
)

// A view shows the world in its own way. It owns its cursor and scroll and nothing else.
type view interface {
	title() string
	// steer does what moves about in the view, and answers with what else should happen.
	steer(v verb, w *world) action
	// typed takes a key that is text to the view; false if it is not.
	typed(k tea.KeyMsg, w *world) bool
	// click takes a click (turn 0) or a turn of the wheel (up -1, down 1) in a body of this size.
	click(at, size image.Point, turn int, w *world) action
	// draw writes the view over the whole canvas.
	draw(w *world, c *cell.Canvas, g *theme.Glyphs)
	// hints are the verbs worth showing on the last line.
	hints(w *world) []verb
	// read is everything about the chosen row, in full.
	read(w *world) (title string, lines []line)
}

// A dialog lies over the view and takes every key until it is closed.
type dialog interface {
	key(k tea.KeyMsg, w *world) action
	draw(w *world, c *cell.Canvas, g *theme.Glyphs)
}

type model struct {
	cfg   Config
	st    theme.Styles
	w, h  int
	world world
	views []view
	at    int // the view shown
	over  dialog

	draftsDue   bool // drafts on disk are not level with the work
	draftsAt    time.Time
	machine     func() time.Time   // the machine's clock, which tells how old a draft is whatever the present moment is taken to be
	run         int64              // tells this run's drafts from another's
	drafted     map[string]int     // edition of what is drafted, by session
	drafts      map[string][]draft // on disk for what is on the desk, by session
	closing     int                // saves still to come before leaving
	discard     bool
	fault       string
	waiting     bool // the first session is being prepared
	pendingOpen []draft
}

func newModel(c Config, st theme.Styles) *model {
	m := &model{cfg: c, st: st, drafted: map[string]int{}, drafts: map[string][]draft{}, machine: time.Now}
	m.run = m.machine().UnixNano()
	m.world = world{folder: &files{Folder: c.Folder}, campaign: c.Folder.Campaign, desks: map[string]*desk{}, mouse: c.Mouse}
	m.world.now = m.clock()
	m.views = []view{&slate{}, &arrears{}}
	if len(c.Folder.Notices) > 0 {
		m.warn("%s", c.Folder.Notices[0])
	}
	name := c.Session
	if name == "" {
		name = "next"
	}
	s, err := m.world.campaign.Session(name, m.world.now)
	if err != nil {
		m.world.desk = &desk{session: &campaigns.Session{Name: name}, trouble: err.Error()}
		return m
	}
	m.world.desk = m.world.deskOf(s)
	m.waiting = true
	return m
}

func (w *world) deskOf(s *campaigns.Session) *desk {
	d, ok := w.desks[s.Name]
	if !ok {
		d = &desk{session: s}
		w.desks[s.Name] = d
	}
	return d
}

// clock is the present moment.
func (m *model) clock() time.Time {
	if m.cfg.Now != nil {
		return m.cfg.Now().UTC()
	}
	if t, fixed := m.cfg.Folder.Now(); fixed {
		return t.UTC()
	}
	return time.Now().UTC()
}

func (m *model) Init() tea.Cmd {
	cmds := []tea.Cmd{tickCmd(), findDraftsCmd(m.campaignKey())}
	if m.waiting {
		cmds = append(cmds, prepareCmd(m.world.folder, m.world.desk.session, m.world.now))
	}
	return tea.Batch(cmds...)
}

// Update routes what comes from outside. A fault anywhere below ends the program with the terminal
// restored and the work kept.
func (m *model) Update(msg tea.Msg) (next tea.Model, cmd tea.Cmd) {
	defer func() {
		if r := recover(); r != nil {
			m.fault = fmt.Sprint(r)
			next, cmd = m, tea.Quit
		}
	}()
	switch msg := msg.(type) {
	case tea.WindowSizeMsg:
		m.w, m.h = msg.Width, msg.Height
	case tea.KeyMsg:
		cmd = m.key(msg)
	case tea.MouseMsg:
		cmd = m.pointer(msg)
	case tickMsg:
		cmd = tea.Batch(m.tick(), tickCmd())
	case tea.ResumeMsg:
		m.world.now = m.clock()
	case signalMsg:
		cmd = tea.Quit
	case panicMsg:
		m.fault = msg.what
		cmd = tea.Quit
	default:
		cmd = m.receive(msg)
	}
	if m.fault != "" {
		cmd = tea.Quit
	}
	return m, cmd
}

// key sends a key to the dialog, to a text field of the view, to the table of keys.
func (m *model) key(k tea.KeyMsg) tea.Cmd {
	if m.over != nil {
		return m.then(m.over.key(k, &m.world))
	}
	if m.views[m.at].typed(k, &m.world) {
		return nil
	}
	name := k.String()
	if k.Paste {
		m.warn("pasted text does nothing here")
		return nil
	}
	c, ok := commandFor(name, m.views[m.at].title())
	if !ok {
		if k.Type == tea.KeyRunes {
			m.warn("%q does nothing in the %s view: ? shows its keys", name, strings.ToLower(m.views[m.at].title()))
		}
		return nil
	}
	if c.group == moving || c.group == editing {
		m.world.say = saying{} // it has been read; help and the like leave it alone
	}
	if c.verb == openChosen {
		m.openReader()
		return nil
	}
	return m.apply(action{verb: c.verb})
}

func (m *model) openReader() {
	title, lines := m.views[m.at].read(&m.world)
	if len(lines) == 0 {
		m.warn("nothing is chosen")
		return
	}
	m.over = &reader{title: title, lines: lines}
}

func (m *model) pointer(e tea.MouseMsg) tea.Cmd {
	f := frameOf(m.w, m.h)
	if m.over != nil || f.tooSmall || e.Action != tea.MouseActionPress {
		return nil
	}
	turn := 0
	switch e.Button {
	case tea.MouseButtonWheelUp:
		turn = -1
	case tea.MouseButtonWheelDown:
		turn = 1
	case tea.MouseButtonLeft:
	default:
		return nil
	}
	at := image.Pt(e.X, e.Y)
	if at.In(f.title) && turn == 0 {
		return m.then(m.titleClick(e.X))
	}
	if !at.In(f.body) {
		return nil
	}
	return m.then(m.views[m.at].click(at.Sub(f.body.Min), f.body.Size(), turn, &m.world))
}

// draftPause is the least time between drafts: what a sudden end can lose.
const draftPause = 5 * time.Second

func (m *model) tick() tea.Cmd {
	m.world.now = m.clock()
	if m.draftsDue || m.machine().Sub(m.draftsAt) < draftPause {
		return nil
	}
	return m.levelDrafts()
}

// levelDrafts brings the drafts on disk level with the work, so that even a sudden end loses little.
func (m *model) levelDrafts() tea.Cmd {
	var keep, gone []draft
	for name, d := range m.world.desks {
		was, drafted := m.drafted[name]
		switch {
		case d.unsaved() && (!drafted || was != d.edition):
			dr := m.draftOf(d)
			if !drafted {
				m.drafts[name] = append(m.drafts[name], draft{Key: dr.Key, Session: name, Run: m.run})
			}
			keep = append(keep, dr)
			m.drafted[name] = d.edition
		case !d.unsaved() && len(m.drafts[name]) > 0:
			gone = append(gone, m.drafts[name]...)
			delete(m.drafted, name)
			delete(m.drafts, name)
		}
	}
	if len(keep)+len(gone) == 0 {
		return nil
	}
	m.draftsDue = true
	return keepDraftsCmd(keep, gone)
}

// receive takes the answers of commands.
func (m *model) receive(msg tea.Msg) tea.Cmd {
	switch msg := msg.(type) {
	case preparedMsg:
		return m.receivePrepared(msg)
	case progressMsg:
		if m.world.work == msg.work {
			m.receiveProgress(msg)
		}
		return listenCmd(msg.work)
	case plannedMsg:
		m.receivePlanned(msg)
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
	if msg.err != nil {
		m.warn("the saved plan could not be read: %v", msg.err)
	}
	if msg.saved == nil {
		return m.startPlanning(true)
	}
	d.state = m.bindSaved(d, msg.saved)
	d.saved, d.onDisk = d.state, true
	d.changed()
	d.choose(0)
	m.offerDraft()
	return nil
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
	bars := slices.Clone(s.Bars)
	slices.Sort(bars)
	if s.Ceiling > 0 {
		pins := slices.DeleteFunc(slices.Clone(plan.Slots), func(s sched.Slot) bool { return !s.Pinned })
		d.planned = &bound{sched.Result{Ceiling: sched.Micro(s.Ceiling * float64(sched.Unit)), HasCeiling: len(lost) == 0}, bars, pins}
	}
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

// startPlanning plans around the pins. The first plan of a session is no edit: it can be had again at
// any time, so leaving without saving it loses nothing.
func (m *model) startPlanning(first bool) tea.Cmd {
	d := m.world.desk
	m.stopPlanning()
	ctx, cancel := context.WithCancel(context.Background())
	work := &planning{desk: d, edition: d.edition, first: first, cancel: cancel, reports: make(chan sched.Result, 4)}
	m.world.work = work
	p := d.preparedWith(d.state.bars).Problem
	from := 0
	if m, ok := m.world.nowMinute(); ok {
		from = m + 1
	}
	return tea.Batch(planCmd(ctx, work, p, d.state, from, first), listenCmd(work))
}

func (m *model) stopPlanning() {
	if m.world.work != nil {
		m.world.work.cancel()
		m.world.work = nil
	}
}

// stopStalePlanning ends a planning run whose plan has been edited in the meantime.
func (m *model) stopStalePlanning() tea.Cmd {
	if w := m.world.work; w != nil && w.edition != w.desk.edition {
		m.stopPlanning()
		m.world.say.text += "; planning stopped"
	}
	return nil
}

// receiveProgress says how far planning has come. A session without a plan shows the first one there
// is; what is found after that waits until planning has ended, so that the screen stays calm.
func (m *model) receiveProgress(msg progressMsg) {
	msg.work.reached = msg.result
	d := msg.work.desk
	if !msg.work.first || len(d.state.plan.Slots) > 0 || d.edition != msg.work.edition || len(msg.result.Plan.Slots) == 0 {
		return
	}
	d.state.plan = msg.result.Plan.Clone()
	d.saved = d.state
	d.changed()
	d.choose(0)
	msg.work.edition = d.edition
}

func (m *model) receivePlanned(msg plannedMsg) {
	w := &m.world
	if w.work != msg.work {
		return // stopped, or overtaken
	}
	w.work.cancel()
	w.work = nil
	d := msg.work.desk
	if d.edition != msg.work.edition {
		return
	}
	if msg.err != nil {
		m.warn("no plan: %v", msg.err)
		return
	}
	to := snapshot{msg.result.Plan, msg.bars}
	d.planned = &bound{msg.result, msg.bars, msg.pins}
	if msg.first {
		d.state, d.saved = to, to
		d.changed()
		d.choose(d.chosen)
		if w.say.text == "" {
			m.tell("planned %s; ? shows the keys", count(len(to.plan.Slots), "slot"))
		}
		m.offerDraft()
		return
	}
	was := d.read().verdict.Worth
	if d.state.equal(to) {
		m.tell("planned again: the plan stays as it is, nothing better was found")
		return
	}
	d.commit("re-planned", to)
	d.choose(d.chosen)
	m.tell("planned again: %s", worthChange(was, d.read().verdict.Worth))
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
	if d := w.desk; d.planned == nil && !d.onDisk && len(d.past) == 0 {
		return m.startPlanning(true)
	}
	m.offerDraft()
	return nil
}

func (d *desk) provenFor(s snapshot) sched.Result {
	if d.planned.holds(d.prepared.Problem, s.plan) {
		return d.planned.result
	}
	return sched.Result{}
}

func (m *model) save(d *desk, over bool) tea.Cmd {
	m.closing = 0
	return m.saveOne(d, over, false)
}

func (m *model) saveOne(d *desk, over, leave bool) tea.Cmd {
	s := d.state
	plan := d.preparedWith(s.bars).Saved(s.plan, d.provenFor(s), m.cfg.Version)
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
	return exportCmd(&m.cfg, format, path, d.preparedWith(d.state.bars), d.state.plan.Clone(), over)
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
