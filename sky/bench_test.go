package sky

import (
	"math"
	"testing"
	"time"

	"github.com/soniakeys/meeus/v3/apparent"
	"github.com/soniakeys/meeus/v3/base"
	"github.com/soniakeys/meeus/v3/coord"
	"github.com/soniakeys/meeus/v3/globe"
	"github.com/soniakeys/meeus/v3/sidereal"
	"github.com/soniakeys/unit"
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

// libraryAzEl is the whole chain as the library offers it: apparent place, sidereal time, horizon.
func libraryAzEl(t Target, at time.Time, where *globe.Coord) (azDeg, elDeg float64) {
	jd := MJD(at) + mjdOffset
	eq := coord.Equatorial{RA: unit.RAFromDeg(t.RADeg), Dec: unit.AngleFromDeg(t.DecDeg)}
	apparent.Position(&eq, &eq, 2000, base.JDEToJulianYear(jd), 0, 0)
	hz := new(coord.Horizontal).EqToHz(&eq, where, sidereal.Apparent(jd))
	return mod(hz.Az.Deg()+180, 360), hz.Alt.Deg()
}

// The chain that the speed is compared with gives the same answer, to what it is good for.
func TestLibraryChain(t *testing.T) {
	s, err := NewSite(38.21, -4.63, 812, 0)
	if err != nil {
		t.Fatal(err)
	}
	at := time.Date(2027, 3, 4, 5, 6, 7, 0, time.UTC)
	f := mustFrame(t, at)
	where := &globe.Coord{Lat: unit.AngleFromDeg(s.LatitudeDeg), Lon: unit.AngleFromDeg(-s.LongitudeDeg)}
	for _, target := range spread(40) {
		az, el := libraryAzEl(target, at, where)
		look := s.Look(f, f.Place(target), at)
		if off := between(direction2(az, el), direction2(look.AzDeg, look.ElDeg)) * degPerRad * arcsecPerDeg; off > 2 {
			t.Errorf("%v: %g arcsec apart", target, off)
		}
	}
}

func BenchmarkAzElAgainstLibrary(b *testing.B) {
	s := benchSite(b)
	at := time.Date(2027, 3, 4, 5, 6, 7, 0, time.UTC)
	f := mustFrame(b, at)
	target := Target{RADeg: 33.5, DecDeg: 33.4}
	p := f.Place(target)
	where := &globe.Coord{Lat: unit.AngleFromDeg(s.LatitudeDeg), Lon: unit.AngleFromDeg(-s.LongitudeDeg)}
	var sink float64
	const n = 2000
	var ours, theirs time.Duration
	for b.Loop() {
		start := time.Now()
		for i := range n {
			az, el := s.AzEl(f, &p, at.Add(time.Duration(i)*time.Minute))
			sink += az + el
		}
		middle := time.Now()
		for i := range n {
			az, el := libraryAzEl(target, at.Add(time.Duration(i)*time.Minute), where)
			sink += az + el
		}
		ours += middle.Sub(start)
		theirs += time.Since(middle)
	}
	b.ReportMetric(float64(ours)/float64(b.N)/n, "ns/place")
	b.ReportMetric(float64(theirs)/float64(b.N)/n, "ns/library-place")
	b.ReportMetric(float64(theirs)/float64(ours), "times-faster")
	if math.IsNaN(sink) {
		b.Fatal("not a number")
	}
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
