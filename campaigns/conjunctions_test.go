package campaigns

import (
	"math"
	"strings"
	"testing"
	"time"

	"pgregory.net/rapid"

	"example.org/tallystick/sky"
	"example.org/tallystick/sky/orbit"
)

// openSite is a telescope that reaches everything above the horizon.
func openSite(latDeg, lonDeg float64) *Site {
	return &Site{Name: "Open", LatitudeDeg: latDeg, LongitudeDeg: lonDeg, ElevationLimitsDeg: [2]float64{0, 90}, SlewDegPerMin: [2]float64{60, 60}, Mount: AltAz, TimeZone: time.UTC}
}

// The rows of another program's light times: each conjunction is listed where the source is up, at that time and that
// far from the Sun, and nowhere else.
func TestConjunctionsOfPublishedOrbits(t *testing.T) {
	for _, row := range publishedConjunctions(t) {
		c := &Campaign{Sources: []Source{{Name: "A", RADeg: row.target.RADeg, DecDeg: row.target.DecDeg, PositionMJD: j2000, Orbit: &row.orbit}}}
		seen := 0
		for lon := 0.0; lon < 360; lon += 30 {
			rows, short, err := Conjunctions(c, openSite(20, lon), row.at.AddDate(0, 0, -1), row.at.AddDate(0, 0, 1))
			if err != nil || len(short) > 0 || len(rows) > 1 {
				t.Fatalf("%s: %v, %v, %v", row.ID, rows, short, err)
			}
			if len(rows) == 0 {
				continue
			}
			seen++
			got := rows[0]
			row.Check(sky.MJD(got.At))
			// The rows have no aberration, which moves the source and the Sun by 20.5 arcsec at most each.
			if math.Abs(got.SunSeparationDeg-row.elongationDeg) > 0.0114 {
				t.Errorf("%s: %.4f deg from the Sun, want %g", row.ID, got.SunSeparationDeg, row.elongationDeg)
			}
			if got.Kind != SuperiorConjunction || !got.Usable || got.ElevationDeg < 0 || got.Trust() != "unknown" || got.Session != "" {
				t.Errorf("%s: %+v", row.ID, got)
			}
		}
		// At latitude 20 a source of declination -23 is up for 0.45 of a turn, one of +66 for 0.81.
		if seen < 4 || seen > 10 {
			t.Errorf("%s: seen from %d of 12 longitudes", row.ID, seen)
		}
	}
}

// Whatever the orbit: the rows are what a walk in small steps finds.
func TestConjunctionsAgainstWalk(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		from := time.Date(2026, 1, 1, 0, 0, 0, 0, time.UTC).Add(time.Duration(rapid.IntRange(0, 500000).Draw(t, "minutes")) * time.Minute)
		to := from.AddDate(0, 0, 2)
		period := rapid.Float64Range(0.2, 5).Draw(t, "period")
		src := Source{
			Name: "A", RADeg: rapid.Float64Range(0, 359).Draw(t, "ra"), DecDeg: rapid.Float64Range(-60, 89).Draw(t, "dec"), PositionMJD: j2000,
			Orbit: &Orbit{
				PeriodDays: period, PeriastronMJD: 60000, PeriastronDeg: rapid.Float64Range(0, 360).Draw(t, "omega"),
				SemimajorLs:  rapid.Float64Range(0, 30*period).Draw(t, "size"),
				Eccentricity: rapid.Float64Range(0, 0.7).Draw(t, "e"),
			},
		}
		if rapid.Bool().Draw(t, "eclipses") {
			src.Orbit.Eclipse = &Eclipse{HalfWidthTurns: rapid.Float64Range(0.01, 0.2).Draw(t, "half width"), CentreTurns: rapid.Float64Range(0.2, 0.3).Draw(t, "centre")}
		}
		session := Session{Name: "S", Site: "Open", Start: from.Add(10 * time.Hour), End: from.Add(22 * time.Hour)}
		site := openSite(rapid.Float64Range(-60, 80).Draw(t, "latitude"), 0)
		site.ElevationLimitsDeg, site.SunLimitDeg = [2]float64{20, 70}, 30
		c := &Campaign{Sources: []Source{src}, Sessions: []Session{session, {Name: "elsewhere", Site: "Other", Start: from, End: to}}}
		rows, short, err := Conjunctions(c, site, from, to)
		if err != nil {
			t.Fatal(err)
		}
		if (len(short) == 1) != (period < 1) {
			t.Fatalf("period %g: %v", period, short)
		}
		k, err := newKnowledge(&c.Sources[0], newFrames())
		if err != nil {
			t.Fatal(err)
		}
		step := time.Duration(period * 24 * float64(time.Hour) / 200)
		sure := checkRows(t, k, site, session, rows, step)
		if found := walk(k, site, session, from, to, step); found != sure {
			t.Fatalf("%d rows away from the horizon and the ends, a walk finds %d: %+v", sure, found, rows)
		}
	})
}

// slackSec is what the way there and the way back may differ by: rounding, and about midnight the Earth's place from
// the frames of two noons.
const slackSec = 0.01

// checkRows checks each row by itself, and counts those whose presence no rounding decides.
func checkRows(t *rapid.T, k *knowledge, site *Site, session Session, rows []ConjunctionRow, step time.Duration) (sure int) {
	o := k.clock.orbit
	where, err := site.onEarth()
	if err != nil {
		t.Fatal(err)
	}
	for i, r := range rows {
		mjd := k.clock.orbitMJD(r.At)
		switch r.Kind {
		case SuperiorConjunction, InferiorConjunction:
			want := 90.0
			if r.Kind == InferiorConjunction {
				want = 270
			}
			rate := math.Abs(math.Remainder(o.LongitudeDeg(mjd+slackSec/secPerDay)-o.LongitudeDeg(mjd), 360))
			if off := math.Abs(math.Remainder(o.LongitudeDeg(mjd)-want, 360)); off > rate+1e-6 {
				t.Fatalf("%s at longitude %g", r.Kind, o.LongitudeDeg(mjd))
			}
		default:
			e := k.source.Orbit.eclipsesFor(nil)[0].eclipse
			before, after := o.Eclipsed(e, mjd-slackSec/secPerDay), o.Eclipsed(e, mjd+slackSec/secPerDay)
			if before == after || after != (r.Kind == EclipseStart) {
				t.Fatalf("%s at %v: eclipsed %v, then %v", r.Kind, r.At, before, after)
			}
			continue
		}
		if i > 0 && r.At.Before(rows[i-1].At) {
			t.Fatal("not in time order")
		}
		inside := !r.At.Before(session.Start) && r.At.Before(session.End)
		if inside != (r.Session == "S") || !inside && (r.Session != "" || k.source.Orbit.PeriodDays < 1) {
			t.Fatalf("session %q at %v", r.Session, r.At)
		}
		frame, err := sky.NewFrame(r.At)
		if err != nil {
			t.Fatal(err)
		}
		place := frame.Place(k.source.target())
		_, el := where.AzEl(frame, &place, r.At)
		sun := frame.SunDeg(place, r.At)
		if math.Abs(el-r.ElevationDeg) > 1e-3 || math.Abs(sun-r.SunSeparationDeg) > 1e-3 {
			t.Fatalf("elevation %g, want %g; Sun %g, want %g", r.ElevationDeg, el, r.SunSeparationDeg, sun)
		}
		margin := math.Min(math.Abs(sun-30), math.Min(math.Abs(el-20), math.Abs(el-70)))
		if usable := el >= 20 && el <= 70 && sun >= 30; usable != r.Usable && margin > 0.01 {
			t.Fatalf("usable %v at elevation %g, %g from the Sun", r.Usable, el, sun)
		}
		if el > 1 && clear(r.At, k, session, step) {
			sure++
		}
	}
	return sure
}

// clear says that an instant is more than two steps from the ends of what is listed.
func clear(at time.Time, k *knowledge, session Session, step time.Duration) bool {
	from, to := session.Start.Add(-10*time.Hour), session.Start.Add(38*time.Hour)
	if k.source.Orbit.PeriodDays < 1 {
		from, to = session.Start, session.End
	}
	return at.After(from.Add(2*step)) && at.Before(to.Add(-2*step))
}

// walk counts conjunctions that are clear of everything.
func walk(k *knowledge, site *Site, session Session, from, to time.Time, step time.Duration) (found int) {
	where, _ := site.onEarth()
	last := math.NaN()
	for t := from; t.Before(to); t = t.Add(step) {
		theta := k.clock.orbit.LongitudeDeg(k.clock.orbitMJD(t))
		for _, at := range []float64{90, 270} {
			a, b := math.Remainder(last-at, 360), math.Remainder(theta-at, 360)
			if !(a < 0 && b >= 0 && b-a < 90) {
				continue
			}
			// The crossing between the last step and this one, by halving.
			lo, hi := t.Add(-step), t
			for range 20 {
				mid := lo.Add(hi.Sub(lo) / 2)
				if math.Remainder(k.clock.orbit.LongitudeDeg(k.clock.orbitMJD(mid))-at, 360) < 0 {
					lo = mid
				} else {
					hi = mid
				}
			}
			frame, _ := sky.NewFrame(hi)
			place := frame.Place(k.source.target())
			if _, el := where.AzEl(frame, &place, hi); el > 1 && clear(hi, k, session, step) {
				found++
			}
		}
		last = theta
	}
	return found
}

func TestConjunctionTrust(t *testing.T) {
	row := func(sigma float64) ConjunctionRow {
		return ConjunctionRow{SigmaKnown: true, HalfWidthTurns: 0.06, Prediction: orbit.Prediction{SigmaTurns: sigma}}
	}
	for sigma, want := range map[float64]string{0.01: "trustworthy", 0.03: "widened", 0.07: "refused"} {
		if r := row(sigma); r.Trust() != want || !strings.Contains(r.Why(), want) {
			t.Errorf("%g: %s, %s", sigma, r.Trust(), r.Why())
		}
	}
	unknown := ConjunctionRow{HalfWidthTurns: 0.06}
	if unknown.Trust() != "unknown" || !strings.HasPrefix(unknown.Why(), "unknown") {
		t.Error(unknown.Why())
	}
	// The demonstration's orbits are judged against their aims.
	f, now := openDemo(t)
	rows, _, err := Conjunctions(f.Campaign, &f.Campaign.Sites[0], now, now.AddDate(0, 0, 14))
	if err != nil || len(rows) < 20 {
		t.Fatalf("%d rows, %v", len(rows), err)
	}
	for _, r := range rows {
		for _, s := range f.Campaign.Sources {
			for _, a := range s.Aims {
				if s.Name == r.Source && a.Kind == Conjunction && r.HalfWidthTurns != a.HalfWidthTurns {
					t.Errorf("%s is judged against %g, and wanted within %g", s.Name, r.HalfWidthTurns, a.HalfWidthTurns)
				}
			}
		}
	}
}

// An orbit shorter than any is refused before it fills the memory, and a time outside the tables is said.
func TestConjunctionRefusals(t *testing.T) {
	from := time.Date(2026, 12, 3, 0, 0, 0, 0, time.UTC)
	site := openSite(50, 0)
	fast := &Campaign{
		Sources:  []Source{{Name: "A", Orbit: &Orbit{PeriodDays: 1e-9, AscendingNodeMJD: 60000}}},
		Sessions: []Session{{Name: "S", Site: site.Name, Start: from, End: from.Add(time.Hour)}},
	}
	if _, _, err := Conjunctions(fast, site, from, from.AddDate(0, 0, 1)); err == nil || !strings.Contains(err.Error(), "A: found an orbit of 1e-09 d") {
		t.Error(err)
	}
	if _, _, err := Conjunctions(fast, site, from.AddDate(200, 0, 0), from.AddDate(200, 0, 1)); err == nil {
		t.Error("worked out for 2226")
	}
}
