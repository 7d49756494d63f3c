package ui

import (
	"fmt"
	"strings"
	"testing"

	"github.com/charmbracelet/x/ansi"
	"github.com/muesli/termenv"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/sched"
)

func TestGoldenScreens(t *testing.T) {
	for _, size := range []struct{ w, h int }{{80, 24}, {120, 40}, {200, 60}, {60, 20}, {40, 10}} {
		h := drawn(t)
		h.size(size.w, size.h)
		h.keys("down")
		golden(t, fmt.Sprintf("slate-%dx%d", size.w, size.h), h.screen())
		h.keys("2", "down")
		golden(t, fmt.Sprintf("arrears-%dx%d", size.w, size.h), h.screen())
		h.keys("3")
		golden(t, fmt.Sprintf("orbits-%dx%d", size.w, size.h), h.screen())
		h.keys("4")
		golden(t, fmt.Sprintf("season-%dx%d", size.w, size.h), h.screen())
		h.send(seasonMsg{run: running(h), season: seasonByHand(h.world.campaign)})
		for _, page := range []string{"sessions", "cadences", "hours"} {
			golden(t, fmt.Sprintf("season-%s-%dx%d", page, size.w, size.h), h.screen())
			h.keys("right")
		}
		h.keys("left", "left", "left", "left")
		golden(t, fmt.Sprintf("season-array-%dx%d", size.w, size.h), h.screen())
		h.keys("down")
		golden(t, fmt.Sprintf("season-pulsar-%dx%d", size.w, size.h), h.screen())
		h.keys("5", "down")
		golden(t, fmt.Sprintf("logbook-%dx%d", size.w, size.h), h.screen())
	}
}

func TestGoldenDialogs(t *testing.T) {
	h := drawn(t)
	for _, d := range []struct {
		name string
		keys []string
	}{
		{"insert", []string{"down", "x", "i"}},
		{"help", []string{"esc", "?"}},
		{"actions", []string{"esc", ":", "type:pin"}},
		{"sessions", []string{"esc", "o"}},
		{"export", []string{"esc", "e"}},
		{"details", []string{"esc", "enter"}},
		{"held", []string{"esc", ">", ">", ">", ">"}},
	} {
		h.keys(d.keys...)
		golden(t, "dialog-"+d.name, h.screen())
	}
}

func TestEveryViewHasItsKey(t *testing.T) {
	h := start(t, openCampaign(t))
	if len(viewVerbs) != len(h.views) {
		t.Fatalf("%d keys for %d views", len(viewVerbs), len(h.views))
	}
	for i, v := range h.views {
		h.keys(commandOf[viewVerbs[i]].Keys()[0])
		if h.views[h.at] != v {
			t.Errorf("the key of %s leads to %s", v.title(), h.views[h.at].title())
		}
		if words[v.title()] == nil {
			t.Errorf("no words about %s in its help", v.title())
		}
	}
}

func TestEverySizeIsExact(t *testing.T) {
	h := start(t, openCampaign(t))
	long := start(t, openCampaign(t))
	long.keys("i")
	widths := []int{1, 2, 3, 9, 29, 30, 31, 40, 59, 60, 79, 80, 81, 109, 110, 149, 150, 200, 300}
	for _, w := range widths {
		for height := 1; height <= 100; height += 1 + height/9 {
			h.size(w, height)
			for range h.views {
				h.keys("tab")
				h.exact()
			}
			if w%3 == 0 {
				long.size(w, height)
				long.exact()
			}
		}
	}
}

func TestDialogsAreExactAtEverySize(t *testing.T) {
	h := start(t, openCampaign(t))
	for _, open := range [][]string{{"?"}, {":"}, {"o"}, {"e"}, {"e", "enter"}, {"enter"}, {"r"}, {"W"}, {"/"}, {"2", "/"}, {"3", "/"}, {"3", "enter"}, {"4", "enter"}, {"4", "P", "/", "type:J"}, {"5", "/"}, {"5", "d"}, {"5", "p", "tab", "type:x", "enter"}, {"5", "A"}, {"5", "enter"}} {
		h.size(80, 24)
		h.keys("esc", "esc", "1")
		h.keys(open...)
		for w := 1; w <= 160; w += 1 + w/5 {
			for height := 1; height <= 60; height += 1 + height/5 {
				h.size(w, height)
				h.exact()
			}
		}
	}
}

func TestTooSmallSaysSo(t *testing.T) {
	h := start(t, openCampaign(t))
	h.size(29, 5)
	h.shows("Please make the window")
	h.size(30, 6)
	h.shows("Slate")
}

func TestASCIIScreens(t *testing.T) {
	h := start(t, openCampaign(t), func(c *Config) { c.ASCII = true })
	for _, keys := range [][]string{{}, {"2"}, {"3"}, {"enter"}, {"esc", "4"}, {"P"}, {"right"}, {"right"}, {"enter"}, {"esc", "5"}, {"d"}, {"esc", "?"}, {"esc", "1", "i"}, {"esc", ".", ".", ".", ".", ".", ".", ".", ".", "."}} {
		h.keys(keys...)
		for _, r := range h.View() {
			if r > 126 {
				t.Fatalf("%q is not ASCII:\n%s", r, h.screen())
			}
		}
	}
}

// The signs of the screen take one cell wherever they are shown: none is of ambiguous width beyond the
// box lines.
func TestNoSignOfDoubtfulWidth(t *testing.T) {
	h := start(t, openCampaign(t))
	for _, keys := range [][]string{{}, {"enter"}, {"esc", "2"}, {"enter"}, {"esc", "3"}, {"enter"}, {"esc", "4", "P"}, {"right"}, {"esc", "5"}, {"enter"}, {"esc", "?"}, {"esc", "1", "i"}} {
		h.keys(keys...)
		for _, r := range h.screen() {
			box := r >= 0x2500 && r <= 0x257f
			if strings.ContainsRune("°·×µ…→–—±", r) || r > 126 && !box && !strings.ContainsRune(strings.Join(h.st.Glyphs.All(), ""), r) {
				t.Errorf("%q is on the screen:\n%s", r, h.screen())
			}
		}
	}
}

// Without colours every state is still told by a sign or a word.
func TestStatesWithoutColour(t *testing.T) {
	h := start(t, openCampaign(t))
	h.keys("p")
	h.shows("1 pinned")
	h.keys(">", ">", ">", "!")
	h.shows("limit broken")
	h.keys("down", "up")
	frame := h.View()
	for _, code := range []string{"[3", ";3", "[4", ";4", "[9", ";9"} {
		if strings.Contains(frame, code) {
			t.Errorf("a colour code %q without colours", code)
		}
	}
	if !strings.Contains(frame, "\x1b[1;7m") {
		t.Error("the chosen row is not marked by reverse video")
	}
}

func TestColourNeverChangesText(t *testing.T) {
	h := start(t, openCampaign(t))
	plain := h.screen()
	for _, p := range []termenv.Profile{termenv.TrueColor, termenv.ANSI256, termenv.ANSI} {
		h.st = styles(p, false)
		if got := ansi.Strip(h.View()); got != plain {
			t.Errorf("%s changes the text", p.Name())
		}
	}
}

func TestNothingChangesWhileNothingHappens(t *testing.T) {
	h := start(t, openCampaign(t))
	before := h.View()
	h.run(h.tick())
	if h.View() != before {
		t.Error("a tick without a new second changes the frame")
	}
}

func TestFaultKeepsTheWork(t *testing.T) {
	h := start(t, openCampaign(t))
	h.keys("p")
	h.send(panicMsg{"the test asked for it"})
	if !h.quit {
		t.Fatal("a fault in a command does not end the program")
	}
	err := h.outcome(0, nil)
	if err == nil || !strings.Contains(err.Error(), "the test asked for it") || !strings.Contains(err.Error(), "kept") {
		t.Errorf("outcome: %v", err)
	}
	again := open(t, h.cfg.Folder)
	again.shows("Unsaved work from before")
}

// brokenView fails in everything it does.
type brokenView struct{ slate }

func (brokenView) steer(verb, *world) action { panic("the view fails") }

func TestFaultInAKeyEndsTheProgram(t *testing.T) {
	h := start(t, openCampaign(t))
	h.views[0] = &brokenView{}
	h.keys("j")
	if !h.quit || h.fault != "the view fails" {
		t.Fatalf("quit %v, fault %q", h.quit, h.fault)
	}
}

// A key on a slow line: what has to be sent is the lines that changed.
func TestFewBytesForAKey(t *testing.T) {
	f, err := campaigns.OpenDemo()
	if err != nil {
		t.Fatal(err)
	}
	t.Setenv("XDG_STATE_HOME", t.TempDir())
	h := &harness{model: newModel(Config{Folder: f}, styles(termenv.ANSI256, false)), t: t}
	h.size(80, 24)
	session, err := f.Campaign.Session("next", evening)
	if err != nil {
		t.Fatal(err)
	}
	p, err := campaigns.Prepare(f.Campaign, f.Logbook, session, campaigns.PrepareOptions{At: evening})
	if err != nil {
		t.Fatal(err)
	}
	// The plan that is quickest to make will do.
	h.world.desk = &desk{session: session, prepared: p, accounts: p.Accounts, state: snapshot{plan: sched.Dispatch(p.Problem)}}
	h.world.season = seasonState{run: running(h)}
	h.send(seasonMsg{run: h.world.season.run, season: seasonByHand(f.Campaign)})
	for _, v := range viewVerbs {
		h.keys(commandOf[v].Keys()[0])
		was := strings.Split(h.View(), "\n")
		total, keys := 0, 0
		for range 24 {
			h.keys("down")
			is := strings.Split(h.View(), "\n")
			for i := range is {
				if is[i] != was[i] {
					total += len(is[i]) + 4
				}
			}
			was = is
			keys++
		}
		if mean := total / keys; mean > 2048 {
			t.Errorf("%s: %d bytes a key at 80 by 24, wanted 2048 at most", v, mean)
		} else {
			t.Logf("%s: %d bytes a key", v, mean)
		}
	}
}
