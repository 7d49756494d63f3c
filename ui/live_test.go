package ui

import (
	"fmt"
	"slices"
	"strings"
	"testing"
	"time"

	"example.org/tallystick/campaigns"
)

// underWay is the session of the written plan, with a campaign folder and a clock that the test turns.
type underWay struct {
	*harness
	now time.Time
}

func onTheSky(t *testing.T, clock string) *underWay {
	t.Helper()
	h := &underWay{harness: drawn(t)}
	h.rounds = 1
	h.cfg.Now = func() time.Time { return h.now }
	h.turn(clock)
	h.keys("N")
	return h
}

// turn sets the clock and lets it tick.
func (h *underWay) turn(clock string) {
	h.t.Helper()
	at, err := time.Parse("2006-01-02 15:04", "2026-12-03 "+clock)
	if err != nil {
		h.t.Fatal(err)
	}
	h.now = at
	h.run(h.tick())
}

// logged are the lines of this session, as source receiver outcome start-end.
func (h *underWay) logged() []string {
	var all []string
	for _, e := range h.world.folder.Logbook.Effective() {
		if !e.Start.Before(h.world.desk.session.Start) {
			all = append(all, fmt.Sprintf("%s %s %s %s-%s", e.Source, e.Receiver, e.Outcome, clock(e.Start), clock(e.End)))
		}
	}
	return all
}

func TestTheSlateFollowsTheClock(t *testing.T) {
	h := onTheSky(t, "18:50")
	h.shows("now 18:50: J2216+3344 L, 48 min left; next J0018+5210 L 19:42, move ")
	if h.world.desk.chosen != 1 {
		t.Errorf("slot %d is chosen", h.world.desk.chosen+1)
	}
	h.turn("19:39")
	h.shows("next J0018+5210 L 19:42: now move")
	if h.world.desk.chosen != 2 {
		t.Errorf("slot %d is chosen", h.world.desk.chosen+1)
	}
	h.keys("up")
	h.turn("19:50")
	if h.world.desk.chosen != 1 {
		t.Error("the clock took the cursor away from the observer")
	}
	h.keys("N")
	h.shows("J0018+5210 L, 40 min left")
	if h.world.desk.chosen != 2 {
		t.Errorf("slot %d is chosen", h.world.desk.chosen+1)
	}
	h.turn("22:59")
	h.turn("23:01") // over
	h.keys("d")
	h.shows("the session is not under way")
}

func TestDoneIsRecorded(t *testing.T) {
	h := onTheSky(t, "18:31")
	h.shows("1 slot not recorded")
	h.keys("d")
	h.shows("recorded: J0018+5210 S done")
	h.turn("18:50")
	h.keys("d")
	h.shows("partial, 12 of 60 min, quality 0.45")
	if got := fmt.Sprint(h.logged()); got != "[J0018+5210 S done 18:02-18:30 J2216+3344 L partial 18:38-18:50]" {
		t.Errorf("the logbook has %s", got)
	}
	if got := h.slots()[1]; got != "18:38-18:50 J2216+3344 L P" {
		t.Errorf("what ended early is in the plan as %s", got)
	}
	h.keys("up", "up")
	h.shows(" done")
	h.shows(" part")
	h.keys("d")
	if len(h.logged()) != 2 {
		t.Errorf("recorded twice: %v", h.logged())
	}
}

func TestLostIsRecordedAndMayComeAgain(t *testing.T) {
	h := onTheSky(t, "19:00")
	h.keys("f")
	h.shows("recorded: J2216+3344 L lost")
	if got := h.logged(); len(got) != 1 || got[0] != "J2216+3344 L lost 18:38-19:00" {
		t.Errorf("the logbook has %v", got)
	}
	if got := h.slots(); len(got) != 5 {
		t.Errorf("the plan is %v", got)
	}
	h.keys("u")
	if got := h.slots(); len(got) != 6 {
		t.Errorf("undo gives %v", got)
	}
}

func TestTimeIsLost(t *testing.T) {
	h := onTheSky(t, "21:10")
	h.keys("F", "ctrl+u", "type:22:30", "enter")
	lost := h.logged()
	if len(lost) != 2 || lost[0] != "J0231+1905 L lost 21:04-22:24" || lost[1] != "J0512-0241 L lost 22:29-22:30" {
		t.Errorf("the logbook has %v", lost)
	}
	d := h.world.desk
	until := d.prepared.Minute(h.now.Add(80 * time.Minute))
	for i, s := range h.plan().plan.Slots {
		if s.Start >= d.prepared.Minute(h.now) && s.Start < until {
			t.Errorf("slot %d is planned into the lost time: %v", i+1, h.slots())
		}
	}
	h.shows("time lost until 22:30")
	h.keys("R")
	for _, s := range h.plan().plan.Slots {
		if s.Start >= d.prepared.Minute(h.now) && s.Start < until {
			t.Errorf("planning again forgot the lost time: %v", h.slots())
		}
	}
	h.keys("F", "ctrl+u", "type:now", "enter")
	if h.world.planFrom() != d.prepared.Minute(h.now)+1 || len(h.logged()) != 2 {
		t.Errorf("the lost time goes on: from minute %d, %v", h.world.planFrom(), h.logged())
	}
}

func TestStartNow(t *testing.T) {
	h := onTheSky(t, "18:45")
	h.keys("a")
	h.shows("7 min late")
	if got := h.slots()[1]; got != "18:45-19:38 J2216+3344 L P" {
		t.Errorf("a late slot is %s", got)
	}
	h.shows("7 min behind the plan")
	h.keys("u")
	h.turn("18:36")
	h.keys("N", "a")
	if did := h.world.desk.held.did; !strings.Contains(did, "2 min early") { // and the slew takes longer
		t.Errorf("says %q", did)
	}
	if got := h.slots()[1]; got != "18:36-19:36 J2216+3344 L P" {
		t.Errorf("an early slot is %s", got)
	}
}

func TestRecordingThatFailsChangesNothing(t *testing.T) {
	h := onTheSky(t, "19:00")
	before := h.plan()
	h.world.desk.session = &campaigns.Session{Name: h.world.desk.session.Name, Site: "", Start: h.world.desk.session.Start, End: h.world.desk.session.End}
	h.keys("f")
	h.shows("not recorded: ")
	if !h.plan().equal(before) {
		t.Error("the plan has lost a slot that the logbook has not")
	}
}

func TestLiveActionsAreFirstOnTheBottomLine(t *testing.T) {
	h := onTheSky(t, "19:00")
	lines := strings.Split(h.screen(), "\n")
	if last := lines[len(lines)-1]; !strings.HasPrefix(last, " a start now  d done  f lost  F lost until") {
		t.Errorf("the bottom line is %q", last)
	}
	for _, size := range [][2]int{{40, 10}, {30, 7}, {250, 70}, {80, 24}} {
		h.size(size[0], size[1])
		h.exact()
		h.shows("J2216+3344 L, 38 min")
	}
}

func TestParseUntil(t *testing.T) {
	h := onTheSky(t, "19:00")
	for text, want := range map[string]int{"20:00": 120, "+45": 105, " 22:59 UTC ": 299} {
		if got, err := parseUntil(text, &h.world); err != nil || got != want {
			t.Errorf("%q is minute %d, %v; wanted %d", text, got, err, want)
		}
	}
	for _, text := range []string{"", "later", "25:00", "+0", "+-5", "+x", "18:30", "+400"} {
		if got, err := parseUntil(text, &h.world); err == nil {
			t.Errorf("%q is taken for minute %d", text, got)
		}
	}
	h.keys("F", "ctrl+u", "type:nonsense", "enter")
	h.shows("Time is lost") // the question stays
	h.shows("accepted: a time of day in UTC")
	if len(h.logged()) > 0 || !slices.Equal(h.slots(), h.slots()) {
		t.Error("nonsense was recorded")
	}
}
