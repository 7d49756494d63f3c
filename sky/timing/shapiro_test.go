package timing

import (
	"math"
	"strings"
	"testing"

	"example.org/tallystick/sky/orbit"
	"example.org/tallystick/sky/outside"
)

// shapiroSource is a circular binary of which only the orbit's own parameters and the Shapiro delay are free.
func shapiroSource(m2, sinI float64) Source {
	return Source{FrequencyHz: 300, EpochMJD: start, CompanionMsun: m2, SinI: sinI,
		Orbit: &orbit.Elements{PeriodDays: 5, AscendingNodeMJD: start, SemimajorLs: 4}}
}

var shapiroFree = []Parameter{Phase, SemimajorAxis, AscendingNode, Eps1, Eps2, CompanionMass, SinI}

// atPhases makes observations at orbital phases, as they arrive.
func atPhases(s Source, sigmaUs float64, phases ...float64) []Observation {
	o, err := orbit.New(*s.Orbit)
	if err != nil {
		panic(err)
	}
	var out []Observation
	for _, p := range phases {
		at := start + p*s.Orbit.PeriodDays
		out = append(out, Observation{MJD: at + o.RoemerSec(at)/secPerDay, SigmaUs: sigmaUs})
	}
	return out
}

// even returns n mid-points between two phases.
func even(n int, from, to float64) []float64 {
	var out []float64
	for i := range n {
		out = append(out, from+(to-from)*(float64(i)+0.5)/float64(n))
	}
	return out
}

func coverage(t *testing.T, text string) []float64 {
	switch {
	case strings.Contains(text, "0.30..1.20"):
		return even(100, 0.30, 1.20)
	case strings.Contains(text, "20 in 0.13..0.17"):
		return append(append(even(60, 0, 1), even(20, 0.23, 0.27)...), even(20, 0.13, 0.17)...)
	case strings.Contains(text, "0.23..0.27"):
		return append(even(60, 0, 1), even(40, 0.23, 0.27)...)
	case strings.Contains(text, "0.73..0.77"):
		return append(even(60, 0, 1), even(40, 0.73, 0.77)...)
	case strings.HasPrefix(text, "100 TOAs uniform over the orbit"):
		return even(100, 0, 1)
	}
	t.Fatalf("coverage %q", text)
	return nil
}

func TestShapiroInformation(t *testing.T) {
	for _, r := range outside.Rows(t, "shapiro.csv", "SHA-05*") {
		s := shapiroSource(r.Num("M2"), r.Num("SINI"))
		m := mustModel(t, s, allFree(shapiroFree), atPhases(s, r.Num("sigma_toa_us"), coverage(t, r.Inputs["coverage"])...))
		r.Check(sigma(t, m, CompanionMass))
	}
	for _, r := range outside.Rows(t, "shapiro.csv", "SHA-08*") {
		s := shapiroSource(r.Num("M2"), r.Num("SINI"))
		m := mustModel(t, s, allFree(shapiroFree), atPhases(s, 0.3, even(100, 0, 1)...))
		p := CompanionMass
		if r.ID == "SHA-083" {
			p = SinI
		}
		from, to, _ := strings.Cut(strings.TrimPrefix(r.Inputs["slot"], "10 TOAs, mid-points of "), "..")
		r.Inputs["slot"] = from + " " + to
		edges := r.Nums("slot")
		got, err := m.SlotGain(p, atPhases(s, 0.3, even(10, edges[0], edges[1])...))
		if err != nil {
			t.Fatal(err)
		}
		r.Check(got)
	}
}

// faint makes the candidates so faint that what one adds is exactly proportional to its information.
func relativeGains(t *testing.T, m *Model, s Source, p Parameter, phases []float64) []float64 {
	t.Helper()
	q, err := m.GainPerMinute(p, atPhases(s, 1e6, phases...), nil)
	if err != nil {
		t.Fatal(err)
	}
	return q
}

func TestInformationByPhase(t *testing.T) {
	for _, r := range outside.Rows(t, "shapiro.csv", "SHA-090", "SHA-091") {
		s := shapiroSource(0.25, r.Num("SINI"))
		m := mustModel(t, s, allFree(shapiroFree), atPhases(s, 0.3, even(2000, 0, 1)...))
		p := CompanionMass
		if r.ID == "SHA-091" {
			p = SinI
		}
		q := relativeGains(t, m, s, p, r.Nums("phases"))
		for i := range q {
			q[len(q)-1-i] /= q[0] // the first, by which all are measured, comes last
		}
		r.Check(q...)
	}
	for _, r := range outside.Rows(t, "shapiro.csv", "SHA-096", "SHA-098") {
		s := shapiroSource(0.25, r.Num("SINI"))
		m := mustModel(t, s, allFree(shapiroFree), atPhases(s, 0.3, even(2000, 0, 1)...))
		phases := even(10000, 0, 1)
		near, all := 0.0, 0.0
		for i, q := range relativeGains(t, m, s, CompanionMass, phases) {
			all += q
			if math.Abs(phases[i]-0.25) < 0.02 {
				near += q
			}
		}
		r.Check(near / all)
	}
}

func TestConjunctionWeight(t *testing.T) {
	for _, r := range outside.Rows(t, "shapiro.csv", "SHA-092", "SHA-094") {
		var weights []float64
		for _, phase := range r.Nums("phases") {
			weights = append(weights, ConjunctionWeight(phase, r.Num("SINI")))
		}
		r.Check(weights...)
	}
	for _, r := range outside.Rows(t, "shapiro.csv", "SHA-070") {
		r.Check(-2 * r.Num("M2") * orbit.SunSec * 1e6 * leftOver(0.25, Stig(r.Num("SINI"))))
	}
	for _, r := range outside.Rows(t, "shapiro.csv", "SHA-071") {
		best, at := -1.0, 0.0
		for i := range 2000 {
			phase := 0.05 + 0.17*float64(i)/2000
			if g := leftOver(phase, Stig(r.Num("SINI"))); g > best {
				best, at = g, phase
			}
		}
		r.Check(at)
	}
	if ConjunctionWeight(0.1, 0) != ConjunctionWeight(0.1, 0.866025403784) {
		t.Error("an unknown inclination is not taken as 60°")
	}
	// Never NaN, never above 1, whatever the inclination; both ways of summing meet.
	for _, s := range []float64{1e-9, 0.01, 0.3, 0.55, 0.999, 1, 2, math.NaN()} {
		for i := range 100 {
			if w := ConjunctionWeight(float64(i)/100, s); !(w >= 0 && w <= 1+1e-9) {
				t.Errorf("phase %g, sin i %g: %g", float64(i)/100, s, w)
			}
		}
	}
	for i := range 50 {
		p := float64(i) / 50
		if a, b := leftOver(p, 0.2999999999), leftOver(p, 0.3); math.Abs(a-b) > 1e-9 {
			t.Errorf("phase %g: series %g, closed form %g", p, a, b)
		}
	}
}

func TestOrthometric(t *testing.T) {
	for _, r := range outside.Rows(t, "shapiro.csv", "SHA-030") {
		r.Check(Stig(r.Num("SINI")))
	}
	for _, r := range outside.Rows(t, "shapiro.csv", "SHA-031") {
		r.Check(1e6 * H3Sec(r.Num("M2"), r.Num("SINI")))
	}
	for _, r := range outside.Rows(t, "shapiro.csv", "SHA-032") {
		r.Check(SinIFromStig(r.Num("STIG")))
	}
	for _, r := range outside.Rows(t, "shapiro.csv", "SHA-033") {
		r.Check(CompanionFromH3(r.Num("H3_s"), r.Num("STIG")))
	}
	for _, r := range outside.Rows(t, "shapiro.csv", "SHA-034", "SHA-035") {
		r.Check(1e6 * HarmonicSec(int(r.Num("k")), r.Num("M2"), r.Num("SINI")))
	}
}
