package ui

import (
	"strings"

	tea "github.com/charmbracelet/bubbletea"

	"example.org/tallystick/ui/cell"
	"example.org/tallystick/ui/theme"
)

// A field is one line of text being typed.
type field struct {
	text []rune
	at   int
}

func newField(s string) field { return field{[]rune(s), len([]rune(s))} }

func (f *field) String() string { return string(f.text) }

// key takes a key that edits the line; false if it is no such key.
func (f *field) key(k tea.KeyMsg) bool {
	switch k.Type {
	case tea.KeyRunes, tea.KeySpace:
		if k.Alt {
			return false
		}
		for _, r := range k.Runes {
			if r >= ' ' && r != 0x7f {
				f.text = append(f.text[:f.at], append([]rune{r}, f.text[f.at:]...)...)
				f.at++
			}
		}
	case tea.KeyBackspace:
		if f.at > 0 {
			f.text = append(f.text[:f.at-1], f.text[f.at:]...)
			f.at--
		}
	case tea.KeyDelete:
		if f.at < len(f.text) {
			f.text = append(f.text[:f.at], f.text[f.at+1:]...)
		}
	case tea.KeyLeft:
		f.at = max(f.at-1, 0)
	case tea.KeyRight:
		f.at = min(f.at+1, len(f.text))
	case tea.KeyHome, tea.KeyCtrlA:
		f.at = 0
	case tea.KeyEnd, tea.KeyCtrlE:
		f.at = len(f.text)
	case tea.KeyCtrlU:
		f.text, f.at = f.text[f.at:], 0
	default:
		return false
	}
	return true
}

// draw writes the line with its cursor; of a long one the end near the cursor is seen.
func (f *field) draw(c *cell.Canvas, x, y int) {
	w, _ := c.Size()
	room := max(w-x-1, 1)
	from := 0
	for from < f.at && cell.Width(string(f.text[from:f.at])) >= room {
		from++
	}
	end := c.Put(x, y, string(f.text[from:f.at]), theme.Plain)
	under, rest := " ", ""
	if f.at < len(f.text) {
		under, rest = string(f.text[f.at]), string(f.text[f.at+1:])
	}
	end = c.Put(end, y, under, theme.Chosen)
	c.Put(end, y, rest, theme.Plain)
}

// A prompt asks for one line of text.
type prompt struct {
	title, asks string
	line        field
	empty       bool // nothing is an answer too
	done        func(string) action
}

func newPrompt(title, asks, text string, done func(string) action) *prompt {
	return &prompt{title: title, asks: asks, line: newField(text), done: done}
}

// newNotePrompt asks for a note on a slot.
func newNotePrompt(slot, text string) *prompt {
	p := newPrompt("Note on "+slot, "the note; it goes into the plan and its exports", text, func(s string) action {
		return action{verb: noteIs, text: s}
	})
	p.empty = true
	return p
}

func (p *prompt) key(k tea.KeyMsg, _ *world) action {
	switch k.String() {
	case "esc", "ctrl+c":
		return action{verb: closeDialog}
	case "enter":
		if s := strings.TrimSpace(p.line.String()); s != "" || p.empty {
			return p.done(s)
		}
		return action{}
	}
	p.line.key(k)
	return action{}
}

func (p *prompt) draw(_ *world, c *cell.Canvas, g *theme.Glyphs) {
	in := box(c, g, 64, 2, p.title, "Enter does it, Esc goes back")
	in.Put(0, 0, p.asks+":", theme.Muted)
	p.line.draw(in, 0, 1)
}
