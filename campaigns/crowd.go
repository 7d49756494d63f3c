package campaigns

import (
	"example.org/tallystick/sched"
)

// mostPlaces is how many places a table of slews may have. It grows with their square: so many take 100 MB and two
// seconds of one core for a night of ten hours. A campaign of 350 sources comes near it.
const mostPlaces = 640

// crop leaves sources of a campaign that is too large for a table of slews without nodes: all but those in keep and
// those of the jobs that the search would choose by itself. The others stay jobs, and are told why they have no slot.
func (p *Prepared) crop(keep []string) {
	if len(p.places) <= mostPlaces {
		return
	}
	stays := make([]bool, len(p.Campaign.Sources))
	jobsOf := make([]int, len(stays))
	for j := range p.Problem.Jobs {
		jobsOf[p.sourceOf(j)]++
	}
	jobs := 0 // that stay
	for _, name := range keep {
		if i, ok := p.sourceByName[name]; ok && !stays[i] {
			stays[i] = true
			jobs += jobsOf[i]
		}
	}
	for _, j := range sched.Foremost(p.Problem) {
		switch i := p.sourceOf(j); {
		case stays[i]:
		case jobs >= sched.MostSearched:
			p.Problem.Cropped = true
		default:
			stays[i] = true
			jobs += jobsOf[i]
		}
	}
	p.keepOnly(stays)
}

// keepOnly takes away the places and nodes of all other sources.
func (p *Prepared) keepOnly(stays []bool) {
	p.takePart = []string{}
	for i := range stays {
		if stays[i] {
			p.takePart = append(p.takePart, p.Campaign.Sources[i].Name)
		}
	}
	var places []place
	at := make([]int, len(p.places)) // where a place that stays is now
	for i := range p.places {
		at[i] = len(places)
		if stays[p.places[i].source] {
			places = append(places, p.places[i])
		}
	}
	p.places = places
	var nodes []sched.Node
	for _, n := range p.Problem.Nodes {
		if stays[p.sourceOf(n.Job)] {
			n.Place = at[n.Place]
			nodes = append(nodes, n)
		}
	}
	p.Problem.Nodes = nodes
	for j := range p.Problem.Jobs {
		p.Problem.Jobs[j].Facts.Crowded = !stays[p.sourceOf(j)]
	}
}

// TakingPart are the sources that can have slots: all of them, for which it is nil, except in a campaign that is too
// large. As PrepareOptions.Keep it gives the same ones again.
func (p *Prepared) TakingPart() []string { return p.takePart }

// Sources are the sources of a saved plan's slots; none without a plan.
func (s *SavedPlan) Sources() []string {
	if s == nil {
		return nil
	}
	var names []string
	for _, slot := range s.Slots {
		names = append(names, slot.Source)
	}
	return names
}
