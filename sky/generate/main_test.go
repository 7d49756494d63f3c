package main

import (
	"strings"
	"testing"
)

// Two lines of the published file of the Earth, and one invented line too small to matter.
const sample = ` VSOP87 VERSION B4    EARTH     VARIABLE 1 (LBR)       *T**0      3 TERMS    HELIOCENTRIC DYNAMICAL ECLIPTIC AND EQUINOX J2000
 2310    1   1.75347045673  0.00000000000        0.00000000000
 2310    2   0.03341656453  4.66925680415     6283.07584999140
 2310    3   0.00000000009  1.00000000000       12.00000000000
`

func TestWrite(t *testing.T) {
	terms, err := read(strings.NewReader(sample))
	if err != nil || len(terms) != 3 {
		t.Fatal(terms, err)
	}
	var b strings.Builder
	table{name: "waves", distanceAU: 1, sunOver: 1}.write(&b, terms)
	want := "\nvar waves = []wave{\n{0, []part{{0, 0, 1.7534704567, 0}}},\n{6283.0758499914, []part{{0, 0, -0.0014408823, 0.0333854855}}},\n}\n"
	if b.String() != want {
		t.Errorf("got %s\nwant %s", b.String(), want)
	}
}

func TestReadComplains(t *testing.T) {
	for _, s := range []string{"1 2 3\n", strings.Replace(sample, "1 (LBR)", "X", 1), strings.Replace(sample, "*T**0", "*T**?", 1), strings.Replace(sample, "4.669", "4.6x9", 1)} {
		if _, err := read(strings.NewReader(s)); err == nil {
			t.Errorf("accepted: %q", s)
		}
	}
}
