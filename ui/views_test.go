package ui

import (
	"errors"
	"math"
	"strings"
	"testing"
	"time"

	"example.org/tallystick/campaigns"
)

// running lets a harness wait for a season.
func running(h *harness) *seasonRun {
	h.world.season.run = &seasonRun{cancel: func() {}, edition: h.world.edition}
	return h.world.season.run
}

// seasonByHand is a season that is written here, so that the screens of the tests change when the interface does.
func seasonByHand(c *campaigns.Campaign) *campaigns.Season {
	day := func(d, h int) time.Time { return time.Date(2026, 12, d, h, 0, 0, 0, time.UTC) }
	row := func(slot int, source, receiver string, at time.Time, min int) campaigns.SlotRow {
		return campaigns.SlotRow{Slot: slot, Source: source, Receiver: receiver, Start: at, End: at.Add(time.Duration(min) * time.Minute), Worth: 1.5}
	}
	s := &campaigns.Season{From: evening, To: day(9, 22)}
	s.Sessions = []campaigns.SeasonSession{
		{Session: &c.Sessions[0], Hours: 4.75, OnSourceMin: 215, Worth: 24.66, Overdue: 4, Rows: []campaigns.SlotRow{
			row(1, "J2216+3344", "L", day(3, 18), 60), row(2, "J0018+5210", "L", day(3, 20), 48)}},
		{Session: &c.Sessions[1], Hours: 3, OnSourceMin: 120, Worth: 11.2, Overdue: 2, Rows: []campaigns.SlotRow{row(1, "J2216+3344", "L", day(9, 19), 40)}},
	}
	s.Cadences = []campaigns.CadenceForecast{
		{Source: "J1347-4410", Aim: "every 14 d with L", EveryDays: 14, Priority: 1, DebtNow: 1, DebtWorst: 1.45, DebtEnd: 1.45, OverdueDays: 6, Due: 1, Outcome: campaigns.CadenceMissed},
		{Source: "J2216+3344", Aim: "every 7 d with L", EveryDays: 7, Priority: 1.5, DebtNow: 1.7, DebtWorst: 1.72, DebtEnd: 0.02, OverdueDays: 1, Due: 1, Planned: 2, Up: 2, Outcome: campaigns.CadenceLate},
		{Source: "J0512-0241", Aim: "every 21 d with L", EveryDays: 21, Priority: 1, DebtNow: 0.4, DebtWorst: 0.7, DebtEnd: 0.7, Due: 0, Up: 1, Outcome: campaigns.CadenceKept},
	}
	s.Connects = []campaigns.ConnectForecast{{Source: "J0231+1905", LimitTurns: 0.1, By: day(7, 3), Planned: day(3, 20)}, {Source: "J2216+3344", LimitTurns: 0.2, By: day(8, 4), Lost: true}}
	s.Debts = []campaigns.AccountRow{{Source: "J1347-4410", Kind: campaigns.Cadence, Aim: "every 14 d with L", Debt: 1.45, Priority: 1, Why: "never observed"}}
	l := campaigns.LSTPressure{Site: c.Sites[0].Name}
	for h := range l.WantedH {
		l.WantedH[h] = 0.2 + float64((h*7)%11)/10
		if h < 8 {
			l.GrantedH[h] = 0.9
			l.PlannedH[h] = 0.6
		}
	}
	s.Pressure = []campaigns.LSTPressure{l}
	s.Array = campaigns.ArrayForecast{
		Rows: []campaigns.ArrayRow{
			{Source: "J0018+5210", Site: l.Site, Receiver: "L", HourErrorUs: 0.312, FloorUs: 0.05, UpH: 7.75, LeastH: 0.25, PlannedH: 0.8, BestH: 2.61, PlannedUs: 0.352, BestUs: 0.2},
			{Source: "J0231+1905", Site: l.Site, Receiver: "L", HourErrorUs: 0.9, UpH: 6.5, LeastH: 0.4, BestH: 0.4, PlannedUs: math.Inf(1), BestUs: 1.42},
			{Source: "J2216+3344", Site: l.Site, Receiver: "S", HourErrorUs: 1.27, UpH: 5, LeastH: 0.3, PlannedH: 2.4, BestH: 0.3, PlannedUs: 0.82, BestUs: 2.32},
		},
		LeftOut: []campaigns.ArrayLeftOut{{Source: "J0512-0241", Reason: "no flux, no width_ms, no spin"}, {Source: "J1347-4410", Reason: "no flux, no width_ms, no spin"}},
		Least:   campaigns.LeastOnce, CadencesH: 4.1, TotalH: 3.2, NoFloor: 2, HourMore: 0.21, Pairs: 1, NearShare: 0,
		Planned: campaigns.ArrayValue{SumPerUs2: 9.56, PairPerUs2: 0.51}, Best: campaigns.ArrayValue{SumPerUs2: 25.7, PairPerUs2: 2.21},
		Gains: [4]campaigns.ArrayGain{{What: "twice the years", Weak: 20.16, Intermediate: 1.414}, {What: "twice the cadence", Weak: 2, Intermediate: 1.083}, {What: "half the noise", Weak: 4, Intermediate: 1.173}, {What: "one source more", Weak: 1.5, Intermediate: 1.5}},
	}
	return s
}

func TestSeasonIsPlayedAside(t *testing.T) {
	h := start(t, openCampaign(t))
	h.keys("4")
	h.shows("P plays the season")
	cmd := h.apply(action{verb: playSeason})
	h.shows("playing the season; Esc stops it")
	if lines := strings.Split(h.screen(), "\n"); !strings.Contains(lines[len(lines)-2], "playing the season") || !strings.HasPrefix(lines[2], "sess") {
		t.Errorf("how far it is stands over the calendar, not above the keys:\n%s", h.screen())
	}
	h.world.season.run.reached = seasonReport{done: 1, all: 2, session: "2026-12-09 night"}
	h.shows("The season is being played: session 2 of 2.") // also while the line below tells of planning
	h.keys("1", "down", "4")                               // everything else can be used meanwhile
	h.run(cmd)
	h.shows("the season is played")
	h.shows("2026-12-09 night")
	h.keys("right")
	h.shows("J1347-4410")
	h.keys("right")
	h.shows("10-11")
	for range seasonPages {
		h.keys("right")
		h.exact()
	}
	for range 5 {
		h.keys("right")
	}
	h.shows("Array")
	h.shows("2 pulsars together")
	h.keys("enter")
	h.shows("3, no flux, no width_ms, no spin: J0512-0241")
	h.keys("end")
	h.shows("4.00, 1.17   half the noise")
	h.keys("esc", "down")
	h.shows("J0231+1905, its hours")
	for range len(seasonPages) - 5 {
		h.keys("right")
	}
	h.keys("left", "/", "type:j2216", "enter", "enter")
	h.shows("J2216+3344, every 7 d with L")
	h.keys("esc", "/", "type:9", "enter")
	h.shows("no row matches")
	h.keys("esc")
	h.shows("J1347-4410")
	// What is recorded makes it out of date.
	h.keys("5", "d", "enter", "4")
	h.shows("out of date: P plays anew")
	h.keys("P")
	if strings.Contains(h.screen(), "out of date") {
		t.Error("played again, and still out of date")
	}
}

// On 80 columns, the least that a terminal has by custom, every page says what it is about; on 60 every name is whole.
func TestSeasonPagesFitTheHead(t *testing.T) {
	h := start(t, openCampaign(t))
	h.keys("4", "P")
	for i := range seasonPages {
		h.size(80, 24)
		h.shows(seasonPages[i].about)
		h.shows(seasonPages[len(seasonPages)-1].name)
		h.size(60, 20)
		h.shows(seasonPages[len(seasonPages)-1].name)
		h.keys("right")
	}
}

func TestEscStopsTheSeason(t *testing.T) {
	h := start(t, openCampaign(t))
	h.keys("4")
	cmd := h.apply(action{verb: playSeason})
	h.keys("esc")
	h.shows("the season was stopped")
	h.run(cmd) // the answer comes too late
	if h.world.season.result != nil || h.world.season.run != nil {
		t.Error("a stopped season is shown")
	}
	if h.outcome(0, nil); h.world.season.run != nil {
		t.Error("a season goes on after the end")
	}
}

func TestOrbitsAreLookedAtOnce(t *testing.T) {
	h := start(t, openCampaign(t))
	if h.world.orbits.views != nil {
		t.Fatal("looked at before anybody asked")
	}
	h.keys("3")
	first := h.world.orbits.known
	h.shows("J0231+1905")
	h.keys("down", "1", "3")
	if h.world.orbits.known != first {
		t.Error("looked at again without need")
	}
	// A new entry, another hour: again. An older answer is dropped.
	h.keys("5", "d", "enter", "3")
	if h.world.orbits.known == first {
		t.Error("not looked at again after the logbook has changed")
	}
	h.send(orbitsMsg{key: first, err: errTest})
	if h.world.orbits.trouble != "" {
		t.Error("an answer to an older question is shown")
	}
}

var errTest = errors.New("the test says so")

// From a source in one view to the same source in another.
func TestFromArrearsToOrbitAndLog(t *testing.T) {
	h := start(t, openCampaign(t))
	h.keys("2", "/", "type:J0231", "enter", "v")
	h.shows("Orbits")
	h.shows("Logbook")
	h.keys("type:Orb", "enter")
	h.shows("1 binary")
	h.keys("v", "type:Log", "enter")
	h.shows("1 of 6 entries, filter: J0231+1905")
}

// Views that need no session show what they have when there is none left.
func TestViewsWithoutASession(t *testing.T) {
	h := start(t, openCampaign(t), func(c *Config) {
		c.Now = func() time.Time { return time.Date(2027, 3, 1, 12, 0, 0, 0, time.UTC) }
	})
	h.keys("5")
	h.shows("6 entries, the latest first")
	h.keys("home", "d", "enter")
	h.shows("recorded: ")
	h.keys("3")
	h.shows("J0231+1905")
	h.keys("4")
	h.shows("No session is still to come")
	h.keys("P")
	h.shows("no session is left")
	for _, k := range []string{"1", "2", "3", "4", "5"} {
		for _, size := range [][2]int{{80, 24}, {40, 10}, {200, 60}} {
			h.size(size[0], size[1])
			h.keys(k, "down", "enter", "esc")
			h.exact()
		}
	}
}

// An orbit whose elements mean nothing has no drawing and says so.
func TestOrbitThatMeansNothing(t *testing.T) {
	h := start(t, openCampaign(t))
	h.keys("3")
	h.world.orbits.views[0].Void = true
	h.world.orbits.views[0].NowTurns = math.NaN()
	h.shows("its elements mean nothing")
	for _, size := range [][2]int{{40, 10}, {120, 40}, {200, 60}} {
		h.size(size[0], size[1])
		h.exact()
	}
}

func TestPhasesPage(t *testing.T) {
	p := phasesPage(&campaigns.Season{Repeats: []campaigns.PhaseRepeat{{Source: "J1", Site: "Hill", StepTurns: 0.5, Parts: 2, PartTurns: 0.125, Days: 400}}})
	if got := strings.Join(p.cells[0], "|"); got != "J1|Hill|0.5000|2|25 %|400 d" || p.sources[0] != "J1" {
		t.Errorf("%q of %v", got, p.sources)
	}
	if title, lines := p.lines(0); title != "J1, in step with the days" || !strings.Contains(lines[1].text, "2 parts of the orbit, 0.125 turns wide") {
		t.Errorf("%s: %+v", title, lines)
	}
}

func TestOrbitSizesInWords(t *testing.T) {
	s := &campaigns.OrbitSizes{CompanionMsun: 0.25, SinI: 0.999, ShapiroUs: 19.13, H3Us: 1.09, ThirdUs: 1.45, Assumed: "an assumed inclination of 60 deg"}
	if got := sizeWords(s); got != "Shapiro delay of 19.1 us from least to most, H3 1.09 us, third harmonic 1.45 us; companion of 0.25 Msun, sin i 0.999, with an assumed inclination of 60 deg" {
		t.Error(got)
	}
	s = &campaigns.OrbitSizes{PulsarMsun: 1.338, AdvanceDegPerYr: 16.9, Decay: -1.25e-12, EinsteinUs: 384}
	if got := relativityWords(s); got != "wants a pulsar of 1.34 Msun, advance 16.9 deg/yr, decay -1.2e-12, Einstein delay 384 us" {
		t.Error(got)
	}
}

func TestAirAndWindInWords(t *testing.T) {
	if got := airWords(&campaigns.SlotRow{ElStartDeg: 10, ElEndDeg: 30}); got != ", air 5.6 to 2.0 times that overhead" {
		t.Error(got)
	}
	if got := airWords(&campaigns.SlotRow{ElStartDeg: 60, ElEndDeg: 70}); got != "" {
		t.Error(got)
	}
	h := drawn(t)
	row := &h.world.desk.read().rows[0]
	if got := windWords(&h.world, row, 30); !strings.HasPrefix(got, "; the solar wind delays by ") || strings.Contains(got, "flagged") {
		t.Error(got)
	}
	if got := windWords(&h.world, row, 10); !strings.HasSuffix(got, " at 2350 MHz, as a mean: fits of it were left with up to 0.11 us, and timing is flagged") {
		t.Error(got)
	}
}

func TestDetailsSayByWhichRule(t *testing.T) {
	h := drawn(t)
	rule := func() string {
		for _, l := range slotLines(&h.world, 0) {
			if l.label == "TOA error" {
				return l.text
			}
		}
		return ""
	}
	if got := rule(); got != "noise by W/(S/N), jitter and floor where known" {
		t.Errorf("%q", got)
	}
	row := &h.world.desk.read().rows[0]
	row.ToaRule = "a matched Gaussian template, 0.74 W/(S/N)"
	if got := rule(); !strings.HasPrefix(got, "noise by a matched Gaussian template, 0.74 W/(S/N), ") {
		t.Errorf("%q", got)
	}
	if row.ToaUs = 0; rule() != "" {
		t.Errorf("no TOA error, and its rule is told: %q", rule())
	}
}
