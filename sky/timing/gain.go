package timing

import "math"

// GainPerMinute returns what each candidate adds to the knowledge of a parameter, q, such that one of
// them alone shrinks ln σ by ½ ln(1+q), and a slot of several by about ½ ln(1+Σq). Candidates are
// minutes: SigmaUs is the error of the arrival time from one minute.
//
//	q = (aᵀCc)² / [cᵀCc (σ² + aᵀCa) − (aᵀCc)²]
//
// by one rank-one update each, without factoring again. c is the parameter, a the candidate's row, C the
// covariance.
//
// Given:    dst, used for the result when it is long enough; it may be nil
// Returns:  one q for each candidate, 0 or more, in their order; a candidate with SigmaUs not above 0 or
// infinite adds 0. The error is that of SigmaOf; a parameter that is held cannot gain and gives 0
// Neglects: that minutes of a slot help one another: the mass at conjunction gains more from a whole slot
// than Σq says where sin i is free too. SlotGain is exact
// Source:   Woodbury's identity for one row
// Checked:  TestGainIsWhatRefittingGives, BenchmarkGain
func (m *Model) GainPerMinute(p Parameter, candidates []Observation, dst []float64) ([]float64, error) {
	c, err := m.geo.vectorOf(p)
	if err != nil {
		return nil, err
	}
	before, ok := m.fit.variance(&c)
	if !ok {
		return nil, Undetermined{[]Parameter{p}}
	}
	if cap(dst) < len(candidates) {
		dst = make([]float64, len(candidates))
	}
	dst = dst[:len(candidates)]
	var half vec // L⁻¹ of the parameter: aᵀCc is then a product of two halves
	m.fit.gather(&c, &half)
	m.fit.forward(&half)
	var a, y vec
	for i, o := range candidates {
		dst[i] = 0
		if !(o.SigmaUs > 0) || math.IsInf(o.SigmaUs, 0) || !(before > 0) {
			continue
		}
		m.geo.row(o, &a)
		m.fit.gather(&a, &y)
		m.fit.forward(&y)
		shared, own := 0.0, 0.0
		for k := range m.fit.n {
			shared += y[k] * half[k]
			own += y[k] * y[k]
		}
		noise := o.SigmaUs * o.SigmaUs * 1e-12
		// Cauchy and Schwarz keep own·before above shared²: the noise alone is left at least.
		left := before*noise + math.Max(0, before*own-shared*shared)
		if q := shared * shared / left; q > 0 {
			dst[i] = q
		}
	}
	return dst, nil
}

// SlotGain returns by how much ln σ of a parameter shrinks when all the candidates are observed: 0 or more,
// exact.
//
//	ln(σ_before/σ_after)
//
// Returns: +Inf when the parameter was undetermined and is not any more
// Checked: TestShapiroInformation
func (m *Model) SlotGain(p Parameter, candidates []Observation) (float64, error) {
	next, err := m.With(candidates...)
	if err != nil {
		return 0, err
	}
	after, err := next.SigmaOf(p)
	if err != nil {
		return 0, err
	}
	before, err := m.SigmaOf(p)
	switch {
	case err != nil:
		return math.Inf(1), nil
	case !(before > 0) || !(after > 0):
		return 0, nil
	}
	return math.Max(0, math.Log(before/after)), nil
}
