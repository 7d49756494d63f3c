package export

import (
	"maps"
	"slices"
	"strings"
	"testing"

	"github.com/BurntSushi/toml"
)

// missingStandards are the standards of testdata/formats.toml that no export follows yet. When one does, it takes
// its place here with a test of what the file says of it.
var missingStandards = map[string]struct{ reason, format string }{
	"obsplan":   {"there is no export of observing plans for other observatories", "obsplan"},
	"votable":   {"there is no export as a VOTable", "votable"},
	"icalendar": {"there is no calendar export", "icalendar"},
}

func TestStandardsAreAccountedFor(t *testing.T) {
	var file map[string]any
	if _, err := toml.DecodeFile("testdata/formats.toml", &file); err != nil {
		t.Fatal(err)
	}
	if got, want := slices.Sorted(maps.Keys(file)), slices.Sorted(maps.Keys(missingStandards)); !slices.Equal(got, want) {
		t.Errorf("the file has %q, accounted for are %q", got, want)
	}
	names, _ := Formats()
	for name, m := range missingStandards {
		for _, f := range names {
			if m.reason == "" || strings.Contains(strings.ToLower(f), m.format) {
				t.Errorf("%s: said to be missing (%q), and there is a format %s", name, m.reason, f)
			}
		}
	}
}
