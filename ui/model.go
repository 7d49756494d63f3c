package ui

import (
	"fmt"
	"image"
	"strings"
	"time"

	tea "github.com/charmbracelet/bubbletea"

	"example.org/tallystick/campaigns"
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
	rounds      int  // of planning at most; 0: as many as pay
	pendingOpen []draft
}

// newViews are the views in the order of their numbers; viewVerbs go to them. A view that joins is added
// to both, with a key in the table of keys.
func newViews() []view { return []view{&slate{}, &arrears{}, &orbits{}, &season{}, &logbook{}} }

var viewVerbs = []verb{showSlate, showArrears, showOrbits, showSeason, showLogbook}

func newModel(c Config, st theme.Styles) *model {
	m := &model{cfg: c, st: st, drafted: map[string]int{}, drafts: map[string][]draft{}, machine: time.Now}
	m.run = m.machine().UnixNano()
	m.world = world{folder: &files{Folder: c.Folder}, campaign: c.Folder.Campaign, desks: map[string]*desk{}, mouse: c.Mouse, book: c.Folder.Logbook}
	m.world.now = m.clock()
	m.views = newViews()
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
		cmd = m.keys(msg)
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
		return m, tea.Quit
	}
	return m, withAlso(cmd, m.fetch())
}

// keys takes apart what was typed so fast that it came as one: over a slow line that is several keys.
func (m *model) keys(k tea.KeyMsg) tea.Cmd {
	if k.Type != tea.KeyRunes || k.Paste || len(k.Runes) < 2 {
		return m.key(k)
	}
	var cmds []tea.Cmd
	for _, r := range k.Runes {
		cmds = append(cmds, m.key(tea.KeyMsg{Type: tea.KeyRunes, Runes: []rune{r}, Alt: k.Alt}))
	}
	return tea.Sequence(cmds...)
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
	if c.group == moving || c.group == editing || c.group == onSky || c.group == logging {
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
	if m.world.follow && m.over == nil && m.world.desk.held == nil {
		m.world.followClock()
	}
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
