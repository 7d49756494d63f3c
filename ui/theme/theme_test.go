package theme

import (
	"io"
	"math"
	"strings"
	"testing"

	"github.com/charmbracelet/lipgloss"
	"github.com/charmbracelet/x/ansi"
	"github.com/lucasb-eyer/go-colorful"
	"github.com/muesli/termenv"
	"golang.org/x/text/width"
)

// Relative luminance and contrast as in WCAG 2.1, "relative luminance" and "contrast ratio".
func luminance(c colorful.Color) float64 {
	f := func(v float64) float64 {
		if v <= 0.03928 {
			return v / 12.92
		}
		return math.Pow((v+0.055)/1.055, 2.4)
	}
	return 0.2126*f(c.R) + 0.7152*f(c.G) + 0.0722*f(c.B)
}

func contrast(a, b colorful.Color) float64 {
	x, y := luminance(a), luminance(b)
	return (math.Max(x, y) + 0.05) / (math.Min(x, y) + 0.05)
}

func TestContrast(t *testing.T) {
	grounds := map[bool][]string{true: {"#000000", "#1e1e1e"}, false: {"#ffffff", "#fdf6e3"}}
	for dark, backs := range grounds {
		for i, a := range palette {
			fg, on := a.dark, a.onDark
			if !dark {
				fg, on = a.light, a.onLight
			}
			if fg == "" {
				continue
			}
			against := backs
			if on != "" {
				against = []string{on}
			}
			for _, back := range against {
				for _, p := range []termenv.Profile{termenv.TrueColor, termenv.ANSI256} {
					f, b := termenv.ConvertToRGB(p.Color(fg)), termenv.ConvertToRGB(termenv.TrueColor.Color(back))
					if on != "" {
						b = termenv.ConvertToRGB(p.Color(back))
					}
					if c := contrast(f, b); c < 4.5 {
						t.Errorf("ink %d, dark %v, %s on %s (%s): contrast %.2f, wanted 4.5", i, dark, fg, back, p.Name(), c)
					}
				}
			}
		}
	}
}

func TestGlyphsTakeOneCell(t *testing.T) {
	for _, g := range []Glyphs{drawn, typed} {
		for _, s := range g.All() {
			if n := ansi.StringWidth(s); n != 1 || len([]rune(s)) != 1 {
				t.Errorf("glyph %q takes %d cells", s, n)
			}
		}
	}
	for _, s := range drawn.All() {
		r := []rune(s)[0]
		if box := r >= 0x2500 && r <= 0x257f; !box && width.LookupRune(r).Kind() == width.EastAsianAmbiguous {
			t.Errorf("glyph %q is of ambiguous East Asian width", s)
		}
	}
	for _, s := range typed.All() {
		if len(s) != 1 || s[0] > 126 || s[0] < 32 {
			t.Errorf("typed glyph %q is not ASCII", s)
		}
	}
	for _, s := range drawn.All() {
		if r := []rune(s)[0]; r >= 0x2800 && r <= 0x28ff {
			t.Errorf("glyph %q is braille, which a braille line would read as text", s)
		}
	}
}

// The signs that carry a fact in the same place must differ from one another.
func TestGlyphsOfCurvesDiffer(t *testing.T) {
	for _, g := range []Glyphs{drawn, typed} {
		seen := map[string]bool{}
		for _, s := range []string{g.Curve[0], g.Other, g.OnSource, g.OtherOnSource, g.Limit, g.Now, g.Break, g.Eclipse} {
			if seen[s] {
				t.Errorf("%q says two things", s)
			}
			seen[s] = true
		}
	}
}

func TestFewOrNoColours(t *testing.T) {
	for _, dark := range []bool{true, false} {
		for _, p := range []termenv.Profile{termenv.Ascii, termenv.ANSI, termenv.ANSI256} {
			r := lipgloss.NewRenderer(io.Discard)
			r.SetColorProfile(p)
			r.SetHasDarkBackground(dark)
			s := New(r, false)
			for i := range inks {
				q := s.Open(i)
				codes := strings.Split(strings.TrimSuffix(strings.TrimPrefix(q, "\x1b["), "m"), ";")
				for _, c := range codes {
					switch {
					case p == termenv.Ascii && c != "" && c != "1" && c != "7":
						t.Errorf("ink %d without colours: %q", i, q)
					case p == termenv.ANSI && (c == "38" || c == "48"):
						t.Errorf("ink %d in 16 colours: %q", i, q)
					case p == termenv.ANSI256 && c == "2":
						t.Errorf("ink %d in 256 colours: %q", i, q)
					}
				}
			}
			if s.Open(Chosen) == s.Open(Plain) {
				t.Errorf("%s: the chosen row looks like any other", p.Name())
			}
		}
	}
}

func TestDarkFrom(t *testing.T) {
	for in, want := range map[string]bool{"": true, "15;0": true, "0;15": false, "0;default;7": false, "12;8": true, "x;y": true, "7": true} {
		if got := DarkFrom(in); got != want {
			t.Errorf("DarkFrom(%q) = %v", in, got)
		}
	}
}
