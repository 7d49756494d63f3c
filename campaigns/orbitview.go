package campaigns

import (
	"math"
	"slices"
	"strings"
	"time"

	"example.org/tallystick/sky/orbit"
	"example.org/tallystick/sky/timing"
)

// OrbitCells is how many parts of an orbit are told apart in an OrbitView.
const OrbitCells = 120

// An OrbitView is what is known of one binary and what has been seen of its orbit. Phases are in turns from the
// ascending node.
type OrbitView struct {
	Source       string
	PeriodDays   float64
	Eccentricity float64
	At           time.Time
	NowTurns     float64 // the phase heard at the present moment
	Void         bool    // the elements mean nothing at the present moment: there are no phases and no shape

	SuperiorTurns, InferiorTurns float64     // the conjunctions, as they fall about the present moment
	PeriastronTurns              *float64    // nil where the orbit is circular
	EclipseTurns                 *[2]float64 // from, to, with the receiver of the site that loses most; from may be after to, across the node

	Sizes *OrbitSizes // what relativity makes of it; nil where the size of the orbit is not known

	Since   time.Time         // from when on observations are counted; zero: all of the logbook
	Visits  int               // observations since then
	Seen    [OrbitCells]int   // how many of them touched each part of the orbit
	Shape   [OrbitCells]Point // the pulsar's orbit about the centre of mass, seen from its pole, by phase
	Bins    []PhaseBin        // of the first phase coverage aim; nil without one
	Aims    []OrbitAim        // in the order of the source
	Events  []ConjunctionRow  // coming, in time order
	To      time.Time         // until when they are listed
	Limited bool              // only events within sessions are listed
}

// A Point is a place in the plane of an orbit, in units of its semi-major axis: at the conjunction behind the
// companion Y is positive, and the Earth lies towards negative Y. At the ascending node X is positive.
type Point struct{ X, Y float64 }

// A PhaseBin is a part of the orbit that an aim wants visited so often.
type PhaseBin struct {
	FromTurns, ToTurns float64
	Had                float64 // visits, in shares of a full one; at most Wanted
	Wanted             int
}

// An OrbitAim is how far one aim of the source has come. What does not belong to its kind is zero.
type OrbitAim struct {
	AccountRow
	Sigma, Goal      float64 // of a parameter to be measured; Sigma 0: not determined yet
	Unit             string
	Predicted, Limit float64   // of the pulse phase at the next session, in turns
	Deadline         time.Time // when Predicted passes Limit without another observation; zero: not within ten years
}

// eventDays is how far ahead events are listed at most.
const eventDays = 60

// Orbits returns a view of every binary of a campaign at a moment, as a site sees it, in the order of the campaign.
// Events are listed until the end of the site's last session, for at most 60 days.
func Orbits(c *Campaign, log *Logbook, site *Site, at time.Time) ([]OrbitView, error) {
	if !slices.ContainsFunc(c.Sources, func(s Source) bool { return s.Orbit != nil }) {
		return nil, nil
	}
	to := at
	for _, s := range c.Sessions {
		if s.Site == site.Name && s.End.After(to) {
			to = s.End
		}
	}
	if last := at.AddDate(0, 0, eventDays); to.After(last) || to.Equal(at) {
		to = last
	}
	events, limited, err := Conjunctions(c, site, at, to)
	if err != nil {
		return nil, err
	}
	b := open(c, log, at)
	var views []OrbitView
	for i := range c.Sources {
		src := &c.Sources[i]
		if src.Orbit == nil {
			continue
		}
		k, err := newKnowledge(src, b.frames)
		if err != nil {
			return nil, err
		}
		v := OrbitView{Source: src.Name, PeriodDays: src.Orbit.PeriodDays, Eccentricity: src.Orbit.Eccentricity, At: at, To: to}
		v.Limited = slices.Contains(limited, src.Name)
		for _, e := range events {
			if e.Source == src.Name {
				v.Events = append(v.Events, e)
			}
		}
		v.place(k, c, site)
		if err := v.reckon(b, k); err != nil {
			return nil, err
		}
		v.count(b, k)
		views = append(views, v)
	}
	return views, nil
}

// circular is the eccentricity below which periastron is nowhere to be seen.
const circular = 1e-3

// place finds the points of the orbit about the present moment.
func (v *OrbitView) place(k *knowledge, c *Campaign, site *Site) {
	o := k.clock.orbit
	now := k.clock.orbitMJD(v.At)
	v.Sizes = k.source.Orbit.sizes(o)
	if v.Void = !o.Meaningful(now); v.Void {
		return
	}
	v.NowTurns = o.Phase(now)
	v.SuperiorTurns, v.InferiorTurns = o.ConjunctionPhase(orbit.Superior, now), o.ConjunctionPhase(orbit.Inferior, now)
	if v.Eccentricity >= circular {
		at := now - o.PhasePeriastron(now)*o.PeriodDays
		turns := o.Phase(at)
		v.PeriastronTurns = &turns
	}
	if e := k.widestEclipse(c, site); e.HalfWidthTurns > 0 {
		if spans := o.EclipseSpans(e, now-o.PeriodDays, now+2*o.PeriodDays); len(spans) > 0 {
			// The first may be cut off where the search begins.
			s := spans[len(spans)/2]
			v.EclipseTurns = &[2]float64{o.Phase(s.FromMJD), o.Phase(s.ToMJD)}
		}
	}
	for i := range v.Shape {
		wanted := (float64(i) + 0.5) / OrbitCells
		mjd := now + (wanted-v.NowTurns)*o.PeriodDays
		v.Shape[i] = pointOf(o, mjd)
	}
}

// widestEclipse is the eclipse as that receiver of a site sees it which loses most.
func (k *knowledge) widestEclipse(c *Campaign, site *Site) orbit.Eclipse {
	var widest orbit.Eclipse
	e := k.source.Orbit.Eclipse
	for i := range c.Receivers {
		if r := &c.Receivers[i]; e != nil && r.Site == site.Name {
			if seen := e.at(r); seen.HalfWidthTurns > widest.HalfWidthTurns {
				widest = seen
			}
		}
	}
	return widest
}

// pointOf is where the pulsar stands in the plane of its orbit.
//
//	r = (1 − e²) / (1 + e cos f),  (X, Y) = r (cos θ, sin θ)
//
// with θ the longitude from the ascending node and f = θ − ω the true anomaly.
//
// Checked: TestOrbitShape
func pointOf(o *orbit.Orbit, mjd float64) Point {
	sin, cos := math.Sincos(o.LongitudeDeg(mjd) * math.Pi / 180)
	f := (o.LongitudeDeg(mjd) - o.PeriastronDegAt(mjd)) * math.Pi / 180
	e := o.Eccentricity
	r := (1 - e*e) / (1 + e*math.Cos(f))
	return Point{r * cos, r * sin}
}

// reckon tells how far the aims have come.
func (v *OrbitView) reckon(b *books, k *knowledge) error {
	for i := range k.source.Aims {
		aim := &k.source.Aims[i]
		row, err := b.accountRow(k, aim)
		if err != nil {
			return err
		}
		out := OrbitAim{AccountRow: row}
		switch aim.Kind {
		case PhaseCoverage:
			if v.Bins == nil {
				v.Since = aim.Since
				for bin, need := range b.coverage(k, aim).needs {
					v.Bins = append(v.Bins, PhaseBin{
						FromTurns: float64(bin) / float64(aim.Bins), ToTurns: float64(bin+1) / float64(aim.Bins),
						Had: (1 - need) * float64(aim.PerBin), Wanted: aim.PerBin,
					})
				}
			}
		case Measure:
			m, err := b.measured(k, aim)
			if err != nil {
				return err
			}
			out.Sigma, out.Goal, out.Unit = m.sigma, m.goal, unitOf(m.parameter)
		case Connect:
			n, err := b.connected(k, aim)
			if err != nil {
				return err
			}
			out.Predicted, out.Limit, out.Deadline = n.predicted, n.limit, n.deadline
		}
		v.Aims = append(v.Aims, out)
	}
	return nil
}

func unitOf(p timing.Parameter) string { return strings.TrimSpace(p.Unit()) }

// count marks the parts of the orbit that observations have touched.
func (v *OrbitView) count(b *books, k *knowledge) {
	if v.Void {
		return
	}
	// Steps of half a cell leave none out.
	step := time.Duration(k.source.Orbit.PeriodDays * 24 * float64(time.Hour) / (2 * OrbitCells))
	step = max(min(step, time.Minute), time.Second)
	for _, e := range b.entries[k.source.Name] {
		if e.Start.Before(v.Since) {
			continue
		}
		v.Visits++
		var touched [OrbitCells]bool
		for t := e.Start; t.Before(e.End); t = t.Add(step) {
			touched[binOf(k.phase(t), OrbitCells)] = true
		}
		for i, yes := range touched {
			if yes {
				v.Seen[i]++
			}
		}
	}
}

// SeenShare is the share of the orbit that has been observed at least once.
func (v *OrbitView) SeenShare() float64 {
	n := 0
	for _, s := range v.Seen {
		if s > 0 {
			n++
		}
	}
	return float64(n) / OrbitCells
}

// Eclipsed says that a phase lies in the eclipse.
func (v *OrbitView) Eclipsed(turns float64) bool {
	if v.EclipseTurns == nil {
		return false
	}
	from, to := v.EclipseTurns[0], v.EclipseTurns[1]
	if from <= to {
		return turns >= from && turns <= to
	}
	return turns >= from || turns <= to
}

// Full says that a bin has its visits, but for a twentieth of one that nobody would go back for.
func (b *PhaseBin) Full() bool { return b.Had > float64(b.Wanted)-0.05 }

// BinsMissing counts the bins that still lack visits.
func (v *OrbitView) BinsMissing() int {
	n := 0
	for i := range v.Bins {
		if !v.Bins[i].Full() {
			n++
		}
	}
	return n
}
