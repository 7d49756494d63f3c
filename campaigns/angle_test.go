package campaigns

import (
	"math"
	"testing"
)

func TestParseAngles(t *testing.T) {
	// Worked by hand: 1h = 15 degrees, 1m = 15', 1s = 15".
	for text, want := range map[string]float64{
		"00:00:00": 0, "12:30:00": 187.5, "01:00:36": 15.15, "23 59 59.9": 359.99958333333333, "6:15": 93.75, " 00:00:01 ": 15. / 3600,
	} {
		if got, err := ParseRADeg(text); err != nil || math.Abs(got-want) > 1e-12 {
			t.Errorf("right ascension %q: %v, %v; want %v", text, got, err, want)
		}
	}
	for text, want := range map[string]float64{
		"+33:30:00": 33.5, "-00:30:00": -0.5, "-00 00 36": -0.01, "90:00:00": 90, "-89:59:60": math.NaN(),
	} {
		if got, err := ParseDecDeg(text); math.IsNaN(want) != (err != nil) || err == nil && math.Abs(got-want) > 1e-12 {
			t.Errorf("declination %q: %v, %v; want %v", text, got, err, want)
		}
	}
	for _, text := range []string{"", "12", "24:00:00", "12:60", "12:00:60", "-1:00:00", "1:2:3:4", "1:-2:3", "1.5:30", "1:0x1:2", "1:1e1:2", "::", "inf:0:0", "1::2", "1 : 2"} {
		if got, err := ParseRADeg(text); err == nil {
			t.Errorf("right ascension %q is taken for %v", text, got)
		}
	}
	if _, err := ParseDecDeg("-90:00:01"); err == nil {
		t.Error("a declination below -90 is accepted")
	}
}
