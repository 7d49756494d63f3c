package sched

import (
	"math"
	"slices"
	"testing"
	"time"

	"pgregory.net/rapid"
)

var day0 = time.Date(2031, 1, 1, 0, 0, 0, 0, time.UTC)

func dayAt(d float64) time.Time { return day0.Add(days(d)) }

func near(t *testing.T, what string, got, want float64) {
	t.Helper()
	if math.Abs(got-want) > 1e-9 {
		t.Errorf("%s: %v, want %v", what, got, want)
	}
}

func TestDebtByHand(t *testing.T) {
	one := CadenceRule{EveryDays: 10, Carry: 0.5, Receivers: []string{"L"}}
	full := func(d float64) Visit { return Visit{At: dayAt(d), Receiver: "L", Paid: 1} }
	for _, c := range []struct {
		name   string
		rule   CadenceRule
		visits []Visit
		day    float64
		want   float64
	}{
		{"never observed: 1 at the start, 1 more each interval", one, nil, 15, 2.5},
		{"square after a visit in time", one, []Visit{full(0)}, 0, 0},
		{"half an interval later", one, []Visit{full(0)}, 5, 0.5},
		{"two visits in time", one, []Visit{full(0), full(10)}, 20, 1},
		{"early earns no credit", one, []Visit{full(0), full(3)}, 13, 1},
		{"three behind: still due once more", one, []Visit{full(0), full(30)}, 30, 1},
		{"then square", one, []Visit{full(0), full(30), full(30)}, 30, 0},
		{"carry 0 clears", CadenceRule{EveryDays: 10, Carry: 0, Receivers: []string{"L"}}, []Visit{full(0), full(30)}, 30, 0},
		{"carry 1 forgives nothing", CadenceRule{EveryDays: 10, Carry: 1, Receivers: []string{"L"}}, []Visit{full(0), full(30)}, 30, 2},
		{"a partial visit pays its quality", one, []Visit{full(0), {At: dayAt(10), Receiver: "L", Paid: 0.4}}, 10, 0.6 * 0.8},
		{"lost pays nothing", one, []Visit{full(0), {At: dayAt(10), Receiver: "L"}}, 10, 1},
		{"the order of the log does not matter", one, []Visit{full(10), full(0)}, 20, 1},
		{"what comes later does not count yet", one, []Visit{full(0), full(10)}, 9, 0.9},
		{"another receiver does not count", one, []Visit{full(0), {At: dayAt(10), Receiver: "S", Paid: 1}}, 10, 1},
	} {
		near(t, c.name, c.rule.Balance(day0, c.visits, dayAt(c.day)).Debt, c.want)
	}
	if a := one.Balance(time.Time{}, nil, dayAt(50)); a.Debt != 1 || !a.Due.IsZero() {
		t.Errorf("with an empty logbook the debt is %v, due %v: simply due now is wanted", a.Debt, a.Due)
	}
}

func TestReceiversPayTheirShares(t *testing.T) {
	r := CadenceRule{EveryDays: 10, PairDays: 2, Carry: 0, Receivers: []string{"L", "S"}, MinGapDays: 3}
	epoch := []Visit{{dayAt(0), "L", 1}, {dayAt(1), "S", 1}}
	near(t, "both receivers: clear, counted from the second", r.Balance(day0, epoch, dayAt(6)).Debt, 0.5)

	half := append(slices.Clone(epoch), Visit{dayAt(11), "L", 1}) // debt 1 by then
	a := r.Balance(day0, half, dayAt(11))
	near(t, "one receiver pays half", a.Debt, 0.5*0.5)
	near(t, "what it would be without", a.Owed, 1)
	if !a.Open || !a.LapsesAt.Equal(dayAt(13)) {
		t.Errorf("open %v, lapses %v", a.Open, a.LapsesAt)
	}
	needs := r.Needs(a, dayAt(11))
	near(t, "the receiver that has paid is not needed", needs[0].Need, 0)
	near(t, "the other is worth the whole debt", needs[1].Need, 1)

	near(t, "the share lapses", r.Balance(day0, half, dayAt(13.5)).Debt, 1.25)
	near(t, "needs are those of the debt again", r.Needs(r.Balance(day0, half, dayAt(13.5)), dayAt(13.5))[0].Need, 1.5)

	closed := append(half, Visit{dayAt(12), "S", 1})
	near(t, "the other follows", r.Balance(day0, closed, dayAt(12)).Debt, 0)
	if n := r.Needs(r.Balance(day0, closed, dayAt(14)), dayAt(14)); n[0].Need != 0 || n[1].Need != 0 {
		t.Errorf("needs %+v within the least gap", n)
	}

	again := []Visit{{dayAt(0), "L", 1}, {dayAt(1.5), "L", 1}, {dayAt(3), "S", 1}}
	near(t, "a second visit begins a new epoch that the other can still join", r.Balance(day0, again, dayAt(3)).Debt, 0)
}

func TestRamp(t *testing.T) {
	r := CadenceRule{EveryDays: 8, Receivers: []string{"L"}, Ramp: &Ramp{From: dayAt(100), FirstDays: 1, Factor: 2}}
	visit := []Visit{{dayAt(96), "L", 1}}
	near(t, "before the ramp", r.Balance(day0, visit, dayAt(98)).Debt, 0.25)
	near(t, "due at once when it begins", r.Balance(day0, visit, dayAt(100)).Debt, 1)
	near(t, "a discovery owes nothing from before it", r.Balance(day0, nil, dayAt(101)).Debt, 2)
	near(t, "nor once it has been seen", r.Balance(day0, []Visit{{dayAt(101), "L", 1}}, dayAt(102)).Debt, 0.5)
	near(t, "and is simply due before it", r.Balance(day0, nil, dayAt(16)).Debt, 1)
	visit = append(visit, Visit{dayAt(100), "L", 1})
	for _, c := range []struct{ day, debt float64 }{{100.5, 0.5}, {101, 1}, {103, 2}, {107, 3}, {115, 4}, {123, 5}} {
		near(t, "intervals 1, 2, 4, 8, 8 d", r.Balance(day0, visit, dayAt(c.day)).Debt, c.debt)
	}
	if due := r.Balance(day0, append(visit, Visit{dayAt(101), "L", 1}), dayAt(101)).Due; !due.Equal(dayAt(103)) {
		t.Errorf("due %v, want %v", due, dayAt(103))
	}
}

// The line under a debt lets it be added up: what was left, and what has come since.
func TestDebtsAddUpInWords(t *testing.T) {
	r := CadenceRule{EveryDays: 10, PairDays: 2, Carry: 0.5, Receivers: []string{"L"}}
	full := func(d float64, receiver string) Visit { return Visit{At: dayAt(d), Receiver: receiver, Paid: 1} }
	ramp, pair := r, r
	ramp.Ramp = &Ramp{From: dayAt(20), FirstDays: 1, Factor: 2}
	pair.Receivers = []string{"L", "S"}
	for _, c := range []struct {
		rule   CadenceRule
		visits []Visit
		day    float64
		want   string
	}{
		{r, nil, 15, "never observed: debt 2.50, due since 2031-01-01, every 10 d"},
		{r, []Visit{full(0, "L")}, 5, "debt 0.50: last 5.0 d ago, every 10 d"},
		{r, []Visit{full(0, "L"), full(30, "L")}, 35, "debt 1.50: last 5.0 d ago, every 10 d, 1.00 left from before"},
		{ramp, []Visit{full(21, "L")}, 22, "debt 1.00: last 1.0 d ago, every 2 d now and 10 d later, 0.50 left from before"},
		{pair, []Visit{full(0, "L"), full(1, "S"), full(6, "L")}, 11, "debt 1.05: last 5.0 d ago without S, complete 10.0 d ago, every 10 d, 0.05 left from before"},
		{pair, []Visit{full(0, "L")}, 11, "debt 2.10: last 11.0 d ago without S, never complete, due since 2031-01-01, every 10 d"},
	} {
		if got := c.rule.Balance(day0, c.visits, dayAt(c.day)).Why; got != c.want {
			t.Errorf("got  %q\nwant %q", got, c.want)
		}
	}
}

func TestDue(t *testing.T) {
	r := CadenceRule{EveryDays: 10, Carry: 0.5, Receivers: []string{"L"}}
	a := r.Balance(day0, []Visit{{dayAt(0), "L", 1}}, dayAt(25))
	if !a.Due.Equal(dayAt(10)) || !a.Last.Equal(dayAt(0)) {
		t.Errorf("last %v, due %v", a.Last, a.Due)
	}
}

func TestCadenceNeed(t *testing.T) {
	for _, c := range []struct{ debt, need float64 }{{-1, 0}, {0, 0}, {0.5, 0.25}, {1, 1}, {2, 3}, {5, 9}, {80, 9}} {
		near(t, "need", CadenceNeed(c.debt), c.need)
	}
}

func TestOtherNeeds(t *testing.T) {
	got := PhaseNeeds(4, 2, []PhaseVisit{{0.1, 1}, {1.2, 1}, {-0.1, 0.5}, {0.5, 3}})
	for i, want := range []float64{0, 1, 0.5, 0.75} {
		near(t, "phase bin", got[i], want)
	}
	near(t, "passages", ConjunctionNeed(6, []float64{1, 0.5, 2}), 3.5/6)
	near(t, "passages done", ConjunctionNeed(1, []float64{1, 1}), 0)
	near(t, "connect at the limit", ConnectNeed(0.1, 0.1), 10)
	near(t, "connect at half of it", ConnectNeed(0.05, 0.1), 0.625)
	near(t, "connect beyond", ConnectNeed(3, 0.1), 10)
}

func TestDebtGrowsWithTime(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		r := CadenceRule{
			EveryDays: rapid.Float64Range(0.5, 60).Draw(t, "every"), PairDays: rapid.Float64Range(0, 5).Draw(t, "pair"),
			Carry: rapid.Float64Range(0, 1).Draw(t, "carry"), Receivers: []string{"L", "S", "C"}[:rapid.IntRange(1, 3).Draw(t, "receivers")],
		}
		if rapid.Bool().Draw(t, "ramped") {
			r.Ramp = &Ramp{From: dayAt(rapid.Float64Range(-10, 60).Draw(t, "from")), FirstDays: rapid.Float64Range(0.1, 5).Draw(t, "first"), Factor: rapid.Float64Range(1, 4).Draw(t, "factor")}
		}
		var visits []Visit
		for range rapid.IntRange(0, 12).Draw(t, "visits") {
			visits = append(visits, Visit{dayAt(rapid.Float64Range(0, 50).Draw(t, "day")), rapid.SampledFrom(r.Receivers).Draw(t, "receiver"), rapid.Float64Range(0, 1).Draw(t, "paid")})
		}
		last := 0.0
		for d := 50.0; d < 120; d += 3.7 { // no visit from here on
			a := r.Balance(day0, visits, dayAt(d))
			if a.Debt < last-1e-9 || a.Owed < a.Debt-1e-9 {
				t.Fatalf("day %v: debt %v after %v, owed %v", d, a.Debt, last, a.Owed)
			}
			last = a.Debt
			if a.Due.After(dayAt(d)) != (a.Debt < 1) && math.Abs(a.Debt-1) > 1e-6 && !a.Open {
				t.Fatalf("day %v: debt %v, due %v", d, a.Debt, a.Due)
			}
			for _, n := range r.Needs(a, dayAt(d)) {
				if n.Need < 0 || n.Need > 9 {
					t.Fatalf("need %+v", n)
				}
			}
		}
		// One more full visit never raises the debt. (One from before a discovery would: it says that there was none.)
		at := dayAt(rapid.Float64Range(0, 50).Draw(t, "extra"))
		known := r.Ramp == nil || !at.Before(r.Ramp.From) || slices.ContainsFunc(visits, func(v Visit) bool { return v.Paid > 0 && v.At.Before(r.Ramp.From) })
		if len(r.Receivers) == 1 && known {
			with := r.Balance(day0, append(slices.Clone(visits), Visit{at, "L", 1}), dayAt(60))
			if with.Debt > r.Balance(day0, visits, dayAt(60)).Debt+1e-9 && len(visits) > 0 {
				t.Fatalf("a visit raised the debt to %v", with.Debt)
			}
		}
	})
}
