package timing

import (
	"fmt"
	"math"

	"example.org/tallystick/sky/orbit"
)

// The columns of the model: its parameters as the inside counts them. Rotation, position and orbit are
// referred to the middle of the data, where their errors are least correlated; vectorOf refers them back to
// the epochs of the Source.
const (
	colPhase         = iota // turns
	colFrequency            // Hz
	colDerivative           // Hz/s
	colRA                   // mas, times cos dec
	colDec                  // mas
	colPMRA                 // mas/yr
	colPMDec                // mas/yr
	colParallax             // mas
	colDM                   // pc/cm³
	colX                    // ls
	colLongitude            // mean orbital longitude, turns
	colOrbitFreq            // its rate, turns/d
	colOrbitDrift           // the rate's rate, turns/d²
	colEps1                 // e sin ω
	colEps2                 // e cos ω
	colAdvance              // deg/yr
	colMass                 // M_sun
	colSinI                 //
	colEinstein             // seconds
	colOldPhase             // before the glitch
	colOldFrequency         // before the glitch
	colOldDerivative        // before the glitch
	columns
)

// A vec holds a number for each column.
type vec [columns]float64

// dispersionSec is the delay of 1 pc/cm³ at 1 MHz, seconds.
const dispersionSec = 4.148808e3

// sky60 is the inclination assumed when only the companion's mass is known.
const sky60 = 0.866025403784

// geometry is what the partial derivatives need of a source, worked out once.
type geometry struct {
	src      Source
	ref      float64    // MJD
	east     [3]float64 // direction of growing right ascension
	north    [3]float64 // of growing declination
	toSource [3]float64
	binary   bool
	orb      orbit.Orbit
	shapiroR float64 // of the companion, seconds
	sinI     float64
	einstein float64 // amplitude of the Einstein delay, seconds
}

func newGeometry(src Source, ref float64) (geometry, error) {
	g := geometry{src: src, ref: ref, sinI: src.SinI, shapiroR: src.CompanionMsun * orbit.SunSec}
	sinA, cosA := math.Sincos(src.RADeg * degToRad)
	sinD, cosD := math.Sincos(src.DecDeg * degToRad)
	g.east = [3]float64{-sinA, cosA, 0}
	g.north = [3]float64{-sinD * cosA, -sinD * sinA, cosD}
	g.toSource = [3]float64{cosD * cosA, cosD * sinA, sinD}
	if g.sinI == 0 {
		g.sinI = sky60
	}
	// With sin i = 1 the delay at conjunction has no end; the companion is not a point.
	g.sinI = math.Min(g.sinI, 1-1e-9)
	if src.Orbit != nil {
		var err error
		if g.orb, err = orbit.New(*src.Orbit); err != nil {
			return geometry{}, err
		}
		g.binary = true
		if err = g.setEinstein(); err != nil {
			return geometry{}, err
		}
	}
	return g, nil
}

// setEinstein takes the Einstein delay that is given, or the one that general relativity has for the masses.
func (g *geometry) setEinstein() error {
	e := g.orb.Eccentricity
	if g.einstein = g.src.EinsteinSec; g.einstein == 0 {
		g.einstein = g.orb.EinsteinGR(g.src.CompanionMsun, g.src.SinI)
		return nil
	}
	if most := orbit.LargestEinsteinSec(g.orb.PeriodDays, e); !(g.einstein <= most) {
		return fmt.Errorf("einstein delay: found %g s; accepted at most %.3g s in this orbit", g.einstein, most)
	}
	return nil
}

func dot(a, b [3]float64) float64 { return a[0]*b[0] + a[1]*b[1] + a[2]*b[2] }

// row fills in the partial derivatives of the arrival time with respect to every column, seconds per unit.
//
//	rotation    −1/F, −τ/F, −τ²/2F                        τ seconds since the middle of the data
//	position    −r·east/c, −r·north/c; times τ for motion  (r from the barycentre to the Earth)
//	parallax    (r² − (r·n)²)/(2 au c)
//	dispersion  K/f²
//
// The same row times F gives the phase that a change of a parameter shifts.
//
// Source:  Edwards, Hobbs & Manchester 2006, MNRAS 372, 1549
// Checked: TestPartials, against finite differences
func (g *geometry) row(o Observation, a *vec) {
	*a = vec{}
	tau := (o.MJD - g.ref) * secPerDay
	perHz := -1 / g.src.FrequencyHz
	first := colPhase
	if o.MJD < g.src.GlitchMJD {
		first = colOldPhase
	}
	a[first] = perHz
	a[first+1] = perHz * tau
	a[first+2] = perHz * tau * tau / 2

	r := earthSec(o.MJD)
	years := (o.MJD - g.ref) / daysPerYear
	a[colRA] = -dot(r, g.east) * masToRad
	a[colDec] = -dot(r, g.north) * masToRad
	a[colPMRA] = a[colRA] * years
	a[colPMDec] = a[colDec] * years
	along := dot(r, g.toSource)
	a[colParallax] = (dot(r, r) - along*along) / (2 * auSec) * masToRad
	if o.MHz > 0 {
		a[colDM] = dispersionSec / (o.MHz * o.MHz)
	}
	if g.binary {
		g.orbitRow(o.MJD, a)
	}
}

// orbitRow fills in the columns of the orbit. They are written with h = e sin ω, k = e cos ω and the
// eccentric longitude F = E + ω, so that a circular orbit is no special case:
//
//	λ = F − k sin F + h cos F                     Kepler's equation, λ the mean longitude
//	S = sin F − h − b k (k sin F − h cos F)       b = 1/(1+√(1−h²−k²))
//	D = 1 − k cos F − h sin F
//	delay = x S + γ (k sin F − h cos F)/e − 2 r ln(D − s S)
//
// Neglects: the periodic part of the advance of periastron, k(A − M): a few 1e-5 of the derivatives
// Source:   Blandford & Teukolsky 1976, ApJ 205, 580; Damour & Deruelle 1986; the elements after
// Broucke & Cefola 1972, Celest. Mech. 5, 303
// Checked:  TestPartials
func (g *geometry) orbitRow(mjd float64, a *vec) {
	e, x := g.orb.Eccentricity, g.orb.SemimajorLs
	longitude, anomaly := g.orb.Means(mjd)
	omega := turn * (longitude - anomaly) // longitude of periastron, in the mean
	sinO, cosO := math.Sincos(omega)
	h, k := e*sinO, e*cosO
	anomaly = turn * (anomaly - math.Round(anomaly))
	sinF, cosF := math.Sincos(orbit.EccentricAnomaly(anomaly, e) + omega)
	at, sinF, cosF := g.leave(mjd, h, k, sinF, cosF)

	beta := math.Sqrt(1 - e*e)
	b := 1 / (1 + beta)
	cross := k*sinF - h*cosF // e sin E
	s := sinF - h - b*k*cross
	d := 1 - k*cosF - h*sinF

	// Derivatives of S and D at fixed F, then along Kepler's equation.
	sF := cosF*(1-b*k*k) - b*h*k*sinF
	dbh, dbk := b*b*h/beta, b*b*k/beta
	sH := -1 + b*k*cosF - k*cross*dbh - sF*cosF/d
	sK := -2*b*k*sinF + b*h*cosF - k*cross*dbk + sF*sinF/d
	sL := sF / d
	dL := cross / d
	dH := -sinF - cross*cosF/d
	dK := -cosF + cross*sinF/d

	arg := d - g.sinI*s
	pull := -2 * g.shapiroR / arg
	gL := x*sL + pull*(dL-g.sinI*sL)
	gH := x*sH + pull*(dH-g.sinI*sH)
	gK := x*sK + pull*(dK-g.sinI*sK)

	if e > 0 {
		sinE, cosE := cross/e, (k*cosF+h*sinF)/e
		a[colEinstein] = sinE
		perE, along := g.einstein/e, g.einstein*cosE/d
		gL += along
		gH -= perE*(cosF+sinE*h/e) + along*cosF
		gK += perE*(sinF-sinE*k/e) + along*sinF
	}

	days := at - g.ref
	a[colX] = s
	a[colLongitude] = turn * gL
	a[colOrbitFreq] = turn * gL * days
	a[colOrbitDrift] = turn * gL * days * days / 2
	perDeg := days / daysPerYear * degToRad
	sinA, cosA := 0.0, 1.0
	if g.src.Orbit.AdvanceDegPerYr != 0 {
		sinA, cosA = math.Sincos(g.src.Orbit.AdvanceDegPerYr * perDeg)
	}
	a[colEps1] = gH*cosA - gK*sinA
	a[colEps2] = gH*sinA + gK*cosA
	a[colAdvance] = (gH*k - gK*h) * perDeg
	a[colMass] = -2 * orbit.SunSec * math.Log(arg)
	a[colSinI] = -pull * s
}

// leave goes back from the arrival to when the pulse left the pulsar's place in its orbit, by the light time
// at the arrival, and takes the eccentric longitude along: a small step of mean longitude, Kepler's equation
// solved by two steps of Newton's from where it was.
func (g *geometry) leave(mjd, h, k, sinF, cosF float64) (at, sin, cos float64) {
	e2 := h*h + k*k
	back := g.orb.SemimajorLs / secPerDay * (sinF - h - k*(k*sinF-h*cosF)/(1+math.Sqrt(1-e2)))
	at = mjd - back
	step := -turn * back / g.orb.PeriodDays // of the mean longitude; the advance within a light time is nothing
	d := step / (1 - k*cosF - h*sinF)
	sinD, cosD := math.Sincos(d)
	sin, cos = sinF*cosD+cosF*sinD, cosF*cosD-sinF*sinD
	left := step - d + k*(sin-sinF) - h*(cos-cosF)
	d = left / (1 - k*cos - h*sin)
	return at, sin + d*cos - d*d/2*sin, cos - d*sin - d*d/2*cos
}
