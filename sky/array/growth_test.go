package array

import (
	"math"
	"testing"
)

// The rows of the table hold span and cadence; here what remains, worked out by hand.
func TestGain(t *testing.T) {
	double := func(set func(*Change)) Change {
		c := Same()
		set(&c)
		return c
	}
	for _, c := range []struct {
		name               string
		change             Change
		weak, intermediate float64
	}{
		{"nothing", Same(), 1, 1},
		{"twice the pulsars", double(func(c *Change) { c.Pulsars = 2 }), 2, 2},
		{"twice the cadence", double(func(c *Change) { c.Cadence = 2 }), 2, math.Exp2(3. / 26)},
		{"half the noise", double(func(c *Change) { c.Noise = 0.5 }), 4, math.Exp2(3. / 13)}, // 17 %
		{"twice the span", double(func(c *Change) { c.Span = 2 }), math.Exp2(13. / 3), math.Sqrt2},
	} {
		if got := Weak.Gain(c.change); math.Abs(got-c.weak) > 1e-12*c.weak {
			t.Errorf("%s, weak: %g, want %g", c.name, got, c.weak)
		}
		if got := Intermediate.Gain(c.change); math.Abs(got-c.intermediate) > 1e-12*c.intermediate {
			t.Errorf("%s, intermediate: %g, want %g", c.name, got, c.intermediate)
		}
	}
}
