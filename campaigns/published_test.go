package campaigns

import (
	"strings"
	"testing"
	"time"

	"example.org/tallystick/sky"
	"example.org/tallystick/sky/outside"
)

// A publishedConjunction is one of a published orbit, at the clock of an observatory in the middle of the Earth, by
// another program's light times.
type publishedConjunction struct {
	outside.Row
	target sky.Target
	// The rows leave the binary's own light time out, so the orbit has no size here.
	orbit         Orbit
	at            time.Time
	elongationDeg float64
}

func publishedConjunctions(t *testing.T) (all []publishedConjunction) {
	t.Helper()
	for _, r := range outside.Rows(t, "barycentre.csv", "BAR-011", "BAR-015", "BAR-017") {
		_, note, _ := strings.Cut(r.Note, "solar elongation ")
		elongation, _, _ := strings.Cut(note, " ")
		all = append(all, publishedConjunction{
			Row: r, target: sky.Target{RADeg: r.Num("ra_deg"), DecDeg: r.Num("dec_deg")},
			orbit: Orbit{PeriodDays: r.Num("PB"), AscendingNodeMJD: r.Num("TASC"), Decay: r.Num("PBDOT")},
			at:    sky.TimeOfMJD(r.Want()), elongationDeg: number(t, elongation),
		})
	}
	return all
}
