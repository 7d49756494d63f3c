package ephemeris

import (
	"errors"
	"fmt"
	"math"
	"strconv"
	"strings"
)

const degPerRad = 180 / math.Pi

// obliquitySec is the inclination of the ecliptic to the equator of J2000.0 in seconds of arc, by the word of ECL.
var obliquitySec = map[string]float64{"IERS2010": 84381.406, "IERS2003": 84381.4059, "IERS1992": 84381.412, "IAU1976": 84381.448}

// usualEcliptic is what most files that do not say mean.
const usualEcliptic = "IERS2010"

// A place is where a source stands: ICRS.
type place struct {
	ra, dec   string // as TOML values: texts in quotes, or numbers of degrees
	raDeg     float64
	decDeg    float64
	remark    string     // beside the right ascension
	sigmaMas  [2]float64 // 0: not known
	motion    [2]string  // mas/yr
	hasMotion bool
	epoch     decimal
	epochNote string
}

// position reads where the source stands, from equatorial coordinates where there are any.
func (f *File) position(scale timeScale) error {
	ra, dec, long, lat := f.line("RAJ"), f.line("DECJ"), f.line("ELONG"), f.line("ELAT")
	switch {
	case ra != nil && dec != nil:
		f.source.place = equatorial(ra, dec)
		f.equatorialMotion()
		if long != nil && lat != nil {
			f.compareWithEcliptic()
		}
	case long != nil && lat != nil:
		f.source.place = f.ecliptic()
	default:
		var found []string
		for _, key := range []string{"RAJ", "DECJ", "ELONG", "ELAT"} {
			if f.line(key) != nil {
				found = append(found, key)
			}
		}
		if len(found) == 0 {
			return errors.New("found no position that can be read; accepted: RAJ and DECJ, or ELONG and ELAT")
		}
		return fmt.Errorf("found %s alone as its position; accepted: RAJ and DECJ, or ELONG and ELAT", strings.Join(found, " and "))
	}
	p := &f.source.place
	for _, m := range p.motion {
		if d, _ := parseDecimal(m); math.Abs(d.value) > 20000 {
			f.remark(0, "a proper motion of %s mas/yr; accepted: within 20000 of 0; left out", m)
			p.hasMotion = false
		}
	}
	switch at, spin := f.line("POSEPOCH"), f.line("PEPOCH"); {
	case at != nil:
		p.epoch = scale.epoch(at.exact)
	case spin != nil && p.hasMotion:
		p.epoch, p.epochNote = scale.epoch(spin.exact), "PEPOCH, since the file has no POSEPOCH"
		f.remark(0, "no POSEPOCH: the position is taken to hold at PEPOCH, MJD %s", spin.Text)
	case p.hasMotion:
		f.remark(0, "no POSEPOCH: the position is taken to hold at J2000.0")
	}
	return nil
}

func equatorial(ra, dec *Line) place {
	return place{
		ra: strconv.Quote(ra.parts), dec: strconv.Quote(dec.parts), raDeg: ra.Value, decDeg: dec.Value,
		sigmaMas: [2]float64{ra.Sigma * 3.6e6 * math.Cos(dec.Value/degPerRad), dec.Sigma * 3.6e6},
	}
}

func (f *File) equatorialMotion() {
	p := &f.source.place
	p.motion = [2]string{"0", "0"}
	for i, key := range []string{"PMRA", "PMDEC"} {
		if l := f.line(key); l != nil {
			p.motion[i], p.hasMotion = l.Text, true
		}
	}
	if !p.hasMotion && (f.line("PMELONG") != nil || f.line("PMELAT") != nil) {
		f.remark(0, "the position is equatorial and the proper motion ecliptic: the motion is turned with the position")
		long, lat := toEcliptic(p.raDeg, p.decDeg, f.obliquity())
		p.turnMotion(f, newTurn(long, lat, f.obliquity()))
	}
}

// obliquity is the one that ECL names.
func (f *File) obliquity() float64 {
	name := usualEcliptic
	if l := f.line("ECL"); l != nil {
		name = strings.ToUpper(l.Text)
	}
	return obliquitySec[name] / 3600 / degPerRad
}

func (f *File) checkObliquity() {
	l := f.line("ECL")
	switch {
	case l == nil:
		f.remark(0, "no ECL: the obliquity of %s is taken", usualEcliptic)
	case obliquitySec[strings.ToUpper(l.Text)] == 0:
		f.remark(l.Number, "ECL %s is not known; accepted: IERS2010, IERS2003, IERS1992, IAU1976; that of %s is taken", plain(l.Text), usualEcliptic)
		delete(f.lines, "ECL")
	}
}

// ecliptic turns ecliptic coordinates to ICRS.
func (f *File) ecliptic() place {
	f.checkObliquity()
	long, lat := f.line("ELONG"), f.line("ELAT")
	t := newTurn(long.Value/degPerRad, lat.Value/degPerRad, f.obliquity())
	p := place{raDeg: t.raDeg, decDeg: t.decDeg, remark: fmt.Sprintf("from ELONG %s, ELAT %s", long.Text, lat.Text)}
	// Twelve decimals of a degree are 4 nas.
	p.ra = written(strconv.FormatFloat(t.raDeg, 'f', 12, 64)).text
	p.dec = written(strconv.FormatFloat(t.decDeg, 'f', 12, 64)).text
	if p.ra == "360" {
		p.ra, p.raDeg = "0", 0
	}
	east, north := long.Sigma*3.6e6*math.Cos(lat.Value/degPerRad), lat.Sigma*3.6e6
	p.sigmaMas = [2]float64{math.Hypot(east*t.cos, north*t.sin), math.Hypot(east*t.sin, north*t.cos)}
	p.motion = [2]string{"0", "0"}
	if f.line("PMELONG") != nil || f.line("PMELAT") != nil {
		p.turnMotion(f, t)
	} else if f.line("PMRA") != nil || f.line("PMDEC") != nil {
		f.remark(0, "the position is ecliptic and the proper motion equatorial: both are taken as they are")
		for i, key := range []string{"PMRA", "PMDEC"} {
			if l := f.line(key); l != nil {
				p.motion[i], p.hasMotion = l.Text, true
			}
		}
	}
	return p
}

func (p *place) turnMotion(f *File, t turn) {
	var parts [2]float64
	decimals := 0
	for i, key := range []string{"PMELONG", "PMELAT"} {
		if l := f.line(key); l != nil {
			parts[i] = l.Value
			decimals = max(decimals, l.exact.decimals()+1)
		}
	}
	east, north := parts[0], parts[1]
	for i, x := range []float64{east*t.cos + north*t.sin, north*t.cos - east*t.sin} {
		p.motion[i] = written(strconv.FormatFloat(x, 'f', min(decimals, 12), 64)).text
	}
	p.hasMotion = true
}

// A turn is an ecliptic direction as the equator sees it, with the angle between the two norths there.
type turn struct {
	raDeg, decDeg float64
	sin, cos      float64 // of the angle from ecliptic north to equatorial north, through east
}

// newTurn turns an ecliptic direction about the equinox.
//
//	x = cos β cos λ,  y = cos β sin λ cos ε − sin β sin ε,  z = cos β sin λ sin ε + sin β cos ε
//
// Given:    longitude, latitude, obliquity in radians
// Neglects: the equinox against ICRS (0.02 arcsec): far inside any beam, and what these files mean by it
// Source:   Meeus, Astronomical Algorithms, 2nd ed. 1998, eq. 13.3 and 13.4
// Checked:  TestEclipticPositions, TestEclipticAgainstBook
func newTurn(long, lat, obliquity float64) turn {
	sinL, cosL := math.Sincos(long)
	sinB, cosB := math.Sincos(lat)
	sinE, cosE := math.Sincos(obliquity)
	x, y, z := cosB*cosL, cosB*sinL*cosE-sinB*sinE, cosB*sinL*sinE+sinB*cosE
	ra, flat := math.Atan2(y, x), math.Hypot(x, y)
	t := turn{raDeg: math.Mod(ra*degPerRad+360, 360), decDeg: math.Atan2(z, flat) * degPerRad, cos: 1}
	// East and north of the ecliptic there, along the equator's east.
	sinR, cosR := math.Sincos(ra)
	t.cos = sinL*sinR + cosL*cosE*cosR
	t.sin = sinB*cosL*sinR - (sinB*sinL*cosE+cosB*sinE)*cosR
	return t
}

// toEcliptic is the way back, radians.
func toEcliptic(raDeg, decDeg, obliquity float64) (long, lat float64) {
	t := newTurn(raDeg/degPerRad, decDeg/degPerRad, -obliquity)
	return t.raDeg / degPerRad, t.decDeg / degPerRad
}

// compareWithEcliptic says so when a file gives two positions that differ.
func (f *File) compareWithEcliptic() {
	p, long, lat := f.source.place, f.line("ELONG"), f.line("ELAT")
	t := newTurn(long.Value/degPerRad, lat.Value/degPerRad, f.obliquity())
	apartSec := math.Hypot(math.Remainder(t.raDeg-p.raDeg, 360)*math.Cos(p.decDeg/degPerRad), t.decDeg-p.decDeg) * 3600
	if apartSec > 1 {
		f.remark(long.Number, "contradiction: ELONG and ELAT are %.3g arcsec from RAJ and DECJ; RAJ and DECJ are taken", apartSec)
	}
}
