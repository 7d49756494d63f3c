package main

import (
	"go/build"
	"io/fs"
	"path"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

const module = "example.org/tallystick"

// Which package may import what, beside the standard library and packages below itself. "*" ends a
// family. DEVELOPERS.md draws the same; change both together.
var arrows = map[string][]string{
	"sched":          {},
	"sky":            {"github.com/soniakeys/meeus/*", "github.com/soniakeys/unit"},
	"sky/array":      {},
	"sky/generate":   {},
	"sky/outside":    {},
	"sky/orbit":      {"github.com/soniakeys/meeus/*", module + "/sky"},
	"sky/radiometer": {module + "/sky"},
	"sky/timing":     {module + "/sky", module + "/sky/orbit"},
	"campaigns": {module + "/sched", module + "/sky/*", "github.com/BurntSushi/toml", "github.com/gofrs/flock",
		"github.com/google/renameio/v2"},
	"campaigns/export":        {module + "/campaigns", module + "/sched", module + "/sky/*"},
	"campaigns/ephemeris":     {module + "/sky/*"},
	"campaigns/demo":          {},
	"campaigns/demo/generate": {module + "/campaigns", module + "/sched", module + "/sky/*"},
	"ui": {module + "/campaigns", module + "/sched", module + "/sky/*", "github.com/charmbracelet/*", "github.com/muesli/termenv",
		"github.com/sahilm/fuzzy", "github.com/adrg/xdg", "github.com/google/renameio/v2", "github.com/BurntSushi/toml"},
	"ui/theme":       {"github.com/charmbracelet/lipgloss", "github.com/muesli/termenv"},
	"ui/cell":        {module + "/ui/theme", "github.com/charmbracelet/x/ansi"},
	"cmd/tallystick": {module + "/*", "github.com/spf13/*"},
}

// Files that alone may import a library.
var only = map[string]string{
	"github.com/soniakeys/meeus": "sky/meeus.go",
}

func TestArrows(t *testing.T) {
	root := filepath.Join("..", "..")
	seen := 0
	err := filepath.WalkDir(root, func(dir string, e fs.DirEntry, err error) error {
		if err != nil || !e.IsDir() {
			return err
		}
		if name := e.Name(); name == "testdata" || strings.HasPrefix(name, ".") && dir != root {
			return filepath.SkipDir
		}
		pkg, err := build.ImportDir(dir, 0)
		if err != nil {
			return nil // no Go here
		}
		rel, err := filepath.Rel(root, dir)
		if err != nil {
			return err
		}
		seen++
		checkArrows(t, filepath.ToSlash(rel), pkg)
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
	if seen < 5 {
		t.Errorf("looked at %d packages only", seen)
	}
}

func checkArrows(t *testing.T, rel string, pkg *build.Package) {
	allowed, known := arrows[rel]
	if !known {
		t.Errorf("package %s has no arrows: say in arrows_test.go what it may import", rel)
		return
	}
	for imported, places := range pkg.ImportPos {
		if first, _, _ := strings.Cut(imported, "/"); !strings.Contains(first, ".") || strings.HasPrefix(imported, module+"/"+rel+"/") {
			continue // the standard library, or a package below
		}
		if !slices.ContainsFunc(allowed, func(a string) bool { return matches(a, imported) }) {
			t.Errorf("%s: package %s may not import %s", places[0], rel, imported)
		}
		for library, file := range only {
			for _, place := range places {
				if matches(library+"/*", imported) && rel+"/"+filepath.Base(place.Filename) != file {
					t.Errorf("%s: only %s may import %s", place, file, library)
				}
			}
		}
	}
}

func matches(pattern, imported string) bool {
	if family, ok := strings.CutSuffix(pattern, "/*"); ok {
		return imported == family || strings.HasPrefix(imported, family+"/")
	}
	return path.Clean(imported) == pattern
}

// Pure packages ask neither the clock nor the machine.
func TestPurePackages(t *testing.T) {
	forbidden := []string{"os", "io/fs", "os/exec", "net", "net/http", "log", "log/slog", "math/rand", "syscall"}
	for _, rel := range []string{"sched", "sky", "sky/array", "sky/orbit", "sky/radiometer", "sky/timing", "ui/cell"} {
		pkg, err := build.ImportDir(filepath.Join("..", "..", filepath.FromSlash(rel)), 0)
		if err != nil {
			t.Errorf("%s: %v", rel, err)
			continue
		}
		for _, imported := range pkg.Imports {
			if slices.Contains(forbidden, imported) {
				t.Errorf("%s imports %s: it must stay pure", rel, imported)
			}
		}
	}
}
