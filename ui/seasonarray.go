package ui

import (
	"fmt"
	"math"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/ui/theme"
)

// arrayPage compares the hours planned on each pulsar with the best division; its first row is all of them together.
func arrayPage(s *campaigns.Season) seasonTable {
	f := &s.Array
	t := seasonTable{
		cells: [][]string{{"all", "", "", "", "", "", fmt.Sprintf("%.1f", f.TotalH), fmt.Sprintf("%.1f", f.TotalH), "", ""}}, inks: []theme.Ink{theme.Strong}, sources: []string{""},
		lines: func(i int) (string, []line) {
			if i == 0 {
				return arrayLines(f)
			}
			return arrayRowLines(&f.Rows[i-1])
		},
	}
	for i := range f.Rows {
		r := &f.Rows[i]
		floor := "none"
		if r.FloorUs > 0 {
			floor = fmt.Sprintf("%.3g", r.FloorUs)
		}
		t.cells = append(t.cells, []string{
			r.Source, r.Receiver, fmt.Sprintf("%.3g", r.HourErrorUs), floor, fmt.Sprintf("%.1f", r.UpH), fmt.Sprintf("%.2f", r.LeastH),
			fmt.Sprintf("%.2f", r.PlannedH), fmt.Sprintf("%.2f", r.BestH), errorWords(r.PlannedUs), errorWords(r.BestUs),
		})
		t.inks = append(t.inks, theme.Plain)
		t.sources = append(t.sources, r.Source)
	}
	return t
}

// errorWords writes an error, or a dash where nothing is observed.
func errorWords(us float64) string {
	if math.IsInf(us, 0) {
		return "-"
	}
	return fmt.Sprintf("%.3g", us)
}

// arrayLines are what the hours of all pulsars together buy.
func arrayLines(f *campaigns.ArrayForecast) (string, []line) {
	title := fmt.Sprintf("%s together", count(len(f.Rows), "pulsar"))
	if len(f.Rows) == 0 {
		return title, []line{{label: "left out", text: f.LeftOutWords()}}
	}
	lines := []line{
		{label: "sources", text: f.SumWords()},
		{label: "pairs", text: f.PairWords()},
		{label: "best", text: "is so divided that one hour more is worth the same on every pulsar; advice for asking for time, no plan follows it"},
		{label: "least", text: f.LeastWords()},
		{label: "left out", text: f.LeftOutWords()},
		{label: "assumed", text: f.AssumedWords()},
		{label: "gains", text: f.GainWords()},
	}
	for _, g := range f.Gains {
		lines = append(lines, line{label: fmt.Sprintf("%.2f, %.2f", g.Weak, g.Intermediate), text: g.What})
	}
	return title, lines
}

func arrayRowLines(r *campaigns.ArrayRow) (string, []line) {
	floor := "no floor stated"
	if r.FloorUs > 0 {
		floor = fmt.Sprintf("floor %.3g µs", r.FloorUs)
	}
	return r.Source + ", its hours", []line{
		{label: "hours", text: fmt.Sprintf("%.2f planned, %.2f at best: %+.2f; it keeps %.2f in any case", r.PlannedH, r.BestH, r.BestH-r.PlannedH, r.LeastH)},
		{label: "TOA error", text: fmt.Sprintf("%s µs as planned, %s at best", errorWords(r.PlannedUs), errorWords(r.BestUs))},
		{label: "one hour", text: fmt.Sprintf("with %s at %s: %.3g µs from noise and jitter at its elevations in the sessions; %s", r.Receiver, r.Site, r.HourErrorUs, floor)},
		{label: "up", text: fmt.Sprintf("%.1f h of the sessions, the most that it can have", r.UpH)},
	}
}
