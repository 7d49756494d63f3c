package campaigns

import (
	"cmp"
	"errors"
	"math"
	"slices"
	"strings"

	"example.org/tallystick/sky/array"
)

// An ArrayForecast is what the hours planned in a season buy for its pulsars taken together, and what the same hours
// would buy if one more were worth the same on every one of them. It is advice for asking for time: when a source is up
// counts only as the most that it can have, what others want in the same hours does not, nor do aims other than
// cadences and counts of turns.
//
// An hour of any receiver counts as one of the best, so that two ways of dividing hours are compared and nothing else.
// Errors are those of all arrival times of the season taken together, with white noise down to the floor.
type ArrayForecast struct {
	Rows    []ArrayRow // where most is to be added first
	LeftOut []ArrayLeftOut
	Least   ArrayLeast
	// CadencesH is the least that cadences and counts of turns ask for, and TotalH what is planned: both on the sources of Rows.
	CadencesH, TotalH float64
	NoFloor           int // sources that state no floor and are taken to have none
	Planned, Best     ArrayValue
	HourMore          float64      // the share of Best.SumPerUs2 that one hour more adds at most: that of its first minutes
	NearPairs         int          // of the pairs that are timed as planned, nearer than the first zero of their correlation
	Pairs             int          // that are timed as planned
	NearShare         float64      // what the near ones add to the square of the planned merit
	Gains             [4]ArrayGain // what more would gain
}

// An ArrayValue is what hours are worth.
type ArrayValue struct {
	SumPerUs2  float64 // of 1/σ² over the sources
	PairPerUs2 float64 // merit of all pairs, for a background
}

// An ArrayRow is one pulsar.
type ArrayRow struct {
	Source, Site, Receiver string  // with the receiver that is best for it
	HourErrorUs            float64 // after one hour at the elevations it has in the sessions, without the floor
	FloorUs                float64
	UpH                    float64 // hours of the sessions in which it can be observed
	LeastH                 float64 // what it keeps in any case
	PlannedH, BestH        float64
	PlannedUs, BestUs      float64 // TOA error; infinite without hours
}

// An ArrayLeftOut is a pulsar of which too little is known.
type ArrayLeftOut struct{ Source, Reason string }

// ArrayLeast is what each source keeps in any case, however little it adds.
type ArrayLeast string

// What is kept: the first of these that the planned hours cover.
const (
	LeastCadences ArrayLeast = "cadences" // every visit that falls due, at its shortest that is of use
	LeastOnce     ArrayLeast = "once"     // one such visit
	LeastNothing  ArrayLeast = "nothing"
)

// An ArrayGain is by which factor something more changes the signal-to-noise ratio of a background, while it is
// below the noise at every frequency, and once it is above at the lowest.
type ArrayGain struct {
	What               string
	Weak, Intermediate float64
}

// A hearing is how long and how well a source could be heard in the sessions played.
type hearing struct {
	upMin int // with any receiver that its aims name
	with  []heardWith
}

type heardWith struct {
	site, receiver string
	minutes        int
	effective      float64 // minutes at the zenith that count as much
}

// hear notes how well sources are heard in a session from a minute on.
func (p *player) hear(prepared *Prepared, from int) {
	if p.heard == nil {
		p.heard = map[string]*hearing{}
	}
	for i := range prepared.sources {
		ps := &prepared.sources[i]
		h := p.heard[ps.src.Name]
		if h == nil {
			h = &hearing{}
			p.heard[ps.src.Name] = h
		}
		up := make([]bool, prepared.Problem.Minutes)
		for r, rec := range prepared.Problem.Receivers {
			if !ps.src.timedWith(rec.Name) {
				continue
			}
			w := h.at(prepared.Site.Name, rec.Name)
			for _, s := range prepared.Tracks[i].Usable {
				for m := max(s.From, from); m < min(s.To, prepared.Problem.Minutes); m++ {
					if !ps.eclipses[r].untimable[m] {
						up[m] = true
						w.minutes++
						w.effective += ps.weights[r][m]
					}
				}
			}
		}
		for _, u := range up {
			h.upMin += b2i(u)
		}
	}
}

func (h *hearing) at(site, receiver string) *heardWith {
	for i := range h.with {
		if w := &h.with[i]; w.site == site && w.receiver == receiver {
			return w
		}
	}
	h.with = append(h.with, heardWith{site: site, receiver: receiver})
	return &h.with[len(h.with)-1]
}

// timedWith says whether an aim wants to time the source with a receiver.
func (s *Source) timedWith(receiver string) bool {
	for i := range s.Aims {
		if a := &s.Aims[i]; a.Kind != Calibration && a.wants(receiver) {
			return true
		}
	}
	return false
}

// forecastArray compares the hours that are planned with the best division of as many.
func (p *player) forecastArray(start *books) error {
	f := &p.season.Array
	var once []float64 // as Rows: one visit
	var timed []*Source
	for i := range p.campaign.Sources {
		src := &p.campaign.Sources[i]
		if !slices.ContainsFunc(src.Aims, func(a Aim) bool { return a.Kind != Calibration }) {
			continue // a calibrator
		}
		row, why := p.arrayRow(src)
		if why != "" {
			f.LeftOut = append(f.LeftOut, ArrayLeftOut{src.Name, why})
			continue
		}
		all, one := p.leastHours(start, src)
		row.LeastH = math.Min(all, row.UpH)
		f.CadencesH += row.LeastH
		f.TotalH += row.PlannedH
		f.NoFloor += b2i(row.FloorUs == 0)
		f.Rows = append(f.Rows, row)
		once = append(once, math.Min(one, row.UpH))
		timed = append(timed, src)
	}
	if err := f.divide(once); err != nil {
		return err
	}
	f.weigh(timed)
	slices.SortStableFunc(f.Rows, func(a, b ArrayRow) int {
		return cmp.Or(cmp.Compare(b.BestH-b.PlannedH, a.BestH-a.PlannedH), cmp.Compare(a.Source, b.Source))
	})
	return nil
}

// arrayRow is a source with its planned hours, or why it has to be left out.
func (p *player) arrayRow(src *Source) (row ArrayRow, why string) {
	var missing []string
	for _, key := range []struct {
		known bool
		name  string
	}{{src.Flux != nil, "flux"}, {src.WidthMs > 0, "width_ms"}, {src.Spin != nil, "spin"}} {
		if !key.known {
			missing = append(missing, "no "+key.name)
		}
	}
	if len(missing) > 0 {
		return row, strings.Join(missing, ", ")
	}
	row = ArrayRow{Source: src.Name, FloorUs: src.FloorUs, HourErrorUs: math.Inf(1)}
	h := p.heard[src.Name]
	for _, w := range h.with {
		if us := p.campaign.hourErrorUs(src, w); us < row.HourErrorUs {
			row.Site, row.Receiver, row.HourErrorUs = w.site, w.receiver, us
		}
	}
	for _, s := range p.season.Sessions {
		for _, r := range s.Rows {
			if r.Source == src.Name {
				row.PlannedH += r.End.Sub(r.Start).Hours()
			}
		}
	}
	row.UpH = math.Max(float64(h.upMin)/60, row.PlannedH) // a passage may be watched into its eclipse
	switch {
	case row.UpH == 0:
		return row, "never up in these sessions"
	case math.IsInf(row.HourErrorUs, 1):
		return row, "not heard"
	}
	return row, ""
}

// hourErrorUs is the error after one hour at the elevations at which a source was heard, without its floor; infinite
// where it was not.
func (c *Campaign) hourErrorUs(src *Source, w heardWith) float64 {
	if !(w.effective > 0) {
		return math.Inf(1)
	}
	set := src.setup(c.receiver(w.receiver, w.site))
	set.Pulsar.FloorUs = 0
	return set.TOAErrorUs(60, 90) * math.Sqrt(float64(w.minutes)/w.effective)
}

// leastHours is the least that keeps a source's cadences and count of turns: every visit that falls due in the season,
// as short as is of use and at the zenith, and one such visit. Of aims that one slot can serve the largest counts.
func (p *player) leastHours(start *books, src *Source) (all, once float64) {
	for _, receiver := range p.campaign.receiverNames() {
		mostAll, mostOnce := 0.0, 0.0
		for i := range src.Aims {
			aim := &src.Aims[i]
			visits := 0
			switch {
			case !aim.wants(receiver):
			case aim.Kind == Cadence:
				visits = aim.visitsDue(start.cadence(src, aim).Debt, p.at, p.season.To)
			case aim.Kind == Connect:
				visits = 1
			}
			if visits > 0 {
				hours := p.visitMinutes(src, aim, receiver) * aim.MinFraction / 60
				mostAll, mostOnce = math.Max(mostAll, float64(visits)*hours), math.Max(mostOnce, hours)
			}
		}
		all += mostAll
		once += mostOnce
	}
	return all, once
}

// visitMinutes is what a visit with a receiver takes at the site where it takes least; 0 where no session mounts it, and
// where no amount of time is enough.
func (p *player) visitMinutes(src *Source, aim *Aim, receiver string) float64 {
	least := 0.0
	for _, site := range p.campaign.Sites {
		if p.mounted[receiver][site.Name] == 0 {
			continue
		}
		minutes := aim.Minutes
		if aim.ToaUs > 0 {
			minutes = p.campaign.minutesAtZenith(src, receiver, site.Name, aim.ToaUs)
		}
		if minutes > 0 && (least == 0 || minutes < least) {
			least = minutes
		}
	}
	return least
}

// divide finds the best division that keeps as much of the least as the planned hours cover: all cadences, else one visit
// each, else nothing.
func (f *ArrayForecast) divide(once []float64) error {
	set := f.pulsars()
	for _, f.Least = range []ArrayLeast{LeastCadences, LeastOnce, LeastNothing} {
		for i := range set {
			switch f.Least {
			case LeastOnce:
				set[i].LeastH = once[i]
			case LeastNothing:
				set[i].LeastH = 0
			}
			f.Rows[i].LeastH = set[i].LeastH
		}
		best, err := array.Share(set, f.TotalH)
		if no := (array.NoShare{}); errors.As(err, &no) && f.Least != LeastNothing {
			continue
		}
		if err != nil {
			return err
		}
		for i := range f.Rows {
			r := &f.Rows[i]
			r.BestH = best.Hours[i]
			r.PlannedUs, r.BestUs = set[i].ErrorUs(r.PlannedH), set[i].ErrorUs(r.BestH)
		}
		if sum := array.Value(set, best.Hours); sum > 0 {
			f.HourMore = best.WorthPerH / sum
		}
		return nil
	}
	return nil
}

func (f *ArrayForecast) pulsars() []array.Pulsar {
	set := make([]array.Pulsar, len(f.Rows))
	for i, r := range f.Rows {
		set[i] = array.Pulsar{HourErrorUs: r.HourErrorUs, FloorUs: r.FloorUs, Weight: 1, LeastH: r.LeastH, MostH: r.UpH}
	}
	return set
}

// weigh adds up what either division is worth, and what more would gain. Sources are those of Rows.
func (f *ArrayForecast) weigh(sources []*Source) {
	value := func(hours, us func(*ArrayRow) float64) (ArrayValue, array.Pairs) {
		h, timed := make([]float64, len(f.Rows)), make([]array.Timed, len(f.Rows))
		for i := range f.Rows {
			h[i] = hours(&f.Rows[i])
			timed[i] = array.Timed{RADeg: sources[i].RADeg, DecDeg: sources[i].DecDeg, SigmaUs: us(&f.Rows[i])}
		}
		pairs := array.Pair(timed)
		return ArrayValue{array.Value(f.pulsars(), h), pairs.MeritPerUs2}, pairs
	}
	var pairs array.Pairs
	f.Planned, pairs = value(func(r *ArrayRow) float64 { return r.PlannedH }, func(r *ArrayRow) float64 { return r.PlannedUs })
	f.Best, _ = value(func(r *ArrayRow) float64 { return r.BestH }, func(r *ArrayRow) float64 { return r.BestUs })
	f.Pairs, f.NearPairs, f.NearShare = pairs.Count, pairs.Near, pairs.NearShare

	gain := func(what string, change func(*array.Change)) ArrayGain {
		c := array.Same()
		change(&c)
		return ArrayGain{what, array.Weak.Gain(c), array.Intermediate.Gain(c)}
	}
	n := float64(f.Timed())
	f.Gains = [...]ArrayGain{
		gain("twice the years", func(c *array.Change) { c.Span = 2 }),
		gain("twice the cadence", func(c *array.Change) { c.Cadence = 2 }),
		gain("half the noise", func(c *array.Change) { c.Noise = 0.5 }),
		gain("one source more", func(c *array.Change) { c.Pulsars = (n + 1) / math.Max(n, 1) }),
	}
}

// Timed is how many sources are timed as planned.
func (f *ArrayForecast) Timed() int {
	n := 0
	for i := range f.Rows {
		n += b2i(f.Rows[i].PlannedH > 0)
	}
	return n
}
