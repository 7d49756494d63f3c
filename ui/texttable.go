package ui

import (
	"strings"

	"example.org/tallystick/ui/cell"
	"example.org/tallystick/ui/theme"
)

// A textColumn is one column of a table of plain texts. A narrow screen drops the highest ranks; the last column
// that stays takes the room that is left.
type textColumn struct {
	head  string
	width int
	right bool
	rank  int
}

// fitTextColumns returns which columns have room in w cells.
func fitTextColumns(columns []textColumn, w int) []int {
	used := 1
	keep := map[int]bool{}
	for rank := 0; rank <= 9; rank++ {
		for i, c := range columns {
			if c.rank == rank && (rank == 0 || used+c.width+1 <= w) {
				used += c.width + 1
				keep[i] = true
			}
		}
	}
	var kept []int
	for i := range columns {
		if keep[i] {
			kept = append(kept, i)
		}
	}
	return kept
}

// drawRows draws a table of n rows of texts with a cursor; only rows in sight are asked for.
func drawRows(c *cell.Canvas, g *theme.Glyphs, columns []textColumn, n int, row func(i int) ([]string, theme.Ink), list *rows) {
	cw, h := c.Size()
	kept := fitTextColumns(columns, cw)
	x := 1
	width := func(k, x int) int {
		if k == kept[len(kept)-1] && !columns[k].right {
			return max(cw-x-1, 0)
		}
		return columns[k].width
	}
	for _, k := range kept {
		col := columns[k]
		c.Put(x, 0, fitted(col.head, width(k, x), col.right), theme.Muted)
		x += width(k, x) + 1
	}
	page := max(h-1, 1)
	list.show(n, page)
	for i := list.top; i < min(list.top+page, n); i++ {
		y := i - list.top + 1
		cells, ink := row(i)
		mark := " "
		if i == list.at {
			ink, mark = theme.Chosen, g.Mark
			c.Put(0, y, cell.Fit("", cw), ink)
		}
		x := c.Put(0, y, mark, ink)
		for _, k := range kept {
			c.Put(x, y, fitted(oneCell.Replace(cells[k]), width(k, x), columns[k].right), ink)
			x += width(k, x) + 1
		}
	}
	drawMore(c, g, list.top, n, page)
}

// joined writes what there is of some texts, with commas.
func joined(texts ...string) string {
	var said []string
	for _, t := range texts {
		if t != "" {
			said = append(said, t)
		}
	}
	return strings.Join(said, ", ")
}
