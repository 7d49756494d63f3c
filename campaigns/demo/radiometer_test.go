package demo_test

import (
	"math"
	"slices"
	"testing"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/sky"
	"example.org/tallystick/sky/radiometer"
)

func setupOf(s *campaigns.Source, r campaigns.Receiver) radiometer.Setup {
	sky408 := s.SkyK
	if sky408 == 0 {
		sky408 = radiometer.SkyAt408(sky.GalacticDeg(s.RADeg, s.DecDeg))
	}
	return radiometer.Setup{
		Receiver: radiometer.Receiver{BandMHz: r.BandMHz, TsysK: r.TsysK, ZenithOpacity: r.ZenithOpacity,
			GainKPerJy: r.GainKPerJy, GainCurve: r.GainCurve, Polarizations: r.Polarizations},
		Pulsar: radiometer.Pulsar{FluxMJy: s.Flux.MJy, AtMHz: s.Flux.AtMHz, SpectralIndex: s.Flux.SpectralIndex,
			PeriodS: 1 / s.Spin.FrequencyHz, WidthMs: s.WidthMs, JitterUsPerHour: s.JitterUsPerHour, FloorUs: s.FloorUs,
			Sky408K: sky408},
	}
}

// What was logged scatters with scintillation about what the radiometer equation expects, and a little below:
// the elevation is taken as 45 degrees for all, and interference and digitisation cost something.
func TestLoggedSignalsAreExpected(t *testing.T) {
	c := load(t)
	known := sourcesByName(c)
	for _, r := range c.Receivers {
		var snr, toa []float64
		for _, e := range logbook(t) {
			s := known[e.Source]
			if e.Receiver != r.Name || e.Outcome != campaigns.Done || s.Spin == nil {
				continue
			}
			setup, minutes := setupOf(s, r), e.End.Sub(e.Start).Minutes()
			snr = append(snr, e.SNR/setup.SNR(minutes, 45))
			toa = append(toa, e.ToaUs/setup.TOAErrorUs(minutes, 45))
		}
		slices.Sort(snr)
		slices.Sort(toa)
		if m := snr[len(snr)/2]; m < 0.75 || m > 1.05 {
			t.Errorf("%s: the median S/N is %.2f of the expected one", r.Name, m)
		}
		if m := toa[len(toa)/2]; m < 0.95 || m > 1.35 {
			t.Errorf("%s: the median TOA error is %.2f of the expected one", r.Name, m)
		}
		if low, high := snr[0], snr[len(snr)-1]; low < 0.1 || high > 6 {
			t.Errorf("%s: S/N from %.2f to %.2f of the expected one", r.Name, low, high)
		}
	}
}

// An aim that asks for a TOA error must be one that a visit of reasonable length can reach.
func TestWantedErrorsCanBeReached(t *testing.T) {
	c := load(t)
	wanted := 0
	for i := range c.Sources {
		s := &c.Sources[i]
		for _, a := range s.Aims {
			if a.ToaUs == 0 {
				continue
			}
			for _, r := range c.Receivers {
				if !slices.Contains(a.Receivers, r.Name) {
					continue
				}
				wanted++
				minutes, err := setupOf(s, r).MinutesFor(a.ToaUs, 60)
				if err != nil || math.IsInf(minutes, 0) || minutes < 15 || minutes > 45 {
					t.Errorf("%s: %g µs in %s takes %.1f minutes (%v), 15 to 45 are reasonable", s.Name, a.ToaUs, r.Name, minutes, err)
				}
			}
		}
	}
	if wanted < 3 {
		t.Errorf("%d aims ask for a TOA error, at least 3 are wanted", wanted)
	}
}
