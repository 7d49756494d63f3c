package ui

import (
	"fmt"
	"slices"
	"strings"

	"example.org/tallystick/campaigns"
)

// read is everything about the chosen account.
func (v *arrears) read(w *world) (string, []line) {
	r, ok := v.chosen(w)
	if !ok {
		return "", nil
	}
	var lines []line
	add := func(label, format string, args ...any) {
		lines = append(lines, line{label: label, text: fmt.Sprintf(format, args...)})
	}
	for _, s := range whyNotTonight(w, r) {
		add("plan", "%s", s)
	}
	owed := "not due yet"
	if r.Debt > 1 {
		owed = "overdue"
	} else if r.Debt == 1 {
		owed = "due now"
	}
	add("debt", "%.2f, %s; priority %.3g", r.Debt, owed, r.Priority)
	if r.Why != "" {
		add("because", "%s", r.Why)
	}
	last := "never observed"
	if !r.Last.IsZero() {
		last = "last observed " + r.Last.UTC().Format("2006-01-02 15:04 UTC")
	}
	due := ""
	if !r.Due.IsZero() {
		due = "; due " + r.Due.UTC().Format("2006-01-02 15:04 UTC")
	}
	add("dates", "%s%s", last, due)
	switch {
	case !w.desk.reviewed:
		add("next", "being worked out")
	case r.NextStart.IsZero():
		add("next", "not within its limits in any coming session")
	default:
		add("next", "%s UTC in session %s", nextWords(w.desk, r), r.NextSession)
	}
	if w.desk.reviewed {
		year, ok := w.desk.year[r.Source]
		if !ok {
			year = "never observed in it"
		}
		add("year", "%s", year)
	}
	if len(r.Receivers) > 0 {
		add("with", "%s", strings.Join(r.Receivers, ", "))
	}
	if len(r.Flags) > 0 {
		add("flags", "%s", strings.Join(r.Flags, ", "))
	}
	return r.Source + ", " + aimWords(r), lines
}

// whyNotTonight says where the source is in the plan, or why it is not.
func whyNotTonight(w *world, r *campaigns.AccountRow) []string {
	read := w.desk.read()
	var said []string
	mine := func(source, receiver string) bool {
		return source == r.Source && (len(r.Receivers) == 0 || slices.Contains(r.Receivers, receiver))
	}
	for i := range read.rows {
		if row := &read.rows[i]; mine(row.Source, row.Receiver) {
			said = append(said, fmt.Sprintf("in slot %d with %s, %s to %s UTC", i+1, row.Receiver, clock(row.Start), clock(row.End)))
		}
	}
	from, _ := w.nowMinute()
	for _, reason := range read.missing(from) {
		job := read.problem.Jobs[reason.Job]
		if receiver := read.problem.Receivers[job.Receiver].Name; mine(job.Source, receiver) {
			said = append(said, fmt.Sprintf("not with %s: %s", receiver, reason.Text))
		}
	}
	if len(said) == 0 {
		said = append(said, "no aim of it can be served in this session: another site, or receivers that are not mounted")
	}
	return said
}
