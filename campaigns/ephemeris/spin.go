package ephemeris

import (
	"fmt"
	"math"
	"math/big"
	"strconv"
	"strings"
)

// A rotation is the spin of an entry.
type rotation struct {
	frequency, derivative, epoch decimal
	note                         string // beside the frequency
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

// glitch finds the last glitch. Its step is said and not added: the frequency is that of its own epoch.
func (f *File) glitch(scale timeScale) {
	if len(f.glitches) == 0 {
		return
	}
	dates := map[string]*Line{} // by the glitch's number
	var last *Line
	for _, l := range f.glitches {
		number, isDate := strings.CutPrefix(l.Key, "GLEP_")
		switch {
		case !isDate:
		case l.Value <= firstMJD || l.Value >= lastMJD:
			f.remark(l.Number, "%s %s: accepted: a modified Julian date from 1900 to 2200; left out", l.Key, l.Text)
		default:
			dates[number] = l
			if last == nil || l.Value > last.Value {
				last = l
			}
		}
	}
	if last == nil {
		f.remark(f.glitches[0].Number, "terms of a glitch without its date: left out")
		return
	}
	f.source.glitch = scale.epoch(last.exact)
	what := "1 glitch"
	if len(dates) > 1 {
		what = strconv.Itoa(len(dates)) + " glitches"
	}
	what += ", the last at MJD " + last.Text + ": noted as glitch_mjd"
	if steps := f.stepsAfterEpoch(dates); steps != 0 {
		what += fmt.Sprintf("; after PEPOCH F0 changes by %.3g Hz, which is not added: the spin is that of PEPOCH", steps)
	}
	f.remark(last.Number, "%s", what)
}

// stepsAfterEpoch is by how much the glitches after PEPOCH change the frequency for good.
func (f *File) stepsAfterEpoch(dates map[string]*Line) (steps float64) {
	spin := f.line("PEPOCH")
	if spin == nil {
		return 0
	}
	for _, l := range f.glitches {
		number, isStep := strings.CutPrefix(l.Key, "GLF0_")
		if at := dates[number]; isStep && at != nil && at.Value > spin.Value {
			steps += l.Value
		}
	}
	return steps
}

// periodDays is 1/f in days, with digits to spare.
func periodDays(frequency decimal) decimal {
	x := bigOf("1")
	y := new(big.Float).Mul(frequency.big(), bigOf("86400"))
	return frequency.inDigits(x.Quo(x, y))
}
