package ui

import (
	"encoding/base64"
	"fmt"
	"os"
	"strings"
	"sync"

	tea "github.com/charmbracelet/bubbletea"

	"example.org/tallystick/ui/cell"
)

// An outlet is the terminal, for one write at a time: the screen's and the clipboard's do not mix.
type outlet struct {
	*os.File
	mu sync.Mutex
}

func (o *outlet) Write(b []byte) (int, error) {
	o.mu.Lock()
	defer o.mu.Unlock()
	return o.File.Write(b)
}

// copiedMsg: a text has been sent to the terminal's clipboard.
type copiedMsg struct {
	what string
	err  error
}

// copyCmd sends the slot list to the clipboard of the terminal.
func (m *model) copyCmd() tea.Cmd {
	d := m.world.desk
	text := listText(d)
	what := count(len(d.read().rows), "slot") + " as text"
	out, sequence := m.cfg.Out, clipboard(text, os.Getenv("TMUX") != "")
	return guarded(func() tea.Msg {
		_, err := out.Write([]byte(sequence))
		return copiedMsg{what, err}
	})
}

func (m *model) receiveCopied(msg copiedMsg) {
	if msg.err != nil {
		m.warn("not copied: %v", msg.err)
		return
	}
	m.tell("copied %s, if the terminal allows it; tallystick plan prints them too", msg.what)
}

// clipboard is the sequence that asks a terminal to put a text into its clipboard: OSC 52 of xterm's
// control sequences, inside tmux in the wrapper that makes it pass the sequence on.
func clipboard(text string, tmux bool) string {
	s := "\x1b]52;c;" + base64.StdEncoding.EncodeToString([]byte(text)) + "\a"
	if tmux {
		return "\x1bPtmux;" + strings.ReplaceAll(s, "\x1b", "\x1b\x1b") + "\x1b\\"
	}
	return s
}

// listText is the slot list in few words, to be pasted into a message.
func listText(d *desk) string {
	r := d.read()
	var b strings.Builder
	fmt.Fprintf(&b, "%s, %s, UTC (advisory)\n", d.session.Name, d.session.Site)
	for i := range r.rows {
		row := &r.rows[i]
		line := fmt.Sprintf("%2d  %s-%s  %s %s", row.Slot, clock(row.Start), clock(row.End), cell.Fit(row.Source, 12), row.Receiver)
		if flags := slotFlags(row); flags != "" {
			line += "  " + flags
		}
		if row.Note != "" {
			line += "  " + row.Note
		}
		b.WriteString(strings.TrimRight(line, " ") + "\n")
	}
	return b.String()
}
