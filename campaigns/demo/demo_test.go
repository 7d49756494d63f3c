package demo_test

import (
	"math"
	"path"
	"strings"
	"testing"
	"time"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/campaigns/demo"
)

func load(t *testing.T) *campaigns.Campaign {
	t.Helper()
	c, err := campaigns.LoadFS(demo.Files, "demonstration")
	if err != nil {
		t.Fatalf("the loader refuses the demonstration:\n%v", err)
	}
	return c
}

func logbook(t *testing.T) []campaigns.Entry {
	t.Helper()
	f, err := demo.Files.Open("logbook.csv")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	l, complaints := campaigns.ReadLogbook(f, "logbook.csv")
	if len(complaints) > 0 {
		t.Fatalf("the reader refuses lines of the logbook:\n%v", complaints)
	}
	return l.Effective()
}

func sourcesByName(c *campaigns.Campaign) map[string]*campaigns.Source {
	out := map[string]*campaigns.Source{}
	for i := range c.Sources {
		out[c.Sources[i].Name] = &c.Sources[i]
	}
	return out
}

func aimsOf(s *campaigns.Source, kind campaigns.AimKind) []campaigns.Aim {
	var out []campaigns.Aim
	for _, a := range s.Aims {
		if a.Kind == kind {
			out = append(out, a)
		}
	}
	return out
}

// kinds counts the sources of each chapter by what defines it, not by the file they stand in.
func kinds(c *campaigns.Campaign) map[string]int {
	n := map[string]int{}
	for i := range c.Sources {
		s := &c.Sources[i]
		if s.Spin == nil {
			if len(aimsOf(s, campaigns.Calibration)) == len(s.Aims) {
				n["calibrator"]++
			}
			continue
		}
		period := 1 / s.Spin.FrequencyHz
		switch {
		case period > 0.3:
			n["slow"]++
		case period > 0.05:
			n["young"]++
		case period < 0.03:
			n["millisecond"]++
		}
		if s.GlitchMJD > 0 {
			n["glitched"]++
		}
		if s.Spin.SigmaFrequencyHz > 1e-8 && period < 0.05 {
			n["new"]++
		}
		if o := s.Orbit; o != nil {
			n["binary"]++
			switch {
			case o.Eccentricity > 0.15:
				n["eccentric"]++
			case o.Eccentricity < 0.01:
				n["circular"]++
			}
			if o.Eclipse != nil {
				n["eclipsing"]++
			}
			if o.SinI > 0.999 {
				n["edge-on"]++
			}
			if o.Decay < 0 && o.AdvanceDegPerYr > 1 {
				n["relativistic"]++
			}
			if o.PeriodDays < 0.1 {
				n["orbit of an hour or two"]++
			}
			if o.PeriodDays > 140 {
				n["orbit of months"]++
			}
		}
	}
	return n
}

func TestEveryFileSaysThatItIsInvented(t *testing.T) {
	names := []string{"campaign.toml"}
	entries, err := demo.Files.ReadDir("sources")
	if err != nil {
		t.Fatal(err)
	}
	for _, e := range entries {
		names = append(names, path.Join("sources", e.Name()))
	}
	for _, name := range names {
		text, err := demo.Files.ReadFile(name)
		if err != nil {
			t.Fatal(err)
		}
		if head := string(text[:min(600, len(text))]); !strings.Contains(strings.ToLower(head), "invented") {
			t.Errorf("the head of %s does not say that its contents are invented", name)
		}
	}
}

func TestAllKindsOfSources(t *testing.T) {
	c := load(t)
	if len(c.Sources) < 44 {
		t.Errorf("%d sources, at least 44 are wanted", len(c.Sources))
	}
	n := kinds(c)
	for kind, least := range map[string]int{"slow": 7, "young": 2, "glitched": 1, "millisecond": 18, "new": 2,
		"binary": 10, "circular": 5, "eccentric": 4, "eclipsing": 1, "edge-on": 1, "relativistic": 1,
		"orbit of an hour or two": 1, "orbit of months": 1, "calibrator": 4} {
		if n[kind] < least {
			t.Errorf("%d sources are %s, at least %d are wanted", n[kind], kind, least)
		}
	}
	aims := map[campaigns.AimKind]int{}
	for _, s := range c.Sources {
		for _, a := range s.Aims {
			aims[a.Kind]++
		}
	}
	for _, kind := range []campaigns.AimKind{campaigns.Cadence, campaigns.PhaseCoverage, campaigns.Conjunction,
		campaigns.Measure, campaigns.Connect, campaigns.Calibration} {
		if aims[kind] == 0 {
			t.Errorf("no source has the aim %s", kind)
		}
	}
}

func TestTenSessionsLieAhead(t *testing.T) {
	c := load(t)
	if len(c.Receivers) != 2 || len(c.Sessions) != 10 {
		t.Fatalf("%d receivers and %d sessions, 2 and 10 are wanted", len(c.Receivers), len(c.Sessions))
	}
	if first := c.Sessions[0].Start.Sub(demo.Now()); first != 3*time.Hour {
		t.Errorf("the first session begins %v after the demonstration's now, 3h is wanted", first)
	}
	single, withBreaks := 0, 0
	for i, s := range c.Sessions {
		if hours := s.End.Sub(s.Start).Hours(); hours < 4 || hours > 11 {
			t.Errorf("%s lasts %.1f h, 4 to 11 are wanted", s.Name, hours)
		}
		if i > 0 && s.Start.Before(c.Sessions[i-1].End) {
			t.Errorf("%s begins before the one before it has ended", s.Name)
		}
		if len(s.Receivers) == 1 {
			single++
		}
		if len(s.Breaks) > 0 {
			withBreaks++
		}
	}
	if single != 1 || withBreaks < 3 {
		t.Errorf("%d sessions with one receiver and %d with breaks, 1 and at least 3 are wanted", single, withBreaks)
	}
}

func TestLogbookSpansTheCampaign(t *testing.T) {
	c, entries := load(t), logbook(t)
	first, last := entries[0].Start, entries[len(entries)-1].End
	if first.AddDate(0, 18, 0).After(last) {
		t.Errorf("the logbook runs from %v to %v, at least 18 months are wanted", first, last)
	}
	if !last.Before(demo.Now()) {
		t.Errorf("the last line ends at %v, after the demonstration's now", last)
	}
	known := sourcesByName(c)
	outcomes := map[campaigns.Outcome]int{}
	for i, e := range entries {
		outcomes[e.Outcome]++
		if known[e.Source] == nil {
			t.Errorf("line %d: no source is called %q", e.Line, e.Source)
		}
		if e.Site != c.Sites[0].Name || e.Receiver != "L" && e.Receiver != "U" {
			t.Errorf("line %d: unknown site %q or receiver %q", e.Line, e.Site, e.Receiver)
		}
		if !e.End.After(e.Start) {
			t.Errorf("line %d ends before it starts", e.Line)
		}
		if i > 0 && e.Start.Before(entries[i-1].End) {
			t.Errorf("line %d starts at %v, before the end of the one before it", e.Line, e.Start)
		}
	}
	if outcomes[campaigns.Done] < 1500 || outcomes[campaigns.Partial] < 40 || outcomes[campaigns.Lost] < 40 {
		t.Errorf("outcomes %v: a campaign with good and bad days is wanted", outcomes)
	}
	if text, _ := demo.Files.ReadFile("logbook.csv"); len(text) > 400_000 {
		t.Errorf("the logbook has %d bytes, at most 400000 are wanted", len(text))
	}
}

func arrears(t *testing.T) []campaigns.AccountRow {
	t.Helper()
	f, err := demo.Files.Open("logbook.csv")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	l, complaints := campaigns.ReadLogbook(f, "logbook.csv")
	if len(complaints) > 0 {
		t.Fatal(complaints)
	}
	rows, err := campaigns.Arrears(load(t), l, demo.Now())
	if err != nil {
		t.Fatal(err)
	}
	return rows
}

// TestSomeAreOverdue: the demonstration must have something to catch up with, and something in hand.
func TestSomeAreOverdue(t *testing.T) {
	inHand, overdue, badly, worst := 0, 0, 0, ""
	for _, r := range arrears(t) {
		switch {
		case r.Kind != campaigns.Cadence:
		case r.Debt < 1:
			inHand++
		case r.Debt < 2.5:
			overdue++
		default:
			badly++
			if worst == "" {
				worst = r.Source
			}
		}
	}
	if inHand < 4 || overdue < 15 || badly < 4 {
		t.Errorf("%d cadences in hand, %d overdue, %d badly: all three are wanted", inHand, overdue, badly)
	}
	if worst != "J1906+2042" {
		t.Errorf("%s is worst in arrears, its remark says that J1906+2042 is", worst)
	}
}

// TestOrbitsAreConsistent works the masses back from what the files say.
//
//	4π² x³/(T PB²) = (m2 s)³/(m1+m2)²
//
// Where companion and inclination are given, the pulsar's own mass must be that of a neutron star, and the
// relativistic effects those of general relativity for the two masses.
func TestOrbitsAreConsistent(t *testing.T) {
	const sunSec = 4.925490947e-6
	checked, relativistic := 0, 0
	for _, s := range load(t).Sources {
		o := s.Orbit
		if o == nil {
			continue
		}
		pb := o.PeriodDays * 86400
		f := 4 * math.Pi * math.Pi * math.Pow(o.SemimajorLs, 3) / (sunSec * pb * pb)
		if f < 1e-6 || f > 0.5 {
			t.Errorf("%s: mass function %.3g Msun", s.Name, f)
		}
		if o.CompanionMsun == 0 || o.SinI == 0 {
			continue
		}
		checked++
		total := math.Sqrt(math.Pow(o.CompanionMsun*o.SinI, 3) / f)
		pulsar := total - o.CompanionMsun
		if pulsar < 1.2 || pulsar > 2.1 {
			t.Errorf("%s: the pulsar would have %.3f Msun", s.Name, pulsar)
		}
		if o.AdvanceDegPerYr == 0 {
			continue
		}
		relativistic++
		e2, n := o.Eccentricity*o.Eccentricity, 2*math.Pi/pb
		advance := 3 * math.Pow(n, 5.0/3) * math.Pow(sunSec*total, 2.0/3) / (1 - e2) * 180 / math.Pi * 86400 * 365.25
		if math.Abs(advance/o.AdvanceDegPerYr-1) > 1e-3 {
			t.Errorf("%s: advance %.5g deg/yr, general relativity asks for %.5g", s.Name, o.AdvanceDegPerYr, advance)
		}
		shape := (1 + 73*e2/24 + 37*e2*e2/96) / math.Pow(1-e2, 3.5)
		decay := -192 * math.Pi / 5 * math.Pow(n*sunSec, 5.0/3) * shape * pulsar * o.CompanionMsun / math.Cbrt(total)
		if math.Abs(decay/o.Decay-1) > 2e-3 {
			t.Errorf("%s: decay %.4g, general relativity asks for %.4g", s.Name, o.Decay, decay)
		}
	}
	if checked < 3 || relativistic < 1 {
		t.Errorf("%d orbits with both masses and %d relativistic ones, at least 3 and 1 are wanted", checked, relativistic)
	}
}

// TestCountsOfTurnsRunOut follows the remarks: by which session a count of turns is no longer sure if nothing is
// observed before, and that it still is at the session before that one.
func TestCountsOfTurnsRunOut(t *testing.T) {
	sessions := load(t).Sessions
	due := map[string]time.Time{}
	for _, r := range arrears(t) {
		if r.Kind == campaigns.Connect {
			due[r.Source] = r.Due
		}
	}
	for name, want := range map[string]string{
		"J0212+1858": "2026-12-07 morning",
		"J2304+5707": "2026-12-12 evening",
		"J0755-0913": "2026-12-30 night",
	} {
		first := "none"
		for _, s := range sessions {
			if !due[name].IsZero() && due[name].Before(s.Start) {
				first = s.Name
				break
			}
		}
		if first != want {
			t.Errorf("%s: the count of turns runs out on %v, by the session %s; its remark says %s", name, due[name], first, want)
		}
	}
}
