//go:build unix

package ui

import (
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"github.com/adrg/xdg"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/sched"
)

// failingRun, set in the environment, makes this test program the interface on the campaign in the folder
// it names, with an export that fails as badly as anything can.
const failingRun = "TALLYSTICK_TEST_FAILING_RUN"

func TestMain(m *testing.M) {
	dir := os.Getenv(failingRun)
	if dir == "" {
		os.Exit(m.Run())
	}
	f, err := campaigns.Open(dir)
	if err == nil {
		err = Run(Config{Folder: f, Now: func() time.Time { return evening }, Mouse: true,
			Export: func(string, string, *campaigns.Prepared, sched.Plan, sched.Bound) (string, error) {
				panic("the export fails")
			}})
	}
	fmt.Println("ended:", err)
	os.Exit(3)
}

// After a fault the terminal is as it was, the fault is told without a trace of the stack, and the work is kept.
func TestAFaultGivesTheTerminalBack(t *testing.T) {
	if _, err := exec.LookPath("tmux"); err != nil {
		t.Skip("no tmux here, which this test drives the program with")
	}
	program, err := os.Executable()
	if err != nil {
		t.Fatal(err)
	}
	f := openCampaign(t)
	state := t.TempDir()
	sockets, err := os.MkdirTemp("", "t") // a socket's name has 107 bytes at most
	if err != nil {
		t.Fatal(err)
	}
	tmux := func(args ...string) string {
		c := exec.Command("tmux", append([]string{"-f", "/dev/null"}, args...)...)
		c.Env = append(os.Environ(), "TMUX=", "TMUX_TMPDIR="+sockets, "LC_ALL=C.UTF-8", "XDG_STATE_HOME="+state,
			"XDG_CONFIG_HOME="+state, failingRun+"="+f.Name())
		out, _ := c.CombinedOutput()
		return string(out)
	}
	t.Cleanup(func() {
		tmux("kill-server")
		os.RemoveAll(sockets)
	})
	shows := func(text string, times int) string {
		for begun := time.Now(); ; time.Sleep(15 * time.Millisecond) {
			screen := tmux("capture-pane", "-p")
			if strings.Count(screen, text) >= times {
				return screen
			}
			if time.Since(begun) > 40*time.Second {
				t.Fatalf("never %q; the screen:\n%s", text, screen)
			}
		}
	}
	tmux("new-session", "-d", "-x", "160", "-y", "30", "PS1='shell>' sh -i")
	shows("shell>", 1)
	tmux("send-keys", "-l", "stty -g; "+program)
	tmux("send-keys", "Enter")
	shows("planned ", 1)
	tmux("send-keys", "p")
	shows("1 pinned", 1)
	tmux("send-keys", "e")
	shows("Export the slot list", 1)
	tmux("send-keys", "Enter")
	shows("write to the file", 1)
	tmux("send-keys", "C-u")
	tmux("send-keys", "-l", filepath.Join(state, "list"))
	tmux("send-keys", "Enter")
	shows("ended: ", 1)
	tmux("send-keys", "-l", "stty -g; echo exit $?")
	tmux("send-keys", "Enter")
	screen := shows("exit 0", 1)
	if !strings.Contains(screen, "the export fails") || !strings.Contains(screen, "kept") || strings.Contains(screen, "goroutine") {
		t.Errorf("the fault is told as\n%s", screen)
	}
	var modes []string
	for _, l := range strings.Split(screen, "\n") {
		if strings.Count(l, ":") > 20 {
			modes = append(modes, strings.TrimPrefix(strings.TrimSpace(l), "shell>")) // the prompt, if keys came before it
		}
	}
	if len(modes) != 2 || modes[0] != modes[1] {
		t.Errorf("the terminal's modes before and after: %q", modes)
	}
	if flags := strings.TrimSpace(tmux("display", "-p", "#{alternate_on} #{mouse_any_flag} #{cursor_flag}")); flags != "0 0 1" {
		t.Errorf("alternate screen, mouse, cursor: %s", flags)
	}
	t.Setenv("XDG_STATE_HOME", state)
	xdg.Reload()
	again := open(t, f)
	again.shows("Unsaved work from before")
}
