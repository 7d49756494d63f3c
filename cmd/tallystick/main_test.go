package main

import (
	"errors"
	"flag"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
	"unicode/utf8"

	"github.com/rogpeppe/go-internal/testscript"
)

func TestMain(m *testing.M) {
	checks := "300"
	if raceDetector {
		checks = "40" // a plan takes ten times as long; the plain run does them all
	}
	os.Setenv("GORACE", "atexit_sleep_ms=0 "+os.Getenv("GORACE")) // else every command of a script ends a second late
	flag.Set("rapid.checks", checks)                              // before the command line is read, which may say otherwise
	testscript.Main(m, map[string]func(){"tallystick": main})
}

// The scripts know two commands of their own: `exits CODE command...` runs a command that must end with
// that code, and `narrow FILE...` wants lines of at most 80 columns without control characters.
func TestScripts(t *testing.T) {
	testscript.Run(t, testscript.Params{
		Dir: "testdata/script",
		Setup: func(e *testscript.Env) error {
			e.Setenv("LC_ALL", "C.UTF-8")
			e.Setenv("GORACE", os.Getenv("GORACE"))
			small, err := filepath.Abs(filepath.Join("..", "..", "campaigns", "testdata", "small"))
			e.Setenv("SMALL", small) // six sources: planned in a moment
			if err != nil {
				return err
			}
			return nil
		},
		Cmds: map[string]func(*testscript.TestScript, bool, []string){"exits": exits, "narrow": narrow},
	})
}

func exits(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) < 2 {
		ts.Fatalf("usage: exits CODE command...")
	}
	want, err := strconv.Atoi(args[0])
	ts.Check(err)
	err = ts.Exec(args[1], args[2:]...)
	got := 0
	var ended *exec.ExitError
	switch {
	case errors.As(err, &ended):
		got = ended.ExitCode()
	case err != nil:
		ts.Fatalf("%v", err)
	}
	if got != want {
		ts.Fatalf("exit %d, want %d", got, want)
	}
}

func narrow(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) == 0 {
		ts.Fatalf("usage: narrow FILE...")
	}
	for _, file := range args {
		text := ts.ReadFile(file)
		if text == "" {
			ts.Fatalf("%s is empty", file)
		}
		for line := range strings.Lines(text) {
			line = strings.TrimPrefix(strings.TrimSuffix(line, "\n"), "\f")
			if n := utf8.RuneCountInString(line); n > screenColumns {
				ts.Fatalf("%d columns: %q", n, line)
			}
			if strings.ContainsFunc(line, func(r rune) bool { return r < ' ' || r == 0x7f }) {
				ts.Fatalf("control characters: %q", line)
			}
		}
	}
}
