package orbit

import "math"

// SunSec is G M_sun/c³, the mass of the Sun as a time, seconds.
const SunSec = 4.925490947e-6

// RoemerSec returns the light time across the orbit along the line of sight, in seconds: positive when
// the pulsar is on the far side.
//
//	x [ (cos E − e) sin ω + √(1−e²) sin E cos ω ]
//
// Given:    mjd, orbit time
// Neglects: the relativistic deformation of the orbit, below 50 µs
// Source:   Blandford & Teukolsky 1976, ApJ 205, 580; ω as Damour & Deruelle 1986
// Checked:  TestRoemer
func (o Orbit) RoemerSec(mjd float64) float64 {
	sinE, cosE, sinO, cosO := o.angles(mjd)
	e := o.Eccentricity
	return o.SemimajorLs * ((cosE-e)*sinO + math.Sqrt(1-e*e)*sinE*cosO)
}

// angles returns sine and cosine of the eccentric anomaly and of the longitude of periastron.
func (o *Orbit) angles(mjd float64) (sinE, cosE, sinO, cosO float64) {
	m := o.meanAnomaly(mjd)
	whole := math.Round(m)
	eccentric := EccentricAnomaly((m-whole)*turn, o.Eccentricity)
	sinE, cosE = math.Sincos(eccentric)
	om := o.om
	if o.advance != 0 {
		om += o.advance * (whole*turn + trueAnomaly(eccentric, o.Eccentricity))
	}
	sinO, cosO = math.Sincos(om)
	return sinE, cosE, sinO, cosO
}

// ShapiroSec returns the delay of the pulses in the companion's gravity, in seconds.
//
//	−2 r ln{ 1 − e cos E − s [ sin ω (cos E − e) + √(1−e²) cos ω sin E ] },  r = G m₂/c³, s = sin i
//
// Given:   companionMsun ≥ 0; sinI within 0..1, below 1 unless the pulsar passes exactly behind
// Returns: 0 when the mass or sin i is 0
// Source:  Damour & Deruelle 1986, Ann. Inst. H. Poincaré 44, 263
// Checked: TestShapiro
func (o Orbit) ShapiroSec(mjd, companionMsun, sinI float64) float64 {
	sinE, cosE, sinO, cosO := o.angles(mjd)
	e := o.Eccentricity
	arg := 1 - e*cosE - sinI*(sinO*(cosE-e)+math.Sqrt(1-e*e)*cosO*sinE)
	// A grazing ray with sin i = 1 would be delayed for ever; it hits the companion instead.
	return -2 * companionMsun * SunSec * math.Log(math.Max(arg, 1e-12))
}

// ToObservatory returns when something that leaves the pulsar at an instant of orbit time is seen at
// the telescope, TDB.
//
//	t = t_orbit + x(…) − (r·n)/c
//
// Given:    earthRoemerSec = (r·n)/c: the telescope's barycentric position along the direction to the
// source, seconds, positive when the Earth is nearer to the source than the barycentre (±505)
// Neglects: dispersion (0.02 to 1 s) and the Sun's Shapiro delay (0.1 ms)
// Source:   Edwards, Hobbs & Manchester 2006, MNRAS 372, 1549
// Checked:  TestToObservatory
func (o Orbit) ToObservatory(mjd, earthRoemerSec float64) float64 {
	return mjd + (o.RoemerSec(mjd)-earthRoemerSec)/secPerDay
}

// FromObservatory is the way back: the orbit time that is seen at the telescope at an instant (TDB).
func (o Orbit) FromObservatory(mjdTDB, earthRoemerSec float64) float64 {
	arrival := mjdTDB + earthRoemerSec/secPerDay
	mjd := arrival
	// The orbit moves at less than a tenth of the speed of light: every pass gains at least a digit.
	for range 16 {
		next := arrival - o.RoemerSec(mjd)/secPerDay
		if math.Abs(next-mjd) < 1e-12 {
			return next
		}
		mjd = next
	}
	return mjd
}
