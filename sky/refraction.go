package sky

import (
	"fmt"
	"math"
)

// A Refraction is how the air bends radio waves at a site. No calculation uses one unless it is asked for.
type Refraction struct {
	a, b float64 // radians
}

// NewRefraction returns the refraction of air at a site: pressure there (not reduced to sea level) in hPa,
// 100 to 1100; temperature in °C, −80 to 60; relative humidity, 0 to 1. It holds for wavelengths over 0.1 mm.
//
//	A tan z + B tan³ z, z the zenith distance as seen;  A = γ (1 − β),  B = −γ (β − γ/2)
//
// Neglects: the changing of temperature with height beyond a standard lapse rate: about 1 arcsec above 20°
// of elevation, 30 arcsec at 5°, worse below
// Source:   Green 1987, Spherical Astronomy, eq. 4.31; Rüeger 2002 for radio; saturation pressure Gill 1982
// Checked:  TestRefraction
func NewRefraction(pressureHPa, temperatureC, humidity float64) (*Refraction, error) {
	switch {
	case !(pressureHPa >= 100 && pressureHPa <= 1100):
		return nil, fmt.Errorf("pressure %g hPa: accepted are 100 to 1100", pressureHPa)
	case !(temperatureC >= -80 && temperatureC <= 60):
		return nil, fmt.Errorf("temperature %g °C: accepted are -80 to 60", temperatureC)
	case !(humidity >= 0 && humidity <= 1):
		return nil, fmt.Errorf("relative humidity %g: accepted are 0 to 1", humidity)
	}
	saturated := math.Pow(10, (0.7859+0.03477*temperatureC)/(1+0.00412*temperatureC)) *
		(1 + pressureHPa*(4.5e-6+6e-10*temperatureC*temperatureC))
	vapour := humidity * saturated / (1 - (1-humidity)*saturated/pressureHPa)
	kelvin := temperatureC + 273.15
	gamma := (77.6890e-6*pressureHPa - (6.3938e-6-0.375463/kelvin)*vapour) / kelvin
	beta := 4.4474e-6 * kelvin * (1 - 0.0074*vapour)
	return &Refraction{a: gamma * (1 - beta), b: -gamma * (beta - gamma/2)}, nil
}

// lowest is the least sine of elevation the formula is used with, about 3°: below it would turn back.
const lowest = 0.05

// lift returns by how much the air lifts a source that without it would stand at an elevation of which the sine is
// given, in radians. One Newton step from A tan z + B tan³ z with the true zenith distance, good to 1 arcsec at 5°.
//
// Ends:     below 3° it goes by the formula at 3°
func (r *Refraction) lift(sinEl float64) float64 {
	s := max(sinEl, lowest)
	c := math.Sqrt(max(0, 1-sinEl*sinEl))
	t := c / s
	w := r.b * t * t
	return (r.a + w) * t / (1 + (r.a+3*w)/(s*s))
}

// trueElevation returns the elevation without air, in radians, of a source that is seen at an elevation.
// It inverts lift, so that a limit is met exactly where the lifted elevation meets it.
func (r *Refraction) trueElevation(seen float64) float64 {
	el := seen - r.lift(math.Sin(seen))
	for range 8 {
		el = seen - r.lift(math.Sin(el))
	}
	return el
}
