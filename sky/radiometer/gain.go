package radiometer

import (
	"fmt"
	"math"
)

// gainFactor returns what is left of the gain at an elevation, as a share of GainKPerJy: 1 without a curve.
//
// Given:   elevation in degrees; beyond 90 the telescope has tilted over, and the elevation is counted from the other side
// Returns: straight lines between the points of the curve, the value of its ends outside them
// Checked: TestGainFactor
func gainFactor(curve [][2]float64, elevationDeg float64) float64 {
	if len(curve) == 0 {
		return 1
	}
	el := math.Min(elevationDeg, 180-elevationDeg)
	if el <= curve[0][0] {
		return curve[0][1]
	}
	for i := 1; i < len(curve); i++ {
		if a, b := curve[i-1], curve[i]; el <= b[0] {
			return a[1] + (b[1]-a[1])*(el-a[0])/(b[0]-a[0])
		}
	}
	return curve[len(curve)-1][1]
}

// checkGainCurve says what keeps a curve from being used.
func checkGainCurve(curve [][2]float64) error {
	if len(curve) == 1 {
		return fmt.Errorf("gain curve: found 1 point; accepted none, or 2 and more")
	}
	for i, p := range curve {
		switch {
		case !(p[0] >= 0 && p[0] <= 90):
			return fmt.Errorf("gain curve: found elevation %g; accepted from 0 to 90", p[0])
		case i > 0 && p[0] <= curve[i-1][0]:
			return fmt.Errorf("gain curve: found elevation %g after %g; accepted in rising order", p[0], curve[i-1][0])
		case !(p[1] > 0) || math.IsInf(p[1], 0):
			return fmt.Errorf("gain curve: found factor %g; accepted above 0", p[1])
		}
	}
	return nil
}
