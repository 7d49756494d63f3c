package sky_test

import (
	"fmt"
	"time"

	"example.org/tallystick/sky"
)

// A source over an invented site, for one night.
func Example() {
	site, err := sky.NewSite(38.21, -4.63, 812, 0)
	if err != nil {
		fmt.Println(err)
		return
	}
	from := time.Date(2026, 12, 31, 18, 0, 0, 0, time.UTC)
	to := from.Add(14 * time.Hour)
	frame, err := sky.NewFrame(from.Add(7 * time.Hour))
	if err != nil {
		fmt.Println(err)
		return
	}
	mask, err := sky.MaskOf([][2]float64{{0, 9}, {60, 14.5}, {110, 8}})
	if err != nil {
		fmt.Println(err)
		return
	}
	mount := sky.Mount{Kind: sky.AltAz, TravelDeg: [2]float64{-270, 270}, RateDegPerMin: [2]float64{24, 12}}
	limits := mount.Limits(sky.Limits{LowDeg: 8, HighDeg: 87, Mask: mask, SunDeg: 5})

	place := frame.Place(sky.Target{RADeg: 155.5, DecDeg: 38.5})
	for _, w := range site.Windows(frame, place, from, to, limits) {
		fmt.Println(w.From.Format(time.DateTime), "to", w.To.Format(time.DateTime)+",", w.OpensBy, "to", w.ClosesBy)
	}
	for _, e := range site.Passes(frame, place, from, to, limits).Events {
		fmt.Printf("%s %v, elevation %.1f°\n", e.At.Format(time.TimeOnly), e.Kind, e.ElDeg)
	}
	// Output:
	// 2026-12-31 21:05:54 to 2027-01-01 03:44:33, horizon mask 13.7° to upper elevation limit 87°
	// 2027-01-01 04:15:00 to 2027-01-01 08:00:00, upper elevation limit 87° to end of the interval
	// 20:27:25 rise, elevation 8.0°
	// 03:44:33 above upper limit, elevation 87.0°
	// 03:59:46 transit, elevation 89.9°
	// 04:15:00 below upper limit, elevation 87.0°
}
