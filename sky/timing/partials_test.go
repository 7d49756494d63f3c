package timing

import (
	"math"
	"slices"
	"testing"

	"example.org/tallystick/sky/orbit"
	"gonum.org/v1/gonum/mat"
)

// example is an invented pulsar with an invented companion.
func example() Source {
	return Source{
		FrequencyHz: 217.3, DerivativeHzPerS: -5e-16, EpochMJD: 57300, RADeg: 143, DecDeg: -21.7, PMMasPerYr: [2]float64{-4, 9},
		PositionMJD: 57100, ParallaxMas: 1.1, DMPcPerCm3: 23,
		Orbit: &orbit.Elements{PeriodDays: 3.1, PeriastronMJD: 57250.3, SemimajorLs: 6.2, Eccentricity: 0.17, PeriastronDeg: 77,
			AdvanceDegPerYr: 0.9, Decay: -2e-13},
		CompanionMsun: 0.8, SinI: 0.95,
	}
}

func circular() Source {
	s := example()
	s.Orbit = &orbit.Elements{PeriodDays: 3.1, AscendingNodeMJD: 57250.3, SemimajorLs: 6.2, Eccentricity: 2e-6, PeriastronDeg: 140, AdvanceDegPerYr: 0.01, Decay: 1e-13}
	return s
}

var inNodeForm = []Parameter{Phase, Frequency, FrequencyDerivative, RightAscension, Declination, ProperMotionRA, ProperMotionDec, Parallax, Dispersion,
	SemimajorAxis, AscendingNode, OrbitalPeriod, OrbitalDecay, Eps1, Eps2, AdvanceOfPeriastron, CompanionMass, SinI, EinsteinDelay}

var inPeriastronForm = []Parameter{Phase, Frequency, FrequencyDerivative, RightAscension, Declination, ProperMotionRA, ProperMotionDec, Parallax, Dispersion,
	SemimajorAxis, Periastron, OrbitalPeriod, OrbitalDecay, Eccentricity, LongitudeOfPeriastron, AdvanceOfPeriastron, CompanionMass, SinI, EinsteinDelay}

// arrival is the time at which a pulse arrives, up to a constant, seconds, when the parameters are changed by
// the given amounts: written in the usual orbital elements, apart from the program's own form. It is taken at
// a fixed place in the orbit, as the partial derivatives are.
func arrival(s Source, change [parameterCount]float64, o Observation, at float64) float64 {
	tau := (o.MJD - s.EpochMJD) * secPerDay
	t := -(change[Phase] + change[Frequency]*tau + change[FrequencyDerivative]*tau*tau/2) / s.FrequencyHz

	years := (o.MJD - s.PositionMJD) / daysPerYear
	dRA := (change[RightAscension] + change[ProperMotionRA]*years) * masToRad
	dDec := (change[Declination] + change[ProperMotionDec]*years) * masToRad
	r := earthSec(o.MJD)
	// A small step along a great circle each way.
	sinA, cosA := math.Sincos(s.RADeg*degToRad + dRA/math.Cos(s.DecDeg*degToRad))
	sinD, cosD := math.Sincos(s.DecDeg*degToRad + dDec)
	n := [3]float64{cosD * cosA, cosD * sinA, sinD}
	// What does not change is left out: its rounding would hide the small delays.
	nominal := direction(s)
	t -= dot(r, [3]float64{n[0] - nominal[0], n[1] - nominal[1], n[2] - nominal[2]})
	along := dot(r, nominal)
	t += (dot(r, r) - along*along) / (2 * auSec) * change[Parallax] * masToRad
	if o.MHz > 0 {
		t += dispersionSec * change[Dispersion] / (o.MHz * o.MHz)
	}

	el := *s.Orbit
	epoch, e, om := el.PeriastronMJD+change[Periastron], el.Eccentricity+change[Eccentricity], (el.PeriastronDeg+change[LongitudeOfPeriastron])*degToRad
	if el.AscendingNodeMJD != 0 {
		epoch = el.AscendingNodeMJD + change[AscendingNode]
		eps1 := el.Eccentricity*math.Sin(el.PeriastronDeg*degToRad) + change[Eps1]
		eps2 := el.Eccentricity*math.Cos(el.PeriastronDeg*degToRad) + change[Eps2]
		e, om = math.Hypot(eps1, eps2), math.Atan2(eps1, eps2)
	}
	pb := el.PeriodDays + change[OrbitalPeriod]
	turns := (at - epoch) / pb
	turns -= 0.5 * (el.Decay + change[OrbitalDecay]) * turns * turns
	omega := om + (el.AdvanceDegPerYr+change[AdvanceOfPeriastron])*degToRad*(at-epoch)/daysPerYear
	mean := turn * (turns - math.Round(turns))
	if el.AscendingNodeMJD != 0 {
		mean -= omega
	}
	ecc := orbit.EccentricAnomaly(math.Remainder(mean, turn), e)
	sinE, cosE := math.Sincos(ecc)
	sinO, cosO := math.Sincos(omega)
	proj := sinO*(cosE-e) + math.Sqrt(1-e*e)*cosO*sinE
	t += (el.SemimajorLs + change[SemimajorAxis]) * proj
	t += (s.EinsteinSec + change[EinsteinDelay]) * sinE
	t -= 2 * (s.CompanionMsun + change[CompanionMass]) * orbit.SunSec * math.Log(1-e*cosE-(s.SinI+change[SinI])*proj)
	return t
}

func direction(s Source) [3]float64 {
	sinA, cosA := math.Sincos(s.RADeg * degToRad)
	sinD, cosD := math.Sincos(s.DecDeg * degToRad)
	return [3]float64{cosD * cosA, cosD * sinA, sinD}
}

// steps are changes that shift the arrival by something between rounding and curvature.
var steps = [parameterCount]float64{Phase: 1, Frequency: 1e-9, FrequencyDerivative: 1e-17, RightAscension: 2000, Declination: 2000, ProperMotionRA: 500,
	ProperMotionDec: 500, Parallax: 1e4, Dispersion: 10, SemimajorAxis: 0.1, AscendingNode: 1e-4, Periastron: 1e-4, OrbitalPeriod: 2e-7, OrbitalDecay: 3e-10,
	Eps1: 1e-6, Eps2: 1e-6, Eccentricity: 1e-4, LongitudeOfPeriastron: 0.01, AdvanceOfPeriastron: 15, CompanionMass: 0.5, SinI: 2e-3, EinsteinDelay: 0.1}

// Every partial derivative, with respect to the parameters as ephemerides give them, against finite
// differences of the arrival time: to 1e-6 of the largest along the orbit and the year.
func TestPartials(t *testing.T) {
	lowNode := circular()
	lowNode.Orbit.Eccentricity = 0.003
	for _, c := range []struct {
		name   string
		source Source
		params []Parameter
	}{{"periastron form", example(), inPeriastronForm}, {"node form", circular(), inNodeForm}, {"node form, some eccentricity", lowNode, inNodeForm}} {
		t.Run(c.name, func(t *testing.T) {
			geo, err := newGeometry(c.source, 57400)
			if err != nil {
				t.Fatal(err)
			}
			c.source.EinsteinSec = geo.einstein // as general relativity has it
			n := len(c.params)
			v := mat.NewDense(n, n, nil)
			for i, p := range c.params {
				w, err := geo.vectorOf(p)
				if err != nil {
					t.Fatal(err)
				}
				// Columns in natural sizes, or the matrix cannot be inverted.
				for j := range n {
					v.Set(i, j, w[j]*natural[j]/steps[p])
				}
			}
			worst, largest := make([]float64, n), make([]float64, n)
			for i := range 400 {
				o := Observation{MJD: 57000 + 2.37*float64(i), MHz: 700}
				at := o.MJD - geo.orb.RoemerSec(o.MJD)/secPerDay
				var a vec
				geo.row(o, &a)
				scaled := mat.NewVecDense(n, nil)
				for j := range n {
					scaled.SetVec(j, a[j]*natural[j])
				}
				var perStep mat.VecDense
				if err := perStep.SolveVec(v.T(), scaled); err != nil {
					t.Log(err) // ill conditioned is fine as long as the comparison below holds
				}
				for k, p := range c.params {
					want := difference(func(f float64) float64 {
						var change [parameterCount]float64
						change[p] = f * steps[p]
						return arrival(c.source, change, o, at)
					})
					worst[k] = math.Max(worst[k], math.Abs(perStep.AtVec(k)-want))
					largest[k] = math.Max(largest[k], math.Abs(want))
				}
			}
			for k, p := range c.params {
				if !(largest[k] > 0) || !(worst[k] <= 1e-6*largest[k]) {
					t.Errorf("%v: differs by %.2g of the largest, %.3g", p, worst[k]/largest[k], largest[k])
				}
			}
		})
	}
}

// No parameter is left out: each is in the list of one form or the other, but for the total of the proper motion, whose place among
// the two that it is made of is differentiated here.
func TestPartialsLeaveNothingOut(t *testing.T) {
	for p := range parameterCount {
		if !slices.Contains(inNodeForm, p) && !slices.Contains(inPeriastronForm, p) && p != ProperMotion {
			t.Errorf("%v is not compared with finite differences", p)
		}
	}
	src := example()
	geo, err := newGeometry(src, 57400)
	if err != nil {
		t.Fatal(err)
	}
	v, err := geo.vectorOf(ProperMotion)
	if err != nil {
		t.Fatal(err)
	}
	pm := src.PMMasPerYr
	for col, total := range map[int]func(f float64) float64{
		colPMRA:  func(f float64) float64 { return math.Hypot(pm[0]+f, pm[1]) },
		colPMDec: func(f float64) float64 { return math.Hypot(pm[0], pm[1]+f) },
	} {
		if want := difference(total); math.Abs(v[col]-want) > 1e-6 {
			t.Errorf("column %d: %g, want %g", col, v[col], want)
		}
	}
}

// difference is the derivative at 0 by central differences of fourth order, with unit argument scale 0.1.
func difference(f func(float64) float64) float64 {
	const h = 0.1
	return (8*(f(h)-f(-h)) - (f(2*h) - f(-2*h))) / (12 * h)
}

// natural is the size of a change in each column that shifts arrivals noticeably over a few years.
var natural = vec{1, 1e-8, 1e-16, 1e3, 1e3, 1e3, 1e3, 1e3, 10, 0.1, 1e-3, 1e-6, 1e-9, 1e-3, 1e-3, 0.1, 1, 0.1, 1e-3}

func TestEarth(t *testing.T) {
	// 1 au is 499.0 s; perihelion in early January at 0.983 au, aphelion in early July at 1.017 (2020: 5 January
	// and 4 July). At the June solstice (2020-06-20 21:44) the Sun stands at right ascension 6 h: the Earth's own
	// direction is 18 h and its declination −23.44°.
	size := func(mjd float64) float64 { r := earthSec(mjd); return math.Sqrt(dot(r, r)) / auSec }
	if p, a := size(58853.3), size(59034.5); math.Abs(p-0.98324) > 1e-3 || math.Abs(a-1.01669) > 1e-3 {
		t.Errorf("perihelion %g au, aphelion %g au", p, a)
	}
	r := earthSec(59020.9)
	dec := math.Atan2(r[2], math.Hypot(r[0], r[1])) / degToRad
	ra := math.Mod(math.Atan2(r[1], r[0])/degToRad+360, 360)
	if math.Abs(dec+23.44) > 0.02 || math.Abs(ra-270) > 0.4 { // 20 years of precession are 0.28°
		t.Errorf("at the solstice: %g %g", ra, dec)
	}
}
