package campaigns

import (
	"context"
	"math"
	"reflect"
	"runtime"
	"slices"
	"strconv"
	"strings"
	"sync"
	"testing"
	"time"

	"example.org/tallystick/sched"
	"example.org/tallystick/sky"
	"example.org/tallystick/sky/orbit"
	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"
)

// openDemo opens the demonstration and says when it takes place.
func openDemo(t testing.TB) (*Folder, time.Time) {
	t.Helper()
	f, err := OpenDemo()
	if err != nil {
		t.Fatal(err)
	}
	now, _ := f.Now()
	return f, now
}

// firstSession is the demonstration's first session, prepared once for all tests, and its plan.
var firstSession = sync.OnceValues(func() (*Prepared, sched.Plan) {
	f, err := OpenDemo()
	if err != nil {
		panic(err)
	}
	now, _ := f.Now()
	p, err := Prepare(f.Campaign, f.Logbook, &f.Campaign.Sessions[0], PrepareOptions{At: now})
	if err != nil {
		panic(err)
	}
	r, err := sched.Solve(context.Background(), p.Problem, sched.Options{Rounds: 1})
	if err != nil {
		panic(err)
	}
	return p, r.Plan
})

func TestEverySessionOfTheDemonstrationMakesASoundProblem(t *testing.T) {
	f, now := openDemo(t)
	for i := range f.Campaign.Sessions {
		p, err := Prepare(f.Campaign, f.Logbook, &f.Campaign.Sessions[i], PrepareOptions{At: now})
		if err != nil {
			t.Fatal(err)
		}
		if err := p.Problem.Check(); err != nil {
			t.Errorf("%s: %v", p.Session.Name, err)
		}
		for _, j := range p.Problem.Jobs {
			if !j.Must && j.Facts.DebtAim == "" {
				t.Errorf("%s: %s does not say what it is owed", p.Session.Name, j.Source)
			}
		}
		for _, n := range p.Problem.Nodes {
			for _, w := range n.Open {
				if w.OpensBy == "" || w.ClosesBy == "" {
					t.Errorf("%s: a window of %s does not say what bounds it: %+v", p.Session.Name, p.Problem.Jobs[n.Job].Source, w)
				}
			}
		}
	}
}

func TestPreparingTwiceGivesTheSameProblem(t *testing.T) {
	f, now := openDemo(t)
	a, _ := firstSession()
	b, err := Prepare(f.Campaign, f.Logbook, &f.Campaign.Sessions[0], PrepareOptions{At: now})
	if err != nil {
		t.Fatal(err)
	}
	if !reflect.DeepEqual(a.Problem, b.Problem) {
		t.Error(cmp.Diff(a.Problem, b.Problem))
	}
}

// Sources are worked out side by side, and slews too: nothing may depend on how many are at a time.
func TestPreparingOnAnyNumberOfCoresGivesTheSameProblem(t *testing.T) {
	f, now := openDemo(t)
	on := func(cores int, s *Session) *Prepared {
		defer runtime.GOMAXPROCS(runtime.GOMAXPROCS(cores))
		p, err := Prepare(f.Campaign, f.Logbook, s, PrepareOptions{At: now})
		if err != nil {
			t.Fatal(err)
		}
		return p
	}
	for i := range f.Campaign.Sessions {
		s := &f.Campaign.Sessions[i]
		one, many := on(1, s), on(8, s)
		if !reflect.DeepEqual(one.Problem, many.Problem) {
			t.Errorf("%s: the problem: %s", s.Name, cmp.Diff(one.Problem, many.Problem))
		}
		if !reflect.DeepEqual(one.Tracks, many.Tracks) {
			t.Errorf("%s: the tracks differ", s.Name)
		}
		if !reflect.DeepEqual(one.Accounts, many.Accounts) {
			t.Errorf("%s: the accounts: %s", s.Name, cmp.Diff(one.Accounts, many.Accounts))
		}
	}
}

// The table takes a short cut where one axis is slower whatever the other does. Here the longest way is sought on both.
func TestTheLongestMoveIsThatOfBothAxes(t *testing.T) {
	const last = 40
	rapid.Check(t, func(t *rapid.T) {
		mount := sky.Mount{
			Kind:          rapid.SampledFrom([]sky.MountKind{sky.AltAz, sky.Equatorial, sky.Transit}).Draw(t, "mount"),
			RateDegPerMin: [2]float64{rapid.Float64Range(1, 60).Draw(t, "rate a"), rapid.Float64Range(1, 60).Draw(t, "rate b")},
			AccelDegPerS2: [2]float64{rapid.Float64Range(0, 1).Draw(t, "acceleration a"), rapid.Float64Range(0, 1).Draw(t, "acceleration b")},
			SettleSec:     rapid.Float64Range(0, 30).Draw(t, "settling"),
		}
		track := func() []sky.Axes {
			a, b := rapid.Float64Range(-200, 200).Draw(t, "a"), rapid.Float64Range(5, 85).Draw(t, "b")
			rateA, rateB := rapid.Float64Range(-20, 20).Draw(t, "drift a"), rapid.Float64Range(-1, 1).Draw(t, "drift b")
			bend := rapid.Float64Range(-0.2, 0.2).Draw(t, "bend")
			var axes []sky.Axes
			for m := range last + 1 {
				x := float64(m)
				axes = append(axes, sky.Axes{A: a + rateA*x + bend*x*x, B: b + rateB*x - bend*x*x})
			}
			return axes
		}
		from, to := track(), track()
		first, early := rapid.IntRange(0, last).Draw(t, "first"), rapid.IntRange(0, last).Draw(t, "early")
		end, late := min(first+slewBinMin, last), early+rapid.IntRange(1, 4).Draw(t, "more")
		way := sky.Axes{}
		for d := first; d <= end; d++ {
			for at := d + early; at <= d+late; at++ {
				q := to[min(at, last)]
				way.A, way.B = math.Max(way.A, math.Abs(q.A-from[d].A)), math.Max(way.B, math.Abs(q.B-from[d].B))
			}
		}
		m := mover{pace: mount.Pace(), last: last}
		depart, arrive := newHeldTrack(from), newHeldTrack(to)
		if got, want := m.longest(&depart, &arrive, first, end, early, late), mount.MoveSec(sky.Axes{}, way); got != want {
			t.Fatalf("%g s, want %g", got, want)
		}
	})
}

// The table of slews is what the planner and its judge go by, so no move may take longer than it says.
func TestNoSlewTakesLongerThanItsTable(t *testing.T) {
	p, _ := firstSession()
	mount := p.Site.mount()
	n := len(p.places)
	rapid.Check(t, func(t *rapid.T) {
		from, to := rapid.IntRange(0, n-1).Draw(t, "from"), rapid.IntRange(0, n-1).Draw(t, "to")
		depart := rapid.IntRange(0, p.Problem.Minutes).Draw(t, "depart")
		if from == to || !openAt(p.places[from], depart) {
			return
		}
		bin := min(depart/p.Problem.Slew.BinMin, p.Problem.Slew.Bins-1)
		table := float64(p.Problem.Slew.Sec[(bin*n+from)*n+to])
		// When the telescope gets there: the target moves on, so the move is followed second by second.
		start, target := p.places[from].axes[depart], heldWithin(p.places[to])
		for s := 0.0; s <= table; s++ {
			if mount.MoveSec(start, whereAt(target, float64(depart)+s/60)) <= s {
				return
			}
		}
		t.Fatalf("from %d to %d at minute %d: not there after %.0f s", from, to, depart, table)
	})
}

// In an eclipse or a break the telescope goes on following; it waits only where a limit holds it.
func TestATelescopeFollowsThroughEclipses(t *testing.T) {
	var axes []sky.Axes
	for m := range 101 {
		axes = append(axes, sky.Axes{A: float64(m), B: 40})
	}
	p := place{axes: axes, within: sched.Window{Span: sched.Span{From: 10, To: 80}}, open: []sched.Window{{Span: sched.Span{From: 10, To: 30}}}}
	held := heldWithin(p)
	for m, want := range map[int]float64{0: 10, 10: 10, 30: 30, 60: 60, 80: 80, 100: 80} {
		if held[m].A != want {
			t.Errorf("minute %d: the mount stands at %g, want %g", m, held[m].A, want)
		}
	}
}

func openAt(p place, minute int) bool {
	return slices.ContainsFunc(p.open, func(w sched.Window) bool { return w.From <= minute && minute <= w.To })
}

func whereAt(axes []sky.Axes, minute float64) sky.Axes {
	i := min(int(minute), len(axes)-2)
	f := math.Min(minute-float64(i), 1)
	return sky.Axes{A: axes[i].A + f*(axes[i+1].A-axes[i].A), B: axes[i].B + f*(axes[i+1].B-axes[i].B)}
}

// What is heard of a published orbit, and when, against another program's light times.
func TestConjunctionsAtTheObservatorysClock(t *testing.T) {
	for _, row := range publishedConjunctions(t) {
		o, err := orbit.New(orbit.Elements{PeriodDays: row.orbit.PeriodDays, AscendingNodeMJD: row.orbit.AscendingNodeMJD, Decay: row.orbit.Decay})
		if err != nil {
			t.Fatal(err)
		}
		c := clock{target: row.target, orbit: &o, frames: newFrames()}
		from := row.Num("not_before_TDB")
		row.Check(sky.MJD(c.heardAt(o.Conjunctions(orbit.Superior, from, from+row.orbit.PeriodDays)[0])))
	}
}

func number(t *testing.T, s string) float64 {
	t.Helper()
	x, err := strconv.ParseFloat(s, 64)
	if err != nil {
		t.Fatal(err)
	}
	return x
}

func TestOrbitTimeAndHeardTimeAreInverse(t *testing.T) {
	f, now := openDemo(t)
	for i := range f.Campaign.Sources {
		s := &f.Campaign.Sources[i]
		if s.Orbit == nil {
			continue
		}
		k, err := newKnowledge(s, newFrames())
		if err != nil {
			t.Fatal(err)
		}
		back := k.clock.heardAt(k.clock.orbitMJD(now))
		if off := back.Sub(now); off < -time.Millisecond || off > time.Millisecond {
			t.Errorf("%s: %v off", s.Name, off)
		}
	}
}

func TestASavedPlanBindsToWhatItWas(t *testing.T) {
	p, plan := firstSession()
	plan = plan.Clone()
	plan.Slots[2].Pinned, plan.Slots[2].Note = true, "windy"
	saved := p.Saved(plan, sched.Bound{}, "test")
	again, lost := p.Bind(saved)
	if len(lost) > 0 {
		t.Errorf("lost: %v", lost)
	}
	if d := cmp.Diff(plan, again); d != "" {
		t.Error(d)
	}
}

func TestABoundPlanSaysWhatNoLongerFits(t *testing.T) {
	p, _ := firstSession()
	start := p.Session.Start.Add(time.Hour)
	_, lost := p.Bind(&SavedPlan{Slots: []SavedSlot{
		{Source: "J9999+0000", Receiver: "L", Start: start, End: start.Add(time.Hour)},
		{Source: p.Problem.Jobs[0].Source, Receiver: p.Problem.Receivers[p.Problem.Jobs[0].Receiver].Name, Start: start.AddDate(0, 0, 9), End: start.AddDate(0, 0, 9).Add(time.Hour)},
	}})
	if len(lost) != 2 || !strings.Contains(lost[0], "J9999+0000") || !strings.Contains(lost[1], "outside the session") {
		t.Errorf("lost: %q", lost)
	}
}

func TestWindowsWithoutSpans(t *testing.T) {
	w := []sched.Window{{Span: sched.Span{From: 0, To: 100}, OpensBy: "elevation 8°", ClosesBy: "session end"}}
	got := without(w, []sched.Span{{From: 0, To: 10}, {From: 40, To: 50}, {From: 100, To: 120}}, "break")
	want := []sched.Window{
		{Span: sched.Span{From: 10, To: 40}, OpensBy: "break", ClosesBy: "break"},
		{Span: sched.Span{From: 50, To: 100}, OpensBy: "break", ClosesBy: "session end"},
	}
	if d := cmp.Diff(want, got); d != "" {
		t.Error(d)
	}
}

func TestWindowsInBoth(t *testing.T) {
	window := func(from, to int, by string) sched.Window {
		return sched.Window{Span: sched.Span{From: from, To: to}, OpensBy: by, ClosesBy: by}
	}
	got := both([]sched.Window{window(0, 50, "a"), window(60, 90, "a")}, []sched.Window{window(10, 70, "b")})
	want := []sched.Window{
		{Span: sched.Span{From: 10, To: 50}, OpensBy: "b", ClosesBy: "a"},
		{Span: sched.Span{From: 60, To: 70}, OpensBy: "a", ClosesBy: "b"},
	}
	if d := cmp.Diff(want, got); d != "" {
		t.Error(d)
	}
}

// Whatever a plan does, its slot list says where the telescope points, within the mount's travel.
func TestSlotRowsStayWithinTheTravel(t *testing.T) {
	p, plan := firstSession()
	travel := p.Site.AzimuthTravelDeg
	for _, r := range p.SlotRows(plan) {
		for _, az := range []float64{r.AzStartDeg, r.AzEndDeg} {
			if az < travel[0] || az > travel[1] {
				t.Errorf("slot %d: azimuth %.2f, travel %v", r.Slot, az, travel)
			}
		}
		if len(r.Breaches) > 0 {
			t.Errorf("slot %d: %v", r.Slot, r.Breaches)
		}
		if r.WaitSec < 0 {
			t.Errorf("slot %d starts %d s before it is set up", r.Slot, -r.WaitSec)
		}
	}
}

func TestDebtsDoNotReadTheFuture(t *testing.T) {
	f, _ := openDemo(t)
	at := time.Date(2026, 6, 1, 0, 0, 0, 0, time.UTC)
	all, err := Arrears(f.Campaign, f.Logbook, at)
	if err != nil {
		t.Fatal(err)
	}
	past := &Logbook{Header: f.Logbook.Header}
	for _, e := range f.Logbook.Entries {
		if e.End.Before(at) {
			past.Entries = append(past.Entries, e)
		}
	}
	same, err := Arrears(f.Campaign, past, at)
	if err != nil {
		t.Fatal(err)
	}
	if d := cmp.Diff(all, same); d != "" {
		t.Error(d)
	}
}

func TestArrearsNeverShowWhatIsNoNumber(t *testing.T) {
	f, now := openDemo(t)
	for _, log := range []*Logbook{f.Logbook, {}, nil} {
		rows, err := Arrears(f.Campaign, log, now)
		if err != nil {
			t.Fatal(err)
		}
		aims := 0
		for i := range f.Campaign.Sources {
			aims += len(f.Campaign.Sources[i].Aims)
		}
		if len(rows) != aims {
			t.Errorf("%d accounts, %d aims", len(rows), aims)
		}
		for i, r := range rows {
			if math.IsNaN(r.Debt) || math.IsInf(r.Debt, 0) || r.Debt < 0 || r.Why == "" {
				t.Errorf("%s, %s: debt %v, %q", r.Source, r.Aim, r.Debt, r.Why)
			}
			if i > 0 && r.Debt > rows[i-1].Debt {
				t.Errorf("%s stands below a smaller debt", r.Source)
			}
		}
	}
}

func BenchmarkPrepare(b *testing.B) {
	f, now := openDemo(b)
	for b.Loop() {
		if _, err := Prepare(f.Campaign, f.Logbook, &f.Campaign.Sessions[0], PrepareOptions{At: now}); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkArrears(b *testing.B) {
	f, now := openDemo(b)
	for b.Loop() {
		if _, err := Arrears(f.Campaign, f.Logbook, now); err != nil {
			b.Fatal(err)
		}
	}
}

// Near the zenith a source crosses the keyhole faster than the mount can turn: what lies after it is a place of
// its own, and the way there is as long as the turn takes.
func TestThePartsOfAPassThatALimitCutsArePlacesOfTheirOwn(t *testing.T) {
	start := time.Date(2027, 1, 2, 0, 0, 0, 0, time.UTC)
	c := &Campaign{
		Sites: []Site{{
			Name: "Equator", LatitudeDeg: 1, LongitudeDeg: 0, ElevationLimitsDeg: [2]float64{5, 89.5}, AzimuthTravelDeg: [2]float64{-270, 270},
			SlewDegPerMin: [2]float64{16, 8}, AccelerationDegPerS2: [2]float64{0.5, 0.5}, SettleSec: 8, Mount: AltAz,
		}},
		Receivers: []Receiver{{Name: "L", Site: "Equator", BandMHz: [2]float64{1200, 1500}, TsysK: 25, GainKPerJy: 1, Polarizations: 2}},
		Sources: []Source{{Name: "J0900+0040", RADeg: 135, DecDeg: 0.67, Priority: 1, Aims: []Aim{
			{Kind: Cadence, Receivers: []string{"L"}, Minutes: 20, EveryDays: 10, MinFraction: 0.6},
		}}},
		Sessions: []Session{{Name: "night", Site: "Equator", Start: start, End: start.Add(6 * time.Hour), Receivers: []string{"L"}}},
	}
	p, err := Prepare(c, nil, &c.Sessions[0], PrepareOptions{At: start})
	if err != nil {
		t.Fatal(err)
	}
	var east, west = -1, -1
	for i, pl := range p.places {
		if len(pl.open) != 1 {
			t.Fatalf("place %d has %d windows", i, len(pl.open))
		}
		switch w := pl.open[0]; {
		case pl.turn != p.places[0].turn:
		case w.ClosesBy != "session end":
			east = i
		default:
			west = i
		}
	}
	if east < 0 || west < 0 {
		t.Fatalf("the zenith does not cut the pass: %+v", p.places)
	}
	leave := p.places[east].open[0].To
	sec := int(p.Problem.Slew.Sec[(leave/slewBinMin*len(p.places)+east)*len(p.places)+west])
	turn := math.Abs(p.places[east].axes[leave].A - p.places[west].axes[p.places[west].open[0].From].A)
	if turn < 90 || float64(sec) < turn/16*60 {
		t.Errorf("%d s for a turn of %.0f°", sec, turn)
	}
}
