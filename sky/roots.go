package sky

import "math"

// fine is how exactly a crossing is found: days, about a microsecond.
const fine = 1e-11

// solve returns where g crosses zero between a and b, at which its signs differ. g returns value and slope;
// the slope only speeds it up, and may be rough.
func solve(g func(x float64) (v, d float64), a, b float64, aboveAtB bool) float64 {
	x := (a + b) / 2
	for range 80 {
		v, d := g(x)
		if (v >= 0) == aboveAtB {
			b = x
		} else {
			a = x
		}
		next := x - v/d
		if !(next > a && next < b) { // also when the slope is zero or the ratio not a number
			next = (a + b) / 2
		}
		step := math.Abs(next - x)
		x = next
		if step < fine || b-a < fine {
			break
		}
	}
	return x
}

// turning returns where the slope of g changes sign between a and b, at which the signs of its slope differ.
func turning(g func(x float64) (v, d float64), a, b float64, risingAtB bool) float64 {
	for range 60 {
		x := (a + b) / 2
		if b-a < fine {
			break
		}
		if _, d := g(x); (d >= 0) == risingAtB {
			b = x
		} else {
			a = x
		}
	}
	return (a + b) / 2
}

// flips gathers the instants at which a condition begins or ceases to hold, in order.
type flips struct {
	at     []float64
	starts bool // whether it holds at the beginning
	now    bool // whether it holds after the last instant
}

func (f *flips) begin(holds bool) {
	f.at, f.starts, f.now = f.at[:0], holds, holds
}

// set says that from x on the condition holds, or does not.
func (f *flips) set(x float64, holds bool) {
	if holds != f.now {
		f.at = append(f.at, x)
		f.now = holds
	}
}

// along adds the flips of g ≥ 0 on a piece on which g is smooth and turns at most once.
func (f *flips) along(g func(x float64) (v, d float64), a, b float64) {
	va, da := g(a)
	vb, db := g(b)
	f.set(a, va >= 0)
	switch {
	case (va >= 0) != (vb >= 0):
		f.set(solve(g, a, b, vb >= 0), vb >= 0)
	case va >= 0 && da < 0 && db > 0, va < 0 && da > 0 && db < 0:
		// It bends toward zero and back: it may touch, or cross twice.
		m := turning(g, a, b, db > 0)
		if vm, _ := g(m); (vm >= 0) != (va >= 0) {
			f.set(solve(g, a, m, vm >= 0), vm >= 0)
			f.set(solve(g, m, b, vb >= 0), vb >= 0)
		}
	}
}
