package ephemeris

import (
	"fmt"
	"math"
	"math/big"
	"slices"
	"strings"
)

// A glitch is one of those that a file dates. From its date on the frequency is larger by
//
//	GLF0 + GLF1 dt + GLF2 dt²/2 + GLF0D e^(−dt/GLTD)
//
// dt after it. Its step of the phase, GLPH, is not needed: a campaign counts no turns from a date of its own.
//
// Source:  Hobbs, Edwards & Manchester 2006, MNRAS 369, 655
// Checked: TestGlitches
type glitch struct {
	number   string
	at       *Line
	terms    map[string]*Line // by the key without the glitch's number
	date     decimal          // in TDB
	recovery decimal          // GLTD in days of TDB
}

// largestStep is the most that a frequency may change by at a glitch, as part of itself: thirty times what the
// largest that are published do.
const largestStep = 1e-3

// glitched finds the glitches, notes the last one, and moves the spin to a date after all of them.
func (f *File) glitched(scale timeScale) {
	all := f.datedGlitches(scale)
	if len(all) == 0 {
		return
	}
	last := all[len(all)-1]
	f.source.glitch = last.date
	what := "1 glitch"
	if len(all) > 1 {
		what = fmt.Sprintf("%d glitches", len(all))
	}
	what += ", the last at MJD " + last.at.Text + ": noted as glitch_mjd"
	if s := f.source.spin; s != nil {
		what += f.afterGlitches(s, all, scale)
	}
	f.remark(last.at.Number, "%s", what)
}

// datedGlitches returns the glitches in order of their dates.
func (f *File) datedGlitches(scale timeScale) (all []*glitch) {
	byNumber := map[string]*glitch{}
	for _, l := range f.glitches {
		number, isDate := strings.CutPrefix(l.Key, "GLEP_")
		switch {
		case !isDate:
		case l.Value <= firstMJD || l.Value >= lastMJD:
			f.remark(l.Number, "%s %s: accepted: a modified Julian date from 1900 to 2200; left out", l.Key, l.Text)
		default:
			if before := byNumber[number]; before != nil {
				f.remark(l.Number, "contradiction: %s is %s here and %s in line %d; this one is taken", l.Key, l.Text, before.at.Text, before.at.Number)
			}
			byNumber[number] = &glitch{number: number, at: l, terms: map[string]*Line{}, date: scale.epoch(l.exact)}
		}
	}
	undated := 0
	for _, l := range f.glitches {
		key, number, _ := strings.Cut(l.Key, "_")
		switch g := byNumber[number]; {
		case key == "GLEP":
		case g == nil:
			if undated == 0 {
				undated = l.Number
			}
		default:
			g.terms[key] = l
		}
	}
	if undated > 0 {
		f.remark(undated, "terms of a glitch without its date: left out")
	}
	for _, g := range byNumber {
		all = append(all, g)
	}
	slices.SortFunc(all, func(a, b *glitch) int {
		if c := a.date.big().Cmp(b.date.big()); c != 0 {
			return c
		}
		return a.at.Number - b.at.Number
	})
	for _, g := range all {
		g.checkRecovery(f, scale)
	}
	return all
}

// checkRecovery takes a decaying term out that says not how fast.
func (g *glitch) checkRecovery(f *File, scale timeScale) {
	step, days := g.terms["GLF0D"], g.terms["GLTD"]
	switch {
	case step == nil:
	case days == nil || days.Value < 0.001 || days.Value > 1e5:
		f.remark(step.Number, "%s %s without a GLTD_%s of 0.001 to 100000 d: left out", step.Key, step.Text, g.number)
		delete(g.terms, "GLF0D")
	default:
		g.recovery = scale.length(days.exact, 1)
	}
}

// afterGlitches moves the spin to a date after the last glitch: the end of the data where that is known and later,
// else the glitch itself. If all are before PEPOCH it stays there. It returns what it did in words.
func (f *File) afterGlitches(s *rotation, all []*glitch, scale timeScale) string {
	at, where := s.epoch, "PEPOCH"
	if last := all[len(all)-1].date; last.big().Cmp(at.big()) > 0 {
		at, where = last, "the last glitch"
		if l := f.line("FINISH"); l != nil {
			if end := scale.epoch(l.exact); end.big().Cmp(at.big()) > 0 {
				at, where = end, "FINISH"
			}
		}
	}
	moved := f.spinAt(s, at, scale)
	before := moved.frequency.value
	var left []string
	for _, g := range all {
		left = append(left, g.add(&moved, at, scale)...)
	}
	step := moved.frequency.value - before
	switch {
	case math.Abs(step) > largestStep*s.frequency.value || math.Abs(moved.derivative.value) > 1e-6:
		return fmt.Sprintf("; F0 would change by %.3g Hz and F1 become %.3g Hz/s, more than any glitch does: nothing is added, the spin is that of PEPOCH", step, moved.derivative.value)
	case !(moved.frequency.value > 0 && moved.frequency.value < 2000 && math.Abs(before/s.frequency.value-1) < 0.5):
		return fmt.Sprintf("; F1 and its like would make the frequency %.3g Hz until then: nothing is added, the spin is that of PEPOCH", before)
	case step == 0 && moved.derivative.value == s.derivative.value && where == "PEPOCH":
		return ""
	}
	if where != "PEPOCH" {
		moved.epochNote = "TDB, " + where + "; PEPOCH is " + f.line("PEPOCH").Text
	}
	moved.note = strings.TrimPrefix(moved.note+fmt.Sprintf("; %+.4g Hz of it by glitches", step), "; ")
	if moved.sigmaFrequency > 100 {
		moved.sigmaFrequency = 0
	}
	*s = moved
	what := fmt.Sprintf("; the spin is that of MJD %s, %s, with %+.4g Hz by glitches", at.text, where, step)
	if len(left) > 0 {
		what += ": " + strings.Join(left, ", ")
	}
	if s.sigmaFrequency == 0 {
		what += "; not every term has an error, so that of the frequency is not known"
	}
	return what
}

// spinAt returns the spin without glitches at another date, with the errors that its own and the way there make.
func (f *File) spinAt(s *rotation, at decimal, scale timeScale) rotation {
	moved := *s
	moved.epoch = at
	dt := secondsBetween(s.epoch, at)
	if dt.Sign() == 0 {
		return moved
	}
	// Taylor's series, each term made of the one before: dt^n/n!
	frequency, derivative := s.frequency.big(), s.derivative.orZero()
	term := new(big.Float).Copy(dt)
	frequency.Add(frequency, new(big.Float).Mul(derivative, term))
	for n := 2; n < 20; n++ {
		c := bigOf("0")
		if l := f.line(fmt.Sprintf("F%d", n)); l != nil {
			c = scale.length(l.exact, -n-1).big()
		}
		derivative.Add(derivative, new(big.Float).Mul(c, term))
		term.Mul(term, dt)
		term.Quo(term, new(big.Float).SetInt64(int64(n)))
		frequency.Add(frequency, new(big.Float).Mul(c, term))
	}
	moved.frequency, moved.derivative = s.frequency.inDigits(frequency), s.derivative.inDigits(derivative)
	seconds, _ := dt.Float64()
	moved.sigmaFrequency = f.sigmaAfter(s, seconds)
	return moved
}

// sigmaAfter is the error of the frequency so many seconds from the spin's epoch: 0, not known, if a term that counts has none.
func (f *File) sigmaAfter(s *rotation, seconds float64) float64 {
	known := s.sigmaFrequency
	if known == 0 || s.derivative.value != 0 && s.sigmaDerivative == 0 {
		return 0
	}
	known = math.Hypot(known, s.sigmaDerivative*seconds)
	factor := seconds
	for n := 2; n < 20; n++ {
		factor *= seconds / float64(n)
		if l := f.line(fmt.Sprintf("F%d", n)); l != nil && l.Value != 0 {
			if l.Sigma == 0 {
				return 0
			}
			known = math.Hypot(known, l.Sigma*factor)
		}
	}
	return known
}

// add adds a glitch to a spin that is of a date after it, and returns what is worth saying.
func (g *glitch) add(s *rotation, at decimal, scale timeScale) (left []string) {
	dt := secondsBetween(g.date, at)
	seconds, _ := dt.Float64()
	if seconds < 0 {
		return nil // only ever with a spin that stays at PEPOCH: afterGlitches goes beyond the last one
	}
	frequency, derivative := s.frequency.big(), s.derivative.orZero()
	sum := func(to *big.Float, key string, power int, by *big.Float) {
		if l := g.terms[key]; l != nil {
			to.Add(to, new(big.Float).Mul(scale.length(l.exact, power).big(), by))
		}
	}
	one, half := bigOf("1"), new(big.Float).Mul(dt, dt)
	half.Quo(half, bigOf("2"))
	sum(frequency, "GLF0", -1, one)
	sum(frequency, "GLF1", -2, dt)
	sum(frequency, "GLF2", -3, half)
	sum(derivative, "GLF1", -2, one)
	sum(derivative, "GLF2", -3, dt)
	still := 0.0
	if l := g.terms["GLF0D"]; l != nil {
		still = recoveryLeft(seconds/secPerDay, g.recovery.value)
		left = append(left, fmt.Sprintf("%.0f %% of the recovery within %s d is still to come", 100*still, g.recovery.text))
		sum(frequency, "GLF0D", -1, big.NewFloat(still))
		sum(derivative, "GLF0D", -1, big.NewFloat(-still/(g.recovery.value*secPerDay)))
	}
	s.frequency, s.derivative = s.frequency.inDigits(frequency), s.derivative.inDigits(derivative)
	s.sigmaFrequency = g.sigma(s.sigmaFrequency, map[string]float64{"GLF0": 1, "GLF1": seconds, "GLF2": seconds * seconds / 2, "GLF0D": still})
	s.sigmaDerivative = g.sigma(s.sigmaDerivative, map[string]float64{"GLF1": 1, "GLF2": seconds, "GLF0D": still / max(g.recovery.value*secPerDay, 1)})
	return left
}

// sigma adds the errors of a glitch's terms to one that is known; with a term that counts and has none it is 0, not known.
func (g *glitch) sigma(known float64, factors map[string]float64) float64 {
	for _, key := range [...]string{"GLF0", "GLF1", "GLF2", "GLF0D"} {
		l, factor := g.terms[key], factors[key]
		if l == nil || factor == 0 || l.Value == 0 {
			continue
		}
		if known == 0 || l.Sigma == 0 {
			return 0
		}
		known = math.Hypot(known, l.Sigma*factor)
	}
	return known
}

// recoveryLeft is which part of an exponential recovery is still to come some days after a glitch.
//
//	e^(−t/τ)
//
// Source:  Basu et al. 2020, MNRAS 491, 3182, where τ is about 30 d
// Checked: TestRecoveryLeft (PHA-051)
func recoveryLeft(days, tauDays float64) float64 { return math.Exp(-days / tauDays) }

// secondsBetween is b − a for dates in days.
func secondsBetween(a, b decimal) *big.Float {
	x := new(big.Float).Sub(b.big(), a.big())
	return x.Mul(x, bigOf("86400"))
}

// orZero is the number, 0 where there is none.
func (d decimal) orZero() *big.Float {
	if d.text == "" {
		return bigOf("0")
	}
	return d.big()
}
