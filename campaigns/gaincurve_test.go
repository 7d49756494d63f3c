package campaigns

import (
	"math"
	"strings"
	"testing"
	"testing/fstest"
	"time"

	"example.org/tallystick/sched"
)

// gainNight is a night at 50° north in which the one source rises to the zenith, observed with or without a gain curve.
func gainNight(t *testing.T, curve string) *Prepared {
	t.Helper()
	text := strings.Replace(acceptedHead, "gain_k_per_jy = 0.5\n", "gain_k_per_jy = 0.5\n"+curve, 1) + `pm_mas_per_yr = [0, 0]
flux = { mjy = 0.5, at_mhz = 1400, spectral_index = -1.6 }
width_ms = 0.2
spin = { epoch_mjd = 61000, frequency_hz = 150 }
aim = [{ kind = "cadence", every_days = 10, toa_us = 2, receivers = ["L"] }]
`
	text = strings.Replace(text, "elevation_limits_deg = [10, 86]", "elevation_limits_deg = [5, 90]", 1)
	c, err := LoadFS(fstest.MapFS{CampaignFile: {Data: []byte(text)}}, "")
	if err != nil {
		t.Fatal(err)
	}
	s := &c.Sessions[len(c.Sessions)-1]
	s.End = s.Start.Add(14 * time.Hour)
	p, err := Prepare(c, nil, s, PrepareOptions{At: s.Start})
	if err != nil {
		t.Fatal(err)
	}
	if err := p.Problem.Check(); err != nil {
		t.Fatal(err)
	}
	return p
}

// slotAt is the slot list's row of 20 minutes from a minute on.
func (p *Prepared) slotAt(t *testing.T, minute int) SlotRow {
	t.Helper()
	return p.SlotRows(sched.Plan{Slots: []sched.Slot{{Node: 0, Start: minute, End: minute + 20}}})[0]
}

// Everything that is said of a slot follows the gain at its elevations: the minutes that it gathers, S/N, TOA error, and how long
// a visit is wanted. The factors are read off the curve by hand at the elevation of the slot's middle.
func TestGainCurveInASession(t *testing.T) {
	flat := gainNight(t, "")
	sagging := gainNight(t, "gain_curve = [[10, 0.7], [50, 1], [90, 0.9]]\n")
	wanted := func(p *Prepared) float64 { return float64(p.Problem.Jobs[0].Terms[0].Wanted) }
	// The zenith's gain is 0.9 of the figure that the minutes followed from: 1/0.81 times as long.
	if got := wanted(sagging) / wanted(flat); math.Abs(got-1/0.81) > 1e-3 {
		t.Errorf("a visit is wanted %g times as long as without the curve, want %g", got, 1/0.81)
	}
	compared := 0
	for minute := 0; minute+20 <= flat.Problem.Minutes; minute += 20 {
		el := flat.Tracks[0].ElDeg[minute+10]
		if el < 10 {
			continue
		}
		factor := 0.7 + 0.3*(el-10)/40
		if el > 50 {
			factor = 1 - 0.1*(el-50)/40
		}
		a, b := sagging.slotAt(t, minute), flat.slotAt(t, minute)
		near := func(what string, got, want float64) {
			t.Helper()
			if math.Abs(got/want-1) > 0.01 { // the elevation changes within the slot
				t.Errorf("%s at %.1f deg: %g, want %g", what, el, got, want)
			}
		}
		near("S/N", a.SNR/b.SNR, factor)
		near("TOA error", a.ToaUs/b.ToaUs, 1/factor)
		near("minutes at the zenith", a.ZenithMin/b.ZenithMin, factor*factor/0.81)
		term := sagging.Problem.Jobs[0].Terms[0]
		near("minutes gathered", float64(term.Cum[minute+20]-term.Cum[minute])/sharesPerMinute, a.ZenithMin)
		compared++
	}
	if compared < 20 {
		t.Errorf("%d slots compared", compared)
	}
	// The shortest slot of use is one in which the least that is of use can be gathered where the gain is best.
	least, best := float64(sagging.Problem.Jobs[0].Terms[0].Least)/sharesPerMinute, 1.0
	for _, w := range sagging.sources[0].weights[0] {
		best = math.Max(best, w)
	}
	if got := float64(sagging.Problem.Jobs[0].MinMin); best < 1.1 || math.Abs(got-least/best) > 1 {
		t.Errorf("slots of %g min and more are of use; %.1f at the zenith are, and a minute counts up to %.3f", got, least, best)
	}
}

// With a gain that drops towards the horizon no minute below the zenith counts for more than without the curve, and the lower the
// source the less it counts for.
func TestFallingGainHasFewerEffectiveMinutes(t *testing.T) {
	flat, falling := gainNight(t, ""), gainNight(t, "gain_curve = [[0, 0.5], [60, 0.95], [90, 1]]\n")
	el := flat.Tracks[0].ElDeg
	for m, w := range falling.sources[0].weights[0] {
		without := flat.sources[0].weights[0][m]
		if w > without {
			t.Errorf("at %.1f deg a minute counts %g, without the curve %g", el[m], w, without)
		}
		if lost := 1 - w/without; el[m] > 5 && el[m] < 30 && lost < 0.3 {
			t.Errorf("at %.1f deg only %.0f %% is lost", el[m], 100*lost)
		}
	}
}

// A gain of next to nothing at the zenith, in whose minutes the others are counted, overflows nothing.
func TestGainOfNothingAtTheZenith(t *testing.T) {
	p := gainNight(t, "gain_curve = [[0, 1.5], [60, 1.5], [90, 1e-9]]\n")
	for _, n := range p.sources[0].effective[0] {
		if n < 0 {
			t.Fatalf("%d minutes gathered", n)
		}
	}
}
