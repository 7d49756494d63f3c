package theme

import (
	"io"
	"strings"
	"testing"

	"github.com/charmbracelet/lipgloss"
	"github.com/muesli/termenv"
)

// A terminal of eight colours gets no code of the second eight, and every ink stays told from plain text.
func TestEightColours(t *testing.T) {
	r := lipgloss.NewRenderer(io.Discard)
	r.SetColorProfile(termenv.ANSI)
	for _, dark := range []bool{true, false} {
		r.SetHasDarkBackground(dark)
		sixteen, eight := New(r, false), New(r, false)
		eight.Eight()
		for i := range palette {
			open := eight.Open(Ink(i))
			for _, code := range strings.Split(strings.Trim(open, "\x1b[m"), ";") {
				if len(code) == 2 && code[0] == '9' || len(code) == 3 {
					t.Errorf("ink %d opens with %q", i, open)
				}
			}
			if (open == "") != (sixteen.Open(Ink(i)) == "") {
				t.Errorf("ink %d is %q of eight, %q of sixteen colours", i, open, sixteen.Open(Ink(i)))
			}
		}
		if bright := sixteen.Open(Overdue); dark && (!strings.Contains(bright, "9") || eight.Open(Overdue) != "\x1b[1;33m") {
			t.Errorf("overdue is %q of sixteen and %q of eight", bright, eight.Open(Overdue))
		}
	}
	if HasEight("xterm-16color") || !HasEight("linux") {
		t.Error("the kinds of terminals are mixed up")
	}
}
