package array

import (
	"math"
	"testing"
)

// The curve's ends, its least value and its place, as Correlation's comment tells them.
func TestCorrelation(t *testing.T) {
	if got := Correlation(0); got != 0.5 {
		t.Errorf("at 0°: %g", got)
	}
	if got := Correlation(1e-7); math.Abs(got-0.5) > 1e-12 {
		t.Errorf("beside 0°: %.15g", got)
	}
	least, at := 1.0, 0.0
	for deg := 0.0; deg <= 180; deg += 0.01 {
		if g := Correlation(deg); g < least {
			least, at = g, deg
		}
	}
	if math.Abs(at-82.5) > 0.1 || math.Abs(least+0.152) > 5e-4 {
		t.Errorf("least %.4f at %.2f°, told as -0.152 at 82.5°", least, at)
	}
}

// The curve changes its sign at the first zero, nowhere before it, and once more at 121.7°.
func TestFirstZero(t *testing.T) {
	const step = 1e-6
	if before, after := Correlation(FirstZeroDeg-step), Correlation(FirstZeroDeg+step); !(before > 0 && after < 0) {
		t.Errorf("%g before and %g after", before, after)
	}
	var zeros []float64
	for deg := 0.1; deg < 180; deg += 0.1 {
		if Correlation(deg-0.1)*Correlation(deg) < 0 {
			zeros = append(zeros, deg)
		}
	}
	if len(zeros) != 2 || math.Abs(zeros[0]-FirstZeroDeg) > 0.1 || math.Abs(zeros[1]-121.7) > 0.1 {
		t.Errorf("zeros at %v", zeros)
	}
}
