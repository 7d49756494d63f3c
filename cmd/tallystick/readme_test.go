package main

import (
	"flag"
	"fmt"
	"io"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"slices"
	"strings"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
	"github.com/spf13/cobra"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/campaigns/export"
	"example.org/tallystick/ui"
)

var update = flag.Bool("update", false, "rewrite the parts of the README that the program knows")

// What the README says of the program comes from the program.
func TestREADME(t *testing.T) {
	path := filepath.Join("..", "..", "README.md")
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	old := string(data)
	now := old
	small, err := os.ReadFile(filepath.Join("..", "..", "campaigns", "testdata", "small", "campaign.toml"))
	if err != nil {
		t.Fatal(err)
	}
	parts := []struct{ name, text string }{
		{"small campaign", "```toml\n" + string(small) + "```\n"},
		{"commands", commandsTable()},
		{"columns", columnsList()},
		{"keys", keysTable()},
		{"safety", hangingAt(100, export.Safety)},
	}
	if *update { // any change of the planner moves a slot of it, so it is only brought up on request
		parts = append(parts, struct{ name, text string }{"screen", "```text\n" + firstScreen(t) + "```\n"})
	}
	for _, part := range parts {
		begin, end := "<!-- "+part.name+": begin -->\n", "<!-- "+part.name+": end -->"
		before, rest, found := strings.Cut(now, begin)
		_, after, closed := strings.Cut(rest, end)
		if !found || !closed {
			t.Errorf("the README has no part %q", part.name)
			continue
		}
		now = before + begin + part.text + end + after
	}
	if *update && now != old {
		if err := os.WriteFile(path, []byte(now), 0o644); err != nil {
			t.Fatal(err)
		}
		return
	}
	if diff := cmp.Diff(old, now); diff != "" {
		t.Errorf("the README is behind the program; go test ./cmd/tallystick -run README -update brings it up\n%s", diff)
	}
}

func commandsTable() string {
	var b strings.Builder
	b.WriteString("| command | does |\n|---|---|\n")
	p := &program{stdout: io.Discard, stderr: io.Discard}
	root := p.root()
	fmt.Fprintf(&b, "| `%s` | opens the screen |\n", root.Use)
	for _, c := range root.Commands() {
		for _, c := range append([]*cobra.Command{c}, c.Commands()...) {
			if c.IsAvailableCommand() {
				fmt.Fprintf(&b, "| `%s` | %s |\n", strings.TrimSuffix(c.UseLine(), " [flags]"), c.Short)
			}
		}
	}
	return b.String()
}

func columnsList() string {
	text := fmt.Sprintf("- slot list: `%s`\n- arrears: `%s`\n- passes: `%s`\n- conjunctions: `%s`\n- logbook and log show: `%s`\n", strings.Join(export.Columns, ","),
		strings.Join(arrearsColumns, ","), strings.Join(passesColumns, ","), strings.Join(conjunctionsColumns, ","),
		strings.Join(campaigns.LogbookColumns(), ","))
	for _, table := range seasonTables {
		text += fmt.Sprintf("- season --table %s: `%s`\n", table, strings.Join(seasonColumns[table], ","))
	}
	return text
}

func keysTable() string {
	var b strings.Builder
	group := ""
	for _, k := range ui.Keys() {
		if k.Group != group {
			if group != "" {
				b.WriteString("\n")
			}
			fmt.Fprintf(&b, "| %s | |\n|---|---|\n", k.Group)
			group = k.Group
		}
		does := k.Does
		if k.View != "" {
			does += " (" + k.View + ")"
		}
		var names []string
		for _, key := range strings.Fields(k.Keys) {
			names = append(names, "`"+strings.ReplaceAll(key, "|", "\\|")+"`")
		}
		fmt.Fprintf(&b, "| %s | %s |\n", strings.Join(names, " "), does)
	}
	return b.String()
}

func hangingAt(width int, text string) string {
	var b strings.Builder
	line := ""
	for _, word := range strings.Fields(text) {
		if line != "" && len(line)+1+len(word) > width {
			b.WriteString(line + "\n")
			line = ""
		}
		line = strings.TrimSpace(line + " " + word)
	}
	return b.String() + line + "\n"
}

// firstScreen is the demonstration's first screen at 80x24 in ASCII, read out of a terminal when it has
// stood still for a while.
func firstScreen(t *testing.T) string {
	program, err := exec.LookPath("tallystick")
	if err != nil {
		t.Fatal(err)
	}
	dir := t.TempDir()
	tmux := func(args ...string) string {
		c := exec.Command("tmux", append([]string{"-S", filepath.Join(dir, "socket"), "-f", "/dev/null"}, args...)...)
		c.Env = append(slices.DeleteFunc(os.Environ(), func(s string) bool {
			return strings.HasPrefix(s, "TMUX") || strings.HasPrefix(s, "XDG_")
		}), "LC_ALL=C.UTF-8", "HOME="+dir, "TERM=xterm-256color")
		out, err := c.Output()
		if err != nil {
			t.Fatalf("tmux %v: %v", args, err)
		}
		return string(out)
	}
	tmux("new-session", "-d", "-x", "80", "-y", "24", "-c", dir, program+" --ascii")
	defer tmux("kill-server")
	last, still := "", 0
	for still < 40 {
		time.Sleep(50 * time.Millisecond)
		screen := tmux("capture-pane", "-p")
		if still++; screen != last || strings.TrimSpace(screen) == "" {
			last, still = screen, 0
		}
	}
	return last
}

// The screen in the README is one: 24 lines of at most 80 ASCII characters.
func TestREADMEScreen(t *testing.T) {
	data, err := os.ReadFile(filepath.Join("..", "..", "README.md"))
	if err != nil {
		t.Fatal(err)
	}
	_, rest, _ := strings.Cut(string(data), "<!-- screen: begin -->\n```text\n")
	screen, _, found := strings.Cut(rest, "```\n<!-- screen: end -->")
	lines := strings.Split(strings.TrimSuffix(screen, "\n"), "\n")
	if !found || len(lines) != 24 || !strings.Contains(screen, "worth") {
		t.Errorf("found %d lines, want a screen of 24:\n%s", len(lines), screen)
	}
	for _, line := range lines {
		if len(line) > 80 || strings.ContainsFunc(line, func(r rune) bool { return r < ' ' || r > '~' }) {
			t.Errorf("not 80 columns of ASCII: %q", line)
		}
	}
}

// The example in the README is a campaign that the program accepts.
func TestSmallCampaignLoads(t *testing.T) {
	c, err := campaigns.Load(filepath.Join("..", "..", "campaigns", "testdata", "small"))
	if err != nil {
		t.Fatal(err)
	}
	if len(c.Sources) != 6 {
		t.Errorf("%d sources, want 6", len(c.Sources))
	}
}

// A file that DEVELOPERS.md sends a reader to is there.
func TestDevelopersPaths(t *testing.T) {
	root := filepath.Join("..", "..")
	data, err := os.ReadFile(filepath.Join(root, "DEVELOPERS.md"))
	if err != nil {
		t.Fatal(err)
	}
	paths := regexp.MustCompile("`((?:cmd|campaigns|sched|sky|ui)/[a-z_/*]+(?:\\.go)?)`").FindAllStringSubmatch(string(data), -1)
	for _, m := range paths {
		if found, err := filepath.Glob(filepath.Join(root, filepath.FromSlash(m[1]))); err != nil || len(found) == 0 {
			t.Errorf("DEVELOPERS.md speaks of %s, which is not there", m[1])
		}
	}
	if len(paths) < 20 {
		t.Errorf("found %d paths only: the check looks for nothing", len(paths))
	}
}
