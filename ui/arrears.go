package ui

import (
	"fmt"
	"image"
	"slices"
	"strings"

	tea "github.com/charmbracelet/bubbletea"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/ui/cell"
	"example.org/tallystick/ui/theme"
)

// arrears is the review of all accounts: what each source is owed, and why it is or is not in the
// plan of the session on the desk.
type arrears struct {
	list   rows
	page   int
	sort   int // index into accountColumns
	turned bool
	filter field
	typing bool
	shown  []int // indices into Prepared.Accounts, as last listed
}

func (v *arrears) title() string { return arrearsTitle }

func (v *arrears) hints(*world) []verb {
	return []verb{filterRows, sortNext, sortTurn, barSource, seeElsewhere, undoEdit, openChosen, nextView}
}

// rows lists the accounts that pass the filter, in order.
func (v *arrears) rows(w *world) []int {
	all := w.desk.accounts
	v.shown = v.shown[:0]
	want := strings.ToLower(v.filter.String())
	for i := range all {
		a := &all[i]
		if want == "" || strings.Contains(strings.ToLower(a.Source+" "+aimWords(a)+" "+strings.Join(a.Flags, " ")+" "+planWords(w, a)), want) {
			v.shown = append(v.shown, i)
		}
	}
	order := accountColumns[v.column()].order
	slices.SortStableFunc(v.shown, func(i, j int) int {
		n := order(w, &all[i], &all[j])
		if v.turned {
			return -n
		}
		return n
	})
	v.list.at = min(max(v.list.at, 0), max(len(v.shown)-1, 0))
	return v.shown
}

// column is the column sorted by; debt at first.
func (v *arrears) column() int { return (v.sort + debtColumn) % len(accountColumns) }

func (v *arrears) sortBy(step int) {
	n := len(accountColumns)
	v.sort = (v.sort + n + step) % n
	for accountColumns[v.column()].order == nil {
		v.sort = (v.sort + n + step) % n
	}
	v.list = rows{}
}

func (v *arrears) chosen(w *world) (*campaigns.AccountRow, bool) {
	if w.desk.prepared == nil {
		return nil, false
	}
	shown := v.rows(w)
	if len(shown) == 0 {
		return nil, false
	}
	return &w.desk.accounts[shown[v.list.at]], true
}

func (v *arrears) typed(k tea.KeyMsg, w *world) bool {
	if !v.typing {
		return false
	}
	switch k.String() {
	case "esc":
		v.typing, v.filter = false, field{}
	case "enter":
		v.typing = false
	case "ctrl+c":
		return false
	default:
		if !v.filter.key(k) {
			v.typing = false
			return false
		}
		v.list = rows{}
	}
	return true
}

func (v *arrears) steer(verb verb, w *world) action {
	if w.desk.prepared == nil {
		return action{}
	}
	switch verb {
	case moveLeft:
		v.sortBy(-1)
	case moveRight, sortNext:
		v.sortBy(1)
	case sortTurn:
		v.turned = !v.turned
	case filterRows:
		v.typing = true
	case goBack:
		v.filter = field{}
	case barSource:
		if r, ok := v.chosen(w); ok {
			return action{verb: barThisSource, text: r.Source}
		}
	default:
		v.list.steer(verb, len(v.rows(w)), max(v.page-1, 1))
	}
	return action{}
}

func (v *arrears) click(at, size image.Point, turn int, w *world) action {
	if w.desk.prepared == nil {
		return action{}
	}
	p := tableLayout(size.X, size.Y)
	n := len(v.rows(w))
	switch i := v.list.top + at.Y - p.table.Min.Y - 1; {
	case turn < 0:
		v.list.steer(moveUp, n, 1)
	case turn > 0:
		v.list.steer(moveDown, n, 1)
	case at.In(p.table) && at.Y > p.table.Min.Y && i < n:
		v.list.at = i
	}
	return action{}
}

func (v *arrears) draw(w *world, c *cell.Canvas, g *theme.Glyphs) {
	cw, ch := c.Size()
	p := tableLayout(cw, ch)
	shown := v.rows(w)
	v.drawHead(w, c.Sub(p.head), len(shown))
	v.drawTable(w, c.Sub(p.table), g, shown)
	if p.details.Empty() {
		return
	}
	if p.beside {
		x := p.details.Min.X - 1
		c.Fill(image.Rect(x, p.details.Min.Y, x+1, p.details.Max.Y), g.Upright, theme.Muted)
	}
	title, lines := v.read(w)
	dw, dh := c.Sub(p.details).Size()
	drawPane(c.Sub(p.details), g, title, lines, dw, dh, p.beside)
}

func (v *arrears) drawHead(w *world, c *cell.Canvas, n int) {
	cw, _ := c.Size()
	all := w.desk.accounts
	if v.typing || v.filter.String() != "" {
		text := fmt.Sprintf("%d of %d accounts, filter: ", n, len(all))
		x := c.Put(1, 0, text, theme.Muted)
		if v.typing {
			v.filter.draw(c, x, 0)
		} else {
			c.Put(x, 0, cell.Fit(v.filter.String()+"  (Esc shows all)", max(cw-x, 0)), theme.Plain)
		}
		return
	}
	overdue := 0
	for i := range all {
		if all[i].Debt > 1 {
			overdue++
		}
	}
	text := fmt.Sprintf("%s at %s, %d overdue, by %s", count(len(all), "account"), w.desk.session.Start.UTC().Format("2006-01-02 15:04 UTC"), overdue, v.orderWords())
	c.Put(1, 0, cell.Fit(text, cw-1), theme.Plain)
}

func (v *arrears) orderWords() string {
	text := accountColumns[v.column()].head
	if v.column() == debtColumn {
		text = "debt, worst first"
	}
	if v.turned {
		text += ", turned round"
	}
	return text
}

func (v *arrears) drawTable(w *world, c *cell.Canvas, g *theme.Glyphs, shown []int) {
	cw, h := c.Size()
	v.page = max(h-1, 1)
	columns := fitAccountColumns(cw)
	x := 1
	for _, k := range columns {
		col := accountColumns[k]
		ink, head := theme.Muted, col.head
		if k == v.column() {
			ink = theme.Strong
		}
		c.Put(x, 0, fitted(head, col.width, col.right), ink)
		x += col.width + 1
	}
	if len(shown) == 0 {
		c.Put(1, 1, "no account matches", theme.Plain)
		return
	}
	v.list.show(len(shown), v.page)
	for i := v.list.top; i < min(v.list.top+v.page, len(shown)); i++ {
		r := &w.desk.accounts[shown[i]]
		ink, mark := theme.Plain, " "
		switch {
		case i == v.list.at:
			ink, mark = theme.Chosen, g.Mark
			c.Put(0, i-v.list.top+1, cell.Fit("", cw), ink)
		}
		x := c.Put(0, i-v.list.top+1, mark, ink)
		for _, k := range columns {
			col := accountColumns[k]
			here := ink
			if r.Debt > 1 && i != v.list.at && tellsDebt(k) {
				here = theme.Overdue
			}
			c.Put(x, i-v.list.top+1, fitted(col.text(w, g, r), col.width, col.right), here)
			x += col.width + 1
		}
	}
	drawMore(c, g, v.list.top, len(shown), v.page)
}

func fitted(s string, w int, right bool) string {
	if right {
		return cell.Right(s, w)
	}
	return cell.Fit(s, w)
}
