package ephemeris

import (
	"math"
	"strconv"
	"strings"
	"testing"

	"example.org/tallystick/sky/outside"
)

func TestMain(m *testing.M) { outside.Main(m, nil) }

func fields(list string) map[string]string {
	m := map[string]string{}
	for _, kv := range strings.Split(list, ";") {
		k, v, _ := strings.Cut(kv, "=")
		m[k] = v
	}
	return m
}

func num(t *testing.T, s string) float64 {
	t.Helper()
	x, err := strconv.ParseFloat(s, 64)
	if err != nil {
		t.Fatal(err)
	}
	return x
}

// lastDigit is half a unit of the last digit that a number is printed with.
func lastDigit(s string) float64 {
	mantissa, exponent, _ := strings.Cut(s, "e")
	_, part, _ := strings.Cut(mantissa, ".")
	e, _ := strconv.Atoi(exponent)
	return 0.5 * math.Pow10(e-len(part))
}

// Every line out of a published file means what it is known to mean.
func TestLines(t *testing.T) {
	for _, row := range outside.Rows(t, "lines.csv", "EPH-*") {
		row.Asserted()
		id, want := row.ID, fields(row.Expected)
		l, ok, err := ParseLine(row.Inputs["line"])
		if want["value"] == "none" {
			if ok {
				t.Errorf("%s: not taken for a comment: %+v", id, l)
			}
			continue
		}
		if !ok || err != nil {
			t.Errorf("%s: %v, %v", id, ok, err)
			continue
		}
		if key := strings.TrimPrefix(row.Quantity, "reading one line: "); l.Key != key {
			t.Errorf("%s: key %q, want %q", id, l.Key, key)
		}
		if l.Unit != want["unit"] {
			t.Errorf("%s: unit %q, want %q", id, l.Unit, want["unit"])
		}
		switch {
		case want["unit"] == "text":
			if l.Text != want["value"] {
				t.Errorf("%s: %q", id, l.Text)
			}
		case l.parts != "": // an angle in parts: the row prints it in degrees
			if d := math.Abs(l.Value - num(t, want["value"])); d > lastDigit(want["value"]) {
				t.Errorf("%s: %.15g, want %s", id, l.Value, want["value"])
			}
		case l.Value != num(t, want["value"]):
			t.Errorf("%s: %.17g, want %s", id, l.Value, want["value"])
		}
		if wantSigma := want["sigma"]; wantSigma == "absent" {
			if l.Sigma != 0 {
				t.Errorf("%s: sigma %g", id, l.Sigma)
			}
		} else if d := math.Abs(l.Sigma - num(t, wantSigma)); l.parts == "" && d != 0 || d > lastDigit(wantSigma) {
			t.Errorf("%s: sigma %.17g, want %s", id, l.Sigma, wantSigma)
		}
		if fit := strings.TrimPrefix(want["fit"], "absent"); l.Fit != fit {
			t.Errorf("%s: fit %q, want %q", id, l.Fit, fit)
		}
	}
}

// The digits of a value are those of the line.
func TestDigitsAreKept(t *testing.T) {
	for line, want := range map[string]string{
		"F0    44.0540691061819984  0  0.0000000000001731":  "44.0540691061819984",
		"F0 +0044.05406910618199840000000001":               "44.05406910618199840000000001",
		"F1     -3.415749755624D-15  0  3.795006662108D-21": "-3.415749755624e-15",
		"f1\t-.5d-15":                   "-0.5e-15",
		"PB 12.":                        "12",
		"PEPOCH 56323":                  "56323",
		"T0 57804.731308895123456789":   "57804.731308895123456789",
		"PBDOT -1.2475959":              "-1.2475959e-12",
		"XDOT 1.5E-2":                   "1.5e-14",
		"A1DOT -3.9210500492434694e-16": "-3.9210500492434694e-16",
		"F0 12345678901234567890":       "12345678901234567890.0",
		"PB 1e+0":                       "1",
		"EPS1 1.1e-07":                  "1.1e-7",
	} {
		if l, ok, err := ParseLine(line); !ok || err != nil || l.Text != want {
			t.Errorf("%q: %q, want %q (%v, %v)", line, l.Text, want, ok, err)
		}
	}
	for _, word := range []string{"", "+", "-", ".", "e5", "1e", "1e5000", "1e400", "nan", "NaN", "inf", "-Inf", "0x10", "1_000", "1,5", "--1", "1e1.5", strings.Repeat("1", 101)} {
		if d, ok := parseDecimal(word); ok {
			t.Errorf("%q is taken for %q", word, d.text)
		}
	}
}

func TestAngles(t *testing.T) {
	for _, c := range []struct {
		line, parts string
		deg         float64
	}{
		{"DECJ -00:12:03.5", "-00:12:03.5", -(12*60 + 3.5) / 3600},
		{"DECJ -00:00:60.0", "-00:01:00.0", -1.0 / 60},
		{"RAJ 7:59:60.00", "08:00:00.00", 120},
		{"RAJ 23:59:60", "00:00:00", 0},
		{"RAJ 5:30", "05:30:00", 82.5},
		{"DECJ +5:30:.5", "+05:30:0.5", 5 + (30*60+0.5)/3600},
		{"DECJ 90:00:00", "90:00:00", 90},
	} {
		l, ok, err := ParseLine(c.line)
		if !ok || err != nil || l.parts != c.parts || math.Abs(l.Value-c.deg) > 1e-13 {
			t.Errorf("%s: %q %.15g, want %q %.15g (%v)", c.line, l.parts, l.Value, c.parts, c.deg, err)
		}
	}
	for _, line := range []string{
		"RAJ 24:00:00", "RAJ -1:00:00", "RAJ 12:60:00", "RAJ 12:00:61", "RAJ 12", "RAJ 12:00:00:00", "RAJ a:b:c", "RAJ 12:-5:00",
		"DECJ 90:00:01", "DECJ -91:00:00", "DECJ 89:59:1e1", "DECJ 1::2", "DECJ 99999999999:0:0", "DECJ :", "RAJ 12:00:nan",
	} {
		if l, _, err := ParseLine(line); err == nil {
			t.Errorf("%s: read as %g", line, l.Value)
		}
	}
}

// The third word is an error unless it is exactly 0, 1 or 2.
func TestFitFlags(t *testing.T) {
	for line, want := range map[string]Line{
		"PB 1.5 1 2e-9":   {Fit: "1", Sigma: 2e-9},
		"PB 1.5 2 2e-9":   {Fit: "2", Sigma: 2e-9},
		"PB 1.5 2e-9":     {Sigma: 2e-9},
		"PB 1.5 1.0":      {Sigma: 1},
		"PB 1.5 3":        {Sigma: 3},
		"PB 1.5 1":        {Fit: "1"},
		"PB 1.5 0 # none": {Fit: "0"},
		"PB 1.5":          {},
	} {
		if l, _, err := ParseLine(line); err != nil || l.Fit != want.Fit || l.Sigma != want.Sigma {
			t.Errorf("%q: fit %q, sigma %g, %v", line, l.Fit, l.Sigma, err)
		}
	}
	for _, line := range []string{"PB 1.5 x", "PB 1.5 1 -2", "PB 1.5 1 nan"} {
		if l, ok, err := ParseLine(line); err == nil || !ok || l.Value != 1.5 || l.Sigma != 0 {
			t.Errorf("%q: %+v, %v", line, l, err)
		}
	}
}

func TestComments(t *testing.T) {
	for _, line := range []string{"", " \t", "# F0 1", "#F0 1", "C F0 1", "C", "c anything", "\tC F0"} {
		if l, ok, err := ParseLine(line); ok || err != nil {
			t.Errorf("%q: %+v, %v", line, l, err)
		}
	}
	if l, ok, _ := ParseLine("CLK TT(BIPM2019)"); !ok || l.Key != "CLK" {
		t.Error("CLK is taken for a comment")
	}
}
