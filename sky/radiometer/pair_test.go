package radiometer

import (
	"math"
	"testing"

	"example.org/tallystick/sky/outside"
)

func TestDispersion(t *testing.T) {
	for _, r := range outside.Rows(t, "dispersion.csv", "DIS-001") {
		r.Check(DispersionConstant)
	}
	for _, r := range outside.Rows(t, "dispersion.csv", "DIS-002") {
		r.Check(EphemerisDispersionConstant)
	}
	for _, r := range outside.Rows(t, "dispersion.csv", "DIS-020") {
		r.Check(ChannelSmearingUs(r.Num("DM"), r.Num("chan_MHz"), 1e3*r.Num("f_GHz")))
	}
	for _, r := range outside.Rows(t, "dispersion.csv", "DIS-01*") {
		r.Check(DispersionSec(r.Num("DM"), r.Num("f_MHz")))
	}
}

func TestPairs(t *testing.T) {
	for _, r := range outside.Rows(t, "dispersion.csv", "DIS-030", "DIS-032", "DIS-036") {
		r.Check(PairDMError(r.Num("f1_MHz"), r.Num("s1_us"), r.Num("f2_MHz"), r.Num("s2_us")))
	}
	for _, r := range outside.Rows(t, "dispersion.csv", "DIS-031", "DIS-033", "DIS-037") {
		r.Check(PairErrorUs(r.Num("f1_MHz"), r.Num("s1_us"), r.Num("f2_MHz"), r.Num("s2_us")))
	}
	if !math.IsInf(PairErrorUs(1400, 1, 1400, 1), 1) || !math.IsInf(PairDMError(1400, 1, 1400, 1), 1) {
		t.Error("a receiver paired with itself gives a finite error")
	}
}

func TestSolarWind(t *testing.T) {
	for _, r := range outside.Rows(t, "dispersion.csv", "DIS-05*", "DIS-06*") {
		if _, ok := r.Inputs["elong_deg"]; !ok {
			continue
		}
		dm := SolarWindDM(r.Num("n0_cm3"), r.Num("elong_deg"))
		if r.Inputs["r_au"] != "" || r.ID == "DIS-050" {
			r.Check(dm)
		} else {
			r.Check(1e6 * DispersionSec(dm, 1400))
		}
	}
	if dm, near := SolarWindDM(7.9, 180), SolarWindDM(7.9, 179.999); math.Abs(dm/near-1) > 1e-6 {
		t.Errorf("opposite the Sun %g, beside it %g", dm, near)
	}
}

func TestPairSpacing(t *testing.T) {
	// Days far from the Sun, hours near it, and never more than asked for.
	last := 0.0
	for el := 1.0; el <= 180; el++ {
		d := PairSpacingDays(4, el)
		if d < last || d > 4 {
			t.Errorf("%g°: %g d after %g", el, d, last)
		}
		last = d
	}
	if d := PairSpacingDays(4, 5); d > 0.5 || d < 0.1 {
		t.Errorf("5° from the Sun: %g d, want hours", d)
	}
	if d := PairSpacingDays(4, 60); d != 4 {
		t.Errorf("60° from the Sun: %g d, want 4", d)
	}
	if d := PairSpacingDays(4, 0); d != 0 {
		t.Errorf("behind the Sun: %g d", d)
	}
}

// At the elongation of the flag, what the spherical wind leaves in the data (DIS-070) is of the size of what it explains; at twice
// the elongation it is all of it.
func TestSolarWindIsUnreliable(t *testing.T) {
	for _, r := range outside.Rows(t, "dispersion.csv", "DIS-070") {
		explained := func(deg float64) float64 {
			return 1e6 * DispersionSec(SolarWindDM(WindDensity, deg), r.Num("f_MHz"))
		}
		r.Check(WindResidualUs(r.Num("f_MHz")))
		if half := WindResidualUs(r.Num("f_MHz") / 2); math.Abs(half/r.Want()-4) > 1e-12 {
			t.Errorf("%s: at half the frequency %g µs", r.ID, half)
		}
		if at := explained(WindUnreliableDeg); at < r.Want() || at > 3*r.Want() {
			t.Errorf("%s: %.2f µs explained, %.2f left", r.ID, at, r.Want())
		}
		if twice := explained(2 * WindUnreliableDeg); twice > 1.1*r.Want() {
			t.Errorf("%s: %.2f µs explained at %d°, %.2f left", r.ID, twice, 2*WindUnreliableDeg, r.Want())
		}
	}
}
