package ui

import (
	"image"
	"slices"
	"strings"

	tea "github.com/charmbracelet/bubbletea"
	"github.com/sahilm/fuzzy"

	"example.org/tallystick/ui/cell"
	"example.org/tallystick/ui/theme"
)

// A palette finds any action by its name.
type palette struct {
	names []string
	cmds  []*command
	cant  []string
	seen  []int
	typed field
	rows  rows
}

func newPalette(m *model) *palette {
	p := &palette{}
	view := m.views[m.at].title()
	for i := range commands {
		c := &commands[i]
		if c.verb == findAction || c.group == moving {
			continue
		}
		why := m.cannot(c.verb)
		if !c.worksIn(view) {
			why = "only in the " + strings.ToLower(c.view) + " view"
		}
		p.cmds = append(p.cmds, c)
		p.names = append(p.names, c.name)
		p.cant = append(p.cant, why)
	}
	p.narrow()
	return p
}

func (p *palette) narrow() {
	p.seen = p.seen[:0]
	p.rows = rows{}
	if p.typed.String() == "" {
		for i := range p.cmds {
			p.seen = append(p.seen, i)
		}
		return
	}
	typed := strings.ToLower(p.typed.String())
	for _, m := range fuzzy.Find(typed, p.names) {
		p.seen = append(p.seen, m.Index)
	}
	// Whoever types a word means that word: names that hold it as written come first.
	slices.SortStableFunc(p.seen, func(i, j int) int {
		return placeOf(p.names[i], typed) - placeOf(p.names[j], typed)
	})
	written := slices.IndexFunc(p.seen, func(i int) bool { return placeOf(p.names[i], typed) == scattered })
	if written > 0 {
		p.seen = p.seen[:written] // letters that are only scattered over a name are a last resort
	}
}

// placeOf ranks how a name holds a text: as its beginning, at the beginning of a word, anywhere, not as
// written.
func placeOf(name, text string) int {
	name = strings.ToLower(name)
	switch {
	case strings.HasPrefix(name, text):
		return 0
	case strings.Contains(name, " "+text):
		return 1
	case strings.Contains(name, text):
		return 2
	}
	return scattered
}

const scattered = 3

func (p *palette) key(k tea.KeyMsg, _ *world) action {
	switch k.String() {
	case "esc", "ctrl+c":
		return action{verb: closeDialog}
	case "enter":
		if len(p.seen) == 0 || p.cant[p.seen[p.rows.at]] != "" {
			return action{}
		}
		return action{verb: doVerb, text: string(p.cmds[p.seen[p.rows.at]].verb)}
	case "up", "down", "pgup", "pgdown":
		p.rows.key(k, len(p.seen))
		return action{}
	}
	if p.typed.key(k) {
		p.narrow()
	}
	return action{}
}

func (p *palette) draw(_ *world, c *cell.Canvas, g *theme.Glyphs) {
	sw, sh := c.Size()
	in := box(c, g, min(88, sw-4), max(min(len(p.cmds)+1, sh-5), 3), "Actions", "type to find, Enter does it, Esc goes back")
	x := in.Put(0, 0, "find: ", theme.Muted)
	p.typed.draw(in, x, 0)
	iw, ih := in.Size()
	h := ih - 1
	if len(p.seen) == 0 {
		in.Put(1, 1, "no action has such a name", theme.Plain)
		return
	}
	if h <= 0 {
		return
	}
	p.rows.show(len(p.seen), h)
	list := in.Sub(image.Rect(0, 1, iw, ih))
	for i := p.rows.top; i < min(p.rows.top+h, len(p.seen)); i++ {
		k := p.seen[i]
		text := p.cmds[k].name
		if p.cant[k] != "" {
			text += " (not now: " + p.cant[k] + ")"
		}
		p.rows.draw(list, g, i, cell.Fit(p.cmds[k].Help().Key, 10)+" "+text)
	}
}
