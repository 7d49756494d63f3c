package demo_test

import (
	"math"
	"testing"
	"time"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/campaigns/demo"
	"example.org/tallystick/sky"
	"example.org/tallystick/sky/orbit"
)

// The demonstration's files are made with formulas of their own. Here the program's formulas look at them.

func siteOf(t *testing.T, c *campaigns.Campaign) (*sky.Site, sky.Mask) {
	t.Helper()
	s := c.Sites[0]
	site, err := sky.NewSite(s.LatitudeDeg, s.LongitudeDeg, s.HeightM, s.DUT1Sec)
	if err != nil {
		t.Fatal(err)
	}
	mask, err := sky.MaskOf(s.HorizonDeg)
	if err != nil {
		t.Fatal(err)
	}
	return site, mask
}

func frameAt(t *testing.T, at time.Time) *sky.Frame {
	t.Helper()
	f, err := sky.NewFrame(at)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

func targetOf(s *campaigns.Source) sky.Target {
	return sky.Target{RADeg: s.RADeg, DecDeg: s.DecDeg, PMRAMasPerYr: s.PMMasPerYr[0], PMDecMasPerYr: s.PMMasPerYr[1],
		EpochMJD: s.PositionMJD}
}

func orbitOf(t *testing.T, s *campaigns.Source) orbit.Orbit {
	t.Helper()
	o, err := orbit.New(orbit.Elements{PeriodDays: s.Orbit.PeriodDays, AscendingNodeMJD: s.Orbit.AscendingNodeMJD,
		PeriastronMJD: s.Orbit.PeriastronMJD, SemimajorLs: s.Orbit.SemimajorLs, Eccentricity: s.Orbit.Eccentricity,
		PeriastronDeg: s.Orbit.PeriastronDeg, AdvanceDegPerYr: s.Orbit.AdvanceDegPerYr, Decay: s.Orbit.Decay})
	if err != nil {
		t.Fatalf("%s: %v", s.Name, err)
	}
	return o
}

// Every logged observation must have been possible: above the limits and the skyline, and away from the Sun.
func TestLoggedSourcesWereUp(t *testing.T) {
	c := load(t)
	site, mask := siteOf(t, c)
	known := sourcesByName(c)
	limits := c.Sites[0].ElevationLimitsDeg
	frame := frameAt(t, demo.Now())
	for _, e := range logbook(t) {
		if e.Start.Sub(frame.At()).Abs() > 12*time.Hour {
			frame = frameAt(t, e.Start)
		}
		place := frame.Place(targetOf(known[e.Source]))
		for _, at := range []time.Time{e.Start, e.Start.Add(e.End.Sub(e.Start) / 2), e.End} {
			az, el := site.AzEl(frame, &place, at)
			if low := math.Max(limits[0], mask.At(az)); el < low || el > limits[1] {
				t.Errorf("line %d: %s at %v stands at azimuth %.2f, elevation %.2f; %.2f to %.2f are allowed",
					e.Line, e.Source, at, az, el, low, limits[1])
			}
			if sun := frame.SunDeg(place, at); sun < c.Sites[0].SunLimitDeg {
				t.Errorf("line %d: %s at %v is %.2f degrees from the Sun", e.Line, e.Source, at, sun)
			}
		}
	}
}

// The remarks in campaign.toml name the minutes of conjunctions; the orbits must agree.
func TestAnnouncedConjunctions(t *testing.T) {
	c := load(t)
	for _, want := range []struct {
		source string
		at     time.Time
	}{
		{"J0512+1730", time.Date(2026, 12, 4, 0, 52, 0, 0, time.UTC)},
		{"J0512+1730", time.Date(2026, 12, 7, 5, 38, 0, 0, time.UTC)},
		{"J0512+1730", time.Date(2026, 12, 16, 19, 56, 0, 0, time.UTC)},
		{"J0512+1730", time.Date(2027, 1, 5, 0, 32, 0, 0, time.UTC)},
		{"J0737+0945", time.Date(2027, 1, 15, 1, 40, 0, 0, time.UTC)},
	} {
		s := sourcesByName(c)[want.source]
		if s == nil {
			t.Fatalf("no source is called %s", want.source)
		}
		roemer := frameAt(t, want.at).RoemerSecAt(targetOf(s), want.at)
		phase := orbitOf(t, s).Phase(orbitTime(t, s, want.at, roemer))
		off := (phase - 0.25) * s.Orbit.PeriodDays * 1440
		if math.Abs(off) > 0.75 {
			t.Errorf("%s at %v is %.2f minutes from superior conjunction", s.Name, want.at, off)
		}
	}
}

// orbitTime returns the orbit time that is seen at an instant.
func orbitTime(t *testing.T, s *campaigns.Source, at time.Time, roemerSec float64) float64 {
	t.Helper()
	mjd := sky.MJD(at)
	tdb := mjd + (sky.TTMinusUTCSec(at)+sky.TDBMinusTTSec(mjd))/86400
	return orbitOf(t, s).FromObservatory(tdb, roemerSec)
}

// The eclipsing binary was never observed in eclipse, and the very eccentric one only once around periastron.
func TestLoggedOrbitalPhases(t *testing.T) {
	c := load(t)
	known := sourcesByName(c)
	eclipsing, periastra := 0, 0
	for _, e := range logbook(t) {
		s := known[e.Source]
		if s.Orbit == nil || s.Orbit.Eclipse == nil && s.Orbit.Eccentricity < 0.8 {
			continue
		}
		roemer := frameAt(t, e.Start).RoemerSecAt(targetOf(s), e.Start)
		o := orbitOf(t, s)
		if s.Orbit.Eclipse == nil {
			if p := o.PhasePeriastron(orbitTime(t, s, e.Start, roemer)); p < 0.01 || p > 0.99 {
				periastra++
			}
			continue
		}
		eclipsing++
		for at := e.Start; !at.After(e.End); at = at.Add(time.Minute) {
			away := math.Abs(math.Mod(o.Phase(orbitTime(t, s, at, roemer))-s.Orbit.Eclipse.CentreTurns+1.5, 1) - 0.5)
			if away < s.Orbit.Eclipse.HalfWidthTurns+s.Orbit.Eclipse.MarginTurns {
				t.Errorf("line %d: %s is in eclipse at %v", e.Line, s.Name, at)
				break
			}
		}
	}
	if eclipsing == 0 {
		t.Error("the eclipsing binary was never observed")
	}
	if periastra != 1 {
		t.Errorf("the very eccentric binary was observed %d times around periastron, its remark says once", periastra)
	}
}
