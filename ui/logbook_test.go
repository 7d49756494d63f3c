package ui

import (
	"errors"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	tea "github.com/charmbracelet/bubbletea"
	"github.com/muesli/termenv"

	"example.org/tallystick/campaigns"
)

// after is the morning after the session of the test campaign.
var after = time.Date(2026, 12, 4, 6, 0, 0, 0, time.UTC)

// logged opens the drawn plan the morning after, in the logbook.
func logged(t *testing.T) *harness {
	t.Helper()
	h := drawn(t)
	h.world.now = after
	h.cfg.Now = func() time.Time { return after }
	h.keys("5")
	return h
}

// lines are the lines of the logbook's file.
func lines(t *testing.T, h *harness) []string {
	t.Helper()
	data, err := os.ReadFile(filepath.Join(h.world.folder.Name(), campaigns.LogbookFile))
	if err != nil {
		t.Fatal(err)
	}
	return strings.Split(strings.TrimSpace(string(data)), "\n")
}

func TestRecordInTwoKeysEach(t *testing.T) {
	h := logged(t)
	before := len(lines(t, h))
	h.shows("0 of 6 slots recorded")
	h.keys("d", "enter", "p", "enter", "f", "enter")
	h.shows("3 of 6 slots recorded")
	got := lines(t, h)[before:]
	for i, want := range []string{
		"2026-12-03T18:02:00Z,2026-12-03T18:30:00Z,Example Hill,J0018+5210,S,done,1,",
		"2026-12-03T18:38:00Z,2026-12-03T19:38:00Z,Example Hill,J2216+3344,L,partial,0.5,",
		"2026-12-03T19:42:00Z,2026-12-03T20:30:00Z,Example Hill,J0018+5210,L,lost,0,",
	} {
		if i >= len(got) || !strings.HasPrefix(got[i], want) {
			t.Errorf("line %d of %q, wanted %q", i, got, want)
		}
	}
	if at := h.views[4].(*logbook).list.at; at != 3 {
		t.Errorf("the cursor is on row %d, wanted the next slot that is not recorded", at)
	}
}

func TestRecordWhatWasMeasured(t *testing.T) {
	h := logged(t)
	h.keys("p", "ctrl+u", "type:0.7", "tab", "type:31.5", "tab", "type:2.25", "tab", "type:gusts, \"wind\"", "enter")
	last := lines(t, h)
	if want := `J0018+5210,S,partial,0.7,31.5,2.25,"gusts, ""wind"""`; !strings.Contains(last[len(last)-1], want) {
		t.Errorf("%q, wanted %q in it", last[len(last)-1], want)
	}
	h.keys("home")
	h.shows("gusts")
	h.keys("enter")
	h.shows("S/N 31.5, TOA error 2.25 us")
}

func TestRecordAllAtOnce(t *testing.T) {
	h := logged(t)
	before := len(lines(t, h))
	h.keys("f", "enter", "A")
	h.shows("5 slots of session")
	h.keys("A", "enter") // neither the key that asked nor Enter answers
	if n := len(lines(t, h)) - before; n != 1 {
		t.Fatalf("%d lines before the answer", n)
	}
	h.keys("y")
	h.shows("6 of 6 slots recorded")
	if n := len(lines(t, h)) - before; n != 6 {
		t.Errorf("%d lines, wanted 6", n)
	}
	h.keys("A")
	h.shows("every slot shown is recorded")
}

// During the session only what is over is recorded at once.
func TestRecordAllWhileUnderWay(t *testing.T) {
	h := logged(t)
	h.world.now = time.Date(2026, 12, 3, 19, 50, 0, 0, time.UTC)
	h.cfg.Now = func() time.Time { return h.world.now }
	h.keys("A")
	h.shows("2 slots of session")
	h.keys("y")
	h.shows("2 of 6 slots recorded")
}

// A slip is put right by a later line; the earlier one stays, and the details tell of it.
func TestCorrectByALaterLine(t *testing.T) {
	h := logged(t)
	before := len(lines(t, h))
	h.keys("d", "enter", "home", "f")
	h.shows("Correct as lost")
	h.shows("the line before stays in the file")
	h.keys("enter")
	if n := len(lines(t, h)) - before; n != 2 {
		t.Fatalf("%d lines, wanted both", n)
	}
	h.keys("home")
	h.shows("corrected: was done, quality 1.00")
	h.shows("1 of 6 slots recorded")
	h.keys("z")
	h.shows("there before: done, quality 1.00")
	h.keys("y")
	all := lines(t, h)
	if len(all)-before != 3 || !strings.Contains(all[len(all)-1], ",done,1,") {
		t.Errorf("%q", all[before:])
	}
	h.keys("z", "y")
	all = lines(t, h)
	if len(all)-before != 4 || !strings.Contains(all[len(all)-1], ",lost,0,,,recorded by mistake") {
		t.Errorf("%q", all[before:])
	}
	h.keys("z")
	h.shows("nothing was recorded in this run")
}

// Wrong figures are told in the form, and nothing is written.
func TestWrongFiguresStayInTheForm(t *testing.T) {
	h := logged(t)
	before := len(lines(t, h))
	h.keys("d", "ctrl+u", "type:1.5", "enter")
	h.shows("accepted: a number from 0 to 1")
	h.keys("ctrl+u", "type:x", "enter")
	h.shows(`quality: found "x"`)
	h.keys("ctrl+u", "type:1", "up", "up", "ctrl+u", "type:soon", "enter")
	h.shows("accepted: UTC as")
	if n := len(lines(t, h)) - before; n != 0 {
		t.Errorf("%d lines were written", n)
	}
	h.keys("esc")
	h.shows("0 of 6 slots recorded")
}

func TestFilterTheLogbook(t *testing.T) {
	h := logged(t)
	h.keys("/", "type:2026-11-18 j2216", "enter")
	h.shows("1 of 6 entries")
	h.shows("wind above")
	if strings.Contains(h.screen(), "J0512") {
		t.Error("another source is shown")
	}
	h.keys("esc")
	h.shows("0 of 6 slots recorded")
}

// failing refuses to write.
func TestNothingIsAcknowledgedThatIsNotOnDisk(t *testing.T) {
	h := logged(t)
	cmd := h.apply(action{verb: writeEntries, more: recording{did: "it", desk: h.world.desk, entries: []campaigns.Entry{
		entryOfRow(h.world.desk, &h.world.desk.read().rows[0], campaigns.Done, 1),
	}}})
	h.shows("0 of 6 slots recorded") // the command has not run
	h.send(recordedMsg{recording: recording{did: "it", desk: h.world.desk}, err: errors.New("the disk is full")})
	h.shows("not recorded: the disk is full")
	h.shows("0 of 6 slots recorded")
	h.run(cmd)
	h.shows("1 of 6 slots recorded")
}

// An entry from before the session changes what is owed at its start, and what slots are worth; the plan stays.
func TestWhatIsOwedIsWorkedOutAgain(t *testing.T) {
	h := logged(t)
	owed := func() float64 {
		for _, a := range h.world.desk.accounts {
			if a.Source == "J2216+3344" {
				return a.Debt
			}
		}
		return -1
	}
	before, plan := owed(), h.plan()
	worth := h.world.desk.read().verdict.Worth
	// The night of 18 November, lost to the wind, is put right: it was done.
	h.keys("/", "type:2026-11-18 j2216", "enter", "d", "enter")
	if now := owed(); now >= before {
		t.Errorf("owed %.2f, was %.2f", now, before)
	}
	if got := h.world.desk.read().verdict.Worth; got >= worth {
		t.Errorf("worth %s, was %s", got, worth)
	}
	if !h.plan().equal(plan) || !h.world.desk.reviewed {
		t.Error("the plan has changed, or the coming windows are not known")
	}
	h.shows("owed ")
	// What is observed in the session counts from the next one on.
	before = owed()
	h.keys("esc", "home", "down", "d", "enter")
	if owed() != before {
		t.Error("the session's own slot changed what is owed at its start")
	}
}

func TestNoRecordingWhileThePlanIsMade(t *testing.T) {
	h := logged(t)
	cmd := h.apply(action{verb: planAgain})
	h.keys("d")
	if h.over != nil {
		t.Fatal("a slot that may be gone in a moment can be recorded")
	}
	h.keys("esc")
	h.run(cmd)
	h.keys("d")
	if h.over == nil {
		t.Error("no form after planning was stopped")
	}
}

// The demonstration keeps it in memory, and says so.
func TestTheDemonstrationRecordsInMemory(t *testing.T) {
	t.Chdir(t.TempDir())
	f, err := campaigns.OpenDemo()
	if err != nil {
		t.Fatal(err)
	}
	h := &harness{model: newModel(Config{Folder: f}, styles(termenv.Ascii, false)), t: t}
	h.size(80, 24)
	h.keys("5", "/", "type:J1856", "enter", "f", "enter") // past entries need no plan
	h.shows("recorded in memory: J1856+0410 with L lost")
	if files, _ := os.ReadDir("."); len(files) > 0 {
		t.Errorf("%v on the disk", files)
	}
}

func TestLogbookMouse(t *testing.T) {
	h := logged(t)
	f := frameOf(h.w, h.model.h)
	h.send(tea.MouseMsg{X: 10, Y: f.body.Min.Y + 1 + 1 + 4, Button: tea.MouseButtonLeft, Action: tea.MouseActionPress})
	if at := h.views[4].(*logbook).list.at; at != 4 {
		t.Errorf("a click on the fifth row chooses %d", at)
	}
	h.send(tea.MouseMsg{X: 10, Y: f.body.Min.Y + 4, Button: tea.MouseButtonWheelDown, Action: tea.MouseActionPress})
	if at := h.views[4].(*logbook).list.at; at != 5 {
		t.Errorf("the wheel chooses %d", at)
	}
}
