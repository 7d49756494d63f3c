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
			if err > 0.5 {
				t.Errorf("row %s (%s), frame off by %v: az %.6f el %.6f, want %s %s: %.2f arcsec", r.text("id"), r.text("kind"), off,
					look.AzDeg, look.ElDeg, r.text("az_deg"), r.text("el_deg"), err)
			}
			direction = append(direction, err)
			hourAngle = append(hourAngle, math.Abs(math.Remainder(look.HourAngleDeg-r.number("ha_deg"), 360))*cosDec*arcsecPerDeg)
			parallactic = append(parallactic, math.Abs(math.Remainder(look.ParallacticDeg-r.number("pa_deg"), 360))*min(cosEl, cosDec)*arcsecPerDeg)
			_, dec := f.RADec(f.Place(target), at)
			declination = append(declination, math.Abs(dec-r.number("dec_app_deg"))*arcsecPerDeg)
		}
	}
	here.judge(t, "direction, frame at the instant", "arcsec", 0.5, 0.15)
	direction.judge(t, "direction, frame within 12 h", "arcsec", 0.5, 0.15)
	hourAngle.judge(t, "hour angle × cos dec", "arcsec", 1, 0.5)
	parallactic.judge(t, "parallactic angle, scaled", "arcsec", 1, 0.5)
	declination.judge(t, "apparent declination", "arcsec", 0.5, 0.15)
}

func direction2(lonDeg, latDeg float64) vec { return direction(lonDeg*radPerDeg, latDeg*radPerDeg) }

func TestSun(t *testing.T) {
	var place, azel, separation errs
	for _, r := range table(t, "sun.csv", 140) {
		at := r.instant("utc")
		site := r.site()
		for _, off := range []time.Duration{0, -12 * time.Hour, 12 * time.Hour} {
			f := mustFrame(t, at.Add(off))
			ra, dec := f.RADec(f.Sun(), at)
			place = append(place, between(direction2(ra, dec), direction2(r.number("sun_ra_app_deg"), r.number("sun_dec_app_deg")))*degPerRad*arcsecPerDeg)
			look := site.Look(f, f.Sun(), at)
			azel = append(azel, between(direction2(look.AzDeg, look.ElDeg), direction2(r.number("sun_az_topo_deg"), r.number("sun_el_topo_deg")))*degPerRad*arcsecPerDeg)
			p := f.Place(Target{RADeg: r.number("ra_deg"), DecDeg: r.number("dec_deg")})
			separation = append(separation, math.Abs(f.SunDeg(p, at)-r.number("sep_deg"))*arcsecPerDeg)
		}
	}
	place.judge(t, "Sun", "arcsec", 20, 10)
	azel.judge(t, "Sun from a site", "arcsec", 20, 10)
	separation.judge(t, "angle from the Sun", "arcsec", 20, 10)
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
	seconds.judge(t, "sidereal time", "s", 0.01, 0.005)
}
