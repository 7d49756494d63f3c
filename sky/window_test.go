package sky

import (
	"fmt"
	"math"
	"slices"
	"testing"
	"time"

	"pgregory.net/rapid"
)

var latitudes = rapid.OneOf(rapid.Float64Range(-90, 90), rapid.SampledFrom([]float64{-90, 90, 0, 1e-7, -89.9999}))

func drawSite(t *rapid.T) *Site {
	s, err := NewSite(latitudes.Draw(t, "latitude"), rapid.Float64Range(-180, 180).Draw(t, "longitude"),
		rapid.Float64Range(0, 5000).Draw(t, "height"), rapid.Float64Range(-0.9, 0.9).Draw(t, "dut1"))
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func drawInstant(t *rapid.T) time.Time {
	if rapid.IntRange(0, 9).Draw(t, "at a year's end") == 0 {
		return time.Date(rapid.IntRange(2020, 2035).Draw(t, "year"), 12, 31, 14, 0, 0, 0, time.UTC)
	}
	return time.Date(2020, 1, 1, 0, 0, 0, 0, time.UTC).Add(time.Duration(rapid.Int64Range(0, 16*365*86400).Draw(t, "seconds")) * time.Second)
}

// drawTarget favours what grazes: near the site's zenith, the poles, and the Sun.
func drawTarget(t *rapid.T, s *Site, f *Frame) Target {
	switch rapid.IntRange(0, 5).Draw(t, "kind of target") {
	case 0:
		return Target{RADeg: rapid.Float64Range(0, 359.9).Draw(t, "ra"), DecDeg: min(max(s.LatitudeDeg+rapid.Float64Range(-1.5, 1.5).Draw(t, "dec off zenith"), -90), 90)}
	case 1:
		return Target{RADeg: rapid.Float64Range(0, 359.9).Draw(t, "ra"), DecDeg: rapid.SampledFrom([]float64{-90, 90, -89.99, 89.9}).Draw(t, "polar dec")}
	case 2:
		ra, dec := f.raDec(f.Sun(), f.At())
		return Target{RADeg: mod(ra+rapid.Float64Range(-8, 8).Draw(t, "ra off Sun"), 360), DecDeg: dec + rapid.Float64Range(-8, 8).Draw(t, "dec off Sun")}
	}
	return Target{RADeg: rapid.Float64Range(0, 359.9).Draw(t, "ra"), DecDeg: rapid.Float64Range(-90, 90).Draw(t, "dec"),
		PMRAMasPerYr: rapid.Float64Range(-500, 500).Draw(t, "pmra"), PMDecMasPerYr: rapid.Float64Range(-500, 500).Draw(t, "pmdec")}
}

func drawMask(t *rapid.T) Mask {
	n := rapid.IntRange(0, 12).Draw(t, "mask points")
	var m Mask
	az := rapid.Float64Range(0, 60).Draw(t, "first azimuth")
	for i := 0; i < n && az < 360; i++ {
		m = append(m, MaskPoint{az, rapid.Float64Range(0, 45).Draw(t, "mask elevation")})
		az += rapid.Float64Range(0.5, 70).Draw(t, "mask step")
	}
	return m
}

func drawLimits(t *rapid.T) Limits {
	l := Limits{LowDeg: rapid.Float64Range(0, 60).Draw(t, "low"), Mask: drawMask(t)}
	if rapid.Bool().Draw(t, "with an upper limit") {
		l.HighDeg = rapid.Float64Range(70, 89.9).Draw(t, "high")
	}
	if rapid.Bool().Draw(t, "with hour angles") {
		l.HourAngleDeg[0] = rapid.Float64Range(-180, 60).Draw(t, "east")
		l.HourAngleDeg[1] = rapid.Float64Range(l.HourAngleDeg[0]+1, 180).Draw(t, "west")
	}
	if rapid.Bool().Draw(t, "with a Sun limit") {
		l.SunDeg = rapid.Float64Range(1, 10).Draw(t, "Sun")
	}
	if rapid.Bool().Draw(t, "with a rate") {
		l.AzimuthDegPerMin = rapid.Float64Range(0.3, 60).Draw(t, "rate")
	}
	if rapid.IntRange(0, 3).Draw(t, "with air") == 0 {
		air, err := NewRefraction(1013, 15, 0.5)
		if err != nil {
			t.Fatal(err)
		}
		l.Refraction = air
	}
	return l
}

// margins returns by how much each limit is kept (negative: broken), each in degrees or a like unit, worked out from
// looks alone.
func margins(s *Site, f *Frame, p Place, at time.Time, l Limits) map[CauseKind]float64 {
	look := s.Look(f, p, at)
	el := look.ElDeg
	if l.Refraction != nil {
		el += l.Refraction.lift(math.Sin(el*radPerDeg)) * degPerRad
	}
	m := map[CauseKind]float64{LowElevation: el - l.LowDeg, HorizonMask: el - l.Mask.At(look.AzDeg)}
	if l.HighDeg != 0 {
		m[HighElevation] = l.HighDeg - el
	}
	if l.HourAngleDeg != [2]float64{} {
		m[HourAngle] = min(look.HourAngleDeg-l.HourAngleDeg[0], l.HourAngleDeg[1]-look.HourAngleDeg)
	}
	if l.SunDeg > 0 {
		m[SunDistance] = f.SunDeg(p, at) - l.SunDeg
	}
	if l.AzimuthDegPerMin > 0 {
		const half = 100 * time.Millisecond
		a, b := s.Look(f, p, at.Add(-half)), s.Look(f, p, at.Add(half))
		rate := math.Abs(math.Remainder(b.AzDeg-a.AzDeg, 360)) * 60 / (2 * half).Seconds()
		m[AzimuthRate] = l.AzimuthDegPerMin/rate - 1
	}
	return m
}

// The closed forms and a dumb scan find the same windows for any site, source and limits.
func TestWindowsAgainstScan(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := drawSite(t)
		from := drawInstant(t)
		to := from.Add(time.Duration(rapid.IntRange(60, 86400).Draw(t, "length")) * time.Second)
		f := mustFrameOf(t, from.Add(to.Sub(from)/2))
		target := drawTarget(t, s, f)
		p := f.Place(target)
		lim := drawLimits(t)
		if err := lim.Check(); err != nil {
			t.Fatal(err)
		}
		windows := s.Windows(f, p, from, to, lim)
		checkOrder(t, windows, from, to)

		step := 60 * time.Second
		for at := from; !at.After(to); at = at.Add(step) {
			inside := slices.ContainsFunc(windows, func(w Window) bool { return !at.Before(w.From) && !at.After(w.To) })
			kept, close := true, false
			all := margins(s, f, p, at, lim)
			for kind, m := range all {
				slack := 1e-5
				if kind == AzimuthRate {
					slack = 1e-3 // the rate is a difference over 0.2 s
				}
				kept = kept && m >= 0
				close = close || math.Abs(m) < slack
			}
			if !close && kept != inside {
				t.Fatalf("at %v: in a window %v, but margins are %v; windows %v", at, inside, all, windows)
			}
		}
		// At its ends each window's own limit is met.
		for _, w := range windows {
			for i, c := range []Cause{w.OpensBy, w.ClosesBy} {
				at := []time.Time{w.From, w.To}[i]
				switch c.Kind {
				case LowElevation, HighElevation, HorizonMask, SunDistance, HourAngle:
					m := margins(s, f, p, at, lim)[c.Kind]
					look := s.Look(f, p, at)
					el := look.ElDeg
					if c.Kind == HourAngle { // −180 and 180 are the same
						m = math.Remainder(look.HourAngleDeg-c.Deg, 360)
					}
					if math.Abs(m) > 2e-6+1e-7/max(1e-9, math.Cos(el*radPerDeg)) && !(c.Kind == HourAngle && math.Abs(target.DecDeg) > 89) {
						t.Fatalf("window %v: %v at %v, but the margin there is %g", w, c, at, m)
					}
				}
			}
		}
	})
}

func mustFrameOf(t *rapid.T, at time.Time) *Frame {
	f, err := NewFrame(at)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

func checkOrder(t *rapid.T, windows []Window, from, to time.Time) {
	for i, w := range windows {
		if !w.From.Before(w.To) || w.From.Before(from) || w.To.After(to) || i > 0 && w.From.Before(windows[i-1].To) {
			t.Fatalf("window %d is out of order: %v", i, windows)
		}
	}
}

// Between rise and set no instant is below the limit; elevation at both is the limit.
func TestRiseAndSetMeetTheLimit(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := drawSite(t)
		from := drawInstant(t)
		to := from.Add(24 * time.Hour)
		f := mustFrameOf(t, from.Add(12*time.Hour))
		p := f.Place(Target{RADeg: rapid.Float64Range(0, 359.9).Draw(t, "ra"), DecDeg: rapid.Float64Range(-90, 90).Draw(t, "dec")})
		lim := Limits{LowDeg: rapid.Float64Range(-5, 80).Draw(t, "low")}
		got := s.Passes(f, p, from, to, lim)
		up, since := got.StartsUp, from
		for _, e := range append(got.Events, Event{Kind: LowerTransit + 1, At: to}) {
			for i := range 11 { // the stretch before the event
				at := since.Add(e.At.Sub(since) * time.Duration(i) / 10)
				off := s.Look(f, p, at).ElDeg - lim.LowDeg
				if up && off < -1e-6 || !up && off > 1e-6 {
					t.Fatalf("before %v (up: %v): elevation is %g off the limit at %v", e, up, off, at)
				}
			}
			since = e.At
			switch e.Kind {
			case Rise, Set:
				if up == (e.Kind == Rise) {
					t.Fatalf("%v twice in a row", e)
				}
				up = e.Kind == Rise
				if math.Abs(e.ElDeg-lim.LowDeg) > 1e-6 {
					t.Fatalf("%v at elevation %g, limit %g", e.Kind, e.ElDeg, lim.LowDeg)
				}
			case UpperTransit:
				if math.Abs(e.ElDeg-got.HighestDeg) > 1e-3 {
					t.Fatalf("transit at %g, highest %g", e.ElDeg, got.HighestDeg)
				}
			}
		}
	})
}

// What a mask lets through, a lowered mask lets through too.
func TestLoweredMask(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := drawSite(t)
		from := drawInstant(t)
		to := from.Add(24 * time.Hour)
		f := mustFrameOf(t, from.Add(12*time.Hour))
		p := f.Place(Target{RADeg: rapid.Float64Range(0, 359.9).Draw(t, "ra"), DecDeg: rapid.Float64Range(-90, 90).Draw(t, "dec")})
		mask := drawMask(t)
		lowered := slices.Clone(mask)
		for i := range lowered {
			lowered[i].ElevationDeg -= rapid.Float64Range(0, 10).Draw(t, "lowered by")
		}
		narrow := s.Windows(f, p, from, to, Limits{Mask: mask})
		wide := s.Windows(f, p, from, to, Limits{Mask: lowered})
		const slack = time.Millisecond
		for _, w := range narrow {
			if !slices.ContainsFunc(wide, func(v Window) bool { return !v.From.After(w.From.Add(slack)) && !v.To.Before(w.To.Add(-slack)) }) && w.To.Sub(w.From) > 2*slack {
				t.Fatalf("%v lies in none of %v", w, wide)
			}
		}
	})
}

// Windows of a season are those of its days, joined.
func TestSeason(t *testing.T) {
	s, err := NewSite(38.21, -4.63, 812, 0)
	if err != nil {
		t.Fatal(err)
	}
	from := time.Date(2026, 12, 20, 7, 0, 0, 0, time.UTC)
	to := from.AddDate(0, 0, 25)
	frames, err := NewFrames(from, to)
	if err != nil {
		t.Fatal(err)
	}
	for _, target := range []Target{{RADeg: 33.53, DecDeg: 33.37}, {RADeg: 270, DecDeg: -23}, {RADeg: 10, DecDeg: 80}, {RADeg: 10, DecDeg: -70}} {
		lim := Limits{LowDeg: 12, HighDeg: 86, SunDeg: 8, Mask: Mask{{0, 9}, {60, 14.5}, {110, 8}, {250, 20}}}
		season := s.Season(frames, target, from, to, lim)
		step := 7 * time.Minute
		f := mustFrame(t, from)
		for at := from; at.Before(to); at = at.Add(step) {
			if f.At().Sub(at).Abs() > 6*time.Hour { // other frames than the season's own
				f = mustFrame(t, at)
			}
			kept := true
			near := false
			for _, m := range margins(s, f, f.Place(target), at, lim) {
				kept = kept && m >= 0
				near = near || math.Abs(m) < 1e-4
			}
			inside := slices.ContainsFunc(season, func(w Window) bool { return !at.Before(w.From) && !at.After(w.To) })
			if kept != inside && !near {
				t.Errorf("%v at %v: in a window %v, want %v", target, at, inside, kept)
			}
		}
		for i, w := range season {
			if w.OpensBy.Kind == Interval && !w.From.Equal(from) || w.ClosesBy.Kind == Interval && !w.To.Equal(to) {
				t.Errorf("%v: window %d ends at the edge of a frame: %v", target, i, w)
			}
		}
	}
}

// An interval that begins or ends on a culmination, to the nanosecond, loses nothing.
func TestFromTransitToTransit(t *testing.T) {
	s, err := NewSite(20, 50, 0, 0)
	if err != nil {
		t.Fatal(err)
	}
	at := time.Date(2027, 2, 3, 0, 0, 0, 0, time.UTC)
	f := mustFrame(t, at.Add(18*time.Hour))
	lim := Limits{LowDeg: 15}
	for _, target := range spread(50) {
		p := f.Place(target)
		var transits []time.Time
		for _, e := range s.Passes(f, p, at, at.Add(36*time.Hour), Limits{LowDeg: 15}).Events {
			if e.Kind == UpperTransit || e.Kind == LowerTransit {
				transits = append(transits, e.At)
			}
		}
		for _, start := range transits {
			for shift := time.Duration(-3); shift <= 3; shift++ {
				from := start.Add(shift)
				to := from.Add(20 * time.Hour)
				windows := s.Windows(f, p, from, to, lim)
				for m := range 20 * 6 {
					at := from.Add(time.Duration(m)*10*time.Minute + 5*time.Minute)
					above := s.Look(f, p, at).ElDeg - lim.LowDeg
					inside := slices.ContainsFunc(windows, func(w Window) bool { return !at.Before(w.From) && !at.After(w.To) })
					if inside != (above >= 0) && math.Abs(above) > 1e-5 {
						t.Fatalf("%v from %v: at %v %g above the limit, windows %v", target, from, at, above, windows)
					}
				}
			}
		}
	}
}

func TestNeverAndAlways(t *testing.T) {
	north, err := NewSite(90, 0, 0, 0)
	if err != nil {
		t.Fatal(err)
	}
	at := time.Date(2026, 12, 31, 12, 0, 0, 0, time.UTC)
	f := mustFrame(t, at.Add(12*time.Hour))
	for _, c := range []struct {
		dec  float64
		want Standing
		n    int
	}{{30, NeverSets, 1}, {-30, NeverRises, 0}, {9, NeverRises, 0}} {
		p := f.Place(Target{RADeg: 100, DecDeg: c.dec})
		lim := Limits{LowDeg: 10}
		if got := north.Passes(f, p, at, at.Add(24*time.Hour), lim); got.Standing != c.want {
			t.Errorf("declination %g at the pole: %v", c.dec, got.Standing)
		}
		if got := north.Windows(f, p, at, at.Add(24*time.Hour), lim); len(got) != c.n {
			t.Errorf("declination %g at the pole: windows %v", c.dec, got)
		}
	}
}

func TestAzimuthRate(t *testing.T) {
	// Straight through the zenith the azimuth swings: near it the mount cannot follow.
	s, err := NewSite(35, 0, 0, 0)
	if err != nil {
		t.Fatal(err)
	}
	at := time.Date(2026, 3, 1, 0, 0, 0, 0, time.UTC)
	f := mustFrame(t, at.Add(12*time.Hour))
	p := f.Place(Target{RADeg: 50, DecDeg: 35})
	got := s.Windows(f, p, at, at.Add(24*time.Hour), Limits{LowDeg: 20, AzimuthDegPerMin: 24})
	var said []string
	for _, w := range got {
		said = append(said, fmt.Sprintf("%v to %v", w.OpensBy, w.ClosesBy))
	}
	want := []string{"elevation 20° to azimuth rate 24°/min", "azimuth rate 24°/min to elevation 20°"}
	if !slices.Equal(said, want) {
		t.Errorf("windows %q, want %q", said, want)
	}
}

// The least angle from the Sun is no greater than any found by looking, and is met where it says.
func TestClosestSun(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		from := drawInstant(t)
		to := from.Add(time.Duration(rapid.IntRange(1, 2*86400).Draw(t, "length")) * time.Second)
		f := mustFrameOf(t, from.Add(to.Sub(from)/2))
		ra, dec := f.raDec(f.Sun(), f.At())
		p := f.Place(Target{RADeg: mod(ra+rapid.Float64Range(-180, 180).Draw(t, "ra off Sun"), 360), DecDeg: dec + rapid.Float64Range(-60, 60).Draw(t, "dec off Sun")})
		least, at := f.ClosestSunDeg(p, from, to)
		if got := f.SunDeg(p, at); math.Abs(got-least) > 1e-9 || at.Before(from) || at.After(to) {
			t.Fatalf("%g° at %v, where it is %g°", least, at, got)
		}
		for i := range 101 {
			if got := f.SunDeg(p, from.Add(to.Sub(from)*time.Duration(i)/100)); got < least-1e-7 {
				t.Fatalf("%g°, but %g° after %d hundredths", least, got, i)
			}
		}
	})
}

func TestCauseString(t *testing.T) {
	for want, c := range map[string]Cause{
		"elevation 8°":              {LowElevation, 8},
		"horizon mask 14.5°":        {HorizonMask, 14.4999},
		"upper elevation limit 87°": {HighElevation, 87},
		"Sun 5°":                    {SunDistance, 5},
		"hour angle limit 60°":      {HourAngle, 60},
		"azimuth stop -270°":        {AzimuthStop, -270},
		"end of the interval":       {Interval, 0},
	} {
		if got := c.String(); got != want {
			t.Errorf("%#v: %q, want %q", c, got, want)
		}
	}
}
