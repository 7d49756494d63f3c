package sched

import "math"

// Credit returns the value of the term's curve for a slot from minute start to minute end: 0 or more,
// and 1 where the wanted is reached with Root, Share and Step. It is 0 while what is gathered is below
// Least. It never falls when the slot grows at either end.
func (t *Term) Credit(start, end int) float64 {
	return t.creditOf(t.gathered(start, end))
}

// Worth returns Scale × Credit, rounded to the nearest millionth. Rounding, division, square root and
// the logarithm's interpolation never fall where their argument does not, so worth never falls when a
// slot grows: without that, the start of a slot would not follow from the slot before it.
func (t *Term) Worth(start, end int) Micro {
	return t.worthOf(t.gathered(start, end))
}

// JobWorth returns the worth of a slot of the job from minute start to minute end: the sum of its terms.
func (p *Problem) JobWorth(job, start, end int) Micro {
	var sum Micro
	for i := range p.Jobs[job].Terms {
		sum += p.Jobs[job].Terms[i].Worth(start, end)
	}
	return sum
}

// PlanWorth returns the worth of the plan: worth is additive over slots.
func (p *Problem) PlanWorth(plan Plan) Micro {
	var sum Micro
	for _, s := range plan.Slots {
		sum += p.JobWorth(p.Nodes[s.Node].Job, s.Start, s.End)
	}
	return sum
}

// gathered answers for any minutes: those outside the session gather nothing.
func (t *Term) gathered(start, end int) int32 {
	last := len(t.Cum) - 1
	start, end = max(0, min(start, last)), max(0, min(end, last))
	if end <= start {
		return 0
	}
	return t.Cum[end] - t.Cum[start]
}

func (t *Term) worthOf(gathered int32) Micro {
	// The conversion keeps the product from being fused with the sum, which some processors would
	// round differently.
	return Micro(math.Floor(float64(float64(t.Scale)*t.creditOf(gathered)) + 0.5))
}

func (t *Term) creditOf(gathered int32) float64 {
	if gathered <= 0 || gathered < t.Least {
		return 0
	}
	x := float64(gathered) / float64(t.Wanted)
	switch t.Curve {
	case Root:
		if x <= 1 {
			return math.Sqrt(x)
		}
		// The slope of √x at 1 is a half. A quarter of it goes on, so that idle time is used but
		// never preferred to another source that is due.
		return 1 + float64((x-1)*0.125)
	case Share:
		return min(x, 1)
	case Log:
		return halfLog(x)
	case Step:
		if x >= 1 {
			return 1
		}
	}
	return 0
}

// logSteps is the number of straight pieces in each octave of the logarithm: the error of the chords,
// 1/(8·256²) = 2·10⁻⁶ at most, is a hundred times below what a worth is shown to.
const logSteps = 256

// logKnots holds ln(1 + i/logSteps).
var logKnots = func() (k [logSteps + 1]float64) {
	for i := range k {
		k[i] = lnMantissa(1 + float64(i)/logSteps)
	}
	return k
}()

// halfLog returns ½ ln(1+x) along chords between fixed knots. The library's logarithm is good to the last
// bit but one; that bit could make worth fall by a millionth, and differs between processors.
func halfLog(x float64) float64 {
	frac, exp := math.Frexp(1 + x)      // frac in [0.5, 1)
	pos := (2*frac - 1) * logSteps      // exact: powers of two
	i := min(int(pos), logSteps-1)      //
	rise := logKnots[i+1] - logKnots[i] //
	ln := logKnots[i] + float64(rise*(pos-float64(i)))
	ln = min(ln, logKnots[i+1])
	return 0.5 * (float64(float64(exp-1)*logKnots[logSteps]) + ln)
}

// lnMantissa returns ln m for m in [1, 2] from its series in (m−1)/(m+1), in the same order of
// operations on every processor.
//
//	ln m = 2 (s + s³/3 + s⁵/5 + …), s = (m−1)/(m+1)
//
// Given:   m in [1, 2]
// Returns: natural logarithm, good to 10⁻¹⁵
// Source:  Abramowitz & Stegun, Handbook of Mathematical Functions, 1964, eq. 4.1.27
// Checked: TestHalfLog (against math.Log1p)
func lnMantissa(m float64) float64 {
	s := (m - 1) / (m + 1)
	square := float64(s * s)
	power, sum := s, 0.0
	for n := 1; n < 40; n += 2 {
		sum += float64(power / float64(n))
		power = float64(power * square)
	}
	return 2 * sum
}
