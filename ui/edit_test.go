package ui

import (
	"bytes"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"time"

	"github.com/charmbracelet/bubbles/key"
	"pgregory.net/rapid"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/sched"
)

func TestFirstPlanIsMadeAndNothingIsUnsaved(t *testing.T) {
	h := start(t, openCampaign(t))
	if len(h.plan().plan.Slots) == 0 {
		t.Fatal("no plan")
	}
	if v := h.world.desk.read().verdict; len(v.Breaches) > 0 {
		t.Fatalf("the first plan breaks limits: %v", v.Breaches)
	}
	h.keys("q")
	if !h.quit {
		t.Error("leaving an unchanged plan asks")
	}
}

func TestUndoToTheStart(t *testing.T) {
	h := start(t, openCampaign(t))
	first := h.plan()
	edits := []string{".", ",", "+", "-", "[", "]", "p", "x", "b", "<", ">"}
	for i := range 400 {
		h.keys(edits[i*7%len(edits)])
		if h.world.desk.held != nil {
			h.keys("!")
		}
		if i%3 == 0 {
			h.keys("down")
		}
		if len(h.plan().plan.Slots) == 0 {
			h.keys("u", "u")
		}
	}
	if n := len(h.world.desk.past); n < 200 {
		t.Fatalf("only %d steps to undo", n)
	}
	last := h.plan()
	n := len(h.world.desk.past)
	for range n {
		h.keys("u")
		if !strings.HasPrefix(h.world.say.text, "undone: ") {
			t.Fatalf("undo does not say what it undid: %q", h.world.say.text)
		}
	}
	if !h.plan().equal(first) {
		t.Error("undo to the start is not the start")
	}
	for range n {
		h.keys("U")
	}
	if !h.plan().equal(last) {
		t.Error("redo to the end is not the end")
	}
}

func TestAnEditThatBreaksALimitIsHeld(t *testing.T) {
	h := start(t, openCampaign(t))
	first := h.plan()
	for range 60 {
		h.keys(">")
		if h.world.desk.held != nil {
			break
		}
	}
	if h.world.desk.held == nil {
		t.Fatal("moving into the next slot breaks nothing")
	}
	held := h.world.desk.held.breaches
	if !strings.ContainsAny(strings.Join(held, ""), "0123456789") {
		t.Errorf("no number in %q", held)
	}
	h.shows("! keep")
	h.keys("q")
	if h.quit {
		t.Fatal("left with an edit in the air")
	}
	h.keys("enter", "esc") // Enter never keeps it: it shows the details
	if h.world.desk.held == nil {
		t.Fatal("Enter decided about a held edit")
	}
	h.keys("esc")
	if h.world.desk.held != nil || len(h.world.desk.read().verdict.Breaches) != 0 {
		t.Fatal("Esc does not take the edit back")
	}
	h.keys("u")
	for range 60 {
		h.keys(">")
		if h.world.desk.held != nil {
			break
		}
	}
	h.keys("!")
	if len(h.world.desk.read().verdict.Breaches) == 0 {
		t.Fatal("a kept edit is not marked")
	}
	flagged := slices.ContainsFunc(h.world.desk.read().rows, func(r campaigns.SlotRow) bool { return strings.Contains(slotFlags(&r), "!") })
	if !flagged {
		t.Error("no slot has the flag !")
	}
	for len(h.world.desk.past) > 0 {
		h.keys("u")
	}
	if !h.plan().equal(first) {
		t.Error("undo does not bring the first plan back")
	}
}

func TestEditsSurviveRePlanning(t *testing.T) {
	h := start(t, openCampaign(t))
	h.keys("-")
	edited := h.plan().plan.Slots[h.world.desk.chosen]
	if !edited.Pinned {
		t.Fatal("an edited slot is not pinned")
	}
	h.keys("R")
	if !slices.Contains(h.plan().plan.Slots, edited) {
		t.Errorf("re-planning moved %v: %v", edited, h.plan().plan.Slots)
	}
	h.keys("down", "b")
	bars := h.plan().bars
	if len(bars) != 1 {
		t.Fatalf("bars: %v", bars)
	}
	h.keys("R")
	for _, s := range h.plan().plan.Slots {
		if sourceOf(h.world.desk.prepared.Problem, s) == bars[0] {
			t.Errorf("%s is barred and planned", bars[0])
		}
	}
	if len(h.world.desk.read().verdict.Breaches) > 0 {
		t.Errorf("breaches after re-planning: %v", h.world.desk.read().verdict.Breaches)
	}
}

func TestInsertAndReplace(t *testing.T) {
	h := start(t, openCampaign(t))
	h.keys("x")
	n := len(h.plan().plan.Slots)
	h.keys("i")
	p, ok := h.over.(*picker)
	if !ok || len(p.all) == 0 {
		t.Fatal("no candidates after a drop")
	}
	want := p.all[p.seen[0]]
	h.keys("enter")
	if h.over != nil {
		t.Fatal("the picker stays")
	}
	got := h.world.desk.shown().plan
	if !slices.Contains(got.Slots, sched.Slot{Node: want.Node, Start: want.Start, End: want.End, Pinned: true}) {
		t.Errorf("%v was not inserted: %v", want, got.Slots)
	}
	if len(got.Slots) < n {
		t.Errorf("%d slots after inserting into %d", len(got.Slots), n)
	}
	h.keys("esc", "r")
	if p, ok := h.over.(*picker); ok && len(p.all) > 0 {
		old, _ := h.world.desk.slot()
		h.keys("enter")
		if slices.Contains(h.world.desk.shown().plan.Slots, old) {
			t.Error("the replaced slot is still there")
		}
	}
}

func TestPickerNarrows(t *testing.T) {
	h := start(t, openCampaign(t))
	h.keys("x", "i")
	p := h.over.(*picker)
	all := len(p.seen)
	h.keys("type:" + strings.ToLower(p.names[0][:6]))
	if len(p.seen) == 0 || len(p.seen) > all {
		t.Errorf("%d of %d after typing", len(p.seen), all)
	}
	h.keys("esc")
	if len(p.seen) != all {
		t.Error("Esc does not clear what was typed")
	}
	h.keys("esc")
	if h.over != nil {
		t.Error("Esc does not close")
	}
}

func TestSaveAndOpenAgain(t *testing.T) {
	f := openCampaign(t)
	h := start(t, f)
	h.keys("p", "w")
	h.shows("saved in")
	if len(h.world.unsaved()) != 0 {
		t.Fatal("still unsaved")
	}
	again := open(t, f)
	if !again.plan().equal(h.plan()) {
		t.Errorf("read back %v, saved %v", again.plan(), h.plan())
	}
	again.keys("q")
	if !again.quit {
		t.Error("a saved plan is not asked about")
	}
}

func TestQuitAsks(t *testing.T) {
	h := start(t, openCampaign(t))
	h.keys("p", "q")
	h.shows("not saved")
	for _, k := range []string{"q", "enter", "ctrl+c"} {
		h.keys(k)
		if h.quit {
			t.Fatalf("%s discards", k)
		}
	}
	h.keys("esc")
	if h.over != nil || h.quit {
		t.Fatal("Esc does not stay")
	}
	h.keys("q", "s")
	if !h.quit || len(h.world.unsaved()) != 0 {
		t.Fatal("save and quit does not")
	}
}

func TestDiscard(t *testing.T) {
	h := start(t, openCampaign(t))
	h.keys("p", "q", "d")
	if !h.quit {
		t.Fatal("discard does not quit")
	}
	if err := h.outcome(0, nil); err != nil {
		t.Fatal(err)
	}
	if d := findDrafts(h.campaignKey()); len(d) != 0 {
		t.Errorf("a draft of discarded work: %v", d)
	}
}

func TestSignalKeepsADraft(t *testing.T) {
	f := openCampaign(t)
	h := start(t, f)
	h.keys("-")
	work := h.plan()
	h.send(signalMsg{})
	if !h.quit {
		t.Fatal("a signal does not end the program")
	}
	err := h.outcome(15, nil)
	if e, ok := err.(*SignalError); !ok || e.ExitCode() != 143 || len(e.Drafts) != 1 {
		t.Fatalf("outcome: %v", err)
	}
	again := open(t, f)
	again.shows("Unsaved work from before")
	again.keys("enter")
	again.shows("Unsaved work from before")
	again.keys("r")
	if !again.plan().equal(work) {
		t.Errorf("restored %v, wanted %v", again.plan(), work)
	}
	again.keys("w")
	again.run(again.tick())
	if third := open(t, f); third.over != nil {
		t.Error("the draft is offered again after it was saved")
	}
}

func TestTheFileChangedMeanwhile(t *testing.T) {
	f := openCampaign(t)
	h := start(t, f)
	h.keys("p", "w")
	files, err := filepath.Glob(filepath.Join(f.Name(), "plans", "*"))
	if err != nil || len(files) != 1 {
		t.Fatal(files, err)
	}
	text, err := os.ReadFile(files[0])
	if err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(files[0], append(text, "# another hand\n"...), 0o644); err != nil {
		t.Fatal(err)
	}
	h.keys("p", "w")
	h.shows("The saved plan has changed")
	h.keys("esc")
	if len(h.world.unsaved()) != 1 {
		t.Fatal("not saved, and not told")
	}
	h.keys("w", "o")
	if len(h.world.unsaved()) != 0 {
		t.Fatalf("overwriting does not: %s", h.world.say.text)
	}
}

func TestExport(t *testing.T) {
	t.Chdir(t.TempDir())
	f := openCampaign(t)
	h := start(t, f)
	h.keys("e", "down", "enter", "enter")
	h.shows("wrote slots-2026-12-03-night.csv as csv")
	h.keys("e", "down", "enter", "enter")
	h.shows("is already there")
	h.keys("esc", "e", "enter", "ctrl+u", "type:sheet.txt", "enter")
	if _, err := os.Stat("sheet.txt"); err != nil {
		t.Error(err)
	}
}

func TestOtherSession(t *testing.T) {
	h := start(t, openCampaign(t))
	h.keys("p", "o", "down", "enter")
	if h.world.desk.session.Name != "2026-12-09 night" || h.world.desk.prepared == nil {
		t.Fatal("the other session is not on the desk")
	}
	h.keys("q")
	h.shows("2026-12-03 night") // which has unsaved work
	h.keys("esc", "o", "up", "enter")
	if pinned(h.world.desk.read()) != 1 {
		t.Error("the edit was lost on the way")
	}
}

func TestFindASlot(t *testing.T) {
	h := start(t, openCampaign(t))
	h.keys("/", "type:beacon", "enter")
	if s, ok := h.world.desk.slot(); !ok || sourceOf(h.world.desk.prepared.Problem, s) != "C Beacon" {
		t.Errorf("chosen: %v", s)
	}
	h.keys("/", "type:zzz")
	h.shows("nothing matches")
	h.keys("enter", "esc", "esc")
	if h.over != nil {
		t.Error("Esc does not close")
	}
}

func TestArrearsFilterAndSort(t *testing.T) {
	h := start(t, openCampaign(t))
	v := h.views[1].(*arrears)
	h.keys("2")
	all := len(v.rows(&h.world))
	h.keys("/", "type:j0018")
	if n := len(v.rows(&h.world)); n == 0 || n >= all {
		t.Errorf("%d of %d rows pass the filter", n, all)
	}
	h.keys("enter", "j", "esc")
	if n := len(v.rows(&h.world)); n != all {
		t.Errorf("Esc leaves %d of %d", n, all)
	}
	first := v.rows(&h.world)[0]
	h.keys("S")
	if v.rows(&h.world)[0] == first && all > 1 {
		t.Error("S does not turn the order round")
	}
	h.keys("enter")
	h.shows("debt")
}

func TestWhyNotTonightIsAnsweredForEverySource(t *testing.T) {
	h := start(t, openCampaign(t))
	w := &h.world
	for i := range w.desk.accounts {
		if said := whyNotTonight(w, &w.desk.accounts[i]); len(said) == 0 {
			t.Errorf("nothing about %s", w.desk.accounts[i].Source)
		}
	}
}

func TestKeysHelpAndActionsAgree(t *testing.T) {
	seen := map[string]string{}
	for i := range commands {
		c := &commands[i]
		for _, k := range c.Keys() {
			for _, view := range []string{slateTitle, arrearsTitle, orbitsTitle, seasonTitle, logbookTitle} {
				if !c.worksIn(view) {
					continue
				}
				if other, ok := seen[view+k]; ok {
					t.Errorf("%s in %s does %s and %s", k, view, other, c.verb)
				}
				seen[view+k] = string(c.verb)
				if got, ok := commandFor(k, view); !ok || got != c {
					t.Errorf("%s in %s is not %s", k, view, c.verb)
				}
			}
		}
		if c.name == "" || c.short == "" || !key.Matches(keyMsg(c.Keys()[0]), c.Binding) {
			t.Errorf("%s has no words or no key", c.verb)
		}
	}
	h := start(t, openCampaign(t))
	names := newPalette(h.model).names
	for _, view := range []string{slateTitle, arrearsTitle, orbitsTitle, seasonTitle, logbookTitle} {
		help := ""
		for _, l := range newHelp(view).lines {
			help += l.label + " " + l.text + "\n"
		}
		for i := range commands {
			c := &commands[i]
			if c.worksIn(view) && !strings.Contains(help, c.Help().Key+" "+c.name) {
				t.Errorf("the help of %s leaves out %s", view, c.verb)
			}
			if c.group != moving && c.verb != findAction && !slices.Contains(names, c.name) {
				t.Errorf("no action is found for %s", c.verb)
			}
		}
	}
	if len(Keys()) != len(commands) {
		t.Error("the table of keys is not whole")
	}
}

func TestArrowsAndLettersMoveAlike(t *testing.T) {
	a, b := start(t, openCampaign(t)), start(t, openCampaign(t))
	for _, view := range []string{"1", "2", "3", "4", "5"} {
		a.keys(view)
		b.keys(view)
		for _, pair := range [][2]string{{"down", "j"}, {"right", "l"}, {"end", "G"}, {"up", "k"}, {"left", "h"}, {"home", "g"}} {
			a.keys(pair[0])
			b.keys(pair[1])
			if a.screen() != b.screen() {
				t.Errorf("%s and %s differ in view %s", pair[0], pair[1], view)
			}
		}
	}
}

// Whatever is typed at whatever size, the frame is exact, the plan stays in order, and undo leads back.
func TestRandomKeys(t *testing.T) {
	t.Chdir(t.TempDir())
	f := openCampaign(t)
	var all []string
	for _, c := range commands {
		all = append(all, c.Keys()...)
	}
	all = append(all, "enter", "esc", "esc", "y", "d", "s", "a", "0", "1", "jj", "+9", "é", "日", "backspace", " ", ".", ".", ",", "+", "-", "x", "p", "u")
	once := start(t, f)
	var out bytes.Buffer
	once.cfg.Out = &out
	ready := preparedMsg{session: once.world.desk.session.Name, prepared: once.world.desk.prepared}
	ready.saved = ready.prepared.Saved(once.plan().plan, sched.Bound{}, "test")
	rapid.Check(t, func(rt *rapid.T) {
		h := &harness{model: newModel(once.cfg, once.st), t: t}
		h.rounds = 1
		h.size(80, 24)
		h.send(ready) // prepared and planned once for all: this is about keys
		first := h.plan()
		if rapid.Bool().Draw(rt, "under way") {
			now := h.world.desk.session.Start.Add(time.Duration(rapid.IntRange(0, 299).Draw(rt, "minute")) * time.Minute)
			h.cfg.Now = func() time.Time { return now }
			h.run(h.tick())
		}
		for _, k := range rapid.SliceOfN(rapid.SampledFrom(all), 20, 40).Draw(rt, "keys") {
			if rapid.IntRange(0, 9).Draw(rt, "resize") == 0 {
				h.size(rapid.IntRange(1, 220).Draw(rt, "w"), rapid.IntRange(1, 70).Draw(rt, "h"))
			}
			h.keys(k)
			h.exact()
			if h.quit {
				return
			}
			d := h.world.desk
			if d.prepared != nil && !slices.IsSortedFunc(d.state.plan.Slots, func(a, b sched.Slot) int { return a.Start - b.Start }) {
				rt.Fatalf("after %q the plan is out of order", k)
			}
		}
		h.keys("esc", "esc", "esc")
		d := h.world.desk
		if d.session.Name != "2026-12-03 night" {
			return
		}
		for len(d.past) > 0 {
			d.back()
		}
		if !d.state.equal(first) {
			rt.Fatalf("undo leads to %v, not %v", d.state, first)
		}
	})
}
