package sched

import (
	"bytes"
	"errors"
	"regexp"
	"slices"
	"strings"
	"testing"
)

func modelText(t *testing.T, p *Problem) string {
	t.Helper()
	m, err := NewModel(p)
	if err != nil {
		t.Fatal(err)
	}
	var b bytes.Buffer
	if err := m.WriteMPS(&b); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

// modelled are the problems with the smallest models; all rules are in them.
func modelled() map[string]*Problem {
	all := outsideProblems()
	return map[string]*Problem{"a break": all["a break"], "pins": all["pins"], "two breaks": all["two breaks"]}
}

// A plan is a way through the rows of the model: with its slots at 1, each flow row can be met, which is
// checked here for the rows that count slots. That the flows allow just the plans is checked by a general
// solver (testdata/optima.json).
func TestModelHoldsEveryPlan(t *testing.T) {
	for name, p := range modelled() {
		text := modelText(t, p)
		for _, slot := range solve(t, p, Options{Rounds: 2}).Plan.Slots {
			c := column{kind: slotColumn, of: [4]int{slot.Node, slot.Start, slot.End}}
			worth := units(p.JobWorth(p.Nodes[slot.Node].Job, slot.Start, slot.End))
			if !strings.Contains(text, "\n    "+c.name()+" worth "+worth+"\n") {
				t.Errorf("%s: no column %s of worth %s", name, c.name(), worth)
			}
		}
	}
}

// Names are unique, every row named is declared, and none is left empty by accident.
func TestModelIsWellFormed(t *testing.T) {
	for name, p := range modelled() {
		m, err := NewModel(p)
		if err != nil {
			t.Fatal(err)
		}
		seen := map[string]bool{}
		for i := range m.columns {
			c := &m.columns[i]
			if seen[c.name()] {
				t.Errorf("%s: column %s comes twice", name, c.name())
			}
			seen[c.name()] = true
		}
		rows := map[string]bool{}
		for _, r := range m.rows {
			if rows[r.name] {
				t.Errorf("%s: row %s comes twice", name, r.name)
			}
			rows[r.name] = true
		}
		columns, binaries, _ := m.Size()
		if slots := len(regexp.MustCompile(`(?m)^ (FX|UP) limits slot_`).FindAllString(modelText(t, p), -1)); slots != binaries || binaries >= columns {
			t.Errorf("%s: %d bounds for %d binaries of %d columns", name, slots, binaries, columns)
		}
	}
}

func TestColumnNamesReadBack(t *testing.T) {
	c := column{kind: slotColumn, of: [4]int{12, 0, 150}}
	if s, ok := SlotOfColumn(c.name()); !ok || s != (Slot{Node: 12, Start: 0, End: 150}) {
		t.Errorf("%s read as %+v, %v", c.name(), s, ok)
	}
	for _, name := range []string{"", "slot", "slot_1_2", "slot_1_2_3_4", "slot_1_x_3", "slot_-1_2_3", "move_1_2_3_4", "wait_1_2_3"} {
		if s, ok := SlotOfColumn(name); ok {
			t.Errorf("%q read as %+v", name, s)
		}
	}
}

func TestModelTooLarge(t *testing.T) {
	const most = 40_000
	p := generate(small.with(1))
	_, err := newModel(p, most)
	var large *TooLargeError
	if !errors.As(err, &large) || large.GridMin != 1 || large.Fits < 2 {
		t.Fatalf("error %v", err)
	}
	p.GridMin = large.Fits
	m, err := newModel(p, most)
	if err != nil {
		t.Fatalf("on the grid that would do: %v", err)
	}
	if columns, _, _ := m.Size(); columns > most {
		t.Errorf("%d columns", columns)
	}
	p.GridMin = grids[slices.Index(grids, large.Fits)-1]
	if _, err := newModel(p, most); err == nil {
		t.Errorf("a grid of %d min would have done", p.GridMin)
	}
	if _, err := newModel(p, 100); !errors.As(err, &large) || large.Fits != 0 || !strings.Contains(err.Error(), "on any grid") {
		t.Errorf("error %v", err)
	}
}

func TestModelRefusesWhatSolveRefuses(t *testing.T) {
	p := generate(small.with(1))
	p.Pins = []Slot{{Node: 0, Start: 10, End: 40}, {Node: 1, Start: 30, End: 60}}
	if _, err := NewModel(p); err == nil || !strings.Contains(err.Error(), "pins clash") {
		t.Errorf("error %v", err)
	}
	p.Minutes = 0
	if _, err := NewModel(p); err == nil || !strings.Contains(err.Error(), "malformed") {
		t.Errorf("error %v", err)
	}
}
