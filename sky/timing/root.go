package timing

import "math"

// A root is the upper triangle R of the information matrix N = RᵀR. It is kept instead of N, because what is
// known of a new pulsar spans more digits than a sum of squares can hold: an arrival good to a microsecond
// stands beside a position that may shift it by seconds.
type root struct {
	r [columns]vec // r[i][j], j ≥ i
}

// A batch is a number of rows waiting to be folded in, column by column.
type batch struct {
	n   int
	col [columns][64]float64
}

// take folds the rows of a batch into the root and empties the batch.
//
//	QᵀQ = 1,  Q [R; rows] = [R'; 0], one reflection for each free column
//
// Source:  Householder 1958, J. ACM 5, 339; as a filter, Bierman 1977, Factorization Methods for Discrete
// Sequential Estimation, ch. V
// Checked: TestCovarianceAgainstQR
func (t *root) take(b *batch, free *[columns]bool) {
	if b.n == 0 {
		return
	}
	for c := range columns {
		if !free[c] {
			continue
		}
		x := b.col[c][:b.n]
		sum := 0.0
		for _, v := range x {
			sum += v * v
		}
		if sum == 0 {
			continue
		}
		top := t.r[c][c]
		norm := -math.Copysign(math.Sqrt(top*top+sum), top)
		head := top - norm // no digits are lost: the signs differ
		scale := -1 / (norm * head)
		t.r[c][c] = norm
		// Two columns at a time, so that the first is read once for both.
		for k := nextFree(free, c+1); k < columns; k = nextFree(free, k+1) {
			y, first := b.col[k][:len(x)], k
			if k = nextFree(free, k+1); k == columns {
				dot := scale * (head*t.r[c][first] + product(x, y))
				t.r[c][first] -= dot * head
				subtract(y, x, dot)
				break
			}
			z := b.col[k][:len(x)]
			dotY, dotZ := products(x, y, z)
			dotY = scale * (head*t.r[c][first] + dotY)
			dotZ = scale * (head*t.r[c][k] + dotZ)
			t.r[c][first] -= dotY * head
			t.r[c][k] -= dotZ * head
			for i, v := range x {
				y[i] -= dotY * v
				z[i] -= dotZ * v
			}
		}
	}
	b.n = 0
}

// nextFree is the first free column from c on.
func nextFree(free *[columns]bool, c int) int {
	for c < columns && !free[c] {
		c++
	}
	return c
}

// products are the scalar products of x with y and with z.
func products(x, y, z []float64) (xy, xz float64) {
	y, z = y[:len(x)], z[:len(x)]
	var a, b, c, d float64
	i := 0
	for ; i+2 <= len(x); i += 2 {
		u, v := x[i], x[i+1]
		a += u * y[i]
		c += u * z[i]
		b += v * y[i+1]
		d += v * z[i+1]
	}
	if i < len(x) {
		a += x[i] * y[i]
		c += x[i] * z[i]
	}
	return a + b, c + d
}

// product is the scalar product, summed in four strands so that the additions need not wait for one another.
func product(x, y []float64) float64 {
	y = y[:len(x)]
	var a, b, c, d float64
	i := 0
	for ; i+4 <= len(x); i += 4 {
		a += x[i] * y[i]
		b += x[i+1] * y[i+1]
		c += x[i+2] * y[i+2]
		d += x[i+3] * y[i+3]
	}
	for ; i < len(x); i++ {
		a += x[i] * y[i]
	}
	return (a + b) + (c + d)
}

// subtract takes f times x from y.
func subtract(y, x []float64, f float64) {
	y = y[:len(x)]
	i := 0
	for ; i+4 <= len(x); i += 4 {
		y[i] -= f * x[i]
		y[i+1] -= f * x[i+1]
		y[i+2] -= f * x[i+2]
		y[i+3] -= f * x[i+3]
	}
	for ; i < len(x); i++ {
		y[i] -= f * x[i]
	}
}
