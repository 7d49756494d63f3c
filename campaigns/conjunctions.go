package campaigns

import (
	"cmp"
	"fmt"
	"slices"
	"time"

	"example.org/tallystick/sky"
	"example.org/tallystick/sky/orbit"
)

// A ConjunctionKind is what happens at a point of an orbit.
type ConjunctionKind string

// The kinds.
const (
	SuperiorConjunction ConjunctionKind = "superior conjunction" // the pulsar is behind its companion
	InferiorConjunction ConjunctionKind = "inferior conjunction" // it is in front
	EclipseStart        ConjunctionKind = "eclipse start"
	EclipseEnd          ConjunctionKind = "eclipse end"
)

// A ConjunctionRow is a conjunction, or an end of an eclipse, that happens while the source is above a site's horizon.
type ConjunctionRow struct {
	Source           string
	Kind             ConjunctionKind
	At               time.Time // as it is heard at the observatory
	Prediction       orbit.Prediction
	SigmaKnown       bool     // the ephemeris gives the errors of epoch and period; else the Prediction says nothing
	Receivers        []string // of an eclipse whose length goes with frequency: those that it is told for; empty where it is the same for all
	HalfWidthTurns   float64  // within which it is wanted: the prediction is judged against it
	ElevationDeg     float64
	SunSeparationDeg float64
	Usable           bool   // within elevation limits, horizon mask, Sun limit and the mount's hour angles
	Session          string // under way then at the site; empty without one
}

// Trust is the judgement in one word: trustworthy, widened, refused, or unknown without errors to judge by.
func (r *ConjunctionRow) Trust() string {
	if !r.SigmaKnown {
		return "unknown"
	}
	switch r.Prediction.TrustFor(r.HalfWidthTurns) {
	case orbit.Trustworthy:
		return "trustworthy"
	case orbit.Widen:
		return "widened"
	}
	return "refused"
}

// Why is the judgement in a line.
func (r *ConjunctionRow) Why() string {
	if !r.SigmaKnown {
		return "unknown: the ephemeris gives no sigma_epoch_days or no sigma_period_days"
	}
	return r.Prediction.Say(r.HalfWidthTurns)
}

// UnaimedHalfWidthTurns is what a prediction is judged against in a source without a conjunction aim.
const UnaimedHalfWidthTurns = 0.05

// shortOrbitDays: of shorter orbits only what falls in a session is listed. An orbit of 90 minutes has 450
// conjunctions in a fortnight, and nobody can act on those outside a session.
const shortOrbitDays = 1

// mostTurns is how many turns of one orbit are looked at in one stretch; a pulsar's orbit that turns more often
// in a session of two days would be shorter than half a minute.
const mostTurns = 6000

// Conjunctions returns the superior and inferior conjunctions and the eclipses of all binaries that are heard
// between two instants while the source is above the horizon of a site, in time order. Of orbits under a day only
// those within a session at that site are listed; the second result names these sources. It errs where the site
// is nowhere or the time outside those that places on the sky are worked out for.
func Conjunctions(c *Campaign, site *Site, from, to time.Time) (rows []ConjunctionRow, short []string, err error) {
	p, err := newPassageSky(c, site, from, to)
	if err != nil {
		return nil, nil, err
	}
	whole := []stretch{{from, to}}
	for i := range c.Sources {
		src := &c.Sources[i]
		if src.Orbit == nil {
			continue
		}
		k, err := newKnowledge(src, p.frames)
		if err != nil {
			return nil, nil, err
		}
		stretches := whole
		if src.Orbit.PeriodDays < shortOrbitDays {
			stretches = p.inSessions()
			short = append(short, src.Name)
		}
		if rows, err = p.add(rows, k, stretches); err != nil {
			return nil, nil, err
		}
	}
	slices.SortStableFunc(rows, func(a, b ConjunctionRow) int {
		return cmp.Or(a.At.Compare(b.At), cmp.Compare(a.Source, b.Source), cmp.Compare(a.Kind, b.Kind))
	})
	return rows, short, nil
}

// A stretch is the time between two instants.
type stretch struct{ from, to time.Time }

// passageSky is the sky of a site over the days that are asked about.
type passageSky struct {
	site      *Site
	where     *sky.Site
	from, to  time.Time
	days      []*sky.Frame // for windows
	frames    *frames
	sessions  []*Session  // at the site, in time order
	receivers []*Receiver // of the site
}

func newPassageSky(c *Campaign, site *Site, from, to time.Time) (*passageSky, error) {
	p := &passageSky{site: site, from: from, to: to, frames: newFrames()}
	var err error
	if p.where, err = site.onEarth(); err != nil {
		return nil, fmt.Errorf("site %q: %w", site.Name, err)
	}
	if p.days, err = sky.NewFrames(from, to); err != nil {
		return nil, err
	}
	for i := range c.Sessions {
		if s := &c.Sessions[i]; s.Site == site.Name && s.End.After(from) && s.Start.Before(to) {
			p.sessions = append(p.sessions, s)
		}
	}
	for i := range c.Receivers {
		if r := &c.Receivers[i]; r.Site == site.Name {
			p.receivers = append(p.receivers, r)
		}
	}
	return p, nil
}

// inSessions are the stretches of the sessions.
func (p *passageSky) inSessions() []stretch {
	var out []stretch
	for _, s := range p.sessions {
		out = append(out, stretch{later(s.Start, p.from), earlier(s.End, p.to)})
	}
	return out
}

// add appends what happens to one source.
func (p *passageSky) add(rows []ConjunctionRow, k *knowledge, stretches []stretch) ([]ConjunctionRow, error) {
	src := k.source
	limits := p.site.limits(src)
	windows := p.where.Season(p.days, src.target(), p.from, p.to, limits)
	sigmas := src.orbitSigmas()
	for _, s := range stretches {
		if turns := s.to.Sub(s.from).Hours() / 24 / src.Orbit.PeriodDays; turns > mostTurns {
			return nil, fmt.Errorf("%s: found an orbit of %.3g d, %.0f turns from %s to %s; accepted: at most %d", src.Name, src.Orbit.PeriodDays, turns,
				s.from.UTC().Format(time.RFC3339), s.to.UTC().Format(time.RFC3339), mostTurns)
		}
		for _, e := range k.passing(s, p.receivers) {
			frame := p.frames.at(e.at)
			place := frame.Place(src.target())
			_, el := p.where.AzEl(frame, &place, e.at)
			if el < 0 {
				continue
			}
			prediction := k.clock.orbit.ConjunctionError(sigmas, e.orbitMJD)
			rows = append(rows, ConjunctionRow{
				Source: src.Name, Kind: e.kind, At: e.at,
				Prediction: prediction, SigmaKnown: sigmaKnown(prediction), Receivers: e.receivers,
				HalfWidthTurns: src.conjunctionHalfWidth(), ElevationDeg: el, SunSeparationDeg: frame.SunDeg(place, e.at),
				Usable: within(windows, e.at), Session: p.session(e.at),
			})
		}
	}
	return rows, nil
}

// session is the one that is under way.
func (p *passageSky) session(at time.Time) string {
	for _, s := range p.sessions {
		if !at.Before(s.Start) && at.Before(s.End) {
			return s.Name
		}
	}
	return ""
}

// within says that an instant lies in one of the windows, which are in time order.
func within(windows []sky.Window, at time.Time) bool {
	i, _ := slices.BinarySearchFunc(windows, at, func(w sky.Window, at time.Time) int { return w.To.Compare(at) })
	return i < len(windows) && !at.Before(windows[i].From)
}

// conjunctionHalfWidth is that of the source's first conjunction aim.
func (s *Source) conjunctionHalfWidth() float64 {
	for _, a := range s.Aims {
		if a.Kind == Conjunction {
			return a.HalfWidthTurns
		}
	}
	return UnaimedHalfWidthTurns
}

// An orbitEvent is something that is heard at an instant.
type orbitEvent struct {
	kind      ConjunctionKind
	at        time.Time
	orbitMJD  float64
	receivers []string // of an eclipse
}

// An eclipseFor is an eclipse, and the receivers that see it as wide; none where all do.
type eclipseFor struct {
	eclipse   orbit.Eclipse
	receivers []string
}

// eclipsesFor are the source's eclipses, one for all receivers where its width does not depend on frequency, or
// where there are none.
func (o *Orbit) eclipsesFor(receivers []*Receiver) []eclipseFor {
	switch e := o.Eclipse; {
	case e == nil:
		return nil
	case e.ReferenceMHz == 0 || len(receivers) == 0:
		return []eclipseFor{{eclipse: orbit.Eclipse{CentreTurns: e.CentreTurns, HalfWidthTurns: e.HalfWidthTurns, MarginTurns: e.MarginTurns}}}
	}
	var out []eclipseFor
	for _, r := range receivers {
		out = append(out, eclipseFor{o.Eclipse.at(r), []string{r.Name}})
	}
	return out
}

// sigmaKnown says that a prediction rests on the errors of both epoch and period.
func sigmaKnown(p orbit.Prediction) bool {
	return !slices.Contains(p.Cautions, orbit.EpochUnknown) && !slices.Contains(p.Cautions, orbit.PeriodUnknown)
}

// passing is what is heard of an orbit in a stretch of time, with some receivers.
func (k *knowledge) passing(s stretch, receivers []*Receiver) []orbitEvent {
	o := k.clock.orbit
	reach := k.clock.reach()
	from, to := tdbMJD(s.from.Add(-reach)), tdbMJD(s.to.Add(reach))
	var out []orbitEvent
	add := func(kind ConjunctionKind, mjd float64, receivers []string) {
		if at := k.clock.heardAt(mjd); !at.Before(s.from) && at.Before(s.to) {
			out = append(out, orbitEvent{kind, at, mjd, receivers})
		}
	}
	for _, mjd := range o.Conjunctions(orbit.Superior, from, to) {
		add(SuperiorConjunction, mjd, nil)
	}
	for _, mjd := range o.Conjunctions(orbit.Inferior, from, to) {
		add(InferiorConjunction, mjd, nil)
	}
	for _, e := range k.source.Orbit.eclipsesFor(receivers) {
		// A turn more on either side: spans are cut off there, and the cuts are no ends of eclipses.
		for _, span := range o.EclipseSpans(e.eclipse, from-o.PeriodDays, to+o.PeriodDays) {
			add(EclipseStart, span.FromMJD, e.receivers)
			add(EclipseEnd, span.ToMJD, e.receivers)
		}
	}
	return out
}
