// Package cell puts text into exact terminal cells. Fit makes a string so wide and no wider; a
// Canvas is a block of cells that can be written anywhere and is never larger or smaller than it was
// made. Widths are terminal cells, never bytes.
package cell

import (
	"strings"

	"github.com/charmbracelet/x/ansi"
)

// Cut marks where text was cut off.
const Cut = "~"

// Width returns how many cells a string takes.
func Width(s string) int {
	if plain(s) {
		return len(s)
	}
	return ansi.StringWidth(s)
}

// Fit returns s in exactly w cells, cut with a mark or filled with blanks on the right.
func Fit(s string, w int) string {
	s, n := Short(s, w)
	return s + blanks(w-n)
}

// Right returns s in exactly w cells, filled with blanks on the left.
func Right(s string, w int) string {
	s, n := Short(s, w)
	return blanks(w-n) + s
}

// Short returns s in at most w cells, and how many it takes.
func Short(s string, w int) (string, int) {
	if w <= 0 {
		return "", 0
	}
	n := Width(s)
	if n <= w {
		return s, n
	}
	if plain(s) {
		return s[:w-1] + Cut, w
	}
	s = ansi.Truncate(s, w, Cut)
	return s, ansi.StringWidth(s)
}

// Wrap breaks text into lines of at most w cells, at blanks, or within a word that is longer than a line.
func Wrap(s string, w int) []string {
	if w <= 0 {
		return nil
	}
	var lines []string
	line, n := "", 0
	for _, word := range strings.Fields(s) {
		for Width(word) > w {
			head := ansi.Truncate(word, w, "")
			if head == "" || n > 0 {
				if n == 0 {
					return append(lines, Fit(word, w)) // not even its first character fits
				}
				lines, line, n = append(lines, line), "", 0
				continue
			}
			lines = append(lines, head)
			word = strings.TrimPrefix(word, head)
		}
		k := Width(word)
		if n > 0 && n+1+k > w {
			lines, line, n = append(lines, line), "", 0
		}
		if n > 0 {
			line, n = line+" ", n+1
		}
		line, n = line+word, n+k
	}
	return append(lines, line)
}

// Gauge draws value out of full in w cells, rounded to the nearest cell, with something to see for
// anything above nothing.
func Gauge(value, full float64, w int, on, off string) string {
	if w <= 0 {
		return ""
	}
	n := 0
	if full > 0 && value > 0 {
		n = min(max(int(value/full*float64(w)+0.5), 1), w)
	}
	return strings.Repeat(on, n) + strings.Repeat(off, w-n)
}

func plain(s string) bool {
	for i := 0; i < len(s); i++ {
		if s[i] < 32 || s[i] > 126 {
			return false
		}
	}
	return true
}

func blanks(n int) string {
	if n <= 0 {
		return ""
	}
	return strings.Repeat(" ", n)
}
