package campaigns

import (
	"context"
	"fmt"
	"math"
	"slices"
	"time"

	"example.org/tallystick/sched"
)

// A Season is what becomes of a campaign if every coming session is observed as it would be planned today.
type Season struct {
	From, To time.Time // the present moment, and the end of the last session
	Sessions []SeasonSession
	Cadences []CadenceForecast // what is missed first, the longest overdue before the others
	Connects []ConnectForecast // the nearest date first
	Debts    []AccountRow      // every account at the end, worst first; nothing is said of when it can next be observed
	Pressure []LSTPressure     // by site, in the order of Campaign.Sites
	Sun      []SunSpan         // in order of their start
	Repeats  []PhaseRepeat     // binaries of which the same parts are seen for months, the longest first
	Unserved []string          // receivers that aims ask for and that no coming session mounts
	Array    ArrayForecast     // what the planned hours buy for all pulsars together
}

// A SeasonSession is a session as it was played.
type SeasonSession struct {
	Session     *Session
	Hours       float64 // without breaks, and without what is past
	OnSourceMin int
	Worth       float64
	Overdue     int // cadences that are overdue when it starts
	Rows        []SlotRow
}

// SeasonOptions say how a season is played.
type SeasonOptions struct {
	Rounds   int // of search in each session after the first plan; 0 is none
	Workers  int // goroutines of the search; they do not change what is found
	Progress func(done, all int, session string)
}

// PlaySeason plans every session that has not ended, one after the other, each time with all that was planned
// before it written into a copy of the logbook as done; of a session under way only what is left of it. Saved
// plans are not looked at and nothing is ever lost: what comes out is the best that can be hoped for. The same
// campaign, logbook and moment give the same season. It errs when no session is left, when ctx ends, and
// where Prepare does.
func PlaySeason(ctx context.Context, c *Campaign, log *Logbook, at time.Time, o SeasonOptions) (*Season, error) {
	if log == nil {
		log = emptyLogbook()
	}
	p := &player{campaign: c, now: log, at: at, book: &Logbook{Header: log.Header, Entries: slices.Clone(log.Entries)}}
	var coming []*Session
	for i := range c.Sessions {
		if s := &c.Sessions[i]; s.End.After(at) {
			coming = append(coming, s)
			if s.End.After(p.season.To) {
				p.season.To = s.End
			}
		}
	}
	if len(coming) == 0 {
		_, err := c.Session(NextSession, at)
		return nil, err
	}
	p.season.From = at
	for i, s := range coming {
		if o.Progress != nil {
			o.Progress(i, len(coming), s.Name)
		}
		if err := p.play(ctx, s, o); err != nil {
			return nil, err
		}
	}
	if err := p.reckon(); err != nil {
		return nil, err
	}
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	return &p.season, nil
}

// A player plays a season.
type player struct {
	campaign *Campaign
	now      *Logbook // as it is
	book     *Logbook // with what was planned
	at       time.Time
	season   Season
	up       []map[string]bool             // by session: sources that are within limits at some time of it
	asked    map[string][]demand           // by site
	pressure map[string]*LSTPressure       // by site
	mounted  map[string]map[string]float64 // granted hours, by receiver and site
	heard    map[string]*hearing           // by source
}

// play plans a session and writes its slots into the book.
func (p *player) play(ctx context.Context, s *Session, o SeasonOptions) error {
	options := PrepareOptions{At: p.at}
	if p.at.After(s.Start) {
		options.FromMin = int(p.at.Sub(s.Start).Minutes()) + 1
	}
	prepared, err := Prepare(p.campaign, p.book, s, options)
	if err != nil {
		return err
	}
	rounds := o.Rounds
	if rounds == 0 {
		rounds = -1
	}
	result, err := sched.Solve(ctx, prepared.Problem, sched.Options{Rounds: rounds, Workers: o.Workers})
	if err != nil {
		return fmt.Errorf("session %q: %w", s.Name, err)
	}
	out := SeasonSession{
		Session: s, Rows: prepared.SlotRows(result.Plan), Worth: float64(result.Worth) / float64(sched.Unit),
	}
	for i := range prepared.Accounts {
		if a := &prepared.Accounts[i]; a.Kind == Cadence && overdue(a.Debt) {
			out.Overdue++
		}
	}
	up := map[string]bool{}
	for i := range prepared.Tracks {
		if t := &prepared.Tracks[i]; len(t.Usable) > 0 {
			up[p.campaign.Sources[t.Source].Name] = true
		}
	}
	p.up = append(p.up, up)
	for i, row := range out.Rows {
		out.OnSourceMin += int(row.End.Sub(row.Start).Minutes())
		p.book.Entries = append(p.book.Entries, Entry{
			Start: row.Start, End: row.End, Site: s.Site, Source: row.Source, Receiver: row.Receiver,
			Outcome: Done, Quality: prepared.quality(result.Plan.Slots[i]), SNR: row.SNR, ToaUs: row.ToaUs,
		})
	}
	out.Hours = p.grant(prepared, options.FromMin)
	p.spend(prepared, result.Plan)
	p.hear(prepared, options.FromMin)
	p.season.Sessions = append(p.season.Sessions, out)
	return nil
}

// overdue leaves room for the last digit of a debt of exactly 1.
func overdue(debt float64) bool { return debt > 1+1e-9 }

// quality is the share of the wanted sensitivity that a slot reaches, 0 to 1: sensitivity goes as the root of
// time. Aims that count minutes or passages take the slot as it is.
func (p *Prepared) quality(s sched.Slot) float64 {
	best, asked := 0.0, false
	for _, t := range p.Problem.Jobs[p.Problem.Nodes[s.Node].Job].Terms {
		if t.Curve == sched.Root && t.Kind != sched.Measure {
			asked = true
			best = math.Max(best, math.Sqrt(float64(t.Cum[s.End]-t.Cum[s.Start])/float64(t.Wanted)))
		}
	}
	if !asked {
		return 1
	}
	return math.Min(1, math.Round(best*100)/100)
}

// reckon works out what the season comes to when all sessions have been played.
func (p *player) reckon() error {
	end := open(p.campaign, p.book, p.season.To)
	var err error
	if p.season.Debts, err = accountRows(p.campaign, end); err != nil {
		return err
	}
	start := open(p.campaign, p.now, p.at)
	p.forecastCadences(start)
	if err := p.forecastConnects(start, end); err != nil {
		return err
	}
	if err := p.want(start); err != nil {
		return err
	}
	if err := p.forecastArray(start); err != nil {
		return err
	}
	if err := p.findRepeats(); err != nil {
		return err
	}
	return p.findSun()
}
