package timing

import (
	"errors"
	"math"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/gonum/mat"
	"pgregory.net/rapid"

	"example.org/tallystick/sky/orbit"
)

func allFree(params []Parameter) []Prior {
	var out []Prior
	for _, p := range params {
		out = append(out, Prior{p, math.Inf(1)})
	}
	return out
}

func mustModel(t testing.TB, s Source, priors []Prior, obs []Observation) *Model {
	t.Helper()
	m, err := New(s, priors, obs)
	if err != nil {
		t.Fatal(err)
	}
	return m
}

func sigma(t testing.TB, m *Model, p Parameter) float64 {
	t.Helper()
	s, err := m.SigmaOf(p)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// weekly is a logbook: pairs of receivers, with small irregular steps.
func weekly(from, years float64) []Observation {
	var out []Observation
	for d, i := 0.0, 0; d < years*daysPerYear; d, i = d+7, i+1 {
		jitter := 0.9 * math.Sin(float64(i)*12.9898)
		out = append(out, Observation{from + d + jitter, 0.5, 1400}, Observation{from + d + jitter + 0.3, 0.8, 800})
	}
	return out
}

// Eighteen parameters over thirty years: the errors are those of a least-squares fit by orthogonal
// transformations, which never forms the information matrix.
func TestCovarianceAgainstQR(t *testing.T) {
	src, obs := example(), weekly(50000, 30)
	m := mustModel(t, src, allFree(inPeriastronForm), obs)
	if u := m.Undetermined(); u != nil {
		t.Fatalf("undetermined: %v", u)
	}
	n := int(colOldPhase)
	a := mat.NewDense(len(obs), n, nil)
	var row vec
	for i, o := range obs {
		m.geo.row(o, &row)
		for j := range n {
			a.Set(i, j, row[j]/(o.SigmaUs*1e-6))
		}
	}
	scale := make([]float64, n)
	for j := range n {
		scale[j] = 1 / mat.Norm(a.ColView(j), 2)
		for i := range obs {
			a.Set(i, j, a.At(i, j)*scale[j])
		}
	}
	var qr mat.QR
	qr.Factorize(a)
	var r mat.Dense
	qr.RTo(&r)
	top := r.Slice(0, n, 0, n)
	for _, p := range append(slices.Clone(inPeriastronForm), AscendingNode, Eps1, Eps2, ProperMotion) {
		v, err := m.geo.vectorOf(p)
		if err != nil {
			t.Fatal(err)
		}
		c := mat.NewVecDense(n, nil)
		for j := range n {
			c.SetVec(j, v[j]*scale[j])
		}
		var y mat.VecDense
		if err := y.SolveVec(top.T(), c); err != nil {
			t.Log(err)
		}
		want := mat.Norm(&y, 2)
		if got := sigma(t, m, p); math.Abs(got/want-1) > 1e-5 {
			t.Errorf("%v: %g, by orthogonal transformations %g", p, got, want)
		}
	}
}

// The variances of the coefficients of a straight line and a parabola through n evenly spaced points, as in
// any textbook of regression: 12 s²/(d² n(n²−1)) and 180 s²/(d⁴ n(n²−1)(n²−4)).
func TestTextbookVariances(t *testing.T) {
	const n, d = 400, 5.0
	src := Source{FrequencyHz: 10, EpochMJD: 56000 + d*(n-1)/2}
	var obs []Observation
	for i := range n {
		obs = append(obs, Observation{MJD: 56000 + d*float64(i), SigmaUs: 100})
	}
	s, step := 100e-6*10, d*secPerDay // turns, seconds
	n2 := float64(n * n)
	m := mustModel(t, src, allFree([]Parameter{Phase, Frequency, FrequencyDerivative}), obs)
	if got, want := sigma(t, m, Frequency), s/step*math.Sqrt(12/(n*(n2-1))); math.Abs(got/want-1) > 1e-8 {
		t.Errorf("frequency %g, want %g", got, want)
	}
	// The derivative is twice the coefficient of the square.
	if got, want := sigma(t, m, FrequencyDerivative), 2*s/(step*step)*math.Sqrt(180/(n*(n2-1)*(n2-4))); math.Abs(got/want-1) > 1e-8 {
		t.Errorf("derivative %g, want %g", got, want)
	}
	// At the end of the data the frequency is twice as uncertain as in the middle of a straight line, and four
	// times with the derivative free, for many points.
	src.EpochMJD = obs[n-1].MJD
	m = mustModel(t, src, allFree([]Parameter{Phase, Frequency, FrequencyDerivative}), obs)
	if got, want := sigma(t, m, Frequency), s/step*math.Sqrt(12/(n*(n2-1)))*4; math.Abs(got/want-1) > 0.01 {
		t.Errorf("frequency at the end %g, want %g", got, want)
	}
}

// An orbit that general relativity turns, as that of two neutron stars: twice the span at a steady rate of observations
// tells the Einstein delay 2^(3/2) times better. The power is that of Damour & Taylor 1992, Phys. Rev. D 45, 1840, their
// table of the errors' dependence on the span, from memory. It follows from the slopes: with ω = ω₀ + ω̇t the parts of
// the delay along sin E and cos E change as −x√(1−e²) ω̇t sin ω₀ and x ω̇t cos ω₀, whose ratio gives ω₀, then size and γ; the
// error of a slope falls as T^(−3/2), for as long as periastron has turned by less than half a radian.
func TestEinsteinDelayGrowsWithSpan(t *testing.T) {
	at := func(years float64) float64 {
		return sigma(t, doubleNeutronStar(t, years, 54), EinsteinDelay)
	}
	for _, years := range []float64{0.25, 0.5, 1} {
		if ratio, want := at(years)/at(2*years), math.Pow(2, 1.5); math.Abs(ratio/want-1) > 0.03 {
			t.Errorf("from %g to twice as many years: %g times better, want %g", years, ratio, want)
		}
	}
}

// doubleNeutronStar is J0737-3039A, fitted as it was published after 2.7 years: Kramer et al. 2006, Science 314, 97.
func doubleNeutronStar(t *testing.T, years, sigmaUs float64) *Model {
	src := Source{
		FrequencyHz: 44.054069392744, DerivativeHzPerS: -3.4156e-15, EpochMJD: 53156, PositionMJD: 53156, RADeg: 114.4635, DecDeg: -30.6613,
		Orbit: &orbit.Elements{PeriodDays: 0.10225156248, PeriastronMJD: 53155.907428, SemimajorLs: 1.415032, Eccentricity: 0.0877775,
			PeriastronDeg: 87.0331, AdvanceDegPerYr: 16.89947, Decay: -1.252e-12},
		CompanionMsun: 1.2489, SinI: 0.99974,
	}
	fitted := slices.DeleteFunc(slices.Clone(inPeriastronForm), func(p Parameter) bool { return p == Dispersion })
	var obs []Observation
	for i := range int(2000 * years) {
		day := (float64(i) + 0.5) / 2000 * daysPerYear
		obs = append(obs, Observation{53156 + day - years*daysPerYear/2 + 0.37*math.Sin(float64(i)*12.9898), sigmaUs, 0})
	}
	return mustModel(t, src, allFree(fitted), obs)
}

// The published errors of J0737-3039A's parameters stand to one another as the model says, to a factor 1.5: the span from
// MJD 52760 to 53736, as published; the errors are multiples of one unknown number, how well an arrival is truly known.
func TestEinsteinDelayAgainstPublishedErrors(t *testing.T) {
	m := doubleNeutronStar(t, 2.67, 54)
	if got := m.Value(EinsteinDelay); math.Abs(got-3.856e-4) > 2.6e-6 {
		t.Errorf("general relativity has γ = %g s, measured is 3.856(26)e-4", got)
	}
	const published = 2.6e-6 // s
	for p, other := range map[Parameter]float64{AdvanceOfPeriastron: 6.8e-4, OrbitalDecay: 1.7e-14, OrbitalPeriod: 5e-11, CompanionMass: 0.33 / 4.9255} {
		if got, want := sigma(t, m, EinsteinDelay)/sigma(t, m, p), published/other; got > 1.5*want || got < want/1.5 {
			t.Errorf("error of γ over that of %v: %.3g, published %.3g", p, got, want)
		}
	}
}

// While periastron stands still γ sin E is a part of the orbit's size and orientation: the model names what it cannot tell
// apart, and tells everything else. A little turning makes it known badly, never NaN. No companion's mass is given here:
// where the Shapiro delay peaks would tell, badly, how the orbit lies.
func TestEinsteinDelayHidesBehindTheOrbit(t *testing.T) {
	src := example()
	src.Orbit.AdvanceDegPerYr, src.CompanionMsun, src.SinI, src.EinsteinSec = 0, 0, 0, 1e-3
	free := slices.DeleteFunc(allFree(inPeriastronForm), func(p Prior) bool { return p.Parameter == CompanionMass || p.Parameter == SinI })
	obs := weekly(56000, 3)
	still := mustModel(t, src, free, obs)
	if got := still.Undetermined(); !slices.Equal(got, []Parameter{EinsteinDelay}) {
		t.Fatalf("undetermined %v, want the Einstein delay", got)
	}
	for _, p := range []Parameter{EinsteinDelay, SemimajorAxis, LongitudeOfPeriastron} {
		if s, err := still.SigmaOf(p); !errors.As(err, new(Undetermined)) {
			t.Errorf("%v: got %g, %v; it cannot be told apart", p, s, err)
		}
	}
	if _, err := still.SigmaOf(EinsteinDelay); err == nil || !strings.Contains(err.Error(), "cannot be told from semimajor axis and longitude of periastron") {
		t.Errorf("got %v", err)
	}
	for _, p := range []Parameter{Frequency, Eccentricity, OrbitalPeriod} {
		if s := sigma(t, still, p); !(s > 0) || math.IsInf(s, 0) {
			t.Errorf("%v: %g", p, s)
		}
	}
	if s := still.PhaseErrorTurns(57200, 1400); !(s > 0) || math.IsInf(s, 0) {
		t.Errorf("phase: %g turns", s)
	}
	last := math.Inf(1)
	for _, degPerYr := range []float64{1e-6, 1e-4, 1e-2, 1} {
		src.Orbit.AdvanceDegPerYr = degPerYr
		s, err := mustModel(t, src, free, obs).SigmaOf(EinsteinDelay)
		if err == nil && !(s < last/50) || math.IsNaN(s) {
			t.Errorf("advancing by %g deg/yr: %g s, %v, before %g s", degPerYr, s, err, last)
		}
		if err == nil {
			last = s
		}
	}
	if !(last < 1e-5) {
		t.Errorf("advancing by a degree a year it is known to %g s only", last)
	}
	// By what nature allows alone.
	loose := mustModel(t, example(), LoosePriors(example(), nil), nil)
	if s := sigma(t, loose, EinsteinDelay); s < 3*loose.Value(EinsteinDelay) || s > 1 {
		t.Errorf("without any observation: %g s, of %g", s, loose.Value(EinsteinDelay))
	}
}

// The error of the decay falls as the span to the power 5/2 at a steady rate of observations.
func TestDecayGrowsWithSpan(t *testing.T) {
	at := func(years float64) float64 {
		return sigma(t, mustModel(t, circular(), allFree(inNodeForm), weekly(57000-years*daysPerYear/2, years)), OrbitalDecay)
	}
	if ratio, want := at(8)/at(16), math.Pow(2, 2.5); math.Abs(ratio/want-1) > 0.03 {
		t.Errorf("twice the span is %g times better, want %g", ratio, want)
	}
}

// With less than a year of data a position hides behind the frequency and its derivative. Fitting n sines
// over a whole year gives σ = √(2/n) σ_toa/(au/c cos β); over two months, what is left of an annual wave
// after a parabola is its third order, (w T)³/6 at most times the leading coefficient of a cubic.
func TestPositionNeedsAYear(t *testing.T) {
	spin := []Parameter{Phase, Frequency, FrequencyDerivative, RightAscension, Declination}
	src := Source{FrequencyHz: 100, EpochMJD: 57000, PositionMJD: 57000, RADeg: 90, DecDeg: 23.44} // on the ecliptic: β = 0
	at := func(days float64, n int) *Model {
		var obs []Observation
		for i := range n {
			obs = append(obs, Observation{MJD: 57000 + days*(float64(i)+0.5)/float64(n), SigmaUs: 1})
		}
		return mustModel(t, src, allFree(spin), obs)
	}
	year := sigma(t, at(2*daysPerYear, 200), RightAscension)
	if want := math.Sqrt(2.0/200) * 1e-6 / auSec / masToRad; year < want || year > 1.6*want {
		t.Errorf("two years: %g mas, want a little above %g", year, want)
	}
	var obs []Observation
	for i := range 200 {
		obs = append(obs, Observation{MJD: 57000 + 60*(float64(i)+0.5)/200, SigmaUs: 1})
	}
	short := mustModel(t, src, allFree(spin[:4]), obs)
	// Residual of t³/6 w³ off a parabola over ±T/2: rms w³ (T/2)³/6 · √(4/175).
	w := turn / daysPerYear
	// The third derivative of a sine has the size of the sine a quarter of a year on.
	third := math.Abs(dot(earthSec(57030+daysPerYear/4), short.geo.east))
	rms := third * math.Pow(w*30, 3) / 6 * math.Sqrt(4.0/175)
	want := 1e-6 / (rms * math.Sqrt(200)) / masToRad
	if got := sigma(t, short, RightAscension); got < want/1.5 || got > want*1.5 || got < 100*year {
		t.Errorf("two months: %g mas, want about %g, and far above %g", got, want, year)
	}
}

func TestUndeterminedIsNamedAndCarriedOn(t *testing.T) {
	// One frequency only: dispersion and phase cannot be told apart; the rest can.
	obs := []Observation{{57000, 1, 1400}, {57010, 1, 1400}, {57100, 1, 1400}}
	src := Source{FrequencyHz: 100, EpochMJD: 57000}
	m := mustModel(t, src, allFree([]Parameter{Phase, Frequency, Dispersion}), obs)
	if got := m.Undetermined(); !slices.Equal(got, []Parameter{Dispersion}) {
		t.Fatalf("undetermined %v, want the dispersion measure", got)
	}
	var u Undetermined
	if _, err := m.SigmaOf(Dispersion); !errors.As(err, &u) || !strings.Contains(err.Error(), "dispersion measure") {
		t.Errorf("got %v", err)
	}
	if s := m.PhaseErrorTurns(57200, 1400); math.IsInf(s, 0) || s <= 0 {
		t.Errorf("phase at the observed frequency: %g", s)
	}
	if s := m.PhaseErrorTurns(57200, 800); !math.IsInf(s, 1) {
		t.Errorf("phase at another frequency: %g, want no finite error", s)
	}
	if s := sigma(t, m, Frequency); !(s > 0) {
		t.Errorf("frequency: %g", s)
	}
	if _, err := m.GainPerMinute(Dispersion, obs, nil); !errors.As(err, &u) {
		t.Errorf("gain: got %v", err)
	}
	second := []Observation{{57050, 1, 800}}
	if g, err := m.SlotGain(Dispersion, second); err != nil || !math.IsInf(g, 1) {
		t.Errorf("the first look at a second frequency gains %g, %v", g, err)
	}
	// Nothing at all is known.
	empty := mustModel(t, src, allFree([]Parameter{Phase, Frequency}), nil)
	if got := empty.Undetermined(); !slices.Equal(got, []Parameter{Phase, Frequency}) {
		t.Errorf("undetermined %v", got)
	}
	if d := empty.Deadline(0.1, 57000, 0); !d.Passed {
		t.Errorf("deadline of the unknown: %+v", d)
	}
}

func TestGlitchVoidsRotation(t *testing.T) {
	src := Source{FrequencyHz: 11.2, DerivativeHzPerS: -1.5e-11, EpochMJD: 57000, RADeg: 128, DecDeg: -45, PositionMJD: 57000}
	priors := []Prior{{Phase, 1e-4}, {Frequency, 1e-11}, {FrequencyDerivative, 1e-18}, {RightAscension, math.Inf(1)}, {Declination, math.Inf(1)}}
	old := weekly(57001, 3)
	before := mustModel(t, src, priors, old)
	if s := before.PhaseErrorTurns(58200, 1400); s > 1e-3 {
		t.Fatalf("before the glitch the phase is known to %g turns", s)
	}
	src.GlitchMJD = 58150
	after := mustModel(t, src, priors, old)
	if s := after.PhaseErrorTurns(58150.5, 1400); s < 0.28 {
		t.Errorf("after the glitch the phase is known to %g turns", s)
	}
	// Position is not rotation: what was learnt before stays.
	if a, b := sigma(t, after, RightAscension), sigma(t, before, RightAscension); math.Abs(a/b-1) > 1e-3 {
		t.Errorf("position %g mas, before %g", a, b)
	}
	// Within the old data nothing changes.
	if a, b := after.PhaseErrorTurns(57500, 1400), before.PhaseErrorTurns(57500, 1400); math.Abs(a/b-1) > 1e-3 {
		t.Errorf("phase inside the old data %g, before %g", a, b)
	}
	// A step of 1e-6 of 11.2 Hz loses 0.1 turn in 8929 s (PHA-050): one arrival keeps the count for hours only.
	one, err := after.With(Observation{58150.5, 10, 1400})
	if err != nil {
		t.Fatal(err)
	}
	d := one.Deadline(0.1, 58150.5, 1400)
	if got := (d.MJD - 58150.5) * secPerDay; math.Abs(got/8928.57-1) > 0.02 {
		t.Errorf("the count holds for %g s after the first look, want 8929", got)
	}
	// The ramp then lengthens it.
	ramp, err := one.With(Observation{58150.6, 10, 1400}, Observation{58151, 10, 1400}, Observation{58152, 10, 1400})
	if err != nil {
		t.Fatal(err)
	}
	if next := ramp.Deadline(0.1, 58152, 1400); next.MJD-58152 < 10*(d.MJD-58150.5) {
		t.Errorf("after four looks the deadline is %+v", next)
	}
}

func TestPriorsAtTheirOwnEpochs(t *testing.T) {
	// Without data the errors are those stated, whatever the reference.
	src := example()
	priors := []Prior{{Phase, 1e-3}, {Frequency, 1e-12}, {FrequencyDerivative, 1e-20}, {RightAscension, 3}, {ProperMotionRA, 0.2}, {SemimajorAxis, 1e-6},
		{Periastron, 1e-4}, {LongitudeOfPeriastron, 0.01}, {Eccentricity, 1e-6}, {OrbitalPeriod, 1e-9}, {OrbitalDecay, 1e-14}, {AdvanceOfPeriastron, 1e-3}, {CompanionMass, 0.1}, {SinI, 0.02}}
	m := mustModel(t, src, priors, []Observation{{52000, 1e12, 1400}})
	for _, p := range priors {
		if got := sigma(t, m, p.Parameter); math.Abs(got/p.Sigma-1) > 1e-6 {
			t.Errorf("%v: %g, stated %g", p.Parameter, got, p.Sigma)
		}
	}
	if s := sigma(t, m, Declination); s != 0 {
		t.Errorf("a held parameter has the error %g", s)
	}
}

// A node is far better known than periastron when the orbit is nearly circular and both are fitted.
func TestNodeAgainstPeriastron(t *testing.T) {
	src := circular()
	m := mustModel(t, src, allFree(slices.DeleteFunc(slices.Clone(inNodeForm), func(p Parameter) bool { return p == EinsteinDelay })), weekly(56000, 6))
	node, peri, om := sigma(t, m, AscendingNode), sigma(t, m, Periastron), sigma(t, m, LongitudeOfPeriastron)
	if node > 1e-3*peri || math.Abs(peri/(src.Orbit.PeriodDays*om/360)-1) > 0.01 {
		t.Errorf("node %g d, periastron %g d, longitude %g deg", node, peri, om)
	}
}

func TestLoosePriors(t *testing.T) {
	src := example()
	priors := LoosePriors(src, []Prior{{Eccentricity, 1e-5}, {RightAscension, 10}})
	m := mustModel(t, src, priors, nil)
	if u := m.Undetermined(); len(u) > 2 {
		t.Errorf("undetermined: %v", u) // no arrival yet; and of the eccentricity only the size was stated
	}
	seen := map[Parameter]bool{}
	for _, p := range priors {
		if seen[p.Parameter] {
			t.Errorf("%v twice", p.Parameter)
		}
		seen[p.Parameter] = true
	}
	if seen[Eps1] || !seen[SinI] || !seen[AscendingNode] {
		t.Errorf("priors %v", priors)
	}
	if single := LoosePriors(Source{FrequencyHz: 1}, nil); len(single) != 9 {
		t.Errorf("a single pulsar has %d parameters, want 9", len(single))
	}
}

func TestNewRefuses(t *testing.T) {
	for _, c := range []struct {
		name   string
		change func(*Source)
		priors []Prior
		obs    []Observation
		want   string
	}{
		{"no frequency", func(s *Source) { s.FrequencyHz = 0 }, nil, nil, "spin frequency: found 0 Hz"},
		{"negative mass", func(s *Source) { s.CompanionMsun = -1 }, nil, nil, "companion mass: found -1"},
		{"negative Einstein delay", func(s *Source) { s.EinsteinSec = -1e-3 }, nil, nil, "einstein delay: found -0.001 s"},
		{"Einstein delay in a circle", func(s *Source) { s.EinsteinSec, s.Orbit.Eccentricity = 1e-3, 0 }, nil, nil, "einstein delay: found 0.001 s; accepted at most 0 s"},
		{"Einstein delay of no orbit", func(s *Source) { s.EinsteinSec, s.CompanionMsun, s.Orbit = 1e-3, 0, nil }, nil, nil, "found without an orbit"},
		{"error of an Einstein delay in a circle", func(s *Source) { s.Orbit.Eccentricity = 0 }, []Prior{{EinsteinDelay, 1}}, nil, "a circular orbit has none"},
		{"sin i above 1", func(s *Source) { s.SinI = 1.1 }, nil, nil, "sin i: found 1.1"},
		{"orbit with no epoch", func(s *Source) { s.Orbit = &orbit.Elements{PeriodDays: 1} }, nil, nil, "epoch: found none"},
		{"mass without orbit", func(s *Source) { s.Orbit = nil }, nil, nil, "without an orbit"},
		{"bad prior", func(*Source) {}, []Prior{{Phase, -1}}, nil, "error of phase: found -1"},
		{"orbital prior of a single pulsar", func(s *Source) { s.Orbit, s.CompanionMsun = nil, 0 }, []Prior{{OrbitalDecay, 1}}, nil, "no orbit"},
		{"sin i without mass", func(s *Source) { s.CompanionMsun = 0 }, []Prior{{SinI, 1}}, nil, "needs a companion mass"},
		{"error of an arrival", func(*Source) {}, nil, []Observation{{57000, 0, 1400}}, "observation 1"},
		{"not a number", func(s *Source) { s.DecDeg = math.NaN() }, nil, nil, "declination: found NaN"},
	} {
		src := example()
		c.change(&src)
		if _, err := New(src, c.priors, c.obs); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: got %v, want it to hold %q", c.name, err, c.want)
		}
	}
	flat := circular()
	flat.Orbit.Eccentricity = 0
	m := mustModel(t, flat, nil, nil)
	if _, err := m.SigmaOf(LongitudeOfPeriastron); err == nil || !strings.Contains(err.Error(), "no meaning in a circular orbit") {
		t.Errorf("got %v", err)
	}
}

func TestParameterNames(t *testing.T) {
	for p := range parameterCount {
		if got, err := ParameterNamed(" " + strings.ToUpper(p.String())); err != nil || got != p {
			t.Errorf("%v: got %v, %v", p, got, err)
		}
	}
	for _, name := range []string{"companion mass", "sin i", "orbital decay", "advance of periastron", "parallax", "proper motion"} {
		if _, err := ParameterNamed(name); err != nil {
			t.Error(err)
		}
	}
	if _, err := ParameterNamed("mass"); err == nil || !strings.Contains(err.Error(), "companion mass") {
		t.Errorf("got %v", err)
	}
}

// Whatever is put in, an error or numbers come out, never NaN.
func TestNeverNaN(t *testing.T) {
	any := rapid.OneOf(rapid.Float64(), rapid.Float64Range(-1e5, 1e5), rapid.SampledFrom([]float64{0, 1, 57000, math.NaN(), math.Inf(1), math.Inf(-1)}))
	rapid.Check(t, func(t *rapid.T) {
		d := func(name string) float64 { return any.Draw(t, name) }
		src := example()
		for i, f := range []*float64{&src.FrequencyHz, &src.DerivativeHzPerS, &src.EpochMJD, &src.RADeg, &src.DecDeg, &src.PositionMJD, &src.ParallaxMas,
			&src.CompanionMsun, &src.SinI, &src.EinsteinSec, &src.GlitchMJD, &src.Orbit.PeriodDays, &src.Orbit.SemimajorLs, &src.Orbit.Eccentricity, &src.Orbit.AdvanceDegPerYr} {
			if rapid.IntRange(0, 9).Draw(t, "change") == i%10 {
				*f = d("value")
			}
		}
		obs := []Observation{{57000, 1, 1400}, {57100.3, 2, 800}, {d("mjd"), d("sigma"), d("mhz")}}
		if rapid.Bool().Draw(t, "usual") {
			obs = obs[:2]
		}
		m, err := New(src, LoosePriors(src, nil), obs)
		if err != nil {
			return
		}
		for p := range parameterCount {
			if s, err := m.SigmaOf(p); math.IsNaN(s) && err == nil {
				t.Fatalf("%v is NaN", p)
			}
			q, err := m.GainPerMinute(p, []Observation{{d("mjd"), d("sigma"), d("mhz")}}, nil)
			if err == nil && (math.IsNaN(q[0]) || q[0] < 0) {
				t.Fatalf("%v gains %g", p, q[0])
			}
		}
		if s := m.PhaseErrorTurns(d("at"), 1400); math.IsNaN(s) {
			t.Fatal("phase error is NaN")
		}
	})
}

// Whatever is observed, no answer is NaN and more observations never make anything worse.
func TestMoreIsNeverWorse(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		src := circular()
		if rapid.Bool().Draw(t, "eccentric") {
			src = example()
		}
		if rapid.Bool().Draw(t, "glitch") {
			src.GlitchMJD = 57200
		}
		one := rapid.Custom(func(t *rapid.T) Observation {
			return Observation{rapid.Float64Range(56000, 58000).Draw(t, "mjd"), rapid.Float64Range(0.01, 100).Draw(t, "sigma"),
				rapid.SampledFrom([]float64{0, 400, 1400}).Draw(t, "mhz")}
		})
		obs := rapid.SliceOfN(one, 0, 40).Draw(t, "observations")
		m, err := New(src, LoosePriors(src, nil), obs)
		if err != nil {
			t.Fatal(err)
		}
		next, err := m.With(one.Draw(t, "one more"))
		if err != nil {
			t.Fatal(err)
		}
		for _, p := range inNodeForm {
			a, errA := m.SigmaOf(p)
			b, errB := next.SigmaOf(p)
			if errA != nil && p == Phase && len(obs) == 0 {
				continue // no arrival yet: the count has not begun
			}
			if src.GlitchMJD > 0 && p == Phase && errA != nil {
				continue // nor after the glitch
			}
			if errA != nil || errB != nil || math.IsNaN(a) || !(b <= a*(1+1e-6)) {
				t.Fatalf("%v: %g (%v), with one more %g (%v)", p, a, errA, b, errB)
			}
		}
		at := rapid.Float64Range(56000, 60000).Draw(t, "at")
		if a, b := m.PhaseErrorTurns(at, 1400), next.PhaseErrorTurns(at, 1400); math.IsNaN(a) || !(b <= a*(1+1e-6)) {
			t.Fatalf("phase error %g, with one more %g", a, b)
		}
	})
}
