package sky

import (
	"cmp"
	"math"
	"slices"
	"time"
)

// EventKind is what happens in a pass.
type EventKind int

// The kinds of event.
const (
	Rise         EventKind = iota // up through the lowest elevation
	Set                           // down through it
	TopsOut                       // up through the highest elevation, into the zone about the zenith
	ComesBack                     // down through it
	UpperTransit                  // highest point, on the meridian
	LowerTransit                  // lowest point, on the meridian
)

// String names the event.
func (k EventKind) String() string {
	switch k {
	case Rise:
		return "rise"
	case Set:
		return "set"
	case TopsOut:
		return "above upper limit"
	case ComesBack:
		return "below upper limit"
	case UpperTransit:
		return "transit"
	case LowerTransit:
		return "lower transit"
	}
	return "event"
}

// An Event is an instant of a pass and where the place then stands.
type Event struct {
	Kind         EventKind
	At           time.Time
	AzDeg, ElDeg float64
}

// Standing says whether a place ever crosses the lowest elevation, whatever the time.
type Standing int

// The standings.
const (
	RisesAndSets Standing = iota
	NeverRises
	NeverSets
)

// String names the standing.
func (s Standing) String() string {
	switch s {
	case NeverRises:
		return "never rises"
	case NeverSets:
		return "never sets"
	}
	return "rises and sets"
}

// Passes is what a place does between two instants.
type Passes struct {
	Events                []Event // in time order
	Standing              Standing
	StartsUp              bool    // at or above the lowest elevation at the start
	HighestDeg, LowestDeg float64 // its elevations on the meridian
}

// Passes returns when a place of the frame f rises, transits and sets between two instants. The lowest
// elevation of the limits is the horizon; of the others only HighDeg and Refraction count. The interval should
// lie within FrameReach of the frame's instant. Accuracy is that of Windows.
func (s *Site) Passes(f *Frame, p Place, from, to time.Time, lim Limits) Passes {
	var c scan
	x0, x1 := f.days(from), f.days(to)
	if !(x0 < x1) {
		return Passes{}
	}
	c.begin(s, f, &p, x0, x1)
	var out Passes
	add := func(kind EventKind, x float64) {
		az, el := s.horizon(f, &c.place, x).azEl()
		out.Events = append(out.Events, Event{kind, f.instant(x), positive(az) * degPerRad, el * degPerRad})
	}
	crossings := func(sinEl float64, up, down EventKind) (starts bool, n int) {
		c.elevation(sinEl)
		above := c.flips.starts
		for _, x := range c.flips.at {
			above = !above
			if above {
				add(up, x)
			} else {
				add(down, x)
			}
		}
		return c.flips.starts, len(c.flips.at)
	}
	low := lim.trueElevation(lim.LowDeg)
	starts, n := crossings(math.Sin(low), Rise, Set)
	out.StartsUp = starts
	if lim.HighDeg != 0 && lim.HighDeg < 90 {
		crossings(math.Sin(lim.trueElevation(lim.HighDeg)), TopsOut, ComesBack)
	}
	for _, k := range c.knots {
		switch k.kind {
		case upper:
			add(UpperTransit, k.x)
		case lower:
			add(LowerTransit, k.x)
		}
	}
	slices.SortStableFunc(out.Events, func(a, b Event) int { return cmp.Or(a.At.Compare(b.At), int(a.Kind)-int(b.Kind)) })

	v := c.place.vector((x0 + x1) / 2)
	dec := math.Atan2(v[2], math.Hypot(v[0], v[1]))
	lat := math.Atan2(s.sinLat, s.cosLat)
	highest, lowest := math.Pi/2-math.Abs(lat-dec), math.Abs(lat+dec)-math.Pi/2
	out.HighestDeg, out.LowestDeg = highest*degPerRad, lowest*degPerRad
	switch {
	case n > 0:
		out.Standing = RisesAndSets
	case highest < low:
		out.Standing = NeverRises
	case lowest >= low:
		out.Standing = NeverSets
	}
	return out
}
