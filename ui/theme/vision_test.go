package theme

import (
	"testing"

	"github.com/lucasb-eyer/go-colorful"
)

// Dichromatic vision as 3x3 matrices on linear RGB: Machado, Oliveira and Fernandes, "A Physiologically-based
// Model for Simulation of Color Vision Deficiency", IEEE TVCG 15 (2009), severity 1.0.
var visions = map[string][9]float64{
	"usual":        {1, 0, 0, 0, 1, 0, 0, 0, 1},
	"protanopia":   {0.152286, 1.052583, -0.204868, 0.114503, 0.786281, 0.099216, -0.003882, -0.048116, 1.051998},
	"deuteranopia": {0.367322, 0.860646, -0.227968, 0.280085, 0.672501, 0.047413, -0.011820, 0.042940, 0.968881},
	"tritanopia":   {1.255528, -0.076749, -0.178779, -0.078411, 0.930809, 0.147602, 0.004733, 0.691367, 0.303900},
}

func seen(c colorful.Color, m [9]float64) colorful.Color {
	r, g, b := c.LinearRgb()
	return colorful.LinearRgb(m[0]*r+m[1]*g+m[2]*b, m[3]*r+m[4]*g+m[5]*b, m[6]*r+m[7]*g+m[8]*b).Clamped()
}

// Rows of one table that say different things differ to every eye by well more than the just noticeable
// difference, which is about 0.02 in this measure (CIE 1976 in units of 100).
func TestInksOfATableDifferToEveryEye(t *testing.T) {
	const least = 0.08
	inksOfRows := []Ink{Plain, Overdue, Broken, Pinned}
	for _, dark := range []bool{true, false} {
		colour := func(i Ink) colorful.Color {
			hex, plain := palette[i].dark, "#e0e0e0"
			if !dark {
				hex, plain = palette[i].light, "#101010"
			}
			if hex == "" {
				hex = plain
			}
			c, err := colorful.Hex(hex)
			if err != nil {
				t.Fatal(err)
			}
			return c
		}
		for name, m := range visions {
			for i, a := range inksOfRows {
				for _, b := range inksOfRows[i+1:] {
					if d := seen(colour(a), m).DistanceLab(seen(colour(b), m)); d < least {
						t.Errorf("%s, dark %v: inks %d and %d differ by %.3f", name, dark, a, b, d)
					}
				}
			}
		}
	}
}
