package ui

import (
	"bytes"
	"context"
	"flag"
	"io"
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"sync"
	"testing"
	"time"

	"github.com/adrg/xdg"
	tea "github.com/charmbracelet/bubbletea"
	"github.com/charmbracelet/lipgloss"
	"github.com/charmbracelet/x/ansi"
	"github.com/muesli/termenv"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/sched"
	"example.org/tallystick/ui/theme"
)

var update = flag.Bool("update", false, "write the golden screens anew")

// campaignFiles are read before any test changes the folder it works in.
var campaignFiles = func() map[string][]byte {
	files := map[string][]byte{}
	for _, name := range []string{"campaign.toml", "logbook.csv"} {
		text, err := os.ReadFile(filepath.Join("testdata", "campaign", name))
		if err != nil {
			panic(err)
		}
		files[name] = text
	}
	return files
}()

var evening = time.Date(2026, 12, 3, 15, 0, 0, 0, time.UTC)

// A harness drives a model without a terminal: commands run at once, in order.
type harness struct {
	*model
	t    testing.TB
	quit bool
}

func styles(p termenv.Profile, ascii bool) theme.Styles {
	r := lipgloss.NewRenderer(io.Discard)
	r.SetColorProfile(p)
	r.SetHasDarkBackground(true)
	return theme.New(r, ascii)
}

// openCampaign opens a copy of the test campaign, which a test may write into.
func openCampaign(t testing.TB) *campaigns.Folder {
	t.Helper()
	dir := t.TempDir()
	for name, text := range campaignFiles {
		if err := os.WriteFile(filepath.Join(dir, name), text, 0o644); err != nil {
			t.Fatal(err)
		}
	}
	f, err := campaigns.Open(dir)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

func start(t testing.TB, f *campaigns.Folder, change ...func(*Config)) *harness {
	t.Helper()
	t.Setenv("XDG_STATE_HOME", t.TempDir())
	t.Setenv("XDG_CONFIG_HOME", t.TempDir())
	xdg.Reload()
	return open(t, f, change...)
}

// open opens the interface with the state folder as it is.
func open(t testing.TB, f *campaigns.Folder, change ...func(*Config)) *harness {
	t.Helper()
	c := Config{
		Folder: f, Now: func() time.Time { return evening }, Version: "test", Out: io.Discard,
		Export: func(format, path string, p *campaigns.Prepared, plan sched.Plan, _ sched.Bound) (string, error) {
			return "wrote " + path + " as " + format, os.WriteFile(path, []byte(format), 0o644)
		},
	}
	for _, f := range change {
		f(&c)
	}
	h := &harness{model: newModel(c, styles(termenv.Ascii, c.ASCII)), t: t}
	h.size(80, 24)
	if h.waiting {
		h.ready()
	}
	h.run(findDraftsCmd(h.campaignKey()))
	return h
}

// A firstPlan is a session prepared and planned, which is much of the time that a test takes.
type firstPlan struct {
	prepared *campaigns.Prepared
	result   sched.Result
}

// firstPlanOf is the test campaign's at the evening, made once for all tests; what is prepared is only
// read from then on.
var firstPlanOf = sync.OnceValue(func() firstPlan {
	dir, err := os.MkdirTemp("", "campaign")
	if err != nil {
		panic(err)
	}
	defer os.RemoveAll(dir)
	for name, text := range campaignFiles {
		if err := os.WriteFile(filepath.Join(dir, name), text, 0o644); err != nil {
			panic(err)
		}
	}
	f, err := campaigns.Open(dir)
	if err != nil {
		panic(err)
	}
	s, err := f.Campaign.Session("next", evening)
	if err != nil {
		panic(err)
	}
	p, err := campaigns.Prepare(f.Campaign, f.Logbook, s, campaigns.PrepareOptions{At: evening})
	if err != nil {
		panic(err)
	}
	r, err := sched.Solve(context.Background(), p.Problem, sched.Options{})
	if err != nil {
		panic(err)
	}
	return firstPlan{p, r}
})

// ready prepares and plans the session, from what was made before if it is the same.
func (h *harness) ready() {
	s := h.world.desk.session
	_, err := os.Stat(filepath.Join(h.world.folder.Name(), "plans"))
	if h.world.folder.Demo() || h.world.campaign.Name != "Six for the screen" || err == nil || !h.world.now.Equal(evening) || len(h.world.folder.Logbook.Entries) != bytes.Count(campaignFiles["logbook.csv"], []byte("\n"))-1 || s != &h.world.campaign.Sessions[0] {
		h.run(prepareCmd(h.world.folder, s, h.world.now))
		return
	}
	made := firstPlanOf()
	p := *made.prepared
	p.Campaign, p.Session = h.world.campaign, s
	_, _ = h.Update(preparedMsg{session: s.Name, prepared: &p})
	proved, _ := sched.BoundOf(made.prepared.Problem, made.result)
	h.send(plannedMsg{work: h.world.work, result: made.result, first: true, proved: proved})
	h.run(reviewCmd(h.world.folder, s))
}

func (h *harness) size(w, height int) { h.send(tea.WindowSizeMsg{Width: w, Height: height}) }

func (h *harness) send(msg tea.Msg) {
	_, cmd := h.Update(msg)
	h.run(cmd)
}

func (h *harness) run(cmd tea.Cmd) {
	if cmd == nil {
		return
	}
	msg := cmd()
	switch msg := msg.(type) {
	case nil, tickMsg, tea.SuspendMsg:
		return
	case tea.QuitMsg:
		h.quit = true
		return
	case tea.BatchMsg:
		for _, c := range msg {
			h.run(c)
		}
		return
	}
	if v := reflect.ValueOf(msg); v.Kind() == reflect.Slice { // a sequence, whose type is not exported
		for i := range v.Len() {
			if c, ok := v.Index(i).Interface().(tea.Cmd); ok {
				h.run(c)
			}
		}
		return
	}
	h.send(msg)
}

// keys presses keys by their names; text in quotes is typed.
func (h *harness) keys(names ...string) {
	for _, n := range names {
		if s, ok := strings.CutPrefix(n, "type:"); ok {
			for _, r := range s {
				h.send(tea.KeyMsg{Type: tea.KeyRunes, Runes: []rune{r}})
			}
			continue
		}
		h.send(keyMsg(n))
	}
}

var special = map[string]tea.KeyType{
	"up": tea.KeyUp, "down": tea.KeyDown, "left": tea.KeyLeft, "right": tea.KeyRight, "pgup": tea.KeyPgUp,
	"pgdown": tea.KeyPgDown, "home": tea.KeyHome, "end": tea.KeyEnd, "enter": tea.KeyEnter, "esc": tea.KeyEsc,
	"tab": tea.KeyTab, "shift+tab": tea.KeyShiftTab, "delete": tea.KeyDelete, "backspace": tea.KeyBackspace,
	"shift+left": tea.KeyShiftLeft, "shift+right": tea.KeyShiftRight, "ctrl+c": tea.KeyCtrlC, "ctrl+p": tea.KeyCtrlP,
	"ctrl+r": tea.KeyCtrlR, "ctrl+s": tea.KeyCtrlS, "ctrl+z": tea.KeyCtrlZ, "ctrl+u": tea.KeyCtrlU,
}

func keyMsg(name string) tea.KeyMsg {
	if k, ok := special[name]; ok {
		return tea.KeyMsg{Type: k}
	}
	return tea.KeyMsg{Type: tea.KeyRunes, Runes: []rune(name)}
}

// screen is the frame as plain text.
func (h *harness) screen() string { return ansi.Strip(h.View()) }

func (h *harness) shows(text string) {
	h.t.Helper()
	if !strings.Contains(h.screen(), text) {
		h.t.Fatalf("the screen does not show %q:\n%s", text, h.screen())
	}
}

func (h *harness) plan() snapshot { return h.world.desk.state }

// exact fails unless the frame has exactly the size of the terminal.
func (h *harness) exact() {
	h.t.Helper()
	lines := strings.Split(h.View(), "\n")
	if len(lines) != h.model.h {
		h.t.Fatalf("%d lines on a screen of %d by %d", len(lines), h.w, h.model.h)
	}
	for i, l := range lines {
		if n := ansi.StringWidth(l); n != h.w {
			h.t.Fatalf("line %d takes %d cells on a screen of %d by %d: %q", i+1, n, h.w, h.model.h, l)
		}
	}
	if h.fault != "" {
		h.t.Fatalf("a fault: %s", h.fault)
	}
}

func golden(t *testing.T, name, got string) {
	t.Helper()
	path := filepath.Join("testdata", "screens", name+".txt")
	if *update {
		if err := os.MkdirAll(filepath.Dir(path), 0o755); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(path, []byte(got+"\n"), 0o644); err != nil {
			t.Fatal(err)
		}
		return
	}
	want, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if got+"\n" != string(want) {
		t.Errorf("%s differs (go test ./ui -update writes it anew):\n%s\nwanted:\n%s", path, got, want)
	}
}

// drawn opens the interface on a plan that is written here, so that the screens of the tests change when
// the interface does, not when the planner gets better.
func drawn(t testing.TB) *harness {
	t.Helper()
	once := start(t, openCampaign(t))
	saved := &campaigns.SavedPlan{Session: "2026-12-03 night", Campaign: "Six for the screen", MadeAt: evening, GridMin: 1, Worth: 24.66, Ceiling: 25}
	for _, s := range []struct {
		source, receiver, start, end string
		turn                         int
		pinned                       bool
	}{
		{"J0018+5210", "S", "18:02", "18:30", 0, false},
		{"J2216+3344", "L", "18:38", "19:38", -1, false},
		{"J0018+5210", "L", "19:42", "20:30", -1, true},
		{"C Beacon", "L", "20:53", "20:58", 0, false},
		{"J0231+1905", "L", "21:04", "22:24", 0, false},
		{"J0512-0241", "L", "22:29", "23:00", 0, false},
	} {
		at := func(clock string) time.Time {
			when, err := time.Parse("2006-01-02 15:04", "2026-12-03 "+clock)
			if err != nil {
				t.Fatal(err)
			}
			return when
		}
		saved.Slots = append(saved.Slots, campaigns.SavedSlot{Source: s.source, Receiver: s.receiver,
			Start: at(s.start), End: at(s.end), Turn: s.turn, Pinned: s.pinned})
	}
	h := &harness{model: newModel(once.cfg, once.st), t: t}
	h.size(80, 24)
	h.send(preparedMsg{session: saved.Session, prepared: once.world.desk.prepared, saved: saved})
	return h
}
