package main

import (
	"encoding/csv"
	"encoding/json"
	"fmt"
	"io"
	"math"
	"os"
	"strings"

	"example.org/tallystick/campaigns/export"
	"example.org/tallystick/ui/cell"
)

// screenColumns is how wide what is printed may be.
const screenColumns = 80

// A column of a printed table.
type column struct {
	head  string
	width int
	right bool // numbers
}

// printTable writes rows in columns. What does not fit its column goes on below in the same column:
// nothing is cut off. A row of one cell is a line of its own.
func printTable(w io.Writer, columns []column, rows [][]string) error {
	var b strings.Builder
	heads := make([]string, len(columns))
	total := len(columns) - 1
	for i, c := range columns {
		heads[i] = c.head
		total += c.width
	}
	tableRow(&b, columns, heads)
	b.WriteString(strings.Repeat("-", total) + "\n")
	for _, row := range rows {
		if len(row) == 1 {
			b.WriteString(row[0] + "\n")
			continue
		}
		tableRow(&b, columns, row)
	}
	_, err := io.WriteString(w, b.String())
	return err
}

func tableRow(b *strings.Builder, columns []column, cells []string) {
	parts := make([][]string, len(columns))
	height := 1
	for i, c := range columns {
		parts[i] = cell.Wrap(cells[i], c.width)
		height = max(height, len(parts[i]))
	}
	for y := range height {
		var line strings.Builder
		for i, c := range columns {
			text := ""
			if y < len(parts[i]) {
				text = parts[i][y]
			}
			if i > 0 {
				line.WriteByte(' ')
			}
			if c.right {
				line.WriteString(cell.Right(text, c.width))
			} else {
				line.WriteString(cell.Fit(text, c.width))
			}
		}
		b.WriteString(strings.TrimRight(line.String(), " ") + "\n")
	}
}

// printCSV writes rows per RFC 4180.
func printCSV(w io.Writer, rows [][]string) error {
	out := csv.NewWriter(w)
	out.UseCRLF = true
	return out.WriteAll(rows)
}

func printJSON(w io.Writer, value any) error {
	e := json.NewEncoder(w)
	e.SetEscapeHTML(false)
	e.SetIndent("", "  ")
	return e.Encode(value)
}

// words makes text fit to print: no control characters and, where the locale is not UTF-8, ASCII.
func words(s string) string {
	if !utf8Locale() {
		return export.ASCII(s)
	}
	return strings.Map(func(r rune) rune {
		if r < ' ' || r >= 0x7f && r < 0xa0 {
			return ' '
		}
		return r
	}, s)
}

// utf8Locale reads the locale as every program does: the first of these that is set decides.
func utf8Locale() bool {
	for _, name := range []string{"LC_ALL", "LC_CTYPE", "LANG"} {
		if value := os.Getenv(name); value != "" {
			value = strings.ToLower(value)
			return strings.Contains(value, "utf-8") || strings.Contains(value, "utf8")
		}
	}
	return false
}

// count gives a number with its word: "1 fault", "2 faults", "3 logbook entries".
func count(n int, thing string) string {
	switch stem, y := strings.CutSuffix(thing, "ry"); {
	case n == 1:
	case y:
		thing = stem + "ries"
	default:
		thing += "s"
	}
	return fmt.Sprintf("%d %s", n, thing)
}

// round keeps so many digits, so that a number is written the same everywhere.
func round(x float64, digits int) float64 {
	scale := math.Pow10(digits)
	return math.Round(x*scale) / scale
}
