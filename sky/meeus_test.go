package sky

import (
	"math"
	"testing"
	"time"

	"github.com/soniakeys/meeus/v3/angle"
	"github.com/soniakeys/meeus/v3/apparent"
	"github.com/soniakeys/meeus/v3/base"
	"github.com/soniakeys/meeus/v3/coord"
	"github.com/soniakeys/meeus/v3/deltat"
	"github.com/soniakeys/meeus/v3/globe"
	"github.com/soniakeys/meeus/v3/refraction"
	"github.com/soniakeys/meeus/v3/rise"
	"github.com/soniakeys/meeus/v3/sidereal"
	"github.com/soniakeys/unit"
)

// Each test shows a trap of the library, and that this package does not fall into it. If the library mends one,
// its test says so by failing.

func trapSite(t *testing.T, lat, lon float64) *Site {
	t.Helper()
	s, err := NewSite(lat, lon, 0, 0)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

var trapInstant = time.Date(2027, 3, 4, 5, 6, 7, 0, time.UTC)

// Longitude is positive east: going east, sidereal time is later and a source is further west.
func TestTrapLongitude(t *testing.T) {
	f := mustFrame(t, trapInstant)
	a, b := trapSite(t, 20, 0), trapSite(t, 20, 15)
	if got := math.Remainder(b.LSTHours(f, trapInstant)-a.LSTHours(f, trapInstant), 24); math.Abs(got-1) > 1e-9 {
		t.Errorf("15° further east sidereal time differs by %g h", got)
	}
	p := f.Place(Target{RADeg: 100, DecDeg: 10})
	if got := math.Remainder(b.Look(f, p, trapInstant).HourAngleDeg-a.Look(f, p, trapInstant).HourAngleDeg, 360); math.Abs(got-15) > 1e-3 {
		t.Errorf("15° further east hour angle differs by %g°", got)
	}
}

// Azimuth runs from north through east: a rising source is in the east, one on the meridian of a northern site
// and south of its zenith is in the south.
func TestTrapAzimuth(t *testing.T) {
	s := trapSite(t, 50, 0)
	f := mustFrame(t, trapInstant)
	p := f.Place(Target{RADeg: 100, DecDeg: 0})
	for _, e := range s.Passes(f, p, trapInstant.Add(-12*time.Hour), trapInstant.Add(12*time.Hour), Limits{}).Events {
		want := map[EventKind]float64{Rise: 90, UpperTransit: 180, Set: 270, LowerTransit: 360}[e.Kind]
		if math.Abs(math.Remainder(e.AzDeg-want, 360)) > 1 {
			t.Errorf("%v in azimuth %g, want about %g", e.Kind, e.AzDeg, want)
		}
	}
}

// At the zenith the library takes the arcsine of more than 1.
func TestTrapZenith(t *testing.T) {
	broken := false
	for i := range 900 {
		lat := unit.AngleFromDeg(float64(i) / 10)
		_, h := coord.EqToHz(0, lat, lat, 0, 0)
		broken = broken || math.IsNaN(h.Rad())
	}
	if !broken {
		t.Error("the library has an elevation for every zenith: has it been mended?")
	}
	s := trapSite(t, 30, 0)
	f := mustFrame(t, trapInstant)
	for h := range 500 {
		at := trapInstant.Add(time.Duration(h) * time.Minute)
		lst := s.LSTHours(f, at)
		look := s.Look(f, placeOfDate(lst*15, 30), at)
		if math.IsNaN(look.AzDeg) || math.IsNaN(look.ParallacticDeg) || math.Abs(look.ElDeg-90) > 2e-4 {
			t.Fatalf("at the zenith: %+v", look)
		}
	}
}

// The library's nutation and aberration multiply by tan dec: at the pole they are degrees.
func TestTrapPole(t *testing.T) {
	if ra, _ := apparent.Nutation(0, unit.AngleFromDeg(89.99999), base.J2000+9000); math.Abs(ra.Rad()) < 1 {
		t.Errorf("the library's nutation at the pole is %g rad: has it been mended?", ra.Rad())
	}
	f := mustFrame(t, trapInstant)
	for _, dec := range []float64{90, -90} {
		pole := f.Place(Target{DecDeg: dec})
		near := f.Place(Target{RADeg: 77, DecDeg: dec * (1 - 1e-4/90)})
		if sep := separationDeg(pole, near); math.Abs(sep-1e-4) > 1e-7 {
			t.Errorf("declination %g: a place 1e-4° from it is %g° from it", dec, sep)
		}
	}
}

// The library's separation takes 0h and 24h for far apart when they are close.
func TestTrapSeparation(t *testing.T) {
	if got := angle.Sep(unit.AngleFromDeg(359.9999), 0, unit.AngleFromDeg(0.0001), 0).Deg(); got < 1 {
		t.Errorf("the library's separation across 0h is %g°: has it been mended?", got)
	}
	f := mustFrame(t, trapInstant)
	for _, c := range []struct{ ra1, ra2, want float64 }{{359.9999, 0.0001, 0.0002}, {10, 10.00001, 0.00001}, {10, 10, 0}, {0, 180, 180}, {350, 20, 30}} {
		if got := separationDeg(placeOfDate(c.ra1, 0), placeOfDate(c.ra2, 0)); math.Abs(got-c.want) > 1e-12 {
			t.Errorf("%g to %g: %g, want %g", c.ra1, c.ra2, got, c.want)
		}
		if got := f.SeparationDeg(placeOfDate(c.ra1, 0), placeOfDate(c.ra2, 0), trapInstant); math.Abs(got-c.want) > 1e-12 {
			t.Errorf("%g to %g: %g, want %g", c.ra1, c.ra2, got, c.want)
		}
	}
}

// sidereal.Apparent0UT takes the nutation of another hour; TestSidereal has the right values at any hour.
func TestTrapApparentSidereal(t *testing.T) {
	jd := MJD(time.Date(2026, 12, 1, 18, 0, 0, 0, time.UTC)) + mjdOffset
	if sidereal.Apparent0UT(jd) == sidereal.Apparent(jd) {
		t.Error("the library's two apparent sidereal times agree at 18h: has it been mended?")
	}
}

// The library's ΔT is a polynomial of the past.
func TestTrapDeltaT(t *testing.T) {
	if got := deltat.PolyAfter2000(2026.9).Sec(); math.Abs(got-TTMinusUTCSec(trapInstant)) < 1 {
		t.Errorf("the library's ΔT is %g s: has it been mended?", got)
	}
}

// The library has one error for "never up" and "always up"; here both are answers.
func TestTrapNeverAndAlways(t *testing.T) {
	where := globe.Coord{Lat: unit.AngleFromDeg(60)}
	for _, dec := range []float64{80, -80} {
		_, _, _, err := rise.ApproxTimes(where, 0, 0, 0, unit.AngleFromDeg(dec))
		if err == nil {
			t.Errorf("declination %g: the library gives times", dec)
		}
	}
	s := trapSite(t, 60, 0)
	f := mustFrame(t, trapInstant)
	day := func(dec float64) Standing {
		return s.Passes(f, f.Place(Target{DecDeg: dec}), trapInstant, trapInstant.Add(24*time.Hour), Limits{}).Standing
	}
	if up, down := day(80), day(-80); up != NeverSets || down != NeverRises {
		t.Errorf("%v, %v", up, down)
	}
}

// The library says that its times lie within the day asked for, and gives the transit of the next day, four minutes of
// sidereal turning off, for right ascensions just below 24 h.
func TestTrapTransitDay(t *testing.T) {
	day := trapInstant.Truncate(24 * time.Hour)
	s := trapSite(t, 40, 0)
	f := mustFrame(t, day.Add(12*time.Hour))
	p := f.Place(Target{RADeg: 359.2, DecDeg: 20})
	ra, dec := f.raDec(p, day)
	a, d := unit.RAFromDeg(ra), unit.AngleFromDeg(dec)
	_, transit, _, err := rise.Times(globe.Coord{Lat: unit.AngleFromDeg(40)}, unit.Time(69.2), 0, sidereal.Apparent0UT(MJD(day)+mjdOffset),
		[]unit.RA{a, a, a}, []unit.Angle{d, d, d})
	if err != nil {
		t.Fatal(err)
	}
	theirs := day.Add(time.Duration(transit.Sec() * 1e9))
	if off := math.Abs(s.Look(f, p, theirs).HourAngleDeg); off < 0.5 && theirs.Sub(day) < 24*time.Hour {
		t.Errorf("the library's transit is %.2f° off: has it been mended?", off)
	}
	for _, e := range s.Passes(f, p, day, day.Add(24*time.Hour), Limits{}).Events {
		if e.Kind == UpperTransit {
			if ha := s.Look(f, p, e.At).HourAngleDeg; math.Abs(ha) > 1e-3 || e.At.Before(day) || e.At.After(day.Add(24*time.Hour)) {
				t.Errorf("transit at %s, hour angle %g°", e.At, ha)
			}
			return
		}
	}
	t.Error("no transit in a day")
}

// The library's refraction is for light; water vapour makes that for radio waves larger.
func TestTrapRefraction(t *testing.T) {
	air, err := NewRefraction(1010, 10, 0.8)
	if err != nil {
		t.Fatal(err)
	}
	light := refraction.Bennett(unit.AngleFromDeg(20)).Deg()
	if radio := liftedBy(air, 20); radio < light*1.05 {
		t.Errorf("radio %g°, light %g°", radio, light)
	}
}

// Motion in right ascension includes cos dec: near the pole the angle moved is still the angle given.
func TestTrapProperMotion(t *testing.T) {
	f := mustFrame(t, trapInstant)
	still, moved := Target{RADeg: 50, DecDeg: 80}, Target{RADeg: 50, DecDeg: 80, PMRAMasPerYr: 3600000. / 360}
	years := (MJD(trapInstant) - j2000MJD) / 365.25
	if got := separationDeg(f.Place(still), f.Place(moved)) / years; math.Abs(got*360-1) > 1e-3 {
		t.Errorf("10 arcsec a year: moved by %g arcsec a year", got*3600)
	}
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
