package campaigns

import (
	"math"
	"slices"
	"time"

	"example.org/tallystick/sched"
)

// An LSTPressure holds hours by the hour of local sidereal time of a site: 0 is from 0 h to 1 h.
//
// What is wanted is the time on source and set-up that aims ask for in the season, as they would need at the zenith:
// the visits of cadences that fall due, missing visits of orbital phase, missing passages as far as the season has
// them, calibration in every session. Of aims that one slot can serve at once only the largest counts. Aims to
// measure and to connect ask for no hours. A source's hours are put where time is granted while it is within limits,
// so that as much as possible finds room; what finds none is spread evenly over the sidereal time in which the source
// is within limits. Slews and receiver changes are not wanted by anybody and not counted.
type LSTPressure struct {
	Site     string
	WantedH  [lstHours]float64
	GrantedH [lstHours]float64 // sessions, without breaks and without what is past
	PlannedH [lstHours]float64 // on source
}

// lstHours is how many hours of sidereal time there are.
const lstHours = 24

// AskH is what is wanted above what is granted, by hour of sidereal time.
func (l *LSTPressure) AskH() [lstHours]float64 {
	var ask [lstHours]float64
	for h := range ask {
		ask[h] = math.Max(0, l.WantedH[h]-l.GrantedH[h])
	}
	return ask
}

// SpareH is what is granted above what is wanted, by hour of sidereal time.
func (l *LSTPressure) SpareH() [lstHours]float64 {
	var spare [lstHours]float64
	for h := range spare {
		spare[h] = math.Max(0, l.GrantedH[h]-l.WantedH[h])
	}
	return spare
}

// SumH adds hours up.
func SumH(hours [lstHours]float64) float64 {
	sum := 0.0
	for _, h := range hours {
		sum += h
	}
	return sum
}

func lstHour(lst float64) int { return min(max(int(lst), 0), lstHours-1) }

func (p *player) at24(site string) *LSTPressure {
	if p.pressure == nil {
		p.pressure, p.mounted = map[string]*LSTPressure{}, map[string]map[string]float64{}
	}
	l, ok := p.pressure[site]
	if !ok {
		l = &LSTPressure{Site: site}
		p.pressure[site] = l
	}
	return l
}

// grant counts a session's hours from a minute on, and returns them.
func (p *player) grant(prepared *Prepared, from int) (hours float64) {
	l := p.at24(prepared.Site.Name)
	for m := from; m < prepared.Problem.Minutes; m++ {
		if !slices.ContainsFunc(prepared.Problem.Breaks, func(b sched.Span) bool { return m >= b.From && m < b.To }) {
			l.GrantedH[lstHour(prepared.LSTHours[m])] += 1. / 60
			hours += 1. / 60
		}
	}
	for _, r := range prepared.Problem.Receivers {
		if p.mounted[r.Name] == nil {
			p.mounted[r.Name] = map[string]float64{}
		}
		p.mounted[r.Name][prepared.Site.Name] += hours
	}
	return hours
}

// spend counts what a plan observes.
func (p *player) spend(prepared *Prepared, plan sched.Plan) {
	l := p.at24(prepared.Site.Name)
	for _, s := range plan.Slots {
		for m := s.Start; m < s.End; m++ {
			l.PlannedH[lstHour(prepared.LSTHours[m])] += 1. / 60
		}
	}
}

// want counts what the aims ask for, and finds room for it.
func (p *player) want(start *books) error {
	unserved := map[string]bool{}
	p.asked = map[string][]demand{}
	for i := range p.campaign.Sources {
		src := &p.campaign.Sources[i]
		k, err := newKnowledge(src, start.frames)
		if err != nil {
			return err
		}
		for _, receiver := range p.campaign.receiverNames() {
			bySite := p.mounted[receiver]
			granted := 0.0
			for _, s := range p.campaign.Sites { // in a fixed order, for sums of floats depend on it
				granted += bySite[s.Name]
			}
			asks := false
			for _, s := range p.campaign.Sites {
				if granted == 0 || bySite[s.Name] == 0 {
					continue
				}
				hours := p.hoursWanted(start, k, receiver, &s)
				if err := p.ask(src, &s, hours*bySite[s.Name]/granted); err != nil {
					return err
				}
			}
			for j := range src.Aims {
				asks = asks || src.Aims[j].wants(receiver)
			}
			if asks && granted == 0 {
				unserved[receiver] = true
			}
		}
	}
	for _, s := range p.campaign.Sites {
		if l, ok := p.pressure[s.Name]; ok {
			l.WantedH = placeHours(p.asked[s.Name], l.GrantedH)
			p.season.Pressure = append(p.season.Pressure, *l)
		}
	}
	for name := range unserved {
		p.season.Unserved = append(p.season.Unserved, name)
	}
	slices.Sort(p.season.Unserved)
	return nil
}

func (c *Campaign) receiverNames() []string {
	var names []string
	for _, r := range c.Receivers {
		if !slices.Contains(names, r.Name) {
			names = append(names, r.Name)
		}
	}
	return names
}

// hoursWanted is what a source's aims ask for in the season with one receiver, were all of it at this site.
func (p *player) hoursWanted(start *books, k *knowledge, receiver string, site *Site) float64 {
	src, most := k.source, 0.0
	days := p.season.To.Sub(p.at).Hours() / 24
	sessions, setup := 0, 0.0
	for _, s := range p.season.Sessions {
		if s.Session.Site == site.Name && slices.Contains(s.Session.Receivers, receiver) {
			sessions++
			setup = math.Max(setup, s.Session.SlotOverheadMin)
		}
	}
	for i := range src.Aims {
		aim := &src.Aims[i]
		if !aim.wants(receiver) {
			continue
		}
		visits, minutes := 0.0, aim.Minutes
		switch aim.Kind {
		case Cadence:
			visits = float64(aim.visitsDue(start.cadence(src, aim).Debt, p.at, p.season.To))
			if aim.ToaUs > 0 {
				minutes = p.campaign.minutesAtZenith(src, receiver, site.Name, aim.ToaUs)
			}
		case PhaseCoverage:
			c := start.coverage(k, aim)
			minutes = start.binMinutes(src, aim)
			visits = c.debt() * float64(aim.Bins*aim.PerBin) / float64(len(aim.Receivers))
		case Conjunction:
			done, err := start.passages(k, aim)
			if err != nil {
				continue // the sessions have been prepared with it: it cannot be
			}
			visits = math.Min(done.missing(), days/src.Orbit.PeriodDays) / float64(len(aim.Receivers))
			minutes = 2 * aim.HalfWidthTurns * src.Orbit.PeriodDays * 24 * 60
		case Calibration:
			visits = float64(sessions * aim.PerSession)
		}
		most = math.Max(most, visits*(minutes+setup)/60)
	}
	return most
}

// minutesAtZenith is what an aim with a TOA error asks for; 0 where no amount of time reaches it.
func (c *Campaign) minutesAtZenith(src *Source, receiver, site string, toaUs float64) float64 {
	minutes, err := src.setup(c.receiver(receiver, site)).MinutesFor(toaUs, 90)
	if err != nil {
		return 0
	}
	return minutes
}

// lstStep is how finely the time within limits is sampled, in sidereal time.
const lstStep = 5 * time.Minute

// ask notes a source's hours with the sidereal time in which it is within limits. What never is within limits is
// wanted in vain and asked of nobody.
func (p *player) ask(src *Source, site *Site, hours float64) error {
	if hours == 0 {
		return nil
	}
	windows, frame, where, err := p.transit(src, site)
	if err != nil {
		return err
	}
	d := demand{hours: hours}
	total := 0.0
	for _, w := range windows {
		for t := w.From; t.Before(w.To); t = t.Add(lstStep) {
			part := math.Min(1, w.To.Sub(t).Minutes()/lstStep.Minutes())
			d.up[lstHour(where.LSTHours(frame, t))] += part
			total += part
		}
	}
	if total == 0 {
		return nil
	}
	for h := range d.up {
		d.up[h] /= total
	}
	p.asked[site.Name] = append(p.asked[site.Name], d)
	return nil
}
