package campaigns

import (
	"context"
	"math"
	"slices"
	"strings"
	"testing"
	"testing/fstest"
	"time"

	gocmp "github.com/google/go-cmp/cmp"

	"example.org/tallystick/sky/array"
)

// Invented: three pulsars that are always up, one that never is, one of which nothing is known, and a calibrator.
const arrayCampaign = `format = 1
[campaign]
name = "array by hand"
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
[[receiver]]
name = "P"
site = "A"
band_mhz = [1210, 1510]
tsys_k = 280
zenith_opacity = 0.008
gain_k_per_jy = 0.55
polarizations = 2
change_min = 6
[[source]]
name = "Bright"
ra = "02:00:00"
dec = "+80:00:00"
flux = { mjy = 3, at_mhz = 1400, spectral_index = -1.6 }
width_ms = 0.1
jitter_us_per_hour = 0.05
floor_us = 0.05
spin = { frequency_hz = 250, epoch_mjd = 60800 }
aim = [{ kind = "cadence", every_days = EVERY, receivers = ["L"], minutes = 30 }]
[[source]]
name = "Fair"
ra = "10:00:00"
dec = "+80:00:00"
flux = { mjy = 2, at_mhz = 1400, spectral_index = -1.6 }
width_ms = 0.2
floor_us = 0.1
spin = { frequency_hz = 200, epoch_mjd = 60800 }
aim = [{ kind = "cadence", every_days = EVERY, receivers = ["P", "L"], pair_days = 1, minutes = 30 }]
[[source]]
name = "Poor"
ra = "18:00:00"
dec = "+80:00:00"
flux = { mjy = 0.5, at_mhz = 1400, spectral_index = -1.6 }
width_ms = 2
spin = { frequency_hz = 3, epoch_mjd = 60800 }
aim = [{ kind = "cadence", every_days = EVERY, receivers = ["L"], minutes = 30 }]
[[source]]
name = "South"
ra = "02:00:00"
dec = "-70:00:00"
flux = { mjy = 3, at_mhz = 1400, spectral_index = -1.6 }
width_ms = 0.1
spin = { frequency_hz = 250, epoch_mjd = 60800 }
aim = [{ kind = "cadence", every_days = EVERY, minutes = 30 }]
[[source]]
name = "Unknown"
priority = 0.01
ra = "03:00:00"
dec = "+70:00:00"
spin = { frequency_hz = 250, epoch_mjd = 60800 }
aim = [{ kind = "cadence", every_days = EVERY, minutes = 30 }]
[[source]]
name = "C"
ra = "04:00:00"
dec = "+70:00:00"
aim = [{ kind = "calibration", receivers = ["L"], minutes = 5 }]
[[session]]
name = "one"
site = "A"
start = 2026-12-11T00:00:00Z
end = 2026-12-11END:00Z
receivers = ["L", "P"]
slot_overhead_min = 0
`

func playArray(t *testing.T, everyDays, end string) (*Campaign, *Season) {
	t.Helper()
	text := strings.NewReplacer("EVERY", everyDays, "END", end).Replace(arrayCampaign)
	c, err := LoadFS(fstest.MapFS{CampaignFile: {Data: []byte(text)}}, "")
	if err != nil {
		t.Fatal(err)
	}
	s, err := PlaySeason(context.Background(), c, nil, time.Date(2026, 12, 1, 0, 0, 0, 0, time.UTC), SeasonOptions{})
	if err != nil {
		t.Fatal(err)
	}
	arrayAddsUp(t, s)
	return c, s
}

// arrayAddsUp checks what holds of every season.
func arrayAddsUp(t *testing.T, s *Season) {
	t.Helper()
	f := &s.Array
	planned, best, sums := 0.0, 0.0, [2]float64{}
	last := math.Inf(1)
	worth := func(r *ArrayRow) float64 { // of one hour more at best
		a, b := r.HourErrorUs*r.HourErrorUs, r.FloorUs*r.FloorUs
		return a / math.Pow(a+b*r.BestH, 2)
	}
	more := f.HourMore * f.Best.SumPerUs2
	for i := range f.Rows {
		r := &f.Rows[i]
		on := 0.0
		for _, x := range s.Sessions {
			for _, row := range x.Rows {
				if row.Source == r.Source {
					on += row.End.Sub(row.Start).Hours()
				}
			}
		}
		if math.Abs(on-r.PlannedH) > 1e-9 {
			t.Errorf("%s: %.3f h planned, told %.3f", r.Source, on, r.PlannedH)
		}
		planned += r.PlannedH
		best += r.BestH
		if r.BestH < r.LeastH || r.BestH > r.UpH || r.PlannedH > r.UpH {
			t.Errorf("%s: %+v", r.Source, r)
		}
		if f.TotalH > 0 && (r.BestH > r.LeastH+1e-9 && worth(r) < more*(1-1e-6) || r.BestH < r.UpH-1e-9 && worth(r) > more*(1+1e-6)) {
			t.Errorf("%s: one hour more is worth %g, on others %g", r.Source, worth(r), more)
		}
		if r.BestH-r.PlannedH > last {
			t.Errorf("%s comes too late", r.Source)
		}
		last = r.BestH - r.PlannedH
		sums[0] += 1 / (r.PlannedUs * r.PlannedUs)
		sums[1] += 1 / (r.BestUs * r.BestUs)
	}
	if math.Abs(planned-f.TotalH) > 1e-9 || math.Abs(best-planned) > 1e-9*(1+planned) {
		t.Errorf("%.6f h planned, %.6f at best, %.6f told", planned, best, f.TotalH)
	}
	if math.Abs(sums[0]-f.Planned.SumPerUs2) > 1e-9*sums[0] || math.Abs(sums[1]-f.Best.SumPerUs2) > 1e-9*sums[1] {
		t.Errorf("sums %g and %g, told %g and %g", sums[0], sums[1], f.Planned.SumPerUs2, f.Best.SumPerUs2)
	}
	if f.Least == LeastNothing && f.Best.SumPerUs2 < f.Planned.SumPerUs2*(1-1e-9) {
		t.Errorf("the best, %g, is below what is planned, %g", f.Best.SumPerUs2, f.Planned.SumPerUs2)
	}
}

func TestSeasonArray(t *testing.T) {
	c, s := playArray(t, "14", "T06:00")
	f := &s.Array
	if diff := gocmp.Diff([]ArrayLeftOut{{"South", "never up in these sessions"}, {"Unknown", "no flux, no width_ms"}}, f.LeftOut); diff != "" {
		t.Errorf("left out:\n%s", diff)
	}
	if len(f.Rows) != 3 || f.NoFloor != 1 || f.Least != LeastCadences || f.Timed() != 3 || f.Pairs != 3 {
		t.Fatalf("%+v", f)
	}
	// Visits of three times at least 18 minutes with L, and of 18 with P.
	if math.Abs(f.CadencesH-4*0.3) > 1e-9 {
		t.Errorf("cadences take %.3f h, not 1.2", f.CadencesH)
	}
	var timed []array.Timed
	for _, name := range []string{"Bright", "Fair", "Poor"} {
		i := slices.IndexFunc(f.Rows, func(r ArrayRow) bool { return r.Source == name })
		r := &f.Rows[i]
		src := &c.Sources[slices.IndexFunc(c.Sources, func(s Source) bool { return s.Name == name })]
		timed = append(timed, array.Timed{RADeg: src.RADeg, DecDeg: src.DecDeg, SigmaUs: r.PlannedUs})
		if r.Receiver != "L" || r.Site != "A" || math.Abs(r.UpH-6) > 0.05 {
			t.Errorf("%s: %+v", name, r)
		}
		// In six hours it stands somewhere between 40 and 60 degrees.
		set := src.setup(c.receiver("L", "A"))
		set.Pulsar.FloorUs = 0
		if high, low := set.TOAErrorUs(60, 60.1), set.TOAErrorUs(60, 39.9); r.HourErrorUs < high || r.HourErrorUs > low {
			t.Errorf("%s: %.4f µs in an hour, not from %.4f to %.4f", name, r.HourErrorUs, high, low)
		}
		if want := math.Hypot(r.HourErrorUs/math.Sqrt(r.PlannedH), src.FloorUs); math.Abs(r.PlannedUs-want) > 1e-12 {
			t.Errorf("%s: %.6f µs, wanted %.6f", name, r.PlannedUs, want)
		}
	}
	if got := array.Pair(timed).MeritPerUs2; math.Abs(got-f.Planned.PairPerUs2) > 1e-9*got {
		t.Errorf("pairs %g, told %g", got, f.Planned.PairPerUs2)
	}
	for _, r := range f.Rows {
		if r.Source == "Bright" && r.BestH < r.LeastH+1 || r.Source == "Poor" && r.BestH > r.LeastH+1e-9 {
			t.Errorf("the best pulsar is to get the hours, the poorest its least: %+v", r)
		}
	}
	for i, want := range [][2]float64{{math.Exp2(13. / 3), math.Sqrt2}, {2, math.Exp2(3. / 26)}, {4, math.Exp2(3. / 13)}, {4. / 3, 4. / 3}} {
		if g := f.Gains[i]; math.Abs(g.Weak-want[0]) > 1e-9 || math.Abs(g.Intermediate-want[1]) > 1e-9 {
			t.Errorf("%+v, wanted %v", g, want)
		}
	}
}

// What is kept in any case is the most that the hours cover.
func TestSeasonArrayKeepsWhatItCan(t *testing.T) {
	for _, c := range []struct {
		every, end string
		least      ArrayLeast
		says       string
	}{
		{"14", "T06:00", LeastCadences, "every visit that cadences and counts of turns ask for, as short as is of use: 1.2 h"},
		{"1", "T03:00", LeastOnce, "one visit of each source"},
		{"14", "T00:40", LeastNothing, "nothing: the 0."},
	} {
		_, s := playArray(t, c.every, c.end)
		if f := &s.Array; f.Least != c.least || !strings.Contains(f.LeastWords(), c.says) {
			t.Errorf("every %s d until %s: %s, %q", c.every, c.end, f.Least, f.LeastWords())
		}
	}
}

// Nothing planned and nothing known are said in words, and no number is made of them.
func TestSeasonArrayOfNothing(t *testing.T) {
	_, s := playArray(t, "14", "T00:05")
	f := &s.Array
	if f.Timed() != 0 || f.SumWords() != "nothing is planned on them" || !strings.Contains(f.PairWords(), "no pair") {
		t.Errorf("%q, %q: %+v", f.SumWords(), f.PairWords(), f)
	}
	for _, g := range f.Gains {
		if math.IsNaN(g.Weak) || math.IsInf(g.Weak, 0) || math.IsNaN(g.Intermediate) {
			t.Errorf("%+v", g)
		}
	}
	if got := (&ArrayForecast{}).LeftOutWords(); got != "none" {
		t.Errorf("nobody left out: %q", got)
	}
	if got, want := f.LeftOutWords(), "1, never up in these sessions: South; 1, no flux, no width_ms: Unknown"; got != want {
		t.Errorf("left out: %q, wanted %q", got, want)
	}
}
