package campaigns

import (
	"bufio"
	"fmt"
	"math/rand/v2"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"example.org/tallystick/sky/outside"
)

// The test program is also the program that is killed: with this variable it saves into the folder that it
// names, one acknowledgement a line, until it dies.
const saverVariable = "TALLYSTICK_TEST_SAVES_INTO"

func TestMain(m *testing.M) {
	if dir := os.Getenv(saverVariable); dir != "" {
		saveWithoutEnd(dir)
	}
	outside.Main(m, nil)
}

func saveWithoutEnd(dir string) {
	f, err := Open(dir)
	for n := 0; err == nil; n++ {
		id := fmt.Sprintf("%d/%d", os.Getpid(), n)
		e := someEntry(len(f.Logbook.Entries))
		e.Note = id
		if err = f.AppendLog([]Entry{e}); err != nil {
			break
		}
		fmt.Println("entry", id)
		var p *SavedPlan
		if p, err = f.Plan("night"); err != nil {
			break
		}
		if p == nil {
			p = somePlan("night", "first")
		}
		p.Slots = append(p.Slots, p.Slots[0])
		p.Slots[len(p.Slots)-1].Note = id
		if err = f.SavePlan(p); err != nil {
			break
		}
		fmt.Println("plan", id)
	}
	fmt.Fprintln(os.Stderr, err)
	os.Exit(1)
}

// Whatever was acknowledged before a kill is there after it, and the files can be read.
func TestKilledWhileSaving(t *testing.T) {
	dir := copyOfSmall(t)
	random := rand.New(rand.NewPCG(1, 2))
	var acknowledged []string
	for range 15 {
		saver := exec.Command(os.Args[0])
		saver.Env = append(os.Environ(), saverVariable+"="+dir)
		saver.Stderr = os.Stderr
		out, err := saver.StdoutPipe()
		if err != nil {
			t.Fatal(err)
		}
		if err := saver.Start(); err != nil {
			t.Fatal(err)
		}
		lines := bufio.NewScanner(out)
		wait := 1 + random.IntN(10)
		for lines.Scan() {
			acknowledged = append(acknowledged, lines.Text())
			if wait--; wait == 0 {
				time.Sleep(time.Duration(random.IntN(3000)) * time.Microsecond) // somewhere within the next save
				if err := saver.Process.Kill(); err != nil {
					t.Fatal(err)
				}
			}
		}
		if err := saver.Wait(); err == nil || saver.ProcessState.Exited() {
			t.Fatalf("the saver ended by itself: %v", err)
		}
	}
	f := mustOpen(t, dir)
	p, err := f.Plan("night")
	if err != nil || len(f.Damage) > 0 {
		t.Fatal(err, f.Damage)
	}
	kept := map[string]bool{}
	for _, e := range f.Logbook.Entries {
		kept["entry "+e.Note] = true
	}
	for _, s := range p.Slots {
		kept["plan "+s.Note] = true
	}
	for _, a := range acknowledged {
		if !kept[a] {
			t.Errorf("%s was acknowledged and is lost", a)
		}
	}
	if err := f.SavePlan(p); err != nil {
		t.Fatal(err)
	}
	strays, _ := filepath.Glob(filepath.Join(dir, "plans", ".*"))
	if len(strays) > 0 {
		t.Errorf("left after the next save: %s", strings.Join(strays, ", "))
	}
}
