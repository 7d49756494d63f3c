package ephemeris

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/sky/outside"
)

func TestRecoveryLeft(t *testing.T) {
	r := outside.One(t, "values.csv", "PHA-051")
	r.Check(recoveryLeft(r.Num("delay_d"), r.Num("tau_d")))
}

// A modelGlitch is an invented glitch in plain numbers.
type modelGlitch struct{ at, f0, f1, f2, f0d, td float64 }

// turns is the rotation some seconds after the epoch, with the glitches' share, by the published formula for the phase.
func turns(s, epoch, f0, f1, f2 float64, all []modelGlitch) float64 {
	phase := f0*s + f1*s*s/2 + f2*s*s*s/6
	for _, g := range all {
		d := s - (g.at-epoch)*secPerDay
		if d < 0 {
			continue
		}
		phase += g.f0*d + g.f1*d*d/2 + g.f2*d*d*d/6
		if g.td > 0 {
			tau := g.td * secPerDay
			phase += g.f0d * tau * (1 - math.Exp(-d/tau))
		}
	}
	return phase
}

func (g modelGlitch) lines(n int) string {
	text := fmt.Sprintf("GLEP_%d %.1f\nGLPH_%d 0.2\nGLF0_%d %g 1 1e-9\nGLF1_%d %g 1 1e-17\nGLF2_%d %g\n", n, g.at, n, n, g.f0, n, g.f1, n, g.f2)
	if g.td > 0 {
		text += fmt.Sprintf("GLF0D_%d %g 1 1e-9\nGLTD_%d %g\n", n, g.f0d, n, g.td)
	}
	return text
}

func importedSpin(t *testing.T, text string) (*campaigns.Source, *File) {
	t.Helper()
	f := read(t, text)
	s := load(t, f.Source())
	if s.Spin == nil {
		t.Fatalf("no spin: %v", f.Remarks)
	}
	return s, f
}

// The spin written out is the rate at which the phase of the whole model runs, at the date that it is written for.
func TestGlitches(t *testing.T) {
	// Invented, as large as those of young pulsars. The epoch and frequency are small so that the sums below, in plain
	// floating point, keep their digits.
	const epoch, f0, f1, f2 = 50000.0, 0.0625, -1e-12, 1e-22
	before := modelGlitch{at: 49900, f0: 3e-6, f1: -2e-14}
	first := modelGlitch{at: 50200, f0: 2e-6, f1: -1e-14, f2: 1e-22, f0d: 4e-7, td: 30}
	second := modelGlitch{at: 50307, f0: 5e-6, f0d: -1e-6, td: 120}
	for name, c := range map[string]struct {
		all    []modelGlitch
		finish string
		at     float64
	}{
		"none after":         {[]modelGlitch{before}, "", epoch},
		"at the glitch":      {[]modelGlitch{first}, "", 50200},
		"at the second":      {[]modelGlitch{second, first}, "", 50307},
		"at the data's end":  {[]modelGlitch{first, second}, "FINISH 50314\n", 50314},
		"all of them":        {[]modelGlitch{first, before, second}, "FINISH 50400\n", 50400},
		"data ended before":  {[]modelGlitch{first}, "FINISH 50100\n", 50200},
		"data end by PEPOCH": {[]modelGlitch{before}, "FINISH 50100\n", epoch},
	} {
		text := fmt.Sprintf("PSR A\nRAJ 1:2:3\nDECJ 4:5:6\nUNITS TDB\nPEPOCH %g\nF0 %g 1 1e-10\nF1 %g 1 1e-18\nF2 %g\n%s", epoch, f0, f1, f2, c.finish)
		for i, g := range c.all {
			text += g.lines(i + 1)
		}
		s, f := importedSpin(t, text)
		if s.Spin.EpochMJD != c.at {
			t.Errorf("%s: epoch %g, want %g", name, s.Spin.EpochMJD, c.at)
		}
		// Differences of the phase forward from the date: at a glitch itself its terms have begun.
		const h = 4096
		p := func(k float64) float64 { return turns((c.at-epoch)*secPerDay+k*h, epoch, f0, f1, f2, c.all) }
		rate := (-1.5*p(0) + 2*p(1) - 0.5*p(2)) / h
		bend := (2*p(0) - 5*p(1) + 4*p(2) - p(3)) / (h * h)
		if math.Abs(s.Spin.FrequencyHz-rate) > 1e-11 || math.Abs(s.Spin.FrequencyHz-f0) < 1e-6 {
			t.Errorf("%s: frequency %.14g, want %.14g", name, s.Spin.FrequencyHz, rate)
		}
		if math.Abs(s.Spin.DerivativeHzPerS-bend) > 2e-15 {
			t.Errorf("%s: derivative %g, want %g", name, s.Spin.DerivativeHzPerS, bend)
		}
		if s.GlitchMJD > s.Spin.EpochMJD {
			t.Errorf("%s: the glitch at %g is after the spin's date, %g", name, s.GlitchMJD, s.Spin.EpochMJD)
		}
		if c.at != epoch && !strings.Contains(f.Source(), "PEPOCH is 50000") {
			t.Errorf("%s: the entry does not say that the date is another one\n%s", name, f.Source())
		}
	}
}

// The error of the moved frequency is what the errors of its terms make, or not known.
func TestGlitchErrors(t *testing.T) {
	const head = "PSR A\nRAJ 1:2:3\nDECJ 4:5:6\nUNITS TDB\nPEPOCH 50000\nF0 2 1 3e-10\nF1 -1e-11 1 1e-18\nGLEP_1 50100\nFINISH 50200\n"
	dt := 200. * secPerDay
	s, _ := importedSpin(t, head+"GLF0_1 1e-6 1 4e-10\nGLF1_1 -1e-14 1 2e-18")
	want := math.Sqrt(9e-20 + 1e-36*dt*dt + 16e-20 + 4e-36*dt*dt/4)
	if math.Abs(s.Spin.SigmaFrequencyHz/want-1) > 1e-12 {
		t.Errorf("error %g, want %g", s.Spin.SigmaFrequencyHz, want)
	}
	if want := math.Hypot(1e-18, 2e-18); math.Abs(s.Spin.SigmaDerivativeHzPerS/want-1) > 1e-12 {
		t.Errorf("error of the derivative %g, want %g", s.Spin.SigmaDerivativeHzPerS, want)
	}
	if s, _ := importedSpin(t, head+"GLF0_1 1e-6"); s.Spin.SigmaFrequencyHz != 0 {
		t.Errorf("a step without error leaves one of %g", s.Spin.SigmaFrequencyHz)
	}
}

// Every term on the way to another date has its part in the error, and one without an error leaves it unknown.
func TestErrorsOnTheWayPastAGlitch(t *testing.T) {
	const head = "PSR A\nRAJ 1:2:3\nDECJ 4:5:6\nUNITS TDB\nPEPOCH 50000\nF0 2 1 3e-10\nGLEP_1 50100\nGLF0_1 1e-6 1 4e-10\n"
	dt := 100. * secPerDay
	s, _ := importedSpin(t, head+"F1 -1e-11 1 1e-18\nF2 1e-22 1 1e-24")
	want := math.Sqrt(9e-20 + 16e-20 + 1e-36*dt*dt + 1e-48*dt*dt*dt*dt/4)
	if math.Abs(s.Spin.SigmaFrequencyHz/want-1) > 1e-12 {
		t.Errorf("error %g, want %g", s.Spin.SigmaFrequencyHz, want)
	}
	for _, terms := range []string{"F1 -1e-11", "F1 -1e-11 1 1e-18\nF2 1e-22"} {
		if s, _ := importedSpin(t, head+terms); s.Spin.SigmaFrequencyHz != 0 {
			t.Errorf("%q leaves an error of %g", terms, s.Spin.SigmaFrequencyHz)
		}
	}
}

// No digit of F0 is lost on the way to another date.
func TestGlitchKeepsDigits(t *testing.T) {
	f := read(t, "PSR A\nRAJ 1:2:3\nDECJ 4:5:6\nUNITS TDB\nPEPOCH 50000\nF0 317.3789419337928734\nGLEP_1 50100\nGLF0_1 1e-9")
	if entry := f.Source(); !strings.Contains(entry, "frequency_hz = 317.3789419347928734 ") {
		t.Errorf("the sum is not to the last digit:\n%s", entry)
	}
}

// A higher derivative counts on the way to another date even where the one below it is not in the file.
func TestGlitchWithoutTheSecondDerivative(t *testing.T) {
	s, _ := importedSpin(t, "PSR A\nRAJ 1:2:3\nDECJ 4:5:6\nUNITS TDB\nPEPOCH 50000\nF0 2\nF1 -1e-12\nF3 6e-27\nGLEP_1 50100\nGLF0_1 1e-6")
	dt := 100. * secPerDay
	if want := 2 + 1e-6 - 1e-12*dt + 1e-27*dt*dt*dt; math.Abs(s.Spin.FrequencyHz-want) > 1e-13 {
		t.Errorf("frequency %.15g, want %.15g", s.Spin.FrequencyHz, want)
	}
	if want := -1e-12 + 3e-27*dt*dt; math.Abs(s.Spin.DerivativeHzPerS/want-1) > 1e-9 {
		t.Errorf("derivative %.12g, want %.12g", s.Spin.DerivativeHzPerS, want)
	}
}
