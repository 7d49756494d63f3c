package sched

import (
	"bufio"
	"fmt"
	"io"
	"strconv"
	"strings"
)

// WriteMPS writes the model in free MPS form, maximising worth in units. The name of a slot's column is
// slot_NODE_START_END, with minutes from the session's start; SlotOfColumn reads it back.
func (m *Model) WriteMPS(w io.Writer) error {
	b := bufio.NewWriter(w)
	m.writeHead(b)
	b.WriteString("NAME session FREE\nOBJSENSE\n    MAX\nROWS\n N worth\n")
	for _, r := range m.rows {
		sense := byte('L')
		if r.atLeast {
			sense = 'G'
		}
		fmt.Fprintf(b, " %c %s\n", sense, r.name)
	}
	b.WriteString("COLUMNS\n")
	m.writeColumns(b, true)
	b.WriteString("    binaries 'MARKER' 'INTORG'\n")
	m.writeColumns(b, false)
	b.WriteString("    binaries 'MARKER' 'INTEND'\nRHS\n")
	for _, r := range m.rows {
		if r.limit != 0 {
			fmt.Fprintf(b, "    most %s %d\n", r.name, r.limit)
		}
	}
	b.WriteString("BOUNDS\n")
	for i := range m.columns {
		switch c := &m.columns[i]; {
		case c.fixed:
			fmt.Fprintf(b, " FX limits %s 1\n", c.name())
		case c.kind == slotColumn || c.kind == missingColumn:
			fmt.Fprintf(b, " UP limits %s 1\n", c.name())
		}
	}
	b.WriteString("ENDATA\n")
	return b.Flush()
}

// writeHead says in comments what the file holds and how to read its names.
func (m *Model) writeHead(b *bufio.Writer) {
	columns, binaries, rows := m.Size()
	fmt.Fprintf(b, "* One observing session as a mixed-integer program: which slots gather the most worth.\n"+
		"* Session of %d min from %s, slot ends on a grid of %d min.\n"+
		"* %d columns, %d of them binaries, and %d rows.\n"+
		"* slot_N_S_E is node N observed from minute S to minute E of the session; a pinned slot is fixed at 1.\n"+
		"* All other columns are continuous: how the telescope comes from one slot to the next, and missing_J,\n"+
		"* which is 1 if job J must be in the plan and is not.\n"+
		"* Worth is to be maximised; a solver that does not obey OBJSENSE has to be told.\n"+
		"* Jobs that are barred, or worth nothing at any time, are not in it.\n",
		m.p.Minutes, m.p.Start.UTC().Format("2006-01-02T15:04Z"), m.p.GridMin, columns, binaries, rows)
	for i, n := range m.p.Nodes {
		if _, ok := m.jobs[n.Job]; ok {
			j := &m.p.Jobs[n.Job]
			fmt.Fprintf(b, "* node %d: job %d, %s with %s, turn %d of the mount\n",
				i, n.Job, printable(j.Source), printable(m.p.Receivers[j.Receiver].Name), n.Turn)
		}
	}
}

// printable keeps a name within its line.
func printable(name string) string {
	return strings.Map(func(r rune) rune {
		if r < ' ' {
			return ' '
		}
		return r
	}, name)
}

func (m *Model) writeColumns(b *bufio.Writer, continuous bool) {
	for i := range m.columns {
		c := &m.columns[i]
		if (c.kind != slotColumn) != continuous {
			continue
		}
		name := c.name()
		if c.worth != 0 {
			fmt.Fprintf(b, "    %s worth %s\n", name, units(c.worth))
		}
		for _, e := range c.entries[:c.used] {
			fmt.Fprintf(b, "    %s %s %d\n", name, m.rows[e.row].name, e.coefficient)
		}
	}
}

// units writes worth as a decimal without any loss.
func units(w Micro) string {
	sign := ""
	if w < 0 {
		sign, w = "-", -w
	}
	return fmt.Sprintf("%s%d.%06d", sign, w/Unit, w%Unit)
}

func (c *column) name() string {
	var b strings.Builder
	b.WriteString(string(c.kind))
	for _, n := range c.of[:c.kind.numbers()] {
		b.WriteByte('_')
		b.WriteString(strconv.Itoa(n))
	}
	return b.String()
}

// SlotOfColumn reads a slot from the name of its column; it is false for every other name.
func SlotOfColumn(name string) (Slot, bool) {
	parts := strings.Split(name, "_")
	if len(parts) != 4 || parts[0] != string(slotColumn) {
		return Slot{}, false
	}
	var n [3]int
	for i, text := range parts[1:] {
		v, err := strconv.Atoi(text)
		if err != nil || v < 0 {
			return Slot{}, false
		}
		n[i] = v
	}
	return Slot{Node: n[0], Start: n[1], End: n[2]}, true
}
