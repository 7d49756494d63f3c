package campaigns

import (
	"fmt"
	"math"
	"time"

	"example.org/tallystick/sched"
	"example.org/tallystick/sky"
	"example.org/tallystick/sky/orbit"
)

// knowledge is what is known of one source at one moment: its ephemeris and what the logbook has added.
type knowledge struct {
	source *Source
	clock  clock
	glitch time.Time // zero: none
}

func newKnowledge(source *Source, f *frames) (*knowledge, error) {
	k := &knowledge{source: source, clock: clock{target: source.target(), frames: f}}
	if source.GlitchMJD > 0 {
		k.glitch = utcOf(source.GlitchMJD)
	}
	if source.Orbit != nil {
		o, err := orbit.New(source.Orbit.elements())
		if err != nil {
			return nil, fmt.Errorf("%s: %w", source.Name, err)
		}
		k.clock.orbit = &o
	}
	return k, nil
}

func (s *Source) target() sky.Target {
	return sky.Target{
		RADeg: s.RADeg, DecDeg: s.DecDeg, PMRAMasPerYr: s.PMMasPerYr[0], PMDecMasPerYr: s.PMMasPerYr[1],
		EpochMJD: s.PositionMJD,
	}
}

func (o *Orbit) elements() orbit.Elements {
	el := orbit.Elements{
		PeriodDays: o.PeriodDays, AscendingNodeMJD: o.AscendingNodeMJD, PeriastronMJD: o.PeriastronMJD,
		SemimajorLs: o.SemimajorLs, Eccentricity: o.Eccentricity, PeriastronDeg: o.PeriastronDeg,
		AdvanceDegPerYr: o.AdvanceDegPerYr, Decay: o.Decay,
	}
	if len(o.FrequencySeries) > 0 {
		el.PeriodDays, el.FrequencySeries = 0, o.FrequencySeries
	}
	return el
}

// einsteinSec is the amplitude of the Einstein delay: as given, or as general relativity has it; 0 where neither is known.
func (o *Orbit) einsteinSec() float64 {
	if o.EinsteinDelaySec > 0 || o.Eccentricity == 0 {
		return o.EinsteinDelaySec
	}
	of, err := orbit.New(o.elements())
	if err != nil {
		return 0
	}
	return of.EinsteinGR(o.CompanionMsun, o.SinI)
}

// orbitSigmas are the errors of the orbit. One of an eclipsing system is let wander beyond its data; a decay that was
// not measured is bounded by what proper motion at the distance of the parallax makes, and gravitational waves where both
// masses are known.
func (s *Source) orbitSigmas() orbit.Sigmas {
	o := s.Orbit
	out := orbit.Sigmas{
		EpochDays: o.SigmaEpochDays, PeriodDays: o.SigmaPeriodDays, SemimajorLs: o.SigmaSemimajorLs, Decay: o.SigmaDecay,
		DataStartMJD: o.DataMJD[0], DataFinishMJD: o.DataMJD[1],
	}
	if s.ParallaxMas > 0 {
		out.ProperMotionMasPerYr, out.DistanceKpc = math.Hypot(s.PMMasPerYr[0], s.PMMasPerYr[1]), 1/s.ParallaxMas
	}
	if of, err := orbit.New(o.elements()); err == nil {
		if sizes := o.sizes(&of); sizes != nil {
			out.RadiatedDecay = math.Abs(sizes.Decay)
		}
	}
	if o.Eclipse != nil {
		out.WanderSecPerYr = orbit.DefaultWanderSecPerYr
	}
	return out
}

// at is the eclipse as a receiver sees it: at the middle of its band.
func (e *Eclipse) at(r *Receiver) orbit.Eclipse {
	whole := orbit.Eclipse{
		CentreTurns: e.CentreTurns, HalfWidthTurns: e.HalfWidthTurns, MarginTurns: e.MarginTurns,
		ReferenceMHz: e.ReferenceMHz, Index: e.Index,
	}
	return whole.At(r.radiometer().CentreMHz())
}

// phase is the orbital phase heard at t, turns from the ascending node.
func (k *knowledge) phase(t time.Time) float64 { return k.clock.orbit.Phase(k.clock.orbitMJD(t)) }

// coverage is how often each orbital-phase bin of an aim has been visited.
type coverage struct {
	aim   *Aim
	needs []float64 // by bin: the share of its visits that is missing
}

// missing is the number of visits that a bin lacks.
func (c coverage) missing(bin int) float64 { return c.needs[bin] * float64(c.aim.PerBin) }

// debt is the share of all visits that is missing.
func (c coverage) debt() float64 {
	sum := 0.0
	for _, n := range c.needs {
		sum += n
	}
	return sum / float64(len(c.needs))
}

func (c coverage) why() string {
	empty := 0
	for _, n := range c.needs {
		if n > 0.99 {
			empty++
		}
	}
	all := c.aim.Bins * c.aim.PerBin
	return fmt.Sprintf("%.1f of %d visits missing, %d of %d bins empty", c.debt()*float64(all), all, empty, c.aim.Bins)
}

// coverage counts the visits of a phase coverage aim since its date. A minute counts in the bin it falls in
// until the visit is full; a visit is full after the wanted minutes or, where that is shorter, the whole bin.
func (b *books) coverage(k *knowledge, aim *Aim) coverage {
	c, _ := once(b, b.coverages, aim, func() (coverage, error) { return b.cover(k, aim), nil })
	return c
}

func (b *books) cover(k *knowledge, aim *Aim) coverage {
	full := b.binMinutes(k.source, aim)
	var visits []sched.PhaseVisit
	for _, e := range b.entries[k.source.Name] {
		if e.Start.Before(aim.Since) || !aim.wants(e.Receiver) {
			continue
		}
		gathered := make([]float64, aim.Bins)
		for t := e.Start; t.Before(e.End); t = t.Add(time.Minute) {
			gathered[binOf(k.phase(t), aim.Bins)] += math.Min(1, e.End.Sub(t).Minutes())
		}
		for i, g := range gathered {
			if g > 0 {
				middle := (float64(i) + 0.5) / float64(aim.Bins)
				visits = append(visits, sched.PhaseVisit{Turns: middle, Paid: e.paid() * math.Min(1, g/full)})
			}
		}
	}
	return coverage{aim: aim, needs: sched.PhaseNeeds(aim.Bins, aim.PerBin, visits)}
}

// usualVisitMin is how long a visit is taken to be of a source whose aims do not say.
const usualVisitMin = 30

// visitMinutes is how long a visit for an aim is: what it says or, where it wants a precision, what that takes with
// the receiver that reaches it first.
func (b *books) visitMinutes(src *Source, aim *Aim) float64 {
	if aim.Minutes > 0 {
		return aim.Minutes
	}
	least := math.Inf(1)
	for _, r := range b.reaches(src, aim) {
		if r.minutes > 0 {
			least = math.Min(least, r.minutes)
		}
	}
	if math.IsInf(least, 1) {
		return usualVisitMin
	}
	return math.Max(1, least)
}

// binMinutes is how long a visit of a phase bin lasts: the wanted minutes, but no longer than the bin itself.
func (b *books) binMinutes(src *Source, aim *Aim) float64 {
	return math.Min(b.visitMinutes(src, aim), src.Orbit.PeriodDays*24*60/float64(aim.Bins))
}

// binOf is the bin that a phase falls in; one that is no number falls in the first.
func binOf(phase float64, bins int) int { return min(max(int(phase*float64(bins)), 0), bins-1) }
