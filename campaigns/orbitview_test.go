package campaigns

import (
	"math"
	"slices"
	"testing"
	"time"

	"example.org/tallystick/sky/orbit"
)

// What the views say of coverage is what the accounts are reckoned from, and the marks stand where the phases are.
func TestOrbitsOfTheDemonstration(t *testing.T) {
	f, now := coming(t, 2)
	views, err := Orbits(f.Campaign, f.Logbook, &f.Campaign.Sites[0], now)
	if err != nil {
		t.Fatal(err)
	}
	binaries := 0
	for i := range f.Campaign.Sources {
		if f.Campaign.Sources[i].Orbit != nil {
			binaries++
		}
	}
	if len(views) != binaries || binaries < 5 {
		t.Fatalf("%d views of %d binaries", len(views), binaries)
	}
	eclipses, covered, eccentric := 0, 0, 0
	for i := range views {
		v := &views[i]
		for _, a := range v.Aims {
			if a.Kind != PhaseCoverage || v.Bins == nil {
				continue
			}
			covered++
			missing, all := 0.0, 0
			for _, b := range v.Bins {
				missing += float64(b.Wanted) - b.Had
				all += b.Wanted
			}
			if math.Abs(missing/float64(all)-a.Debt) > 1e-9 {
				t.Errorf("%s: %.3f of %d visits missing, debt %.3f", v.Source, missing, all, a.Debt)
			}
		}
		if v.Eccentricity < 1e-6 && (math.Abs(v.SuperiorTurns-0.25) > 1e-4 || math.Abs(v.InferiorTurns-0.75) > 1e-4) {
			t.Errorf("%s: conjunctions of a circular orbit at %.5f and %.5f", v.Source, v.SuperiorTurns, v.InferiorTurns)
		}
		if v.PeriastronTurns != nil {
			eccentric++
			nearestAtPeriastron(t, v)
		}
		if v.EclipseTurns != nil {
			eclipses++
			if !v.Eclipsed(v.SuperiorTurns) || v.Eclipsed(v.InferiorTurns) {
				t.Errorf("%s: eclipse %v, conjunctions %.3f, %.3f", v.Source, *v.EclipseTurns, v.SuperiorTurns, v.InferiorTurns)
			}
		}
		for _, e := range v.Events {
			if e.Source != v.Source || e.At.Before(v.At) || e.At.After(v.To) || v.Limited && e.Session == "" {
				t.Errorf("%s: %+v", v.Source, e)
			}
		}
	}
	if eclipses == 0 || covered == 0 || eccentric == 0 {
		t.Errorf("%d eclipses, %d coverages, %d eccentric orbits: not much of a test", eclipses, covered, eccentric)
	}
}

func nearestAtPeriastron(t *testing.T, v *OrbitView) {
	nearest, at := math.Inf(1), 0.0
	for c, p := range v.Shape {
		if r := math.Hypot(p.X, p.Y); r < nearest {
			nearest, at = r, (float64(c)+0.5)/OrbitCells
		}
	}
	if off := math.Abs(math.Mod(at-*v.PeriastronTurns+1.5, 1) - 0.5); off > 1.5/OrbitCells {
		t.Errorf("%s: periastron at %.3f, the orbit is nearest at %.3f", v.Source, *v.PeriastronTurns, at)
	}
}

// The shape is an ellipse of semi-major axis 1 with a focus in the middle, passed through anticlockwise.
func TestOrbitShape(t *testing.T) {
	for _, e := range []float64{0, 0.3, 0.8} {
		for _, w := range []float64{0, 70, 200} {
			o, err := orbit.New(orbit.Elements{PeriodDays: 2, PeriastronMJD: 60000, SemimajorLs: 1, Eccentricity: e, PeriastronDeg: w})
			if err != nil {
				t.Fatal(err)
			}
			sin, cos := math.Sincos(w * math.Pi / 180)
			other := Point{-2 * e * cos, -2 * e * sin} // the other focus
			turned := 0.0
			for i := range 200 {
				p, q := pointOf(&o, 60000+float64(i)/100), pointOf(&o, 60000+float64(i+1)/100)
				if sum := math.Hypot(p.X, p.Y) + math.Hypot(p.X-other.X, p.Y-other.Y); math.Abs(sum-2) > 1e-9 {
					t.Errorf("e %g, ω %g: the distances to the foci add up to %.6f", e, w, sum)
				}
				turned += math.Atan2(p.X*q.Y-p.Y*q.X, p.X*q.X+p.Y*q.Y)
			}
			if math.Abs(turned-2*math.Pi) > 1e-6 {
				t.Errorf("e %g, ω %g: turned by %.4f in a period", e, w, turned)
			}
		}
	}
}

// An hour on a six-hour orbit is seen as a sixth of it, at the phases that were heard.
func TestOrbitSeen(t *testing.T) {
	f, now := coming(t, 1)
	c := *f.Campaign
	i := len(c.Sources) - 1
	for c.Sources[i].Orbit == nil || c.Sources[i].Orbit.Eccentricity > 0 {
		i--
	}
	src := c.Sources[i]
	o := *src.Orbit
	o.PeriodDays = 0.25
	src.Orbit, src.Aims = &o, []Aim{{Kind: Cadence, EveryDays: 7, Receivers: []string{"L"}, Minutes: 10}}
	c.Sources = []Source{src}
	start := now.Add(-48 * time.Hour) // eight periods: the phase was that of now
	log := &Logbook{Entries: []Entry{{Start: start, End: start.Add(time.Hour), Site: c.Sites[0].Name, Source: src.Name, Receiver: "L", Outcome: Done, Quality: 1}}}
	views, err := Orbits(&c, log, &c.Sites[0], now)
	if err != nil {
		t.Fatal(err)
	}
	v := views[0]
	if got := v.SeenShare(); math.Abs(got-1./6) > 1.5/OrbitCells || v.Visits != 1 {
		t.Errorf("seen %.3f of the orbit in %d visits", got, v.Visits)
	}
	if first := binOf(v.NowTurns, OrbitCells); v.Seen[(first+2)%OrbitCells] == 0 || v.Seen[(first+OrbitCells/2)%OrbitCells] != 0 {
		t.Errorf("seen %v with phase %.3f at its start", v.Seen, v.NowTurns)
	}
}

// Elements that mean nothing now give no phases, and no fault.
func TestOrbitThatMeansNothing(t *testing.T) {
	f, now := coming(t, 1)
	c := *f.Campaign
	c.Sources = slices.Clone(c.Sources)
	for i := range c.Sources {
		if c.Sources[i].Orbit != nil {
			o := *c.Sources[i].Orbit
			o.AscendingNodeMJD, o.PeriastronMJD, o.Decay, o.PeriodDays = 55000, 0, 0, 2
			o.FrequencySeries = []float64{5.787e-6, 0, 1e-21}
			c.Sources[i].Orbit = &o
		}
	}
	views, err := Orbits(&c, f.Logbook, &c.Sites[0], now)
	if err != nil {
		t.Fatal(err)
	}
	for i := range views {
		if v := &views[i]; !v.Void || v.Visits != 0 || len(v.Events) != 0 {
			t.Errorf("%+v", v)
		}
	}
}

func TestAccountsOfOneSource(t *testing.T) {
	f, now := coming(t, 1)
	all, err := Arrears(f.Campaign, f.Logbook, now)
	if err != nil {
		t.Fatal(err)
	}
	rows, err := Accounts(f.Campaign, f.Logbook, all[0].Source, now)
	if err != nil || len(rows) == 0 {
		t.Fatal(rows, err)
	}
	for _, r := range rows {
		found := false
		for _, a := range all {
			found = found || a.Source == r.Source && a.Aim == r.Aim && a.Debt == r.Debt
		}
		if !found {
			t.Errorf("%+v is not among the arrears", r)
		}
	}
}

func BenchmarkOrbits(b *testing.B) {
	f, now := coming(b, 10)
	for b.Loop() {
		if _, err := Orbits(f.Campaign, f.Logbook, &f.Campaign.Sites[0], now); err != nil {
			b.Fatal(err)
		}
	}
}
