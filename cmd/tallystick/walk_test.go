package main

import (
	"bytes"
	"encoding/csv"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"
	"time"

	"pgregory.net/rapid"

	"example.org/tallystick/campaigns"
)

// An independent check of exported plans. It reads the CSV that a script would read and the campaign
// as it was written, and walks every slot in steps of ten seconds with plain formulas of its own:
// nothing here comes from the packages that made the plan. Left out are nutation and aberration (0.008°
// together at most) and the Sun's own motion about the barycentre (5 s of light time).
const (
	angleTolDeg   = 0.05
	secondTol     = 1.0
	lstTolH       = 2.0 / 3600 // the equation of the equinoxes is 1.2 s at most
	eclipseTolSec = 10.0
)

func rad(deg float64) float64 { return deg * math.Pi / 180 }
func deg(rad float64) float64 { return rad * 180 / math.Pi }

func turn360(d float64) float64 { return math.Mod(math.Mod(d, 360)+360, 360) }

// apart is the difference of two angles, −180 to 180.
func apart(a, b float64) float64 { return turn360(a-b+180) - 180 }

// Julian centuries from J2000.0.
func centuries(t time.Time) float64 {
	return (float64(t.UnixMilli())/86400e3 + 2440587.5 - 2451545) / 36525
}

// walkLST is the mean sidereal time in degrees: Meeus, Astronomical Algorithms, 2nd ed. 1998, eq. 12.4.
func walkLST(site campaigns.Site, t time.Time) float64 {
	t = t.Add(time.Duration(site.DUT1Sec * float64(time.Second)))
	c := centuries(t)
	return turn360(280.46061837 + 360.98564736629*c*36525 + 0.000387933*c*c - c*c*c/38710000 + site.LongitudeDeg)
}

// ofDate brings an ICRS position to the mean equator of date: proper motion, then Meeus eqs. 21.2, 21.4.
func ofDate(s campaigns.Source, t time.Time) (ra, dec float64) {
	c := centuries(t)
	epoch := 51544.5
	if s.PositionMJD != 0 {
		epoch = s.PositionMJD
	}
	years := c*100 - (epoch-51544.5)/365.25
	dec0 := rad(s.DecDeg + s.PMMasPerYr[1]*years/3.6e6)
	ra0 := rad(s.RADeg + s.PMMasPerYr[0]*years/3.6e6/math.Max(0.01, math.Cos(rad(s.DecDeg))))
	zeta := rad((2306.2181*c + 0.30188*c*c + 0.017998*c*c*c) / 3600)
	z := rad((2306.2181*c + 1.09468*c*c + 0.018203*c*c*c) / 3600)
	theta := rad((2004.3109*c - 0.42665*c*c - 0.041833*c*c*c) / 3600)
	a := math.Cos(dec0) * math.Sin(ra0+zeta)
	b := math.Cos(theta)*math.Cos(dec0)*math.Cos(ra0+zeta) - math.Sin(theta)*math.Sin(dec0)
	d := math.Sin(theta)*math.Cos(dec0)*math.Cos(ra0+zeta) + math.Cos(theta)*math.Sin(dec0)
	return turn360(deg(math.Atan2(a, b) + z)), deg(math.Asin(d))
}

// horizontal is compass azimuth, elevation and hour angle by spherical trigonometry.
func horizontal(site campaigns.Site, s campaigns.Source, t time.Time) (az, el, ha float64) {
	ra, dec := ofDate(s, t)
	ha = apart(walkLST(site, t), ra)
	h, d, f := rad(ha), rad(dec), rad(site.LatitudeDeg)
	el = deg(math.Asin(math.Sin(f)*math.Sin(d) + math.Cos(f)*math.Cos(d)*math.Cos(h)))
	az = turn360(deg(math.Atan2(-math.Cos(d)*math.Sin(h), math.Sin(d)*math.Cos(f)-math.Cos(d)*math.Sin(f)*math.Cos(h))))
	return az, el, ha
}

// lowSun is the Sun's right ascension, declination, ecliptic longitude (degrees) and distance (au):
// the low-precision formulas of the Astronomical Almanac, good to 0.01° until 2050.
func lowSun(t time.Time) (ra, dec, lambda, au float64) {
	n := centuries(t) * 36525
	g := rad(357.528 + 0.9856003*n)
	lambda = turn360(280.460 + 0.9856474*n + 1.915*math.Sin(g) + 0.020*math.Sin(2*g))
	eps := rad(23.439 - 0.0000004*n)
	l := rad(lambda)
	au = 1.00014 - 0.01671*math.Cos(g) - 0.00014*math.Cos(2*g)
	return turn360(deg(math.Atan2(math.Cos(eps)*math.Sin(l), math.Cos(l)))), deg(math.Asin(math.Sin(eps) * math.Sin(l))), lambda, au
}

func separation(ra1, dec1, ra2, dec2 float64) float64 {
	return deg(math.Acos(math.Min(1, math.Sin(rad(dec1))*math.Sin(rad(dec2))+math.Cos(rad(dec1))*math.Cos(rad(dec2))*math.Cos(rad(ra1-ra2)))))
}

// nodePhase is the phase of a circular orbit from the ascending node, with the light time across the
// Earth's orbit: Earth is where the Sun is not.
func nodePhase(s campaigns.Source, t time.Time) float64 {
	ra, dec := ofDate(s, t)
	sunRA, sunDec, _, au := lowSun(t)
	romer := -499.004784 * au * math.Cos(rad(separation(ra, dec, sunRA, sunDec)))
	mjd := float64(t.UnixMilli())/86400e3 + 40587 + (69.184+romer)/86400
	phase := (mjd - s.Orbit.AscendingNodeMJD) / s.Orbit.PeriodDays
	phase -= s.Orbit.Decay * phase * phase / 2
	return phase - math.Floor(phase)
}

// maskAt interpolates the horizon mask between its points, round through north.
func maskAt(mask [][2]float64, az float64) float64 {
	if len(mask) == 0 {
		return -90
	}
	for i, p := range mask {
		next := mask[(i+1)%len(mask)]
		width := next[0] - p[0]
		if i == len(mask)-1 {
			width += 360
		}
		along := turn360(az - p[0])
		if along <= width {
			return p[1] + (next[1]-p[1])*along/width
		}
	}
	return -90
}

// axisSec is how long one axis takes: speeding up and slowing down evenly, at full rate between.
func axisSec(distance, perMin, acceleration float64) float64 {
	v := perMin / 60
	distance = math.Abs(distance)
	if distance < v*v/acceleration {
		return 2 * math.Sqrt(distance/acceleration)
	}
	return distance/v + v/acceleration
}

func walkSlew(site campaigns.Site, from, to [2]float64) float64 {
	second := axisSec(to[1]-from[1], site.SlewDegPerMin[1], site.AccelerationDegPerS2[1])
	if site.Mount == campaigns.Transit { // it only turns in declination, and waits for the rest
		return site.SettleSec + second
	}
	return site.SettleSec + math.Max(second, axisSec(to[0]-from[0], site.SlewDegPerMin[0], site.AccelerationDegPerS2[0]))
}

// axesOn is where the axes of the mount stand on a source: azimuth, without a jump from near, and
// elevation, or hour angle and declination. A limit that is broken is told in words, with no regard to the Sun.
func axesOn(site campaigns.Site, source campaigns.Source, at time.Time, near float64) (axes [2]float64, broken string) {
	az, el, ha := horizontal(site, source, at)
	travel, tol := site.HourAngleLimitsDeg, angleTolDeg
	if site.Mount == campaigns.AltAz {
		axes, travel = [2]float64{near + apart(az, near), el}, site.AzimuthTravelDeg
		tol /= math.Cos(rad(el))
	} else {
		_, dec := ofDate(source, at)
		axes = [2]float64{ha, dec}
		tol /= math.Max(0.01, math.Cos(rad(dec)))
	}
	low := math.Max(site.ElevationLimitsDeg[0], maskAt(site.HorizonDeg, az))
	switch {
	case el < low-angleTolDeg:
		broken = fmt.Sprintf("elevation %.2f, lowest allowed %.2f", el, low)
	case el > site.ElevationLimitsDeg[1]+angleTolDeg:
		broken = fmt.Sprintf("elevation %.2f, highest allowed %.2f", el, site.ElevationLimitsDeg[1])
	case axes[0] < travel[0]-tol || axes[0] > travel[1]+tol:
		broken = fmt.Sprintf("the mount at %.2f, its limits %v", axes[0], travel)
	}
	return axes, broken
}

// A walkedSlot is one line of the CSV.
type walkedSlot struct {
	source             campaigns.Source
	receiver           string
	start, end         time.Time
	az1, el1, az2, el2 float64
	lst1, lst2         float64
}

type faulter interface {
	Helper()
	Fatalf(string, ...any)
	Errorf(string, ...any)
}

func readSlots(t faulter, c *campaigns.Campaign, data []byte) []walkedSlot {
	t.Helper()
	rows, err := csv.NewReader(bytes.NewReader(data)).ReadAll()
	if err != nil || len(rows) == 0 {
		t.Fatalf("the CSV does not read: %v", err)
	}
	place := map[string]int{}
	for i, name := range rows[0] {
		place[name] = i
	}
	var slots []walkedSlot
	for _, row := range rows[1:] {
		text := func(name string) string { return row[place[name]] }
		number := func(name string) float64 {
			x, err := strconv.ParseFloat(text(name), 64)
			if err != nil {
				t.Fatalf("%s: %v", name, err)
			}
			return x
		}
		instant := func(name string) time.Time {
			at, err := time.Parse("2006-01-02T15:04:05Z", text(name))
			if err != nil {
				t.Fatalf("%s: %v", name, err)
			}
			return at
		}
		i := slices.IndexFunc(c.Sources, func(s campaigns.Source) bool { return s.Name == text("source") })
		if i < 0 {
			t.Fatalf("no source %q in the campaign", text("source"))
		}
		slots = append(slots, walkedSlot{
			source: c.Sources[i], receiver: text("receiver"), start: instant("start_utc"), end: instant("end_utc"),
			az1: number("azimuth_start_deg"), el1: number("elevation_start_deg"), az2: number("azimuth_end_deg"), el2: number("elevation_end_deg"),
			lst1: number("lst_start_h"), lst2: number("lst_end_h"),
		})
	}
	return slots
}

// walk checks every limit and returns how many instants it looked at.
func walk(t faulter, site campaigns.Site, session campaigns.Session, receivers []campaigns.Receiver, slots []walkedSlot) (looked int) {
	t.Helper()
	seen := map[string]int{}
	for i, s := range slots {
		name := fmt.Sprintf("slot %d (%s with %s, %s)", i+1, s.source.Name, s.receiver, s.start.Format(time.RFC3339))
		if s.start.Before(session.Start) || s.end.After(session.End) || !s.end.After(s.start) {
			t.Errorf("%s: outside the session, or empty", name)
		}
		if !slices.Contains(session.Receivers, s.receiver) {
			t.Errorf("%s: a receiver that the session does not have", name)
		}
		for _, b := range session.Breaks {
			if s.start.Before(b[1]) && b[0].Before(s.end) {
				t.Errorf("%s: within the break from %s", name, b[0])
			}
		}
		seen[s.source.Name+"\x00"+s.receiver]++
		if n := seen[s.source.Name+"\x00"+s.receiver]; n > slotsWanted(s.source) {
			t.Errorf("%s: slot number %d of this source and receiver", name, n)
		}
		looked += onSource(t, name, site, s)
		var previous *walkedSlot
		if i > 0 {
			previous = &slots[i-1]
		}
		between(t, name, site, session, receivers, previous, s)
	}
	return looked
}

func slotsWanted(s campaigns.Source) int {
	n := 1
	for _, a := range s.Aims {
		n = max(n, a.PerSession)
	}
	return n
}

// onSource walks a slot from its start to its end.
func onSource(t faulter, name string, site campaigns.Site, s walkedSlot) (looked int) {
	t.Helper()
	sunLimit := math.Max(site.SunLimitDeg, s.source.SunLimitDeg)
	mount := s.az1
	for at := s.start; !at.After(s.end); at = at.Add(10 * time.Second) {
		looked++
		axes, broken := axesOn(site, s.source, at, mount)
		mount = axes[0] // the mount follows without a jump
		when := at.Format("15:04:05")
		if broken != "" {
			t.Errorf("%s: %s at %s", name, broken, when)
			return looked
		}
		ra, dec := ofDate(s.source, at)
		sunRA, sunDec, _, _ := lowSun(at)
		if d := separation(ra, dec, sunRA, sunDec); d < sunLimit-angleTolDeg {
			t.Errorf("%s: %.2f from the Sun at %s, limit %.2f", name, d, when, sunLimit)
			return looked
		}
		if o := s.source.Orbit; o != nil && o.Eclipse != nil && o.AscendingNodeMJD != 0 && o.Eccentricity < 1e-4 {
			centre := 0.25
			if o.Eclipse.CentreTurns != 0 {
				centre = o.Eclipse.CentreTurns
			}
			away := math.Abs(apart(360*nodePhase(s.source, at), 360*centre)) / 360
			if away < o.Eclipse.HalfWidthTurns-eclipseTolSec/86400/o.PeriodDays {
				t.Errorf("%s: in eclipse at %s, %.4f turns from its centre", name, when, away)
				return looked
			}
		}
	}
	same := func(what string, at time.Time, wantAz, wantEl, wantLST, gotMount float64) {
		az, el, _ := horizontal(site, s.source, at)
		if math.Abs(el-wantEl) > angleTolDeg || math.Abs(apart(az, wantAz))*math.Cos(rad(el)) > angleTolDeg {
			t.Errorf("%s: at its %s az %.3f el %.3f, exported %.3f %.3f", name, what, az, el, wantAz, wantEl)
		}
		if site.Mount == campaigns.AltAz && math.Abs(gotMount-wantAz)*math.Cos(rad(el)) > angleTolDeg {
			t.Errorf("%s: the mount has come to azimuth %.3f at its %s, exported %.3f: a jump of the cable", name, gotMount, what, wantAz)
		}
		if d := apart(walkLST(site, at), wantLST*15) / 15; math.Abs(d) > lstTolH {
			t.Errorf("%s: LST at its %s is off by %.1f s", name, what, d*3600)
		}
	}
	same("start", s.start, s.az1, s.el1, s.lst1, s.az1)
	same("end", s.end, s.az2, s.el2, s.lst2, mount)
	return looked
}

// between checks that the telescope can be there in time. It leaves at the end of the slot before or, with
// a break between, at the end of the last break, having followed its source until that began; it must be at
// the next source, settled and with the receiver in the beam, when the set-up begins.
func between(t faulter, name string, site campaigns.Site, session campaigns.Session, receivers []campaigns.Receiver, previous *walkedSlot, s walkedSlot) {
	t.Helper()
	leaves, stays := session.Start, session.Start
	if previous != nil {
		leaves, stays = previous.end, previous.end
	}
	for _, b := range session.Breaks {
		if !b[0].Before(leaves) && !b[1].After(s.start) {
			leaves, stays = b[1], b[0]
		}
	}
	setUp := time.Duration(session.SlotOverheadMin * float64(time.Minute))
	left := s.start.Sub(leaves) - setUp
	if left.Seconds() < -secondTol {
		t.Errorf("%s: %v for a set-up of %v", name, s.start.Sub(leaves), setUp)
		return
	}
	if previous == nil {
		return
	}
	if s.start.Before(previous.end) {
		t.Errorf("%s: begins before the slot before it ends", name)
	}
	needs := walkSlew(site, stayedUntil(site, *previous, stays), whereToArrive(site, s, s.start.Add(-setUp)))
	if leaves.Equal(previous.end) && previous.source.Name == s.source.Name && (site.Mount != campaigns.AltAz || math.Abs(s.az1-previous.az2) < 180) {
		needs = 0 // it stays on the source and only changes the receiver
	}
	if previous.receiver != s.receiver {
		i := slices.IndexFunc(receivers, func(r campaigns.Receiver) bool { return r.Site == site.Name && r.Name == s.receiver })
		needs = math.Max(needs, receivers[i].ChangeMin*60)
	}
	if left.Seconds() < needs-secondTol {
		t.Errorf("%s: %.0f s for a move that takes %.0f s", name, left.Seconds(), needs)
	}
}

// stayedUntil is where the axes stand when they have followed the source of a slot beyond its end, until
// the instant or the source's limits.
func stayedUntil(site campaigns.Site, s walkedSlot, until time.Time) [2]float64 {
	axes, _ := axesOn(site, s.source, s.end, s.az2)
	for at := s.end; !at.After(until); at = at.Add(10 * time.Second) {
		next, broken := axesOn(site, s.source, at, axes[0])
		if broken != "" {
			break
		}
		axes = next
	}
	return axes
}

// whereToArrive is where the axes stand on the source at the instant or, if the source is outside its
// limits then, where the slot begins.
func whereToArrive(site campaigns.Site, s walkedSlot, at time.Time) [2]float64 {
	axes, broken := axesOn(site, s.source, at, s.az1)
	if broken != "" {
		axes, _ = axesOn(site, s.source, s.start, s.az1)
	}
	return axes
}

// printed runs the command line in this process.
func printed(t faulter, args ...string) []byte {
	t.Helper()
	var out, diagnostics bytes.Buffer
	p := &program{stdin: strings.NewReader(""), stdout: &out, stderr: &diagnostics, now: time.Now}
	if code := p.run(args); code != exitDone {
		t.Fatalf("tallystick %s: exit %d\n%s", strings.Join(args, " "), code, diagnostics.String())
	}
	return out.Bytes()
}

func siteOf(c *campaigns.Campaign, s campaigns.Session) campaigns.Site {
	return c.Sites[slices.IndexFunc(c.Sites, func(site campaigns.Site) bool { return site.Name == s.Site })]
}

func TestWalkTheDemonstration(t *testing.T) {
	folder, err := campaigns.OpenDemo()
	if err != nil {
		t.Fatal(err)
	}
	c := folder.Campaign
	slots, looked, eclipsing := 0, 0, 0
	sessions := c.Sessions
	if raceDetector {
		sessions = sessions[3:4]
	}
	for _, s := range sessions {
		data := printed(t, "plan", "--session", s.Name, "--format", "csv", "--effort", "quick")
		got := readSlots(t, c, data)
		looked += walk(t, siteOf(c, s), s, c.Receivers, got)
		slots += len(got)
		for _, slot := range got {
			if slot.source.Orbit != nil && slot.source.Orbit.Eclipse != nil {
				eclipsing++
			}
		}
	}
	if slots < 5*len(sessions) || looked < 1000 {
		t.Errorf("only %d slots, %d instants: there was little to walk", slots, looked)
	}
	t.Logf("%d sessions, %d slots (%d of an eclipsing source), %d instants", len(sessions), slots, eclipsing, looked)
}

// The walk must be able to fail: each change to a good slot list breaks one limit.
func TestWalkFindsWhatIsBroken(t *testing.T) {
	folder, err := campaigns.OpenDemo()
	if err != nil {
		t.Fatal(err)
	}
	c := folder.Campaign
	session := c.Sessions[3] // a short one
	site := siteOf(c, session)
	good := readSlots(t, c, printed(t, "plan", "--session", session.Name, "--format", "csv", "--effort", "quick"))
	if len(good) < 3 {
		t.Fatal("too few slots to break")
	}
	for what, change := range map[string]func(*campaigns.Site, *campaigns.Session, []walkedSlot){
		"a higher horizon":    func(s *campaigns.Site, _ *campaigns.Session, _ []walkedSlot) { s.HorizonDeg = [][2]float64{{0, 80}} },
		"a lower upper limit": func(s *campaigns.Site, _ *campaigns.Session, _ []walkedSlot) { s.ElevationLimitsDeg[1] = 20 },
		"a wide Sun limit":    func(s *campaigns.Site, _ *campaigns.Session, _ []walkedSlot) { s.SunLimitDeg = 170 },
		"a short cable":       func(s *campaigns.Site, _ *campaigns.Session, _ []walkedSlot) { s.AzimuthTravelDeg = [2]float64{0, 10} },
		"a slow mount":        func(s *campaigns.Site, _ *campaigns.Session, _ []walkedSlot) { s.SlewDegPerMin = [2]float64{0.2, 0.2} },
		"a long set-up":       func(_ *campaigns.Site, s *campaigns.Session, _ []walkedSlot) { s.SlotOverheadMin = 90 },
		"a break in a slot": func(_ *campaigns.Site, s *campaigns.Session, w []walkedSlot) {
			s.Breaks = [][2]time.Time{{w[1].start, w[1].end}}
		},
		"a shorter session":  func(_ *campaigns.Site, s *campaigns.Session, w []walkedSlot) { s.End = w[1].end },
		"another cable turn": func(_ *campaigns.Site, _ *campaigns.Session, w []walkedSlot) { w[1].az2 += 360 },
		"the same source twice": func(_ *campaigns.Site, _ *campaigns.Session, w []walkedSlot) {
			w[0].source, w[0].receiver = w[1].source, w[1].receiver
		},
		"a slot an hour late": func(_ *campaigns.Site, _ *campaigns.Session, w []walkedSlot) {
			w[1].start, w[1].end = w[1].start.Add(time.Hour), w[1].end.Add(time.Hour)
		},
	} {
		site, session, slots := site, session, slices.Clone(good)
		change(&site, &session, slots)
		var f faultCount
		walk(&f, site, session, c.Receivers, slots)
		if f == 0 {
			t.Errorf("%s: not found", what)
		}
	}
}

type faultCount int

func (f *faultCount) Helper()               {}
func (f *faultCount) Fatalf(string, ...any) { *f++ }
func (f *faultCount) Errorf(string, ...any) { *f++ }

func TestWalkRandomCampaigns(t *testing.T) {
	dir := t.TempDir()
	slots := 0
	rapid.Check(t, func(t *rapid.T) {
		if err := os.WriteFile(filepath.Join(dir, "campaign.toml"), []byte(randomCampaign(t)), 0o600); err != nil {
			t.Fatal(err)
		}
		c, err := campaigns.Load(dir)
		if err != nil {
			t.Fatal(err)
		}
		data := printed(t, "plan", "--campaign", dir, "--session", "s", "--at", "2027-01-01", "--format", "csv", "--effort", "0.05")
		got := readSlots(t, c, data)
		walk(t, c.Sites[0], c.Sessions[0], c.Receivers, got)
		slots += len(got)
	})
	if slots == 0 {
		t.Error("no random campaign had a slot: there was nothing to walk")
	}
	t.Logf("%d slots", slots)
}

// randomCampaign writes a campaign of a site anywhere, with a mask, a Sun limit, a cable, slews and breaks.
func randomCampaign(t *rapid.T) string {
	var b strings.Builder
	in := func(name string, low, high float64) float64 {
		return math.Round(rapid.Float64Range(low, high).Draw(t, name)*1000) / 1000
	}
	mount := rapid.SampledFrom([]string{"altaz", "altaz", "equatorial", "transit"}).Draw(t, "mount")
	low, latitude := in("low", 5, 20), in("latitude", -89, 89)
	fmt.Fprintf(&b, "format = 1\n[campaign]\nname = \"random\"\n[[site]]\nname = \"A\"\nmount = %q\nlatitude_deg = %g\nlongitude_deg = %g\nheight_m = 100\n", mount, latitude, in("longitude", -179, 179))
	fmt.Fprintf(&b, "elevation_limits_deg = [%g, %g]\n", low, in("high", 70, 89.5))
	if mount == "altaz" {
		fmt.Fprintf(&b, "azimuth_travel_deg = [%g, %g]\n", in("ccw", -300, -180), in("cw", 180, 300))
	} else {
		fmt.Fprintf(&b, "hour_angle_limits_deg = [%g, %g]\n", in("east", -120, -5), in("west", 5, 120))
	}
	fmt.Fprintf(&b, "slew_deg_per_min = [%g, %g]\nacceleration_deg_per_s2 = [%g, %g]\nsettle_s = %g\nsun_limit_deg = %g\n", in("v az", 10, 60), in("v el", 5, 40), in("a az", 0.02, 0.5), in("a el", 0.02, 0.5), in("settle", 0, 60), in("sun", 0, 40))
	fmt.Fprintf(&b, "horizon_deg = [[%g, %g], [%g, %g], [%g, %g]]\n", in("m0", 0, 60), in("e0", 0, 30), in("m1", 90, 200), in("e1", 0, 30), in("m2", 220, 359), in("e2", 0, 30))
	for _, r := range []string{"L", "S"} {
		fmt.Fprintf(&b, "[[receiver]]\nname = %q\nsite = \"A\"\nband_mhz = [1200, 1500]\ntsys_k = 30\nzenith_opacity = 0.01\ngain_k_per_jy = 0.5\npolarizations = 2\nchange_min = %g\n", r, in("change", 0, 12))
	}
	for i := range rapid.IntRange(4, 16).Draw(t, "sources") {
		fmt.Fprintf(&b, "[[source]]\nname = \"R%d\"\nra = %g\ndec = %g\npriority = %g\n", i, in("ra", 0, 359.9), math.Max(-90, math.Min(90, latitude+in("south", -70, 70))), in("priority", 0.5, 5))
		if rapid.Bool().Draw(t, "binary") {
			fmt.Fprintf(&b, "[source.orbit]\nperiod_days = %g\nascending_node_mjd = 61000.5\nsemimajor_ls = 1.0\neccentricity = 0.0\neclipse = { half_width_turns = %g }\n", in("period", 0.1, 3), in("eclipse", 0.02, 0.2))
		}
		fmt.Fprintf(&b, "[[source.aim]]\nkind = \"cadence\"\nevery_days = %g\nreceivers = [%s]\nminutes = %g\n", in("every", 5, 40), rapid.SampledFrom([]string{`"L"`, `"S"`, `"L", "S"`}).Draw(t, "with"), in("minutes", 5, 60))
	}
	start := time.Date(2027, 1, 2, 0, 0, 0, 0, time.UTC).Add(time.Duration(rapid.IntRange(0, 365*24*60).Draw(t, "start")) * time.Minute)
	length := rapid.IntRange(60, 480).Draw(t, "length")
	pause := start.Add(time.Duration(rapid.IntRange(1, length-21).Draw(t, "pause")) * time.Minute)
	fmt.Fprintf(&b, "[[session]]\nname = \"s\"\nsite = \"A\"\nstart = %s\nend = %s\nreceivers = [\"L\", \"S\"]\nslot_overhead_min = %g\nbreaks = [[%s, %s]]\n",
		utc(start), utc(start.Add(time.Duration(length)*time.Minute)), in("overhead", 0, 3), utc(pause), utc(pause.Add(20*time.Minute)))
	return b.String()
}

// Passes: the source stands on its limit at rise and set and on the meridian at transit, keeps every
// limit within a usable window, and breaks one just outside.
func TestWalkPasses(t *testing.T) {
	folder, err := campaigns.OpenDemo()
	if err != nil {
		t.Fatal(err)
	}
	site, now := folder.Campaign.Sites[0], time.Date(2026, 12, 3, 15, 0, 0, 0, time.UTC)
	windows, days := 0, 10
	if raceDetector {
		days = 2
	}
	for _, source := range folder.Campaign.Sources {
		rows, err := campaigns.Passes(&site, &source, now, now.AddDate(0, 0, days))
		if err != nil {
			t.Fatal(err)
		}
		for _, r := range rows {
			for _, at := range []time.Time{r.Rise, r.Set} {
				if _, el, _ := horizontal(site, source, at); !at.IsZero() && math.Abs(el-site.ElevationLimitsDeg[0]) > angleTolDeg {
					t.Errorf("%s: elevation %.3f when it crosses %g at %s", source.Name, el, site.ElevationLimitsDeg[0], at)
				}
			}
			if _, _, ha := horizontal(site, source, r.Transit); math.Abs(ha) > angleTolDeg/math.Cos(rad(source.DecDeg)) {
				t.Errorf("%s: hour angle %.3f at transit %s", source.Name, ha, r.Transit)
			}
			if r.UsableStart.IsZero() {
				continue
			}
			windows++
			for at := r.UsableStart; at.Before(r.UsableEnd); at = at.Add(time.Minute) {
				if m := margin(site, source, at); m < -angleTolDeg {
					t.Errorf("%s: %.3f beyond a limit at %s, within a usable window", source.Name, -m, at)
					break
				}
			}
			for _, at := range []time.Time{r.UsableStart.Add(-5 * time.Minute), r.UsableEnd.Add(5 * time.Minute)} {
				if m := margin(site, source, at); m > angleTolDeg && r.LimitedBy != "never sets" {
					t.Errorf("%s: %.3f within all limits at %s, outside the usable window from %s to %s (%s)", source.Name, m, at, r.UsableStart, r.UsableEnd, r.LimitedBy)
				}
			}
		}
	}
	if windows < 30*days {
		t.Errorf("only %d windows", windows)
	}
}

// margin is how far the nearest limit is: below zero beyond it.
func margin(site campaigns.Site, source campaigns.Source, at time.Time) float64 {
	az, el, _ := horizontal(site, source, at)
	ra, dec := ofDate(source, at)
	sunRA, sunDec, _, _ := lowSun(at)
	return min(el-math.Max(site.ElevationLimitsDeg[0], maskAt(site.HorizonDeg, az)), site.ElevationLimitsDeg[1]-el,
		separation(ra, dec, sunRA, sunDec)-math.Max(site.SunLimitDeg, source.SunLimitDeg))
}
