package ui

import (
	"fmt"
	"image"
	"slices"
	"strings"
	"time"

	tea "github.com/charmbracelet/bubbletea"

	"example.org/tallystick/ui/cell"
	"example.org/tallystick/ui/theme"
)

// box draws an empty box over the middle of the screen, with a title and a line of keys, and returns
// what is inside it. It wants w by h cells inside and takes what there is.
func box(c *cell.Canvas, g *theme.Glyphs, w, h int, title, keys string) *cell.Canvas {
	sw, sh := c.Size()
	r := centred(image.Rect(0, 0, sw, sh), w+4, h+3)
	b := c.Sub(r)
	bw, bh := b.Size()
	b.Fill(image.Rect(0, 0, bw, bh), " ", theme.Plain)
	rule := strings.Repeat(g.Rule, max(bw, 0))
	b.Put(0, 0, rule, theme.Muted)
	b.Put(2, 0, cell.Fit(" "+title+" ", min(cell.Width(title)+2, bw-4)), theme.Strong)
	for y := 1; y < bh-1; y++ {
		b.Put(0, y, g.Upright, theme.Muted)
		b.Put(bw-1, y, g.Upright, theme.Muted)
	}
	b.Put(0, bh-1, rule, theme.Muted)
	if k := " " + keys + " "; bh > 2 {
		b.Put(2, bh-1, cell.Fit(k, min(cell.Width(k), bw-4)), theme.Accent)
	}
	return b.Sub(image.Rect(2, 1, bw-2, bh-1))
}

// A question is asked before something is lost. None of its keys is the key that led to it, and Enter
// answers nothing.
type question struct {
	title   string
	text    string
	answers []answer
}

type answer struct {
	key, says string
	does      action
}

func newQuestion(title, text string, answers ...answer) *question {
	return &question{title, text, answers}
}

func (q *question) key(k tea.KeyMsg, _ *world) action {
	for _, a := range q.answers {
		if k.String() == a.key {
			return a.does
		}
	}
	if s := k.String(); s == "esc" {
		return action{verb: closeDialog}
	}
	return action{}
}

func (q *question) draw(_ *world, c *cell.Canvas, g *theme.Glyphs) {
	sw, _ := c.Size()
	w := min(64, sw-4)
	text := cell.Wrap(q.text, w)
	in := box(c, g, w, len(text)+len(q.answers)+2, q.title, "Esc goes back")
	y := 0
	for _, l := range text {
		in.Put(0, y, l, theme.Plain)
		y++
	}
	_, h := in.Size()
	if h > y+len(q.answers) {
		y++
	}
	for _, a := range q.answers {
		x := in.Put(1, y, keyName(a.key), theme.Accent)
		in.Put(x+2, y, a.says, theme.Plain)
		y++
	}
}

func newLeaveQuestion(unsaved []*desk) *question {
	var names []string
	for _, d := range unsaved {
		names = append(names, d.session.Name)
	}
	return newQuestion("Something is not saved",
		"The plan of "+strings.Join(names, ", ")+" has changes that are not saved.",
		answer{"s", "save and quit", action{verb: saveAndLeave}},
		answer{"d", "discard the changes and quit", action{verb: loseAndLeave}})
}

func newDraftQuestion(dr draft, d *desk, now time.Time) *question {
	plan, _ := d.prepared.Bind(dr.Plan)
	differ := 0
	for _, s := range plan.Slots {
		if !slices.Contains(d.state.plan.Slots, s) {
			differ++
		}
	}
	than := "the plan just made"
	if d.onDisk {
		than = "the saved plan"
	}
	sure := newQuestion("Delete the draft?", "It cannot be brought back.",
		answer{"y", "delete it", action{verb: deleteDraft, more: dr}})
	return newQuestion("Unsaved work from before",
		fmt.Sprintf("The program ended %s with a plan of this session that was not saved: %s, %d of them different from %s.",
			ago(now, dr.KeptAt), count(len(plan.Slots), "slot"), differ, than),
		answer{"r", "restore it (u goes back)", action{verb: restoreDraft, more: dr}},
		answer{"d", "delete it", action{verb: openDialog, more: dialog(sure)}})
}

// A field is one line of text being typed.
type field struct {
	text []rune
	at   int
}

func newField(s string) field { return field{[]rune(s), len([]rune(s))} }

func (f *field) String() string { return string(f.text) }

// key takes a key that edits the line; false if it is no such key.
func (f *field) key(k tea.KeyMsg) bool {
	switch k.Type {
	case tea.KeyRunes, tea.KeySpace:
		if k.Alt {
			return false
		}
		for _, r := range k.Runes {
			if r >= ' ' && r != 0x7f {
				f.text = append(f.text[:f.at], append([]rune{r}, f.text[f.at:]...)...)
				f.at++
			}
		}
	case tea.KeyBackspace:
		if f.at > 0 {
			f.text = append(f.text[:f.at-1], f.text[f.at:]...)
			f.at--
		}
	case tea.KeyDelete:
		if f.at < len(f.text) {
			f.text = append(f.text[:f.at], f.text[f.at+1:]...)
		}
	case tea.KeyLeft:
		f.at = max(f.at-1, 0)
	case tea.KeyRight:
		f.at = min(f.at+1, len(f.text))
	case tea.KeyHome, tea.KeyCtrlA:
		f.at = 0
	case tea.KeyEnd, tea.KeyCtrlE:
		f.at = len(f.text)
	case tea.KeyCtrlU:
		f.text, f.at = f.text[f.at:], 0
	default:
		return false
	}
	return true
}

// draw writes the line with its cursor; of a long one the end near the cursor is seen.
func (f *field) draw(c *cell.Canvas, x, y int) {
	w, _ := c.Size()
	room := max(w-x-1, 1)
	from := 0
	for from < f.at && cell.Width(string(f.text[from:f.at])) >= room {
		from++
	}
	end := c.Put(x, y, string(f.text[from:f.at]), theme.Plain)
	under, rest := " ", ""
	if f.at < len(f.text) {
		under, rest = string(f.text[f.at]), string(f.text[f.at+1:])
	}
	end = c.Put(end, y, under, theme.Chosen)
	c.Put(end, y, rest, theme.Plain)
}

// A prompt asks for one line of text.
type prompt struct {
	title, asks string
	line        field
	done        func(string) action
}

func newPrompt(title, asks, text string, done func(string) action) *prompt {
	return &prompt{title, asks, newField(text), done}
}

func (p *prompt) key(k tea.KeyMsg, _ *world) action {
	switch k.String() {
	case "esc", "ctrl+c":
		return action{verb: closeDialog}
	case "enter":
		if s := strings.TrimSpace(p.line.String()); s != "" {
			return p.done(s)
		}
		return action{}
	}
	p.line.key(k)
	return action{}
}

func (p *prompt) draw(_ *world, c *cell.Canvas, g *theme.Glyphs) {
	in := box(c, g, 64, 2, p.title, "Enter does it, Esc goes back")
	in.Put(0, 0, p.asks+":", theme.Muted)
	p.line.draw(in, 0, 1)
}

// exportForm asks for a format, then for a file.
type exportForm struct {
	formats []string
	rows    rows
	name    string
	path    *prompt
}

func newExportForm(d *desk, formats ...string) *exportForm {
	if len(formats) == 0 {
		formats = []string{"text", "csv"}
	}
	return &exportForm{formats: formats, name: fileName(d.session.Name)}
}

var extension = map[string]string{"text": "txt"}

func (e *exportForm) key(k tea.KeyMsg, w *world) action {
	if e.path != nil {
		if k.String() == "esc" {
			e.path = nil // one step back
			return action{}
		}
		return e.path.key(k, w)
	}
	switch k.String() {
	case "esc", "ctrl+c":
		return action{verb: closeDialog}
	case "enter":
		format := e.formats[e.rows.at]
		ext := extension[format]
		if ext == "" {
			ext = format
		}
		e.path = newPrompt("Export as "+format, "write to the file", e.name+"."+ext, func(path string) action {
			return action{verb: exportTo, text: path, more: format}
		})
	default:
		e.rows.key(k, len(e.formats))
	}
	return action{}
}

var formatSays = map[string]string{
	"text": "a sheet for the operator, 80 columns, to print",
	"csv":  "a table for scripts and spreadsheets",
}

func (e *exportForm) draw(w *world, c *cell.Canvas, g *theme.Glyphs) {
	if e.path != nil {
		e.path.draw(w, c, g)
		return
	}
	in := box(c, g, 60, len(e.formats), "Export the slot list", "Enter chooses, Esc goes back")
	for i, f := range e.formats {
		e.rows.draw(in, g, i, fmt.Sprintf("%-8s %s", f, formatSays[f]))
	}
}

// fileName makes a file name of a session's name.
func fileName(session string) string {
	clean := func(r rune) rune {
		if r == ' ' || r == '/' || r == '\\' || r < ' ' {
			return '-'
		}
		return r
	}
	return "slots-" + strings.Map(clean, session)
}

// rows is the cursor and scroll of a list.
type rows struct{ at, top int }

// key moves the cursor among n rows; false if the key does not move.
func (r *rows) key(k tea.KeyMsg, n int) bool {
	c, ok := commandFor(k.String(), "")
	return ok && r.steer(c.verb, n, 10)
}

func (r *rows) steer(v verb, n, page int) bool {
	switch v {
	case moveUp:
		r.at--
	case moveDown:
		r.at++
	case pageUp:
		r.at -= page
	case pageDown:
		r.at += page
	case moveFirst:
		r.at = 0
	case moveLast:
		r.at = n - 1
	default:
		return false
	}
	r.at = min(max(r.at, 0), max(n-1, 0))
	return true
}

// show scrolls so that the cursor is seen in a window of h out of n rows. It scrolls by half a window,
// so that most keys leave most rows where they are.
func (r *rows) show(n, h int) {
	r.at = min(max(r.at, 0), max(n-1, 0))
	if r.at < r.top || r.at >= r.top+h {
		r.top = r.at - h/2
	}
	r.top = max(min(r.top, n-h), 0)
}

// draw writes row i, if it is in sight.
func (r *rows) draw(c *cell.Canvas, g *theme.Glyphs, i int, text string) {
	w, h := c.Size()
	y := i - r.top
	if y < 0 || y >= h {
		return
	}
	ink, mark := theme.Plain, " "
	if i == r.at {
		ink, mark = theme.Chosen, g.Mark
	}
	c.Put(0, y, cell.Fit(mark+text, w), ink)
}

// A reader shows text that may be longer than the screen.
type reader struct {
	title string
	lines []line
	top   int
}

// A line of details: what it is about, and the text.
type line struct {
	label, text string
	ink         theme.Ink
}

func (r *reader) key(k tea.KeyMsg, _ *world) action {
	switch k.String() {
	case "esc", "enter", "q", "ctrl+c", "?":
		return action{verb: closeDialog}
	}
	if c, ok := commandFor(k.String(), ""); ok {
		switch c.verb {
		case moveUp:
			r.top--
		case moveDown:
			r.top++
		case pageUp:
			r.top -= 10
		case pageDown:
			r.top += 10
		case moveFirst:
			r.top = 0
		case moveLast:
			r.top = 1 << 20
		}
	}
	return action{}
}

func (r *reader) draw(_ *world, c *cell.Canvas, g *theme.Glyphs) {
	sw, sh := c.Size()
	w := min(100, sw-4)
	all := wrapLines(r.lines, w)
	in := box(c, g, w, min(len(all), sh-3), r.title, "Esc closes")
	_, h := in.Size()
	r.top = min(max(r.top, 0), max(len(all)-h, 0))
	drawLines(in, all[r.top:], labelWidth(r.lines))
	if r.top+h < len(all) && h > 0 {
		iw, _ := in.Size()
		in.Put(iw-1, h-1, g.Down, theme.Accent)
	}
	if r.top > 0 {
		iw, _ := in.Size()
		in.Put(iw-1, 0, g.Up, theme.Accent)
	}
}

// labelWidth is what the labels of details take: as much as they need, and a blank.
func labelWidth(lines []line) int {
	n := 0
	for _, l := range lines {
		n = max(n, cell.Width(l.label))
	}
	return min(n+2, 16)
}

// wrapLines breaks details into lines of at most w cells; a label stands before its first line only.
func wrapLines(lines []line, w int) []line {
	var out []line
	labels := labelWidth(lines)
	for _, l := range lines {
		room := w
		if l.label != "" {
			room = w - labels
		}
		for i, t := range cell.Wrap(oneCell.Replace(l.text), max(room, 8)) {
			label := l.label
			if i > 0 && label != "" {
				label = " "
			}
			out = append(out, line{label, t, l.ink})
		}
	}
	return out
}

// drawLines writes wrapped lines from the top.
func drawLines(c *cell.Canvas, lines []line, labels int) {
	w, h := c.Size()
	for y, l := range lines {
		if y >= h {
			return
		}
		x := 0
		if l.label != "" {
			c.Put(0, y, cell.Fit(l.label, labels-1), theme.Muted)
			x = labels
		}
		s, _ := cell.Short(l.text, w-x)
		c.Put(x, y, s, l.ink)
	}
}
