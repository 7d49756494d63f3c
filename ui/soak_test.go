package ui

import (
	"flag"
	"io"
	"math/rand/v2"
	"runtime"
	"testing"
	"time"
)

var soak = flag.Int("soak", 600, "how many random keys to press in TestSoak")

// A long night: keys at random in every view, at every size, before and during the session. No fault, no
// frame larger than its terminal, no memory and no goroutine left behind.
func TestSoak(t *testing.T) {
	t.Chdir(t.TempDir())
	h := start(t, openCampaign(t))
	h.rounds = 1
	h.cfg.Out = io.Discard
	var keys []string
	for i := range commands {
		keys = append(keys, commands[i].Keys()...)
	}
	for i := range h.views {
		keys = append(keys, commandOf[viewVerbs[i]].Keys()[0])
	}
	keys = append(keys, "esc", "esc", "esc", "enter", "down", "down", "right", "backspace", "type:18", "type:J0", "0", "+9", "y", "é", "日")
	r := rand.New(rand.NewPCG(1, 2))
	now := evening
	h.cfg.Now = func() time.Time { return now }
	used := func() (bytes, goroutines int) {
		runtime.GC()
		var m runtime.MemStats
		runtime.ReadMemStats(&m)
		return int(m.HeapAlloc), runtime.NumGoroutine()
	}
	var bytes, goroutines, edits int
	for n := range *soak {
		switch r.IntN(40) {
		case 0:
			h.size(1+r.IntN(220), 1+r.IntN(70))
		case 1:
			now = evening.Add(time.Duration(r.IntN(9*60)) * time.Minute)
			h.run(h.tick())
		}
		k := keys[r.IntN(len(keys))]
		h.keys(k)
		h.exact()
		if h.fault != "" {
			t.Fatalf("key %d, %q: %s", n, k, h.fault)
		}
		h.quit = false
		if n == *soak/10 {
			bytes, goroutines = used()
		}
		edits = max(edits, len(h.world.desk.past))
	}
	h.stopPlanning()
	more, left := used()
	t.Logf("%d keys, %.1f MiB more than after a tenth of them, %d goroutines more, %d steps to undo at most", *soak, float64(more-bytes)/(1<<20), left-goroutines, edits)
	if more-bytes > 10<<20 {
		t.Errorf("%.1f MiB more in use", float64(more-bytes)/(1<<20))
	}
	if left > goroutines {
		t.Errorf("%d goroutines left", left-goroutines)
	}
}
