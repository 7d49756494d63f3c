package campaigns

import (
	"fmt"
	"math"
	"slices"
	"time"

	"example.org/tallystick/sched"
	"example.org/tallystick/sky/timing"
)

// usualPhaseTurns is the error of an ephemeris's phase where none is given: a thousandth of a turn is what a
// solution that has kept count is good to.
const usualPhaseTurns = 0.001

// timingSource is the source as the timing model sees it.
func (s *Source) timingSource() timing.Source {
	t := timing.Source{
		RADeg: s.RADeg, DecDeg: s.DecDeg, PMMasPerYr: s.PMMasPerYr, PositionMJD: s.PositionMJD,
		ParallaxMas: s.ParallaxMas, DMPcPerCm3: s.DMPcPerCm3, GlitchMJD: s.GlitchMJD,
	}
	if s.Spin != nil {
		t.FrequencyHz, t.DerivativeHzPerS, t.EpochMJD = s.Spin.FrequencyHz, s.Spin.DerivativeHzPerS, s.Spin.EpochMJD
	}
	if s.Orbit != nil {
		el := s.Orbit.elements()
		t.Orbit, t.CompanionMsun, t.SinI, t.EinsteinSec = &el, s.Orbit.CompanionMsun, s.Orbit.SinI, s.Orbit.EinsteinDelaySec
	}
	return t
}

// ephemerisPriors are the errors that the campaign file gives.
func (k *knowledge) ephemerisPriors() []timing.Prior {
	s := k.source
	var out []timing.Prior
	add := func(p timing.Parameter, sigma float64) {
		if sigma > 0 {
			out = append(out, timing.Prior{Parameter: p, Sigma: sigma})
		}
	}
	phase := s.Spin.SigmaPhaseTurns
	if phase == 0 {
		phase = usualPhaseTurns
	}
	add(timing.Phase, phase)
	add(timing.Frequency, s.Spin.SigmaFrequencyHz)
	add(timing.FrequencyDerivative, s.Spin.SigmaDerivativeHzPerS)
	add(timing.RightAscension, s.SigmaPositionMas[0])
	add(timing.Declination, s.SigmaPositionMas[1])
	if o := s.Orbit; o != nil {
		add(timing.OrbitalPeriod, o.SigmaPeriodDays)
		add(timing.SemimajorAxis, o.SigmaSemimajorLs)
		add(timing.OrbitalDecay, o.SigmaDecay)
		add(timing.AdvanceOfPeriastron, o.SigmaAdvance)
		add(timing.EinsteinDelay, o.SigmaEinsteinSec)
		if days, ofPeriastron := k.clock.orbit.EpochErrorDays(s.orbitSigmas()); ofPeriastron {
			add(timing.Periastron, days)
		} else { // in a nearly circular orbit the error of periastron says nothing of where the pulsar is
			add(timing.AscendingNode, days)
		}
	}
	return out
}

// countPriors are the errors by which the count of turns is judged: those that the file gives, and for rotation,
// position and the orbit's epoch, period and size, where it gives none, as little as nature allows. A count hangs on
// these, the file has keys for their errors, and an error that was not stated must not pass for none. A spin-down
// that is given without error is taken to be right within itself. Everything else (proper motion, parallax,
// dispersion, shape, decay and advance of the orbit) is held unless its error is given: nobody measures these before
// the count is sure, and there they are too small to break it.
func (k *knowledge) countPriors() []timing.Prior {
	stated := k.ephemerisPriors()
	src := k.source.timingSource()
	out := slices.Clone(stated)
	for _, p := range timing.LoosePriors(src, stated)[len(stated):] {
		switch p.Parameter {
		case timing.FrequencyDerivative:
			if src.DerivativeHzPerS != 0 {
				p.Sigma = math.Abs(src.DerivativeHzPerS)
			}
		case timing.RightAscension, timing.Declination, timing.AscendingNode, timing.OrbitalPeriod, timing.SemimajorAxis:
		default:
			continue
		}
		out = append(out, p)
	}
	return out
}

// A countPart is a part of an ephemeris, beside the rotation, that the error of a predicted phase may come from.
type countPart struct {
	name       string
	parameters []timing.Parameter
	keys       string // that state its errors
}

const position = "position" // the part of that name

var countParts = []countPart{
	{position, []timing.Parameter{timing.RightAscension, timing.Declination}, "sigma_position_mas"},
	{"orbit", []timing.Parameter{
		timing.AscendingNode, timing.Periastron, timing.OrbitalPeriod, timing.SemimajorAxis, timing.OrbitalDecay, timing.AdvanceOfPeriastron, timing.EinsteinDelay,
	}, "sigma_epoch_days, sigma_period_days, sigma_semimajor_ls"},
}

// arrivals are the logbook's arrival times of a source: those whose error was written down.
func (b *books) arrivals(k *knowledge) []timing.Observation {
	var out []timing.Observation
	for _, e := range b.entries[k.source.Name] {
		if e.ToaUs > 0 {
			out = append(out, timing.Observation{MJD: k.clock.barycentreMJD(e.middle()), SigmaUs: e.ToaUs})
		}
	}
	return out
}

// farDeadlineDays is from where on a deadline is not worth a word: ten years.
const farDeadlineDays = 3653

// connection is how well the count of a source's turns is kept.
type connection struct {
	limit     float64 // turns
	predicted float64 // error of the pulse phase, turns, at the next session
	next      time.Time
	deadline  time.Time // when the error passes the limit; zero: not within ten years
	glitch    time.Time // since which the count had to begin again; zero: it did not
	most      string    // what most of the error comes from, where it matters and it is not the rotation
}

// debt is the predicted error over its limit, at most mostNeed.
func (c connection) debt() float64 { return math.Min(c.predicted/c.limit, mostNeed) }

func (c connection) why() string {
	s := fmt.Sprintf("phase good to %.2g turns on %s, limit %.2g", c.predicted, c.next.UTC().Format(time.DateOnly), c.limit)
	switch {
	case math.IsInf(c.predicted, 1) && !c.glitch.IsZero():
		return "no count since the glitch of " + c.glitch.UTC().Format(time.DateOnly) + ": the next visit starts it again"
	case math.IsInf(c.predicted, 1):
		return "no count yet: neither the ephemeris nor the logbook says the phase"
	case c.predicted > c.limit:
		s += ": the count may be lost by then"
	case !c.deadline.IsZero():
		s += ", passed on " + c.deadline.UTC().Format(time.DateOnly)
	}
	if c.most != "" {
		s += "; most of it is " + c.most
	}
	return s
}

// connected predicts the error of the pulse phase at the session after the books' moment, as it will be if the
// source is not observed before.
func (b *books) connected(k *knowledge, aim *Aim) (connection, error) {
	return once(b, b.connections, aim, func() (connection, error) { return b.connect(k, aim) })
}

func (b *books) connect(k *knowledge, aim *Aim) (connection, error) {
	src, priors, arrivals := k.source.timingSource(), k.countPriors(), b.arrivals(k)
	m, err := timing.New(src, priors, arrivals)
	if err != nil {
		return connection{}, fmt.Errorf("%s: %w", k.source.Name, err)
	}
	c := connection{limit: aim.MaxPhaseErrorTurns, next: b.nextSession()}
	if k.glitch.Before(b.at) {
		c.glitch = k.glitch
	}
	c.predicted = m.PhaseErrorTurns(tdbMJD(c.next), 0)
	if d := m.Deadline(c.limit, tdbMJD(b.at), 0); !d.Never && d.MJD < tdbMJD(b.at)+farDeadlineDays {
		c.deadline = utcOf(d.MJD)
	}
	if c.predicted > c.limit/4 && !math.IsInf(c.predicted, 1) {
		if c.most, err = k.mostOf(c, src, priors, arrivals); err != nil {
			return connection{}, fmt.Errorf("%s: %w", k.source.Name, err)
		}
	}
	return c, nil
}

// mostOf names the part of the ephemeris without whose error less than 0.6 of the predicted error would be left. It is
// empty where that is the rotation, which is what one expects.
func (k *knowledge) mostOf(c connection, src timing.Source, priors []timing.Prior, arrivals []timing.Observation) (string, error) {
	stated := len(k.ephemerisPriors())
	for _, part := range countParts {
		var rest []timing.Prior
		unstated := false
		for i, p := range priors {
			if !slices.Contains(part.parameters, p.Parameter) {
				rest = append(rest, p)
			} else if i >= stated {
				unstated = true
			}
		}
		if len(rest) == len(priors) {
			continue
		}
		m, err := timing.New(src, rest, arrivals)
		if err != nil {
			return "", err
		}
		if m.PhaseErrorTurns(tdbMJD(c.next), 0) < 0.6*c.predicted {
			if unstated {
				return fmt.Sprintf("the %s's, whose error is not given (%s)", part.name, part.keys), nil
			}
			what := fmt.Sprintf("the %s's error", part.name)
			if part.name == position {
				what += swingWords(annualSwing(src, priors), c.limit)
			}
			return what, nil
		}
	}
	return "", nil
}

// swingWords says what a position's error does to the count, and how soon after a short fit where that is within two months.
func swingWords(turns, limit float64) string {
	words := fmt.Sprintf(", which swings the phase by up to %.2g turns in a year", turns)
	if days := timing.SwingDays(turns, limit, 2); days < 58 {
		words += fmt.Sprintf(": what a fit of phase and frequency leaves of that comes to %g turns in %.0f d at worst", limit, days)
	}
	return words
}

// annualSwing is how far the larger error of a position moves the pulse phase to either side in a year, in turns, where the
// Earth's orbit is seen to move it most.
func annualSwing(src timing.Source, priors []timing.Prior) float64 {
	largest := 0.0
	for _, p := range priors {
		if p.Parameter == timing.RightAscension || p.Parameter == timing.Declination {
			largest = math.Max(largest, p.Sigma)
		}
	}
	return timing.PositionAmplitudeTurns(src.FrequencyHz, 0, largest/1000, 0)
}

// noSession is how far ahead the next session is taken to be when none is listed.
const noSession = 30 * 24 * time.Hour

// nextSession is the start of the first session after the books' moment.
func (b *books) nextSession() time.Time {
	for i := range b.campaign.Sessions {
		if s := &b.campaign.Sessions[i]; s.Start.After(b.at) {
			return s.Start
		}
	}
	return b.at.Add(noSession)
}

func (jb *jobBuilder) connect(aim *Aim) error {
	c, err := jb.books.connected(jb.source.knowledge, aim)
	if err != nil {
		return err
	}
	jb.owes(aim, c.debt())
	minutes, ok := jb.wantedMinutes(aim)
	if !ok {
		return nil
	}
	wanted, least := jb.visit(aim, minutes)
	jb.term(aim, sched.Term{
		Scale: jb.scale(sched.ConnectNeed(c.predicted, c.limit)), Curve: sched.Root,
		Wanted: wanted, Least: least, Cum: jb.effective(), Why: c.why(),
	})
	return nil
}
