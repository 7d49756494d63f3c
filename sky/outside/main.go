package outside

import (
	"flag"
	"fmt"
	"maps"
	"os"
	"path/filepath"
	"slices"
	"sync"
	"testing"
)

// asserted are the rows that tests have compared, by file and id.
var (
	mutex    sync.Mutex
	asserted = map[string]map[string]bool{}
)

func tick(file, id string) {
	mutex.Lock()
	defer mutex.Unlock()
	if asserted[file] == nil {
		asserted[file] = map[string]bool{}
	}
	asserted[file][id] = true
}

// Main runs the tests of a package, and fails when they pass but left out a row of a table in testdata.
//
// A row that cannot be asserted here is named in except, by its id, with the reason. When only some of
// the tests run, nothing is looked for.
func Main(m *testing.M, except map[string]string) {
	flag.Parse()
	code := m.Run()
	if code == 0 && allRun() {
		files, err := filepath.Glob("testdata/*.csv")
		complaints := left(files, except)
		if err != nil {
			complaints = append(complaints, err.Error())
		}
		for _, c := range complaints {
			fmt.Fprintln(os.Stderr, c)
			code = 1
		}
	}
	os.Exit(code)
}

func allRun() bool {
	for _, name := range []string{"test.run", "test.skip", "test.list", "test.bench", "test.fuzz"} {
		if f := flag.Lookup(name); f != nil && f.Value.String() != "" {
			return false
		}
	}
	return true
}

// left lists what is wrong with the account of the files' rows: rows that no test asserted and none excuses,
// excuses that give no reason, are not needed or are for no row.
func left(files []string, except map[string]string) (complaints []string) {
	mutex.Lock()
	defer mutex.Unlock()
	known := map[string]bool{}
	for _, file := range files {
		lines, err := records(file)
		if err != nil {
			complaints = append(complaints, err.Error())
			continue
		}
		if len(lines) == 0 || !slices.Equal(lines[0], columns) {
			continue // a table of another kind
		}
		for _, l := range lines[1:] {
			id := l[0]
			known[id] = true
			reason, excused := except[id]
			switch done := asserted[file][id]; {
			case !done && !excused:
				complaints = append(complaints, fmt.Sprintf("%s: no test asserts row %s, and no reason is given", file, id))
			case done && excused:
				complaints = append(complaints, fmt.Sprintf("%s: row %s is asserted, yet a reason is given why not", file, id))
			case excused && reason == "":
				complaints = append(complaints, fmt.Sprintf("%s: row %s is left out without a reason", file, id))
			}
		}
	}
	for _, id := range slices.Sorted(maps.Keys(except)) {
		if !known[id] {
			complaints = append(complaints, fmt.Sprintf("%s is left out with a reason, and no table has it", id))
		}
	}
	return complaints
}
