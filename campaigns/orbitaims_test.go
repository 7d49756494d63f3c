package campaigns

import (
	"math"
	"strings"
	"testing"
	"time"
)

// An aim for phases may want a precision instead of minutes, and what no receiver reaches is no reason for anything that is no
// number.
func TestPhaseCoverageByPrecision(t *testing.T) {
	aim := Aim{Kind: PhaseCoverage, Receivers: []string{"L"}, ToaUs: 0.5, MinFraction: 0.6, Bins: 10, PerBin: 2, Since: time.Date(2026, 1, 1, 0, 0, 0, 0, time.UTC)}
	c := pulsarIn(aim)
	src := &c.Sources[0]
	src.Orbit = &Orbit{PeriodDays: 1, AscendingNodeMJD: 61000, SemimajorLs: 1}
	row, p := arrearsOf(t, c)
	minutes := reachWith(src, &c.Receivers[1], 0.5).minutes
	if !(minutes > 1) || !(row.Debt > 0.99) {
		t.Fatalf("%g minutes, debt %g", minutes, row.Debt)
	}
	terms := p.Problem.Jobs[0].Terms
	if len(terms) < 3 {
		t.Fatalf("%d terms", len(terms))
	}
	for _, term := range terms {
		if term.Wanted != shares(minutes) || term.Scale != 2_000_000 {
			t.Errorf("%s: wanted %d, scale %v; want %d, 2", term.Label, term.Wanted, term.Scale, shares(minutes))
		}
	}
	entry := Entry{Start: c.Sessions[0].Start, End: c.Sessions[0].Start.Add(2 * time.Hour), Source: "A", Receiver: "L", Site: "Open", Outcome: Done, Quality: 1}
	b := open(c, &Logbook{Entries: []Entry{entry}}, entry.End)
	k, err := newKnowledge(src, b.frames)
	if err != nil {
		t.Fatal(err)
	}
	if debt := b.coverage(k, &src.Aims[0]).debt(); !(debt < 0.96 && debt > 0.8) {
		t.Errorf("debt %g after two hours", debt)
	}
	src.FloorUs = 1
	row, _ = arrearsOf(t, c)
	if math.IsNaN(row.Debt) || !strings.Contains(row.Why, "no answer with L") {
		t.Errorf("below the floor: %g, %q", row.Debt, row.Why)
	}
}

// The window of an orbit of centuries is weighed as quickly as that of an hour, and the sum of a passage's shares is 1.
func TestWeighingAWindow(t *testing.T) {
	for _, days := range []float64{0.1, 3, 400, 1e5} {
		s := Source{Name: "A", PositionMJD: j2000, Orbit: &Orbit{PeriodDays: days, AscendingNodeMJD: 61000, SemimajorLs: days / 10, SinI: 0.9}}
		k, err := newKnowledge(&s, newFrames())
		if err != nil {
			t.Fatal(err)
		}
		half := time.Duration(0.1 * days * 24 * float64(time.Hour))
		pass := passage{centre: time.Date(2026, 12, 3, 0, 0, 0, 0, time.UTC), halfWide: half}
		whole := k.wholeWeight(pass)
		if whole < 0.05*2*half.Minutes() || whole > 2*half.Minutes() {
			t.Errorf("%g d: %g of %g minutes", days, whole, 2*half.Minutes())
		}
		left, right := k.shareOf(pass, pass.from(), pass.centre), k.shareOf(pass, pass.centre, pass.to())
		if math.Abs(left+right-1) > 1e-9 || math.Abs(left-right) > 0.05 {
			t.Errorf("%g d: halves of %g and %g", days, left, right)
		}
	}
}
