package sky

import (
	"math"
	"strings"
	"testing"
	"time"
)

// The same events in the same order in every row, each within 0.05 s + 0.05 arcsec / elevation rate.
func TestPasses(t *testing.T) {
	kinds := map[string]EventKind{"rise": Rise, "set": Set, "kin": TopsOut, "kout": ComesBack}
	var seconds, arcseconds errs
	for _, r := range table(t, "passes.csv", 240) {
		site := r.site()
		start := r.instant("start_utc")
		end := start.Add(24 * time.Hour)
		lim := Limits{LowDeg: r.number("el_min_deg"), HighDeg: r.number("el_max_deg")}
		target := Target{RADeg: r.number("ra_deg"), DecDeg: r.number("dec_deg"),
			PMRAMasPerYr: r.number("pmra_mas_yr"), PMDecMasPerYr: r.number("pmdec_mas_yr")}
		f := mustFrame(t, start.Add(12*time.Hour))
		passes := site.Passes(f, f.Place(target), start, end, lim)

		var got []Event
		for _, e := range passes.Events {
			if e.Kind != UpperTransit && e.Kind != LowerTransit {
				got = append(got, e)
			}
		}
		var want, rates []string
		if r.text("events") != "" {
			want = strings.Split(r.text("events"), "|")
			rates = strings.Split(r.text("rates_arcsec_per_s"), "|")
		}
		if len(got) != len(want) {
			t.Errorf("row %s (%s): events %v, want %q", r.text("id"), r.text("kind"), got, want)
			continue
		}
		for i, w := range want {
			kind, at, _ := strings.Cut(w, " ")
			rate := math.Abs(row{t, []string{"rate"}, rates[i : i+1]}.number("rate"))
			off := math.Abs(got[i].At.Sub(instant(t, at)).Seconds())
			if got[i].Kind != kinds[kind] || off > 0.05+0.05/rate {
				t.Errorf("row %s (%s), event %d: %v, want %s; %.3f s off at %.3f arcsec/s", r.text("id"), r.text("kind"), i, got[i], w, off, rate)
			}
			if rate > 1 {
				seconds = append(seconds, off)
			}
			arcseconds = append(arcseconds, max(0, off-0.01)*rate)
		}
		switch standing := passes.Standing; {
		case r.text("kind") == "never_rises" && standing != NeverRises,
			r.text("kind") == "never_sets" && standing != NeverSets,
			strings.Contains(r.text("events"), "rise") && standing != RisesAndSets:
			t.Errorf("row %s (%s): %v", r.text("id"), r.text("kind"), standing)
		}
		startsUp := r.text("start_state") != "below"
		if passes.StartsUp != startsUp {
			t.Errorf("row %s: starts up %v, want %v", r.text("id"), passes.StartsUp, startsUp)
		}

		// The windows tell the same story.
		for _, w := range site.Windows(f, f.Place(target), start, end, lim) {
			middle := w.From.Add(w.To.Sub(w.From) / 2)
			if el := site.Look(f, f.Place(target), middle).ElDeg; el < lim.LowDeg || el > lim.HighDeg {
				t.Errorf("row %s: window %v holds elevation %g", r.text("id"), w, el)
			}
		}
	}
	seconds.judge(t, "crossings faster than 1 arcsec/s", "s", 0.02, 0.01)
	arcseconds.judge(t, "elevation at crossings, beyond the table's rounding", "arcsec", 0.05, 0.01)
}
