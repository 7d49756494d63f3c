package ui

import (
	"testing"
	"time"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/sched"
)

// A slot's minutes are told in minutes at the zenith where these are clearly fewer, or more, and never of a calibration.
func TestMinutesAreToldAsAtTheZenith(t *testing.T) {
	for _, c := range []struct {
		minutes, zenith float64
		must            bool
		want            string
	}{
		{30, 19.6, false, ", as good as 20 at the zenith"},
		{30, 36.2, false, ", as good as 36 at the zenith"},
		{30, 29.1, false, ""},
		{30, 30, false, ""},
		{5, 3, true, ""},
	} {
		start := time.Date(2026, 12, 3, 20, 0, 0, 0, time.UTC)
		row := campaigns.SlotRow{Start: start, End: start.Add(time.Duration(c.minutes) * time.Minute), ZenithMin: c.zenith}
		if got := asGoodAs(&row, &sched.Job{Must: c.must}); got != c.want {
			t.Errorf("%g min that count %g: %q, want %q", c.minutes, c.zenith, got, c.want)
		}
	}
}
