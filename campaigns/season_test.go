package campaigns

import (
	"cmp"
	"context"
	"errors"
	"math"
	"slices"
	"strings"
	"testing"
	"testing/fstest"
	"time"

	gocmp "github.com/google/go-cmp/cmp"

	"example.org/tallystick/sky"
)

// coming opens the demonstration with so many of its coming sessions, the shortest, at its own present moment.
func coming(t testing.TB, sessions int) (*Folder, time.Time) {
	t.Helper()
	f, err := OpenDemo()
	if err != nil {
		t.Fatal(err)
	}
	now, _ := f.Now()
	c := *f.Campaign
	c.Sessions = slices.DeleteFunc(slices.Clone(c.Sessions), func(s Session) bool { return !s.End.After(now) })
	slices.SortFunc(c.Sessions, func(a, b Session) int { return cmp.Compare(a.End.Sub(a.Start), b.End.Sub(b.Start)) })
	c.Sessions = c.Sessions[:sessions]
	slices.SortFunc(c.Sessions, func(a, b Session) int { return a.Start.Compare(b.Start) })
	f.Campaign = &c
	return f, now
}

func play(t testing.TB, f *Folder, at time.Time, o SeasonOptions) *Season {
	t.Helper()
	s, err := PlaySeason(context.Background(), f.Campaign, f.Logbook, at, o)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func TestSeasonIsTheSameEveryTime(t *testing.T) {
	var told []string
	f, now := coming(t, 1)
	one := play(t, f, now, SeasonOptions{Progress: func(done, all int, session string) {
		if done != len(told) || all != 1 {
			t.Errorf("%d of %d after %d reports", done, all, len(told))
		}
		told = append(told, session)
	}})
	before := len(f.Logbook.Entries)
	two := play(t, f, now, SeasonOptions{Workers: 4})
	if diff := gocmp.Diff(one, two); diff != "" {
		t.Errorf("two runs differ:\n%s", diff)
	}
	if len(told) != len(one.Sessions) || len(f.Logbook.Entries) != before {
		t.Errorf("%d reports of %d sessions; %d log entries were %d", len(told), len(one.Sessions), len(f.Logbook.Entries), before)
	}
}

func TestSeasonOfTheDemonstration(t *testing.T) {
	f, now := coming(t, 2)
	s := play(t, f, now, SeasonOptions{})
	hoursAddUp(t, s, f)
	arrayAddsUp(t, s)
	debtsAreTheArrears(t, s, f)
}

// What is granted is the sessions without their breaks; what is planned is the slots.
func hoursAddUp(t *testing.T, s *Season, f *Folder) {
	granted, planned := 0.0, 0.0
	for _, x := range s.Sessions {
		hours := x.Session.End.Sub(x.Session.Start).Hours()
		for _, b := range x.Session.Breaks {
			hours -= b[1].Sub(b[0]).Hours()
		}
		if math.Abs(x.Hours-hours) > 1e-6 {
			t.Errorf("%s: %.3f h, wanted %.3f", x.Session.Name, x.Hours, hours)
		}
		granted += hours
		on := 0.0
		for i, r := range x.Rows {
			on += r.End.Sub(r.Start).Hours()
			if len(r.Breaches) > 0 {
				t.Errorf("%s slot %d: %v", x.Session.Name, i, r.Breaches)
			}
		}
		if math.Abs(on*60-float64(x.OnSourceMin)) > 1e-6 || on > hours {
			t.Errorf("%s: %.2f h on source, %d min told, %.2f h granted", x.Session.Name, on, x.OnSourceMin, hours)
		}
		planned += on
	}
	if len(s.Pressure) != 1 {
		t.Fatalf("%d sites", len(s.Pressure))
	}
	l := &s.Pressure[0]
	if g, p := SumH(l.GrantedH), SumH(l.PlannedH); math.Abs(g-granted) > 1e-6 || math.Abs(p-planned) > 1e-6 {
		t.Errorf("by sidereal time %.3f h granted and %.3f planned, by session %.3f and %.3f", g, p, granted, planned)
	}
	ask, spare := l.AskH(), l.SpareH()
	for h := range ask {
		if ask[h] < 0 || ask[h] > 0 && spare[h] > 0 || math.Abs(l.GrantedH[h]+ask[h]-spare[h]-l.WantedH[h]) > 1e-9 {
			t.Errorf("hour %d: wanted %.2f, granted %.2f, ask %.2f, spare %.2f", h, l.WantedH[h], l.GrantedH[h], ask[h], spare[h])
		}
	}
	aims := 0
	for _, src := range f.Campaign.Sources {
		for _, a := range src.Aims {
			if a.Kind == Cadence {
				aims++
			}
		}
	}
	if len(s.Cadences) != aims {
		t.Errorf("%d cadences told of %d", len(s.Cadences), aims)
	}
}

// The debts at the end are those that the arrears show once the planned slots are in the logbook.
func debtsAreTheArrears(t *testing.T, s *Season, f *Folder) {
	book := *f.Logbook
	book.Entries = slices.Clone(book.Entries)
	for _, x := range s.Sessions {
		for _, r := range x.Rows {
			book.Entries = append(book.Entries, Entry{Start: r.Start, End: r.End, Site: x.Session.Site, Source: r.Source, Receiver: r.Receiver, Outcome: Done, Quality: 1, ToaUs: r.ToaUs})
		}
	}
	rows, err := Arrears(f.Campaign, &book, s.To)
	if err != nil {
		t.Fatal(err)
	}
	last := map[string]time.Time{}
	for _, r := range rows {
		last[r.Source+r.Aim] = r.Last
	}
	for _, r := range s.Debts {
		if !r.Last.Equal(last[r.Source+r.Aim]) {
			t.Errorf("%s, %s: last %v, wanted %v", r.Source, r.Aim, r.Last, last[r.Source+r.Aim])
		}
	}
	for _, c := range s.Cadences {
		switch {
		case c.Outcome == CadenceKept && (c.OverdueDays > 0 || c.DebtWorst > 1.000001),
			c.Outcome == CadenceMissed && c.DebtEnd <= 1,
			c.Outcome == CadenceLate && (c.DebtEnd > 1.000001 || c.DebtWorst <= 1):
			t.Errorf("%+v", c)
		}
		if c.DebtWorst < c.DebtNow || c.DebtWorst < c.DebtEnd {
			t.Errorf("the worst is not the worst: %+v", c)
		}
	}
}

// One circumpolar source every 7 days, one session a week: kept by hand and by the program. A second that
// never rises is missed.
func TestSeasonByHand(t *testing.T) {
	c, err := LoadFS(fstest.MapFS{CampaignFile: {Data: []byte(`format = 1
[campaign]
name = "by hand"
[[site]]
name = "A"
latitude_deg = 50
longitude_deg = 0
height_m = 0
elevation_limits_deg = [10, 88]
azimuth_travel_deg = [-270, 270]
slew_deg_per_min = [24, 12]
acceleration_deg_per_s2 = [0.1, 0.1]
settle_s = 20
sun_limit_deg = 5
horizon_deg = [[0, 5]]
mount = "altaz"
[[receiver]]
name = "L"
site = "A"
band_mhz = [1210, 1510]
tsys_k = 28
zenith_opacity = 0.008
gain_k_per_jy = 0.55
polarizations = 2
change_min = 6
[[source]]
name = "Pole"
ra = "02:00:00"
dec = "+80:00:00"
aim = [{ kind = "cadence", every_days = 7, minutes = 30, carry = 0 }]
[[source]]
name = "South"
ra = "02:00:00"
dec = "-70:00:00"
aim = [{ kind = "cadence", every_days = 7, minutes = 30 }]
[[session]]
name = "one"
site = "A"
start = 2026-12-02T00:00:00Z
end = 2026-12-02T03:00:00Z
receivers = ["L"]
slot_overhead_min = 0
breaks = [[2026-12-02T01:00:00Z, 2026-12-02T01:30:00Z]]
[[session]]
name = "two"
site = "A"
start = 2026-12-09T00:00:00Z
end = 2026-12-09T03:00:00Z
receivers = ["L"]
slot_overhead_min = 0
`)}}, "")
	if err != nil {
		t.Fatal(err)
	}
	at := time.Date(2026, 11, 30, 0, 0, 0, 0, time.UTC)
	s, err := PlaySeason(context.Background(), c, nil, at, SeasonOptions{})
	if err != nil {
		t.Fatal(err)
	}
	if len(s.Sessions) != 2 || math.Abs(s.Sessions[0].Hours-2.5) > 1e-9 || math.Abs(s.Sessions[1].Hours-3) > 1e-9 {
		t.Fatalf("%+v", s.Sessions)
	}
	by := map[string]CadenceForecast{}
	for _, f := range s.Cadences {
		by[f.Source] = f
	}
	// Never observed, so due at once; 9.1 days later another 1.3 cycles have passed: 2 visits.
	pole, south := by["Pole"], by["South"]
	if pole.Up != 2 || south.Up != 0 {
		t.Errorf("up in %d and %d sessions, wanted 2 and 0", pole.Up, south.Up)
	}
	if pole.Due != 2 || pole.Planned != 2 || pole.Outcome == CadenceMissed || pole.DebtEnd > 0.1 {
		t.Errorf("Pole: %+v", pole)
	}
	if south.Due != 2 || south.Planned != 0 || south.Outcome != CadenceMissed {
		t.Errorf("South: %+v", south)
	}
	// Two visits of half an hour of a source that is always up find room; the other is asked of nobody.
	l := s.Pressure[0]
	if got := SumH(l.WantedH); math.Abs(got-1) > 1e-9 {
		t.Errorf("%.3f h wanted, not 1", got)
	}
	if ask := SumH(l.AskH()); ask > 1e-9 {
		t.Errorf("%.3f h to ask for, although 5.5 are granted", ask)
	}
	_, err = PlaySeason(context.Background(), c, nil, time.Date(2027, 1, 1, 0, 0, 0, 0, time.UTC), SeasonOptions{})
	if err == nil || !strings.Contains(err.Error(), "no session is left") {
		t.Errorf("without sessions: %v", err)
	}
}

// The demonstration has a binary of about a sidereal day: at each transit the site meets it where it was the day before.
func TestSeasonRepeats(t *testing.T) {
	f, now := coming(t, 1)
	s := play(t, f, now, SeasonOptions{})
	if len(s.Repeats) != 1 {
		t.Fatalf("repeats %+v", s.Repeats)
	}
	r := &s.Repeats[0]
	src := &f.Campaign.Sources[slices.IndexFunc(f.Campaign.Sources, func(s Source) bool { return s.Name == r.Source })]
	const sidereal = 0.99726957
	step := sidereal/src.Orbit.PeriodDays - 1
	if r.Parts != 1 || math.Abs(r.StepTurns-step) > 1e-9 {
		t.Errorf("%+v, want a step of %g", r, step)
	}
	// In so many days the part that is seen moves over what is not.
	if moved := r.Days / sidereal * step; math.Abs(moved-(1-r.PartTurns)) > 1e-9 || r.SeenShare() != r.PartTurns {
		t.Errorf("moves by %g in %g d, %g is not seen", moved, r.Days, 1-r.PartTurns)
	}
	// What is up, minute by minute.
	site := f.Campaign.site(r.Site)
	where, err := site.onEarth()
	if err != nil {
		t.Fatal(err)
	}
	at := now.Add(s.To.Sub(now) / 2)
	frame, err := sky.NewFrame(at)
	if err != nil {
		t.Fatal(err)
	}
	place := frame.Place(src.target())
	limits := site.limits(src)
	up := 0
	for m := range 1436 {
		look := where.Look(frame, place, at.Add(time.Duration(m-718)*time.Minute))
		if look.ElDeg >= max(limits.LowDeg, limits.Mask.At(look.AzDeg)) && (limits.HighDeg == 0 || look.ElDeg <= limits.HighDeg) {
			up++
		}
	}
	if part := float64(up) / 1440 / src.Orbit.PeriodDays; math.Abs(part-r.PartTurns) > 0.01 {
		t.Errorf("part of %.4f turns, minute by minute %.4f", r.PartTurns, part)
	}
}

func TestSeasonStops(t *testing.T) {
	f, now := coming(t, 2)
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	_, err := PlaySeason(ctx, f.Campaign, f.Logbook, now, SeasonOptions{})
	if !errors.Is(err, context.Canceled) {
		t.Errorf("stopped: %v", err)
	}
}

// A session under way has only what is left of it to grant.
func TestSeasonUnderWay(t *testing.T) {
	f, _ := coming(t, 1)
	first := f.Campaign.Sessions[0]
	at := first.End.Add(-3 * time.Hour)
	s := play(t, f, at, SeasonOptions{})
	for _, r := range s.Sessions[0].Rows {
		if r.Start.Before(at) {
			t.Errorf("%s at %s is planned into the past", r.Source, r.Start)
		}
	}
	if got := s.Sessions[0].Hours; got > 3 || len(s.Sessions[0].Rows) == 0 {
		t.Errorf("%.2f h granted of the 3 that are left, %d slots", got, len(s.Sessions[0].Rows))
	}
}

func BenchmarkSeason(b *testing.B) {
	f, now := coming(b, 10)
	for b.Loop() {
		play(b, f, now, SeasonOptions{})
	}
}
