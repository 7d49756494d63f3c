package ui

import (
	"fmt"
	"image"
	"slices"
	"strings"
	"time"

	tea "github.com/charmbracelet/bubbletea"

	"example.org/tallystick/ui/cell"
	"example.org/tallystick/ui/theme"
)

// box draws an empty box over the middle of the screen, with a title and a line of keys, and returns
// what is inside it. It wants w by h cells inside and takes what there is.
func box(c *cell.Canvas, g *theme.Glyphs, w, h int, title, keys string) *cell.Canvas {
	sw, sh := c.Size()
	r := centred(image.Rect(0, 0, sw, sh), w+4, h+3)
	b := c.Sub(r)
	bw, bh := b.Size()
	b.Fill(image.Rect(0, 0, bw, bh), " ", theme.Plain)
	rule := strings.Repeat(g.Rule, max(bw, 0))
	b.Put(0, 0, rule, theme.Muted)
	b.Put(2, 0, cell.Fit(" "+title+" ", min(cell.Width(title)+2, bw-4)), theme.Strong)
	for y := 1; y < bh-1; y++ {
		b.Put(0, y, g.Upright, theme.Muted)
		b.Put(bw-1, y, g.Upright, theme.Muted)
	}
	b.Put(0, bh-1, rule, theme.Muted)
	if k := " " + keys + " "; bh > 2 {
		b.Put(2, bh-1, cell.Fit(k, min(cell.Width(k), bw-4)), theme.Accent)
	}
	return b.Sub(image.Rect(2, 1, bw-2, bh-1))
}

// A question is asked before something is lost. None of its keys is the key that led to it, and Enter
// answers nothing.
type question struct {
	title   string
	text    string
	answers []answer
}

type answer struct {
	key, says string
	does      action
}

func newQuestion(title, text string, answers ...answer) *question {
	return &question{title, text, answers}
}

func (q *question) key(k tea.KeyMsg, _ *world) action {
	for _, a := range q.answers {
		if k.String() == a.key {
			return a.does
		}
	}
	if s := k.String(); s == "esc" {
		return action{verb: closeDialog}
	}
	return action{}
}

func (q *question) draw(_ *world, c *cell.Canvas, g *theme.Glyphs) {
	sw, _ := c.Size()
	w := min(64, sw-4)
	text := cell.Wrap(q.text, w)
	in := box(c, g, w, len(text)+len(q.answers)+2, q.title, "Esc goes back")
	y := 0
	for _, l := range text {
		in.Put(0, y, l, theme.Plain)
		y++
	}
	_, h := in.Size()
	if h > y+len(q.answers) {
		y++
	}
	for _, a := range q.answers {
		x := in.Put(1, y, keyName(a.key), theme.Accent)
		in.Put(x+2, y, a.says, theme.Plain)
		y++
	}
}

func newLeaveQuestion(unsaved []*desk) *question {
	var names []string
	for _, d := range unsaved {
		names = append(names, d.session.Name)
	}
	return newQuestion("Something is not saved",
		"The plan of "+strings.Join(names, ", ")+" has changes that are not saved.",
		answer{"s", "save and quit", action{verb: saveAndLeave}},
		answer{"d", "discard the changes and quit", action{verb: loseAndLeave}})
}

func newDraftQuestion(dr draft, d *desk, now time.Time) *question {
	plan, _ := d.prepared.Bind(dr.Plan)
	differ := 0
	for _, s := range plan.Slots {
		if !slices.Contains(d.state.plan.Slots, s) {
			differ++
		}
	}
	than := "the plan just made"
	if d.onDisk {
		than = "the saved plan"
	}
	sure := newQuestion("Delete the draft?", "It cannot be brought back.",
		answer{"y", "delete it", action{verb: deleteDraft, more: dr}})
	return newQuestion("Unsaved work from before",
		fmt.Sprintf("The program ended %s with a plan of this session that was not saved: %s, %d of them different from %s.",
			ago(now, dr.KeptAt), count(len(plan.Slots), "slot"), differ, than),
		answer{"r", "restore it (u goes back)", action{verb: restoreDraft, more: dr}},
		answer{"d", "delete it", action{verb: openDialog, more: dialog(sure)}})
}
