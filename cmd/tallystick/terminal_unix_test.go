//go:build unix

package main

import (
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"syscall"
	"testing"
	"time"
)

// A terminal is the program in a real terminal: one of tmux's, on a server of its own.
type terminal struct {
	t        *testing.T
	dir      string
	env      []string
	settings string // tmux's
}

// patience is how long the screen may take to show something on a machine that is busy.
const patience = 40 * time.Second

// newTerminal is a terminal in a folder of its own with the campaign that the screen's tests use.
func newTerminal(t *testing.T) *terminal {
	t.Helper()
	if _, err := exec.LookPath("tmux"); err != nil {
		t.Skip("no tmux here, which this test drives the program with")
	}
	term := &terminal{t: t, dir: t.TempDir()}
	sockets, err := os.MkdirTemp("", "t") // a socket's name has 107 bytes at most
	if err != nil {
		t.Fatal(err)
	}
	for _, name := range []string{"campaign.toml", "logbook.csv"} {
		data, err := os.ReadFile(filepath.Join("..", "..", "ui", "testdata", "campaign", name))
		if err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(filepath.Join(term.dir, name), data, 0o644); err != nil {
			t.Fatal(err)
		}
	}
	home := t.TempDir()
	term.env = []string{"HOME=" + home, "XDG_STATE_HOME=" + filepath.Join(home, "state"), "XDG_CONFIG_HOME=" + filepath.Join(home, "config"),
		"LC_ALL=C.UTF-8", "NO_COLOR=", "COLORFGBG=15;0", "CI=", "TMPDIR=" + home, "TMUX=", "TMUX_TMPDIR=" + sockets, "PATH=" + os.Getenv("PATH")}
	// Without this the server ends with its last window, perhaps just when the next is asked for.
	term.settings = filepath.Join(sockets, "tmux.conf")
	if err := os.WriteFile(term.settings, []byte("set -g exit-empty off\n"), 0o644); err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() {
		_, _ = term.tmux("kill-server")
		_ = os.RemoveAll(sockets)
	})
	return term
}

func (term *terminal) tmux(args ...string) (string, error) {
	c := exec.Command("tmux", append([]string{"-f", term.settings}, args...)...)
	c.Env = append(os.Environ(), term.env...)
	c.Dir = term.dir
	out, err := c.CombinedOutput()
	return string(out), err
}

func (term *terminal) must(args ...string) string {
	term.t.Helper()
	out, err := term.tmux(args...)
	if err != nil {
		term.t.Fatalf("tmux %s: %v: %s", args, err, out)
	}
	return out
}

// start runs a command line in a window of this size; $? goes into the file "status" when it has ended.
func (term *terminal) start(w, h int, line string) {
	term.t.Helper()
	_ = os.Remove(term.path("status"))
	args := []string{"new-session", "-d", "-x", fmt.Sprint(w), "-y", fmt.Sprint(h), "-c", term.dir}
	for _, e := range term.env {
		args = append(args, "-e", e)
	}
	term.must(append(args, line+"; echo $? >status.new; mv status.new status")...)
}

func (term *terminal) path(name ...string) string {
	return filepath.Join(append([]string{term.dir}, name...)...)
}

func (term *terminal) file(name ...string) string {
	term.t.Helper()
	data, err := os.ReadFile(term.path(name...))
	if err != nil {
		term.t.Fatal(err)
	}
	return string(data)
}

func (term *terminal) screen() string { return term.must("capture-pane", "-p") }

// until waits for something to become true.
func (term *terminal) until(what string, holds func() bool) {
	term.t.Helper()
	for begun := time.Now(); !holds(); time.Sleep(15 * time.Millisecond) {
		if time.Since(begun) > patience {
			screen, _ := term.tmux("capture-pane", "-p")
			term.t.Fatalf("never: %s; the screen:\n%s", what, screen)
		}
	}
}

// shows waits until all of these are on the screen at once.
func (term *terminal) shows(texts ...string) {
	term.t.Helper()
	term.until(strings.Join(texts, " and "), func() bool {
		screen := term.screen()
		for _, text := range texts {
			if !strings.Contains(screen, text) {
				return false
			}
		}
		return true
	})
}

func (term *terminal) lacks(text string) {
	term.t.Helper()
	if screen := term.screen(); strings.Contains(screen, text) {
		term.t.Errorf("%q is on the screen:\n%s", text, screen)
	}
}

// keys presses keys by tmux's names.
func (term *terminal) keys(names ...string) {
	term.t.Helper()
	term.must(append([]string{"send-keys"}, names...)...)
}

func (term *terminal) types(text string) { term.t.Helper(); term.must("send-keys", "-l", text) }

func (term *terminal) resize(w, h int) {
	term.t.Helper()
	term.must("resize-window", "-x", fmt.Sprint(w), "-y", fmt.Sprint(h))
}

// ends waits for the end of the program, and for its exit status.
func (term *terminal) ends(status string) {
	term.t.Helper()
	term.until("an end", func() bool { _, err := os.Stat(term.path("status")); return err == nil })
	if got := strings.TrimSpace(term.file("status")); got != status {
		term.t.Errorf("exit status %s, wanted %s", got, status)
	}
	term.until("the window closed", func() bool { _, err := term.tmux("has-session"); return err != nil })
}

const evening = "tallystick --at 2026-12-03T15:00:00Z"

// Plan, edit, plan again around the pins, save, export: what is on the screen is in the files.
func TestTerminalPlansEditsAndExports(t *testing.T) {
	term := newTerminal(t)
	term.start(80, 24, evening)
	term.shows("planned ", "? help")
	term.keys("j", "p")
	term.shows("1 pinned", "not saved")
	term.keys("n")
	term.shows("Note on")
	term.types("check the diode")
	term.keys("Enter")
	term.shows("note on ")
	term.keys("-")
	term.shows(" now ", "down ")
	term.keys("R")
	term.shows("planned again")
	term.shows("1 pinned")
	term.keys("w")
	term.shows("saved in ")
	term.keys("e")
	term.shows("Export the slot list")
	term.keys("Enter")
	term.shows("write to the file")
	term.keys("C-u")
	term.types("list.txt")
	term.keys("Enter")
	term.shows("wrote ", "list.txt")
	term.keys("q")
	term.ends("0")
	plan, list := term.file("plans", "2026-12-03 night.toml"), term.file("list.txt")
	if strings.Count(plan, "pinned = true") != 1 || !strings.Contains(plan, `note = "check the diode"`) {
		t.Errorf("the saved plan:\n%s", plan)
	}
	if !strings.Contains(list, "check the diode") {
		t.Errorf("the exported list:\n%s", list)
	}
}

// An hour is lost in the night: it is in the logbook, nothing is planned in it, and the plan goes on.
func TestTerminalLosesAnHour(t *testing.T) {
	term := newTerminal(t)
	term.start(80, 24, evening+" plan --save >plan.out")
	term.ends("0")
	term.start(100, 30, "tallystick --at 2026-12-03T19:00:00Z")
	term.shows("the saved plan of", "now 19:00: ", "min left", "F lost until")
	term.keys("F")
	term.shows("Time is lost", "until when")
	term.keys("C-u")
	term.types("+61")
	term.keys("Enter")
	term.shows("time lost until 20:01", "planned again")
	term.keys("w")
	term.shows("saved in ")
	term.keys("q")
	term.ends("0")
	log, plan := term.file("logbook.csv"), term.file("plans", "2026-12-03 night.toml")
	if lines := strings.Split(strings.TrimSpace(log), "\n"); !strings.Contains(lines[len(lines)-1], ",lost,0") {
		t.Errorf("the logbook ends with %q", lines[len(lines)-1])
	}
	for _, line := range strings.Split(plan, "\n") {
		if at, ok := strings.CutPrefix(line, "start = 2026-12-03T"); ok && at > "19:00" && at < "20:01" {
			t.Errorf("planned into the lost hour: %s", line)
		}
	}
}

// Slots are recorded with one key each as they end.
func TestTerminalRecordsASlot(t *testing.T) {
	term := newTerminal(t)
	term.start(80, 24, evening+" plan --save >plan.out")
	term.ends("0")
	before := strings.Count(term.file("logbook.csv"), "\n")
	_, first, _ := strings.Cut(term.file("plans", "2026-12-03 night.toml"), "start = ")
	begins, err := time.Parse(time.RFC3339, first[:len("2026-12-03T18:02:00Z")])
	if err != nil {
		t.Fatal(err)
	}
	term.start(80, 24, "tallystick --at "+begins.Add(20*time.Minute).Format(time.RFC3339))
	term.shows("the saved plan of", " min left")
	term.keys("d")
	term.shows("recorded: ", "partial, 20 of", "part")
	term.keys("u")
	term.shows("undone: ", "ended early")
	term.keys("q")
	term.ends("0")
	log := term.file("logbook.csv")
	if n := strings.Count(log, "\n"); n != before+1 || !strings.Contains(log, ",partial,0.") {
		t.Errorf("%d lines were added:\n%s", n-before, log)
	}
}

// The window changes its size under an open dialog: nothing typed is lost, and every size shows what it can.
func TestTerminalResizes(t *testing.T) {
	term := newTerminal(t)
	term.start(80, 24, evening)
	term.shows("planned ")
	term.keys("i")
	term.shows("Insert at")
	term.types("J02")
	term.shows("find: J02")
	term.resize(40, 10)
	term.shows("find: J02", "Enter inserts")
	term.resize(250, 70)
	term.shows("find: J02", "parallactic")
	term.keys("Escape")
	term.until("the typed text is gone", func() bool {
		return !strings.Contains(term.screen(), "J02 ") || !strings.Contains(term.screen(), "find: J02")
	})
	term.keys("Escape")
	term.until("the list is gone", func() bool { return !strings.Contains(term.screen(), "Insert at") })
	term.shows("UTC 18:00", "no sooner", "worth ")
	term.resize(40, 10)
	term.shows("Slate", "worth ", "? help")
	term.resize(10, 4)
	term.shows("larger")
	term.resize(80, 24)
	term.shows("UTC 18:00", "LST", "slot 1: ", "? help")
	term.keys("q")
	term.ends("0")
}

// colour is a sequence that sets one.
var colour = regexp.MustCompile(`\x1b\[(\d+;)*([349][0-7]|[34]8;[0-9;]*)(;\d+)*m`)

// Without colours, and in a locale that has ASCII only, every state is still told.
func TestTerminalWithoutColourInASCII(t *testing.T) {
	term := newTerminal(t)
	term.start(80, 24, evening)
	term.shows("planned ")
	if !colour.MatchString(term.must("capture-pane", "-p", "-e")) {
		t.Error("no colours at all, where there may be")
	}
	term.keys("q")
	term.ends("0")
	term.env = append(term.env, "NO_COLOR=1", "LC_ALL=C")
	term.start(80, 24, evening)
	term.shows("planned ", "> 1 ")
	term.keys("p")
	term.shows("1 pinned", "1P=")
	raw := term.must("capture-pane", "-p", "-e")
	for _, r := range raw {
		if r > 126 {
			t.Fatalf("%q is not ASCII:\n%s", r, raw)
		}
	}
	if code := colour.FindString(raw); code != "" {
		t.Errorf("a colour code %q", code)
	}
	term.keys("u", "q")
	term.ends("0")
}

// The terminal dies with unsaved work; the next start brings it back.
func TestTerminalDies(t *testing.T) {
	term := newTerminal(t)
	for _, signal := range []syscall.Signal{syscall.SIGTERM, syscall.SIGHUP} {
		term.start(80, 24, "exec "+evening)
		term.shows("planned ")
		term.keys("p")
		term.shows("1 pinned")
		pid, err := strconv.Atoi(strings.TrimSpace(term.must("display", "-p", "#{pane_pid}")))
		if err != nil {
			t.Fatal(err)
		}
		if err := syscall.Kill(pid, signal); err != nil {
			t.Fatal(err)
		}
		term.until("an end", func() bool { _, err := term.tmux("has-session"); return err != nil })
		term.start(80, 24, evening)
		term.shows("Unsaved work from before")
		term.keys("r")
		term.shows("draft restored", "1 pinned")
		term.keys("q")
		term.shows("Something is not saved")
		term.keys("d")
		term.ends("0")
	}
}

// The mouse is turned off, which is remembered.
func TestTerminalMouseStaysOff(t *testing.T) {
	term := newTerminal(t)
	mouse := func() string { return strings.TrimSpace(term.must("display", "-p", "#{mouse_any_flag}")) }
	term.start(80, 24, evening)
	term.shows("planned ")
	term.until("the mouse is on", func() bool { return mouse() == "1" })
	term.keys("m")
	term.shows("mouse off, and remembered")
	term.until("the mouse is off", func() bool { return mouse() == "0" })
	term.keys("q")
	term.ends("0")
	term.start(80, 24, evening)
	term.shows("planned ")
	if mouse() != "0" {
		t.Error("the mouse is on again")
	}
	term.keys("q")
	term.ends("0")
}

// Ctrl-Z gives the terminal back to the shell; fg draws everything again, at the size of now.
func TestTerminalStopsAndGoesOn(t *testing.T) {
	term := newTerminal(t)
	term.start(80, 24, "PS1='shell> ' sh -i")
	term.shows("shell>")
	term.types(evening)
	term.keys("Enter")
	term.shows("planned ", "Slate")
	term.keys("C-z")
	term.shows("shell>", "topped")
	term.lacks("Slate")
	term.resize(100, 30)
	term.types("fg")
	term.keys("Enter")
	term.shows("Slate", "UTC 18:00", "planned ")
	term.keys("q")
	term.until("the shell asks again", func() bool { return strings.HasSuffix(strings.TrimSpace(term.screen()), "shell>") })
	term.types("exit")
	term.keys("Enter")
	term.ends("0")
}
