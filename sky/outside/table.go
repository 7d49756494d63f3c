package outside

import (
	"encoding/csv"
	"fmt"
	"os"
	"path"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"
)

var columns = []string{"id", "quantity", "inputs", "expected", "unit", "tol", "tol_kind", "origin", "status", "source", "note"}

// Rows returns the rows of a file of testdata whose ids are asked for, in the order of the file. An id may be a
// pattern of path.Match, DIS-01*; one that fits no row is an error.
func Rows(t testing.TB, file string, ids ...string) []Row {
	t.Helper()
	all, err := read(filepath.Join("testdata", file))
	if err != nil {
		t.Fatal(err)
	}
	var out []Row
	found := make([]bool, len(ids))
	for _, r := range all {
		i := slices.IndexFunc(ids, func(pattern string) bool { return matches(t, pattern, r.ID) })
		if i < 0 {
			continue
		}
		found[i] = true
		r.t = t
		out = append(out, r)
	}
	for i, ok := range found {
		if !ok {
			t.Fatalf("%s has no row %s", file, ids[i])
		}
	}
	return out
}

// One returns the row of an id.
func One(t testing.TB, file, id string) Row {
	t.Helper()
	rows := Rows(t, file, id)
	if len(rows) != 1 {
		t.Fatalf("%s has %d rows %s", file, len(rows), id)
	}
	return rows[0]
}

func matches(t testing.TB, pattern, id string) bool {
	t.Helper()
	ok, err := path.Match(pattern, id)
	if err != nil {
		t.Fatalf("%q: %v", pattern, err)
	}
	return ok
}

// read reads a whole table, and refuses one that says something twice or that it cannot mean.
func read(file string) ([]Row, error) {
	lines, err := records(file)
	if err != nil {
		return nil, err
	}
	if len(lines) == 0 || !slices.Equal(lines[0], columns) {
		return nil, fmt.Errorf("%s: the columns are not %s", file, strings.Join(columns, ", "))
	}
	seen := map[string]bool{}
	var out []Row
	for _, l := range lines[1:] {
		r := Row{ID: l[0], Quantity: l[1], Inputs: map[string]string{}, Expected: l[3], TolKind: l[6], Note: l[10], file: file}
		for pair := range strings.SplitSeq(l[2], ";") {
			if k, v, ok := strings.Cut(pair, "="); ok {
				r.Inputs[k] = v
			}
		}
		if seen[r.ID] {
			return nil, fmt.Errorf("%s: %s stands there twice", file, r.ID)
		}
		seen[r.ID] = true
		if r.TolKind != "record" {
			if r.Tol, err = strconv.ParseFloat(l[5], 64); err != nil {
				return nil, fmt.Errorf("%s: %s: tolerance: %w", file, r.ID, err)
			}
		}
		out = append(out, r)
	}
	return out, nil
}

func records(file string) ([][]string, error) {
	f, err := os.Open(file)
	if err != nil {
		return nil, err
	}
	defer f.Close()
	r := csv.NewReader(f)
	r.Comment = '#'
	r.FieldsPerRecord = -1 // other tables of a folder have other columns
	r.LazyQuotes = true
	lines, err := r.ReadAll()
	if err != nil {
		return nil, fmt.Errorf("%s: %w", file, err)
	}
	return lines, nil
}
