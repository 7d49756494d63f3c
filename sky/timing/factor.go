package timing

import "math"

// A fit is the Cholesky factor of an information matrix, with its columns scaled so that the diagonal is
// 1: parameters differ by thirty orders of magnitude, and only scaled can a pivot be judged.
type fit struct {
	n     int          // columns kept
	kept  [columns]int // which they are, ascending
	scale vec          // of the kept ones, in their order
	u     [columns]vec // Lᵀ, the upper triangle: row i holds column i of L
	inv   vec          // 1/diagonal

	nDropped int
	dropped  [columns]int
	nullOwn  vec          // scale of the dropped ones
	null     [columns]vec // for each, the combination of kept columns (scaled) that it cannot be told from
	nullSize vec          // length of that
}

// smallestPivot is the share of a column that must be its own, not a combination of others, for the
// column to count as determined. Rounding makes 1e-15 of it.
const smallestPivot = 1e-13

// factor works out the scaled factor; columns without information of their own are dropped.
//
//	N = D⁻¹ L Lᵀ D⁻¹,  Lᵀ from the root by reflections, without N
//
// Source:  Cholesky's factorisation; the scaling after van der Sluis 1969, Numer. Math. 14, 14
// Checked: TestCovarianceAgainstQR, TestUndeterminedIsNamedAndCarriedOn
func (f *fit) factor(t *root, free *[columns]bool) {
	f.n, f.nDropped = 0, 0
	var w [columns]vec // the root's columns, scaled: w[c][row]
	var s vec
	for c := range columns {
		if !free[c] {
			continue
		}
		norm := 0.0
		for i := 0; i <= c; i++ {
			norm = math.Hypot(norm, t.r[i][c])
		}
		s[c] = 1
		if norm > 0 {
			s[c] = 1 / norm
		}
		for i := 0; i <= c; i++ {
			w[c][i] = t.r[i][c] * s[c]
		}
	}
	for c := range columns {
		if !free[c] {
			continue
		}
		pivot := 0.0
		for i := f.n; i <= c; i++ {
			pivot = math.Hypot(pivot, w[c][i])
		}
		if !(pivot > smallestPivot) {
			f.dropped[f.nDropped], f.nullOwn[f.nDropped] = c, s[c]
			f.nDropped++
			continue
		}
		f.reflect(&w, c, pivot)
		f.kept[f.n], f.scale[f.n] = c, s[c]
		f.n++
	}
	for i := range f.n {
		for j := i; j < f.n; j++ {
			f.u[i][j] = w[f.kept[j]][i]
		}
		f.inv[i] = 1 / f.u[i][i]
	}
	for d := range f.nDropped {
		f.findNull(d, &w)
	}
}

// reflect clears column c below row f.n, in all columns from c on.
func (f *fit) reflect(w *[columns]vec, c int, norm float64) {
	row := f.n
	x := w[c]
	norm = -math.Copysign(norm, x[row])
	x[row] -= norm
	scale := -1 / (norm * x[row])
	for k := c + 1; k < columns; k++ {
		dot := 0.0
		for i := row; i <= c; i++ {
			dot += x[i] * w[k][i]
		}
		dot *= scale
		for i := row; i <= c; i++ {
			w[k][i] -= dot * x[i]
		}
	}
	w[c][row] = norm
}

// findNull solves for the combination of kept columns that a dropped one cannot be told from.
func (f *fit) findNull(d int, w *[columns]vec) {
	v := &f.null[d]
	*v = w[f.dropped[d]]
	f.backward(v)
	f.nullSize[d] = 0
	for i := range f.n {
		f.nullSize[d] = math.Hypot(f.nullSize[d], v[i])
	}
}

// forward solves L y = v in place, column by column.
func (f *fit) forward(v *vec) {
	y := v[:f.n]
	for i := range y {
		y[i] *= f.inv[i]
		known, row := y[i], f.u[i][:len(y)]
		for k := i + 1; k < len(y); k++ {
			y[k] -= row[k] * known
		}
	}
}

// backward solves Lᵀ y = v in place.
func (f *fit) backward(v *vec) {
	for i := f.n - 1; i >= 0; i-- {
		sum := v[i]
		for k := i + 1; k < f.n; k++ {
			sum -= f.u[i][k] * v[k]
		}
		v[i] = sum * f.inv[i]
	}
}

// gather picks the kept columns of a vector, scaled.
func (f *fit) gather(v, out *vec) {
	for i := range f.n {
		out[i] = v[f.kept[i]] * f.scale[i]
	}
}

// reaches reports whether the data tell the combination v at all: whether v gives the same for a dropped
// column and for the kept ones it cannot be told from.
func (f *fit) reaches(v *vec) bool {
	const tolerance = 1e-5
	for d := range f.nDropped {
		own := v[f.dropped[d]] * f.nullOwn[d]
		rest, size := own, 0.0
		for i := range f.n {
			scaled := v[f.kept[i]] * f.scale[i]
			rest -= scaled * f.null[d][i]
			size = math.Hypot(size, scaled)
		}
		if math.Abs(rest) > tolerance*(math.Abs(own)+size*f.nullSize[d]) {
			return false
		}
	}
	return true
}

// variance returns vᵀ C v, and false when the data do not reach v.
func (f *fit) variance(v *vec) (float64, bool) {
	if !f.reaches(v) {
		return math.Inf(1), false
	}
	var y vec
	f.gather(v, &y)
	f.forward(&y)
	sum := 0.0
	for i := range f.n {
		sum += y[i] * y[i]
	}
	return sum, true
}
