package timing

import (
	"fmt"
	"math"
	"slices"
)

// A Model is the information on a source: what its ephemeris and its observations say together. It is
// never changed once made, and may be shared between goroutines.
type Model struct {
	geo  geometry
	root root // of the information matrix
	free [columns]bool
	fit  fit
}

// New works out the information on a source. Every fault of the source, the priors and the observations
// is reported. No observations, or no priors, are no fault: Model.Undetermined then names what nobody
// knows.
//
// After a glitch (Source.GlitchMJD) phase, frequency and derivative are always free. If the ephemeris is
// from before the glitch, its errors of those three are void after it; what a glitch can do at most then
// stands for them: any phase, a step of 1e-6 of the frequency and 1e-2 of the derivative. The count of the
// turns begins again with the first arrival after it, and until then the phase is undetermined.
func New(src Source, priors []Prior, observations []Observation) (*Model, error) {
	if err := src.check(); err != nil {
		return nil, err
	}
	geo, err := newGeometry(src, reference(src, observations))
	if err != nil {
		return nil, err
	}
	m := &Model{geo: geo}
	if err := m.addPriors(priors); err != nil {
		return nil, err
	}
	if src.GlitchMJD > 0 {
		m.addGlitch()
	}
	if err := m.addObservations(observations); err != nil {
		return nil, err
	}
	m.fit.factor(&m.root, &m.free)
	return m, nil
}

// With returns the model as it would be with more observations. The given model stays as it was.
func (m *Model) With(observations ...Observation) (*Model, error) {
	next := *m
	if err := next.addObservations(observations); err != nil {
		return nil, err
	}
	next.fit.factor(&next.root, &next.free)
	return &next, nil
}

// reference is the middle of the data, where the errors of phase and frequency part best.
func reference(src Source, observations []Observation) float64 {
	if len(observations) == 0 {
		return src.EpochMJD
	}
	first, last := math.Inf(1), math.Inf(-1)
	for _, o := range observations {
		if o.MJD < src.GlitchMJD && last > src.GlitchMJD {
			continue
		}
		first, last = math.Min(first, o.MJD), math.Max(last, o.MJD)
	}
	return (first + last) / 2
}

func (m *Model) addPriors(priors []Prior) error {
	for _, p := range priors {
		if !(p.Sigma > 1e-100) { // below, its square is no number any more
			return fmt.Errorf("error of %v: found %g; accepted above 0, or infinite for a free parameter", p.Parameter, p.Sigma)
		}
		if err := m.geo.applies(p.Parameter); err != nil {
			return err
		}
		for _, c := range columnsOf(p.Parameter) {
			m.free[c] = true
		}
	}
	var b batch
	for _, p := range priors {
		if math.IsInf(p.Sigma, 1) {
			continue
		}
		v, err := m.geo.vectorOf(p.Parameter)
		if err != nil {
			return err
		}
		if p.Parameter <= FrequencyDerivative && m.geo.src.GlitchMJD > m.geo.src.EpochMJD {
			v = beforeGlitch(v)
		}
		m.add(&b, &v, p.Sigma)
	}
	m.root.take(&b, &m.free)
	return nil
}

// beforeGlitch moves the rotation's part of a vector to the columns that hold before the glitch.
func beforeGlitch(v vec) vec {
	for i := range 3 {
		v[colOldPhase+i], v[colPhase+i] = v[colPhase+i], 0
	}
	return v
}

// What a glitch can do: published steps of the frequency reach 1e-6 of it; those of its derivative 1e-2
// by common practice.
const (
	glitchFrequency  = 1e-6
	glitchDerivative = 1e-2
)

func (m *Model) addGlitch() {
	for i := range 3 {
		m.free[colPhase+i], m.free[colOldPhase+i] = true, true
	}
	src := m.geo.src
	// Counted at the glitch itself, where the step happens.
	tau := (src.GlitchMJD - m.geo.ref) * secPerDay
	steps := []struct {
		v     vec
		sigma float64
	}{
		{vec{colFrequency: 1, colDerivative: tau}, glitchFrequency * src.FrequencyHz},
		{vec{colDerivative: 1}, glitchDerivative * math.Abs(src.DerivativeHzPerS)},
	}
	var b batch
	for _, s := range steps {
		if !(s.sigma > 0) {
			continue
		}
		if src.GlitchMJD <= src.EpochMJD { // the ephemeris is from after it: the unknown side is before
			s.v = beforeGlitch(s.v)
		}
		m.add(&b, &s.v, s.sigma)
	}
	m.root.take(&b, &m.free)
}

func (m *Model) addObservations(observations []Observation) error {
	var a vec
	var b batch
	for i, o := range observations {
		if !(o.SigmaUs >= 1e-9) || !(math.Abs(o.MJD) <= farMJD) || !(o.MHz >= 0) {
			return fmt.Errorf("observation %d: found MJD %g, error %g µs, %g MHz; accepted a date within ±%g, an error above 1e-9 µs, a frequency of 0 or more",
				i+1, o.MJD, o.SigmaUs, o.MHz, farMJD)
		}
		m.geo.row(o, &a)
		m.add(&b, &a, o.SigmaUs*1e-6)
	}
	m.root.take(&b, &m.free)
	return nil
}

// add puts a row of error sigma into the batch, and the batch into the root when it is full.
func (m *Model) add(b *batch, v *vec, sigma float64) {
	if math.IsInf(sigma, 1) {
		return
	}
	weight := 1 / sigma
	for c := range columns {
		b.col[c][b.n] = v[c] * weight
	}
	if b.n++; b.n == len(b.col[0]) {
		m.root.take(b, &m.free)
	}
}

// Undetermined returns the parameters on which neither ephemeris nor observations say anything, in order;
// nil when there are none. They are left out; whatever does not depend on them stays good.
func (m *Model) Undetermined() []Parameter {
	var out []Parameter
	for _, c := range m.fit.dropped[:m.fit.nDropped] {
		if p := parameterOf(c); c < colOldPhase && !slices.Contains(out, p) {
			out = append(out, p)
		}
	}
	slices.Sort(out)
	return out
}

// SigmaOf returns the 1-σ error of a parameter. A parameter that is held has the error 0. The error is
// an Undetermined, or says why the parameter has no meaning here.
func (m *Model) SigmaOf(p Parameter) (float64, error) {
	v, err := m.geo.vectorOf(p)
	if err != nil {
		return 0, err
	}
	variance, ok := m.fit.variance(&v)
	if !ok {
		return 0, Undetermined{[]Parameter{p}}
	}
	return math.Sqrt(variance), nil
}
