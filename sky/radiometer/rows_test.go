package radiometer

import (
	"encoding/csv"
	"flag"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
)

// A row is a line of a table in testdata.
type row struct {
	id      string
	inputs  map[string]string
	want    float64
	half    float64 // half of the last digit printed
	tol     float64
	tolKind string
}

func (r row) num(t *testing.T, key string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(r.inputs[key], 64)
	if err != nil {
		t.Fatalf("%s: input %q: %v", r.id, key, err)
	}
	return v
}

// check compares and ticks the row off.
func (r row) check(t *testing.T, got float64) {
	t.Helper()
	var ok bool
	switch r.tolKind {
	case "abs":
		ok = math.Abs(got-r.want) <= r.tol+r.half
	case "rel":
		ok = math.Abs(got-r.want) <= r.tol*math.Abs(r.want)+r.half
	case "upper":
		ok = got < r.want
	case "ratio":
		ok = got/r.want <= r.tol && r.want/got <= r.tol
	}
	if !ok {
		t.Errorf("%s: got %.15g, want %.15g (%s %g)", r.id, got, r.want, r.tolKind, r.tol)
	}
}

func rows(t *testing.T, file string, prefixes ...string) []row {
	t.Helper()
	f, err := os.Open("testdata/" + file)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	lines, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	var out []row
	for _, l := range lines[1:] {
		wanted := false
		for _, p := range prefixes {
			wanted = wanted || strings.HasPrefix(l[0], p)
		}
		if !wanted {
			continue
		}
		r := row{id: l[0], inputs: map[string]string{}, tolKind: l[6]}
		for _, kv := range strings.Split(l[2], ";") {
			if k, v, ok := strings.Cut(kv, "="); ok {
				r.inputs[k] = v
			}
		}
		r.want, err = strconv.ParseFloat(l[3], 64)
		if err != nil {
			t.Fatal(err)
		}
		if r.tol, err = strconv.ParseFloat(l[5], 64); err != nil {
			t.Fatal(err)
		}
		if _, decimals, ok := strings.Cut(l[3], "."); ok && !strings.Contains(decimals, "e") {
			r.half = 0.5000001 * math.Pow(10, -float64(len(decimals)))
		}
		asserted[r.id] = true
		out = append(out, r)
	}
	if len(out) == 0 {
		t.Fatalf("%s holds no row %v", file, prefixes)
	}
	return out
}

// asserted are the rows that tests have asked for.
var asserted = map[string]bool{}

// TestMain looks, when all tests have run, for rows of the tables that none of them asked for.
func TestMain(m *testing.M) {
	flag.Parse()
	code := m.Run()
	if code == 0 && flag.Lookup("test.run").Value.String() == "" && flag.Lookup("test.list").Value.String() == "" && flag.Lookup("test.bench").Value.String() == "" {
		code = rowsLeft()
	}
	os.Exit(code)
}

func rowsLeft() (code int) {
	files, _ := filepath.Glob("testdata/*.csv")
	for _, name := range files {
		f, err := os.Open(name)
		if err != nil {
			fmt.Println(err)
			return 1
		}
		lines, err := csv.NewReader(f).ReadAll()
		f.Close()
		if err != nil {
			fmt.Println(err)
			return 1
		}
		for _, l := range lines[1:] {
			if !asserted[l[0]] {
				fmt.Printf("%s: no test asserts row %s\n", name, l[0])
				code = 1
			}
		}
	}
	return code
}
