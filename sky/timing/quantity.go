package timing

import (
	"fmt"
	"math"
)

// vectorOf returns a parameter of the Source, at the Source's own epochs, as a combination of columns:
// the change of the parameter is the sum of vector times change of column.
//
//	F(T) = F + Ḟ (T−ref);  λ(T) = λ + ν (T−ref) + ν̇ (T−ref)²/2;  T_node = −λ(T)/ν;  Pb = 1/ν;  Ṗb = −Pb² ν̇
func (g *geometry) vectorOf(p Parameter) (v vec, err error) {
	if err := g.applies(p); err != nil {
		return v, err
	}
	tau := (g.src.EpochMJD - g.ref) * secPerDay
	moved := (g.src.PositionMJD - g.ref) / daysPerYear
	switch p {
	case Phase:
		v[colPhase], v[colFrequency], v[colDerivative] = 1, tau, tau*tau/2
	case Frequency:
		v[colFrequency], v[colDerivative] = 1, tau
	case FrequencyDerivative:
		v[colDerivative] = 1
	case RightAscension:
		v[colRA], v[colPMRA] = 1, moved
	case Declination:
		v[colDec], v[colPMDec] = 1, moved
	case ProperMotionRA:
		v[colPMRA] = 1
	case ProperMotionDec:
		v[colPMDec] = 1
	case ProperMotion:
		total := math.Hypot(g.src.PMMasPerYr[0], g.src.PMMasPerYr[1])
		v[colPMRA], v[colPMDec] = g.src.PMMasPerYr[0]/total, g.src.PMMasPerYr[1]/total
	case Parallax:
		v[colParallax] = 1
	case Dispersion:
		v[colDM] = 1
	case SemimajorAxis:
		v[colX] = 1
	case AdvanceOfPeriastron:
		v[colAdvance] = 1
	case CompanionMass:
		v[colMass] = 1
	case SinI:
		v[colSinI] = 1
	case EinsteinDelay:
		v[colEinstein] = 1
	default:
		v = g.orbitVector(p)
	}
	return v, nil
}

func (g *geometry) orbitVector(p Parameter) vec {
	w := g.orbitAt(p)
	switch p {
	case AscendingNode:
		w.longitude(-1 / w.sidereal)
	case Periastron:
		w.longitude(-1 / w.anomalistic)
		w.periastronTurns(1 / w.anomalistic)
	case OrbitalPeriod:
		w.period()
	case OrbitalDecay:
		w.v[colOrbitDrift] = -1 / (w.rate * w.rate)
	case Eps1:
		w.eps(1, 0)
		w.moved(w.e * w.cosO * turn)
	case Eps2:
		w.eps(0, 1)
		w.moved(-w.e * w.sinO * turn)
	case Eccentricity:
		w.eps(w.sinO, w.cosO)
	case LongitudeOfPeriastron:
		w.periastronTurns(360)
		w.moved(360)
	}
	return w.v
}

// orbitWriter writes changes of the orbit at an instant as combinations of columns.
type orbitWriter struct {
	v                           vec
	days                        float64 // from the reference to the instant
	rate, sidereal, anomalistic float64 // turns a day: of the kind the elements count, node to node, periastron to periastron
	countsPeriastron            bool
	e, sinO, cosO               float64 // at the instant
	sinA, cosA                  float64 // of the advance from the reference to the instant
	advance                     float64 // turns a day
}

// orbitAt starts a combination at the epoch of the elements; for an epoch of the other kind, at the one
// just before it.
func (g *geometry) orbitAt(p Parameter) orbitWriter {
	el := g.src.Orbit
	advance := el.AdvanceDegPerYr * perDegYr
	w := orbitWriter{rate: 1 / g.orb.PeriodDays, e: g.orb.Eccentricity, countsPeriastron: el.PeriastronMJD != 0, advance: advance}
	w.sidereal, w.anomalistic = w.rate, w.rate-advance
	if w.countsPeriastron {
		w.sidereal, w.anomalistic = w.rate+advance, w.rate
	}
	at := g.orb.EpochMJD()
	switch {
	case p == AscendingNode && w.countsPeriastron:
		at -= g.orb.Phase(at) / w.sidereal
	case p == Periastron && !w.countsPeriastron:
		at -= g.orb.PhasePeriastron(at) / w.anomalistic
	}
	w.days = at - g.ref
	longitude, anomaly := g.orb.Means(at)
	w.sinO, w.cosO = math.Sincos(turn * (longitude - anomaly))
	w.sinA, w.cosA = math.Sincos(turn * advance * w.days)
	return w
}

// longitude adds f times the mean longitude, in turns.
func (w *orbitWriter) longitude(f float64) {
	w.v[colLongitude] += f
	w.v[colOrbitFreq] += f * w.days
	w.v[colOrbitDrift] += f * w.days * w.days / 2
}

// eps adds f times e sin ω and g times e cos ω: those at the reference, turned by the advance between.
func (w *orbitWriter) eps(f, g float64) {
	w.v[colEps1] += f*w.cosA - g*w.sinA
	w.v[colEps2] += f*w.sinA + g*w.cosA
	w.v[colAdvance] += (f*w.cosO - g*w.sinO) * w.e * turn * w.days * perDegYr
}

// periastronTurns adds f times the longitude of periastron, in turns.
func (w *orbitWriter) periastronTurns(f float64) {
	if f == 0 {
		return // also in a circular orbit without advance, which has no periastron
	}
	f /= turn * w.e
	w.eps(f*w.cosO, -f*w.sinO)
}

// moved adds f times the turns by which periastron advances while the epoch itself moves: its longitude is
// quoted at the epoch, wherever that comes to lie.
func (w *orbitWriter) moved(f float64) {
	if w.countsPeriastron {
		w.longitude(-f * w.advance / w.anomalistic)
		w.periastronTurns(f * w.advance / w.anomalistic)
		return
	}
	w.longitude(-f * w.advance / w.sidereal)
}

// period adds the period of the kind the elements count.
func (w *orbitWriter) period() {
	f := -1 / (w.rate * w.rate)
	w.v[colOrbitFreq] += f
	w.v[colOrbitDrift] += f * w.days
	if w.countsPeriastron {
		w.v[colAdvance] -= f * perDegYr
	}
}

// perDegYr turns an advance in deg/yr into turns a day.
const perDegYr = 1 / (360 * daysPerYear)

// applies says why a parameter has no meaning for the source.
func (g *geometry) applies(p Parameter) error {
	switch {
	case p < 0 || p >= parameterCount:
		return fmt.Errorf("parameter: found number %d; accepted 0 to %d", int(p), int(parameterCount)-1)
	case p >= SemimajorAxis && p != ProperMotion && !g.binary:
		return fmt.Errorf("%v: the source has no orbit", p)
	case (p == Eccentricity || p == LongitudeOfPeriastron || p == Periastron) && g.orb.Eccentricity == 0:
		return fmt.Errorf("%v: has no meaning in a circular orbit; accepted: eps1, eps2, ascending node", p)
	case p == EinsteinDelay && g.orb.Eccentricity == 0:
		return fmt.Errorf("%v: a circular orbit has none", p)
	case p == SinI && g.shapiroR == 0:
		return fmt.Errorf("%v: needs a companion mass", p)
	case p == ProperMotion && g.src.PMMasPerYr == [2]float64{}:
		return fmt.Errorf("%v: not known; accepted: proper motion in right ascension, in declination", p)
	}
	return nil
}

// columnsOf lists the columns that a parameter sets free.
func columnsOf(p Parameter) []int {
	switch p {
	case ProperMotion:
		return []int{colPMRA, colPMDec}
	case Periastron:
		return []int{colLongitude}
	case Eccentricity, LongitudeOfPeriastron:
		return []int{colEps1, colEps2}
	}
	return []int{int(p)} // the first columns are in the order of the parameters
}

// parameterOf is the way back: the parameter to name when a column is undetermined.
func parameterOf(column int) Parameter {
	if column >= colOldPhase {
		return Parameter(column - colOldPhase)
	}
	return Parameter(column)
}

// Value returns the parameter's value in the ephemeris, for goals that are a share of it. It is 0 where
// the ephemeris does not say. Of the Einstein delay it is that of general relativity where only the masses
// are known.
func (m *Model) Value(p Parameter) float64 {
	s, o := &m.geo.src, &m.geo.orb
	switch p {
	case Frequency:
		return s.FrequencyHz
	case FrequencyDerivative:
		return s.DerivativeHzPerS
	case ProperMotionRA:
		return s.PMMasPerYr[0]
	case ProperMotionDec:
		return s.PMMasPerYr[1]
	case ProperMotion:
		return math.Hypot(s.PMMasPerYr[0], s.PMMasPerYr[1])
	case Parallax:
		return s.ParallaxMas
	case Dispersion:
		return s.DMPcPerCm3
	case CompanionMass:
		return s.CompanionMsun
	case SinI:
		return s.SinI
	case EinsteinDelay:
		return m.geo.einstein
	}
	if !m.geo.binary {
		return 0
	}
	switch p {
	case SemimajorAxis:
		return o.SemimajorLs
	case OrbitalPeriod:
		return o.PeriodDays
	case OrbitalDecay:
		return o.Decay
	case Eps1:
		return o.Eccentricity * math.Sin(o.PeriastronDeg*degToRad)
	case Eps2:
		return o.Eccentricity * math.Cos(o.PeriastronDeg*degToRad)
	case AdvanceOfPeriastron:
		return o.AdvanceDegPerYr
	case Eccentricity:
		return o.Eccentricity
	case LongitudeOfPeriastron:
		return o.PeriastronDeg
	}
	return 0
}
