package ui

import (
	"bytes"
	"encoding/base64"
	"fmt"
	"strings"
	"testing"
	"time"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/sched"
)

// slots writes a plan as start-end source receiver, to be compared.
func (h *harness) slots() []string {
	d := h.world.desk
	var all []string
	for i, s := range d.shown().plan.Slots {
		pin := ""
		if s.Pinned {
			pin = " P"
		}
		all = append(all, fmt.Sprintf("%s-%s %s%s", clock(d.prepared.Instant(s.Start)), clock(d.prepared.Instant(s.End)), d.read().slotName(i), pin))
	}
	return all
}

func TestSplit(t *testing.T) {
	h := drawn(t)
	first := h.plan()
	h.keys("down", "right", "right", "|")
	h.shows("at most 1 in a session")
	h.keys("!")
	got := h.slots()[1:3]
	if want := []string{"18:38-18:48 J2216+3344 L P", "18:50-19:38 J2216+3344 L P"}; fmt.Sprint(got) != fmt.Sprint(want) {
		t.Errorf("split at the cursor: %v", got)
	}
	h.keys("u")
	if !h.plan().equal(first) {
		t.Error("undo does not join what was split")
	}
	h.keys("|") // the cursor stands at the start: the middle
	if got := h.slots()[1]; got != "18:38-19:07 J2216+3344 L P" {
		t.Errorf("split in the middle: %s", got)
	}
}

// Swapped slots have room for every move, and the slots around them stay.
func TestSwap(t *testing.T) {
	h := drawn(t)
	first := h.plan()
	h.keys("end", "K")
	if h.world.desk.held != nil {
		t.Fatalf("the swap breaks %v", h.world.desk.held.breaches)
	}
	got := h.slots()
	if !strings.Contains(got[4], "J0512-0241 L P") || !strings.Contains(got[5], "J0231+1905 L P") {
		t.Errorf("swapped: %v", got)
	}
	for i := range 4 {
		if h.plan().plan.Slots[i] != first.plan.Slots[i] {
			t.Errorf("slot %d has changed", i+1)
		}
	}
	if v := h.world.desk.read().verdict.Breaches; len(v) > 0 {
		t.Errorf("breaches: %v", v)
	}
	h.keys("u")
	if !h.plan().equal(first) {
		t.Error("undo does not swap back")
	}
	h.keys("end", "J")
	h.shows("no slot to swap with")
}

func TestClearKeepsThePins(t *testing.T) {
	h := drawn(t)
	h.keys("X")
	if got := fmt.Sprint(h.slots()); got != "[19:42-20:30 J0018+5210 L P]" {
		t.Errorf("cleared: %s", got)
	}
	if !strings.Contains(h.world.say.text, "cleared 5 slots") || !strings.Contains(h.world.say.text, " loses ") {
		t.Errorf("says %q", h.world.say.text)
	}
	h.keys("X")
	h.shows("nothing to clear")
}

func TestOtherReceiver(t *testing.T) {
	h := drawn(t)
	h.keys("c")
	if got := h.slots()[0]; !strings.HasSuffix(got, "J0018+5210 L P") {
		t.Errorf("the first slot is now %s", got)
	}
	h.shows("at most 1 in a session")
	h.keys("esc", "down", "c")
	h.shows("no aim of J2216+3344 asks for another receiver")
}

func TestNoteIsKept(t *testing.T) {
	h := start(t, openCampaign(t))
	h.keys("n", "type:wind, from the west", "enter")
	if s := h.plan().plan.Slots[0]; s.Note != "wind, from the west" || !s.Pinned {
		t.Errorf("the slot is %+v", s)
	}
	h.keys("R")
	if s := h.plan().plan.Slots[0]; s.Note != "wind, from the west" {
		t.Errorf("planning again lost the note: %+v", s)
	}
	h.keys("w")
	again := open(t, h.cfg.Folder)
	again.keys("enter")
	again.shows("wind, from the west")
	again.keys("esc", "n", "ctrl+u", "enter")
	if s := again.plan().plan.Slots[0]; s.Note != "" {
		t.Errorf("an empty note stays %q", s.Note)
	}
}

func TestPlanFromTheCursor(t *testing.T) {
	h := drawn(t)
	before := h.plan().plan.Slots
	h.keys("down", "down", "down", "C")
	after := h.plan().plan.Slots
	for i := range 3 {
		if after[i] != before[i] {
			t.Errorf("slot %d lies before the cursor and was changed: %v", i+1, after[i])
		}
	}
	h.shows("planned again")
}

func TestCompare(t *testing.T) {
	h := drawn(t)
	h.keys("D")
	h.shows("Every slot has the times it had")
	h.keys("esc", "x", "down", "-", "D")
	h.shows("gone")
	h.shows("18:02-18:30 J0018+5210 S")
	h.shows("changed")
	h.shows("down ")
}

func TestWhoLosesIsTold(t *testing.T) {
	h := drawn(t)
	h.keys("x")
	h.shows("J0018+5210 S loses ")
}

func TestAcceptedLimitsAreSaved(t *testing.T) {
	f := openCampaign(t)
	h := start(t, f)
	for h.world.desk.held == nil {
		h.keys(">")
	}
	h.keys("!", "w")
	saved, err := f.Plan("2026-12-03 night")
	if err != nil {
		t.Fatal(err)
	}
	if len(saved.Accepted) == 0 || !strings.ContainsAny(saved.Accepted[0], "0123456789") {
		t.Errorf("accepted: %q", saved.Accepted)
	}
}

func TestCopy(t *testing.T) {
	var out bytes.Buffer
	h := drawn(t)
	t.Setenv("TMUX", "")
	h.cfg.Out = &out
	h.keys("y")
	h.shows("copied 6 slots as text")
	text, ok := strings.CutPrefix(out.String(), "\x1b]52;c;")
	if !ok {
		t.Fatalf("wrote %q", out.String())
	}
	list, err := base64.StdEncoding.DecodeString(strings.TrimSuffix(text, "\a"))
	if err != nil || !strings.Contains(string(list), " 3  19:42-20:30  J0018+5210   L  P\n") {
		t.Errorf("copied %q, %v", list, err)
	}
	if got := clipboard("a", true); got != "\x1bPtmux;\x1b\x1b]52;c;YQ==\a\x1b\\" {
		t.Errorf("inside tmux: %q", got)
	}
}

func TestMouseOffIsRemembered(t *testing.T) {
	h := start(t, openCampaign(t), func(c *Config) { c.Mouse = true })
	h.keys("m")
	if !readSettings().MouseOff {
		t.Error("mouse off is not remembered")
	}
	h.keys("m")
	if readSettings().MouseOff {
		t.Error("mouse on is not remembered")
	}
}

func TestSeeASourceInAnotherView(t *testing.T) {
	h := drawn(t)
	h.keys("2", "down", "down")
	source := h.views[1].(*arrears).subject(&h.world)
	h.apply(action{verb: goToSource, n: 0, text: source})
	if got := h.views[0].(*slate).subject(&h.world); h.at != 0 || got != source {
		t.Errorf("in view %d at %s, wanted the slate at %s", h.at, got, source)
	}
	h.keys("v")
	h.shows("Arrears")
}

func TestKeysThatComeTogether(t *testing.T) {
	h := drawn(t)
	h.keys("jjjk")
	if h.world.desk.chosen != 2 {
		t.Errorf("jjjk chooses slot %d", h.world.desk.chosen+1)
	}
	h.keys("ptt")
	h.shows("beside UTC: Modified")
}

func TestPastYear(t *testing.T) {
	at := time.Date(2026, 12, 1, 0, 0, 0, 0, time.UTC)
	day := func(n int, o campaigns.Outcome) campaigns.Entry {
		start := at.AddDate(0, 0, -n)
		return campaigns.Entry{Start: start, End: start.Add(time.Hour), Source: "A", Outcome: o}
	}
	log := &campaigns.Logbook{Entries: []campaigns.Entry{day(400, campaigns.Done), day(100, campaigns.Done), day(99, campaigns.Partial), day(20, campaigns.Lost), day(3, campaigns.Done)}}
	got := pastYear(log, at)["A"]
	want := strings.Repeat(".", 37) + "2" + strings.Repeat(".", 11) + "x.1 3 times; longest gap 264 days, 2025-12-02 to 2026-08-23"
	if got != want {
		t.Errorf("got  %s\nwant %s", got, want)
	}
	if got := pastYear(log, at)["B"]; got != "" {
		t.Errorf("of B: %q", got)
	}
}

// The distance from the Sun minute by minute has the least that the session was prepared with.
func TestSunDistance(t *testing.T) {
	p := drawn(t).world.desk.prepared
	for i := range p.Tracks {
		tr := &p.Tracks[i]
		least := 180.0
		for m := range tr.ElDeg {
			least = min(least, sunDistance(p, tr, m))
		}
		if d := least - tr.SunDeg; d < -1 || d > 1 { // refraction and the diurnal motion of the Sun come in here
			t.Errorf("%s: %.2f deg, prepared with %.2f", p.Campaign.Sources[tr.Source].Name, least, tr.SunDeg)
		}
	}
}

func TestDifferences(t *testing.T) {
	p := drawn(t).world.desk.prepared.Problem
	slot := func(job, from, to int) sched.Slot {
		for n := range p.Nodes {
			if p.Nodes[n].Job == job {
				return sched.Slot{Node: n, Start: from, End: to}
			}
		}
		panic("no node")
	}
	before := sched.Plan{Slots: []sched.Slot{slot(0, 0, 20), slot(1, 30, 60), slot(2, 70, 90)}}
	after := sched.Plan{Slots: []sched.Slot{slot(1, 30, 60), slot(2, 75, 95), slot(3, 100, 120)}}
	var told []string
	for _, d := range differences(p, before, after) {
		told = append(told, fmt.Sprint(d.was != nil, d.is != nil))
	}
	if got := strings.Join(told, ", "); got != "true false, true true, false true" {
		t.Errorf("differences: %s", got)
	}
}
