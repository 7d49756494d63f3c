package cell

import (
	"image"
	"io"
	"strings"
	"testing"

	"github.com/charmbracelet/lipgloss"
	"github.com/charmbracelet/x/ansi"
	"github.com/muesli/termenv"
	"pgregory.net/rapid"

	"example.org/tallystick/ui/theme"
)

func styles(p termenv.Profile) theme.Styles {
	r := lipgloss.NewRenderer(io.Discard)
	r.SetColorProfile(p)
	return theme.New(r, false)
}

func TestFitIsExact(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := rapid.StringMatching(`[ -~äé日本語한°µ]{0,30}`).Draw(t, "text")
		w := rapid.IntRange(0, 40).Draw(t, "width")
		for _, got := range []string{Fit(s, w), Right(s, w)} {
			if n := ansi.StringWidth(got); n != w {
				t.Fatalf("%q in %d cells: %q takes %d", s, w, got, n)
			}
		}
		if w > 1 {
			for _, line := range Wrap(s, w) {
				if ansi.StringWidth(line) > w {
					t.Fatalf("%q is wider than %d", line, w)
				}
			}
		}
	})
}

func TestCanvasIsExact(t *testing.T) {
	for _, p := range []termenv.Profile{termenv.Ascii, termenv.ANSI256} {
		st := styles(p)
		rapid.Check(t, func(t *rapid.T) {
			w, h := rapid.IntRange(1, 30).Draw(t, "w"), rapid.IntRange(1, 8).Draw(t, "h")
			ascii := rapid.Bool().Draw(t, "ascii")
			c := New(w, h, ascii)
			for range rapid.IntRange(0, 12).Draw(t, "writes") {
				x, y := rapid.IntRange(-5, 35).Draw(t, "x"), rapid.IntRange(-2, 10).Draw(t, "y")
				s := rapid.StringMatching(`[ -~äé日本語한°\t\x1b\n]{0,12}`).Draw(t, "text")
				part := c
				if rapid.Bool().Draw(t, "part") {
					part = c.Sub(image.Rect(1, 1, w-1, h))
				}
				part.Put(x, y, s, theme.Ink(rapid.IntRange(0, 5).Draw(t, "ink")))
			}
			got := c.String(&st)
			lines := strings.Split(got, "\n")
			if len(lines) != h {
				t.Fatalf("%d lines, wanted %d", len(lines), h)
			}
			for _, l := range lines {
				if n := ansi.StringWidth(l); n != w {
					t.Fatalf("%q takes %d cells, wanted %d", l, n, w)
				}
			}
			if ascii && strings.ContainsFunc(got, func(r rune) bool { return r > 126 }) {
				t.Fatalf("not ASCII: %q", got)
			}
		})
	}
}

func TestHalvesOfWideText(t *testing.T) {
	st := styles(termenv.Ascii)
	c := New(6, 1, false)
	c.Put(0, 0, "日本語", theme.Plain)
	c.Put(1, 0, "x", theme.Plain)
	if got := c.String(&st); got != " x本語" {
		t.Errorf("right half overwritten: %q", got)
	}
	c.Put(2, 0, "y", theme.Plain)
	if got := c.String(&st); got != " xy 語" {
		t.Errorf("left half overwritten: %q", got)
	}
}

func TestGauge(t *testing.T) {
	for _, c := range []struct {
		v    float64
		want string
	}{{0, "----"}, {0.01, "#---"}, {1, "##--"}, {9, "####"}, {-1, "----"}} {
		if got := Gauge(c.v, 2, 4, "#", "-"); got != c.want {
			t.Errorf("Gauge(%v) = %q, wanted %q", c.v, got, c.want)
		}
	}
}
