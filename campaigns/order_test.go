package campaigns

import (
	"context"
	"math/rand/v2"
	"slices"
	"testing"

	"example.org/tallystick/sched"
	"github.com/google/go-cmp/cmp"
)

// Sources may stand in the campaign's files in any order, and lines in the logbook: the plan is the same, and so is
// what a saved ceiling is known by.
func TestTheOrderOfTheFilesChangesNoPlan(t *testing.T) {
	f, now := openDemo(t)
	p, _ := firstSession()
	want := rowsPlanned(t, p)

	shuffled, log := *f.Campaign, *f.Logbook
	shuffled.Sources = slices.Clone(shuffled.Sources)
	log.Entries = slices.Clone(log.Entries)
	r := rand.New(rand.NewPCG(5, 8))
	r.Shuffle(len(shuffled.Sources), func(i, j int) {
		shuffled.Sources[i], shuffled.Sources[j] = shuffled.Sources[j], shuffled.Sources[i]
	})
	r.Shuffle(len(log.Entries), func(i, j int) { log.Entries[i], log.Entries[j] = log.Entries[j], log.Entries[i] })
	again, err := Prepare(&shuffled, &log, &shuffled.Sessions[0], PrepareOptions{At: now})
	if err != nil {
		t.Fatal(err)
	}
	if d := cmp.Diff(want, rowsPlanned(t, again)); d != "" {
		t.Error(d)
	}
	if p.ground() != again.ground() {
		t.Error("the problem has another fingerprint")
	}
}

func rowsPlanned(t *testing.T, p *Prepared) []SlotRow {
	t.Helper()
	r, err := sched.Solve(context.Background(), p.Problem, sched.Options{Rounds: 1})
	if err != nil {
		t.Fatal(err)
	}
	return p.SlotRows(r.Plan)
}
