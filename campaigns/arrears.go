package campaigns

import (
	"fmt"
	"slices"
	"sort"
	"time"

	"example.org/tallystick/sky/radiometer"
)

// Arrears returns every account of the campaign at a moment, worst first: what each aim of each source is
// owed, and when it can next be observed in a session that has not ended. Sources with the same debt stand
// in the order of their names.
//
// A debt of 1 is due now. It counts cycles for a cadence; the share still missing for phase coverage and
// conjunctions; how far the error is above the goal for a measurement, in halvings; the predicted phase
// error over its limit for a count of turns; and nothing for a calibration, which every session needs.
func Arrears(c *Campaign, log *Logbook, at time.Time) ([]AccountRow, error) {
	b := open(c, log, at)
	rows, err := accountRows(c, b)
	if err != nil {
		return nil, err
	}
	next, err := nextWindows(c, at)
	if err != nil {
		return nil, err
	}
	sideBySide(len(rows), func(i int) {
		r := &rows[i]
		if w, ok := next.of(r.Source, r.Receivers); ok {
			r.NextStart, r.NextEnd, r.NextSession = w.start, w.end, w.session
		} else {
			r.Flags = append(r.Flags, "not up in any coming session")
		}
	})
	return rows, nil
}

// accountRows makes a row for each aim of each source, worst first.
func accountRows(c *Campaign, b *books) ([]AccountRow, error) {
	bySource := make([][]AccountRow, len(c.Sources))
	errs := make([]error, len(c.Sources))
	sideBySide(len(c.Sources), func(i int) { bySource[i], errs[i] = b.accountsOf(&c.Sources[i]) })
	for _, err := range errs {
		if err != nil {
			return nil, err
		}
	}
	rows := slices.Concat(bySource...)
	sort.SliceStable(rows, func(i, j int) bool {
		if rows[i].Debt != rows[j].Debt {
			return rows[i].Debt > rows[j].Debt
		}
		return rows[i].Source < rows[j].Source
	})
	return rows, nil
}

// accountsOf makes the rows of one source, in the order of its aims.
func (b *books) accountsOf(source *Source) ([]AccountRow, error) {
	k, err := newKnowledge(source, b.frames)
	if err != nil {
		return nil, err
	}
	var rows []AccountRow
	for j := range source.Aims {
		row, err := b.accountRow(k, &source.Aims[j])
		if err != nil {
			return nil, err
		}
		rows = append(rows, row)
	}
	return rows, nil
}

func (b *books) accountRow(k *knowledge, aim *Aim) (AccountRow, error) {
	row := AccountRow{
		Source: k.source.Name, Aim: aim.label(), Kind: aim.Kind, Receivers: aim.Receivers, Priority: k.source.Priority,
		Last: b.last(k.source.Name, aim.Receivers),
	}
	switch aim.Kind {
	case Cadence:
		a := b.cadence(k.source, aim)
		row.Debt, row.Due, row.Why, row.Last = a.Debt, a.Due, a.Why, a.Last
		b.tellPair(&row, k.source, aim)
		if a.ramping {
			row.Flags = append(row.Flags, fmt.Sprintf("ramp since %s", aim.Ramp.From.Format(time.DateOnly)))
		}
	case PhaseCoverage:
		c := b.coverage(k, aim)
		row.Debt, row.Why = c.debt(), c.why()
	case Conjunction:
		c, err := b.passages(k, aim)
		if err != nil {
			return row, err
		}
		row.Debt, row.Why = c.debt(), c.why()
		if flag := c.flag(); flag != "" && row.Debt > 0 {
			row.Flags = append(row.Flags, flag)
		}
	case Measure:
		m, err := b.measured(k, aim)
		if err != nil {
			return row, err
		}
		row.Debt, row.Why = m.debt(), m.why()
	case Connect:
		n, err := b.connected(k, aim)
		if err != nil {
			return row, err
		}
		row.Debt, row.Due, row.Why = n.debt(), n.deadline, n.why()
	case Calibration:
		row.Why = fmt.Sprintf("every session needs %s", count(aim.PerSession, "slot"))
	}
	b.tellReach(&row, k.source, aim)
	if k.source.Spin != nil && b.sunDeg(k.source, b.at) < radiometer.WindUnreliableDeg {
		row.Flags = append(row.Flags, "near the Sun")
	}
	if row.Debt > 1 && aim.Kind == Cadence {
		row.Flags = append(row.Flags, "overdue")
	}
	if row.Debt > 1 && aim.Kind == Connect {
		row.Flags = append(row.Flags, "count at risk")
	}
	if since := b.at.Sub(k.glitch); !k.glitch.IsZero() && since > 0 && since < freshGlitch {
		row.Flags = append(row.Flags, "glitch "+k.glitch.Format(time.DateOnly))
	}
	return row, nil
}

// freshGlitch is how long a glitch is worth a flag: recoveries take up to half a year.
const freshGlitch = 183 * 24 * time.Hour

func count(n int, thing string) string {
	if n == 1 {
		return "1 " + thing
	}
	return fmt.Sprintf("%d %ss", n, thing)
}

// last is when a source was last observed with any of the receivers; zero if never.
func (b *books) last(source string, receivers []string) time.Time {
	var last time.Time
	for _, e := range b.entries[source] {
		if at := e.middle(); at.After(last) && slices.Contains(receivers, e.Receiver) {
			last = at
		}
	}
	return last
}
