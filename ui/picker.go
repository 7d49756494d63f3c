package ui

import (
	"fmt"
	"image"
	"slices"
	"strings"

	tea "github.com/charmbracelet/bubbletea"
	"github.com/sahilm/fuzzy"

	"example.org/tallystick/sched"
	"example.org/tallystick/ui/cell"
	"example.org/tallystick/ui/theme"
)

// A picker offers what could be observed at the cursor minute, best first. What is typed narrows it.
type picker struct {
	d          *desk
	replaces   int // slot to be replaced, or -1
	minute     int
	all        []sched.Candidate
	displaces  [][]int // slots of the plan shown that each would displace
	names      []string
	seen       []int // indices into all
	typed      field
	rows       rows
	lost       sched.Micro // the worth of the slot to be replaced
	slotsNamed func(int) string
}

func newPicker(w *world, replaces int) *picker {
	d := w.desk
	r := d.read()
	from, _ := w.nowMinute()
	plan := r.plan
	p := &picker{d: d, replaces: replaces, minute: d.minute, slotsNamed: r.slotName}
	without := func(i int) int { return i }
	if replaces >= 0 {
		p.minute = plan.Slots[replaces].Start
		plan = sched.Plan{Slots: slices.Delete(slices.Clone(plan.Slots), replaces, replaces+1)}
		without = func(i int) int {
			if i >= replaces {
				i++
			}
			return i
		}
	}
	old := -1
	if replaces >= 0 {
		s := r.plan.Slots[replaces]
		old = r.problem.Nodes[s.Node].Job
		p.lost = r.problem.JobWorth(old, s.Start, s.End)
	}
	for _, c := range sched.Candidates(startingAt(r.problem, from), plan, p.minute) {
		if c.Job == old || slotsOf(r.problem, plan, c.Job) >= r.problem.Jobs[c.Job].MaxSlots {
			continue
		}
		var slots []int
		for _, i := range c.Displaces {
			slots = append(slots, without(i))
		}
		p.all = append(p.all, c)
		p.displaces = append(p.displaces, slots)
		p.names = append(p.names, jobName(r.problem, c.Job))
	}
	p.narrow()
	return p
}

// slotsOf counts the slots that a job has.
func slotsOf(p *sched.Problem, plan sched.Plan, job int) int {
	n := 0
	for _, s := range plan.Slots {
		if p.Nodes[s.Node].Job == job {
			n++
		}
	}
	return n
}

// narrow keeps what matches the typed text, in order of worth.
func (p *picker) narrow() {
	p.seen = p.seen[:0]
	p.rows = rows{}
	if p.typed.String() == "" {
		for i := range p.all {
			p.seen = append(p.seen, i)
		}
		return
	}
	for _, m := range fuzzy.Find(p.typed.String(), p.names) {
		p.seen = append(p.seen, m.Index)
	}
	slices.Sort(p.seen)
}

func (p *picker) key(k tea.KeyMsg, _ *world) action {
	switch k.String() {
	case "esc":
		if p.typed.String() != "" {
			p.typed = field{}
			p.narrow()
			return action{}
		}
		return action{verb: closeDialog}
	case "ctrl+c":
		return action{verb: closeDialog}
	case "enter":
		if len(p.seen) == 0 {
			return action{}
		}
		i := p.seen[p.rows.at]
		return action{verb: placeChosen, more: p.placing(i)}
	case "up", "down", "pgup", "pgdown":
		p.rows.key(k, len(p.seen))
		return action{}
	}
	if p.typed.key(k) {
		p.narrow()
	}
	return action{}
}

func (p *picker) draw(w *world, c *cell.Canvas, g *theme.Glyphs) {
	sw, sh := c.Size()
	width := min(96, sw-4)
	at := clock(p.d.prepared.Instant(p.minute))
	title := "Insert at " + at + " UTC, best first"
	if p.replaces >= 0 {
		title = fmt.Sprintf("In place of %s at %s UTC, best first", p.slotsNamed(p.replaces), at)
	}
	does := "inserts"
	if p.replaces >= 0 {
		does = "replaces"
	}
	in := box(c, g, width, max(min(len(p.all)+2+consequenceLines, sh-5), 4), title, "type to narrow, Enter "+does+", Esc goes back")
	x := in.Put(0, 0, "find: ", theme.Muted)
	p.typed.draw(in, x, 0)
	iw, ih := in.Size()
	in.Put(1, 1, cell.Fit(pickerRow(iw, "source", "UTC", "", "worth", "change", "room"), iw-1), theme.Muted)
	if len(p.seen) == 0 {
		text := "nothing matches"
		if len(p.all) == 0 {
			text = "every source that could be observed has its slots already"
		}
		in.Put(1, 2, cell.Fit(text, iw-1), theme.Plain)
		return
	}
	if ih >= 3+2*consequenceLines {
		ih -= consequenceLines
		lines := cell.Wrap(p.consequences(p.seen[p.rows.at]), iw-1)
		for i, l := range lines[:min(len(lines), consequenceLines)] {
			in.Put(1, ih+i, l, theme.Accent)
		}
	}
	h := ih - 2
	if h <= 0 {
		return
	}
	p.rows.show(len(p.seen), h)
	list := in.Sub(image.Rect(0, 2, iw, ih))
	for i := p.rows.top; i < min(p.rows.top+h, len(p.seen)); i++ {
		k := p.seen[i]
		cand := p.all[k]
		p.rows.draw(list, g, i, pickerRow(iw, p.names[k], clock(p.d.prepared.Instant(cand.Start)), clock(p.d.prepared.Instant(cand.End)),
			cand.Worth.String(), p.change(k), p.room(k)))
	}
}

// pickerRow writes a row for a list of this width; a narrow one leaves out the end and the worth.
func pickerRow(w int, name, from, to, worth, change, room string) string {
	if w < 60 {
		return fmt.Sprintf("%s %-5s %7s  %s", cell.Fit(name, 12), from, change, room)
	}
	if to != "" {
		from += "-" + to
	}
	return fmt.Sprintf("%s %-11s %6s %7s  %s", cell.Fit(name, 16), from, worth, change, room)
}

// room says whether a candidate fits, and who has to go if not.
func (p *picker) room(k int) string {
	c := p.all[k]
	if len(p.displaces[k]) == 0 {
		if c.Fits {
			return "fits"
		}
		return "breaks a limit"
	}
	var names []string
	for _, i := range p.displaces[k] {
		names = append(names, p.slotsNamed(i))
	}
	return "drops " + strings.Join(names, ", ")
}

// change is what picking a candidate does to the worth of the plan.
func (p *picker) change(k int) string {
	d := p.all[k].Worth - p.all[k].Cost - p.lost
	if d > 0 {
		return "+" + d.String()
	}
	return d.String()
}

func (p *picker) placing(k int) placing { return placing{p.all[k], p.replaces, p.displaces[k]} }

// consequenceLines are kept for what picking the row under the cursor would mean.
const consequenceLines = 2

// consequences say what a candidate brings and what it means for its neighbours.
func (p *picker) consequences(k int) string {
	before := p.d.read()
	plan, at := p.placing(k).in(before.plan)
	after := &reading{problem: before.problem, plan: plan, verdict: sched.Verify(before.problem, plan)}
	if new := newBreaches(before, after); len(new) > 0 {
		return "! " + oneCell.Replace(strings.Join(new, "; "))
	}
	rows := p.d.preparedWith(before.bars).SlotRows(plan)
	text := "move " + seconds(rows[at].MoveSec)
	if at > 0 {
		text += " from " + after.slotName(at-1)
	}
	if rows[at].WaitSec > 0 {
		text += ", then " + seconds(rows[at].WaitSec) + " to spare"
	}
	if at+1 < len(rows) {
		text += fmt.Sprintf("; %s stays at %s, %s to spare before it", after.slotName(at+1), clock(rows[at+1].Start), seconds(rows[at+1].WaitSec))
	}
	if loses := whoLoses(before.problem, before.plan, plan); loses != "" {
		text += "; " + loses
	}
	return text
}
