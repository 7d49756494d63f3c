package campaigns

import (
	"math"
	"os"
	"slices"
	"strings"
	"testing"
	"testing/fstest"
	"time"

	"example.org/tallystick/sky/orbit"
)

// loadWith loads the small sample with the orbit of its only binary put in the place of another.
func loadWith(t *testing.T, orbitText string) *Campaign {
	t.Helper()
	text, err := os.ReadFile("testdata/broken/sin-i.toml")
	if err != nil {
		t.Fatal(err)
	}
	before, after, ok := strings.Cut(string(text), "[source.orbit]\n")
	_, rest, ok2 := strings.Cut(after, "#>> sin_i | at most 1\n")
	if !ok || !ok2 {
		t.Fatal("the file has changed")
	}
	c, err := LoadFS(fstest.MapFS{CampaignFile: {Data: []byte(before + "[source.orbit]\n" + orbitText + rest)}}, "")
	if err != nil {
		t.Fatal(err)
	}
	return c
}

// The published series of J0023+0923 (Arzoumanian et al. 2018, ApJS 235, 37; check values ORB-056, -057): 26,315.004 orbits
// in ten years, a decay of 2.689e-12.
func TestFrequencySeriesInsteadOfThePeriod(t *testing.T) {
	c := loadWith(t, "frequency_series = [8.338721549e-5, -1.87e-20, 2.4e-28]\nascending_node_mjd = 55000.0\nsemimajor_ls = 0.03\n")
	o := c.Sources[0].Orbit
	if want := 1 / 8.338721549e-5 / 86400; math.Abs(o.PeriodDays-want) > 1e-12 {
		t.Errorf("period %v, want %v", o.PeriodDays, want)
	}
	k, err := newKnowledge(&c.Sources[0], newFrames())
	if err != nil {
		t.Fatal(err)
	}
	if off := math.Abs(k.clock.orbit.Phase(55000+3652.5) - 0.004241428); off > 1e-6 {
		t.Errorf("phase after ten years is off by %g turns", off)
	}
	if math.Abs(k.clock.orbit.Decay-2.6893211e-12) > 1e-17 {
		t.Errorf("decay %g", k.clock.orbit.Decay)
	}
}

// An orbit's error is told from all that the file says of it: from the middle of the data, from the semimajor axis where the
// orbit is nearly circular, from proper motion and parallax where no decay was measured.
func TestOrbitSigmas(t *testing.T) {
	s := Source{ParallaxMas: 2, PMMasPerYr: [2]float64{30, 40}, Orbit: &Orbit{
		PeriodDays: 1, AscendingNodeMJD: 50000, SemimajorLs: 1, SigmaEpochDays: 1e-9, SigmaPeriodDays: 1e-8, DataMJD: [2]float64{55000, 57000},
	}}
	k, err := newKnowledge(&s, newFrames())
	if err != nil {
		t.Fatal(err)
	}
	p := k.clock.orbit.ConjunctionError(s.orbitSigmas(), 56000)
	if math.Abs(p.SigmaDays-1e-9) > 1e-12 || !slices.Contains(p.Cautions, orbit.DecayBounded) {
		t.Errorf("in the middle of the data: %+v", p)
	}
	s.Orbit.SigmaDecay = 1e-12
	if p := k.clock.orbit.ConjunctionError(s.orbitSigmas(), 57000); p.SigmaDays < 1e-5 || slices.Contains(p.Cautions, orbit.DecayBounded) {
		t.Errorf("with the error of the decay: %+v", p)
	}
}

// Eclipses are longer at low frequencies (Fruchter et al. 1990, ApJ 351, 642: 50 min at 430 MHz, 56 at 318, index −0.41), so the
// windows of one source differ by receiver, and the list of conjunctions names the receivers.
func TestEclipsesByReceiver(t *testing.T) {
	start := time.Date(2026, 12, 3, 0, 0, 0, 0, time.UTC)
	period := 0.3819666069
	site := *openSite(60, 0)
	site.ElevationLimitsDeg, site.AzimuthTravelDeg, site.AccelerationDegPerS2 = [2]float64{1, 90}, [2]float64{-270, 270}, [2]float64{1, 1}
	rec := func(name string, mhz float64) Receiver {
		return Receiver{Name: name, Site: "Open", BandMHz: [2]float64{mhz - 10, mhz + 10}, TsysK: 50, GainKPerJy: 1, Polarizations: 2}
	}
	c := &Campaign{
		Sites: []Site{site}, Receivers: []Receiver{rec("430", 430), rec("318", 318)},
		Sources: []Source{{
			Name: "A", RADeg: 10, DecDeg: 80, PositionMJD: j2000, Priority: 1,
			Orbit: &Orbit{PeriodDays: period, AscendingNodeMJD: 60000, SemimajorLs: 0.09, Eclipse: &Eclipse{
				HalfWidthTurns: 25.0 / 1440 / period, CentreTurns: 0.25, MarginTurns: 0.01, ReferenceMHz: 430, Index: -0.41,
			}},
			Aims: []Aim{{Kind: Cadence, Receivers: []string{"430", "318"}, EveryDays: 7, PairDays: 1, Minutes: 20, MinFraction: 0.6}},
		}},
		Sessions: []Session{{Name: "night", Site: "Open", Start: start, End: start.Add(20 * time.Hour), Receivers: []string{"430", "318"}}},
	}
	p, err := Prepare(c, nil, &c.Sessions[0], PrepareOptions{At: start})
	if err != nil {
		t.Fatal(err)
	}
	gaps := map[string]int{}
	for _, n := range p.Problem.Nodes {
		name := p.Problem.Receivers[p.Problem.Jobs[n.Job].Receiver].Name
		for i := 1; i < len(n.Open); i++ {
			if gap := n.Open[i].From - n.Open[i-1].To; gap > gaps[name] {
				gaps[name] = gap
			}
			if !strings.HasPrefix(n.Open[i].OpensBy, "eclipse") {
				t.Errorf("a window opens by %q", n.Open[i].OpensBy)
			}
		}
	}
	// Whole minutes, rounded outward.
	if g := gaps["430"]; g < 50 || g > 52 {
		t.Errorf("hidden for %d min at 430 MHz, 50 are published", g)
	}
	if g := gaps["318"]; g < 56 || g > 59 {
		t.Errorf("hidden for %d min at 318 MHz, 56 ± 1.5 are published", g)
	}
	if err := p.Problem.Check(); err != nil {
		t.Error(err)
	}
	rows, _, err := Conjunctions(c, &c.Sites[0], start, start.AddDate(0, 0, 1))
	if err != nil {
		t.Fatal(err)
	}
	heard := map[string]int{}
	for _, r := range rows {
		if r.Kind == EclipseStart {
			heard[strings.Join(r.Receivers, "+")]++
		} else if r.Kind == SuperiorConjunction && r.Receivers != nil {
			t.Errorf("a conjunction is for %v only", r.Receivers)
		}
	}
	if heard["430"] < 2 || heard["430"] != heard["318"] || len(heard) != 2 {
		t.Errorf("eclipses by receiver: %v", heard)
	}
}

// A widened window may reach into a session although the conjunction and the wanted half-width do not; a wide orbit's own light
// time may carry a passage into it.
func TestPassagesFromFarAway(t *testing.T) {
	s := Source{Name: "A", RADeg: 10, DecDeg: 80, PositionMJD: j2000, Orbit: &Orbit{
		PeriodDays: 400, AscendingNodeMJD: 60000, SemimajorLs: 20000, SigmaEpochDays: 3, SigmaPeriodDays: 1e-6,
	}}
	k, err := newKnowledge(&s, newFrames())
	if err != nil {
		t.Fatal(err)
	}
	mjd := k.clock.orbit.Conjunctions(orbit.Superior, 61000, 61400)[0]
	heard := k.clock.heardAt(mjd)
	if late := heard.Sub(utcOf(mjd)); late < 5*time.Hour || late > 6*time.Hour {
		t.Errorf("heard %v after it left, across 20,000 light-seconds", late)
	}
	if got := k.superior(0.01, heard.Add(-time.Minute), heard.Add(time.Minute)); len(got) != 1 || !got[0].centre.Equal(heard) {
		t.Errorf("at the conjunction: %v", got)
	}
	wide := k.superior(0.01, heard.Add(10*24*time.Hour), heard.Add(11*24*time.Hour))
	if len(wide) != 1 || wide[0].halfWide < 12*24*time.Hour {
		t.Errorf("in the widened part of the window: %v", wide)
	}
}
