package campaigns

import (
	"fmt"
	"math"
	"slices"
	"time"

	"example.org/tallystick/sched"
	"example.org/tallystick/sky/orbit"
)

// A passage is one superior conjunction as it is heard at the observatory.
type passage struct {
	centre   time.Time
	halfWide time.Duration // the aim's half-width, widened where the orbit is not known better
	trust    orbit.Prediction
}

func (p *passage) from() time.Time { return p.centre.Add(-p.halfWide) }
func (p *passage) to() time.Time   { return p.centre.Add(p.halfWide) }

// say judges the prediction, for an aim of a half-width, in a line.
func (p *passage) say(halfWidthTurns float64) string {
	if !sigmaKnown(p.trust) {
		return "taken as the ephemeris has it, which gives no error of the epoch or of the period"
	}
	return p.trust.Say(halfWidthTurns)
}

// superior returns the superior conjunctions whose windows touch the time from one instant to another.
func (k *knowledge) superior(halfWidthTurns float64, from, to time.Time) []passage {
	o := k.clock.orbit
	period := time.Duration(o.PeriodDays * 24 * float64(time.Hour))
	// A widened window is at most four times as wide as the wanted one.
	reach := time.Duration(math.Min(0.5, 4*halfWidthTurns)*float64(period)) + k.clock.reach()
	var out []passage
	for _, mjd := range o.Conjunctions(orbit.Superior, tdbMJD(from.Add(-reach)), tdbMJD(to.Add(reach))) {
		p := passage{centre: k.clock.heardAt(mjd), trust: o.ConjunctionError(k.source.orbitSigmas(), mjd)}
		wide := halfWidthTurns
		if p.trust.TrustFor(halfWidthTurns) == orbit.Widen {
			wide = p.trust.WidenedTurns(halfWidthTurns)
		}
		p.halfWide = time.Duration(wide * float64(period))
		if p.to().After(from) && p.from().Before(to) {
			out = append(out, p)
		}
	}
	return out
}

// passages is what has been caught, and missed, of a conjunction aim's passages.
type passages struct {
	aim    *Aim
	need   float64  // the share of the wanted that is missing
	missed int      // passages of which half or more could have been had in a session, and nothing was
	next   *passage // the first after the books' moment; nil where the elements do not say
}

func (p *passages) missing() float64 { return p.need * float64(p.aim.Wanted) }
func (p *passages) debt() float64    { return p.need }

// caught says how the account stands.
func (p *passages) caught() string {
	s := fmt.Sprintf("%.1f of %s caught since %s", float64(p.aim.Wanted)-p.missing(), count(p.aim.Wanted, "passage"), p.aim.Since.UTC().Format(time.DateOnly))
	if p.missed > 0 {
		s += fmt.Sprintf(", %d missed in past sessions", p.missed)
	}
	return s
}

// why is the account's line: what is caught, and whether the next passage can be predicted.
func (p *passages) why() string {
	switch {
	case p.next == nil:
		return p.caught() + "; the orbit's elements mean nothing any more: too far from their epoch"
	case !sigmaKnown(p.next.trust) || p.next.trust.TrustFor(p.aim.HalfWidthTurns) != orbit.Trustworthy:
		return p.caught() + "; next: " + p.next.say(p.aim.HalfWidthTurns)
	}
	return p.caught() + "; next " + p.next.centre.UTC().Format("2006-01-02 15:04")
}

// flag warns of a next passage that is not predicted well enough; empty without.
func (p *passages) flag() string {
	switch {
	case p.next == nil || !sigmaKnown(p.next.trust):
		return ""
	case p.next.trust.TrustFor(p.aim.HalfWidthTurns) == orbit.Refuse:
		return "prediction refused"
	case p.next.trust.TrustFor(p.aim.HalfWidthTurns) == orbit.Widen:
		return "window widened"
	}
	return ""
}

// passages counts what has been caught since the aim's date, of each passage the share of its weight, and what of the
// rest was missed.
func (b *books) passages(k *knowledge, aim *Aim) (passages, error) {
	return once(b, b.passings, aim, func() (passages, error) { return b.pass(k, aim) })
}

func (b *books) pass(k *knowledge, aim *Aim) (passages, error) {
	caught := map[int64]float64{} // by the instant of its centre: seen with two receivers, or in two parts, it is one passage
	for _, e := range b.entries[k.source.Name] {
		if e.Start.Before(aim.Since) || !aim.wants(e.Receiver) {
			continue
		}
		for _, pass := range k.superior(aim.HalfWidthTurns, e.Start, e.End) {
			caught[pass.centre.UnixNano()] += e.paid() * k.shareOf(pass, e.Start, e.End)
		}
	}
	p := passages{aim: aim}
	shares := make([]float64, 0, len(caught))
	for _, share := range caught {
		shares = append(shares, share)
	}
	slices.Sort(shares) // so that the sum does not depend on the order of a map
	p.need = sched.ConjunctionNeed(aim.Wanted, shares)
	var err error
	if p.missed, err = b.missed(k, aim, caught); err != nil {
		return p, err
	}
	period := time.Duration(k.source.Orbit.PeriodDays * 24 * float64(time.Hour))
	for _, pass := range k.superior(aim.HalfWidthTurns, b.at, b.at.Add(period).Add(period/10)) {
		if pass.centre.After(b.at) {
			p.next = &pass
			break
		}
	}
	return p, nil
}

// missed counts the passages that were not observed although half or more of their weight was up in a past session.
func (b *books) missed(k *knowledge, aim *Aim, caught map[int64]float64) (int, error) {
	had := map[int64]float64{}
	for i := range b.campaign.Sessions {
		s := &b.campaign.Sessions[i]
		if s.End.After(b.now) || s.Start.Before(aim.Since) || !shareOne(aim.Receivers, s.Receivers) {
			continue
		}
		passes := k.superior(aim.HalfWidthTurns, s.Start, s.End)
		if len(passes) == 0 {
			continue
		}
		site := b.campaign.site(s.Site)
		where, err := site.onEarth()
		if err != nil {
			return 0, fmt.Errorf("site %q: %w", site.Name, err)
		}
		frame := b.frames.at(s.Start.Add(s.End.Sub(s.Start) / 2))
		for _, w := range where.Windows(frame, frame.Place(k.source.target()), s.Start, s.End, site.limits(k.source)) {
			for _, pass := range passes {
				if pass.trust.TrustFor(aim.HalfWidthTurns) != orbit.Refuse {
					had[pass.centre.UnixNano()] += k.shareOf(pass, w.From, w.To)
				}
			}
		}
	}
	missed := 0
	for centre, share := range had {
		if share >= 0.5 && caught[centre] == 0 {
			missed++
		}
	}
	return missed, nil
}

// step is how finely a passage's window is weighed: by the minute, and long ones in five hundred steps to either side.
func (p *passage) step() time.Duration { return max(time.Minute, p.halfWide/500) }

// wholeWeight is what a passage's window weighs: minutes at its centre.
func (k *knowledge) wholeWeight(pass passage) float64 {
	whole := 0.0
	for t := pass.from(); t.Before(pass.to()); t = t.Add(pass.step()) {
		whole += k.conjunctionWeight(pass, t)
	}
	return whole * pass.step().Minutes()
}

// shareOf is the share of a passage's weight that lies between two instants.
func (k *knowledge) shareOf(pass passage, from, to time.Time) float64 {
	got, whole := 0.0, 0.0
	for t := pass.from(); t.Before(pass.to()); t = t.Add(pass.step()) {
		w := k.conjunctionWeight(pass, t)
		whole += w
		if !t.Before(from) && t.Before(to) {
			got += w
		}
	}
	if whole == 0 {
		return 0
	}
	return got / whole
}
