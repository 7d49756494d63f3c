package radiometer

import (
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// A dish that sags: best at 50°, nine tenths at the zenith, seven tenths at 10° and below.
var sagging = [][2]float64{{10, 0.7}, {50, 1}, {90, 0.9}}

// weight is what a minute at one elevation is worth.
func weight(s Setup, elevationDeg float64) float64 {
	return s.EffectiveWeights([]float64{elevationDeg}, nil)[0]
}

func TestGainFactor(t *testing.T) {
	for _, c := range []struct{ el, want float64 }{{-5, 0.7}, {0, 0.7}, {10, 0.7}, {30, 0.85}, {50, 1}, {70, 0.95}, {90, 0.9}, {110, 0.95}} {
		if got := gainFactor(sagging, c.el); math.Abs(got-c.want) > 1e-12 {
			t.Errorf("%g deg: %g, want %g", c.el, got, c.want)
		}
	}
	if got := gainFactor(sagging[:2], 80); got != 1 {
		t.Errorf("above the last point: %g, want its 1", got)
	}
	if got := gainFactor(nil, 20); got != 1 {
		t.Errorf("without a curve: %g", got)
	}
}

// By hand, without air, and a sky that does not count: at 30° the gain is 0.85 of what it is at its best, and at the zenith
// 0.9. A minute is worth (0.85/0.9)² = 0.89198 of one at the zenith, and at 50° (1/0.9)² = 1.23457. The S/N is 0.85 times
// what the figure of the receiver says; the time for a wanted error grows by 1/0.85² = 1.38408.
func TestGainCurveInEffectiveMinutes(t *testing.T) {
	flat := example()
	flat.Receiver.ZenithOpacity, flat.Pulsar.FloorUs, flat.Pulsar.JitterUsPerHour = 0, 0, 0
	s := flat
	s.Receiver.GainCurve = sagging
	for _, c := range []struct{ el, want float64 }{{30, 0.89198}, {50, 1.23457}, {90, 1}, {5, 0.60494}} {
		if got := weight(s, c.el); math.Abs(got-c.want) > 1e-5 {
			t.Errorf("a minute at %g deg counts %g, want %g", c.el, got, c.want)
		}
	}
	if got := s.SNR(10, 30) / flat.SNR(10, 30); math.Abs(got-0.85) > 1e-12 {
		t.Errorf("S/N at 30 deg is %g of that without the curve, want 0.85", got)
	}
	if got := s.TOAErrorUs(10, 30) / flat.TOAErrorUs(10, 30); math.Abs(got-1/0.85) > 1e-12 {
		t.Errorf("error at 30 deg is %g times that without the curve, want %g", got, 1/0.85)
	}
	with, err := s.MinutesFor(1, 30)
	if err != nil {
		t.Fatal(err)
	}
	without, err := flat.MinutesFor(1, 30)
	if err != nil {
		t.Fatal(err)
	}
	if got := with / without; math.Abs(got-1.38408) > 1e-5 {
		t.Errorf("minutes at 30 deg are %g times those without the curve, want 1.38408", got)
	}
}

// Whatever the curve: a minute weighs as its share of the squared S/N, and where gain drops towards the horizon no elevation
// below the zenith has more effective minutes than without the curve.
func TestFallingGainNeverHelps(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		flat := example()
		flat.Receiver.ZenithOpacity = rapid.Float64Range(0, 0.3).Draw(t, "opacity")
		s := flat
		el, gain := 0.0, rapid.Float64Range(0.05, 0.5).Draw(t, "lowest")
		for range rapid.IntRange(2, 6).Draw(t, "points") {
			s.Receiver.GainCurve = append(s.Receiver.GainCurve, [2]float64{el, gain})
			el += rapid.Float64Range(1, 18).Draw(t, "step")
			gain += rapid.Float64Range(0, 0.2).Draw(t, "rise")
		}
		if err := s.Check(); err != nil {
			t.Fatal(err)
		}
		last := 0.0
		for el := 0.5; el <= 90; el += 0.5 {
			w := weight(s, el)
			if want := square(s.SNR(1, el) / s.SNR(1, 90)); math.Abs(w-want) > 1e-9 {
				t.Fatalf("at %g deg %g, by the S/N %g", el, w, want)
			}
			if w > weight(flat, el)*(1+1e-12) || w < last*(1-1e-12) {
				t.Fatalf("at %g deg %g, without the curve %g, below %g", el, w, weight(flat, el), last)
			}
			last = w
		}
	})
}

func TestGainCurveIsChecked(t *testing.T) {
	for want, curve := range map[string][][2]float64{
		"found 1 point":       {{10, 0.8}},
		"elevation 91":        {{10, 0.8}, {91, 1}},
		"elevation 10 after":  {{10, 0.8}, {10, 1}},
		"elevation 40 after":  {{50, 0.8}, {40, 1}},
		"factor 0":            {{10, 0}, {50, 1}},
		"factor NaN":          {{10, 0.7}, {50, math.NaN()}},
		"factor +Inf; accept": {{10, 0.7}, {50, math.Inf(1)}},
	} {
		s := example()
		s.Receiver.GainCurve = curve
		if err := s.Check(); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%v: got %v, want it to say %q", curve, err, want)
		}
		if w := weight(s, 60); w != 0 {
			t.Errorf("%v: a minute counts %g", curve, w)
		}
	}
}
