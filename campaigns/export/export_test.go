package export

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"flag"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"example.org/tallystick/campaigns"
)

var update = flag.Bool("update", false, "rewrite the golden files")

func at(text string) time.Time {
	t, err := time.Parse(time.RFC3339, text)
	if err != nil {
		panic(err)
	}
	return t
}

// sample is an invented session with everything a sheet can show: a break, a date line, a pin, a
// note, an orbit, an unknown S/N, a slot that breaks a limit, and names that are hard to write.
func sample() Sheet {
	p1, p2 := 0.9581, 0.0412
	site := campaigns.Site{
		Name: "Alder Flat", LatitudeDeg: 38.21, LongitudeDeg: -4.63, HeightM: 812, TimeZone: time.FixedZone("UTC+1", 3600),
		ElevationLimitsDeg: [2]float64{8, 87}, AzimuthTravelDeg: [2]float64{-270, 270}, SunLimitDeg: 5, Mount: campaigns.AltAz,
	}
	return Sheet{
		Campaign: "Alder Flat millisecond watch", Site: site,
		Session: campaigns.Session{
			Name: "2026-12-03 night", Site: site.Name, Start: at("2026-12-03T22:00:00Z"), End: at("2026-12-04T02:00:00Z"),
			Receivers: []string{"L", "S"}, SlotOverheadMin: 1.5,
			Breaks: [][2]time.Time{{at("2026-12-03T23:00:00Z"), at("2026-12-03T23:20:00Z")}, {at("2026-12-04T01:30:00Z"), at("2026-12-04T01:40:00Z")}},
		},
		Receivers: []campaigns.Receiver{{Name: "L", BandMHz: [2]float64{1210, 1510}, ChangeMin: 6}, {Name: "S", BandMHz: [2]float64{2200, 2900}, ChangeMin: 4}},
		Rows: []campaigns.SlotRow{
			{Slot: 1, Source: "J0214+3322", Receiver: "L", Start: at("2026-12-03T22:02:00Z"), End: at("2026-12-03T22:27:00Z"), RADeg: 33.53255, DecDeg: 33.3695667,
				AzStartDeg: 172.51, ElStartDeg: 84.93, AzEndDeg: 262.2, ElEndDeg: 83.1, LSTStartH: 2.5501, LSTEndH: 2.9679, HAStartH: 0.1, HAEndH: 0.52,
				PhaseStart: &p1, PhaseEnd: &p2, SNR: 214.3, ToaUs: 0.613, Worth: 1.25, OverheadSec: 90, WaitSec: 30},
			{Slot: 2, Source: "Cañón \"B\"", Receiver: "S", Start: at("2026-12-03T22:40:00Z"), End: at("2026-12-03T23:00:00Z"), RADeg: 1, DecDeg: -0.0000001,
				AzStartDeg: -190, ElStartDeg: 40, AzEndDeg: -184.04, ElEndDeg: 44, Turn: -1, LSTStartH: 3.18, LSTEndH: 3.5, Worth: 0.5, Pinned: true,
				Note: "=needs the \"new\" diode,\nask before 22:30", MoveSec: 240, OverheadSec: 90, WaitSec: 450},
			{Slot: 3, Source: "J1234−5678 in a cluster with a long name", Receiver: "S", Start: at("2026-12-04T00:05:00Z"), End: at("2026-12-04T00:35:00Z"), RADeg: 188.5, DecDeg: -56.78,
				AzStartDeg: 359.96, ElStartDeg: 9, AzEndDeg: 365, ElEndDeg: 7.5, LSTStartH: 23.99999, LSTEndH: 0.5, Worth: 2, MoveSec: 95, OverheadSec: 90,
				Breaches: []string{"elevation 7.5° at 00:35, below the limit of 8°"}},
		},
		LeftOut: []LeftOut{{"J0001+0001", "L", "not due: debt 0.12"}},
		MadeAt:  at("2026-12-01T12:00:00Z"), Version: "v0.1.0 (abc1234)", Worth: 3.75, Ceiling: 3.8, HasCeiling: true, GridMin: 1, Rounds: 40, LSTStartH: 2.5167, LSTEndH: 6.5276,
		SourceCount: 46, Entries: 812, Missing: []string{"C Bright with L"},
	}
}

func golden(t *testing.T, name string, got []byte) {
	t.Helper()
	path := filepath.Join("testdata", name)
	if *update {
		if err := os.WriteFile(path, got, 0o644); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if diff := cmp.Diff(string(want), string(got)); diff != "" {
		t.Errorf("%s (run with -update to accept):\n%s", name, diff)
	}
}

func written(t testing.TB, name string, s Sheet) []byte {
	t.Helper()
	var b bytes.Buffer
	if err := Write(&b, name, s); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

func TestGolden(t *testing.T) {
	names, _ := Formats()
	for _, name := range names {
		golden(t, "sample."+name, written(t, name, sample()))
	}
}

func TestEveryFormatIsAdvisoryAndSaysWhatItIs(t *testing.T) {
	for _, name := range []string{"text", "json"} {
		got := strings.Join(strings.Fields(string(written(t, name, sample()))), " ")
		for _, want := range []string{"advisory", "interlocks", "Alder Flat millisecond watch", "2026-12-03 night", "Alder Flat", "v0.1.0 (abc1234)", "2026-12-01"} {
			if !strings.Contains(got, want) {
				t.Errorf("%s does not say %q", name, want)
			}
		}
	}
}

func TestUnknownFormatNamesThoseThatAre(t *testing.T) {
	err := Write(&bytes.Buffer{}, "pdf", sample())
	if err == nil || !strings.Contains(err.Error(), "text, csv, json") {
		t.Errorf("got %v", err)
	}
}

// Whatever the names, notes and lengths: 80 columns of printable ASCII, pages of at most 60 lines,
// every slot whole on one page and every page with its number.
func TestTextFitsPaper(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := sample()
		word := rapid.String()
		s.Campaign, s.Session.Name = word.Draw(t, "campaign"), word.Draw(t, "session")
		n := rapid.IntRange(0, 60).Draw(t, "slots")
		row := s.Rows[0]
		s.Rows = nil
		for i := range n {
			r := row
			r.Slot = i + 1
			r.Source = word.Draw(t, "source")
			r.Note = rapid.StringN(0, 300, 900).Draw(t, "note")
			r.Start, r.End = r.Start.Add(time.Duration(i)*30*time.Minute), r.End.Add(time.Duration(i)*30*time.Minute)
			s.Rows = append(s.Rows, r)
		}
		var b bytes.Buffer
		if err := Text(&b, s); err != nil {
			t.Fatal(err)
		}
		pages := strings.Split(b.String(), "\f")
		for i, page := range pages {
			lines := strings.Split(strings.TrimSuffix(page, "\n"), "\n")
			if len(lines) > pageLines {
				t.Fatalf("page %d has %d lines", i+1, len(lines))
			}
			for _, line := range lines {
				if len(line) > sheetColumns || strings.TrimRight(line, " ") != line {
					t.Fatalf("%d columns, or blanks at the end: %q", len(line), line)
				}
				for _, c := range []byte(line) {
					if c < ' ' || c > '~' {
						t.Fatalf("not printable ASCII: %q", line)
					}
				}
			}
			if strings.Count(page, " from  ") != strings.Count(page, " to    ") {
				t.Fatalf("a slot is divided on page %d", i+1)
			}
		}
		if got := strings.Count(b.String(), " from  "); got != n {
			t.Fatalf("%d of %d slots are on the sheet", got, n)
		}
	})
}

// RFC 4180: CRLF ends every line, no bare CR or LF, and a strict reader gives the cells back.
func TestCSVReadsBack(t *testing.T) {
	data := written(t, "csv", sample())
	if n := bytes.Count(data, []byte("\n")); n != bytes.Count(data, []byte("\r\n")) || n != 4 {
		t.Errorf("%d LF, %d CRLF, want 4 of each", n, bytes.Count(data, []byte("\r\n")))
	}
	r := csv.NewReader(bytes.NewReader(data))
	r.FieldsPerRecord = len(Columns)
	rows, err := r.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	if diff := cmp.Diff(Columns, rows[0]); diff != "" {
		t.Error(diff)
	}
	want := [][]string{
		{"2026-12-03 night", "Alder Flat", "1", "J0214+3322", "L", "2026-12-03T22:02:00Z", "2026-12-03T22:27:00Z", "33.532550", "33.369567",
			"172.510", "84.930", "262.200", "83.100", "2.55010", "2.96790", "0.9581", "0.0412", "214.3", "0.613", "1.250000", "false", ""},
		{"2026-12-03 night", "Alder Flat", "2", "Cañón \"B\"", "S", "2026-12-03T22:40:00Z", "2026-12-03T23:00:00Z", "1.000000", "0.000000",
			"-190.000", "40.000", "-184.040", "44.000", "3.18000", "3.50000", "", "", "", "", "0.500000", "true", " =needs the \"new\" diode, ask before 22:30"},
	}
	if diff := cmp.Diff(want, rows[1:3]); diff != "" {
		t.Error(diff)
	}
}

// Another program's strict reader must see the same cells, and must refuse a broken file.
func TestCSVInPython(t *testing.T) {
	python, err := exec.LookPath("python3")
	if err != nil {
		t.Log("no python3 here: the reading by another program is left out")
		return
	}
	const script = `
import csv, json, sys
print(json.dumps(list(csv.reader(open(sys.argv[1], newline="", encoding="utf-8"), strict=True))))`
	dir := t.TempDir()
	read := func(name string, data []byte) ([]byte, error) {
		path := filepath.Join(dir, name)
		if err := os.WriteFile(path, data, 0o600); err != nil {
			t.Fatal(err)
		}
		return exec.Command(python, "-c", script, path).Output()
	}
	data := written(t, "csv", sample())
	out, err := read("good.csv", data)
	if err != nil {
		t.Fatal(err)
	}
	var got [][]string
	if err := json.Unmarshal(out, &got); err != nil {
		t.Fatal(err)
	}
	want, err := csv.NewReader(bytes.NewReader(data)).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	if diff := cmp.Diff(want, got); diff != "" {
		t.Error(diff)
	}
	if _, err := read("broken.csv", append(data, `"never closed`...)); err == nil {
		t.Error("a file with an open quotation mark was accepted: the check checks nothing")
	}
}

// No cell may be taken for a formula by a spreadsheet; a reader that trims blanks has the text back.
func TestCellIsNoFormula(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		text := rapid.String().Draw(t, "text")
		got := cell(text)
		if got != "" && strings.ContainsRune("=@+-\t", rune(got[0])) {
			t.Fatalf("%q begins like a formula", got)
		}
		if strings.Join(strings.Fields(got), " ") != strings.Join(strings.Fields(text), " ") {
			t.Fatalf("%q became %q", text, got)
		}
	})
}

func TestNoMinusBeforeZero(t *testing.T) {
	for x, want := range map[float64]string{-0.00001: "0.000", 0: "0.000", -0.0005: "-0.001", -12.3456: "-12.346", 359.9996: "360.000"} {
		if got := fixed(x, 3); got != want {
			t.Errorf("fixed(%v) = %q, want %q", x, got, want)
		}
	}
}

// A shorter reader of the JSON must find what scripts rely on at the top level.
func TestJSONTopLevel(t *testing.T) {
	type top struct {
		Format  int      `json:"format"`
		Worth   float64  `json:"worth"`
		Ceiling *float64 `json:"ceiling"`
		GridMin int      `json:"grid_min"`
		Slots   []struct {
			Source string   `json:"source"`
			Phase  *float64 `json:"orbital_phase_start"`
		} `json:"slots"`
	}
	read := func(s Sheet) (got top) {
		if err := json.Unmarshal(written(t, "json", s), &got); err != nil {
			t.Fatal(err)
		}
		return got
	}
	s := sample()
	if got := read(s); got.Worth != 3.75 || got.Ceiling == nil || *got.Ceiling != 3.8 || got.GridMin != 1 || got.Format != JSONFormat || len(got.Slots) != 3 || got.Slots[0].Phase == nil || got.Slots[1].Phase != nil {
		t.Errorf("got %+v", got)
	}
	s.HasCeiling = false
	if got := read(s); got.Ceiling != nil {
		t.Errorf("no ceiling must be null, got %v", *got.Ceiling)
	}
}
