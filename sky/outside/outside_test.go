package outside

import (
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

// A witness is a test that may fail without failing its caller.
type witness struct {
	testing.TB
	said []string
}

func (w *witness) Helper() {}

func (w *witness) Errorf(format string, args ...any) {
	w.said = append(w.said, fmt.Sprintf(format, args...))
}

func TestAgrees(t *testing.T) {
	for _, c := range []struct {
		got     float64
		printed string
		kind    string
		tol     float64
		want    bool
	}{
		{1.5, "1.0", "abs", 0.5, true},
		{1.51, "1.0", "abs", 0.5, false},
		{103, "100.0", "rel", 0.03, true},
		{-103, "100.0", "rel", 0.03, false},
		{104, "100.0", "rel", 0.03, false},
		{0.3289474, "0.328947", "rel", 1e-6, true}, // half of the last digit is more than a millionth
		{0.3289481, "0.328947", "rel", 1e-6, false},
		{2.0004e-4, "2.000e-04", "abs", 0, true},
		{2.0006e-4, "2.000e-04", "abs", 0, false},
		{4, "3", "abs", 0, false}, // a whole number is exact
		{65.9, "66", "upper", 0, true},
		{66, "66", "upper", 0, false},
		{1, "2", "ratio", 2.5, true},
		{5.1, "2", "ratio", 2.5, false},
		{0.7, "2", "ratio", 2.5, false},
	} {
		if got, err := agrees(c.got, c.printed, c.kind, c.tol); got != c.want || err != nil {
			t.Errorf("%g for %s, %s %g: %v, %v", c.got, c.printed, c.kind, c.tol, got, err)
		}
	}
	for _, kind := range []string{"", "bracket", "record", "ABS"} {
		if _, err := agrees(1, "1", kind, 1); err == nil {
			t.Errorf("kind %q is compared", kind)
		}
	}
	if _, err := agrees(1, "one", "abs", 1); err == nil {
		t.Error("a word is compared")
	}
}

func TestCheckComplains(t *testing.T) {
	row := Row{ID: "X-1", Expected: "1.0 2.0", Tol: 0.1, TolKind: "abs"}
	for name, c := range map[string]struct {
		do   func(Row)
		said int
	}{
		"right":             {func(r Row) { r.Check(1.05, 2) }, 0},
		"second wrong":      {func(r Row) { r.Check(1, 2.2) }, 1},
		"both wrong":        {func(r Row) { r.Check(2, 1) }, 1},
		"not enough":        {func(r Row) { r.Check(1) }, 1},
		"tighter, right":    {func(r Row) { r.CheckWithin(0.05, 1, 2) }, 0},
		"tighter, wrong":    {func(r Row) { r.CheckWithin(0.05, 1.07, 2) }, 1},
		"tighter, wider":    {func(r Row) { r.CheckWithin(0.2, 1, 2) }, 1},
		"wider":             {func(r Row) { r.CheckWider(0.2, "by design", 1, 2.15) }, 0},
		"wider, no reason":  {func(r Row) { r.CheckWider(0.2, "", 1, 2.15) }, 1},
		"wider, not needed": {func(r Row) { r.CheckWider(0.2, "by design", 1, 2.05) }, 1},
		"wider, wrong":      {func(r Row) { r.CheckWider(0.2, "by design", 1, 2.25) }, 1},
		"wider, tighter":    {func(r Row) { r.CheckWider(0.05, "by design", 1, 2.15) }, 2},
		"bracket of an abs": {func(r Row) { r.CheckBracket(0, 2) }, 1},
		"bracket":           {func(r Row) { r.TolKind = "bracket"; r.CheckBracket(0, 2) }, 0},
		"outside a bracket": {func(r Row) { r.TolKind = "bracket"; r.CheckBracket(1.5, 2) }, 1},
	} {
		w := &witness{}
		row.t = w
		if c.do(row); len(w.said) != c.said {
			t.Errorf("%s: said %q, want %d complaints", name, w.said, c.said)
		}
	}
}

func TestRows(t *testing.T) {
	for _, r := range Rows(t, "sample.csv", "SMP-00*") {
		r.Check(r.Num("a") + r.Nums("b")[1])
	}
	r := One(t, "sample.csv", "SMP-010")
	if r.Wants()[1] != 7 || r.Want() != 6 || r.Note != "a note, with a comma" || r.Quantity != "two numbers" {
		t.Errorf("%+v", r)
	}
	r.Check(6, 7)
}

func TestBrokenTables(t *testing.T) {
	head := strings.Join(columns, ",") + "\n"
	for name, text := range map[string]string{
		"nothing":      "",
		"columns":      "id,value\nX-1,2\n",
		"twice":        head + "X-1,q,,1,,1,abs,,,,\nX-1,q,,1,,1,abs,,,,\n",
		"no tolerance": head + "X-1,q,,1,,,abs,,,,\n",
	} {
		file := filepath.Join(t.TempDir(), "broken.csv")
		if err := os.WriteFile(file, []byte(text), 0o600); err != nil {
			t.Fatal(err)
		}
		if rows, err := read(file); err == nil {
			t.Errorf("%s: read as %+v", name, rows)
		}
	}
	if _, err := read("testdata/none.csv"); err == nil {
		t.Error("a file that is not there is read")
	}
}

func TestLeft(t *testing.T) {
	file := filepath.Join(t.TempDir(), "some.csv")
	text := strings.Join(columns, ",") + "\nX-1,q,,1,,1,abs,,,,\nX-2,q,,1,,1,abs,,,,\n"
	if err := os.WriteFile(file, []byte(text), 0o600); err != nil {
		t.Fatal(err)
	}
	tick(file, "X-1")
	for name, c := range map[string]struct {
		except map[string]string
		said   []string
	}{
		"one is left":       {nil, []string{"no test asserts row X-2"}},
		"with a reason":     {map[string]string{"X-2": "the program has no such thing"}, nil},
		"without a reason":  {map[string]string{"X-2": ""}, []string{"row X-2 is left out without a reason"}},
		"asserted as well":  {map[string]string{"X-1": "why", "X-2": "why"}, []string{"row X-1 is asserted"}},
		"a row of no table": {map[string]string{"X-2": "why", "X-3": "why"}, []string{"X-3 is left out"}},
	} {
		got := left([]string{file}, c.except)
		if len(got) != len(c.said) || !slices.EqualFunc(got, c.said, strings.Contains) {
			t.Errorf("%s: %q, want %q", name, got, c.said)
		}
	}
}

func TestMain(m *testing.M) {
	Main(m, map[string]string{"SMP-020": "it stands here to be left out"})
}
