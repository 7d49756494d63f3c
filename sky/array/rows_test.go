package array

import (
	"encoding/csv"
	"math"
	"os"
	"strconv"
	"strings"
	"testing"
)

// A row is a line of testdata/allocation.csv.
type row struct {
	id     string
	inputs map[string][]float64
	want   []float64
	tol    float64
	rel    bool
}

func (r row) check(t *testing.T, got ...float64) {
	t.Helper()
	if len(got) != len(r.want) {
		t.Fatalf("%s: %d numbers, wanted %d", r.id, len(got), len(r.want))
	}
	for i, want := range r.want {
		tol := r.tol
		if r.rel {
			tol *= math.Abs(want)
		}
		if !(math.Abs(got[i]-want) <= tol) {
			t.Errorf("%s: got %.13g, want %.13g within %g", r.id, got[i], want, tol)
		}
	}
}

// num is a single number of the inputs.
func (r row) num(t *testing.T, key string) float64 {
	t.Helper()
	if len(r.inputs[key]) != 1 {
		t.Fatalf("%s: no number %q", r.id, key)
	}
	return r.inputs[key][0]
}

// numbers reads a list with blanks; 13/3 is a number too.
func numbers(t *testing.T, text string) []float64 {
	t.Helper()
	var out []float64
	for word := range strings.FieldsSeq(text) {
		over, under, broken := strings.Cut(word, "/")
		v, err := strconv.ParseFloat(over, 64)
		if err != nil {
			t.Fatal(err)
		}
		if broken {
			n, err := strconv.ParseFloat(under, 64)
			if err != nil {
				t.Fatal(err)
			}
			v /= n
		}
		out = append(out, v)
	}
	return out
}

func rows(t *testing.T) []row {
	t.Helper()
	f, err := os.Open("testdata/allocation.csv")
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
		r := row{id: l[0], inputs: map[string][]float64{}, want: numbers(t, l[3]), tol: numbers(t, l[5])[0], rel: l[6] == "rel"}
		for pair := range strings.SplitSeq(l[2], ";") {
			if key, value, ok := strings.Cut(pair, "="); ok {
				r.inputs[key] = numbers(t, value)
			}
		}
		out = append(out, r)
	}
	return out
}

// Every row of the table is known here by its id and compared; one that no test knows fails.
func TestRows(t *testing.T) {
	table := rows(t)
	if len(table) != 13 {
		t.Errorf("%d rows, wanted 13", len(table))
	}
	for _, r := range table {
		switch r.id {
		case "ALL-001", "ALL-002", "ALL-003", "ALL-005":
			r.check(t, Correlation(r.num(t, "xi_deg")))
		case "ALL-006":
			r.check(t, FirstZeroDeg)
		case "ALL-010":
			if beta := r.num(t, "beta"); beta != backgroundSlope {
				t.Errorf("%s: slope %g, and here %g", r.id, beta, backgroundSlope)
			}
			r.check(t, Weak.Gain(Change{Pulsars: 1, Cadence: 1, Noise: 1, Span: r.num(t, "T_ratio")}))
		case "ALL-011":
			r.check(t, Intermediate.Gain(Change{Pulsars: 1, Cadence: 1, Noise: 1, Span: r.num(t, "T_ratio")}))
		case "ALL-012":
			r.check(t, Intermediate.Gain(Change{Pulsars: 1, Cadence: r.num(t, "c_ratio"), Noise: 1, Span: 1}))
		case "ALL-020", "ALL-032":
			r.check(t, share(t, setOf(t, r, 0), r).Hours...)
		case "ALL-021":
			r.check(t, gainOverEqualTime(t, r))
		case "ALL-022": // the least, half an hour each, stands in the row's quantity
			r.check(t, share(t, setOf(t, r, 0.5), r).Hours...)
		case "ALL-030":
			var set []Timed
			for i, sigma := range r.inputs["sigma_us"] {
				set = append(set, Timed{r.inputs["ra_deg"][i], r.inputs["dec_deg"][i], sigma})
			}
			r.check(t, Pair(set).MeritPerUs2)
		default:
			t.Errorf("%s: no test", r.id)
		}
	}
}

// The gain that a row's note tells, where hours are nearly even.
func TestEvenPulsarsWantEvenTime(t *testing.T) {
	for _, r := range rows(t) {
		if r.id == "ALL-032" {
			if gain := gainOverEqualTime(t, r); math.Abs(gain-1.000578) > 1e-6 {
				t.Errorf("%s: gain over equal time %.7f, want 1.000578", r.id, gain)
			}
		}
	}
}

func setOf(t *testing.T, r row, leastH float64) []Pulsar {
	t.Helper()
	var set []Pulsar
	for i, ns := range r.inputs["a_ns_sqrt_h"] {
		set = append(set, Pulsar{HourErrorUs: ns / 1000, FloorUs: r.inputs["floor_ns"][i] / 1000, Weight: 1, LeastH: leastH, MostH: r.num(t, "T_h")})
	}
	return set
}

func share(t *testing.T, set []Pulsar, r row) Division {
	t.Helper()
	d, err := Share(set, r.num(t, "T_h"))
	if err != nil {
		t.Fatalf("%s: %v", r.id, err)
	}
	return d
}

func gainOverEqualTime(t *testing.T, r row) float64 {
	t.Helper()
	set := setOf(t, r, 0)
	equal := make([]float64, len(set))
	for i := range equal {
		equal[i] = r.num(t, "T_h") / float64(len(set))
	}
	return Value(set, share(t, set, r).Hours) / Value(set, equal)
}
