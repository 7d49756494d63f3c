package campaigns

import (
	"errors"
	"fmt"
	"math"
	"strings"
	"testing"
	"testing/fstest"
	"unicode/utf8"

	"pgregory.net/rapid"
)

// Whatever check accepts has accounts and makes a sound problem, with a line for each number, and never a NaN: one pulsar with any
// orbit, any errors and any aims.
func TestWhatIsAcceptedHasAccounts(t *testing.T) {
	accepted := 0
	rapid.Check(t, func(t *rapid.T) {
		var b strings.Builder
		put := func(key string, from, to float64) {
			if rapid.Bool().Draw(t, key+" given") {
				x := math.Exp(rapid.Float64Range(math.Log(from), math.Log(to)).Draw(t, key))
				fmt.Fprintf(&b, "%s = %g\n", key, x)
			}
		}
		b.WriteString(acceptedHead)
		put("width_ms", 0.01, 4)
		if strings.Contains(b.String(), "width_ms") && rapid.Bool().Draw(t, "template") {
			b.WriteString("template = \"gaussian\"\n")
		}
		put("floor_us", 0.01, 10)
		put("parallax_mas", 0.01, 100)
		if rapid.Bool().Draw(t, "position error") {
			b.WriteString("sigma_position_mas = [3, 4]\n")
		}
		if rapid.Bool().Draw(t, "flux") {
			b.WriteString("flux = { mjy = 0.5, at_mhz = 1400, spectral_index = -1.6 }\n")
		}
		if rapid.Bool().Draw(t, "scintillates") {
			b.WriteString("scintillation = { minutes = 10, mhz = 20, at_mhz = 1400 }\n")
		}
		put("glitch_mjd", 60000, 61500)
		b.WriteString("[source.spin]\nepoch_mjd = 61000\nfrequency_hz = 150\n")
		put("sigma_frequency_hz", 1e-13, 1e-3)
		put("derivative_hz_per_s", 1e-17, 1e-9)
		put("sigma_derivative_hz_per_s", 1e-20, 1e-8)
		b.WriteString("[source.orbit]\nsemimajor_ls = 2\n")
		if rapid.Bool().Draw(t, "series") {
			fmt.Fprintf(&b, "frequency_series = [%g, %g, %g]\n", 1/86400.0/rapid.Float64Range(0.1, 300).Draw(t, "days"),
				rapid.Float64Range(-1e-18, 1e-18).Draw(t, "f1"), rapid.Float64Range(-1e-24, 1e-24).Draw(t, "f2"))
		} else {
			fmt.Fprintf(&b, "period_days = %g\n", math.Exp(rapid.Float64Range(-3, 11).Draw(t, "log period")))
			put("decay", 1e-15, 1e-7)
		}
		if rapid.Bool().Draw(t, "node") {
			b.WriteString("ascending_node_mjd = 61000.25\nperiastron_deg = 30\n")
		} else {
			b.WriteString("periastron_mjd = 61000.25\nperiastron_deg = 30\n")
		}
		put("eccentricity", 1e-7, 0.95)
		put("advance_deg_per_yr", 1e-6, 100)
		put("companion_msun", 0.01, 30)
		put("sin_i", 0.1, 1)
		put("einstein_delay_s", 1e-7, 1)
		put("sigma_einstein_delay_s", 1e-9, 0.1)
		put("sigma_period_days", 1e-12, 10)
		put("sigma_epoch_days", 1e-9, 100)
		put("sigma_semimajor_ls", 1e-9, 1)
		put("sigma_decay", 1e-16, 1e-8)
		put("sigma_advance_deg_per_yr", 1e-8, 10)
		if rapid.Bool().Draw(t, "eclipse") {
			b.WriteString("eclipse = { half_width_turns = 0.05, margin_turns = 0.01, reference_mhz = 400, index = -0.4 }\n")
		}
		for range rapid.IntRange(1, 3).Draw(t, "aims") {
			b.WriteString("[[source.aim]]\n")
			b.WriteString(rapid.SampledFrom([]string{
				"kind = \"cadence\"\nevery_days = 10\n", "kind = \"phase coverage\"\nbins = 7\nper_bin = 2\nsince = 2026-01-01\n",
				"kind = \"conjunction\"\nhalf_width_turns = 0.05\nwanted = 3\nsince = 2026-11-01\n", "kind = \"connect\"\nmax_phase_error_turns = 0.1\n",
				fmt.Sprintf("kind = \"measure\"\nparameter = %q\ngoal_percent = 3\n", rapid.SampledFrom(Parameters).Draw(t, "parameter")),
			}).Draw(t, "aim"))
			b.WriteString(rapid.SampledFrom([]string{"minutes = 20\n", "toa_us = 5\n"}).Draw(t, "wish"))
		}
		c, err := LoadFS(fstest.MapFS{CampaignFile: {Data: []byte(b.String())}}, "")
		if err != nil {
			var complaints Complaints
			if !errors.As(err, &complaints) {
				t.Fatal(err)
			}
			return
		}
		accepted++
		s := &c.Sessions[len(c.Sessions)-1]
		log := &Logbook{}
		for i := range rapid.IntRange(0, 4).Draw(t, "visits") {
			at := s.Start.AddDate(0, 0, -3*i-1)
			log.Entries = append(log.Entries, Entry{Start: at, End: at.Add(20e9 * 60), Site: "H", Source: "A", Receiver: "L", Outcome: Done, Quality: 1, ToaUs: 3})
		}
		rows, err := Arrears(c, log, s.Start)
		if err != nil {
			t.Fatal(err)
		}
		for _, r := range rows {
			if !(r.Debt >= 0) || math.IsInf(r.Debt, 0) || r.Why == "" || utf8.RuneCountInString(r.Why) > mostInLine || noNumber.MatchString(r.Why) {
				t.Fatalf("%s: debt %g, %d letters: %q", r.Aim, r.Debt, len(r.Why), r.Why)
			}
		}
		p, err := Prepare(c, log, s, PrepareOptions{At: s.Start})
		if err != nil {
			t.Fatal(err)
		}
		if err := p.Problem.Check(); err != nil {
			t.Fatal(err)
		}
	})
	if accepted == 0 {
		t.Error("nothing was accepted")
	}
	t.Logf("%d accepted", accepted)
}

const acceptedHead = `format = 1
[campaign]
name = "One"
[[site]]
name = "H"
latitude_deg = 50
longitude_deg = 3
height_m = 100
elevation_limits_deg = [10, 86]
azimuth_travel_deg = [-270, 270]
slew_deg_per_min = [24, 12]
acceleration_deg_per_s2 = [0.1, 0.1]
settle_s = 20
sun_limit_deg = 5
mount = "altaz"
[[receiver]]
name = "L"
site = "H"
band_mhz = [1240, 1500]
tsys_k = 28
zenith_opacity = 0.008
gain_k_per_jy = 0.5
polarizations = 2
change_min = 6
[[receiver]]
name = "U"
site = "H"
band_mhz = [400, 500]
tsys_k = 60
zenith_opacity = 0.008
gain_k_per_jy = 0.5
polarizations = 2
change_min = 6
[[session]]
name = "before"
site = "H"
start = 2026-11-20T18:00:00Z
end = 2026-11-20T22:00:00Z
receivers = ["L", "U"]
slot_overhead_min = 1
[[session]]
name = "night"
site = "H"
start = 2026-12-03T18:00:00Z
end = 2026-12-03T22:00:00Z
receivers = ["L", "U"]
slot_overhead_min = 1
[[source]]
name = "A"
ra = 20.5
dec = 40
`
