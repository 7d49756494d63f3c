package orbit

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"example.org/tallystick/sky/outside"
)

func TestEccentricAnomaly(t *testing.T) {
	for _, r := range outside.Rows(t, "orbits.csv", "ORB-001", "ORB-002", "ORB-003") {
		if _, ok := r.Inputs["M_rad"]; ok {
			r.Check(EccentricAnomaly(r.Num("M_rad"), r.Num("e")))
			continue
		}
		r.Check(EccentricAnomaly(r.Num("M_deg")*degToRad, r.Num("e")) / degToRad)
	}
}

func TestTrueAnomaly(t *testing.T) {
	for _, r := range outside.Rows(t, "orbits.csv", "ORB-004", "ORB-005", "ORB-007", "ORB-008") {
		o := mustNew(t, Elements{PeriodDays: 360, PeriastronMJD: 1000, Eccentricity: r.Num("e")})
		r.Check(360 * fraction(o.trueAnomalyTurns(1000+r.Num("M_deg"))))
	}
}

// The solution satisfies Kepler's equation to rounding, whatever the anomaly and eccentricity.
func TestKeplerResidual(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		m := rapid.Float64Range(-20, 20).Draw(t, "m")
		e := rapid.OneOf(rapid.Float64Range(0, 0.999), rapid.Float64Range(0.9, 0.999)).Draw(t, "e")
		x := EccentricAnomaly(m, e)
		// Rounding of the difference of two nearly equal terms is all that may remain.
		if res := math.Abs(x - e*math.Sin(x) - m); !(res < 1e-14*(1+math.Abs(m))) {
			t.Fatalf("m %g e %g: residual %g", m, e, res)
		}
	})
}

func TestMeanFromTrueIsTheWayBack(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		m := rapid.Float64Range(-3, 3).Draw(t, "m")
		e := rapid.Float64Range(0, 0.95).Draw(t, "e")
		whole := math.Round(m)
		nu := whole + trueAnomaly(EccentricAnomaly((m-whole)*turn, e), e)/turn
		if back := meanFromTrue(nu, e); math.Abs(back-m) > 1e-13 {
			t.Fatalf("m %.17g e %g: back %.17g", m, e, back)
		}
	})
}

func TestEccentricAnomalyOutsideItsRange(t *testing.T) {
	for _, e := range []float64{-0.1, 1, 2, math.NaN()} {
		if x := EccentricAnomaly(1, e); !math.IsNaN(x) {
			t.Errorf("e %g: got %g, want NaN", e, x)
		}
	}
}

func BenchmarkEccentricAnomaly(b *testing.B) {
	for _, e := range []struct {
		name string
		e    float64
	}{{"0.1", 0.1}, {"0.6", 0.6}, {"0.95", 0.95}} {
		b.Run("e="+e.name, func(b *testing.B) {
			sum, m := 0.0, 0.0
			for b.Loop() {
				sum += EccentricAnomaly(m, e.e)
				if m += 0.0137; m > math.Pi {
					m -= turn
				}
			}
			_ = sum
		})
	}
}
