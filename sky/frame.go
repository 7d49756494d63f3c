package sky

import (
	"fmt"
	"math"
	"time"
)

// The dates a frame can be made for. Before, UTC was another thing; after, leap seconds and the Earth's turning are guesses.
var (
	firstDate = time.Date(1972, 1, 1, 0, 0, 0, 0, time.UTC)
	lastDate  = time.Date(2100, 1, 1, 0, 0, 0, 0, time.UTC)
)

// FrameReach is how far from a frame's instant its places keep the promised accuracy. Beyond it they
// go wrong slowly: by 0.1 arcsec after 3 days, the Sun by 5 arcsec (TestFrameReach).
const FrameReach = 36 * time.Hour

// A Frame is the true equator and equinox of date around one instant: what is the same for every source
// and every site. Make one for the middle of a session and use it for all of it. A Frame does not change
// once made and may be shared.
type Frame struct {
	at    time.Time
	jd    float64 // Julian day of TT at the instant
	nodes [3]node // a day before, at, and a day after the instant: what lies between is a parabola through them

	era     float64    // Earth rotation angle at the instant if UT1 were UTC, radians
	equinox [3]float64 // apparent sidereal time less the Earth rotation angle: c0 + x(c1 + x c2), x in days
	sun     Place
}

// node is all that depends on an instant alone.
type node struct {
	rotation mat     // from ICRS to the true equator and equinox of date
	velocity vec     // of the Earth about the barycentre, in units of c, ICRS
	earth    vec     // heliocentric, au, ICRS
	wobble   vec     // of the Sun about the barycentre, au, ICRS
	equinox  float64 // apparent sidereal time less the Earth rotation angle, radians
	days     float64 // of TDB since J2000.0
}

// newNode works out a node.
//
// Given:    jd, Julian day of TT
// Neglects: what the nutation theory of 2000 adds to that of 1980 (0.01 arcsec)
// Source:   the precession of 2006; the frame is tied to ICRS by the bias of IERS Conventions 2003, eq. 19 and 20
func newNode(jd float64) node {
	t := (jd - mjdOffset - j2000MJD) / daysPerCentury
	psi, eps := nutationOf(jd)
	obliquity := meanObliquity(t)
	precession := precessionMatrix(t)
	bias := chain(aboutX(0.0068192*radPerSec), aboutY(-0.041775*radPerSec*math.Sin(obliquityJ2000)), aboutZ(-0.0146*radPerSec))

	trueObliquity := obliquity + eps
	nutation := chain(aboutX(-trueObliquity), aboutZ(-psi), aboutX(obliquity))
	mean := precession.after(&bias)
	earth, earthVelocity := earthFromSun(jd)
	wobble, wobbleVelocity := sunFromBarycentre(jd, earth, earthVelocity)

	return node{
		rotation: nutation.after(&mean),
		velocity: earthVelocity.plus(1, wobbleVelocity).times(lightTimeAU / (10 * daysPerCentury * secondsPerDay)),
		earth:    earth,
		wobble:   wobble,
		equinox:  precessionInRA(t) + equationOfEquinoxes(psi, trueObliquity, t),
		days:     daysSinceJ2000(jd),
	}
}

// chain returns the rotation that does c first, then b, then a.
func chain(a, b, c *mat) mat {
	bc := b.after(c)
	return a.after(&bc)
}

// NewFrame returns the frame around an instant. It errs for dates outside 1972 to 2099.
func NewFrame(at time.Time) (*Frame, error) {
	if err := checkDate(at); err != nil {
		return nil, err
	}
	jd := jdTT(at)
	return newFrame(at, [3]node{newNode(jd - 1), newNode(jd), newNode(jd + 1)}), nil
}

// NewFrameBeside is NewFrame, and the same to the last bit, for less work where frames of other instants lie one or
// two days off: what frames have in common is taken from them. Those that are nil or have nothing in common do no harm.
func NewFrameBeside(at time.Time, others ...*Frame) (*Frame, error) {
	if err := checkDate(at); err != nil {
		return nil, err
	}
	jd := jdTT(at)
	var nodes [3]node
	for i, jd := range [3]float64{jd - 1, jd, jd + 1} {
		if known := nodeAmong(others, jd); known != nil {
			nodes[i] = *known
		} else {
			nodes[i] = newNode(jd)
		}
	}
	return newFrame(at, nodes), nil
}

// nodeAmong finds the node of a Julian day of TT in frames: exactly that of that instant.
func nodeAmong(frames []*Frame, jd float64) *node {
	for _, f := range frames {
		if f == nil {
			continue
		}
		for i := range f.nodes {
			if f.nodes[i].days == daysSinceJ2000(jd) {
				return &f.nodes[i]
			}
		}
	}
	return nil
}

// daysSinceJ2000 is exact: two dates never become one.
func daysSinceJ2000(jd float64) float64 { return jd - mjdOffset - j2000MJD }

func checkDate(at time.Time) error {
	if at.Before(firstDate) || !at.Before(lastDate) {
		return fmt.Errorf("date %s: places on the sky are worked out from 1972-01-01 to 2099-12-31", at.UTC().Format(time.DateTime))
	}
	return nil
}

// NewFrames returns a frame for every day from the first instant on until the last is within half a day of
// one: what a season needs. It costs a third of as many calls of NewFrame.
func NewFrames(from, to time.Time) ([]*Frame, error) {
	for _, t := range [...]time.Time{from, to} {
		if err := checkDate(t); err != nil {
			return nil, err
		}
	}
	if to.Before(from) {
		return nil, fmt.Errorf("interval from %s to %s: the end must not lie before the start",
			from.UTC().Format(time.DateTime), to.UTC().Format(time.DateTime))
	}
	const day = 24 * time.Hour
	first := from.Add(day / 2)
	n := max(1, int((to.Sub(from)+day-1)/day))
	// A leap second between two nodes would bend the parabola: the step is a day of TT within each frame.
	frames := make([]*Frame, n)
	var nodes [3]node
	for i := range frames {
		at := first.Add(time.Duration(i) * day)
		jd := jdTT(at)
		if i > 0 && math.Abs(jd-frames[i-1].jd-1) < 1e-9 {
			nodes = [3]node{nodes[1], nodes[2], newNode(jd + 1)}
		} else {
			nodes = [3]node{newNode(jd - 1), newNode(jd), newNode(jd + 1)}
		}
		frames[i] = newFrame(at, nodes)
	}
	return frames, nil
}

func newFrame(at time.Time, nodes [3]node) *Frame {
	at = at.UTC().Round(0)
	f := &Frame{at: at, jd: jdTT(at), nodes: nodes}
	day := floorDiv(at.Unix(), secondsPerDay)
	seconds := float64(at.Unix()-day*secondsPerDay) + float64(at.Nanosecond())*1e-9
	f.era = earthRotation(float64(unixEpochMJD+day), seconds/secondsPerDay)
	f.equinox[0], f.equinox[1], f.equinox[2] = parabola(nodes[0].equinox, nodes[1].equinox, nodes[2].equinox)
	f.sun = f.sunPlace()
	return f
}

func floorDiv(a, b int64) int64 {
	q := a / b
	if a%b < 0 {
		q--
	}
	return q
}

// parabola returns the coefficients of c0 + x(c1 + x c2) through values at x = −1, 0 and 1.
func parabola(before, at, after float64) (c0, c1, c2 float64) {
	return at, (after - before) / 2, (after+before)/2 - at
}

// At returns the frame's instant.
func (f *Frame) At() time.Time { return f.at }

// days returns the time since the frame's instant in days.
func (f *Frame) days(at time.Time) float64 { return float64(at.Sub(f.at)) / (secondsPerDay * 1e9) }

// instant is the inverse of days, to the nanosecond.
func (f *Frame) instant(x float64) time.Time {
	return f.at.Add(time.Duration(math.Round(x * secondsPerDay * 1e9)))
}

// sidereal returns Greenwich apparent sidereal time in radians, not reduced, x days of UT1 after the frame's instant.
func (f *Frame) sidereal(x float64) float64 {
	return f.era + f.equinox[0] + x*(earthRotationPerDay+f.equinox[1]+x*f.equinox[2])
}

// A Target is a direction among the stars: ICRS, at an epoch, with its proper motion.
type Target struct {
	RADeg, DecDeg float64
	PMRAMasPerYr  float64 // times cos dec
	PMDecMasPerYr float64
	EpochMJD      float64 // 0 means J2000.0
}

// Check says what is wrong with a target, if anything.
func (t Target) Check() error {
	switch {
	case !(t.RADeg >= 0 && t.RADeg < 360):
		return fmt.Errorf("right ascension %g°: accepted are 0 to below 360", t.RADeg)
	case !(t.DecDeg >= -90 && t.DecDeg <= 90):
		return fmt.Errorf("declination %g°: accepted are -90 to 90", t.DecDeg)
	case !(math.Abs(t.PMRAMasPerYr) <= 20000 && math.Abs(t.PMDecMasPerYr) <= 20000):
		return fmt.Errorf("proper motion %g, %g mas/yr: accepted are -20000 to 20000", t.PMRAMasPerYr, t.PMDecMasPerYr)
	case t.EpochMJD != 0 && !(t.EpochMJD >= 15000 && t.EpochMJD <= 100000):
		return fmt.Errorf("epoch MJD %g: accepted are 15000 to 100000, or 0 for J2000.0", t.EpochMJD)
	}
	return nil
}

// course is a target as a straight line: from + days·perDay, days since J2000.0, ICRS.
type course struct {
	from, perDay vec
	still        bool
}

// course returns a target's unit vector and its proper motion.
//
// Neglects: parallax (under 1 mas beyond 1 kpc) and motion along the line of sight
// Source:   straight motion in space, Hipparcos catalogue vol. 1, eq. 1.2.16 without its radial terms
// Checked:  TestAzEl (rows of kind pm), TestBookPrecession
func (t Target) course() course {
	sa, ca := math.Sincos(t.RADeg * radPerDeg)
	sd, cd := math.Sincos(t.DecDeg * radPerDeg)
	r := vec{cd * ca, cd * sa, sd}
	if t.PMRAMasPerYr == 0 && t.PMDecMasPerYr == 0 {
		return course{from: r, still: true}
	}
	east, north := vec{-sa, ca, 0}, vec{-sd * ca, -sd * sa, cd}
	const masPerYr = radPerSec / 1000 / 365.25
	perDay := east.times(t.PMRAMasPerYr*masPerYr).plus(t.PMDecMasPerYr*masPerYr, north)
	var epoch float64
	if t.EpochMJD != 0 {
		epoch = t.EpochMJD - j2000MJD
	}
	return course{from: r.plus(-epoch, perDay), perDay: perDay}
}

// at returns the unit vector at a date in days since J2000.0.
func (c *course) at(days float64) vec {
	if c.still {
		return c.from
	}
	return c.from.plus(days, c.perDay).unit()
}

// direction returns the target's ICRS unit vector at a date in days since J2000.0.
func (t Target) direction(days float64) vec {
	c := t.course()
	return c.at(days)
}

// A Place is where something stands in a frame, as seen from the Earth's centre: a unit vector on the true
// equator and equinox of date and how it changes. It belongs to the frame that made it.
type Place struct {
	at, rate, bend vec     // at + x(rate + x bend), x in days from the frame's instant
	parallax       float64 // what a site's own place on the Earth lowers it by, over cos el: radians
}

// vector returns the place x days after its frame's instant; its length is 1 to 1e−8.
func (p *Place) vector(x float64) vec {
	return vec{
		p.at[0] + x*(p.rate[0]+x*p.bend[0]),
		p.at[1] + x*(p.rate[1]+x*p.bend[1]),
		p.at[2] + x*(p.rate[2]+x*p.bend[2]),
	}
}

func placeThrough(v [3]vec) Place {
	var p Place
	for i := range p.at {
		p.at[i], p.rate[i], p.bend[i] = parabola(v[0][i], v[1][i], v[2][i])
	}
	return p
}

// Place returns the apparent place of a target: proper motion, the Sun's bending of its light, annual
// aberration, precession and nutation. What the site adds (diurnal aberration) comes with Look.
func (f *Frame) Place(t Target) Place {
	c := t.course()
	return placeThrough([3]vec{f.nodes[0].place(&c), f.nodes[1].place(&c), f.nodes[2].place(&c)})
}

// place returns a target's apparent place at one instant.
func (n *node) place(c *course) vec {
	return n.rotation.apply(aberrate(bend(c.at(n.days), n.earth), n.velocity))
}

// sunPlace returns the Sun's apparent place: where it was when the light left, and annual aberration. The
// Sun itself moves 7 km while its light travels, so the Earth's place is all that matters.
func (f *Frame) sunPlace() Place {
	var v [3]vec
	for i := range f.nodes {
		n := &f.nodes[i]
		v[i] = n.rotation.apply(aberrate(n.earth.times(-1/n.earth.length()), n.velocity))
	}
	p := placeThrough(v)
	const earthRadiusAU = 6371.0e3 / auMetres
	p.parallax = earthRadiusAU / f.nodes[1].earth.length()
	return p
}

// Sun returns the Sun's apparent place. Looks at it include its parallax, 8.8 arcsec at the horizon.
func (f *Frame) Sun() Place { return f.sun }

// aberrate returns a direction as seen by a moving observer.
//
//	p' = [ p/γ + (1 + p·v/(1 + 1/γ)) v ] / (1 + p·v)
//
// Given:    unit vector; velocity in units of c
// Source:   special relativity; Explanatory Supplement 1992, eq. 3.252-1
// Checked:  TestAzEl, TestSun
func aberrate(p, v vec) vec {
	g := math.Sqrt(1 - v.dot(v))
	pv := p.dot(v)
	return p.times(g/(1+pv)).plus((1+pv/(1+g))/(1+pv), v)
}

// bend returns a direction after the Sun has bent its light: 0.004 arcsec × cot(elongation/2).
//
//	p + 2GM/(c² r) · (e − (p·e) p) / (1 + p·e)
//
// Given:    unit vector; the Earth's heliocentric place r e in au, same axes
// Ends:     behind the Sun's disc the bending is held at 0.2° from the Sun's centre
// Source:   Klioner 2003, AJ 125, 1580, as in the Explanatory Supplement 2013, eq. 7.63
func bend(p, earth vec) vec {
	const twiceSunRadiusAU = 1.97412574336e-8 // 2GM/c²
	r := earth.length()
	pe := p.dot(earth) / r
	k := twiceSunRadiusAU / r / max(1+pe, 6e-6)
	return p.times(1-k*pe).plus(k/r, earth)
}

// SeparationDeg returns the angle between two places of this frame at an instant near its own, 0 to 180.
func (f *Frame) SeparationDeg(a, b Place, at time.Time) float64 {
	x := f.days(at)
	return between(a.vector(x), b.vector(x)) * degPerRad
}

// SunDeg returns a place's elongation: its angle from the Sun's centre, in degrees.
func (f *Frame) SunDeg(p Place, at time.Time) float64 { return f.SeparationDeg(p, f.sun, at) }
