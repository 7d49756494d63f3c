package campaigns

import (
	"fmt"
	"math"
	"sort"
	"time"

	"example.org/tallystick/sched"
	"example.org/tallystick/sky"
)

// A Prepared session is one that has been turned into a planner's problem, with all that views and
// exports show beside it. It is made once and then only read.
type Prepared struct {
	Campaign *Campaign
	Site     *Site
	Session  *Session
	At       time.Time // the present moment it was prepared at
	Problem  *sched.Problem
	Accounts []AccountRow // every account at the start of the session, worst first
	Tracks   []Track      // in the order of Campaign.Sources
	SunAzDeg []float64    // the Sun at each minute, as Track.AzDeg
	SunElDeg []float64
	LSTHours []float64 // local apparent sidereal time at each minute

	site         *sky.Site
	frame        *sky.Frame       // around the middle of the session
	sources      []preparedSource // as Tracks
	sourceByName map[string]int   // index into Campaign.Sources
	places       []place          // as Problem.Slew counts them
	takePart     []string         // see TakingPart
	digest       *groundOnce
}

// PrepareOptions are what a session is prepared with beside the campaign.
type PrepareOptions struct {
	At      time.Time // the present moment
	GridMin int       // slot ends lie on multiples of this; 0 means 1
	Bars    []string  // sources that the observer excludes from this session
	FromMin int       // re-plan from this minute: what lies before it is past
	Keep    []string  // of a campaign too large to plan whole, sources that take part in any case
}

// A Track is where a source stands at each minute of a session: Minutes+1 values in each slice.
type Track struct {
	Source   int       // index into Campaign.Sources
	AzDeg    []float64 // north through east, 0..360
	ElDeg    []float64
	LimitDeg []float64    // the lowest elevation allowed at that azimuth: site limit and horizon mask
	Up       []sched.Span // minutes within elevation limits, mask and mount limits, Sun and eclipses left aside
	Usable   []sched.Span // what is left of Up outside the Sun limit, eclipses and breaks
	Eclipsed []sched.Span // with every receiver: where they differ, the slots' own windows know
	SunDeg   float64      // least distance from the Sun in the session
}

// A SlotRow is one line of a slot list, with everything an operator or a script is told about it.
// Zero means not known for SNR and ToaUs.
type SlotRow struct {
	Slot                   int // counted from 1
	Source, Receiver       string
	Start, End             time.Time // time on source, UTC
	RADeg, DecDeg          float64   // ICRS at the date of the session
	AzStartDeg, ElStartDeg float64   // the mount's azimuth, within its travel
	AzEndDeg, ElEndDeg     float64
	Turn                   int // cable turn at the start: mount azimuth = compass azimuth + 360 × Turn
	LSTStartH, LSTEndH     float64
	HAStartH, HAEndH       float64  // west positive
	ParStartDeg, ParEndDeg float64  // parallactic angle
	PhaseStart, PhaseEnd   *float64 // orbital phase from the ascending node, turns; nil without an orbit
	ZenithMin              float64  // minutes at the zenith that would bring as much: air, sky and gain counted
	SNR, ToaUs             float64
	ToaRule                string  // by which rule the noise counts in ToaUs, in words: "W/(S/N)"; beside it count jitter and floor
	SNRScatter             float64 // share of itself by which the S/N scatters from visit to visit; 0: steady, or not known
	Worth                  float64 // in units of worth
	Pinned                 bool
	Note                   string
	MoveSec                int      // slew or receiver change before it, whichever is longer
	OverheadSec            int      // set-up after the move
	WaitSec                int      // what is left before Start
	Breaches               []string // limits that it breaks, in words; kept deliberately by the observer
}

// An AccountRow is one aim of one source as the arrears show it. Times are zero when there is none.
type AccountRow struct {
	Source             string
	Aim                string // in a few words: "every 14 d with L+S"
	Kind               AimKind
	Receivers          []string
	Priority           float64
	Debt               float64 // 1 is due now; counted as the aim's kind says
	Last, Due          time.Time
	NextStart, NextEnd time.Time // when it can next be observed in a coming session
	NextSession        string
	Flags              []string // "overdue", "glitch ramp", "near the Sun", "not up in any coming session", ...
	Why                string   // where the debt comes from, in one line
}

// Prepare turns a session of a campaign into a planner's problem. What a source is owed is reckoned at the
// start of the session; log lines after that do not count. It errs where the session's date is outside those
// that places on the sky are worked out for.
func Prepare(c *Campaign, log *Logbook, s *Session, o PrepareOptions) (*Prepared, error) {
	p := &Prepared{Campaign: c, Session: s, At: o.At, sourceByName: map[string]int{}, digest: new(groundOnce)}
	p.Site = c.site(s.Site)
	minutes := int(s.End.Sub(s.Start) / time.Minute)
	middle := s.Start.Add(s.End.Sub(s.Start) / 2)
	var err error
	if p.frame, err = sky.NewFrame(middle); err != nil {
		return nil, fmt.Errorf("session %q: %w", s.Name, err)
	}
	if p.site, err = p.Site.onEarth(); err != nil {
		return nil, fmt.Errorf("site %q: %w", p.Site.Name, err)
	}
	p.Problem = &sched.Problem{
		Session: s.Name, Start: s.Start.UTC(), Minutes: minutes, GridMin: max(1, o.GridMin), FromMin: max(0, o.FromMin),
		OverheadSec: int(math.Ceil(s.SlotOverheadMin * 60)),
	}
	for _, name := range s.Receivers {
		p.Problem.Receivers = append(p.Problem.Receivers, sched.Receiver{
			Name: name, ChangeSec: int(math.Ceil(c.receiver(name, s.Site).ChangeMin * 60)),
		})
	}
	for _, b := range s.Breaks {
		p.Problem.Breaks = append(p.Problem.Breaks, sched.Span{From: p.Minute(b[0]), To: p.Minute(b[1])})
	}
	p.drawSun()

	books := open(c, log, s.Start)
	books.now = earlier(o.At, s.Start)
	bars := map[string]bool{}
	for _, name := range o.Bars {
		bars[name] = true
	}
	if err := p.addSources(books, bars); err != nil {
		return nil, err
	}
	if p.Accounts, err = accountRows(c, books); err != nil {
		return nil, err
	}
	p.crop(o.Keep)
	p.Problem.Slew = slewTable(p.Site.mount(), p.places, minutes, p.Problem.Breaks)
	return p, nil
}

// onEarth is where the site stands.
func (s *Site) onEarth() (*sky.Site, error) {
	return sky.NewSite(s.LatitudeDeg, s.LongitudeDeg, s.HeightM, s.DUT1Sec)
}

// site finds a site by its name; the loader has made sure that it exists.
func (c *Campaign) site(name string) *Site {
	for i := range c.Sites {
		if c.Sites[i].Name == name {
			return &c.Sites[i]
		}
	}
	panic("site " + name + " was not checked")
}

// receiver finds a receiver of a site; the loader has made sure that it exists.
func (c *Campaign) receiver(name, site string) *Receiver {
	for i := range c.Receivers {
		if c.Receivers[i].Name == name && c.Receivers[i].Site == site {
			return &c.Receivers[i]
		}
	}
	panic("receiver " + name + " was not checked")
}

// drawSun fills in the Sun's track and sidereal time.
func (p *Prepared) drawSun() {
	n := p.Problem.Minutes + 1
	p.SunAzDeg, p.SunElDeg, p.LSTHours = make([]float64, n), make([]float64, n), make([]float64, n)
	p.site.Track(p.frame, p.frame.Sun(), p.Problem.Start, time.Minute, p.SunAzDeg, p.SunElDeg)
	for m := range n {
		p.LSTHours[m] = p.site.LSTHours(p.frame, p.Instant(m))
	}
}

// addSources fills in tracks, places, nodes and jobs: jobs in order of source name and receiver, and for each
// its nodes in order of cable turn. Each source is worked out for itself; what it adds is joined in order.
func (p *Prepared) addSources(b *books, bars map[string]bool) error {
	n := len(p.Campaign.Sources)
	p.sources = make([]preparedSource, n)
	p.Tracks = make([]Track, n)
	order := make([]int, n)
	for i := range order {
		order[i] = i
		p.sourceByName[p.Campaign.Sources[i].Name] = i
	}
	sort.Slice(order, func(a, b int) bool {
		return p.Campaign.Sources[order[a]].Name < p.Campaign.Sources[order[b]].Name
	})
	added := make([]addedSource, n)
	sideBySide(n, func(at int) { added[at] = p.addSource(order[at], b, bars) })
	for i := range added {
		if added[i].err != nil {
			return added[i].err
		}
		p.join(&added[i])
	}
	return nil
}

// An addedSource is what one source adds to a session's problem.
type addedSource struct {
	places []place
	jobs   []sched.Job
	open   [][][]sched.Window // by job and place
	err    error
}

// addSource does the work for one source. It writes nothing of p but the source's own track and preparedSource.
func (p *Prepared) addSource(i int, b *books, bars map[string]bool) (added addedSource) {
	src := &p.Campaign.Sources[i]
	k, err := newKnowledge(src, b.frames)
	if err != nil {
		return addedSource{err: err}
	}
	ps := &p.sources[i]
	*ps = preparedSource{src: src, knowledge: k, place: p.frame.Place(src.target())}
	ps.hide(p)
	track := p.track(i, ps)
	p.Tracks[i] = track.Track
	ps.listen(p)

	added.places = p.placesOf(i, track)
	if added.jobs, added.err = p.jobs(b, ps, track, bars); added.err != nil {
		return added
	}
	added.open = make([][][]sched.Window, len(added.jobs))
	for j := range added.jobs {
		for at := range added.places {
			added.open[j] = append(added.open[j], ps.clear(added.places[at].open, added.jobs[j].Receiver))
		}
	}
	return added
}

// join appends what a source adds.
func (p *Prepared) join(added *addedSource) {
	first := len(p.places)
	p.places = append(p.places, added.places...)
	for j := range added.jobs {
		p.Problem.Jobs = append(p.Problem.Jobs, added.jobs[j])
		for at := range added.places {
			p.Problem.Nodes = append(p.Problem.Nodes, sched.Node{
				Job: len(p.Problem.Jobs) - 1, Place: first + at, Turn: added.places[at].turn, Open: added.open[j][at],
			})
		}
	}
}
