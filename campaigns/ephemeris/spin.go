package ephemeris

import (
	"math"
	"math/big"
)

// A rotation is the spin of an entry.
type rotation struct {
	frequency, derivative, epoch decimal
	note                         string // beside the frequency
	epochNote                    string
	derivativeNote               string
	sigmaFrequency               float64
	sigmaDerivative              float64
}

// spin reads how the pulsar turns: as frequencies or, without them, as periods.
func (f *File) spin(scale timeScale) {
	r := &rotation{}
	switch f0, p0 := f.line("F0"), f.line("P0"); {
	case f0 != nil:
		r.frequency, r.sigmaFrequency = scale.length(f0.exact, -1), f0.Sigma
		if p0 != nil && math.Abs(f0.Value*p0.Value-1) > 1e-6 {
			f.remark(p0.Number, "contradiction: P0 %s is not 1/F0, F0 being %s in line %d; F0 is taken", p0.Text, f0.Text, f0.Number)
		}
	case p0 != nil:
		x := bigOf("1")
		r.frequency = scale.length(p0.exact.inDigits(x.Quo(x, p0.exact.big())), -1)
		r.sigmaFrequency = p0.Sigma / (p0.Value * p0.Value)
		r.note = "1/P0, P0 " + p0.Text + " s"
	default:
		f.remark(0, "no F0 and no P0: an entry without spin, so its TOA errors are not known")
		return
	}
	epoch := f.line("PEPOCH")
	if epoch == nil {
		f.remark(0, "no PEPOCH: the spin has no epoch and is left out")
		return
	}
	r.epoch = scale.epoch(epoch.exact)
	f.spinDown(r, scale)
	f.source.spin = r
}

func (f *File) spinDown(r *rotation, scale timeScale) {
	switch f1, p1 := f.line("F1"), f.line("P1"); {
	case f1 != nil:
		r.derivative, r.sigmaDerivative = scale.length(f1.exact, -2), f1.Sigma
	case p1 != nil:
		// F1 = −P1 F0²; a period's derivative is the same number in TCB and TDB
		x := r.frequency.big()
		x.Mul(x, x)
		x.Mul(x, p1.exact.big())
		r.derivative = p1.exact.inDigits(x.Neg(x))
		r.sigmaDerivative = p1.Sigma * r.frequency.value * r.frequency.value
		r.derivativeNote = "-P1 F0^2, P1 " + p1.Text
		if math.Abs(r.derivative.value) > 1e-6 {
			f.drop("P1", "it makes a derivative of %.3g Hz/s, and 1e-6 is the most that is accepted", r.derivative.value)
			r.derivative, r.sigmaDerivative = decimal{}, 0
		}
	}
}

// periodDays is 1/f in days, with digits to spare.
func periodDays(frequency decimal) decimal {
	x := bigOf("1")
	y := new(big.Float).Mul(frequency.big(), bigOf("86400"))
	return frequency.inDigits(x.Quo(x, y))
}
