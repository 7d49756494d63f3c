package ui

import tea "github.com/charmbracelet/bubbletea"

// A free view has something to show without a prepared session.
type free interface {
	view
	withoutSession()
}

// fetch starts the work that the view shown waits for, if nobody does it yet.
func (m *model) fetch() tea.Cmd {
	if _, ok := m.views[m.at].(*orbits); ok {
		return m.fetchOrbits()
	}
	return nil
}

// withAlso is one command or both, and nothing where there is nothing to do.
func withAlso(a, b tea.Cmd) tea.Cmd {
	switch {
	case a == nil:
		return b
	case b == nil:
		return a
	}
	return tea.Batch(a, b)
}
