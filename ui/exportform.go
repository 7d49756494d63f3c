package ui

import (
	"fmt"
	"strings"

	tea "github.com/charmbracelet/bubbletea"

	"example.org/tallystick/ui/cell"
	"example.org/tallystick/ui/theme"
)

// exportForm asks for a format, then for a file.
type exportForm struct {
	formats []string
	rows    rows
	name    string
	path    *prompt
}

func newExportForm(d *desk, formats ...string) *exportForm {
	if len(formats) == 0 {
		formats = []string{"text", "csv"}
	}
	return &exportForm{formats: formats, name: fileName(d.session.Name)}
}

var extension = map[string]string{"text": "txt"}

func (e *exportForm) key(k tea.KeyMsg, w *world) action {
	if e.path != nil {
		if k.String() == "esc" {
			e.path = nil // one step back
			return action{}
		}
		return e.path.key(k, w)
	}
	switch k.String() {
	case "esc", "ctrl+c":
		return action{verb: closeDialog}
	case "enter":
		format := e.formats[e.rows.at]
		ext := extension[format]
		if ext == "" {
			ext = format
		}
		e.path = newPrompt("Export as "+format, "write to the file", e.name+"."+ext, func(path string) action {
			return action{verb: exportTo, text: path, more: format}
		})
	default:
		e.rows.key(k, len(e.formats))
	}
	return action{}
}

var formatSays = map[string]string{
	"text": "a sheet for the operator, 80 columns, to print",
	"csv":  "a table for scripts and spreadsheets",
}

func (e *exportForm) draw(w *world, c *cell.Canvas, g *theme.Glyphs) {
	if e.path != nil {
		e.path.draw(w, c, g)
		return
	}
	in := box(c, g, 60, len(e.formats), "Export the slot list", "Enter chooses, Esc goes back")
	for i, f := range e.formats {
		e.rows.draw(in, g, i, fmt.Sprintf("%-8s %s", f, formatSays[f]))
	}
}

// fileName makes a file name of a session's name.
func fileName(session string) string {
	clean := func(r rune) rune {
		if r == ' ' || r == '/' || r == '\\' || r < ' ' {
			return '-'
		}
		return r
	}
	return "slots-" + strings.Map(clean, session)
}
