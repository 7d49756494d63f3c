package campaigns

import (
	"math"
	"strings"
	"testing"
	"testing/fstest"
	"time"

	"example.org/tallystick/sched"
)

// pulsarIn is a campaign with three receivers and one pulsar, whose aim is given.
func pulsarIn(aim Aim) *Campaign {
	rec := func(name string, lo, hi, tsys, gain float64) Receiver {
		return Receiver{Name: name, Site: "Open", BandMHz: [2]float64{lo, hi}, TsysK: tsys, GainKPerJy: gain, Polarizations: 2}
	}
	start := time.Date(2026, 12, 3, 0, 0, 0, 0, time.UTC)
	site := *openSite(60, 0)
	site.AzimuthTravelDeg, site.AccelerationDegPerS2 = [2]float64{-270, 270}, [2]float64{1, 1}
	return &Campaign{
		Sites:     []Site{site},
		Receivers: []Receiver{rec("P", 400, 460, 60, 1), rec("L", 1250, 1550, 28, 1), rec("S", 2200, 2700, 30, 1)},
		Sources: []Source{{
			Name: "A", RADeg: 10, DecDeg: 80, PositionMJD: j2000, Priority: 1, WidthMs: 0.1,
			Spin: &Spin{FrequencyHz: 200, EpochMJD: 61000, SigmaFrequencyHz: 1e-11}, Flux: &Flux{MJy: 2, AtMHz: 1400, SpectralIndex: -1.6},
			Aims: []Aim{aim},
		}},
		Sessions: []Session{{Name: "night", Site: "Open", Start: start, End: start.Add(8 * time.Hour), Receivers: []string{"P", "L", "S"}}},
	}
}

// arrearsOf is the account of the only aim, and the session prepared.
func arrearsOf(t *testing.T, c *Campaign) (AccountRow, *Prepared) {
	t.Helper()
	p, err := Prepare(c, nil, &c.Sessions[0], PrepareOptions{At: c.Sessions[0].Start})
	if err != nil {
		t.Fatal(err)
	}
	if err := p.Problem.Check(); err != nil {
		t.Fatal(err)
	}
	return p.Accounts[0], p
}

func TestWhatNoAmountOfTimeReaches(t *testing.T) {
	aim := Aim{Kind: Cadence, Receivers: []string{"L", "S"}, ToaUs: 0.5, MinFraction: 0.6, EveryDays: 14, PairDays: 2}
	c := pulsarIn(aim)
	c.Receivers, c.Sessions[0].Receivers = c.Receivers[1:], []string{"L", "S"}
	if row, p := arrearsOf(t, c); len(row.Flags) > 0 || strings.Contains(row.Why, "answer") || len(p.Problem.Jobs[0].Terms) == 0 {
		t.Errorf("what can be had is flagged: %q, %q", row.Flags, row.Why)
	}
	c.Sources[0].FloorUs = 0.6
	row, p := arrearsOf(t, c)
	if flags := strings.Join(row.Flags, ", "); flags != "no answer with L, no answer with S" {
		t.Errorf("below the floor: flags %q", flags)
	}
	if !strings.Contains(row.Why, "; no answer with L+S: 0.5 µs is wanted, and no amount of time goes below the floor, 0.6 µs") {
		t.Errorf("below the floor: %q", row.Why)
	}
	for _, j := range p.Problem.Jobs {
		if len(j.Terms) > 0 || j.Facts.DebtAim == "" {
			t.Errorf("below the floor: %d terms, owed %q", len(j.Terms), j.Facts.DebtAim)
		}
	}
	c.Sources[0].FloorUs, c.Sources[0].Flux.SpectralIndex = 0, -10
	if row, _ := arrearsOf(t, c); strings.Join(row.Flags, ", ") != "too faint for S" || !strings.Contains(row.Why, "0.5 µs takes ") || !strings.Contains(row.Why, " h with S, longer than any session") {
		t.Errorf("too faint: %q, %q", row.Flags, row.Why)
	}
	c.Sources[0].Flux = nil
	if row, _ := arrearsOf(t, c); !strings.Contains(row.Why, "no answer with L+S: the expected signal is not known: flux density") || strings.Contains(row.Why, "\n") {
		t.Errorf("no flux: %q", row.Why)
	}
}

// One scintle larger than band and visit: the intensity is exponential, and 1/e of visits have the mean flux or more (check
// value RAD-064). Many scintles leave a steady source.
func TestScintillationIsTold(t *testing.T) {
	c := pulsarIn(Aim{Kind: Cadence, Receivers: []string{"L"}, ToaUs: 0.5, MinFraction: 0.6, EveryDays: 14, PairDays: 2})
	c.Sources[0].Scintillation = &Scintillation{Minutes: 1e4, MHz: 1e5, AtMHz: 1400}
	row, p := arrearsOf(t, c)
	if strings.Join(row.Flags, ",") != "scintillates" || !strings.Contains(row.Why, "scintillation lets 37 % of visits of") {
		t.Errorf("%q, %q", row.Flags, row.Why)
	}
	term := p.Problem.Jobs[0].Terms[0]
	if !strings.HasSuffix(term.Why, "with L reach 0.5 µs") {
		t.Errorf("%q", term.Why)
	}
	ps := &p.sources[0]
	if s := ps.scatter(1, 0, 30); math.Abs(s-1) > 0.01 {
		t.Errorf("the S/N scatters by %.3f, one scintle by 1", s)
	}
	c.Sources[0].Scintillation = &Scintillation{Minutes: 0.01, MHz: 0.01, AtMHz: 1400}
	row, p = arrearsOf(t, c)
	// The S/N that is wanted is the mean: half of the visits reach it, however little they scatter.
	if s := p.sources[0].scatter(1, 0, 30); s > 0.01 || !strings.Contains(row.Why, "50 % of visits") {
		t.Errorf("%.4f, %q", s, row.Why)
	}
}

// A pair far apart in frequency frees the arrival time of dispersion better than one side by side: L+S are wanted, P+L would give
// less than half the error (the rule of check values DIS-031, -033).
func TestTheBetterPairIsNamed(t *testing.T) {
	aim := Aim{Kind: Cadence, Receivers: []string{"L", "S"}, Minutes: 30, MinFraction: 0.6, EveryDays: 14, PairDays: 2}
	row, _ := arrearsOf(t, pulsarIn(aim))
	if len(row.Flags) != 1 || !strings.HasPrefix(row.Flags[0], "P+L would be better: ") || !strings.Contains(row.Flags[0], ", DM to ") {
		t.Errorf("%q", row.Flags)
	}
	aim.Receivers = []string{"P", "L"}
	if row, _ := arrearsOf(t, pulsarIn(aim)); len(row.Flags) > 0 {
		t.Errorf("the best pair: %q", row.Flags)
	}
	aim.Receivers = []string{"L"}
	if row, _ := arrearsOf(t, pulsarIn(aim)); len(row.Flags) > 0 {
		t.Errorf("no pair: %q", row.Flags)
	}
}

// Near the Sun the visits of a pair lie closer together: 5 degrees from it within hours (elongations of check values BAR-030
// and -031, J1614-2230, which the Sun passes at 1.26 degrees on 2 December 2026).
func TestPairsNearTheSun(t *testing.T) {
	at := time.Date(2026, 12, 2, 0, 0, 0, 0, time.UTC)
	c := pulsarIn(Aim{Kind: Cadence, Receivers: []string{"P", "L"}, Minutes: 30, MinFraction: 0.6, EveryDays: 14, PairDays: 2})
	src := &c.Sources[0]
	src.RADeg, src.DecDeg = 243.652115042, -22.508691936
	account := func(days float64) (AccountRow, cadenceAccount) {
		log := &Logbook{Entries: []Entry{{Start: at.Add(time.Duration(days * 24 * float64(time.Hour))), Site: "Open", Source: "A", Receiver: "P", Outcome: Done, Quality: 1}}}
		log.Entries[0].End = log.Entries[0].Start.Add(time.Hour)
		now := log.Entries[0].End.Add(20 * time.Hour)
		b := open(c, log, now)
		k, err := newKnowledge(src, b.frames)
		if err != nil {
			t.Fatal(err)
		}
		row, err := b.accountRow(k, &src.Aims[0])
		if err != nil {
			t.Fatal(err)
		}
		return row, b.cadence(src, &src.Aims[0])
	}
	if row, a := account(-100); !a.Open || strings.Contains(row.Why, "Sun") {
		t.Errorf("far from the Sun: open %v, %q", a.Open, row.Why)
	}
	row, a := account(-4)
	if a.Open || !strings.Contains(row.Why, "° from the Sun: pair within ") || !strings.Contains(row.Why, " h") {
		t.Errorf("near the Sun: open %v, %q", a.Open, row.Why)
	}
	for _, n := range a.needs {
		if !strings.Contains(n.Why, "from the Sun") {
			t.Errorf("near the Sun: %q", n.Why)
		}
	}
}

// The jitter of a pulsar that was never measured follows from its width and the number of pulses (RAD-052): one or the other is said.
func TestJitterFraction(t *testing.T) {
	const spin = "spin = { frequency_hz = 187.44, epoch_mjd = 60800, sigma_frequency_hz = 5e-12 }\n"
	with := func(line string) string { return strings.Replace(starterText, spin, spin+line, 1) }
	if s := loadStarter(t, with("jitter_fraction = 0.33\n")).Sources[1]; s.JitterFraction != 0.33 {
		t.Fatalf("%+v", s)
	} else if got, want := s.pulsar(0, 90).JitterUsPerHour, 0.33*200/math.Sqrt(3600*187.44); math.Abs(got/want-1) > 1e-12 {
		t.Errorf("%g µs in an hour, want %g", got, want)
	}
	text := strings.NewReplacer("NIGHT", "night", "START", "2027-01-01T19:00:00Z", "END", "2027-01-02T03:00:00Z").Replace(with("jitter_fraction = 0.33\njitter_us_per_hour = 0.1\n"))
	if _, err := LoadFS(fstest.MapFS{CampaignFile: {Data: []byte(text)}}, ""); err == nil || !strings.Contains(err.Error(), "not both") {
		t.Errorf("both: %v", err)
	}
}

// A receiver with channels hears less of a dispersed pulsar, and one whose channels are wider than its band is refused.
func TestChannelsSmear(t *testing.T) {
	aim := Aim{Kind: Cadence, Receivers: []string{"P"}, Minutes: 30, MinFraction: 0.6, EveryDays: 14, PairDays: 2}
	c := pulsarIn(aim)
	c.Sources[0].DMPcPerCm3 = 30
	sharp := c.Sources[0].setup(&c.Receivers[0])
	c.Receivers[0].ChannelMHz = 0.5
	smeared := c.Sources[0].setup(&c.Receivers[0])
	if a, b := sharp.TOAErrorUs(30, 90), smeared.TOAErrorUs(30, 90); !(b > 2*a) {
		t.Errorf("sharp %g µs, smeared %g", a, b)
	}
	text := strings.NewReplacer("NIGHT", "night", "START", "2027-01-01T19:00:00Z", "END", "2027-01-02T03:00:00Z",
		"gain_k_per_jy = 0.5\n", "gain_k_per_jy = 0.5\nchannel_mhz = 400\n").Replace(starterText)
	if _, err := LoadFS(fstest.MapFS{CampaignFile: {Data: []byte(text)}}, ""); err == nil || !strings.Contains(err.Error(), "at most the width of the band, 260") {
		t.Errorf("too wide: %v", err)
	}
}

// A source that is timed with a Gaussian's template: smaller errors, fewer minutes, heavier visits, and the slot says by which rule.
func TestGaussianTemplate(t *testing.T) {
	const width = "width_ms = 0.2                     # full width of the pulse at half its height\n"
	if !strings.Contains(starterText, width+"# template = \"gaussian\"") {
		t.Fatal("the starter campaign does not show the key")
	}
	src := loadStarter(t, strings.Replace(starterText, width+"# template", width+"template", 1)).Sources[1]
	if src.Template != GaussianTemplate || !src.pulsar(0, 90).GaussianPulse || loadStarter(t, starterText).Sources[1].Template != "" {
		t.Fatalf("%+v", src)
	}
	const share = 0.73685 * 0.73685 // of the minutes, by noise alone
	aim := Aim{Kind: Cadence, Receivers: []string{"L"}, ToaUs: 0.5, MinFraction: 0.6, EveryDays: 14, PairDays: 2}
	plain, matched := pulsarIn(aim), pulsarIn(aim)
	matched.Sources[0].Template = GaussianTemplate
	_, before := arrearsOf(t, plain)
	_, after := arrearsOf(t, matched)
	a, b := before.Problem.Jobs[0].Terms[0].Wanted, after.Problem.Jobs[0].Terms[0].Wanted
	if got := float64(b) / float64(a); math.Abs(got/share-1) > 0.01 {
		t.Errorf("%d minutes wanted, %d with the template: %.4f", a, b, got)
	}
	for _, c := range []struct {
		prepared *Prepared
		rule     string
		factor   float64
	}{{before, "W/(S/N)", 1}, {after, "a matched Gaussian template, 0.74 W/(S/N)", 0.73685}} {
		row := c.prepared.slotRow(sched.Plan{Slots: []sched.Slot{{Node: 0, Start: 60, End: 90}}}, 0)
		if want := c.factor * 100 / row.SNR; row.ToaRule != c.rule || math.Abs(row.ToaUs/want-1) > 1e-4 {
			t.Errorf("TOA error %g µs by %q, want %g", row.ToaUs, row.ToaRule, want)
		}
	}
	// A visit of the same length goes into the timing model with the smaller error.
	errorOfMinute := func(template string) float64 {
		c := pulsarIn(Aim{Kind: Measure, Receivers: []string{"L"}, Minutes: 30, MinFraction: 0.6, Parameter: "position", GoalPercent: 1})
		c.Sources[0].Template, c.Sources[0].SigmaPositionMas = template, [2]float64{5, 6}
		_, p := arrearsOf(t, c)
		b, ps := open(c, nil, p.Session.Start), &p.sources[0]
		m, err := b.measured(ps.knowledge, &c.Sources[0].Aims[0])
		if err != nil {
			t.Fatal(err)
		}
		jb := jobBuilder{prepared: p, books: b, source: ps, receiver: p.Problem.Jobs[0].Receiver, job: &p.Problem.Jobs[0]}
		v, err := jb.visits(m, 30)
		if err != nil {
			t.Fatal(err)
		}
		return v.length[60].SigmaUs
	}
	if got := errorOfMinute(GaussianTemplate) / errorOfMinute(""); math.Abs(got-0.73685) > 1e-5 {
		t.Errorf("in the timing model the error is %.5f of the plain rule's", got)
	}
}
