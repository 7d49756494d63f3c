package sky

import (
	"math"
	"testing"
	"time"
)

func benchSite(b *testing.B) *Site {
	b.Helper()
	s, err := NewSite(38.21, -4.63, 812, 0)
	if err != nil {
		b.Fatal(err)
	}
	return s
}

// spread returns n directions evenly over the sky.
func spread(n int) []Target {
	targets := make([]Target, n)
	for i := range targets {
		z := 1 - (2*float64(i)+1)/float64(n)
		targets[i] = Target{RADeg: mod(float64(i)*137.50776, 360), DecDeg: math.Asin(z) * degPerRad}
	}
	return targets
}

func BenchmarkLook(b *testing.B) {
	s := benchSite(b)
	at := time.Date(2027, 3, 4, 5, 6, 7, 0, time.UTC)
	f := mustFrame(b, at)
	p := f.Place(Target{RADeg: 33.5, DecDeg: 33.4})
	b.ReportAllocs()
	for b.Loop() {
		s.Look(f, p, at)
	}
}

func BenchmarkFrame(b *testing.B) {
	at := time.Date(2027, 3, 4, 5, 6, 7, 0, time.UTC)
	for b.Loop() {
		mustFrame(b, at)
	}
}

// A year of windows for a hundred sources.
func BenchmarkSeason(b *testing.B) {
	mask := Mask{{0, 9}, {30, 12}, {60, 14.5}, {85, 10}, {110, 8}, {150, 9}, {200, 11}, {230, 16}, {260, 12}, {300, 10}, {330, 8.5}}
	for name, lim := range map[string]Limits{
		"plain":  {LowDeg: 8, HighDeg: 87, SunDeg: 5, AzimuthDegPerMin: 24},
		"masked": {LowDeg: 8, HighDeg: 87, SunDeg: 5, AzimuthDegPerMin: 24, Mask: mask},
	} {
		b.Run(name, func(b *testing.B) {
			s := benchSite(b)
			targets := spread(100)
			from := time.Date(2027, 1, 1, 0, 0, 0, 0, time.UTC)
			to := from.AddDate(1, 0, 0)
			for b.Loop() {
				frames, err := NewFrames(from, to)
				if err != nil {
					b.Fatal(err)
				}
				for _, t := range targets {
					s.Season(frames, t, from, to, lim)
				}
			}
		})
	}
}

// Ten hours minute by minute for 120 sources.
func BenchmarkMinuteTable(b *testing.B) {
	s := benchSite(b)
	targets := spread(120)
	from := time.Date(2027, 1, 1, 0, 0, 0, 0, time.UTC)
	az, el := make([]float64, 601), make([]float64, 601)
	b.ReportAllocs()
	for b.Loop() {
		f := mustFrame(b, from.Add(5*time.Hour))
		for _, t := range targets {
			s.Track(f, f.Place(t), from, time.Minute, az, el)
		}
	}
}

func TestLooksDoNotAllocate(t *testing.T) {
	s, err := NewSite(38.21, -4.63, 812, 0)
	if err != nil {
		t.Fatal(err)
	}
	at := time.Date(2027, 3, 4, 5, 6, 7, 0, time.UTC)
	f := mustFrame(t, at)
	target := Target{RADeg: 33.5, DecDeg: 33.4}
	az, el := make([]float64, 60), make([]float64, 60)
	if n := testing.AllocsPerRun(100, func() {
		p := f.Place(target)
		s.Look(f, p, at)
		s.Track(f, p, at, time.Minute, az, el)
	}); n != 0 {
		t.Errorf("%g allocations", n)
	}
}
