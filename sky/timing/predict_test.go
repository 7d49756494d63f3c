package timing

import (
	"math"
	"strings"
	"testing"

	"example.org/tallystick/sky/orbit"
	"example.org/tallystick/sky/outside"
)

const start = 57000.0

// phaseModel fits the named parameters to arrivals whose error is given in turns.
func phaseModel(t *testing.T, params string, days []float64, turns float64) *Model {
	t.Helper()
	src := Source{FrequencyHz: 100, EpochMJD: start}
	free := []Parameter{Phase, Frequency}
	if strings.Contains(params, "F1") {
		free = append(free, FrequencyDerivative)
	}
	var obs []Observation
	for _, d := range days {
		obs = append(obs, Observation{MJD: start + d, SigmaUs: turns / src.FrequencyHz * 1e6})
	}
	return mustModel(t, src, allFree(free), obs)
}

// absorbedBy is how many terms the fit of a row has absorbed.
func absorbedBy(r outside.Row) int {
	if r.ID == "PHA-012" || r.ID == "PHA-015" {
		return 3
	}
	return 2
}

func TestSwingDays(t *testing.T) {
	for _, r := range outside.Rows(t, "phase_connection.csv", "PHA-011", "PHA-012", "PHA-014", "PHA-015") {
		r.Check(SwingDays(PositionAmplitudeTurns(r.Num("F0_Hz"), r.Num("beta_deg"), r.Num("dlambda_arcsec"), 0), 0.25, absorbedBy(r)))
	}
}

// The whole model's deadline for a position error of an arcsecond or ten, once a short fit has absorbed phase and frequency, or
// the derivative too, is what the first term that is left says, by the worst season: but for the terms after it, the Earth's true orbit, which is
// 1.7 % nearer and 3.4 % faster at perihelion, and a fit that is not infinitely short.
func TestPositionErrorGrows(t *testing.T) {
	for _, r := range outside.Rows(t, "phase_connection.csv", "PHA-011", "PHA-012", "PHA-014", "PHA-015") {
		// A short fit: long enough to tell phase and frequency well, too short to tell the position.
		span, turns := r.Want()/100, 2.5e-4
		params := []Parameter{Phase, Frequency}
		if absorbedBy(r) == 3 {
			params, turns = append(params, FrequencyDerivative), 1.5e-6
		}
		worst := math.Inf(1)
		for day := 0.0; day < 365; day += 5 {
			// On the ecliptic at longitude 90°, where a step in right ascension is one in longitude.
			src := Source{FrequencyHz: r.Num("F0_Hz"), EpochMJD: start + day, PositionMJD: start + day, RADeg: 90, DecDeg: 23.4392911}
			var obs []Observation
			for _, x := range []float64{-1, -0.6, -0.2, 0.2, 0.6, 1} {
				obs = append(obs, Observation{MJD: start + day + x*span, SigmaUs: turns / src.FrequencyHz * 1e6})
			}
			m := mustModel(t, src, append(allFree(params), Prior{RightAscension, 1e3 * r.Num("dlambda_arcsec")}), obs)
			if d := m.Deadline(0.25, start+day+span, 0); !d.Never {
				worst = math.Min(worst, d.MJD-start-day)
			}
		}
		first := SwingDays(PositionAmplitudeTurns(r.Num("F0_Hz"), r.Num("beta_deg"), r.Num("dlambda_arcsec"), 0), 0.25, absorbedBy(r))
		if math.Abs(worst/first-1) > 0.02 {
			t.Errorf("%s: %g d by the whole model, %g by the first term", r.ID, worst, first)
		}
	}
}

func TestPhaseConnection(t *testing.T) {
	for _, r := range outside.Rows(t, "phase_connection.csv", "PHA-03*") {
		m := phaseModel(t, r.Inputs["params"], r.Nums("t_d"), r.Num("sphi_turn"))
		r.Check(m.PhaseErrorTurns(start+r.Num("t_pred_d"), 0))
	}
	for _, r := range outside.Rows(t, "phase_connection.csv", "PHA-06*") {
		days := r.Nums("t_d")
		m := phaseModel(t, r.Inputs["params"], days, r.Num("sphi_turn"))
		d := m.Deadline(0.25/3, start+days[len(days)-1], 0)
		r.Check(d.MJD - start)
	}
	for _, r := range outside.Rows(t, "phase_connection.csv", "PHA-02*") {
		m := phaseModel(t, "", []float64{0, 2}, r.Num("sphi_turn"))
		d := m.Deadline(r.Num("limit_turn")/r.Num("k"), start+2, 0)
		r.Check((d.MJD - start - 2) / 2)
	}
	for _, r := range outside.Rows(t, "phase_connection.csv", "PHA-001", "PHA-002") {
		src := Source{FrequencyHz: 100, EpochMJD: start}
		priors := []Prior{{Phase, r.Num("sphi0_turn")}, {Frequency, r.Num("sF0_Hz")}}
		if s := r.Num("sF1_Hz_s"); s > 0 {
			priors = append(priors, Prior{FrequencyDerivative, s})
		}
		d := mustModel(t, src, priors, nil).Deadline(r.Num("limit_turn")/r.Num("k"), start, 0)
		r.Check((d.MJD - start) * secPerDay)
	}
	for _, r := range outside.Rows(t, "phase_connection.csv", "PHA-005", "PHA-006") {
		m := mustModel(t, Source{FrequencyHz: 100, EpochMJD: start}, []Prior{{FrequencyDerivative, r.Num("F1max_Hz_s")}}, nil)
		d := m.Deadline(r.Num("limit_turn"), start, 0)
		r.Check((d.MJD - start) * secPerDay)
	}
	for _, r := range outside.Rows(t, "phase_connection.csv", "PHA-050") {
		f := r.Num("F0")
		m := mustModel(t, Source{FrequencyHz: f, EpochMJD: start}, []Prior{{Frequency, f * r.Num("dF_over_F")}}, nil)
		r.Check((m.Deadline(r.Num("limit_turn"), start, 0).MJD - start) * secPerDay)
	}
}

func TestFrequencyFromOneObservation(t *testing.T) {
	for _, r := range outside.Rows(t, "phase_connection.csv", "PHA-040", "PHA-041") {
		n := 2.0
		if r.Inputs["n"] != "" {
			n = r.Num("n")
		}
		var days []float64
		for i := range int(n) {
			days = append(days, float64(i)*r.Num("T_s")/n/secPerDay)
		}
		r.Check(sigma(t, phaseModel(t, "", days, r.Num("sphi_turn")), Frequency))
	}
}

func TestOrbitInPhaseError(t *testing.T) {
	for _, r := range outside.Rows(t, "phase_connection.csv", "PHA-045") {
		// At the node the line-of-sight motion is fastest: the worst phase.
		src := Source{FrequencyHz: r.Num("F0"), EpochMJD: start,
			Orbit: &orbit.Elements{PeriodDays: r.Num("PB_d"), AscendingNodeMJD: start, SemimajorLs: r.Num("x_s")}}
		m := mustModel(t, src, []Prior{{OrbitalPeriod, r.Num("sPB_d")}}, nil)
		r.Check(m.PhaseErrorTurns(start+r.Num("N")*src.Orbit.PeriodDays, 0))
	}
}

func TestPositionAmplitude(t *testing.T) {
	for _, r := range outside.Rows(t, "phase_connection.csv", "PHA-010", "PHA-013") {
		want := PositionAmplitudeTurns(r.Num("F0_Hz"), r.Num("beta_deg"), r.Num("dlambda_arcsec"), 0)
		r.Check(want)
		// The model's own partial derivative swings as far: a source on the ecliptic, where right ascension is longitude.
		src := Source{FrequencyHz: r.Num("F0_Hz"), EpochMJD: start, RADeg: 90, DecDeg: 23.4393}
		m := mustModel(t, src, []Prior{{RightAscension, 1e3 * r.Num("dlambda_arcsec")}}, nil)
		most := 0.0
		for d := range 366 {
			most = math.Max(most, m.PhaseErrorTurns(start+float64(d), 0))
		}
		if math.Abs(most/want-1) > 0.02 { // the Earth's orbit is not a circle
			t.Errorf("%s: largest phase error %g, amplitude %g", r.ID, most, want)
		}
	}
}

func TestDeadlineNever(t *testing.T) {
	m := mustModel(t, Source{FrequencyHz: 100, EpochMJD: start}, []Prior{{Phase, 0.01}}, nil)
	if d := m.Deadline(0.1, start, 0); !d.Never || d.Passed {
		t.Errorf("a source that is perfectly known: %+v", d)
	}
	if d := m.Deadline(0.001, start, 0); !d.Passed || d.MJD != start {
		t.Errorf("a source that is lost: %+v", d)
	}
}
