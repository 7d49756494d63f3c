// Package theme holds what the screen is drawn with: inks named for what they mean, and glyphs of
// one cell each with a twin in plain ASCII. New builds both once; nobody else chooses a colour.
//
// An ink is only ever a second way of saying what a glyph or a word says already.
package theme

import (
	"strings"

	"github.com/charmbracelet/lipgloss"
	"github.com/muesli/termenv"
)

// An Ink is a meaning that text can have.
type Ink uint8

// The inks.
const (
	Plain     Ink = iota // text
	Muted                // what matters least: units, rules, curves of other sources
	Strong               // headings and figures to be seen first
	Accent               // keys, and the chosen source's curve
	Good                 // done, in order
	Overdue              // owed more than one cycle; a warning
	Broken               // breaks a limit; an error
	Pinned               // fixed by the observer
	Sun                  // the Sun and what it forbids
	Limit                // limits and horizon
	Now                  // the present moment
	Chosen               // the row under the cursor
	ChosenBad            // the row under the cursor, which breaks a limit
	Bar                  // the bottom line
	inks
)

type attributes struct {
	dark, light     string // 24-bit colours on a dark and on a light background; "" is the terminal's own
	dark16, light16 string // the same where only 16 colours can be had
	onDark, onLight string // background, with which the foreground is legible by itself
	bold            bool   // kept without colours
	reverse         bool   // where there is no background colour to be had
}

// Contrast is at least 4.5:1 on #000 and #1e1e1e (dark) and on #fff and #fdf6e3 (light), in 24-bit
// and in 256 colours: TestContrast.
var palette = [inks]attributes{
	Plain:     {},
	Muted:     {dark: "#9e9e9e", light: "#626262", dark16: "7", light16: ""},
	Strong:    {bold: true},
	Accent:    {dark: "#5fd7ff", light: "#005f87", dark16: "14", light16: "4", bold: true},
	Good:      {dark: "#87d787", light: "#005f00", dark16: "10", light16: ""},
	Overdue:   {dark: "#ffaf5f", light: "#875f00", dark16: "11", light16: "5", bold: true},
	Broken:    {dark: "#ff8787", light: "#870000", dark16: "9", light16: "1", bold: true},
	Pinned:    {dark: "#d7afff", light: "#5f00af", dark16: "13", light16: "5", bold: true},
	Sun:       {dark: "#ffd75f", light: "#875f00", dark16: "11", light16: ""},
	Limit:     {dark: "#af8787", light: "#875f5f", dark16: "7", light16: ""},
	Now:       {dark: "#afffff", light: "#005f5f", dark16: "14", light16: "4", bold: true},
	Chosen:    {dark: "#ffffff", light: "#000000", onDark: "#005f87", onLight: "#afd7ff", bold: true, reverse: true},
	ChosenBad: {dark: "#ffffff", light: "#000000", onDark: "#870000", onLight: "#ffd7d7", bold: true, reverse: true},
	Bar:       {dark: "#d0d0d0", light: "#303030", onDark: "#303030", onLight: "#dadada", reverse: true},
}

// Styles are the terminal sequences of every ink, and the glyphs.
type Styles struct {
	Glyphs Glyphs
	ASCII  bool
	open   [inks]string
	paints [inks]bool
}

// New builds the styles for what a renderer knows of its terminal: how many colours, and whether its
// background is dark. With ascii set every glyph is plain ASCII.
func New(r *lipgloss.Renderer, ascii bool) Styles {
	s := Styles{Glyphs: drawn, ASCII: ascii}
	if ascii {
		s.Glyphs = typed
	}
	for i := range palette {
		a := palette[i]
		s.open[i] = sequence(a, r.ColorProfile(), r.HasDarkBackground())
		s.paints[i] = a.onDark != "" || a.reverse
	}
	return s
}

// Eight turns bright colours into bold ones of the first eight, for terminals that have no others.
func (s *Styles) Eight() {
	for i, open := range s.open {
		codes := strings.Split(strings.TrimSuffix(strings.TrimPrefix(open, "\x1b["), "m"), ";")
		for k, c := range codes {
			if len(c) == 2 && c[0] == '9' && c[1] <= '7' {
				codes[k] = "3" + c[1:]
				if codes[0] != "1" {
					codes = append([]string{"1"}, codes...)
				}
				break
			}
		}
		if open != "" {
			s.open[i] = "\x1b[" + strings.Join(codes, ";") + "m"
		}
	}
}

// HasEight reports whether a terminal of this kind, of which no more than 16 colours are known, has only
// eight: those whose entries in terminfo say so, all but the ones that say 16 in their name.
func HasEight(kind string) bool { return !strings.Contains(kind, "16color") }

// Open returns the sequence that begins an ink, "" for plain text.
func (s *Styles) Open(i Ink) string { return s.open[i] }

// Paints reports whether an ink is seen on a blank.
func (s *Styles) Paints(i Ink) bool { return s.paints[i] }

// Close is the sequence that ends any ink.
const Close = "\x1b[m"

func sequence(a attributes, p termenv.Profile, dark bool) string {
	fg, fg16, bg := a.dark, a.dark16, a.onDark
	if !dark {
		fg, fg16, bg = a.light, a.light16, a.onLight
	}
	var codes []string
	if a.bold {
		codes = append(codes, "1")
	}
	few := p == termenv.ANSI
	if a.reverse && (few || p == termenv.Ascii) {
		codes = append(codes, "7")
	}
	if few {
		fg, bg = fg16, ""
	}
	for _, c := range []struct {
		value string
		bg    bool
	}{{fg, false}, {bg, true}} {
		if c.value == "" {
			continue
		}
		if q := p.Color(c.value).Sequence(c.bg); q != "" {
			codes = append(codes, q)
		}
	}
	if len(codes) == 0 {
		return ""
	}
	return "\x1b[" + strings.Join(codes, ";") + "m"
}
