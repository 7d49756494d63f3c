package campaigns

import (
	"bytes"
	"fmt"
	"strings"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
	"pgregory.net/rapid"
)

const header = "start_utc,end_utc,site,source,receiver,outcome,quality,snr,toa_us,note\n"

var ignoreColumns = cmpopts.IgnoreUnexported(Logbook{})

func line(n int) string {
	start := time.Date(2026, 1, 1, 0, 0, 0, 0, time.UTC).Add(time.Duration(n) * time.Hour)
	return fmt.Sprintf("%s,%s,Hill,J%04d+0000,L,done,0.9,12.5,3.25,note %d\n", start.Format(time.RFC3339), start.Add(30*time.Minute).Format(time.RFC3339), n, n)
}

func TestReadLogbook(t *testing.T) {
	text := "start_utc,end_utc,observer,site,source,receiver,outcome,quality,snr,toa_us,note,weather\r\n" +
		"2026-01-01T00:00:00Z,2026-01-01T00:30:00Z,AB,Hill,J1,L,done,1,12.5,0.25,\"said \"\"hello\"\", left\r\nfor home\",rain\r\n" +
		"2026-01-02T00:00Z,2026-01-02T00:30:00.5Z,,Hill,J1,L,lost,,,,,\r\n" +
		"\r\n" +
		"2026-01-03T00:00:00Z,2026-01-03T00:30:00Z,CD,Hill,J2,S,partial,0.5,,,no newline at the end,fog"
	got, complaints := ReadLogbook(strings.NewReader(text), "logbook.csv")
	want := &Logbook{
		Header: strings.Split("start_utc,end_utc,observer,site,source,receiver,outcome,quality,snr,toa_us,note,weather", ","),
		Entries: []Entry{
			{Start: utc(t, "2026-01-01T00:00:00Z"), End: utc(t, "2026-01-01T00:30:00Z"), Site: "Hill", Source: "J1", Receiver: "L", Outcome: Done,
				Quality: 1, SNR: 12.5, ToaUs: 0.25, Note: "said \"hello\", left\r\nfor home", Extra: []string{"AB", "rain"}, Line: 2},
			{Start: utc(t, "2026-01-02T00:00:00Z"), End: utc(t, "2026-01-02T00:30:00.5Z"), Site: "Hill", Source: "J1", Receiver: "L", Outcome: Lost,
				Extra: []string{"", ""}, Line: 4},
			{Start: utc(t, "2026-01-03T00:00:00Z"), End: utc(t, "2026-01-03T00:30:00Z"), Site: "Hill", Source: "J2", Receiver: "S", Outcome: Partial,
				Quality: 0.5, Note: "no newline at the end", Extra: []string{"CD", "fog"}, Line: 6},
		},
	}
	if diff := cmp.Diff(want, got, ignoreColumns); diff != "" || len(complaints) > 0 {
		t.Errorf("%v\n-want +got:\n%s", complaints, diff)
	}
}

func TestDamagedLinesAreNamedAndTheRestIsRead(t *testing.T) {
	for name, c := range map[string]struct{ bad, words string }{
		"time":            {"2026-13-01T00:00:00Z,2026-01-01T00:30:00Z,Hill,J,L,done,1,,,", "start_utc: found \"2026-13-01T00:00:00Z\""},
		"no such day":     {"2026-02-30T00:00:00Z,2026-03-01T00:30:00Z,Hill,J,L,done,1,,,", "start_utc"},
		"local time":      {"2026-01-01T00:00:00+01:00,2026-01-01T00:30:00Z,Hill,J,L,done,1,,,", "accepted: a time in UTC"},
		"leap second":     {"2016-12-31T23:59:60Z,2017-01-01T00:30:00Z,Hill,J,L,done,1,,,", "leap second"},
		"backwards":       {"2026-01-01T01:00:00Z,2026-01-01T00:30:00Z,Hill,J,L,done,1,,,", "end_utc"},
		"outcome":         {"2026-01-01T00:00:00Z,2026-01-01T00:30:00Z,Hill,J,L,dnoe,1,,,", "outcome: found \"dnoe\"; accepted: done, partial or lost"},
		"quality":         {"2026-01-01T00:00:00Z,2026-01-01T00:30:00Z,Hill,J,L,done,90,,,", "quality: found \"90\""},
		"quality missing": {"2026-01-01T00:00:00Z,2026-01-01T00:30:00Z,Hill,J,L,done,,,,", "quality: found \"\""},
		"quality nan":     {"2026-01-01T00:00:00Z,2026-01-01T00:30:00Z,Hill,J,L,done,NaN,,,", "quality"},
		"quality of lost": {"2026-01-01T00:00:00Z,2026-01-01T00:30:00Z,Hill,J,L,lost,0.5,,,", "of what was lost"},
		"snr":             {"2026-01-01T00:00:00Z,2026-01-01T00:30:00Z,Hill,J,L,done,1,0x10,,", "snr"},
		"no source":       {"2026-01-01T00:00:00Z,2026-01-01T00:30:00Z,Hill,,L,done,1,,,", "source"},
		"few columns":     {"2026-01-01T00:00:00Z,2026-01-01T00:30:00Z,Hill,J,L", "columns: found 5; accepted: 10"},
		"many columns":    {"2026-01-01T00:00:00Z,2026-01-01T00:30:00Z,Hill,J,L,done,1,,,note, with comma", "columns: found 11"},
		"open quote":      {"2026-01-01T00:00:00Z,2026-01-01T00:30:00Z,Hill,J,L,done,1,,,\"note", "a quote that is not closed"},
		"quote inside":    {"2026-01-01T00:00:00Z,2026-01-01T00:30:00Z,Hill,J,L,done,1,,,5\" pipe \"", "quote inside a cell"},
		"zero byte":       {"2026-01-01T00:00:00Z,2026-01-01T00:30:00Z,Hill,J\x00,L,done,1,,,", "zero bytes"},
		"not UTF-8":       {"2026-01-01T00:00:00Z,2026-01-01T00:30:00Z,Hill,J\xff,L,done,1,,,", "not UTF-8"},
		"long":            {"2026-01-01T00:00:00Z,2026-01-01T00:30:00Z,Hill,J,L,done,1,,," + strings.Repeat("x", longestLine), "at most 65536"},
		"words":           {"the wind was strong", "columns: found 1"},
	} {
		t.Run(name, func(t *testing.T) {
			book, complaints := ReadLogbook(strings.NewReader(header+line(1)+c.bad+"\n"+line(2)+line(3)), "logbook.csv")
			if len(complaints) != 1 || complaints[0].Line != 3 || !strings.Contains(complaints[0].Error(), c.words) {
				t.Errorf("complaints %v; want one of line 3 that says %q", complaints, c.words)
			}
			if len(book.Entries) != 3 || book.Entries[1].Note != "note 2" || book.Entries[1].Line != 4 || book.Torn != "" {
				t.Errorf("the rest is not read: %+v", book)
			}
		})
	}
}

func TestHeaders(t *testing.T) {
	for name, c := range map[string]struct {
		header, words string
		complaints    int
	}{
		"other order": {"note,toa_us,snr,quality,outcome,receiver,source,site,end_utc,start_utc\n", "", 0},
		"misspelt":    {"start_utc,end_utc,site,source,receiver,outcome,qualty,snr,toa_us,note\n", `quality: found "qualty" in its place`, 1},
		"missing":     {"", "found an entry; accepted: the header", 1},
		"damaged":     {"start_utc,end\x00utc,site,source,receiver,outcome,quality,snr,toa_us,note\n", "damaged header", 1},
		"open quote":  {"start_utc,\"end_utc,site,source,receiver,outcome,quality,snr,toa_us,note\n", "damaged header", 1},
		"one column":  {"start_utc;end_utc;site;source;receiver;outcome;quality;snr;toa_us;note\n", "damaged header", 1},
		"twice":       {"start_utc,end_utc,site,source,receiver,outcome,quality,snr,toa_us,note,note\n", "the column twice", 1},
	} {
		t.Run(name, func(t *testing.T) {
			entry := line(1)
			switch name {
			case "other order":
				cells := strings.Split(strings.TrimSpace(entry), ",")
				for i, j := 0, len(cells)-1; i < j; i, j = i+1, j-1 {
					cells[i], cells[j] = cells[j], cells[i]
				}
				entry = strings.Join(cells, ",") + "\n"
			case "twice":
				entry = strings.TrimSpace(entry) + ",x\n"
			}
			book, complaints := ReadLogbook(strings.NewReader(c.header+entry+entry), "logbook.csv")
			if len(complaints) != c.complaints || !strings.Contains(complaints.Error(), c.words) {
				t.Errorf("complaints %v; want %q", complaints, c.words)
			}
			if len(book.Entries) != 2 || book.Entries[0].Source != "J0001+0000" || book.Entries[0].ToaUs != 3.25 {
				t.Errorf("entries %+v", book.Entries)
			}
		})
	}
}

// Whatever a save that was cut short leaves, the entries before it are there and nothing is invented.
func TestEveryPrefixOfALogbook(t *testing.T) {
	lines := []string{header, line(1), "2026-02-01T00:00:00Z,2026-02-01T00:30:00Z,Hill,J,L,done,1,,,\"two\nlines\"\n", line(2), line(3)}
	whole := strings.Join(lines, "")
	all, _ := ReadLogbook(strings.NewReader(whole), "")
	if len(all.Entries) != 4 {
		t.Fatal(all.Entries)
	}
	for n := range len(whole) + 1 {
		complete, rest := 0, whole[:n]
		for complete < len(lines) && strings.HasPrefix(rest, lines[complete]) {
			rest = rest[len(lines[complete]):]
			complete++
		}
		book, complaints := ReadLogbook(strings.NewReader(whole[:n]), "")
		if len(complaints) > 0 {
			t.Fatalf("%q: %v", whole[:n], complaints)
		}
		got := len(book.Entries)
		switch want := max(0, complete-1); {
		case got == want && (rest == book.Torn || complete == 0 && book.Torn == ""): // the rest is set apart, or is the header
		case got == want+1 && book.Torn == "" && rest != "": // the rest reads as a whole entry without its newline
		default:
			t.Fatalf("%q: %d entries and torn %q; want %d and %q", whole[:n], got, book.Torn, want, rest)
		}
		for i, e := range book.Entries[:max(0, complete-1)] {
			if diff := cmp.Diff(all.Entries[i], e); diff != "" {
				t.Fatalf("%q: entry %d changed: %s", whole[:n], i, diff)
			}
		}
		// Zero bytes after it, as some file systems leave them when the power goes.
		zeros, complaints := ReadLogbook(strings.NewReader(whole[:n]+strings.Repeat("\x00", 7)), "")
		if n >= len(header) && (len(complaints) > 0 || len(zeros.Entries) != max(0, complete-1) || !strings.HasSuffix(zeros.Torn, "\x00")) {
			t.Fatalf("%q and zeros: %v, %+v", whole[:n], complaints, zeros)
		}
	}
}

// A changed byte costs at most the line it stands on, or two when it was the newline between them.
func TestEachByteChanged(t *testing.T) {
	var lines []string
	for n := range 5 {
		lines = append(lines, line(n))
	}
	whole := header + strings.Join(lines, "")
	for at := range len(whole) {
		for _, c := range []byte{0, '"', ',', '\n', '\r', 'x', 0xff, '0'} {
			text := []byte(whole)
			if text[at] == c {
				continue
			}
			text[at] = c
			book, complaints := ReadLogbook(bytes.NewReader(text), "")
			lost := 1
			if whole[at] == '\n' {
				lost = 2
			}
			if len(book.Entries) < 5-lost {
				t.Fatalf("byte %d made %q: %d entries, %v, torn %q", at, c, len(book.Entries), complaints, book.Torn)
			}
			if len(book.Entries) < 5 && len(complaints) == 0 && book.Torn == "" {
				t.Fatalf("byte %d made %q: an entry vanished unsaid", at, c)
			}
		}
	}
}

func TestRefusesWhatIsNoLogbook(t *testing.T) {
	for name, text := range map[string]string{
		"zeros":     strings.Repeat("\x00", 10<<20),
		"long line": header + strings.Repeat("x", 10<<20) + "\n",
	} {
		book, complaints := ReadLogbook(strings.NewReader(text), name)
		if len(complaints) == 0 || len(book.Entries) > 0 || len(complaints.Error()) > 1000 {
			t.Errorf("%s: %d entries, %d complaints", name, len(book.Entries), len(complaints))
		}
	}
	book, complaints := ReadLogbook(strings.NewReader(header+strings.Repeat("x\n", 100_000)), "")
	if len(complaints) != mostComplaints+1 || !strings.Contains(complaints[mostComplaints].Found, fmt.Sprint(99_999-mostComplaints)) || book.Torn != "x\n" {
		t.Errorf("%d complaints, the last: %v", len(complaints), complaints[len(complaints)-1])
	}
}

func TestEffective(t *testing.T) {
	entry := func(start string, source, receiver string, o Outcome, note string) Entry {
		s := utc(t, start)
		return Entry{Start: s, End: s.Add(time.Hour), Site: "Hill", Source: source, Receiver: receiver, Outcome: o, Note: note}
	}
	book := &Logbook{Entries: []Entry{
		entry("2026-01-03T00:00:00Z", "A", "L", Done, "third"),
		entry("2026-01-01T00:00:00Z", "A", "L", Done, "wrong"),
		entry("2026-01-01T00:00:00Z", "A", "S", Done, "other receiver"),
		entry("2026-01-01T00:00:00Z", "A", "L", Partial, "still wrong"),
		entry("2026-01-01T00:00:00Z", "B", "L", Done, "other source"),
		entry("2026-01-01T00:00:00Z", "A", "L", Lost, "corrected"),
	}}
	var got []string
	for _, e := range book.Effective() {
		got = append(got, e.Note)
	}
	if diff := cmp.Diff([]string{"corrected", "other receiver", "other source", "third"}, got); diff != "" {
		t.Error(diff)
	}
	if len(book.Entries) != 6 || book.Entries[1].Note != "wrong" {
		t.Error("the book itself was changed")
	}
}

// drawEntry draws an entry that may be written.
func drawEntry(t *rapid.T) Entry {
	name := rapid.StringMatching(`[A-Za-zé][A-Za-z0-9 ,"+-]{0,10}[a-z0-9]`)
	start := time.Unix(rapid.Int64Range(0, 4e9).Draw(t, "start"), 0).UTC()
	e := Entry{
		Start: start, End: start.Add(time.Duration(rapid.IntRange(1, 172800).Draw(t, "seconds")) * time.Second),
		Site: name.Draw(t, "site"), Source: name.Draw(t, "source"), Receiver: name.Draw(t, "receiver"),
		Outcome: rapid.SampledFrom([]Outcome{Done, Partial, Lost}).Draw(t, "outcome"),
		SNR:     rapid.Float64Range(0, 1e6).Draw(t, "snr"), ToaUs: rapid.Float64Range(0, 1e6).Draw(t, "toa"),
		Note: rapid.StringMatching(`[ -~é\n]{0,30}`).Draw(t, "note"),
	}
	if e.Outcome != Lost {
		e.Quality = rapid.Float64Range(0, 1).Draw(t, "quality")
	}
	return e
}

func TestLogbookRoundTrip(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		want := rapid.SliceOfN(rapid.Custom(drawEntry), 1, 5).Draw(t, "entries")
		folder := &Folder{name: "x", store: memory{}, Campaign: &Campaign{}}
		half := rapid.IntRange(0, len(want)).Draw(t, "half")
		for _, part := range [][]Entry{want[:half], want[half:]} {
			if err := folder.AppendLog(part); err != nil {
				t.Fatal(err)
			}
		}
		kept := folder.Logbook
		folder.hashed = nil // as another program would
		if _, err := folder.readLogbook(); err != nil || len(folder.Damage) > 0 {
			t.Fatal(err, folder.Damage)
		}
		ignoreLine := cmpopts.IgnoreFields(Entry{}, "Line")
		if diff := cmp.Diff(want, folder.Logbook.Entries, ignoreLine); diff != "" {
			t.Fatalf("-written +read:\n%s", diff)
		}
		if diff := cmp.Diff(kept.Entries, folder.Logbook.Entries); diff != "" {
			t.Fatalf("what AppendLog keeps is not what it wrote: -kept +read:\n%s", diff)
		}
	})
}
