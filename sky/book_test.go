package sky

import (
	"fmt"
	"math"
	"strings"
	"testing"
	"time"

	"github.com/soniakeys/meeus/v3/apparent"
	"github.com/soniakeys/meeus/v3/eqtime"
	"github.com/soniakeys/meeus/v3/globe"
	"github.com/soniakeys/meeus/v3/julian"
	"github.com/soniakeys/meeus/v3/nutation"
	"github.com/soniakeys/meeus/v3/refraction"
	"github.com/soniakeys/meeus/v3/rise"
	"github.com/soniakeys/meeus/v3/solar"
	"github.com/soniakeys/unit"
)

// julianDay returns the Julian day of a date such as 1957-10-04.81 by this package's MJD.
func julianDay(t *testing.T, text string) float64 {
	t.Helper()
	var year, month, day int
	var part float64
	whole, decimals, _ := strings.Cut(text, ".")
	if _, err := fmt.Sscanf(whole, "%d-%d-%d", &year, &month, &day); err != nil {
		t.Fatalf("%q: %v", text, err)
	}
	if decimals != "" {
		if _, err := fmt.Sscan("0."+decimals, &part); err != nil {
			t.Fatalf("%q: %v", text, err)
		}
	}
	at := time.Date(year, time.Month(month), day, 0, 0, 0, 0, time.UTC).Add(time.Duration(math.Round(part*secondsPerDay*1e6)) * time.Microsecond)
	return MJD(at) + mjdOffset
}

// calendarDate writes the date of a Julian day with as many decimals of a day as the example has.
func calendarDate(jd float64, like string) string {
	at := TimeOfMJD(jd - mjdOffset)
	midnight := at.Truncate(24 * time.Hour)
	_, decimals, _ := strings.Cut(like, ".")
	day := float64(at.Day()) + at.Sub(midnight).Hours()/24
	return fmt.Sprintf("%04d-%02d-%0*.*f", at.Year(), at.Month(), 3+len(decimals), len(decimals), day)
}

func TestBookCalendar(t *testing.T) {
	f := facts{t}
	for _, id := range []string{"AST-001", "AST-003", "AST-004", "AST-005", "AST-006", "AST-007", "AST-009", "AST-010"} {
		f.is(id, julianDay(t, fact(t, id).Inputs["date"]))
	}
	for id, jd := range map[string]float64{"AST-011": f.input("AST-011", "JD"), "AST-083": f.input("AST-083", "MJD") + mjdOffset} {
		r := fact(t, id)
		r.Asserted() // the row's tolerance is below its last digit
		if got := calendarDate(jd, r.Expected); got != r.Expected {
			t.Errorf("%s: %s, want %s", id, got, r.Expected)
		}
	}
	r := fact(t, "AST-012")
	r.Check(julianDay(t, r.Inputs["d2"]) - julianDay(t, r.Inputs["d1"]))
	f.is("AST-013", float64(TimeOfMJD(f.input("AST-013", "JD")-mjdOffset).Weekday()))
	f.is("AST-014", float64(TimeOfMJD(julianDay(t, fact(t, "AST-014").Inputs["date"])-mjdOffset).YearDay()))
	// Dates of the calendar before 1582 are the library's: nothing here has to do with them.
	f.is("AST-002", julian.CalendarJulianToJD(333, 1, 27.5))
}

func TestBookMeanSidereal(t *testing.T) {
	f := facts{t}
	mean := func(hours float64) float64 {
		mjd := MJD(time.Date(1987, 4, 10, 0, 0, 0, 0, time.UTC))
		return mod((earthRotation(mjd, hours/24)+precessionInRA((mjd-j2000MJD+hours/24)/daysPerCentury))*degPerRad, 360)
	}
	f.is("AST-020", mean(0))
	f.is("AST-022", mean(19.35))
}

func TestBookHorizon(t *testing.T) {
	washington, err := NewSite(38+55/60.+17/3600., -(77 + 3/60. + 56/3600.), 0, 0)
	if err != nil {
		t.Fatal(err)
	}
	at := time.Date(1987, 4, 10, 19, 21, 0, 0, time.UTC)
	venus := washington.Look(mustFrame(t, at), placeOfDate(15*(23+9/60.+16.641/3600), -(6+43/60.+11.61/3600)), at)
	facts{t}.is("AST-025", venus.AzDeg-180, venus.ElDeg) // the book counts from the south
}

func TestBookSeparation(t *testing.T) {
	arcturus := placeOfDate(15*(14+15/60.+39.7/3600), 19+10/60.+57/3600.)
	spica := placeOfDate(15*(13+25/60.+11.6/3600), -(11 + 9/60. + 41/3600.))
	facts{t}.is("AST-037", separationDeg(arcturus, spica))
}

// Ecliptic to equator and back is a turn about the first axis.
func TestEcliptic(t *testing.T) {
	f := facts{t}
	r := fact(t, "AST-023")
	v := aboutX(r.Num("eps_deg") * radPerDeg).apply(direction2(r.Num("ra_deg"), r.Num("dec_deg")))
	r.Check(mod(math.Atan2(v[1], v[0])*degPerRad, 360), math.Asin(v[2])*degPerRad)
	for _, id := range []string{"BAR-001", "BAR-002"} {
		r := fact(t, id)
		v := aboutX(-r.Num("obliquity_arcsec") * radPerSec).apply(direction2(r.Num("ELONG"), r.Num("ELAT")))
		r.Check(mod(math.Atan2(v[1], v[0])*degPerRad, 360), math.Asin(v[2])*degPerRad)
	}
	f.is("AST-066", meanObliquity((f.input("AST-066", "MJD_TT")-j2000MJD)/daysPerCentury))
}

// The turn between equator and horizon, without what the site's own motion adds.
func TestHorizonTurn(t *testing.T) {
	siteAt := func(latRad float64) *Site {
		s, err := NewSite(latRad*degPerRad, 0, 0, 0)
		if err != nil {
			t.Fatal(err)
		}
		return s
	}
	f := facts{t}
	r := fact(t, "AST-060")
	s := siteAt(r.Num("lat_rad"))
	v := direction(r.Num("ha_rad"), r.Num("dec_rad"))
	look := s.look(s.toHorizon(v[0], v[1], v[2]))
	r.Check(look.AzDeg*radPerDeg, look.ElDeg*radPerDeg)
	f.is("AST-062", look.ParallacticDeg*radPerDeg) // the same direction

	r = fact(t, "AST-061")
	s = siteAt(r.Num("lat_rad"))
	v = direction(r.Num("az_rad"), r.Num("el_rad"))
	look = s.look(horizon{n: v[0], e: v[1], u: v[2]})
	r.Check(look.HourAngleDeg*radPerDeg, look.DecDeg*radPerDeg)
}

func TestGeocentric(t *testing.T) {
	r := fact(t, "AST-074")
	s, err := NewSite(r.Num("lat_rad")*degPerRad, r.Num("lon_rad")*degPerRad, r.Num("h_m"), 0)
	if err != nil {
		t.Fatal(err)
	}
	axis, north := s.geocentric()
	sin, cos := math.Sincos(s.longitude)
	r.Check(axis*cos, axis*sin, north)

	r = fact(t, "AST-050")
	s, err = NewSite(33+21/60.+22/3600., 0, r.Num("h_m"), 0)
	if err != nil {
		t.Fatal(err)
	}
	axis, north = s.geocentric() // the ellipsoids of 1976 and WGS84 agree to 1e−8
	r.Check(north/earthRadius, axis/earthRadius)
}

func TestDayFractions(t *testing.T) {
	f := facts{t}
	at := time.Date(2006, 1, 15, 0, 0, 0, 0, time.UTC) // JD 2453750.5
	f.is("AST-078", f.input("AST-078", "utc_frac")+(TTMinusUTCSec(at)-ttMinusTAI)/secondsPerDay)
	f.is("AST-079", f.input("AST-079", "tai_frac")+ttMinusTAI/secondsPerDay)
}

// What the library has for the rest of the book's examples. Of it this package uses the nutation
// alone; the other rows say that the library is the one that the notes in meeus.go speak of.
func TestBookLibrary(t *testing.T) {
	f := facts{t}
	// 22.a: mean obliquity of 1980; this package has that of 2006 (AST-066), 0.04 arcsec less.
	obliquity := nutation.MeanObliquity(2446895.5).Deg()
	_, eps := nutationOf(2446895.5)
	f.is("AST-043", obliquity, obliquity+eps*degPerRad)

	// 15.a: Venus at Boston on 1988-03-20. Its places on three days are the example's.
	boston := globe.Coord{Lat: unit.AngleFromDeg(f.input("AST-030", "lat")), Lon: unit.AngleFromDeg(f.input("AST-030", "lon_W"))}
	low := unit.AngleFromDeg(f.input("AST-030", "h0"))
	zero := unit.NewTime(' ', 11, 50, 58.1)
	ra := []unit.RA{unit.NewRA(2, 42, 43.25), unit.NewRA(2, 46, 55.51), unit.NewRA(2, 51, 7.69)}
	dec := []unit.Angle{unit.NewAngle(' ', 18, 2, 51.4), unit.NewAngle(' ', 18, 26, 27.3), unit.NewAngle(' ', 18, 49, 38.7)}
	up, transit, down, err := rise.ApproxTimes(boston, low, zero, ra[1], dec[1])
	if err != nil {
		t.Fatal(err)
	}
	f.is("AST-030", up.Day(), transit.Day(), down.Day())
	up, transit, down, err = rise.Times(boston, unit.Time(f.input("AST-031", "DeltaT_s")), low, zero, ra, dec)
	if err != nil {
		t.Fatal(err)
	}
	f.is("AST-031", up.Day(), transit.Day(), down.Day())

	f.is("AST-035", refraction.Bennett(unit.AngleFromDeg(f.input("AST-035", "h_app_deg"))).Min())
	f.is("AST-036", refraction.Saemundsson(unit.AngleFromMin(f.input("AST-036", "h_true_arcmin"))).Min())

	persei, when := unit.NewRA(2, 46, 11.331), julian.CalendarGregorianToJD(2028, 11, 13.19)
	north := unit.NewAngle(' ', 49, 20, 54.54)
	dRA1, dDec1 := apparent.Nutation(persei, north, when)
	dRA2, dDec2 := apparent.Aberration(persei, north, when)
	f.is("AST-044", dRA1.Rad()/radPerSec, dDec1.Rad()/radPerSec, dRA2.Rad()/radPerSec, dDec2.Rad()/radPerSec)

	october := julian.CalendarGregorianToJD(1992, 10, 13)
	century := (october - mjdOffset - j2000MJD) / daysPerCentury
	longitude, _ := solar.True(century)
	f.is("AST-046", longitude.Deg(), mod(solar.MeanAnomaly(century).Deg(), 360), solar.Radius(century))
	sunRA, sunDec := solar.ApparentEquatorial(october)
	f.is("AST-047", sunRA.Deg(), sunDec.Deg())
	f.is("AST-049", eqtime.ESmart(october).Min())
}
