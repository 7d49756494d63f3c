package ui

import (
	"fmt"
	"io"
	"math"
	"math/rand/v2"
	"slices"
	"testing"
	"time"

	"example.org/tallystick/campaigns"
)

// BenchmarkKeysToFrame presses keys at random in every view, 200 by 60, while a session of 120 sources is under way,
// and reports how long a key takes to its frame. What runs aside (files, planning, the season) is not in it.
func BenchmarkKeysToFrame(b *testing.B) {
	b.Chdir(b.TempDir())
	f, err := campaigns.OpenDemo()
	if err != nil {
		b.Fatal(err)
	}
	c := f.Campaign
	for n := 0; len(c.Sources) < 120; n++ {
		s := c.Sources[n]
		s.Name = fmt.Sprintf("%s.%d", s.Name, n)
		s.RADeg = math.Mod(s.RADeg+137.5*float64(n+1), 360)
		s.Aims = slices.DeleteFunc(slices.Clone(s.Aims), func(a campaigns.Aim) bool { return a.Kind == campaigns.Calibration })
		c.Sources = append(c.Sources, s)
	}
	now := c.Sessions[0].Start.Add(3 * time.Hour)
	h := start(b, f, func(c *Config) { c.Now, c.Out = func() time.Time { return now }, io.Discard })
	h.rounds = 1
	h.size(200, 60)

	leaves := map[string]bool{"ctrl+z": true, "ctrl+c": true, "q": true, "O": true, "o": true} // what would leave the session
	var keys []string
	for i := range commands {
		for _, k := range commands[i].Keys() {
			if !leaves[k] {
				keys = append(keys, k)
			}
		}
	}
	keys = append(keys, "esc", "esc", "esc", "enter", "down", "down", "up", "left", "right", "right")
	r := rand.New(rand.NewPCG(1, 2))
	type pressed struct {
		took time.Duration
		what string
	}
	var all []pressed
	for b.Loop() {
		if len(all)%20 == 0 {
			h.keys("esc", "esc", "esc", commandOf[viewVerbs[len(all)/20%len(viewVerbs)]].Keys()[0])
			h.View()
		}
		k, before := keys[r.IntN(len(keys))], h.views[h.at].title()
		if h.over != nil {
			before += fmt.Sprintf(" with %T", h.over)
		}
		begun := time.Now()
		_, cmd := h.Update(keyMsg(k))
		h.View()
		all = append(all, pressed{time.Since(begun), fmt.Sprintf("%q in %s", k, before)})
		h.run(cmd)
		if h.fault != "" {
			b.Fatal(h.fault)
		}
		h.quit = false
	}
	slices.SortFunc(all, func(a, b pressed) int { return int(a.took - b.took) })
	for name, share := range map[string]float64{"p50": 0.5, "p95": 0.95, "p99": 0.99, "most": 1} {
		b.ReportMetric(all[int(share*float64(len(all)-1))].took.Seconds()*1e3, name+"-ms")
	}
	for _, p := range all[max(0, len(all)-12):] {
		b.Logf("%.1f ms: %s", p.took.Seconds()*1e3, p.what)
	}
}
