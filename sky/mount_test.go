package sky

import (
	"math"
	"slices"
	"testing"
	"time"

	"pgregory.net/rapid"
)

func drawMount(t *rapid.T) Mount {
	m := Mount{
		Kind:          rapid.SampledFrom([]MountKind{AltAz, Equatorial, Transit}).Draw(t, "mount"),
		RateDegPerMin: [2]float64{rapid.Float64Range(1, 120).Draw(t, "rate a"), rapid.Float64Range(1, 120).Draw(t, "rate b")},
		AccelDegPerS2: [2]float64{rapid.Float64Range(0, 2).Draw(t, "acceleration a"), rapid.Float64Range(0.001, 2).Draw(t, "acceleration b")},
		SettleSec:     rapid.Float64Range(0, 60).Draw(t, "settling"),
		HourAngleDeg:  [2]float64{-75, 75},
	}
	m.TravelDeg[0] = rapid.Float64Range(-400, 0).Draw(t, "lower stop")
	m.TravelDeg[1] = m.TravelDeg[0] + rapid.Float64Range(90, 700).Draw(t, "travel")
	if err := m.Check(); err != nil {
		t.Fatal(err)
	}
	return m
}

func TestMoveSec(t *testing.T) {
	m := Mount{Kind: AltAz, TravelDeg: [2]float64{-270, 270}, RateDegPerMin: [2]float64{24, 12}, AccelDegPerS2: [2]float64{0.1, 0.1}, SettleSec: 20}
	for _, c := range []struct {
		to   Axes
		want float64
	}{
		{Axes{0, 0}, 0},
		{Axes{90, 0}, 90/0.4 + 0.4/0.1 + 20},  // reaches full speed
		{Axes{0, -30}, 30/0.2 + 0.2/0.1 + 20}, // the other axis
		{Axes{0.9, 0}, 2*3 + 20},              // never does: √(0.9/0.1) = 3
		{Axes{0.9, 30}, 30/0.2 + 0.2/0.1 + 20},
	} {
		if got := m.MoveSec(Axes{}, c.to); math.Abs(got-c.want) > 1e-9 {
			t.Errorf("to %v: %g s, want %g", c.to, got, c.want)
		}
	}

	rapid.Check(t, func(t *rapid.T) {
		m := drawMount(t)
		angle := rapid.Float64Range(-300, 300)
		from := Axes{angle.Draw(t, "from a"), angle.Draw(t, "from b")}
		by := Axes{angle.Draw(t, "by a"), angle.Draw(t, "by b")}
		to := Axes{from.A + by.A, from.B + by.B}
		if a, b := m.MoveSec(from, to), m.MoveSec(to, from); a != b {
			t.Fatalf("%g s there, %g s back", a, b)
		}
		still := to.B == from.B && (to.A == from.A || m.Kind == Transit)
		if got, want := m.MoveSec(from, to), plainMoveSec(m, to.A-from.A, to.B-from.B); got != want {
			t.Fatalf("%g s, worked out on both axes %g", got, want)
		}
		if got := m.MoveSec(from, to); still != (got == 0) || got < 0 || !still && got < m.SettleSec {
			t.Fatalf("%v to %v: %g s", from, to, got)
		}
		further := Axes{from.A + 1.1*by.A, from.B + 1.1*by.B}
		if m.MoveSec(from, further) < m.MoveSec(from, to) {
			t.Fatalf("%v to %v is quicker than to %v", from, further, to)
		}
	})
}

// plainMoveSec works out both axes and takes no bounds.
func plainMoveSec(m Mount, byDeg ...float64) float64 {
	longest := 0.0
	for i, theta := range byDeg {
		v, a, theta := m.RateDegPerMin[i]/60, m.AccelDegPerS2[i], math.Abs(theta)
		sec := theta / v
		switch {
		case i == 0 && m.Kind == Transit, theta == 0:
			sec = 0
		case a > 0 && theta <= v*v/a:
			sec = 2 * math.Sqrt(theta/a)
		case a > 0:
			sec = theta/v + v/a
		}
		longest = max(longest, sec)
	}
	if longest == 0 {
		return 0
	}
	return longest + m.SettleSec
}

// Following a place in a turn, the mount never leaves its travel while the turn is open, and is outside whenever it
// is not.
func TestTurns(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := drawSite(t)
		from := drawInstant(t)
		to := from.Add(time.Duration(rapid.IntRange(60, 86400).Draw(t, "length")) * time.Second)
		f := mustFrameOf(t, from.Add(to.Sub(from)/2))
		p := f.Place(Target{RADeg: rapid.Float64Range(0, 359.9).Draw(t, "ra"), DecDeg: rapid.Float64Range(-89, 89).Draw(t, "dec")})
		m := drawMount(t)
		m.Kind = AltAz
		const step = 2 * time.Minute
		turns := s.Turns(m, f, p, from, to)
		track := make([]Axes, int(to.Sub(from)/step)+1)
		for k := -4; k <= 4; k++ {
			var open []Window
			for _, turn := range turns {
				if turn.Turn == k {
					open = turn.Open
				}
			}
			checkOrder(t, open, from, to)
			s.AxesTrack(m, f, p, from, step, k, track)
			for i, a := range track {
				at := from.Add(time.Duration(i) * step)
				inside := slices.ContainsFunc(open, func(w Window) bool { return !at.Before(w.From) && !at.After(w.To) })
				slack := min(math.Abs(a.A-m.TravelDeg[0]), math.Abs(a.A-m.TravelDeg[1]))
				if within := a.A >= m.TravelDeg[0] && a.A <= m.TravelDeg[1]; within != inside && slack > 1e-4/max(1e-9, math.Cos(a.B*radPerDeg)) {
					t.Fatalf("turn %d at %v: azimuth %g, travel %v, open %v: %v", k, at, a.A, m.TravelDeg, inside, open)
				}
			}
			for _, w := range open {
				for i, c := range []Cause{w.OpensBy, w.ClosesBy} {
					at := []time.Time{w.From, w.To}[i]
					if az := s.Look(f, p, at).AzDeg; c.Kind == AzimuthStop && math.Abs(math.Remainder(az-c.Deg, 360)) > 1e-3 {
						t.Fatalf("%v at azimuth %g", c, az)
					}
				}
			}
		}
	})
}

// A transit mount sees a source for the short time its hour angle is within limits.
func TestTransitMount(t *testing.T) {
	s, err := NewSite(-30, 20, 100, 0)
	if err != nil {
		t.Fatal(err)
	}
	m := Mount{Kind: Transit, HourAngleDeg: [2]float64{-1, 1}, RateDegPerMin: [2]float64{0, 5}}
	if err := m.Check(); err != nil {
		t.Fatal(err)
	}
	at := time.Date(2027, 5, 5, 0, 0, 0, 0, time.UTC)
	f := mustFrame(t, at.Add(12*time.Hour))
	p := f.Place(Target{RADeg: 200, DecDeg: -40})
	windows := s.Windows(f, p, at, at.Add(24*time.Hour), m.Limits(Limits{LowDeg: 10}))
	if len(windows) != 1 {
		t.Fatalf("windows %v", windows)
	}
	w := windows[0]
	if got := w.To.Sub(w.From).Seconds(); math.Abs(got-2*86164.09/360) > 0.1 {
		t.Errorf("open for %g s", got)
	}
	if w.OpensBy.String() != "hour angle limit -1°" || w.ClosesBy.String() != "hour angle limit 1°" {
		t.Errorf("%v to %v", w.OpensBy, w.ClosesBy)
	}
}

func TestChecks(t *testing.T) {
	nan := math.NaN()
	good := Mount{Kind: AltAz, TravelDeg: [2]float64{-270, 270}, RateDegPerMin: [2]float64{24, 12}}
	bad := func(change func(m *Mount)) error { m := good; change(&m); return m.Check() }
	site := func(lat, lon, height, dut1 float64) error { _, err := NewSite(lat, lon, height, dut1); return err }
	air := func(p, c, h float64) error { _, err := NewRefraction(p, c, h); return err }
	frame := func(at time.Time) error { _, err := NewFrame(at); return err }
	frames := func(a, b time.Time) error { _, err := NewFrames(a, b); return err }
	now := time.Date(2027, 1, 1, 0, 0, 0, 0, time.UTC)
	for i, err := range []error{
		bad(func(m *Mount) { m.TravelDeg = [2]float64{10, 10} }),
		bad(func(m *Mount) { m.TravelDeg[0] = nan }),
		bad(func(m *Mount) { m.RateDegPerMin[1] = 0 }),
		bad(func(m *Mount) { m.AccelDegPerS2[0] = -1 }),
		bad(func(m *Mount) { m.SettleSec = nan }),
		bad(func(m *Mount) { m.Kind = 7 }),
		bad(func(m *Mount) { m.Kind = Transit }),
		bad(func(m *Mount) { m.Kind, m.HourAngleDeg = Equatorial, [2]float64{20, -20} }),
		site(91, 0, 0, 0), site(nan, 0, 0, 0), site(0, 361, 0, 0), site(0, 0, 1e5, 0), site(0, 0, 0, 1),
		air(0, 0, 0), air(1000, 99, 0), air(1000, 0, 1.1), air(nan, 0, 0),
		frame(time.Time{}), frame(time.Date(2100, 1, 1, 0, 0, 0, 0, time.UTC)),
		frames(now, now.Add(-1)), frames(time.Time{}, now),
		Target{RADeg: 360}.Check(), Target{DecDeg: -91}.Check(), Target{RADeg: nan}.Check(), Target{EpochMJD: 2000}.Check(), Target{PMRAMasPerYr: nan}.Check(),
		Limits{LowDeg: 90}.Check(), Limits{LowDeg: 20, HighDeg: 10}.Check(), Limits{SunDeg: -1}.Check(), Limits{SunDeg: nan}.Check(),
		Limits{HourAngleDeg: [2]float64{-200, 0}}.Check(), Limits{AzimuthDegPerMin: nan}.Check(), Limits{HighDeg: nan}.Check(),
		Limits{Mask: Mask{{10, 5}, {5, 5}}}.Check(),
		Mask{{0, 5}, {360, 5}}.Check(), Mask{{350, 5}, {10, 5}}.Check(), Mask{{10, 5}, {10, 8}}.Check(), Mask{{nan, 5}}.Check(), Mask{{0, nan}}.Check(), Mask{{0, 91}}.Check(),
	} {
		if err == nil {
			t.Errorf("case %d is accepted", i)
		}
	}
	for i, err := range []error{good.Check(), Limits{}.Check(), Limits{LowDeg: 8, HighDeg: 87, Mask: Mask{{0, 9}, {60, 14.5}}}.Check(), Target{}.Check(), Mask(nil).Check()} {
		if err != nil {
			t.Errorf("good case %d: %v", i, err)
		}
	}
}

func TestMaskAt(t *testing.T) {
	m, err := MaskOf([][2]float64{{20, 9}, {60, 15}, {340, 3}})
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range [][2]float64{{20, 9}, {40, 12}, {60, 15}, {200, 9}, {340, 3}, {350, 4.5}, {0, 6}, {360, 6}, {10, 7.5}, {-10, 4.5}, {380, 9}} {
		if got := m.At(c[0]); math.Abs(got-c[1]) > 1e-9 {
			t.Errorf("at azimuth %g: %g, want %g", c[0], got, c[1])
		}
	}
	if got := (Mask{{120, 7}}).At(300); got != 7 {
		t.Errorf("level mask: %g", got)
	}
	if got := (Mask)(nil).At(300); got != -90 {
		t.Errorf("no mask: %g", got)
	}
}
