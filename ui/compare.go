package ui

import (
	"fmt"
	"strings"

	"example.org/tallystick/sched"
	"example.org/tallystick/ui/theme"
)

// A difference is what became of a slot between two plans.
type difference struct {
	was, is *sched.Slot // nil where there is none
}

// differences pairs the slots of two plans by source and receiver, in their order, and leaves out those
// that have the same times.
func differences(p *sched.Problem, before, after sched.Plan) []difference {
	var all []difference
	paired := make([]bool, len(after.Slots))
	for i := range before.Slots {
		was := &before.Slots[i]
		d := difference{was: was}
		for k := range after.Slots {
			if is := &after.Slots[k]; !paired[k] && p.Nodes[is.Node].Job == p.Nodes[was.Node].Job {
				paired[k], d.is = true, is
				break
			}
		}
		if d.is == nil || d.is.Start != was.Start || d.is.End != was.End {
			all = append(all, d)
		}
	}
	for k := range after.Slots {
		if !paired[k] {
			all = append(all, difference{is: &after.Slots[k]})
		}
	}
	return all
}

// whoLoses names in a few words the sources that a change takes worth from, the greatest loss first; ""
// if there are none.
func whoLoses(p *sched.Problem, before, after sched.Plan) string {
	type loss struct {
		name string
		by   sched.Micro
	}
	worth := func(s *sched.Slot) sched.Micro {
		if s == nil {
			return 0
		}
		return p.JobWorth(p.Nodes[s.Node].Job, s.Start, s.End)
	}
	var losses []loss
	for _, d := range differences(p, before, after) {
		if d.was == nil {
			continue
		}
		if by := worth(d.was) - worth(d.is); by > 0 {
			l := loss{jobName(p, p.Nodes[d.was.Node].Job), by}
			at := len(losses)
			for at > 0 && losses[at-1].by < by {
				at--
			}
			losses = append(losses[:at], append([]loss{l}, losses[at:]...)...)
		}
	}
	if len(losses) == 0 {
		return ""
	}
	const named = 3
	var parts []string
	for i, l := range losses {
		if i == named {
			parts = append(parts, fmt.Sprintf("%d more", len(losses)-named))
			break
		}
		parts = append(parts, fmt.Sprintf("%s loses %s", l.name, l.by))
	}
	return strings.Join(parts, ", ")
}

// inAndOut names what a change of the plan has brought in and taken out.
func inAndOut(p *sched.Problem, before, after sched.Plan) string {
	var in, out []string
	for _, d := range differences(p, before, after) {
		switch {
		case d.was == nil:
			in = append(in, jobName(p, p.Nodes[d.is.Node].Job))
		case d.is == nil:
			out = append(out, jobName(p, p.Nodes[d.was.Node].Job))
		}
	}
	text := ""
	for _, side := range []struct {
		what  string
		names []string
	}{{"in", in}, {"out", out}} {
		if len(side.names) == 0 {
			continue
		}
		const named = 2
		more := ""
		if len(side.names) > named {
			more = fmt.Sprintf(" and %d more", len(side.names)-named)
			side.names = side.names[:named]
		}
		text += fmt.Sprintf("; %s: %s%s", side.what, strings.Join(side.names, ", "), more)
	}
	return text
}

// newComparison tells the plan from the last that was planned or read.
func newComparison(d *desk) *reader {
	p := d.read().problem
	base, baseIs, is := d.base, d.baseIs, d.shown().plan
	if d.baseBefore != nil && len(differences(p, base.plan, is)) == 0 {
		base, baseIs = *d.baseBefore, "the plan as it was before it was last made" // what that has done is of more use
	}
	var lines []line
	add := func(label string, ink theme.Ink, format string, args ...any) {
		lines = append(lines, line{label, fmt.Sprintf(format, args...), ink})
	}
	span := func(s *sched.Slot) string {
		return clock(d.prepared.Instant(s.Start)) + "-" + clock(d.prepared.Instant(s.End))
	}
	worth := func(s *sched.Slot) sched.Micro { return p.JobWorth(p.Nodes[s.Node].Job, s.Start, s.End) }
	add("then", theme.Plain, "%s, worth %s", count(len(base.plan.Slots), "slot"), p.PlanWorth(base.plan))
	add("now", theme.Plain, "%s, %s", count(len(is.Slots), "slot"), worthChange(p.PlanWorth(base.plan), p.PlanWorth(is)))
	changes := differences(p, base.plan, is)
	if len(changes) == 0 {
		add("", theme.Plain, "Every slot has the times it had.")
	}
	for _, c := range changes {
		switch {
		case c.is == nil:
			add("gone", theme.Overdue, "%s %s, worth %s", span(c.was), jobName(p, p.Nodes[c.was.Node].Job), worth(c.was))
		case c.was == nil:
			add("new", theme.Accent, "%s %s, worth %s", span(c.is), jobName(p, p.Nodes[c.is.Node].Job), worth(c.is))
		default:
			add("changed", theme.Plain, "%s %s, was %s; %s", span(c.is), jobName(p, p.Nodes[c.is.Node].Job), span(c.was), worthChange(worth(c.was), worth(c.is)))
		}
	}
	return &reader{title: "Against " + baseIs, lines: lines}
}
