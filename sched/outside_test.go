package sched

import (
	"bytes"
	"encoding/json"
	"flag"
	"fmt"
	"hash/fnv"
	"maps"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"
	"time"
)

// remake solves the outside problems again with Cbc, a general solver for mixed-integer programs, and
// writes what it proved: go test ./sched -run Outside -remake-optima. It takes some minutes.
var remake = flag.Bool("remake-optima", false, "solve the exported problems with cbc and rewrite testdata/optima.json")

// An optimum is what a general solver proved of an exported problem.
type optimum struct {
	Name     string `json:"name"`
	Problem  string `json:"problem"` // checksum of the problem as JSON: the optimum is of no other
	Columns  int    `json:"columns"`
	Binaries int    `json:"binaries"`
	Rows     int    `json:"rows"`
	Optimum  Micro  `json:"optimum"`
	Seconds  int    `json:"seconds"` // that the solver took
	Solver   string `json:"solver"`
	Date     string `json:"date"`
	Slots    []Slot `json:"slots"` // of the solver's plan
}

// outsideProblems are small sessions on a grid that a general solver can cope with, with every rule in them.
func outsideProblems() map[string]*Problem {
	five := func(in instance, seed uint64) *Problem {
		in.grid = 5
		return generate(in.with(seed))
	}
	all := map[string]*Problem{
		"plain":         five(small, 1),
		"another":       five(small, 2),
		"two receivers": five(instance{sources: 10, minutes: 240, receivers: 2, calibrators: 1, long: 1}, 3),
		"a break":       five(instance{sources: 14, minutes: 240, receivers: 1, breaks: 1, calibrators: 1, long: 1}, 4),
		"two breaks":    five(instance{sources: 10, minutes: 200, receivers: 2, breaks: 2, long: 1}, 5),
		"pins":          five(small, 6),
		"time past":     five(small, 7),
		"two slots":     five(instance{sources: 10, minutes: 240, receivers: 1, calibrators: 1, long: 2}, 8),
	}
	p := all["pins"]
	dispatched := Dispatch(p).Slots
	p.Pins = []Slot{dispatched[1], dispatched[len(dispatched)-2]}
	all["time past"].FromMin = 50
	for i := range all["two slots"].Jobs {
		all["two slots"].Jobs[i].MaxSlots = 1 + i%2
	}
	return all
}

func checksum(t *testing.T, p *Problem) string {
	t.Helper()
	text, err := json.Marshal(p)
	if err != nil {
		t.Fatal(err)
	}
	h := fnv.New64a()
	h.Write(text)
	return fmt.Sprintf("%016x", h.Sum64())
}

func TestOutsideOptimaLieBetweenWorthAndCeiling(t *testing.T) {
	file := filepath.Join("testdata", "optima.json")
	problems := outsideProblems()
	if *remake {
		remakeOptima(t, file, problems)
	}
	text, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	var known []optimum
	if err := json.Unmarshal(text, &known); err != nil {
		t.Fatal(err)
	}
	if len(known) != len(problems) {
		t.Errorf("%d optima for %d problems", len(known), len(problems))
	}
	for _, o := range known {
		p := problems[o.Name]
		if p == nil || checksum(t, p) != o.Problem {
			t.Errorf("%s: the optimum is of another problem than the test's", o.Name)
			continue
		}
		m, err := NewModel(p)
		if err != nil {
			t.Fatal(err)
		}
		if c, b, r := m.Size(); c != o.Columns || b != o.Binaries || r != o.Rows {
			t.Errorf("%s: a model of %d columns, %d binaries, %d rows; the solver had %d, %d, %d", o.Name, c, b, r, o.Columns, o.Binaries, o.Rows)
		}
		for i := range o.Slots {
			o.Slots[i].Pinned = slices.ContainsFunc(p.Pins, o.Slots[i].same)
		}
		judged(t, p, Plan{Slots: o.Slots}, o.Optimum)
		r := solve(t, p, Options{})
		judged(t, p, r.Plan, r.Worth)
		if r.Worth > o.Optimum || !r.HasCeiling || r.Ceiling < o.Optimum {
			t.Errorf("%s: worth %d, ceiling %d (%v), %s proved %d to be the optimum", o.Name, r.Worth, r.Ceiling, r.HasCeiling, o.Solver, o.Optimum)
		}
		if r.Proven && r.Worth != o.Optimum {
			t.Errorf("%s: %d said to be proven, %s proved %d", o.Name, r.Worth, o.Solver, o.Optimum)
		}
		t.Logf("%-14s worth %d, optimum %d, ceiling %d, proven %v", o.Name, r.Worth, o.Optimum, r.Ceiling, r.Proven)
	}
}

func remakeOptima(t *testing.T, file string, problems map[string]*Problem) {
	var all []optimum
	for _, name := range slices.Sorted(maps.Keys(problems)) {
		o := solveOutside(t, problems[name])
		o.Name = name
		t.Logf("%s: %d in %d s", name, o.Optimum, o.Seconds)
		all = append(all, o)
	}
	text, err := json.MarshalIndent(all, "", " ")
	if err != nil {
		t.Fatal(err)
	}
	// One slot a line.
	text = regexp.MustCompile(`\{\s+"node": (\d+),\s+"start": (\d+),\s+"end": (\d+)\s+\}`).ReplaceAll(text, []byte(`{"node": $1, "start": $2, "end": $3}`))
	if err := os.WriteFile(file, append(text, '\n'), 0o644); err != nil {
		t.Fatal(err)
	}
}

// solveOutside lets Cbc prove the optimum of a problem's model.
func solveOutside(t *testing.T, p *Problem) optimum {
	t.Helper()
	m, err := NewModel(p)
	if err != nil {
		t.Fatal(err)
	}
	var model bytes.Buffer
	if err := m.WriteMPS(&model); err != nil {
		t.Fatal(err)
	}
	dir := t.TempDir()
	in, out := filepath.Join(dir, "session.mps"), filepath.Join(dir, "solution.txt")
	if err := os.WriteFile(in, model.Bytes(), 0o644); err != nil {
		t.Fatal(err)
	}
	began := time.Now()
	said, err := exec.Command("cbc", in, "-maximize", "-ratioGap", "0", "-allowableGap", "0", "-seconds", "900", "-solve", "-solution", out).CombinedOutput()
	if err != nil || !bytes.Contains(said, []byte("Optimal solution found")) && !bytes.Contains(said, []byte("Optimal - objective")) {
		t.Fatalf("cbc: %v\n%s", err, said)
	}
	solution, err := os.ReadFile(out)
	if err != nil {
		t.Fatal(err)
	}
	o := optimum{Problem: checksum(t, p), Seconds: int(time.Since(began).Seconds()), Date: time.Now().UTC().Format(time.DateOnly),
		Solver: "Cbc " + string(regexp.MustCompile(`Version: (\S+)`).FindSubmatch(said)[1])}
	o.Columns, o.Binaries, o.Rows = m.Size()
	for line := range strings.Lines(string(solution)) {
		f := strings.Fields(line)
		if len(f) < 3 {
			continue
		}
		slot, ok := SlotOfColumn(f[1])
		if v, err := strconv.ParseFloat(f[2], 64); ok && err == nil && v > 0.5 {
			o.Slots = append(o.Slots, slot)
		}
	}
	plan := Plan{Slots: o.Slots}.Sorted()
	o.Slots, o.Optimum = plan.Slots, p.PlanWorth(plan)
	objective := regexp.MustCompile(`objective value\s+(\S+)`).FindSubmatch(solution)
	if v, err := strconv.ParseFloat(string(objective[1]), 64); err != nil || math.Abs(math.Abs(v)-float64(o.Optimum)/float64(Unit)) > 1e-4 {
		t.Errorf("cbc says %s, its slots are worth %d", objective[1], o.Optimum)
	}
	return o
}
