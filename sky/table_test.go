package sky

import (
	"bufio"
	"encoding/csv"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"
	"time"
)

// row is one line of a table of outside values; columns are asked for by name.
type row struct {
	t      *testing.T
	header []string
	cells  []string
}

func (r row) text(column string) string {
	r.t.Helper()
	i := slices.Index(r.header, column)
	if i < 0 {
		r.t.Fatalf("no column %q among %q", column, r.header)
	}
	return r.cells[i]
}

func (r row) number(column string) float64 {
	r.t.Helper()
	v, err := strconv.ParseFloat(r.text(column), 64)
	if err != nil {
		r.t.Fatal(err)
	}
	return v
}

func (r row) instant(column string) time.Time {
	r.t.Helper()
	return instant(r.t, r.text(column))
}

func instant(t *testing.T, s string) time.Time {
	t.Helper()
	at, err := time.Parse(time.RFC3339Nano, s)
	if err != nil {
		t.Fatal(err)
	}
	return at
}

func (r row) site() *Site {
	r.t.Helper()
	s, err := NewSite(r.number("lat_deg"), r.number("lon_deg"), r.number("height_m"), 0)
	if err != nil {
		r.t.Fatal(err)
	}
	return s
}

// table reads a file of testdata: lines that start with # are comments, then a header, then rows.
func table(t *testing.T, name string, wantRows int) []row {
	t.Helper()
	b, err := os.ReadFile(filepath.Join("testdata", name))
	if err != nil {
		t.Fatal(err)
	}
	r := csv.NewReader(bufio.NewReader(strings.NewReader(string(b))))
	r.Comment = '#'
	r.FieldsPerRecord = -1
	r.LazyQuotes = true
	lines, err := r.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	var rows []row
	for _, l := range lines[1:] {
		rows = append(rows, row{t, lines[0], l})
	}
	if len(rows) != wantRows {
		t.Fatalf("%s: %d rows, want %d", name, len(rows), wantRows)
	}
	return rows
}

func mustFrame(t testing.TB, at time.Time) *Frame {
	t.Helper()
	f, err := NewFrame(at)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// errors is a list of sizes of errors of which the greatest and the median are judged.
type errs []float64

func (e errs) judge(t *testing.T, what, unit string, most, median float64) {
	t.Helper()
	slices.Sort(e)
	worst, mid := e[len(e)-1], e[len(e)/2]
	t.Logf("%s: most %.4g %s, median %.4g %s, %d values", what, worst, unit, mid, unit, len(e))
	if worst > most || mid > median {
		t.Errorf("%s: most %.4g, median %.4g %s; promised %g and %g", what, worst, mid, unit, most, median)
	}
}

// separationDeg is the angle between two places of one frame at its instant.
func separationDeg(a, b Place) float64 { return between(a.at, b.at) * degPerRad }

// liftedBy is by how much the air has lifted what is seen at an elevation, in degrees: the way back to where it stands.
func liftedBy(air *Refraction, elDeg float64) float64 {
	return elDeg - air.trueElevation(elDeg*radPerDeg)*degPerRad
}

// raDec returns a place's right ascension (0 to 360) and declination in degrees, true equator and equinox of date.
func (f *Frame) raDec(p Place, at time.Time) (raDeg, decDeg float64) {
	v := p.vector(f.days(at))
	return mod(math.Atan2(v[1], v[0])*degPerRad, 360), math.Atan2(v[2], math.Hypot(v[0], v[1])) * degPerRad
}

// barycentricMJD returns the TDB date, as MJD, at which a signal that reaches the Earth's centre at a UTC instant passes the
// barycentre of the solar system.
func (f *Frame) barycentricMJD(t Target, at time.Time) float64 {
	mjd := MJD(at)
	return mjd + (TTMinusUTCSec(at)+TDBMinusTTSec(mjd)+f.RoemerSecAt(t, at))/secondsPerDay
}
