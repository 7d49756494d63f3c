package campaigns

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"sync"
	"syscall"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
)

// copyOfSmall puts the small campaign into a folder of its own.
func copyOfSmall(t testing.TB) string {
	t.Helper()
	dir := t.TempDir()
	if err := os.CopyFS(dir, os.DirFS("testdata/small")); err != nil {
		t.Fatal(err)
	}
	return dir
}

func mustOpen(t testing.TB, dir string) *Folder {
	t.Helper()
	f, err := Open(dir)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

func somePlan(session, note string) *SavedPlan {
	start := time.Date(2026, 12, 8, 17, 10, 0, 0, time.UTC)
	return &SavedPlan{
		Session: session, Campaign: "Tern Moor trial", MadeAt: time.Date(2026, 12, 8, 12, 0, 5, 0, time.UTC), Version: "0.1", GridMin: 1, Worth: 3.25, Ceiling: 3.5,
		Bars: []string{"J2231-0107"}, Slots: []SavedSlot{{Source: "J0127+4811", Receiver: "L", Start: start, End: start.Add(30 * time.Minute), Turn: -1, Pinned: true, Note: note}},
	}
}

func someEntry(n int) Entry {
	start := time.Date(2026, 12, 8, 17, 10, 0, 0, time.UTC).Add(time.Duration(n) * time.Hour)
	return Entry{Start: start, End: start.Add(30 * time.Minute), Site: "Tern Moor", Source: "J0127+4811", Receiver: "L", Outcome: Done, Quality: 1, Note: fmt.Sprint("entry ", n)}
}

func TestPlansAreKept(t *testing.T) {
	demo, err := OpenDemo()
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range []*Folder{mustOpen(t, copyOfSmall(t)), demo} {
		session := f.Campaign.Sessions[0].Name
		if p, err := f.Plan(session); p != nil || err != nil {
			t.Fatalf("%s: %v, %v; want no plan", f.Name(), p, err)
		}
		for _, note := range []string{"first", "second"} {
			want := somePlan(session, note)
			if err := f.SavePlan(want); err != nil {
				t.Fatal(err)
			}
			got, err := f.Plan(session)
			if diff := cmp.Diff(want, got); diff != "" || err != nil {
				t.Errorf("%s: %v\n%s", f.Name(), err, diff)
			}
		}
	}
}

func TestAPlanThatSomebodyElseChangedIsNotReplaced(t *testing.T) {
	dir := copyOfSmall(t)
	ours, theirs := mustOpen(t, dir), mustOpen(t, dir)
	const session = "2026-12-08 evening"
	file := filepath.Join(dir, "plans", "2026-12-08 evening.toml")

	if err := ours.SavePlan(somePlan(session, "ours")); err != nil {
		t.Fatal(err)
	}
	if err := theirs.SavePlan(somePlan(session, "theirs")); !errors.Is(err, ErrChanged) || !strings.Contains(err.Error(), file) {
		t.Errorf("a plan that was never read is replaced: %v", err)
	}
	// Once it was read it may be replaced, and then the first one may not.
	if _, err := theirs.Plan(session); err != nil {
		t.Fatal(err)
	}
	if err := theirs.SavePlan(somePlan(session, "theirs")); err != nil {
		t.Error(err)
	}
	if err := ours.SavePlan(somePlan(session, "ours again")); !errors.Is(err, ErrChanged) {
		t.Errorf("somebody else's plan is replaced: %v", err)
	}
	p, err := ours.Plan(session)
	if err != nil || p.Slots[0].Note != "theirs" {
		t.Errorf("%v, %v; want theirs", p, err)
	}
	if err := ours.SavePlan(somePlan(session, "ours again")); err != nil {
		t.Error(err)
	}
	// Removed by hand: that is a change as well, but the same content is none.
	if err := os.Remove(file); err != nil {
		t.Fatal(err)
	}
	if err := ours.SavePlan(somePlan(session, "ours")); !errors.Is(err, ErrChanged) {
		t.Errorf("a plan that somebody removed comes back: %v", err)
	}
}

func TestAPlanOfANewerFormatIsLeftAlone(t *testing.T) {
	dir := copyOfSmall(t)
	const session = "2026-12-08 evening"
	file := filepath.Join(dir, "plans", session+".toml")
	newer := "format = 2\nwonder = true\n"
	if err := os.Mkdir(filepath.Dir(file), 0o755); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(file, []byte(newer), 0o644); err != nil {
		t.Fatal(err)
	}
	f := mustOpen(t, dir)
	if _, err := f.Plan(session); err == nil || !strings.Contains(err.Error(), "newer version") {
		t.Errorf("read: %v", err)
	}
	if err := f.SavePlan(somePlan(session, "")); !errors.Is(err, ErrChanged) {
		t.Errorf("saved: %v", err)
	}
	if got, _ := os.ReadFile(file); string(got) != newer {
		t.Errorf("rewritten: %s", got)
	}
}

func TestLinksAndModesSurviveASave(t *testing.T) {
	dir := copyOfSmall(t)
	const session = "2026-12-08 evening"
	elsewhere := filepath.Join(t.TempDir(), "kept.toml")
	file := filepath.Join(dir, "plans", session+".toml")
	f := mustOpen(t, dir)
	if err := f.SavePlan(somePlan(session, "one")); err != nil {
		t.Fatal(err)
	}
	if err := os.Rename(file, elsewhere); err != nil {
		t.Fatal(err)
	}
	if err := os.Symlink(elsewhere, file); err != nil {
		t.Fatal(err)
	}
	if err := os.Chmod(elsewhere, 0o640); err != nil {
		t.Fatal(err)
	}
	if err := f.SavePlan(somePlan(session, "two")); err != nil {
		t.Fatal(err)
	}
	if to, err := os.Readlink(file); err != nil || to != elsewhere {
		t.Errorf("the link leads to %q, %v", to, err)
	}
	info, err := os.Stat(elsewhere)
	if err != nil || info.Mode().Perm() != 0o640 {
		t.Errorf("mode %v, %v; want 0640", info.Mode(), err)
	}
	if text, _ := os.ReadFile(elsewhere); !strings.Contains(string(text), "two") {
		t.Error("not written through the link")
	}
	if err := os.Chmod(elsewhere, 0o440); err != nil {
		t.Fatal(err)
	}
	if err := f.SavePlan(somePlan(session, "three")); !errors.Is(err, fs.ErrPermission) {
		t.Errorf("a read-only file is replaced: %v", err)
	}
}

func TestStraysOfKilledSavesAreRemoved(t *testing.T) {
	dir := copyOfSmall(t)
	f := mustOpen(t, dir)
	const session = "2026-12-08 evening"
	if err := f.SavePlan(somePlan(session, "one")); err != nil {
		t.Fatal(err)
	}
	plans := filepath.Join(dir, "plans")
	for _, name := range []string{".2026-12-08 evening.toml123456", ".2026-12-08 evening.toml.swp", ".other.toml77"} {
		if err := os.WriteFile(filepath.Join(plans, name), nil, 0o644); err != nil {
			t.Fatal(err)
		}
	}
	if err := f.SavePlan(somePlan(session, "two")); err != nil {
		t.Fatal(err)
	}
	var left []string
	entries, _ := os.ReadDir(plans)
	for _, e := range entries {
		left = append(left, e.Name())
	}
	want := []string{".2026-12-08 evening.toml.swp", ".other.toml77", "2026-12-08 evening.toml"}
	if diff := cmp.Diff(want, left); diff != "" {
		t.Error(diff)
	}
}

func TestAppendLog(t *testing.T) {
	dir := copyOfSmall(t)
	file := filepath.Join(dir, LogbookFile)
	before, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	f := mustOpen(t, dir)
	other := mustOpen(t, dir)
	if err := other.AppendLog([]Entry{someEntry(0)}); err != nil {
		t.Fatal(err)
	}
	if err := f.AppendLog([]Entry{someEntry(1), someEntry(2)}); err != nil {
		t.Fatal(err)
	}
	after, _ := os.ReadFile(file)
	if !strings.HasPrefix(string(after), string(before)) || strings.Contains(string(after), "\r") {
		t.Errorf("what was there is not kept as it was:\n%s", after)
	}
	again := mustOpen(t, dir)
	if diff := cmp.Diff(again.Logbook, f.Logbook, ignoreColumns); diff != "" || len(again.Logbook.Entries) != 7 {
		t.Errorf("%d entries; -on disk +kept:\n%s", len(again.Logbook.Entries), diff)
	}
	if err := f.AppendLog([]Entry{someEntry(3), {Source: "J", Outcome: "dnoe"}}); err == nil {
		t.Error("an impossible entry is accepted")
	}
	if unchanged, _ := os.ReadFile(file); string(unchanged) != string(after) {
		t.Error("half of a refused lot was written")
	}
}

func TestAppendBeginsALogbook(t *testing.T) {
	for name, text := range map[string]string{"none": "-", "empty": "", "blank line": "\r\n", "mark": "\uFEFF", "header": strings.TrimSpace(header), "part of a header": "start_utc,end_u"} {
		dir := copyOfSmall(t)
		file := filepath.Join(dir, LogbookFile)
		os.Remove(file)
		if text != "-" {
			if err := os.WriteFile(file, []byte(text), 0o644); err != nil {
				t.Fatal(err)
			}
		}
		f := mustOpen(t, dir)
		for n := range 2 {
			if err := f.AppendLog([]Entry{someEntry(n)}); err != nil {
				t.Fatalf("%s: %v", name, err)
			}
		}
		again := mustOpen(t, dir)
		if diff := cmp.Diff(again.Logbook, f.Logbook, ignoreColumns); diff != "" || len(again.Logbook.Entries) != 2 || len(again.Damage) > 0 {
			t.Errorf("%s: %v, -on disk +kept:\n%s", name, again.Damage, diff)
		}
	}
}

func TestATornEndIsSetAside(t *testing.T) {
	for name, torn := range map[string]string{"cut": "2026-12-01T00:00:00Z,2026-12-01T00:1", "zeros": "2026-12-01T00:00:00Z,2026-12-\x00\x00\x00\x00", "open quote": line(1)[:len(line(1))-1] + ",\"half\na note"} {
		dir := copyOfSmall(t)
		file := filepath.Join(dir, LogbookFile)
		whole, _ := os.ReadFile(file)
		if err := os.WriteFile(file, append(whole, torn...), 0o640); err != nil {
			t.Fatal(err)
		}
		f := mustOpen(t, dir)
		if len(f.Notices) != 1 || !strings.Contains(f.Notices[0], "torn") || f.Logbook.Torn != torn || len(f.Logbook.Entries) != 4 {
			t.Errorf("%s: notices %q, torn %q", name, f.Notices, f.Logbook.Torn)
		}
		if text, _ := os.ReadFile(file); string(text) != string(whole)+torn {
			t.Errorf("%s: opening rewrote the logbook", name)
		}
		if err := f.AppendLog([]Entry{someEntry(1)}); err != nil {
			t.Fatal(err)
		}
		if text, _ := os.ReadFile(filepath.Join(dir, tornFile)); string(text) != torn+"\n" {
			t.Errorf("%s: set aside %q", name, text)
		}
		again := mustOpen(t, dir)
		if len(again.Logbook.Entries) != 5 || len(again.Notices) > 0 {
			t.Errorf("%s: %d entries, notices %q", name, len(again.Logbook.Entries), again.Notices)
		}
		if diff := cmp.Diff(again.Logbook, f.Logbook, ignoreColumns); diff != "" {
			t.Error(diff)
		}
	}
}

func TestALogbookWithOtherColumnsIsContinuedInThem(t *testing.T) {
	dir := copyOfSmall(t)
	text := "\uFEFFobserver,note,toa_us,snr,qualty,outcome,receiver,source,site,end_utc,start_utc,weather\r\n"
	text = strings.Replace(text, "qualty", "quality", 1)
	if err := os.WriteFile(filepath.Join(dir, LogbookFile), []byte(text), 0o644); err != nil {
		t.Fatal(err)
	}
	f := mustOpen(t, dir)
	e := someEntry(1)
	e.Extra = []string{"AB", "rain, wind"}
	if err := f.AppendLog([]Entry{e, someEntry(2)}); err != nil {
		t.Fatal(err)
	}
	got, _ := os.ReadFile(filepath.Join(dir, LogbookFile))
	want := text + "AB,entry 1,,,1,done,L,J0127+4811,Tern Moor,2026-12-08T18:40:00Z,2026-12-08T18:10:00Z,\"rain, wind\"\r\n" +
		",entry 2,,,1,done,L,J0127+4811,Tern Moor,2026-12-08T19:40:00Z,2026-12-08T19:10:00Z,\r\n"
	if diff := cmp.Diff(want, string(got)); diff != "" {
		t.Error(diff)
	}
}

func TestManyAppendAtOnce(t *testing.T) {
	dir := copyOfSmall(t)
	const writers, each = 4, 10
	var done sync.WaitGroup
	failed := make(chan error, writers*each)
	for w := range writers {
		f := mustOpen(t, dir)
		done.Go(func() {
			for n := range each {
				failed <- f.AppendLog([]Entry{someEntry(100*w + n)})
			}
		})
	}
	done.Wait()
	close(failed)
	for err := range failed {
		if err != nil {
			t.Error(err)
		}
	}
	f := mustOpen(t, dir)
	if n := len(f.Logbook.Effective()); n != 4+writers*each || len(f.Damage) > 0 {
		t.Errorf("%d entries, want %d; %v", n, 4+writers*each, f.Damage)
	}
}

func TestStrangersInTheLogbookAreNamed(t *testing.T) {
	dir := copyOfSmall(t)
	f := mustOpen(t, dir)
	e := someEntry(1)
	e.Source = "J0127+4811 "[:9] + "2"
	if err := f.AppendLog([]Entry{e}); err != nil {
		t.Fatal(err)
	}
	got := mustOpen(t, dir).Notices
	if len(got) != 1 || !strings.Contains(got[0], `"J0127+4812"`) || !strings.Contains(got[0], `did you mean "J0127+4811"?`) {
		t.Errorf("%q", got)
	}
}

func TestSaveTo(t *testing.T) {
	demo, err := OpenDemo()
	if err != nil {
		t.Fatal(err)
	}
	session := demo.Campaign.Sessions[0].Name
	if _, err := demo.Plan(session); err != nil {
		t.Fatal(err)
	}
	if err := demo.SavePlan(somePlan(session, "kept")); err != nil {
		t.Fatal(err)
	}
	if err := demo.AppendLog([]Entry{{Start: utc(t, "2026-12-03T20:00:00Z"), End: utc(t, "2026-12-03T20:10:00Z"), Site: demo.Campaign.Sites[0].Name,
		Source: demo.Campaign.Sources[0].Name, Receiver: demo.Campaign.Receivers[0].Name, Outcome: Lost}}); err != nil {
		t.Fatal(err)
	}
	dir := filepath.Join(t.TempDir(), "new", "copy")
	if err := demo.SaveTo(dir); err != nil {
		t.Fatal(err)
	}
	saved := mustOpen(t, dir)
	where := cmpopts.IgnoreFields(Source{}, "File")
	sameZone := cmp.Comparer(func(a, b *time.Location) bool { return a.String() == b.String() })
	if diff := cmp.Diff(demo.Campaign, saved.Campaign, where, sameZone); diff != "" {
		t.Error(diff)
	}
	if diff := cmp.Diff(demo.Logbook, saved.Logbook, ignoreColumns); diff != "" {
		t.Error(diff)
	}
	if p, err := saved.Plan(session); err != nil || p.Slots[0].Note != "kept" {
		t.Errorf("plan %v, %v", p, err)
	}
	if saved.Demo() || saved.Name() != dir {
		t.Errorf("the copy calls itself %q", saved.Name())
	}
	if err := demo.SaveTo(dir); err == nil || !strings.Contains(err.Error(), "not empty") {
		t.Errorf("saved over another campaign: %v", err)
	}
	if err := demo.SaveTo(filepath.Join(dir, CampaignFile)); err == nil {
		t.Error("saved into a file")
	}
}

func TestOpenSaysWhatIsMissing(t *testing.T) {
	empty := t.TempDir()
	if _, err := Open(empty); !errors.Is(err, fs.ErrNotExist) || !strings.Contains(err.Error(), empty+": found no campaign.toml") {
		t.Errorf("empty folder: %v", err)
	}
	if _, err := Open(filepath.Join(empty, "none")); !errors.Is(err, fs.ErrNotExist) {
		t.Errorf("no folder: %v", err)
	}
	if err := os.Mkdir(filepath.Join(empty, CampaignFile), 0o755); err != nil {
		t.Fatal(err)
	}
	if _, err := Open(empty); err == nil || !strings.Contains(err.Error(), "not a file") {
		t.Errorf("a folder of that name: %v", err)
	}
	dir := copyOfSmall(t)
	os.Remove(filepath.Join(dir, LogbookFile))
	if f, err := Open(dir); err != nil || len(f.Logbook.Entries) > 0 || len(f.Notices) > 0 {
		t.Errorf("no logbook is an empty one: %v", err)
	}
	if err := os.Mkdir(filepath.Join(dir, LogbookFile), 0o755); err != nil {
		t.Fatal(err)
	}
	if _, err := Open(dir); err == nil || !strings.Contains(err.Error(), LogbookFile) {
		t.Errorf("an unreadable logbook: %v", err)
	}
}

func TestWhatIsNoFileIsNotWaitedFor(t *testing.T) {
	for _, name := range []string{CampaignFile, LogbookFile} {
		dir := copyOfSmall(t)
		os.Remove(filepath.Join(dir, name))
		if err := syscall.Mkfifo(filepath.Join(dir, name), 0o644); err != nil {
			t.Fatal(err)
		}
		if _, err := Open(dir); err == nil || !strings.Contains(err.Error(), name) {
			t.Errorf("a pipe called %s: %v", name, err)
		}
	}
	dir := copyOfSmall(t)
	if err := os.Truncate(filepath.Join(dir, LogbookFile), largestLogbook+1); err != nil {
		t.Fatal(err)
	}
	if _, err := Open(dir); err == nil || !strings.Contains(err.Error(), "larger than 256 MB") {
		t.Errorf("a monstrous logbook: %v", err)
	}
}

func TestStarter(t *testing.T) {
	for _, now := range []time.Time{utc(t, "2026-12-30T23:59:59Z"), utc(t, "2028-02-27T00:00:00Z"), time.Date(2026, 3, 28, 23, 0, 0, 0, time.FixedZone("", -9*3600))} {
		dir := filepath.Join(t.TempDir(), "mine")
		if err := WriteStarter(dir, now); err != nil {
			t.Fatal(err)
		}
		f := mustOpen(t, dir)
		s, err := f.Campaign.Session("next", now)
		if err != nil || s.Start.Before(now.Add(24*time.Hour)) || s.Start.After(now.Add(72*time.Hour)) || len(f.Notices) > 0 {
			t.Errorf("at %v: session %v, %v, notices %q", now, s, err, f.Notices)
		}
		if err := WriteStarter(dir, now); err == nil || !strings.Contains(err.Error(), "there already") {
			t.Errorf("written twice: %v", err)
		}
	}
	dir := t.TempDir()
	mine := filepath.Join(dir, CampaignFile)
	if err := os.WriteFile(mine, []byte("mine"), 0o644); err != nil {
		t.Fatal(err)
	}
	if err := WriteStarter(dir, time.Now()); err == nil {
		t.Error("written beside another campaign")
	}
	if text, _ := os.ReadFile(mine); string(text) != "mine" {
		t.Error("overwritten")
	}
}

// What the starter only shows, in comments, is as good as the rest: with it a campaign has every kind of aim, air and a gain curve.
func TestWhatTheStarterShowsInComments(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "mine")
	if err := WriteStarter(dir, utc(t, "2026-12-01T12:00:00Z")); err != nil {
		t.Fatal(err)
	}
	file := filepath.Join(dir, CampaignFile)
	text, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	shown := regexp.MustCompile(`(?m)^# (\[\[|[a-z_]+ = )`).ReplaceAll(text, []byte("$1"))
	shown = regexp.MustCompile(`(?m)^include = .*$`).ReplaceAll(shown, nil) // there are no such files
	if err := os.WriteFile(file, shown, 0o644); err != nil {
		t.Fatal(err)
	}
	c := mustOpen(t, dir).Campaign
	if c.Sites[0].Refraction == nil || len(c.Receivers[0].GainCurve) != 3 {
		t.Errorf("air %v, gain curve %v", c.Sites[0].Refraction, c.Receivers[0].GainCurve)
	}
	kinds := map[AimKind]bool{}
	for _, s := range c.Sources {
		for _, a := range s.Aims {
			kinds[a.Kind] = true
		}
	}
	if len(kinds) != len(aimKinds) {
		t.Errorf("kinds of aims shown: %v; there are %v", kinds, aimKinds)
	}
}
