package sky

import (
	"fmt"
	"math"
	"time"
)

const (
	auMetres      = 149597870700
	lightTimeAU   = 499.004783836 // seconds of light time in an au
	speedOfLight  = 299792458
	earthRadius   = 6378137           // WGS84, metres
	earthFlatness = 1 / 298.257223563 // WGS84
)

// A Site is a place on the Earth. Make it with NewSite: the fields are for reading.
type Site struct {
	LatitudeDeg  float64 // geodetic, −90 to 90
	LongitudeDeg float64 // east positive
	HeightM      float64
	DUT1Sec      float64 // UT1 − UTC

	sinLat, cosLat float64
	longitude      float64 // radians, with DUT1 worked in
	spin           float64 // speed at which the Earth carries the site eastward, in units of c
}

// NewSite returns a site. Latitude is geodetic, −90 to 90; longitude is positive east, −180 to 360; the
// height is above the ellipsoid, −500 to 9000 m; DUT1 is UT1 − UTC, within 0.9 s.
func NewSite(latitudeDeg, longitudeDeg, heightM, dut1Sec float64) (*Site, error) {
	switch {
	case !(latitudeDeg >= -90 && latitudeDeg <= 90):
		return nil, fmt.Errorf("latitude %g°: accepted are -90 to 90", latitudeDeg)
	case !(longitudeDeg >= -180 && longitudeDeg <= 360):
		return nil, fmt.Errorf("longitude %g°: accepted are -180 to 360, east positive", longitudeDeg)
	case !(heightM >= -500 && heightM <= 9000):
		return nil, fmt.Errorf("height %g m: accepted are -500 to 9000", heightM)
	case !(math.Abs(dut1Sec) <= 0.9):
		return nil, fmt.Errorf("UT1 - UTC %g s: accepted are -0.9 to 0.9", dut1Sec)
	}
	s := &Site{LatitudeDeg: latitudeDeg, LongitudeDeg: longitudeDeg, HeightM: heightM, DUT1Sec: dut1Sec}
	s.sinLat, s.cosLat = math.Sincos(latitudeDeg * radPerDeg)
	s.longitude = longitudeDeg*radPerDeg + dut1Sec/secondsPerDay*earthRotationPerDay
	axis, _ := s.geocentric()
	s.spin = axis * earthRotationPerDay / secondsPerDay / speedOfLight
	return s, nil
}

// geocentric returns the site's distances from the Earth's axis and from the plane of its equator, north positive, in
// metres.
//
//	(C + h) cos φ and (C (1−f)² + h) sin φ,  C = a/√(cos²φ + (1−f)² sin²φ)
//
// Source:   Explanatory Supplement 1992, eq. 3.351-3.353; ellipsoid WGS84
// Checked:  TestGeocentric (AST-050, AST-074)
func (s *Site) geocentric() (axisM, equatorM float64) {
	const e = (1 - earthFlatness) * (1 - earthFlatness)
	c := earthRadius / math.Sqrt(s.cosLat*s.cosLat+e*s.sinLat*s.sinLat)
	return (c + s.HeightM) * s.cosLat, (c*e + s.HeightM) * s.sinLat
}

// LSTHours returns local apparent sidereal time in hours, 0 to 24.
func (s *Site) LSTHours(f *Frame, at time.Time) float64 {
	return mod((f.sidereal(f.days(at))+s.longitude)*(24/turn), 24)
}

// A Look is where a place stands as seen from a site, without refraction.
type Look struct {
	AzDeg          float64 // from north through east, 0 to 360
	ElDeg          float64 // above the horizontal plane
	HourAngleDeg   float64 // west positive, −180 to 180
	DecDeg         float64 // as seen from the site, true equator of date
	ParallacticDeg float64 // −180 to 180, positive west of the meridian
}

// horizon is a direction in a site's own axes, not of unit length: east, north, up.
type horizon struct{ e, n, u float64 }

// meridian returns the parts of a place toward the point of the equator on the meridian, toward west,
// and toward the pole, x days after the frame's instant.
func (s *Site) meridian(f *Frame, p *Place, x float64) (m, w, z float64) {
	v := p.vector(x)
	st, ct := math.Sincos(f.sidereal(x) + s.longitude)
	return v[0]*ct + v[1]*st, v[0]*st - v[1]*ct, v[2]
}

// horizon returns where a place stands x days after the frame's instant, diurnal aberration and parallax included.
func (s *Site) horizon(f *Frame, p *Place, x float64) horizon {
	h := s.toHorizon(s.meridian(f, p, x))
	h.e += s.spin
	h.u -= p.parallax
	return h
}

// toHorizon turns a direction, given by its parts toward the meridian, toward west and toward the pole, to the horizon.
func (s *Site) toHorizon(m, w, z float64) horizon {
	return horizon{e: -w, n: z*s.cosLat - m*s.sinLat, u: z*s.sinLat + m*s.cosLat}
}

// toEquator is the way back.
func (s *Site) toEquator(h horizon) (m, w, z float64) {
	return h.u*s.cosLat - h.n*s.sinLat, -h.e, h.u*s.sinLat + h.n*s.cosLat
}

// azEl returns azimuth in (−π, π] and elevation, radians.
func (h horizon) azEl() (az, el float64) {
	return math.Atan2(h.e, h.n), math.Atan2(h.u, math.Sqrt(h.e*h.e+h.n*h.n))
}

// AzEl returns where a place stands: azimuth from north through east, 0 to 360, and elevation, in degrees.
//
//	az = atan2(E, N),  el = atan2(U, √(E² + N²))
//
// Given:    a place of the frame f
// Neglects: refraction, polar motion (0.3 arcsec), the planets' bending of light
// Source:   rotation of axes; Explanatory Supplement 1992, section 3.26
// Checked:  TestAzEl
func (s *Site) AzEl(f *Frame, p *Place, at time.Time) (azDeg, elDeg float64) {
	az, el := s.horizon(f, p, f.days(at)).azEl()
	return positive(az) * degPerRad, el * degPerRad
}

// positive brings an angle from (−π, π] to [0, 2π).
func positive(az float64) float64 {
	if az < 0 {
		az += turn
		if az >= turn {
			return 0
		}
	}
	return az
}

// Look returns all of where a place of the frame f stands.
func (s *Site) Look(f *Frame, p Place, at time.Time) Look {
	return s.look(s.horizon(f, &p, f.days(at)))
}

func (s *Site) look(h horizon) Look {
	az, el := h.azEl()
	m, w, z := s.toEquator(h) // so that hour angle and declination are those seen from the site
	equator := m*m + w*w
	return Look{
		AzDeg:          positive(az) * degPerRad,
		ElDeg:          el * degPerRad,
		HourAngleDeg:   math.Atan2(w, m) * degPerRad,
		DecDeg:         math.Atan2(z, math.Sqrt(equator)) * degPerRad,
		ParallacticDeg: math.Atan2(s.cosLat*w, s.sinLat*equator-s.cosLat*z*m) * degPerRad,
	}
}

// Track fills azDeg and elDeg with where a place of the frame f stands at from, from + step, from + 2 step and
// so on. Azimuth is from north through east, 0 to 360. The slices must be of equal length.
func (s *Site) Track(f *Frame, p Place, from time.Time, step time.Duration, azDeg, elDeg []float64) {
	x0, dx := f.days(from), float64(step)/(secondsPerDay*1e9)
	elDeg = elDeg[:len(azDeg)]
	for i := range azDeg {
		az, el := s.horizon(f, &p, x0+float64(i)*dx).azEl()
		azDeg[i], elDeg[i] = positive(az)*degPerRad, el*degPerRad
	}
}
