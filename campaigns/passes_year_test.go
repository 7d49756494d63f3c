package campaigns

import (
	"testing"
	"time"

	"example.org/tallystick/sky"
)

// Every source of the demonstration, for a year, at home, on the equator and at the pole. What the rows say is
// held against plain looks at the sky: in the middle of a window every limit is kept.
func TestAYearOfPassesOfEverySource(t *testing.T) {
	f, now := openDemo(t)
	home := f.Campaign.Sites[0]
	for _, latitude := range []float64{home.LatitudeDeg, 0, 90} {
		site := home
		site.LatitudeDeg = latitude
		where, err := site.onEarth()
		if err != nil {
			t.Fatal(err)
		}
		seen := 0
		for i := range f.Campaign.Sources {
			src := &f.Campaign.Sources[i]
			rows, err := Passes(&site, src, now, now.AddDate(1, 0, 0))
			if err != nil {
				t.Fatal(err)
			}
			if len(rows) > 0 {
				seen++
			}
			checkPasses(t, &site, where, src, rows)
		}
		if seen == 0 {
			t.Errorf("latitude %g: no source ever rises", latitude)
		}
	}
}

func checkPasses(t *testing.T, site *Site, where *sky.Site, src *Source, rows []PassRow) {
	t.Helper()
	limits := site.limits(src)
	var before PassRow
	for n, r := range rows {
		if r.LimitedBy == "" {
			t.Fatalf("%s, pass %d: nothing is said to limit it", src.Name, n)
		}
		if r.UsableStart.IsZero() {
			continue
		}
		if !r.UsableStart.Before(r.UsableEnd) || r.UsableStart.Before(before.UsableEnd) {
			t.Fatalf("%s, pass %d: usable %s to %s, after a window that ends %s", src.Name, n, r.UsableStart, r.UsableEnd, before.UsableEnd)
		}
		if !r.Rise.IsZero() && (r.UsableStart.Before(r.Rise.Add(-time.Second)) || r.UsableEnd.After(r.Set.Add(time.Second))) {
			t.Fatalf("%s, pass %d: usable outside rise and set", src.Name, n)
		}
		before = r
		if n%30 != 0 { // a frame for every thirtieth is enough
			continue
		}
		middle := r.UsableStart.Add(r.UsableEnd.Sub(r.UsableStart) / 2)
		frame, err := sky.NewFrame(middle)
		if err != nil {
			t.Fatal(err)
		}
		place := frame.Place(src.target())
		look := where.Look(frame, place, middle)
		if look.ElDeg < limits.LowDeg || look.ElDeg > limits.HighDeg || look.ElDeg < limits.Mask.At(look.AzDeg) || frame.SunDeg(place, middle) < limits.SunDeg {
			t.Errorf("%s, pass %d: el %.3f at az %.3f in the middle of a window", src.Name, n, look.ElDeg, look.AzDeg)
		}
	}
}

// Air lifts a source by some 6 arcmin at 8°: it comes within its limit earlier and leaves it later, by about that over
// 15 arcmin a minute. Without a refraction of the site's, limits hold without air.
func TestAirLengthensAPassOnlyWhereTheSiteAsksForIt(t *testing.T) {
	f, now := openDemo(t)
	site, src := f.Campaign.Sites[0], &f.Campaign.Sources[0]
	site.HorizonDeg = nil
	usable := func() time.Duration {
		rows, err := Passes(&site, src, now, now.AddDate(0, 0, 1))
		if err != nil {
			t.Fatal(err)
		}
		return rows[len(rows)-1].UsableEnd.Sub(rows[0].UsableStart)
	}
	plain := usable()
	site.Refraction = &Refraction{PressureHPa: 930, TemperatureC: 5, Humidity: 0.6}
	if gain := usable() - plain; gain < 30*time.Second || gain > 4*time.Minute {
		t.Errorf("air lengthens the pass by %s", gain)
	}
}
