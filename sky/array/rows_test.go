package array

import (
	"math"
	"testing"

	"example.org/tallystick/sky/outside"
)

func TestMain(m *testing.M) { outside.Main(m, nil) }

const table = "allocation.csv"

func TestCorrelationRows(t *testing.T) {
	for _, r := range outside.Rows(t, table, "ALL-001", "ALL-002", "ALL-003", "ALL-005") {
		r.Check(Correlation(r.Num("xi_deg")))
	}
	outside.One(t, table, "ALL-006").Check(FirstZeroDeg)
}

func TestGainRows(t *testing.T) {
	weak := outside.One(t, table, "ALL-010")
	if beta := weak.Inputs["beta"]; beta != "13/3" || backgroundSlope != 13./3 {
		t.Errorf("slope %g, and in the row %s", backgroundSlope, beta)
	}
	weak.Check(Weak.Gain(Change{Pulsars: 1, Cadence: 1, Noise: 1, Span: weak.Num("T_ratio")}))
	span := outside.One(t, table, "ALL-011")
	span.Check(Intermediate.Gain(Change{Pulsars: 1, Cadence: 1, Noise: 1, Span: span.Num("T_ratio")}))
	cadence := outside.One(t, table, "ALL-012")
	cadence.Check(Intermediate.Gain(Change{Pulsars: 1, Cadence: cadence.Num("c_ratio"), Noise: 1, Span: 1}))
}

func TestShareRows(t *testing.T) {
	for _, r := range outside.Rows(t, table, "ALL-020", "ALL-032") {
		set, best := shared(t, r, 0)
		r.Check(best...)
		if r.ID == "ALL-032" { // hours are nearly even, and the row's note tells what that costs
			if gain := overEqualTime(r, set, best); math.Abs(gain-1.000578) > 1e-6 {
				t.Errorf("%s: gain over equal time %.7f, want 1.000578", r.ID, gain)
			}
		}
	}
	gain := outside.One(t, table, "ALL-021")
	set, best := shared(t, gain, 0)
	gain.Check(overEqualTime(gain, set, best))
	least := outside.One(t, table, "ALL-022")
	_, best = shared(t, least, 0.5) // as the row's quantity says
	least.Check(best...)
}

func TestPairRows(t *testing.T) {
	r := outside.One(t, table, "ALL-030")
	var set []Timed
	for i, sigma := range r.Nums("sigma_us") {
		set = append(set, Timed{r.Nums("ra_deg")[i], r.Nums("dec_deg")[i], sigma})
	}
	r.Check(Pair(set).MeritPerUs2)
}

// shared is a row's set of pulsars with the best hours of each.
func shared(t *testing.T, r outside.Row, leastH float64) (set []Pulsar, hours []float64) {
	t.Helper()
	for i, ns := range r.Nums("a_ns_sqrt_h") {
		set = append(set, Pulsar{HourErrorUs: ns / 1000, FloorUs: r.Nums("floor_ns")[i] / 1000, Weight: 1, LeastH: leastH, MostH: r.Num("T_h")})
	}
	d, err := Share(set, r.Num("T_h"))
	if err != nil {
		t.Fatalf("%s: %v", r.ID, err)
	}
	return set, d.Hours
}

func overEqualTime(r outside.Row, set []Pulsar, best []float64) float64 {
	equal := make([]float64, len(set))
	for i := range equal {
		equal[i] = r.Num("T_h") / float64(len(set))
	}
	return Value(set, best) / Value(set, equal)
}
