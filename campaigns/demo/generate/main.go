// Command generate writes the demonstration campaign: campaign.toml, sources/*.toml and logbook.csv.
//
//	go run ./campaigns/demo/generate          rewrites the files in campaigns/demo
//	go run ./campaigns/demo/generate -facts   prints what the campaign shows, and when
//
// Everything it writes is invented. The scenario (which kinds of sources, which troubles) is chosen by
// hand in sources.go and calendar.go; the digits come from generators seeded by name, so that every run
// writes the same bytes and a change to one source leaves the others alone. The past is played forward
// by a simple dispatcher (history.go) that always observes what is most overdue for its price in
// minutes: good enough to leave a believable logbook behind, and easily beaten by a real plan.
package main

import (
	"flag"
	"fmt"
	"os"
	"path/filepath"
)

func main() {
	dir := flag.String("dir", filepath.Join("campaigns", "demo"), "folder that the files are written to")
	facts := flag.Bool("facts", false, "print what the campaign shows instead of writing it")
	flag.Parse()
	if *facts {
		printFacts(os.Stdout)
		return
	}
	if err := writeFiles(*dir); err != nil {
		fmt.Fprintln(os.Stderr, "generate:", err)
		os.Exit(1)
	}
}

// A file is one file of the campaign folder, its name relative to the folder.
type file struct {
	name string
	text string
}

// files returns the whole campaign in the order in which a reader meets it.
func files() []file {
	sources := inventSources()
	out := []file{{"campaign.toml", campaignText(sources)}}
	for _, c := range chapters {
		out = append(out, file{"sources/" + c.name + ".toml", chapterText(c, sources)})
	}
	return append(out, file{"logbook.csv", logbookText(playHistory(sources))})
}

func writeFiles(dir string) error {
	for _, f := range files() {
		path := filepath.Join(dir, filepath.FromSlash(f.name))
		if err := os.MkdirAll(filepath.Dir(path), 0o755); err != nil {
			return err
		}
		if err := os.WriteFile(path, []byte(f.text), 0o644); err != nil {
			return err
		}
	}
	return nil
}
