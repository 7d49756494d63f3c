package campaigns

import (
	"math"
	"time"

	"example.org/tallystick/sched"
	"example.org/tallystick/sky"
)

// A siteTrack is a source's track with the windows it was made from.
type siteTrack struct {
	Track
	up     []sched.Window // within elevation limits and mask, Sun and eclipses left aside
	sunny  []sched.Window // what is left of up outside the Sun limit
	usable []sched.Window // what is left of that outside breaks and what is eclipsed with every receiver; the mount's travel is still to come
}

// track works out where a source stands during the session and when it may be observed.
func (p *Prepared) track(i int, ps *preparedSource) siteTrack {
	n := p.Problem.Minutes + 1
	t := siteTrack{Track: Track{Source: i, AzDeg: make([]float64, n), ElDeg: make([]float64, n), LimitDeg: make([]float64, n)}}
	p.site.Track(p.frame, ps.place, p.Problem.Start, time.Minute, t.AzDeg, t.ElDeg)
	limits := p.Site.limits(ps.src)
	for m := range n {
		t.LimitDeg[m] = math.Max(limits.LowDeg, limits.Mask.At(t.AzDeg[m]))
	}
	t.SunDeg, _ = p.frame.ClosestSunDeg(ps.place, p.Session.Start, p.Session.End)

	sun := limits.SunDeg
	limits.SunDeg = 0
	t.up = inMinutes(p.site.Windows(p.frame, ps.place, p.Session.Start, p.Session.End, limits), p.Problem.Start)
	t.sunny = t.up
	if t.SunDeg < sun {
		limits.SunDeg = sun
		t.sunny = inMinutes(p.site.Windows(p.frame, ps.place, p.Session.Start, p.Session.End, limits), p.Problem.Start)
	}
	narrow := ps.narrowestEclipse()
	t.Eclipsed = narrow.hidden
	t.usable = without(without(t.sunny, narrow.hidden, narrow.reason()), p.Problem.Breaks, "break")
	t.Up, t.Usable = spans(t.up), spans(t.usable)
	return t
}

// placesOf are the places at which the mount can follow a source: one for each cable turn and each window of its
// limits. Where a limit cuts a pass in two (the keyhole at the zenith, a stop, the horizon, the Sun) the mount has
// to be brought from one part to the other, and that takes time: so the parts are places of their own. In eclipses
// and breaks it simply goes on following. A source that is never within limits has one place all the same: an
// observer may still ask what it would break.
func (p *Prepared) placesOf(i int, t siteTrack) []place {
	mount := p.Site.mount()
	axesOn := func(turn int) []sky.Axes {
		axes := make([]sky.Axes, len(t.AzDeg))
		p.site.AxesTrack(mount, p.frame, p.sources[i].place, p.Problem.Start, time.Minute, turn, axes)
		return axes
	}
	var out []place
	for _, turn := range p.site.Turns(mount, p.frame, p.sources[i].place, p.Session.Start, p.Session.End) {
		var axes []sky.Axes
		for _, w := range both(t.sunny, inMinutes(turn.Open, p.Problem.Start)) {
			open := both(t.usable, []sched.Window{w})
			if len(open) == 0 {
				continue
			}
			if axes == nil {
				axes = axesOn(turn.Turn)
			}
			out = append(out, place{source: i, turn: turn.Turn, axes: axes, within: w, open: open})
		}
	}
	if len(out) == 0 {
		out = []place{{source: i, axes: axesOn(0)}}
	}
	return out
}

// facts are what a reason for leaving a source out, with one of the receivers, is told from.
func (p *Prepared) facts(ps *preparedSource, receiver int, t siteTrack) sched.Facts {
	f := sched.Facts{
		UpMin: longest(t.up), SunMin: longest(t.sunny), ClearMin: longest(ps.clear(t.usable, receiver)),
		SunDeg: t.SunDeg, SunLimit: p.Site.sunLimit(ps.src), HighestEl: t.ElDeg[0],
	}
	for _, el := range t.ElDeg {
		f.HighestEl = math.Max(f.HighestEl, el)
	}
	return f
}
