package campaigns

import (
	"context"
	"fmt"
	"math"
	"slices"
	"testing"
	"time"

	"example.org/tallystick/sched"
)

// manyTimes is the demonstration with its sources again and again, elsewhere in the sky, and a logbook that goes round.
func manyTimes(t testing.TB, sources, lines int) (*Campaign, *Logbook, time.Time) {
	t.Helper()
	f, now := openDemo(t)
	c := *f.Campaign
	c.Sources = nil
	for n := range sources {
		s := f.Campaign.Sources[n%len(f.Campaign.Sources)]
		if n >= len(f.Campaign.Sources) {
			s.Name = fmt.Sprintf("%s.%d", s.Name, n)
			s.RADeg = math.Mod(s.RADeg+137.5*float64(n), 360)
			s.Aims = slices.Clone(s.Aims)
			s.Aims = slices.DeleteFunc(s.Aims, func(a Aim) bool { return a.Kind == Calibration })
		}
		c.Sources = append(c.Sources, s)
	}
	log := &Logbook{}
	const every = 20 * time.Minute
	begun := now.Add(-time.Duration(lines) * every)
	for n := range lines {
		start := begun.Add(time.Duration(n) * every)
		log.Entries = append(log.Entries, Entry{
			Start: start, End: start.Add(every - 2*time.Minute), Site: c.Sites[0].Name, Source: c.Sources[n*7919%sources].Name,
			Receiver: c.Receivers[n%len(c.Receivers)].Name, Outcome: Done, Quality: 0.9, ToaUs: 2, Line: n + 2,
		})
	}
	return &c, log, now
}

// Of a campaign too large for a table of slews only what the search would look at anyhow takes part: the plan is the one
// that is made of all.
func TestALargeCampaignIsCroppedToWhatTheSearchLooksAt(t *testing.T) {
	c, log, now := manyTimes(t, 540, 1000)
	s, err := c.Session("2026-12-16 evening", now)
	if err != nil {
		t.Fatal(err)
	}
	prepare := func(keep []string) *Prepared {
		p, err := Prepare(c, log, s, PrepareOptions{At: now, Keep: keep})
		if err != nil {
			t.Fatal(err)
		}
		if err := p.Problem.Check(); err != nil {
			t.Fatal(err)
		}
		return p
	}
	var all []string
	for i := range c.Sources {
		all = append(all, c.Sources[i].Name)
	}
	cropped, whole := prepare(nil), prepare(all)
	if len(whole.places) <= mostPlaces || whole.Problem.Cropped || len(sched.Foremost(whole.Problem)) <= sched.MostSearched {
		t.Fatalf("%d places and %d jobs that may be planned are no large campaign", len(whole.places), len(sched.Foremost(whole.Problem)))
	}
	if !cropped.Problem.Cropped || len(cropped.places) > mostPlaces {
		t.Fatalf("cropped: %t, with %d places", cropped.Problem.Cropped, len(cropped.places))
	}

	if raced {
		return // the search itself is raced elsewhere
	}
	plan := func(p *Prepared) (slots []string) {
		r, err := sched.Solve(context.Background(), p.Problem, sched.Options{Rounds: -1})
		if err != nil {
			t.Fatal(err)
		}
		if r.HasCeiling {
			t.Error("a ceiling was claimed for jobs that were not looked at")
		}
		for _, row := range p.SlotRows(r.Plan) {
			slots = append(slots, fmt.Sprintf("%s %s %s %d s", row.Start.Format(time.TimeOnly), row.Source, row.Receiver, row.MoveSec))
		}
		return slots
	}
	if a, b := plan(cropped), plan(whole); !slices.Equal(a, b) {
		t.Errorf("cropped:\n%q\nwhole:\n%q", a, b)
	}

	has := map[int]bool{}
	for _, n := range cropped.Problem.Nodes {
		has[n.Job] = true
	}
	crowded := 0
	for _, r := range sched.LeftOut(cropped.Problem, sched.Plan{}) {
		if has[r.Job] == cropped.Problem.Jobs[r.Job].Facts.Crowded {
			t.Errorf("%s: nodes %t, crowded out %t", cropped.Problem.Jobs[r.Job].Source, has[r.Job], !has[r.Job])
		}
		if r.Kind == sched.Crowded {
			crowded++
		}
	}
	if crowded == 0 {
		t.Error("nobody is told that others promise more")
	}

	again := prepare(cropped.TakingPart())
	if !slices.EqualFunc(again.Problem.Nodes, cropped.Problem.Nodes, func(a, b sched.Node) bool { return a.Job == b.Job && a.Place == b.Place }) {
		t.Error("what took part before takes part otherwise now")
	}
	outsider := cropped.Problem.Jobs[slices.IndexFunc(cropped.Problem.Jobs, func(j sched.Job) bool { return j.Facts.Crowded })].Source
	if !slices.Contains(prepare([]string{outsider}).TakingPart(), outsider) {
		t.Errorf("%s was to be kept", outsider)
	}
}

func BenchmarkLargeArrears(b *testing.B) {
	c, log, now := manyTimes(b, 2000, 500_000)
	b.ReportAllocs()
	for b.Loop() {
		if _, err := Arrears(c, log, now); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkLargePrepare(b *testing.B) {
	c, log, now := manyTimes(b, 2000, 500_000)
	b.ReportAllocs()
	for b.Loop() {
		if _, err := Prepare(c, log, &c.Sessions[0], PrepareOptions{At: now}); err != nil {
			b.Fatal(err)
		}
	}
}
