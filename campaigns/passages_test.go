package campaigns

import (
	"math"
	"strings"
	"testing"
	"time"
)

// passing is a campaign with one binary of two days that wants its passages, on a site where it never sets.
func passing(t *testing.T) (*Campaign, []passage) {
	t.Helper()
	site := *openSite(60, 0)
	c := &Campaign{
		Sites:     []Site{site},
		Receivers: []Receiver{{Name: "L", Site: "Open", BandMHz: [2]float64{1200, 1500}, TsysK: 30, GainKPerJy: 1, Polarizations: 2}},
		Sources: []Source{{
			Name: "A", RADeg: 10, DecDeg: 80, PositionMJD: j2000, Priority: 1,
			Orbit: &Orbit{PeriodDays: 2, AscendingNodeMJD: 61370, SemimajorLs: 3, SinI: 0.99, SigmaEpochDays: 1e-6, SigmaPeriodDays: 1e-8},
			Aims:  []Aim{{Kind: Conjunction, Receivers: []string{"L"}, Minutes: 100, MaxMinutes: 200, HalfWidthTurns: 0.02, Wanted: 4, Since: time.Date(2026, 12, 1, 0, 0, 0, 0, time.UTC)}},
		}},
	}
	k, err := newKnowledge(&c.Sources[0], newFrames())
	if err != nil {
		t.Fatal(err)
	}
	all := k.superior(0.02, time.Date(2026, 12, 1, 12, 0, 0, 0, time.UTC), time.Date(2026, 12, 16, 0, 0, 0, 0, time.UTC))
	if len(all) < 7 {
		t.Fatalf("%d passages in a fortnight of a two-day orbit", len(all))
	}
	for i, p := range all[:6] { // a session around each of the first six
		from := p.centre.Add(-4 * time.Hour).Truncate(time.Minute)
		c.Sessions = append(c.Sessions, Session{Name: string(rune('a' + i)), Site: "Open", Start: from, End: from.Add(8 * time.Hour), Receivers: []string{"L"}})
	}
	return c, all
}

// Of the passages that sessions held one was caught whole, one by half with two slots that belong together, and one was left
// out; the sessions to come do not count, nor does one that another receiver had.
func TestPassagesCaughtAndMissed(t *testing.T) {
	c, all := passing(t)
	c.Sessions[3].Receivers = []string{"U"}
	entry := func(from, to time.Time, q float64) Entry {
		return Entry{Start: from, End: to, Site: "Open", Source: "A", Receiver: "L", Outcome: Done, Quality: q}
	}
	log := &Logbook{Entries: []Entry{
		entry(all[0].centre.Add(-time.Hour), all[0].centre.Add(time.Hour), 1),
		entry(all[1].centre.Add(-time.Hour), all[1].centre.Add(-20*time.Minute), 1),
		entry(all[1].centre.Add(-20*time.Minute), all[1].centre, 1),
		entry(all[2].centre.Add(2*time.Hour), all[2].centre.Add(3*time.Hour), 1), // beside it
	}}
	at := all[4].centre.Add(-12 * time.Hour)
	rows, err := Arrears(c, log, at)
	if err != nil {
		t.Fatal(err)
	}
	r := rows[0]
	if math.Abs(r.Debt-2.5/4) > 0.02 || !strings.HasPrefix(r.Why, "1.5 of 4 passages caught since 2026-12-01, 1 missed in past sessions; next ") {
		t.Errorf("%.3f, %q", r.Debt, r.Why)
	}
	if want := all[4].centre.Format("2006-01-02 15:04"); !strings.HasSuffix(r.Why, want) {
		t.Errorf("%q does not name the next, %s", r.Why, want)
	}
}

// A prediction that is not good enough is told in the account, with its number, and in the slot's reason where the window is
// only widened.
func TestPassagesThatAreNotPredictedWell(t *testing.T) {
	for _, c := range []struct {
		sigma     float64 // days
		flag, why string
		planned   bool
	}{
		{1e-6, "", "trustworthy", true},
		{0.03, "window widened", "window widened to 0.065 turns", true},
		{0.06, "prediction refused", "refused: known to 0.03 turns only", false},
		{0, "", "gives no error of the epoch", true},
	} {
		campaign, _ := passing(t)
		campaign.Sources[0].Orbit.SigmaEpochDays = c.sigma
		at := campaign.Sessions[0].Start
		p, err := Prepare(campaign, nil, &campaign.Sessions[0], PrepareOptions{At: at})
		if err != nil {
			t.Fatal(err)
		}
		row := p.Accounts[0]
		if flags := strings.Join(row.Flags, ","); flags != c.flag {
			t.Errorf("sigma %g d: flags %q, want %q", c.sigma, flags, c.flag)
		}
		if c.sigma != 1e-6 && !strings.Contains(row.Why, c.why) {
			t.Errorf("sigma %g d: %q", c.sigma, row.Why)
		}
		terms := p.Problem.Jobs[0].Terms
		if c.planned != (len(terms) > 0) {
			t.Fatalf("sigma %g d: %d terms", c.sigma, len(terms))
		}
		if c.planned && !strings.Contains(terms[0].Why, c.why) {
			t.Errorf("sigma %g d: %q", c.sigma, terms[0].Why)
		}
	}
}

// Elements that have run away are said to, instead of passing for an orbit without conjunctions.
func TestPassagesOfAnOrbitThatMeansNothing(t *testing.T) {
	c, _ := passing(t)
	o := c.Sources[0].Orbit
	o.AscendingNodeMJD, o.FrequencySeries, o.PeriodDays = 55000, []float64{5.787e-6, 0, 1e-21}, 2
	rows, err := Arrears(c, nil, c.Sessions[0].Start)
	if err != nil {
		t.Fatal(err)
	}
	if !strings.Contains(rows[0].Why, "mean nothing any more") {
		t.Error(rows[0].Why)
	}
}

// The longest orbit that is accepted lasts 274 years: its next passage is found all the same.
func TestTheNextPassageOfTheLongestOrbit(t *testing.T) {
	c, _ := passing(t)
	c.Sources[0].Orbit.PeriodDays, c.Sources[0].Orbit.SemimajorLs = 1e5, 1000
	rows, err := Arrears(c, nil, c.Sessions[0].Start)
	if err != nil {
		t.Fatal(err)
	}
	if !strings.Contains(rows[0].Why, "; next 2095-") {
		t.Error(rows[0].Why)
	}
}
