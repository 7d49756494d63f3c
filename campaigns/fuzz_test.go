package campaigns

import (
	"errors"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"testing/fstest"
)

// loadText loads a campaign of one file and checks what must hold whatever the text is.
func loadText(t *testing.T, text []byte) {
	t.Helper()
	c, err := LoadFS(fstest.MapFS{CampaignFile: {Data: text}, "sources/a.toml": {Data: []byte("format = 1\n")}}, "")
	if err == nil {
		checkInvariants(t, c)
		return
	}
	var complaints Complaints
	if !errors.As(err, &complaints) || len(complaints) == 0 || c != nil {
		t.Fatalf("error %v, campaign %v", err, c)
	}
	lines := strings.Count(string(text), "\n") + 1
	last := 0
	for _, p := range complaints {
		if p.Found == "" || p.Accepted == "" || p.Line < 0 || p.Line > lines || p.Line < last || strings.Count(p.Error(), "\n") > strings.Count(p.Hint, "\n")+1 {
			t.Fatalf("%#v after line %d", p, last)
		}
		last = p.Line
	}
}

// checkInvariants checks what the rest of the program relies on in a campaign that was accepted.
func checkInvariants(t *testing.T, c *Campaign) {
	t.Helper()
	receivers := map[string]string{}
	for _, r := range c.Receivers {
		receivers[r.Name] = r.Site
	}
	if c.Name == "" || len(c.Sites) == 0 || len(receivers) != len(c.Receivers) || len(c.Sources) == 0 {
		t.Fatalf("not a campaign: %+v", c)
	}
	for _, s := range c.Sources {
		if s.Name == "" || s.Priority <= 0 || len(s.Aims) == 0 || s.RADeg < 0 || s.RADeg >= 360 {
			t.Fatalf("%+v", s)
		}
		for _, a := range s.Aims {
			if len(a.Receivers) == 0 || (a.Minutes > 0) == (a.ToaUs > 0) || a.MinFraction <= 0 || a.Minutes > 0 && a.MaxMinutes < a.Minutes {
				t.Fatalf("%s: %+v", s.Name, a)
			}
			for _, r := range a.Receivers {
				if _, ok := receivers[r]; !ok {
					t.Fatalf("%s: no receiver %q", s.Name, r)
				}
			}
		}
	}
	for i, s := range c.Sessions {
		if !s.Start.Before(s.End) || s.Start.Second() != 0 || i > 0 && s.Start.Before(c.Sessions[i-1].Start) || len(s.Receivers) == 0 {
			t.Fatalf("%+v", s)
		}
		for k, b := range s.Breaks {
			if !b[0].Before(b[1]) || b[0].Before(s.Start) || b[1].After(s.End) || k > 0 && !b[0].After(s.Breaks[k-1][1]) {
				t.Fatalf("%+v", s)
			}
		}
		for _, r := range s.Receivers {
			if receivers[r] != s.Site {
				t.Fatalf("%s: %q is not at %s", s.Name, r, s.Site)
			}
		}
	}
}

// campaignTexts are the campaign.toml of the test data.
func campaignTexts(t testing.TB) [][]byte {
	t.Helper()
	files, err := filepath.Glob("testdata/broken/*.toml")
	if err != nil {
		t.Fatal(err)
	}
	var texts [][]byte
	for _, f := range append(files, "testdata/small/campaign.toml", "testdata/sample/campaign.toml") {
		text, err := os.ReadFile(f)
		if err != nil {
			t.Fatal(err)
		}
		texts = append(texts, text)
	}
	return texts
}

func FuzzLoad(f *testing.F) {
	for _, text := range campaignTexts(f) {
		f.Add(text)
	}
	f.Fuzz(loadText)
}

func FuzzLogbook(f *testing.F) {
	f.Add(header + line(1) + line(2))
	f.Add(header + line(1) + "2026-01-01T00:00:00Z,2026-01-01T00:30:00Z,Hill,J,L,done,1,,,\"two\nlines, \"\"quoted\"\"\"\r\n" + line(2)[:40])
	f.Add("\uFEFFnote,start_utc,end_utc,site,source,receiver,outcome,quality,snr,toa_us,extra\n,2026-01-01T00:00Z,\x00")
	f.Fuzz(func(t *testing.T, text string) {
		folder := &Folder{name: "x", store: memory{LogbookFile: []byte(text)}, Campaign: &Campaign{}}
		folder.hashed = nil // as another program would
		if _, err := folder.readLogbook(); err != nil {
			t.Fatal(err)
		}
		before := folder.Logbook
		for _, e := range before.Entries {
			if !e.Start.Before(e.End) || e.Quality < 0 || e.Quality > 1 || e.Source == "" || e.Line < 1 {
				t.Fatalf("%+v", e)
			}
		}
		if !strings.HasSuffix(text, before.Torn) {
			t.Fatalf("torn %q is not the end of %q", before.Torn, text)
		}
		// Whatever was there, an entry that is acknowledged is read again, and those before it still are.
		if err := folder.AppendLog([]Entry{someEntry(1)}); err != nil {
			return
		}
		folder.hashed = nil // as another program would
		if _, err := folder.readLogbook(); err != nil {
			t.Fatal(err)
		}
		after := folder.Logbook.Entries
		if len(after) != len(before.Entries)+1 || after[len(after)-1].Note != "entry 1" || folder.Logbook.Torn != "" {
			t.Fatalf("%d entries, then %d: %v", len(before.Entries), len(after), folder.Damage)
		}
		for i, e := range before.Entries {
			if a := after[i]; !a.Start.Equal(e.Start) || a.Source != e.Source || a.Quality != e.Quality || a.Note != e.Note {
				t.Fatalf("entry %d changed from %+v to %+v", i, e, a)
			}
		}
	})
}

func FuzzSavedPlan(f *testing.F) {
	f.Add(string(somePlan("2026-12-08 evening", "a \"note\"").encode()))
	f.Add(string((&SavedPlan{Session: "s"}).encode()))
	f.Fuzz(func(t *testing.T, text string) {
		p, complaints := decodePlan(text, "plan.toml")
		if len(complaints) > 0 {
			return
		}
		// What was accepted can be saved, and says the same then.
		once := p.encode()
		again, complaints := decodePlan(string(once), "plan.toml")
		if len(complaints) > 0 {
			t.Fatalf("%v\n%s", complaints, once)
		}
		if twice := again.encode(); string(twice) != string(once) {
			t.Fatalf("%s\nbecomes\n%s", once, twice)
		}
	})
}

// Every beginning of the files, and every byte of them changed, is read or refused, without a panic.
func TestEveryPrefixAndByteOfACampaign(t *testing.T) {
	text, err := os.ReadFile("testdata/small/campaign.toml")
	if err != nil {
		t.Fatal(err)
	}
	text = fewerSources(text)
	for n := range text {
		loadText(t, text[:n])
	}
	changes := []byte("\x00\"'[]{}=.,#\n-9aZ\xff")
	for n := range text {
		changed := append([]byte(nil), text...)
		changed[n] = changes[n%len(changes)]
		loadText(t, changed)
	}
	plan := string(somePlan("s", "note").encode())
	for n := range plan {
		decodePlan(plan[:n], "")
		for _, c := range changes {
			decodePlan(plan[:n]+string(c)+plan[n+1:], "")
		}
	}
}

// fewerSources leaves out the sources that have nothing but a cadence: the others have every kind of value.
func fewerSources(text []byte) []byte {
	var kept []string
	for _, part := range strings.Split(string(text), "\n\n") {
		if !strings.Contains(part, "[[source]]") || strings.Contains(part, "orbit") || strings.Contains(part, "calibration") {
			kept = append(kept, part)
		}
	}
	return []byte(strings.Join(kept, "\n"))
}

// What would exhaust the parser or the memory is refused.
func TestMonstrousFilesAreRefused(t *testing.T) {
	for name, text := range map[string]string{
		"nesting":     "x = " + strings.Repeat("[", 2<<20),
		"dotted key":  strings.Repeat("a.", 1<<20) + "b = 1",
		"zeros":       strings.Repeat("\x00", 2<<20),
		"too large":   "# " + strings.Repeat("x", largestFile),
		"one line":    "format = 1\nx = \"" + strings.Repeat("y", 2<<20) + "\"",
		"many tables": "format = 1\n" + strings.Repeat("[[site]]\n", 2_000),
	} {
		_, err := LoadFS(fstest.MapFS{CampaignFile: {Data: []byte(text)}}, "")
		if err == nil {
			t.Errorf("%s: accepted", name)
		} else if name != "many tables" && len(err.Error()) > 3000 {
			t.Errorf("%s: a message of %d bytes", name, len(err.Error()))
		}
	}
}
