package campaigns

import (
	"fmt"
	"math"
	"time"

	"example.org/tallystick/sched"
	"example.org/tallystick/sky/orbit"
	"example.org/tallystick/sky/timing"
)

// mostNeed is the largest need of an aim that counts what is missing: as the cap on a cadence's debt, it
// keeps one source from swallowing a session.
const mostNeed = 5

// phaseCoverage adds a term for each orbital-phase bin that still lacks visits. A full visit of a bin that
// takes all of the wanted minutes is worth what is missing of it; shorter bins are worth less in proportion,
// so that a minute is worth the same in a short orbit as in a long one.
func (jb *jobBuilder) phaseCoverage(aim *Aim) {
	k := jb.source.knowledge
	c := jb.books.coverage(k, aim)
	jb.owes(aim, c.debt())
	minutes := jb.books.visitMinutes(k.source, aim)
	full := jb.books.binMinutes(k.source, aim)
	jb.visit(aim, minutes)
	bins := make([]int, jb.prepared.Problem.Minutes+1) // by minute
	for m := range bins {
		bins[m] = binOf(k.phase(jb.prepared.Instant(m)), aim.Bins)
	}
	for i := range c.needs {
		missing := math.Min(c.missing(i), mostNeed)
		if missing <= 0 {
			continue
		}
		lo, hi := float64(i)/float64(aim.Bins), float64(i+1)/float64(aim.Bins)
		jb.term(aim, sched.Term{
			Label: fmt.Sprintf("orbital phase %.2f to %.2f", lo, hi),
			Scale: jb.scale(missing * full / minutes), Curve: sched.Share, Wanted: max(1, shares(full)),
			Cum: jb.gather(func(m int) float64 {
				if bins[m] != i || jb.untimable(m) {
					return 0
				}
				return 1
			}),
			Why: fmt.Sprintf("%.1f of %d visits missing", missing, aim.PerBin),
		})
	}
}

// conjunction adds a term for each superior conjunction that the session touches. Its window is worth what is missing
// of the passages, as many times as it holds ordinary visits of the source: a minute at the conjunction is worth as much
// as a minute of a visit that is so often due. Counted as one visit, a window of hours would never be kept.
func (jb *jobBuilder) conjunction(aim *Aim) error {
	k, p := jb.source.knowledge, jb.prepared
	done, err := jb.books.passages(k, aim)
	if err != nil {
		return err
	}
	jb.owes(aim, done.debt())
	if done.missing() <= 0 {
		return nil
	}
	for _, pass := range k.superior(aim.HalfWidthTurns, p.Session.Start, p.Session.End) {
		if pass.trust.TrustFor(aim.HalfWidthTurns) == orbit.Refuse {
			continue
		}
		whole := k.wholeWeight(pass)
		wide := 2 * pass.halfWide.Minutes()
		jb.stretch(math.Min(wide, 10), wide)
		jb.term(aim, sched.Term{
			Label: "superior conjunction at " + pass.centre.UTC().Format("15:04"),
			Scale: jb.scale(math.Min(done.missing(), mostNeed) * math.Max(1, whole/jb.visitMinutes())), Curve: sched.Share, Wanted: max(1, shares(whole)),
			Cum: jb.gather(func(m int) float64 {
				if jb.untimable(m) {
					return 0
				}
				return k.conjunctionWeight(pass, p.Instant(m))
			}),
			Why: done.caught() + "; " + pass.say(aim.HalfWidthTurns),
		})
	}
	return nil
}

// visitMinutes is how long an ordinary visit of the source is: as the first of its aims for one says.
func (jb *jobBuilder) visitMinutes() float64 {
	aims := jb.source.src.Aims
	for i := range aims {
		if k := aims[i].Kind; k == Conjunction || k == Calibration {
			continue
		}
		if minutes, ok := jb.wantedMinutes(&aims[i]); ok && minutes > 0 {
			return minutes
		}
	}
	return usualVisitMin
}

// conjunctionWeight is how much an instant counts in a passage: the squared signature of the Shapiro delay
// that a fit of the orbit leaves, 1 at its centre and 0 outside the window.
func (k *knowledge) conjunctionWeight(pass passage, t time.Time) float64 {
	off := t.Sub(pass.centre)
	if off < -pass.halfWide || off > pass.halfWide {
		return 0
	}
	turns := off.Hours() / 24 / k.source.Orbit.PeriodDays
	return timing.ConjunctionWeight(0.25+turns, k.source.Orbit.SinI)
}

// untimable says that pulses of a minute are of no use with this receiver.
func (jb *jobBuilder) untimable(minute int) bool {
	return jb.source.eclipses[jb.receiver].untimable[minute]
}

// gather adds up, minute by minute, what the receiver's effective minutes bring at a weight from 0 to 1.
func (jb *jobBuilder) gather(weight func(minute int) float64) []int32 {
	eff := jb.effective()
	cum := make([]int32, len(eff))
	sum := 0.0
	for m := 1; m < len(eff); m++ {
		sum += float64(eff[m]-eff[m-1]) * weight(m-1)
		cum[m] = int32(sum)
	}
	return cum
}
