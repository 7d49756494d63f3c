package campaigns

import (
	"cmp"
	"math"
	"slices"
	"time"

	"example.org/tallystick/sched"
	"example.org/tallystick/sky"
)

// A CadenceOutcome is what a season makes of a cadence.
type CadenceOutcome string

// The outcomes.
const (
	CadenceKept   CadenceOutcome = "kept"   // never overdue
	CadenceLate   CadenceOutcome = "late"   // overdue for a while, and not at the end
	CadenceMissed CadenceOutcome = "missed" // overdue at the end
)

// A CadenceForecast is a cadence aim over a season. Debts are looked at once a day.
type CadenceForecast struct {
	Source, Aim  string
	Receivers    []string
	EveryDays    float64
	Priority     float64
	DebtNow      float64
	DebtWorst    float64
	DebtEnd      float64
	OverdueDays  int
	Due, Planned int // visits that fall due in the season, those owed now among them; visits with all receivers that are planned
	Up           int // sessions in which the source is within limits at some time and one of the receivers is mounted
	Outcome      CadenceOutcome
}

// A ConnectForecast is an aim to keep count of a source's turns.
type ConnectForecast struct {
	Source     string
	LimitTurns float64
	By         time.Time // when the predicted phase error passes the limit without another observation; zero: not within ten years
	Planned    time.Time // its first planned slot; zero: none in the season
	ByAtEnd    time.Time // as By, after the season as planned
	Lost       bool      // it is not observed before By, and By lies in the season
}

// A SunSpan is time in which a source is nearer to the Sun than its limit.
type SunSpan struct {
	Source   string
	LimitDeg float64
	sky.SunGap
}

// rule is the rule of a cadence aim.
func (a *Aim) rule() sched.CadenceRule {
	rule := sched.CadenceRule{
		EveryDays: a.EveryDays, PairDays: a.PairDays, Carry: a.Carry, MinGapDays: a.MinGapDays,
		MinFraction: a.MinFraction, Receivers: a.Receivers,
	}
	if a.Ramp != nil {
		rule.Ramp = &sched.Ramp{From: a.Ramp.From, FirstDays: a.Ramp.FirstDays, Factor: a.Ramp.Factor}
	}
	return rule
}

// visitsDue counts the visits that a cadence with this debt at one instant asks for until another: what is owed,
// at most one, for one visit settles it, and what falls due.
func (a *Aim) visitsDue(debt float64, from, to time.Time) int {
	rule, cycles := a.rule(), math.Min(1, debt)
	for t := from; t.Before(to); t = t.AddDate(0, 0, 1) {
		cycles += math.Min(1, to.Sub(t).Hours()/24) / rule.IntervalDaysAt(t)
	}
	return int(cycles + 1e-9)
}

// forecastCadences follows every cadence aim from day to day.
func (p *player) forecastCadences(start *books) {
	type watched struct {
		source *Source
		aim    *Aim
	}
	var aims []watched
	for i := range p.campaign.Sources {
		src := &p.campaign.Sources[i]
		for j := range src.Aims {
			if aim := &src.Aims[j]; aim.Kind == Cadence {
				now := start.cadence(src, aim).Debt
				aims = append(aims, watched{src, aim})
				p.season.Cadences = append(p.season.Cadences, CadenceForecast{
					Source: src.Name, Aim: aim.label(), Receivers: aim.Receivers, EveryDays: aim.EveryDays, Priority: src.Priority,
					DebtNow: now, DebtWorst: now, Due: aim.visitsDue(now, p.at, p.season.To), Planned: p.planned(src.Name, aim),
					Up: p.sessionsUp(src.Name, aim),
				})
			}
		}
	}
	follow := func(at time.Time) {
		b := open(p.campaign, p.book, at)
		for i, w := range aims {
			f := &p.season.Cadences[i]
			f.DebtEnd = b.cadence(w.source, w.aim).Debt
			f.DebtWorst = math.Max(f.DebtWorst, f.DebtEnd)
			if overdue(f.DebtEnd) && at.Before(p.season.To) {
				f.OverdueDays++
			}
		}
	}
	for at := p.at; at.Before(p.season.To); at = at.AddDate(0, 0, 1) {
		follow(at)
	}
	follow(p.season.To)
	for i := range p.season.Cadences {
		f := &p.season.Cadences[i]
		switch {
		case overdue(f.DebtEnd):
			f.Outcome = CadenceMissed
		case overdue(f.DebtWorst):
			f.Outcome = CadenceLate
		default:
			f.Outcome = CadenceKept
		}
	}
	order := map[CadenceOutcome]int{CadenceMissed: 0, CadenceLate: 1, CadenceKept: 2}
	slices.SortStableFunc(p.season.Cadences, func(a, b CadenceForecast) int {
		return cmp.Or(order[a.Outcome]-order[b.Outcome], b.OverdueDays-a.OverdueDays, cmp.Compare(b.DebtEnd, a.DebtEnd), cmp.Compare(a.Source, b.Source))
	})
}

// sessionsUp counts the sessions in which an aim of a source could be served.
func (p *player) sessionsUp(source string, aim *Aim) int {
	n := 0
	for i := range p.season.Sessions {
		if s := &p.season.Sessions[i]; p.up[i][source] && shareOne(aim.Receivers, s.Session.Receivers) {
			n++
		}
	}
	return n
}

// planned counts the planned visits of a source with all receivers of an aim.
func (p *player) planned(source string, aim *Aim) int {
	by := map[string]int{}
	for _, s := range p.season.Sessions {
		for _, r := range s.Rows {
			if r.Source == source {
				by[r.Receiver]++
			}
		}
	}
	least := math.MaxInt
	for _, r := range aim.Receivers {
		least = min(least, by[r])
	}
	return least
}

// forecastConnects says by when each count of turns needs another observation, before and after the season.
func (p *player) forecastConnects(start, end *books) error {
	for i := range p.campaign.Sources {
		src := &p.campaign.Sources[i]
		for j := range src.Aims {
			aim := &src.Aims[j]
			if aim.Kind != Connect {
				continue
			}
			k, err := newKnowledge(src, start.frames)
			if err != nil {
				return err
			}
			before, err := start.connected(k, aim)
			if err != nil {
				return err
			}
			after, err := end.connected(k, aim)
			if err != nil {
				return err
			}
			f := ConnectForecast{
				Source: src.Name, LimitTurns: aim.MaxPhaseErrorTurns, By: before.deadline, ByAtEnd: after.deadline,
				Planned: p.firstPlanned(src.Name, aim),
			}
			f.Lost = !f.By.IsZero() && f.By.Before(p.season.To) && (f.Planned.IsZero() || f.Planned.After(f.By))
			p.season.Connects = append(p.season.Connects, f)
		}
	}
	slices.SortStableFunc(p.season.Connects, func(a, b ConnectForecast) int {
		if a.By.IsZero() != b.By.IsZero() {
			return cmp.Compare(b2i(a.By.IsZero()), b2i(b.By.IsZero()))
		}
		return cmp.Or(a.By.Compare(b.By), cmp.Compare(a.Source, b.Source))
	})
	return nil
}

func b2i(b bool) int {
	if b {
		return 1
	}
	return 0
}

func (p *player) firstPlanned(source string, aim *Aim) time.Time {
	for _, s := range p.season.Sessions {
		for _, r := range s.Rows {
			if r.Source == source && aim.wants(r.Receiver) {
				return r.Start
			}
		}
	}
	return time.Time{}
}

// findSun finds when sources are too near to the Sun for every site that has sessions.
func (p *player) findSun() error {
	for i := range p.campaign.Sources {
		src := &p.campaign.Sources[i]
		limit := math.Inf(1)
		for _, pr := range p.season.Pressure {
			limit = math.Min(limit, p.campaign.site(pr.Site).sunLimit(src))
		}
		if limit <= 0 || math.IsInf(limit, 1) {
			continue
		}
		gaps, err := sky.SunGaps(src.target(), limit, p.at, p.season.To)
		if err != nil {
			return err
		}
		for _, g := range gaps {
			p.season.Sun = append(p.season.Sun, SunSpan{src.Name, limit, g})
		}
	}
	slices.SortStableFunc(p.season.Sun, func(a, b SunSpan) int {
		return cmp.Or(a.From.Compare(b.From), cmp.Compare(a.Source, b.Source))
	})
	return nil
}
