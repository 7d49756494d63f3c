package ui

import (
	"strings"

	tea "github.com/charmbracelet/bubbletea"
)

// trimmed is the model as the screen library gets it: without the blanks at the ends of lines, which it
// makes with three bytes. A slow line feels that.
type trimmed struct{ *model }

func (t trimmed) Update(msg tea.Msg) (tea.Model, tea.Cmd) {
	_, cmd := t.model.Update(msg)
	return t, cmd
}

func (t trimmed) View() string {
	lines := strings.Split(t.model.View(), "\n")
	for i := range lines {
		lines[i] = strings.TrimRight(lines[i], " ")
	}
	return strings.Join(lines, "\n")
}
