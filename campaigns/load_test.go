package campaigns

import (
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strings"
	"testing"
	"testing/fstest"
	"time"

	"github.com/google/go-cmp/cmp"
)

// mustLoad loads a campaign that is sound.
func mustLoad(t testing.TB, dir string) *Campaign {
	t.Helper()
	c, err := Load(dir)
	if err != nil {
		t.Fatal(err)
	}
	return c
}

func utc(t testing.TB, s string) time.Time {
	t.Helper()
	when, err := time.Parse(time.RFC3339, s)
	if err != nil {
		t.Fatal(err)
	}
	return when.UTC()
}

func TestLoadSampleReadsEveryKey(t *testing.T) {
	c := mustLoad(t, "testdata/sample")
	madrid, err := time.LoadLocation("Europe/Madrid")
	if err != nil {
		t.Fatal(err)
	}
	main := filepath.Join("testdata", "sample", "campaign.toml")
	want := &Campaign{
		Name: "Alder Flat millisecond watch",
		Sites: []Site{{
			Name: "Alder Flat", LatitudeDeg: 38.21, LongitudeDeg: -4.63, HeightM: 812, DUT1Sec: 0.03, TimeZone: madrid,
			ElevationLimitsDeg: [2]float64{8, 87}, AzimuthTravelDeg: [2]float64{-270, 270}, SlewDegPerMin: [2]float64{24, 12},
			AccelerationDegPerS2: [2]float64{0.1, 0.1}, SettleSec: 20, SunLimitDeg: 5,
			HorizonDeg: [][2]float64{{0, 9}, {60, 14.5}, {110, 8}}, Mount: AltAz,
			Refraction: &Refraction{PressureHPa: 985, TemperatureC: 12, Humidity: 0.55},
		}, {
			Name: "Birch Sands", LatitudeDeg: -29.5, LongitudeDeg: 140.2, HeightM: 60, TimeZone: time.UTC,
			ElevationLimitsDeg: [2]float64{15, 90}, HourAngleLimitsDeg: [2]float64{-75, 75}, SlewDegPerMin: [2]float64{15, 15},
			AccelerationDegPerS2: [2]float64{0.05, 0.05}, SettleSec: 30, SunLimitDeg: 10, Mount: Equatorial,
		}},
		Receivers: []Receiver{
			{Name: "L", Site: "Alder Flat", BandMHz: [2]float64{1210, 1510}, TsysK: 28, ZenithOpacity: 0.008, GainKPerJy: 0.55, Polarizations: 2, ChangeMin: 6},
			{Name: "S", Site: "Alder Flat", BandMHz: [2]float64{2200, 2700}, TsysK: 31, ZenithOpacity: 0.01, GainKPerJy: 0.52, Polarizations: 2, ChangeMin: 6},
			{Name: "P", Site: "Birch Sands", BandMHz: [2]float64{310, 340}, TsysK: 90, ZenithOpacity: 0.005, GainKPerJy: 1.1, Polarizations: 1, ChangeMin: 0},
		},
		Sources: []Source{{
			Name: "J0214+3322", RADeg: (2 + 14/60. + 7.812/3600) * 15, DecDeg: 33 + 22/60. + 10.44/3600,
			PMMasPerYr: [2]float64{4.1, -7.9}, PositionMJD: 58000, Priority: 3, SigmaPositionMas: [2]float64{0.2, 0.3}, ParallaxMas: 0.8,
			Spin:       &Spin{FrequencyHz: 291.31, DerivativeHzPerS: -1.2e-15, EpochMJD: 60000, SigmaFrequencyHz: 3e-12, SigmaDerivativeHzPerS: 2e-20, SigmaPhaseTurns: 1e-4},
			DMPcPerCm3: 21.3, Flux: &Flux{MJy: 1.4, AtMHz: 1400, SpectralIndex: -1.6}, WidthMs: 0.12, JitterUsPerHour: 0.05, FloorUs: 0.03,
			SkyK: 24, SunLimitDeg: 8, GlitchMJD: 59120.5,
			Orbit: &Orbit{
				PeriodDays: 1.53344945, AscendingNodeMJD: 58849.31217, SemimajorLs: 1.89799, CompanionMsun: 0.21, SinI: 0.999,
				SigmaPeriodDays: 2e-10, SigmaEpochDays: 1e-6, SigmaSemimajorLs: 2e-7, SigmaDecay: 1e-13, SigmaAdvance: 0.01,
				DataMJD: [2]float64{57023.5, 60310.25},
				Eclipse: &Eclipse{HalfWidthTurns: 0.05, CentreTurns: 0.26, MarginTurns: 0.01, ReferenceMHz: 1400, Index: -0.4},
			},
			Aims: []Aim{{
				Kind: Cadence, Receivers: []string{"L", "S"}, Minutes: 25, MinFraction: 0.6, MaxMinutes: 45, EveryDays: 14, PairDays: 2, Carry: 0.5,
				MinGapDays: 3, Ramp: &Ramp{From: utc(t, "2026-06-01T12:00:00Z"), FirstDays: 0.5, Factor: 2},
			}, {
				Kind: Conjunction, Receivers: []string{"L"}, Minutes: 2 * 0.06 * 1.53344945 * 1440, MinFraction: 0.6, MaxMinutes: 4 * 0.06 * 1.53344945 * 1440,
				HalfWidthTurns: 0.06, Wanted: 6, Since: utc(t, "2026-09-01T00:00:00Z"),
			}, {
				Kind: PhaseCoverage, Receivers: []string{"L", "S", "P"}, Minutes: 25, MinFraction: 0.6, MaxMinutes: 50, Bins: 12, PerBin: 2,
				Since: utc(t, "2026-01-01T00:00:00Z"),
			}, {
				Kind: Measure, Receivers: []string{"L", "S", "P"}, ToaUs: 0.4, MinFraction: 0.6, Parameter: "companion mass", GoalPercent: 5,
			}, {
				Kind: Connect, Receivers: []string{"L", "S", "P"}, Minutes: 25, MinFraction: 0.6, MaxMinutes: 50, MaxPhaseErrorTurns: 0.1,
			}},
			File: main, Line: 68,
		}, {
			Name: "C Bright", RADeg: 187.5, DecDeg: -2.25, PositionMJD: 51544.5, Priority: 1,
			Aims: []Aim{{Kind: Calibration, Receivers: []string{"L"}, Minutes: 5, MinFraction: 0.6, MaxMinutes: 10, PerSession: 1}},
			File: filepath.Join("testdata", "sample", "sources", "calibrators.toml"), Line: 1,
		}, {
			Name: "J1733-0418", RADeg: (17 + 33/60. + 12.5/3600) * 15, DecDeg: -(4 + 18/60. + 9/3600.), PositionMJD: 51544.5, Priority: 0.5,
			Orbit: &Orbit{PeriodDays: 32.7, PeriastronMJD: 60123.4, SemimajorLs: 17.1, Eccentricity: 0.71, PeriastronDeg: 214},
			Aims:  []Aim{{Kind: Cadence, Receivers: []string{"P"}, Minutes: 60, MinFraction: 0.6, MaxMinutes: 120, EveryDays: 21, PairDays: 3, Carry: 0.5}},
			File:  filepath.Join("testdata", "sample", "sources", "eccentric.toml"), Line: 3,
		}},
		Sessions: []Session{{
			Name: "2026-12-03 night", Site: "Alder Flat", Start: utc(t, "2026-12-03T18:00:00Z"), End: utc(t, "2026-12-04T04:30:00Z"),
			Receivers: []string{"L", "S"}, SlotOverheadMin: 1.5, Breaks: [][2]time.Time{
				{utc(t, "2026-12-03T23:00:00Z"), utc(t, "2026-12-03T23:20:00Z")},
				{utc(t, "2026-12-04T02:00:00Z"), utc(t, "2026-12-04T02:10:00Z")},
			},
		}, {
			Name: "2026-12-10 night", Site: "Alder Flat", Start: utc(t, "2026-12-10T18:00:00Z"), End: utc(t, "2026-12-11T04:30:00Z"), Receivers: []string{"L"},
		}},
	}
	sameZone := cmp.Comparer(func(a, b *time.Location) bool { return a.String() == b.String() })
	nearly := cmp.Comparer(func(a, b float64) bool { return a == b || a-b < 1e-12*a && b-a < 1e-12*b })
	if diff := cmp.Diff(want, c, sameZone, nearly); diff != "" {
		t.Errorf("-want +got:\n%s", diff)
	}
}

func TestSmallCampaignAndDemonstrationAreSound(t *testing.T) {
	small, err := Open("testdata/small")
	if err != nil {
		t.Fatal(err)
	}
	if n, e := len(small.Campaign.Sources), len(small.Logbook.Entries); n != 6 || e != 4 || len(small.Notices) > 0 {
		t.Errorf("%d sources, %d entries, notices %q; want 6, 4, none", n, e, small.Notices)
	}
	demo, err := OpenDemo()
	if err != nil {
		t.Fatal(err)
	}
	if n := len(demo.Campaign.Sources); n < 40 || len(demo.Notices) > 0 {
		t.Errorf("%d sources, notices %q; want at least 40, none", n, demo.Notices)
	}
	if _, fixed := demo.Now(); !fixed || !demo.Demo() {
		t.Error("the demonstration has no present of its own")
	}
}

// Every file in testdata/broken says in comments what must be complained about: after two arrows stand
// words that the complaint of that line must contain, in any order, and another pair of arrows for another
// complaint. Nothing else may be complained about.
func TestBroken(t *testing.T) {
	files, err := filepath.Glob("testdata/broken/*.toml")
	if err != nil || len(files) < 10 {
		t.Fatalf("%d files, %v", len(files), err)
	}
	for _, file := range files {
		t.Run(strings.TrimSuffix(filepath.Base(file), ".toml"), func(t *testing.T) {
			text, err := os.ReadFile(file)
			if err != nil {
				t.Fatal(err)
			}
			_, err = LoadFS(fstest.MapFS{CampaignFile: {Data: text}}, "")
			var got Complaints
			if !errors.As(err, &got) {
				t.Fatalf("error %v; want complaints", err)
			}
			var whole, want []string // of the whole file, and of a line: the line and the words
			for i, line := range strings.Split(string(text), "\n") {
				for _, words := range strings.Split(line, "#>>")[1:] {
					want = append(want, fmt.Sprintf("%d %s", i+1, strings.TrimSpace(words)))
				}
				for _, words := range strings.Split(line, "#0>>")[1:] {
					whole = append(whole, "0 "+strings.TrimSpace(words))
				}
			}
			want = append(whole, want...)
			if len(got) != len(want) {
				t.Fatalf("%d complaints, want %d:\n%v\nwant:\n%s", len(got), len(want), got, strings.Join(want, "\n"))
			}
			for i, c := range got {
				line, words, _ := strings.Cut(want[i], " ")
				if fmt.Sprint(c.Line) != line {
					t.Errorf("line %d, want %s: %v", c.Line, line, c)
				}
				for _, word := range regexp.MustCompile(`\s*\|\s*`).Split(words, -1) {
					if !strings.Contains(c.Error(), word) {
						t.Errorf("%v\ndoes not say %q", c, word)
					}
				}
			}
		})
	}
}

func TestFaultsInSeveralFiles(t *testing.T) {
	main, err := os.ReadFile("testdata/small/campaign.toml")
	if err != nil {
		t.Fatal(err)
	}
	with := strings.Replace(string(main), "[campaign]\n", "[campaign]\ninclude = [\"more/*.toml\", \"more/b.toml\"]\n", 1)
	source := "[[source]]\nname = \"%s\"\nra = 1\ndec = 1\naim = [{ kind = \"cadence\", every_days = 7, minutes = %s }]\n"
	fsys := fstest.MapFS{
		"more/a.toml": {Data: []byte("format = 1\n" + fmt.Sprintf(source, "One", "0") + "[[session]]\nname = \"x\"\n")},
		"more/b.toml": {Data: []byte(fmt.Sprintf(source, "J0127+4811", "5"))},
		"more/c.toml": {Data: []byte("[[source]]\nname = \"broken\n")},
		"more/d.toml": {Data: []byte("format = 3\nwonder = 1\n")},
		"more/e.toml": {Data: []byte(fmt.Sprintf(source, "Two", "5") + "receivers = 1\n")},
		"more/f":      {Data: []byte("not included")},
	}
	included := []string{
		`x/more/a.toml:6: source "One", aim 1 (cadence), minutes: found 0;`,
		`x/more/a.toml:7: session: found a key that is not read in an included file; accepted: sources only; it belongs in campaign.toml`,
		`x/more/b.toml:2: source "J0127+4811", name: found "J0127+4811", already used at x/campaign.toml:34;`,
		`x/more/c.toml:2: source.name: found broken TOML`,
		`x/more/d.toml:1: format: found 3; accepted: 1`,
		`x/more/e.toml:6: source "Two", receivers: found a key that is not known here`,
	}
	fault := "settle_s = 15"
	for name, c := range map[string]struct {
		main string
		want []string
	}{
		"sound main":  {with, included},
		"faulty main": {strings.Replace(with, fault, "settle_s = -1", 1), append([]string{`x/campaign.toml:19: site "Tern Moor", settle_s: found -1;`}, included...)},
		// Nothing is known of the sources and receivers in it, so nothing may be said about them.
		"broken main": {strings.Replace(with, fault, "settle_s = 15 s", 1), append([]string{`x/campaign.toml:19: site: found broken TOML`}, slices.Delete(slices.Clone(included), 2, 3)...)},
	} {
		fsys[CampaignFile] = &fstest.MapFile{Data: []byte(c.main)}
		_, err := LoadFS(fsys, "x")
		var got Complaints
		if !errors.As(err, &got) || len(got) != len(c.want) {
			t.Errorf("%s: want %d complaints, got:\n%v", name, len(c.want), err)
			continue
		}
		for i := range got {
			if !strings.HasPrefix(got[i].Error(), c.want[i]) {
				t.Errorf("%s: %v\nwant %s", name, got[i], c.want[i])
			}
		}
	}
}
