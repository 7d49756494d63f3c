package ephemeris

import (
	"fmt"
	"math"
	"os"
	"strings"
	"testing"
	"testing/fstest"

	"github.com/BurntSushi/toml"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/sky/outside"
	"example.org/tallystick/sky/timing"
)

// site is the least that a campaign needs beside its sources.
const site = `format = 1
[campaign]
name = "test"
include = ["sources/*.toml"]
[[site]]
name = "Here"
latitude_deg = 50
longitude_deg = 8
height_m = 100
mount = "altaz"
elevation_limits_deg = [10, 85]
azimuth_travel_deg = [-270, 270]
slew_deg_per_min = [20, 20]
acceleration_deg_per_s2 = [0.1, 0.1]
settle_s = 10
sun_limit_deg = 5
[[receiver]]
name = "L"
site = "Here"
band_mhz = [1200, 1500]
tsys_k = 30
zenith_opacity = 0.01
gain_k_per_jy = 0.5
polarizations = 2
change_min = 5
`

// load puts an entry into a campaign, which must accept it.
func load(t testing.TB, entry string) *campaigns.Source {
	t.Helper()
	c, err := campaignWith(entry)
	if err != nil {
		t.Fatalf("the entry is refused:\n%v\n%s", err, entry)
	}
	if len(c.Sources) != 1 {
		t.Fatalf("%d sources in\n%s", len(c.Sources), entry)
	}
	return &c.Sources[0]
}

func campaignWith(entry string) (*campaigns.Campaign, error) {
	return campaigns.LoadFS(fstest.MapFS{
		campaigns.CampaignFile: {Data: []byte(site)}, "sources/imported.toml": {Data: []byte(entry)},
	}, "")
}

func read(t testing.TB, text string) *File {
	t.Helper()
	f, err := Read(strings.NewReader(text), "test.par")
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// A pulsar of testdata/published.toml: value and error as texts.
type published struct {
	name, set string
	values    map[string][2]string
}

func publishedSets(t testing.TB) (out []published) {
	t.Helper()
	data, err := os.ReadFile("testdata/published.toml")
	if err != nil {
		t.Fatal(err)
	}
	var file struct{ PSR []map[string]any }
	if err := toml.Unmarshal(data, &file); err != nil {
		t.Fatal(err)
	}
	for _, m := range file.PSR {
		p := published{name: m["name"].(string), set: m["set"].(string), values: map[string][2]string{}}
		for key, v := range m {
			if pair, ok := v.([]any); ok {
				p.values[key] = [2]string{pair[0].(string), pair[1].(string)}
			}
		}
		out = append(out, p)
	}
	return out
}

// text is the file in which a set would be handed on. A set without position or spin is given invented ones.
func (p published) text() string {
	var b strings.Builder
	fmt.Fprintf(&b, "PSRJ %s\nUNITS TDB\n", p.name)
	for key, v := range p.values {
		fmt.Fprintf(&b, "%-10s %s 1 %s\n", key, v[0], v[1])
	}
	if p.values["RAJ"][0]+p.values["ELONG"][0] == "" {
		b.WriteString("RAJ 01:02:03\nDECJ 04:05:06\n")
	}
	return b.String()
}

func TestPublishedEphemerides(t *testing.T) {
	sets := publishedSets(t)
	if len(sets) != 15 {
		t.Fatalf("%d sets", len(sets))
	}
	for _, p := range sets {
		t.Run(p.name+" "+p.set, func(t *testing.T) {
			f := read(t, p.text())
			entry := f.Source()
			s := load(t, entry)
			if s.Name != p.name {
				t.Errorf("name %q", s.Name)
			}
			if f.Unknown != strings.Count(p.text(), "_intrinsic")+strings.Count(p.text(), "M1 ") {
				t.Errorf("%d unknown: %v", f.Unknown, f.Remarks)
			}
			// Text for text: no digit of a published number is lost.
			byText := map[string]string{
				"F0": "frequency_hz", "F1": "derivative_hz_per_s", "PEPOCH": "epoch_mjd", "DM": "dm_pc_per_cm3",
				"PB": "period_days", "A1": "semimajor_ls", "TASC": "ascending_node_mjd", "T0": "periastron_mjd",
				"ECC": "eccentricity", "OM": "periastron_deg", "OMDOT": "advance_deg_per_yr", "PBDOT": "decay", "GAMMA": "einstein_delay_s",
				"M2": "companion_msun", "SINI": "sin_i", "PX": "parallax_mas", "POSEPOCH": "position_epoch_mjd",
			}
			for key := range p.values {
				if byText[key] == "" && elsewhere[key] == "" {
					t.Errorf("no test asserts %s", key)
				}
			}
			for key, name := range byText {
				v, given := p.values[key]
				if !given || s.Orbit == nil && strings.Contains("PB A1 TASC T0 ECC OM OMDOT PBDOT GAMMA M2 SINI", key) {
					continue
				}
				if !strings.Contains(entry, fmt.Sprintf("\n%s = %s", name, v[0])) {
					t.Errorf("%s %s is not in\n%s", key, v[0], entry)
				}
			}
			if start := p.values["START"][0]; start != "" && !strings.Contains(entry, "from MJD "+start+" to "+p.values["FINISH"][0]) {
				t.Error("the span of the data is not told")
			}
			p.compare(t, s)
		})
	}
}

// elsewhere are the keys of the published sets that the list above leaves out, and where they are asserted or why not.
var elsewhere = map[string]string{
	"RAJ": "compare", "DECJ": "compare",
	"ELONG": "TestEclipticPositions, TestEclipticAgainstERFA", "ELAT": "as ELONG",
	"PMRA": "compare", "PMDEC": "compare",
	"PMELONG": "compare, by its size; TestMotionTurnsWithThePosition by its direction", "PMELAT": "as PMELONG",
	"EPS1": "compare", "EPS2": "compare",
	"H3": "TestOrthometric", "STIG": "TestOrthometric",
	"FB0": "compare", "FB1": "compare", "FB2": "compare",
	"START": "below, where the span of the data is told", "FINISH": "as START",
	"M1":              "no key of these files: kept as a comment, which is counted",
	"PBDOT_intrinsic": "as M1",
}

// compare checks what the loader made of it.
func (p published) compare(t *testing.T, s *campaigns.Source) {
	t.Helper()
	same := func(key string, got float64, which int) {
		t.Helper()
		if v := p.values[key][which]; v != "" && got != num(t, v) {
			t.Errorf("%s: %.17g, want %s", key, got, v)
		}
	}
	for key, got := range map[string]float64{"RAJ": s.RADeg, "DECJ": s.DecDeg} {
		if v, given := p.values[key]; given {
			if l, _, err := ParseLine(key + " " + v[0]); err != nil || math.Abs(l.Value-got) > 1e-12 {
				t.Errorf("%s: %.17g, want %s, %v", key, got, v[0], err)
			}
		}
	}
	same("PMRA", s.PMMasPerYr[0], 0)
	same("PMDEC", s.PMMasPerYr[1], 0)
	if v, given := p.values["PMELONG"]; given {
		want := math.Hypot(num(t, v[0]), num(t, p.values["PMELAT"][0]))
		if got := math.Hypot(s.PMMasPerYr[0], s.PMMasPerYr[1]); math.Abs(got-want) > 1e-4 {
			t.Errorf("proper motion %.6f mas/yr, want %.6f", got, want)
		}
	}
	if s.Spin != nil {
		same("F0", s.Spin.FrequencyHz, 0)
		same("F0", s.Spin.SigmaFrequencyHz, 1)
		same("F1", s.Spin.SigmaDerivativeHzPerS, 1)
	}
	if s.Orbit == nil {
		if p.set != "1989" && p.set != "2016" { // these two are published without all of an orbit
			t.Error("no orbit")
		}
		return
	}
	for n, got := range s.Orbit.FrequencySeries {
		same(fmt.Sprintf("FB%d", n), got, 0)
	}
	if (s.Orbit.FrequencySeries != nil) != (p.values["FB2"][0] != "") {
		t.Errorf("an orbital frequency of %d terms", len(s.Orbit.FrequencySeries))
	}
	same("PB", s.Orbit.SigmaPeriodDays, 1)
	same("TASC", s.Orbit.AscendingNodeMJD, 0)
	same("TASC", s.Orbit.SigmaEpochDays, 1)
	same("T0", s.Orbit.PeriastronMJD, 0)
	same("T0", s.Orbit.SigmaEpochDays, 1)
	same("OMDOT", s.Orbit.AdvanceDegPerYr, 0)
	same("GAMMA", s.Orbit.EinsteinDelaySec, 0)
	same("GAMMA", s.Orbit.SigmaEinsteinSec, 1)
	if v, ok := p.values["EPS1"]; ok {
		sin, cos := math.Sincos(s.Orbit.PeriastronDeg * math.Pi / 180)
		for _, e := range []struct{ got, want float64 }{{s.Orbit.Eccentricity * sin, num(t, v[0])}, {s.Orbit.Eccentricity * cos, num(t, p.values["EPS2"][0])}} {
			if math.Abs(e.got-e.want) > 1e-13*math.Abs(s.Orbit.Eccentricity)*10 {
				t.Errorf("EPS: %.15g, want %.15g", e.got, e.want)
			}
		}
	}
}

// The names of these pulsars are their positions, cut off to minutes: an ecliptic position must come out there.
func TestEclipticPositions(t *testing.T) {
	seen := 0
	for _, p := range publishedSets(t) {
		if p.values["ELONG"][0] == "" || p.name[0] != 'J' {
			continue
		}
		s := load(t, read(t, p.text()).Source())
		sign := '+'
		if s.DecDeg < 0 {
			sign = '-'
		}
		minutes, arcmin := int(s.RADeg*4), int(math.Abs(s.DecDeg)*60)
		if name := fmt.Sprintf("J%02d%02d%c%02d%02d", minutes/60, minutes%60, sign, arcmin/60, arcmin%60); name != p.name {
			t.Errorf("%s stands at %s", p.name, name)
		}
		seen++
	}
	if seen != 3 {
		t.Errorf("%d ecliptic positions", seen)
	}
}

// Another program's ICRS positions of two of them, to the eight decimals that it prints.
func TestEclipticAgainstERFA(t *testing.T) {
	for _, c := range []struct{ name, set, id string }{{"J1614-2230", "12.5-yr wideband", "BAR-010"}, {"J0740+6620", "2021", "BAR-016"}} {
		row := outside.One(t, "values.csv", c.id)
		row.Asserted() // its inputs are another program's position; the conjunction is asserted in sky/orbit
		for _, p := range publishedSets(t) {
			if p.name != c.name || p.set != c.set {
				continue
			}
			s := load(t, read(t, p.text()).Source())
			if math.Abs(s.RADeg-row.Num("ra_deg")) > 5.1e-9 || math.Abs(s.DecDeg-row.Num("dec_deg")) > 5.1e-9 {
				t.Errorf("%s: %.9f %.9f, want %s %s", c.name, s.RADeg, s.DecDeg, row.Inputs["ra_deg"], row.Inputs["dec_deg"])
			}
		}
	}
}

func TestEclipticAgainstBook(t *testing.T) {
	row := outside.One(t, "values.csv", "AST-023")
	row.Asserted() // the way back: what the row expects is given here
	long, lat, _ := strings.Cut(row.Expected, " ")
	f := read(t, fmt.Sprintf("PSR B\nELONG %s\nELAT %s\nECL IAU1976\n", long, lat))
	if p := f.source.place; math.Abs(p.raDeg-row.Num("ra_deg")) > row.Tol || math.Abs(p.decDeg-row.Num("dec_deg")) > row.Tol {
		t.Errorf("%.7f %.7f, want %s %s", p.raDeg, p.decDeg, row.Inputs["ra_deg"], row.Inputs["dec_deg"])
	}
}

// Ecliptic positions by the obliquity that ECL names, turned to ICRS by another library (BAR-001, -002).
func TestEclipticRows(t *testing.T) {
	for _, row := range outside.Rows(t, "values.csv", "BAR-001", "BAR-002") {
		f := read(t, fmt.Sprintf("PSR B\nELONG %s\nELAT %s\nECL IERS2010\n", row.Inputs["ELONG"], row.Inputs["ELAT"]))
		row.Check(f.source.place.raDeg, f.source.place.decDeg)
	}
}

func TestTimeScales(t *testing.T) {
	row := outside.One(t, "values.csv", "ORB-030")
	tcb := timeScale{tcb: true}
	d, _ := parseDecimal(row.Inputs["t_TCB"])
	got := tcb.epoch(d)
	row.CheckWider(8e-10, "the published file was converted without the constant TDB0 of IAU 2006 resolution B3, -65.5 µs, which the row's"+
		" own formula has and the program adds", got.value)
	const tdb0 = -6.55e-5 / 86400
	row.Check(got.value - tdb0) // and nothing else differs
	file := "PSR A\nRAJ 1:2:3\nDECJ 4:5:6\nF0 317.3789419337928734\nF1 -9.7e-16\nPEPOCH 59000\nPB 8.68661942255073\nA1 11.291197529\nTASC 59000\nUNITS "
	const rate = 1 - 1.550519768e-8
	s, plain := load(t, read(t, file+"TCB\n").Source()), load(t, read(t, file+"TDB\n").Source())
	if got := s.Orbit.PeriodDays; math.Abs(got-plain.Orbit.PeriodDays*rate) > 2e-15*got || got == plain.Orbit.PeriodDays {
		t.Errorf("period %.17g", got)
	}
	// A frequency grows where a period shrinks: the number of turns stays the same.
	if got := s.Spin.FrequencyHz; math.Abs(got*rate-plain.Spin.FrequencyHz) > 1e-13 || got <= plain.Spin.FrequencyHz {
		t.Errorf("frequency %.17g", got)
	}
	if ratio := s.Spin.DerivativeHzPerS/plain.Spin.DerivativeHzPerS - 1; math.Abs(ratio-2*1.550519768e-8) > 1e-14 {
		t.Errorf("derivative changes by %g", ratio)
	}
	if s.Spin.EpochMJD != s.Orbit.AscendingNodeMJD || s.Spin.EpochMJD != got.value {
		t.Errorf("epochs %.12f, %.12f", s.Spin.EpochMJD, s.Orbit.AscendingNodeMJD)
	}
}

func TestOrthometric(t *testing.T) {
	for _, p := range publishedSets(t) {
		if p.set != "2021 near-circular form" {
			continue
		}
		// Against M2 and SINI that the same authors print from their other model; tolerance: their errors.
		s := load(t, read(t, p.text()).Source())
		if math.Abs(s.Orbit.CompanionMsun-1.315) > 0.012 || math.Abs(s.Orbit.SinI-0.99661) > 1.2e-4 {
			t.Errorf("mass %g, sin i %g", s.Orbit.CompanionMsun, s.Orbit.SinI)
		}
	}
	ratio, amplitude := outside.One(t, "values.csv", "SHA-030"), outside.One(t, "values.csv", "SHA-031")
	stig, h3 := ratio.Want(), amplitude.Want()
	f := read(t, fmt.Sprintf("PSR A\nRAJ 1:2:3\nDECJ 4:5:6\nPB 2.44576\nA1 10.848\nTASC 58001\nH3 %g\nSTIG %g", h3*1e-6, stig))
	o := load(t, f.Source()).Orbit
	ratio.CheckWithin(1e-6, o.SinI/(1+math.Sqrt(1-o.SinI*o.SinI)))
	amplitude.Check(1e6 * timing.H3Sec(o.CompanionMsun, o.SinI))
	if math.Abs(o.SinI-ratio.Num("SINI")) > ratio.Tol {
		t.Errorf("sin i %g, want %s", o.SinI, ratio.Inputs["SINI"])
	}
}

// An orbital frequency is a period and a decay, or more than that.
func TestFrequencySeries(t *testing.T) {
	row := outside.One(t, "values.csv", "ORB-056")
	in := row.Inputs
	text := fmt.Sprintf("PSR A\nRAJ 1:2:3\nDECJ 4:5:6\nA1 0.03484142\nTASC 56567.02609362 1 8e-8\nFB0 %s 3e-14\nFB1 %s\nFB2 2.4e-28", in["FB0"], in["FB1"])
	f := read(t, text)
	o := load(t, f.Source()).Orbit
	if want := 3e-14 * o.PeriodDays / num(t, in["FB0"]); math.Abs(o.SigmaPeriodDays/want-1) > 1e-12 {
		t.Errorf("error of the period %g, want %g", o.SigmaPeriodDays, want)
	}
	if o.FrequencySeries[0] != num(t, in["FB0"]) || o.FrequencySeries[1] != num(t, in["FB1"]) || o.FrequencySeries[2] != 2.4e-28 || o.Decay != 0 {
		t.Errorf("%+v", o)
	}
	said(t, f, "3 terms")
	// Without the third term it is a period and a decay; with a period beside it the further terms have no place.
	without := strings.Replace(text, "\nFB2 2.4e-28", "", 1)
	o = load(t, read(t, without).Source()).Orbit
	row.Check(o.Decay)
	if math.Abs(o.PeriodDays*86400*num(t, in["FB0"])-1) > 1e-15 || o.FrequencySeries != nil {
		t.Errorf("period %.17g, decay %.10g", o.PeriodDays, o.Decay)
	}
	beside := read(t, text+"\nPB 0.13879863")
	if o := load(t, beside.Source()).Orbit; o.FrequencySeries != nil || o.PeriodDays != 0.13879863 {
		t.Errorf("%+v", o)
	}
	said(t, beside, "FB2", "PB stands beside it")
}

// What the errors of the orbit are, and of when they are, goes along.
func TestOrbitErrors(t *testing.T) {
	f := read(t, "PSR A\nRAJ 1:2:3\nDECJ 4:5:6\nPB 1.5 1 1e-9\nA1 2.5 1 3e-7\nT0 60000 1 1e-6\nECC 0.2 1 1e-6\nOM 30\nOMDOT 0.5 1 0.02\nGAMMA 0.0031 1 4e-5\nPBDOT -1.2 1 0.3\nSTART 58000.25\nFINISH 61000.5")
	o := load(t, f.Source()).Orbit
	if o.SigmaSemimajorLs != 3e-7 || o.SigmaDecay != 0.3e-12 || o.SigmaAdvance != 0.02 || o.EinsteinDelaySec != 0.0031 || o.SigmaEinsteinSec != 4e-5 || o.DataMJD != [2]float64{58000.25, 61000.5} {
		t.Errorf("%+v", o)
	}
}

// said wants words in one of the remarks.
func said(t testing.TB, f *File, words ...string) {
	t.Helper()
	for _, r := range f.Remarks {
		all := true
		for _, w := range words {
			all = all && strings.Contains(r.Text, w)
		}
		if all {
			return
		}
	}
	t.Errorf("nothing about %q in %v", words, f.Remarks)
}
