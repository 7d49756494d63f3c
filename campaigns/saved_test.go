package campaigns

import (
	"path"
	"strings"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
	"pgregory.net/rapid"
)

func TestSavedPlanRoundTrip(t *testing.T) {
	name := rapid.StringMatching(`[A-Za-zé"\\][A-Za-z0-9 "\\+-]{0,10}[a-z0-9]`)
	any := rapid.String()
	rapid.Check(t, func(t *rapid.T) {
		minute := rapid.Custom(func(t *rapid.T) time.Time { return time.Unix(60*rapid.Int64Range(0, 6e7).Draw(t, "minute"), 0).UTC() })
		p := &SavedPlan{
			Session: name.Draw(t, "session"), Campaign: any.Draw(t, "campaign"), MadeAt: time.Unix(rapid.Int64Range(0, 4e9).Draw(t, "made"), 0).UTC(),
			Version: any.Draw(t, "version"), GridMin: rapid.IntRange(1, 60).Draw(t, "grid"), Worth: rapid.Float64Range(0, 1e6).Draw(t, "worth"),
			Ceiling: rapid.Float64Range(0, 1e6).Draw(t, "ceiling"), Bars: rapid.SliceOfDistinct(any, func(s string) string { return s }).Draw(t, "bars"),
			Accepted: rapid.SliceOfDistinct(any, func(s string) string { return s }).Draw(t, "accepted"),
		}
		if rapid.Bool().Draw(t, "proved") {
			p.ProvedFor = any.Draw(t, "for")
			if p.ProvedFor != "" && rapid.Bool().Draw(t, "settled") {
				p.ProvedFrom = minute.Draw(t, "from")
			}
		}
		start := minute.Draw(t, "start")
		for range rapid.IntRange(0, 4).Draw(t, "slots") {
			end := start.Add(time.Duration(rapid.IntRange(1, 600).Draw(t, "length")) * time.Minute)
			p.Slots = append(p.Slots, SavedSlot{
				Source: name.Draw(t, "source"), Receiver: name.Draw(t, "receiver"), Start: start, End: end,
				Turn: rapid.IntRange(-3, 3).Draw(t, "turn"), Pinned: rapid.Bool().Draw(t, "pinned"), Note: any.Draw(t, "note"),
			})
			start = end
		}
		text := p.encode()
		got, complaints := decodePlan(string(text), "plan.toml")
		if len(complaints) > 0 {
			t.Fatalf("%v\n%s", complaints, text)
		}
		if diff := cmp.Diff(p, got, cmpopts.EquateEmpty()); diff != "" {
			t.Fatalf("%s\n%s", diff, text)
		}
	})
}

func TestSavedPlanFaults(t *testing.T) {
	sound := string(somePlan("s", "").encode())
	for _, c := range []struct{ from, to, words string }{
		{"grid_min = 1", "grid_min = 0", "plan.toml:7: grid_min: found 0"},
		{"start = 2026-12-08T17:10:00Z", "start = 2026-12-08T17:10:30Z", "whole minutes"},
		{"end = 2026-12-08T17:40:00Z", "end = 2026-12-08T17:00:00Z", "slot 1, end: found"},
		{"pinned = true", "pined = true", `did you mean "pinned"?`},
		{"format = 1", "format = 7", "newer version"},
		{"worth = 3.25", "worth = ", "broken TOML"},
	} {
		text := strings.Replace(sound, c.from, c.to, 1)
		if _, complaints := decodePlan(text, "plan.toml"); len(complaints) != 1 || !strings.Contains(complaints.Error(), c.words) {
			t.Errorf("%s: %v; want %q", c.to, complaints, c.words)
		}
	}
}

func TestPlanFilesStayInTheirFolder(t *testing.T) {
	for session, want := range map[string]string{
		"2026-12-03 night": "plans/2026-12-03 night.toml",
		"../../etc/x":      "plans/%2E.%2F..%2Fetc%2Fx.toml",
		".hidden":          "plans/%2Ehidden.toml",
		`a\b:c%d`:          "plans/a%5Cb%3Ac%25d.toml",
		"Nuit d’été":       "plans/Nuit d%E2%80%99été.toml",
	} {
		if got := planFile(session); got != want {
			t.Errorf("%q: %q, want %q", session, got, want)
		}
	}
	seen := map[string]string{}
	rapid.Check(t, func(t *rapid.T) {
		session := rapid.StringN(1, 80, 320).Draw(t, "session")
		file := planFile(session)
		if path.Dir(file) != "plans" || path.Clean(file) != file || len(path.Base(file)) > 220 || strings.HasPrefix(path.Base(file), ".") {
			t.Fatalf("%q becomes %q", session, file)
		}
		if other, ok := seen[file]; ok && other != session {
			t.Fatalf("%q and %q share %q", session, other, file)
		}
		seen[file] = session
	})
}
