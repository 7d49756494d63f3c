package sky

import (
	"math"
	"math/rand/v2"
	"testing"
	"time"
)

const arcsecPerDeg = 3600

// Every row from a frame at the row's own instant, and from frames up to twelve hours away from it.
func TestAzEl(t *testing.T) {
	random := rand.New(rand.NewPCG(3, 5))
	var here, direction, hourAngle, parallactic, declination errs
	for _, r := range table(t, "azel.csv", 438) {
		at := r.instant("utc")
		site := r.site()
		target := Target{RADeg: r.number("ra_deg"), DecDeg: r.number("dec_deg"),
			PMRAMasPerYr: r.number("pmra_mas_yr"), PMDecMasPerYr: r.number("pmdec_mas_yr")}
		want := direction2(r.number("az_deg"), r.number("el_deg"))
		cosEl := math.Cos(r.number("el_deg") * radPerDeg)
		cosDec := math.Cos(r.number("dec_app_deg") * radPerDeg)
		for i, off := range []time.Duration{0, -12 * time.Hour, 12 * time.Hour, time.Duration((random.Float64() - 0.5) * 24 * float64(time.Hour))} {
			f := mustFrame(t, at.Add(off))
			look := site.Look(f, f.Place(target), at)
			err := between(want, direction2(look.AzDeg, look.ElDeg)) * degPerRad * arcsecPerDeg
			if i == 0 {
				here = append(here, err)
			}
			if err > 0.05 {
				t.Errorf("row %s (%s), frame off by %v: az %.6f el %.6f, want %s %s: %.2f arcsec", r.text("id"), r.text("kind"), off,
					look.AzDeg, look.ElDeg, r.text("az_deg"), r.text("el_deg"), err)
			}
			direction = append(direction, err)
			hourAngle = append(hourAngle, math.Abs(math.Remainder(look.HourAngleDeg-r.number("ha_deg"), 360))*cosDec*arcsecPerDeg)
			parallactic = append(parallactic, math.Abs(math.Remainder(look.ParallacticDeg-r.number("pa_deg"), 360))*min(cosEl, cosDec)*arcsecPerDeg)
			_, dec := f.raDec(f.Place(target), at)
			declination = append(declination, math.Abs(dec-r.number("dec_app_deg"))*arcsecPerDeg)
		}
	}
	here.judge(t, "direction, frame at the instant", "arcsec", 0.05, 0.01)
	direction.judge(t, "direction, frame within 12 h", "arcsec", 0.05, 0.01)
	hourAngle.judge(t, "hour angle × cos dec", "arcsec", 0.2, 0.05)
	parallactic.judge(t, "parallactic angle, scaled", "arcsec", 0.2, 0.05) // near the pole the table's own digits count
	declination.judge(t, "apparent declination", "arcsec", 0.05, 0.01)
}

func direction2(lonDeg, latDeg float64) vec { return direction(lonDeg*radPerDeg, latDeg*radPerDeg) }

func TestSun(t *testing.T) {
	var place, azel, separation errs
	for _, r := range table(t, "sun.csv", 140) {
		at := r.instant("utc")
		site := r.site()
		for _, off := range []time.Duration{0, -12 * time.Hour, 12 * time.Hour} {
			f := mustFrame(t, at.Add(off))
			ra, dec := f.raDec(f.Sun(), at)
			place = append(place, between(direction2(ra, dec), direction2(r.number("sun_ra_app_deg"), r.number("sun_dec_app_deg")))*degPerRad*arcsecPerDeg)
			look := site.Look(f, f.Sun(), at)
			azel = append(azel, between(direction2(look.AzDeg, look.ElDeg), direction2(r.number("sun_az_topo_deg"), r.number("sun_el_topo_deg")))*degPerRad*arcsecPerDeg)
			p := f.Place(Target{RADeg: r.number("ra_deg"), DecDeg: r.number("dec_deg")})
			separation = append(separation, math.Abs(f.SunDeg(p, at)-r.number("sep_deg"))*arcsecPerDeg)
		}
	}
	place.judge(t, "Sun", "arcsec", 0.2, 0.1)
	azel.judge(t, "Sun from a site", "arcsec", 0.2, 0.1)
	separation.judge(t, "angle from the Sun", "arcsec", 1, 0.1)
}

func TestSidereal(t *testing.T) {
	var seconds errs
	site, err := NewSite(0, 0, 0, 0)
	if err != nil {
		t.Fatal(err)
	}
	for _, r := range table(t, "sidereal.csv", 80) {
		at := r.instant("utc")
		for _, off := range []time.Duration{0, -12 * time.Hour, 12 * time.Hour} {
			f := mustFrame(t, at.Add(off))
			lst := site.LSTHours(f, at)
			seconds = append(seconds, math.Abs(math.Remainder(lst-r.number("gast06a_h"), 24))*3600)
		}
	}
	seconds.judge(t, "sidereal time", "s", 0.002, 0.0005)
}

// How far a frame carries: FrameReach is inside the promise, and beyond it nothing breaks suddenly.
func TestFrameReach(t *testing.T) {
	for _, c := range []struct {
		off           time.Duration
		star, sunMost float64 // arcsec
	}{{FrameReach, 0.03, 0.5}, {72 * time.Hour, 0.2, 6}} {
		var star, sun errs
		for i, target := range spread(60) {
			at := time.Date(2021+i%14, time.Month(1+i%12), 3, i%24, 0, 0, 0, time.UTC)
			here, far := mustFrame(t, at), mustFrame(t, at.Add(c.off))
			site, err := NewSite(float64(i*3-90), 10, 0, 0)
			if err != nil {
				t.Fatal(err)
			}
			a, b := site.Look(here, here.Place(target), at), site.Look(far, far.Place(target), at)
			star = append(star, between(direction2(a.AzDeg, a.ElDeg), direction2(b.AzDeg, b.ElDeg))*degPerRad*arcsecPerDeg)
			a, b = site.Look(here, here.Sun(), at), site.Look(far, far.Sun(), at)
			sun = append(sun, between(direction2(a.AzDeg, a.ElDeg), direction2(b.AzDeg, b.ElDeg))*degPerRad*arcsecPerDeg)
		}
		star.judge(t, "star, frame "+c.off.String()+" away", "arcsec", c.star, c.star)
		sun.judge(t, "Sun, frame "+c.off.String()+" away", "arcsec", c.sunMost, c.sunMost)
	}
}
