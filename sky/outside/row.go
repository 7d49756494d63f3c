// Package outside reads the tables of values from outside that stand in testdata folders, and sees to it
// that tests assert every row of them. It is for tests alone.
//
// A table is a CSV file; lines that start with # are comments. Its columns are
// id, quantity, inputs, expected, unit, tol, tol_kind, origin, status, source, note.
package outside

import (
	"fmt"
	"math"
	"strconv"
	"strings"
	"testing"
)

// A Row is one line of a table.
type Row struct {
	ID       string
	Quantity string
	Inputs   map[string]string
	Expected string // as it is printed: one number, several with blanks between, or other text
	Tol      float64
	TolKind  string // abs, rel, upper, ratio, bracket, record
	Note     string

	t    testing.TB
	file string
}

// Num returns the number that an input holds.
func (r Row) Num(key string) float64 {
	r.t.Helper()
	return r.number(key, r.text(key))
}

// Nums returns the numbers of an input that holds several.
func (r Row) Nums(key string) []float64 {
	r.t.Helper()
	return r.numbers(key, r.text(key))
}

// Want returns the number expected, the first one if there are several.
func (r Row) Want() float64 {
	r.t.Helper()
	return r.Wants()[0]
}

// Wants returns all numbers expected.
func (r Row) Wants() []float64 {
	r.t.Helper()
	return r.numbers("expected", r.Expected)
}

// Check compares what a test worked out with what the row expects, number by number, and ticks the row off.
//
// The tolerance is the row's. Where half of the last digit that is printed is more than that, it is half of
// that digit: more is not known of the value.
func (r Row) Check(got ...float64) {
	r.t.Helper()
	r.compare(r.Tol, got)
}

// CheckWithin is Check with a tolerance tighter than the row's.
func (r Row) CheckWithin(tol float64, got ...float64) {
	r.t.Helper()
	if !(tol <= r.Tol) {
		r.t.Errorf("%s: a tolerance of %g is wider than the row's, %g", r.ID, tol, r.Tol)
	}
	r.compare(tol, got)
}

// CheckWider is Check with a tolerance wider than the row's, for what the program does less exactly by design. The
// reason says why. A result that would pass without it is an error: the exception has outlived itself.
func (r Row) CheckWider(tol float64, reason string, got ...float64) {
	r.t.Helper()
	if reason == "" || !(tol > r.Tol) {
		r.t.Errorf("%s: a tolerance of %g instead of %g, for the reason %q", r.ID, tol, r.Tol, reason)
	}
	if r.agrees(r.Tol, got) == "" {
		r.t.Errorf("%s (%s): the row's own tolerance, %g, is enough", r.ID, r.Quantity, r.Tol)
	}
	r.compare(tol, got)
}

// CheckBracket looks whether the value expected lies between the results for two inputs, and ticks the row off.
func (r Row) CheckBracket(low, high float64) {
	r.t.Helper()
	r.Asserted()
	if r.TolKind != "bracket" {
		r.t.Errorf("%s: tolerance kind %q, want bracket", r.ID, r.TolKind)
	}
	if want := r.Want(); !(low < want && want < high) {
		r.t.Errorf("%s (%s): %g does not lie between %g and %g", r.ID, r.Quantity, want, low, high)
	}
}

// Asserted ticks off a row that the test compares by its own means: a text, a date, a record.
func (r Row) Asserted() {
	tick(r.file, r.ID)
}

func (r Row) compare(tol float64, got []float64) {
	r.t.Helper()
	r.Asserted()
	if wrong := r.agrees(tol, got); wrong != "" {
		r.t.Errorf("%s (%s): %s", r.ID, r.Quantity, wrong)
	}
}

// agrees says what is wrong with results, if anything.
func (r Row) agrees(tol float64, got []float64) string {
	words := strings.Fields(r.Expected)
	if len(words) != len(got) {
		return fmt.Sprintf("got %v, want %s", got, r.Expected)
	}
	var wrong []string
	for i, w := range words {
		ok, err := agrees(got[i], w, r.TolKind, tol)
		if err != nil {
			wrong = append(wrong, err.Error())
		} else if !ok {
			wrong = append(wrong, fmt.Sprintf("got %.15g, want %s (%s %g)", got[i], w, r.TolKind, tol))
		}
	}
	return strings.Join(wrong, "; ")
}

func (r Row) text(key string) string {
	r.t.Helper()
	v, ok := r.Inputs[key]
	if !ok {
		r.t.Fatalf("%s has no input %q", r.ID, key)
	}
	return v
}

func (r Row) numbers(key, text string) (out []float64) {
	r.t.Helper()
	for _, w := range strings.Fields(text) {
		out = append(out, r.number(key, w))
	}
	if len(out) == 0 {
		r.t.Fatalf("%s: %s holds no number", r.ID, key)
	}
	return out
}

func (r Row) number(key, text string) float64 {
	r.t.Helper()
	v, err := strconv.ParseFloat(text, 64)
	if err != nil {
		r.t.Fatalf("%s: %s: %v", r.ID, key, err)
	}
	return v
}

// lastDigit is half a unit of the last digit of a number as it is printed; 0 of a whole number.
func lastDigit(text string) float64 {
	mantissa, exponent, _ := strings.Cut(strings.ToLower(text), "e")
	_, decimals, ok := strings.Cut(mantissa, ".")
	if !ok {
		return 0
	}
	e, _ := strconv.Atoi(exponent)
	return 0.5000001 * math.Pow10(e-len(decimals))
}
