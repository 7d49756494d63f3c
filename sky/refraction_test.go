package sky

import (
	"math"
	"testing"
)

func TestRefraction(t *testing.T) {
	var fromTrue, fromSeen errs
	for _, r := range table(t, "refraction.csv", 154) {
		air, err := NewRefraction(r.number("phpa"), r.number("tc"), r.number("rh"))
		if err != nil {
			t.Fatal(err)
		}
		el := r.number("el_deg")
		fromTrue = append(fromTrue, math.Abs(air.lift(math.Sin(el*radPerDeg))*degPerRad*arcsecPerDeg-r.number("r_true_arcsec")))
		fromSeen = append(fromSeen, math.Abs(liftedBy(air, el)*arcsecPerDeg-r.number("r_obs_arcsec")))
		// What is lifted to a limit is what the limit asks for.
		seen := el * radPerDeg
		if back := air.trueElevation(seen); math.Abs(back+air.lift(math.Sin(back))-seen)*degPerRad*arcsecPerDeg > 0.001 {
			t.Errorf("elevation %g: true elevation %g does not come back", el, back*degPerRad)
		}
	}
	fromTrue.judge(t, "refraction at a true elevation", "arcsec", 0.01, 0.001)
	fromSeen.judge(t, "refraction at an elevation as seen", "arcsec", 0.3, 0.001) // the worst are below 6°, where one Newton step is that far out
}
