package ui

import (
	"bytes"
	"errors"
	"os"
	"slices"
	"strings"
	"testing"
	"time"

	tea "github.com/charmbracelet/bubbletea"
)

// With the session under way, planning again leaves alone what has begun, and puts nothing into the
// time that is past.
func TestPlanningAgainUnderWay(t *testing.T) {
	f := openCampaign(t)
	h := start(t, f)
	h.keys("p", "p", "w")
	now := evening
	late := open(t, f, func(c *Config) { c.Now = func() time.Time { return now } })
	before := late.plan()
	second := before.plan.Slots[1]
	now = late.world.desk.prepared.Instant(second.Start + 2)
	late.run(late.tick())
	late.shows("now")
	if late.world.desk.read().verdict.Breaches != nil {
		t.Fatal("slots that have begun are told as faults")
	}
	late.keys("R")
	after := late.plan()
	for _, s := range before.plan.Slots[:2] {
		if !slices.Contains(after.plan.Slots, s) {
			t.Errorf("%v had begun and is gone or changed: %v", s, after.plan.Slots)
		}
	}
	minute, _ := late.world.nowMinute()
	for _, s := range after.plan.Slots {
		if s.Start < minute && !slices.Contains(before.plan.Slots, s) {
			t.Errorf("%v is new and lies before minute %d", s, minute)
		}
	}
}

func TestEscStopsPlanning(t *testing.T) {
	h := start(t, openCampaign(t))
	before := h.plan()
	cmd := h.apply(action{verb: planAgain})
	h.shows("planning")
	h.keys("esc")
	h.shows("planning stopped")
	h.run(cmd) // the answer comes too late
	if !h.plan().equal(before) {
		t.Error("a stopped planning run changed the plan")
	}
}

func TestAnEditOvertakesPlanning(t *testing.T) {
	h := start(t, openCampaign(t))
	cmd := h.apply(action{verb: planAgain})
	h.keys("p")
	h.shows("planning stopped")
	edited := h.plan()
	h.run(cmd)
	if !h.plan().equal(edited) {
		t.Error("an answer to an older plan wiped out an edit")
	}
}

func TestMouse(t *testing.T) {
	h := start(t, openCampaign(t))
	f := frameOf(h.w, h.model.h)
	parts := slateLayout(f.body.Dx(), f.body.Dy(), false)
	click := func(x, y int, button tea.MouseButton) {
		h.send(tea.MouseMsg{X: x, Y: y, Button: button, Action: tea.MouseActionPress})
	}
	click(5, f.body.Min.Y+parts.table.Min.Y+1+2, tea.MouseButtonLeft)
	if h.world.desk.chosen != 2 {
		t.Errorf("a click on the third row chooses %d", h.world.desk.chosen)
	}
	click(5, f.body.Min.Y+parts.table.Min.Y+1, tea.MouseButtonWheelUp)
	if h.world.desk.chosen != 1 {
		t.Errorf("the wheel chooses %d", h.world.desk.chosen)
	}
	a := axisOf(h.world.desk, f.body.Dx())
	click(a.column(h.plan().plan.Slots[3].Start), f.body.Min.Y+parts.bars.Min.Y, tea.MouseButtonLeft)
	if h.world.desk.chosen != 3 {
		t.Errorf("a click on the fourth bar chooses %d", h.world.desk.chosen)
	}
	click(h.tabs()[1].Min.X+1, 0, tea.MouseButtonLeft)
	h.shows("accounts at")
	click(5, f.body.Min.Y+1+2, tea.MouseButtonLeft)
	if at := h.views[1].(*arrears).list.at; at != 1 {
		t.Errorf("a click on the second account chooses %d", at)
	}
	h.keys("m")
	h.shows("mouse on")
	h.keys("m")
	h.shows("mouse off")
}

func TestNoTerminal(t *testing.T) {
	for _, kind := range []string{"dumb", ""} {
		if err := needTerminal(os.Stdin, os.Stdout, kind); !errors.Is(err, ErrNoTerminal) {
			t.Errorf("TERM=%q: %v", kind, err)
		}
	}
	if err := needTerminal(&bytes.Buffer{}, &bytes.Buffer{}, "xterm"); !errors.Is(err, ErrNoTerminal) {
		t.Errorf("buffers: %v", err)
	}
}

func TestLocale(t *testing.T) {
	for _, c := range []struct {
		env  map[string]string
		want bool
	}{
		{map[string]string{}, false},
		{map[string]string{"LANG": "en_GB.UTF-8"}, true},
		{map[string]string{"LANG": "en_GB.UTF-8", "LC_ALL": "C"}, false},
		{map[string]string{"LC_CTYPE": "C.utf8", "LANG": "C"}, true},
	} {
		if got := localeIsUTF8(func(k string) string { return c.env[k] }); got != c.want {
			t.Errorf("%v: %v", c.env, got)
		}
	}
}

// An earlier run's draft that was left for later is not written over by this run's.
func TestDraftsOfTwoRuns(t *testing.T) {
	f := openCampaign(t)
	one := start(t, f)
	one.keys("p")
	if said := one.outcome(1, nil); said == nil {
		t.Fatal("no draft")
	}
	two := open(t, f)
	two.shows("Unsaved work from before")
	two.keys("esc", "down", "p")
	if said := two.outcome(1, nil); said == nil {
		t.Fatal("no draft")
	}
	if n := len(findDrafts(two.campaignKey())); n != 2 {
		t.Errorf("%d drafts, wanted both", n)
	}
}

func TestSayings(t *testing.T) {
	h := start(t, openCampaign(t))
	for _, c := range []struct{ key, says string }{
		{"u", "nothing to undo"},
		{"U", "nothing to redo"},
		{"!", "no edit is waiting"},
		{"p", "pinned "},
		{"u", "undone: pinned "},
		{"U", "done again: pinned "},
		{"t", "local time"},
		{"Z", "does nothing"},
		{"b", "barred "},
	} {
		h.keys(c.key)
		if !strings.Contains(h.world.say.text, c.says) {
			t.Errorf("%s says %q, wanted %q", c.key, h.world.say.text, c.says)
		}
	}
}

func TestNoSuchSession(t *testing.T) {
	h := start(t, openCampaign(t), func(c *Config) { c.Session = "2026-12-04 night" })
	h.shows("2026-12-0")
	for i := range commands {
		for _, k := range commands[i].Keys() {
			h.keys(k)
			h.exact()
			h.keys("esc", "1")
		}
	}
	if h.quit = false; len(h.world.unsaved()) > 0 {
		t.Error("work without a session")
	}
	h.keys("o", "home", "enter")
	if h.world.desk.prepared == nil {
		t.Error("no way to a session that there is")
	}
}
