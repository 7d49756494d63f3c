package campaigns

import (
	"cmp"
	"math"
	"slices"
	"time"

	"example.org/tallystick/sky"
	"example.org/tallystick/sky/orbit"
)

// A PhaseRepeat is a binary whose orbit keeps step with the days: from transit to transit a site sees the same few
// parts of it for months, whatever is planned.
type PhaseRepeat struct {
	Source, Site string
	StepTurns    float64 // of the orbital phase from one transit to the next
	Parts        int     // that are seen in turn, one a transit
	PartTurns    float64 // how wide each is: what the time within limits holds of the orbit
	Days         float64 // until the parts have moved so far that all of the orbit has been seen
}

// SeenShare is the share of the orbit that the site sees until then is new, 0..1.
func (r *PhaseRepeat) SeenShare() float64 { return math.Min(1, float64(r.Parts)*r.PartTurns) }

// repeatDays is how long the same parts must be seen to be worth saying: two months.
const repeatDays = 60

// findRepeats finds the binaries that keep step with the days at the sites of the season, the longest first.
func (p *player) findRepeats() error {
	for _, pr := range p.season.Pressure {
		site := p.campaign.site(pr.Site)
		for i := range p.campaign.Sources {
			src := &p.campaign.Sources[i]
			if src.Orbit == nil {
				continue
			}
			o, err := orbit.New(src.Orbit.elements())
			if err != nil {
				return err
			}
			windows, _, _, err := p.transit(src, site)
			if err != nil {
				return err
			}
			up := 0.0
			for _, w := range windows {
				up += w.To.Sub(w.From).Hours() / 24
			}
			if up == 0 {
				continue
			}
			part := up / o.PeriodDays
			if parts, days := o.TransitRepeat(part); days >= repeatDays {
				p.season.Repeats = append(p.season.Repeats, PhaseRepeat{src.Name, site.Name, o.TransitStepTurns(), parts, part, days})
			}
		}
	}
	slices.SortStableFunc(p.season.Repeats, func(a, b PhaseRepeat) int { return cmp.Compare(b.Days, a.Days) })
	return nil
}

// transit returns when a source is within a site's limits, the Sun's aside, in the sidereal day about the middle of the
// season, with the frame and the site's place that it was found with.
func (p *player) transit(src *Source, site *Site) ([]sky.Window, *sky.Frame, *sky.Site, error) {
	where, err := site.onEarth()
	if err != nil {
		return nil, nil, nil, err
	}
	middle := p.at.Add(p.season.To.Sub(p.at) / 2)
	frame, err := sky.NewFrame(middle)
	if err != nil {
		return nil, nil, nil, err
	}
	limits := site.limits(src)
	limits.SunDeg = 0
	const turn = 23*time.Hour + 56*time.Minute
	return where.Windows(frame, frame.Place(src.target()), middle.Add(-turn/2), middle.Add(turn/2), limits), frame, where, nil
}
