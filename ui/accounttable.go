package ui

import (
	"cmp"
	"fmt"
	"slices"
	"strings"
	"time"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/ui/cell"
	"example.org/tallystick/ui/theme"
)

// An accountColumn is one column of the table of accounts. A narrow screen drops the highest ranks.
type accountColumn struct {
	head  string
	width int
	right bool
	rank  int
	text  func(w *world, g *theme.Glyphs, r *campaigns.AccountRow) string
	order func(w *world, a, b *campaigns.AccountRow) int // nil: no order of its own
}

// debtShown is the debt at which a debt bar is full.
const debtShown = 4

var accountColumns = []accountColumn{
	{"source", 12, false, 0,
		func(_ *world, _ *theme.Glyphs, r *campaigns.AccountRow) string { return r.Source },
		func(_ *world, a, b *campaigns.AccountRow) int { return strings.Compare(a.Source, b.Source) }},
	{"aim", 20, false, 2,
		func(_ *world, _ *theme.Glyphs, r *campaigns.AccountRow) string { return aimWords(r) },
		func(_ *world, a, b *campaigns.AccountRow) int { return strings.Compare(aimWords(a), aimWords(b)) }},
	{"debt", 5, true, 0,
		func(_ *world, _ *theme.Glyphs, r *campaigns.AccountRow) string { return fmt.Sprintf("%.2f", r.Debt) },
		func(_ *world, a, b *campaigns.AccountRow) int { return cmp.Compare(b.Debt, a.Debt) }},
	{"", 6, false, 3,
		func(_ *world, g *theme.Glyphs, r *campaigns.AccountRow) string {
			return cell.Gauge(r.Debt, debtShown, 6, g.Full, g.Nothing)
		}, nil},
	{"last", 10, false, 4,
		func(_ *world, _ *theme.Glyphs, r *campaigns.AccountRow) string { return date(r.Last) },
		func(_ *world, a, b *campaigns.AccountRow) int { return a.Last.Compare(b.Last) }},
	{"due", 10, false, 1,
		func(_ *world, _ *theme.Glyphs, r *campaigns.AccountRow) string { return dueWords(r) },
		func(_ *world, a, b *campaigns.AccountRow) int { return byTime(a.Due, b.Due) }},
	{"next usable, UTC", 22, false, 6,
		func(w *world, _ *theme.Glyphs, r *campaigns.AccountRow) string { return nextWords(w.desk, r) },
		func(_ *world, a, b *campaigns.AccountRow) int { return byTime(a.NextStart, b.NextStart) }},
	{"in plan", 10, false, 2,
		func(w *world, _ *theme.Glyphs, r *campaigns.AccountRow) string { return planWords(w, r) },
		func(w *world, a, b *campaigns.AccountRow) int {
			return strings.Compare(planWords(w, a), planWords(w, b))
		}},
	{"flags", 14, false, 5,
		func(_ *world, _ *theme.Glyphs, r *campaigns.AccountRow) string { return strings.Join(r.Flags, ", ") },
		func(_ *world, a, b *campaigns.AccountRow) int { return len(b.Flags) - len(a.Flags) }},
}

const debtColumn = 2

// tellsDebt reports whether a column says how much is owed: the figure, its bar and the flags. Only these
// are coloured, for a screen that is all warning warns of nothing.
func tellsDebt(column int) bool {
	return column == debtColumn || column == debtColumn+1 || accountColumns[column].head == "flags"
}

// byTime orders times with unknown ones last.
func byTime(a, b time.Time) int {
	switch {
	case a.IsZero() && b.IsZero():
		return 0
	case a.IsZero():
		return 1
	case b.IsZero():
		return -1
	}
	return a.Compare(b)
}

func aimWords(r *campaigns.AccountRow) string {
	if r.Aim != "" {
		return r.Aim
	}
	return string(r.Kind)
}

func dueWords(r *campaigns.AccountRow) string {
	if r.Due.IsZero() {
		return "-"
	}
	return date(r.Due)
}

func nextWords(d *desk, r *campaigns.AccountRow) string {
	switch {
	case !d.reviewed:
		return "being worked out"
	case r.NextStart.IsZero():
		return "no coming session"
	}
	return r.NextStart.UTC().Format("2006-01-02 15:04") + "-" + clock(r.NextEnd)
}

// planWords says in a word whether a source is in the plan.
func planWords(w *world, r *campaigns.AccountRow) string {
	read := w.desk.read()
	if _, barred := slices.BinarySearch(read.bars, r.Source); barred {
		return "barred"
	}
	var numbers []string
	for i := range read.rows {
		if row := &read.rows[i]; row.Source == r.Source && (len(r.Receivers) == 0 || slices.Contains(r.Receivers, row.Receiver)) {
			numbers = append(numbers, fmt.Sprint(i+1))
		}
	}
	if len(numbers) > 0 {
		return "slot " + strings.Join(numbers, ",")
	}
	return "-"
}

// fitAccountColumns returns which columns have room in w cells.
func fitAccountColumns(w int) []int {
	used := 1
	keep := map[int]bool{}
	for rank := 0; rank <= 6; rank++ {
		for i, c := range accountColumns {
			if c.rank == rank && (rank == 0 || used+c.width+1 <= w) {
				used += c.width + 1
				keep[i] = true
			}
		}
	}
	var kept []int
	for i := range accountColumns {
		if keep[i] {
			kept = append(kept, i)
		}
	}
	return kept
}
