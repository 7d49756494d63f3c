package campaigns

import (
	"math"
	"testing"
	"time"
)

// At latitude 50 and a limit of 10 degrees a source never rises south of declination -30 and never sets
// north of +50; between, it passes once in a sidereal day.
func TestPassesByDeclination(t *testing.T) {
	site := &Site{LatitudeDeg: 50, ElevationLimitsDeg: [2]float64{10, 89}, SlewDegPerMin: [2]float64{60, 60}, Mount: AltAz}
	from := time.Date(2026, 12, 3, 12, 0, 0, 0, time.UTC)
	to := from.AddDate(0, 0, 20)
	for dec, want := range map[float64]struct {
		passes int
		rises  bool
	}{-31: {0, false}, -29: {20, true}, 0: {20, true}, 45: {20, true}, 53: {21, false}, 90: {21, false}} {
		rows, err := Passes(site, &Source{RADeg: 40, DecDeg: dec}, from, to)
		if err != nil {
			t.Fatal(err)
		}
		if d := len(rows) - want.passes; d < 0 || d > 1 {
			t.Errorf("declination %g: %d passes in 20 days, want %d or one more", dec, len(rows), want.passes)
		}
		for i, r := range rows {
			if r.Rise.IsZero() == want.rises || r.Set.IsZero() == want.rises {
				t.Errorf("declination %g: rise %v, set %v", dec, r.Rise, r.Set)
			}
			if r.UsableStart.IsZero() || r.LimitedBy == "" {
				t.Errorf("declination %g: not usable at %v: %s", dec, r.Transit, r.LimitedBy)
			}
			if i == 0 || dec == 90 { // nothing moves at the pole
				continue
			}
			if day := r.Transit.Sub(rows[i-1].Transit).Hours(); math.Abs(day-23.9345) > 0.01 {
				t.Errorf("declination %g: %v hours from transit to transit", dec, day)
			}
		}
	}
}

// What keeps a pass from being usable is named.
func TestPassesSayWhyNotUsable(t *testing.T) {
	from := time.Date(2026, 12, 21, 0, 0, 0, 0, time.UTC)
	sun := &Source{RADeg: 269, DecDeg: -23.4} // where the Sun is at the solstice
	low := Site{LatitudeDeg: 50, ElevationLimitsDeg: [2]float64{5, 89}, SlewDegPerMin: [2]float64{60, 60}, Mount: AltAz}
	nearSun, behindHill := low, low
	nearSun.SunLimitDeg = 20
	behindHill.HorizonDeg = [][2]float64{{0, 30}, {180, 30}}
	for want, site := range map[string]Site{"Sun 20°": nearSun, "horizon mask": behindHill} {
		rows, err := Passes(&site, sun, from, from.AddDate(0, 0, 2))
		if err != nil {
			t.Fatal(err)
		}
		if len(rows) == 0 {
			t.Errorf("%s: no passes", want)
		}
		for _, r := range rows {
			if !r.UsableStart.IsZero() || r.LimitedBy != want {
				t.Errorf("usable from %v, limited by %q, want %q", r.UsableStart, r.LimitedBy, want)
			}
		}
	}
}
