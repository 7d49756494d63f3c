package main

import (
	"fmt"
	"io"
	"math"

	"example.org/tallystick/campaigns"
)

func arrayText(w io.Writer, s *campaigns.Season) error {
	f := &s.Array
	head := fmt.Sprintf("All pulsars together: %.1f h planned on %s", f.TotalH, count(len(f.Rows), "source"))
	if len(f.Rows) == 0 {
		head = "All pulsars together: of none enough is known to say what its hours buy"
	}
	fmt.Fprint(w, hanging("", words(head)))
	if len(f.Rows) > 0 {
		if err := arrayTable(w, f); err != nil {
			return err
		}
		fmt.Fprint(w, hanging("At best: ", words("so divided that one hour more is worth the same on every pulsar. It is advice for asking for time, and no plan follows it.")))
		fmt.Fprint(w, hanging("In any case: ", words(f.LeastWords()+".")))
		fmt.Fprint(w, hanging("Single sources: ", words(f.SumWords()+".")))
		fmt.Fprint(w, hanging("All pairs: ", words(f.PairWords()+".")))
		fmt.Fprint(w, hanging("Assumed: ", words(f.AssumedWords()+".")))
		if err := gainsTable(w, f); err != nil {
			return err
		}
	}
	_, err := io.WriteString(w, hanging("Left out: ", words(f.LeftOutWords()+".")))
	return err
}

func arrayTable(w io.Writer, f *campaigns.ArrayForecast) error {
	columns := []column{{"Source", 14, false}, {"Rcvr", 4, false}, {words("1 h, µs"), 8, true}, {"Floor", 6, true}, {"Up h", 5, true}, {"Planned h", 9, true}, {"At best", 7, true}, {words("Error, µs"), 9, true}, {"At best", 7, true}}
	var rows [][]string
	for i := range f.Rows {
		r := &f.Rows[i]
		floor := "none"
		if r.FloorUs > 0 {
			floor = fmt.Sprintf("%.3g", r.FloorUs)
		}
		rows = append(rows, []string{
			words(r.Source), words(r.Receiver), fmt.Sprintf("%.3g", r.HourErrorUs), floor, fmt.Sprintf("%.1f", r.UpH),
			fmt.Sprintf("%.2f", r.PlannedH), fmt.Sprintf("%.2f", r.BestH), finite("%.3g", r.PlannedUs, "-"), finite("%.3g", r.BestUs, "-"),
		})
	}
	return printTable(w, columns, rows)
}

func gainsTable(w io.Writer, f *campaigns.ArrayForecast) error {
	fmt.Fprint(w, hanging("Gains: ", words(f.GainWords()+".")))
	var rows [][]string
	for _, g := range f.Gains {
		rows = append(rows, []string{g.What, fmt.Sprintf("%.2f", g.Weak), fmt.Sprintf("%.2f", g.Intermediate)})
	}
	return printTable(w, []column{{"What more would gain", 20, false}, {"Below noise", 11, true}, {"Above", 7, true}}, rows)
}

// finite writes a number, or what stands for an infinite one.
func finite(format string, v float64, otherwise string) string {
	if math.IsInf(v, 0) {
		return otherwise
	}
	return fmt.Sprintf(format, v)
}

// arrayCells are the rows of csv: pulsars with their hours, then those left out with the reason.
func arrayCells(f *campaigns.ArrayForecast) [][]string {
	var out [][]string
	for i := range f.Rows {
		r := &f.Rows[i]
		out = append(out, []string{
			r.Source, r.Site, r.Receiver, fmt.Sprintf("%.5g", r.HourErrorUs), fmt.Sprintf("%g", r.FloorUs), fmt.Sprintf("%.3f", r.UpH),
			fmt.Sprintf("%.3f", r.LeastH), fmt.Sprintf("%.3f", r.PlannedH), fmt.Sprintf("%.3f", r.BestH),
			finite("%.5g", r.PlannedUs, ""), finite("%.5g", r.BestUs, ""), "",
		})
	}
	for _, l := range f.LeftOut {
		out = append(out, []string{l.Source, "", "", "", "", "", "", "", "", "", "", l.Reason})
	}
	return out
}

type jsonArray struct {
	TotalH          float64         `json:"total_h"`
	Least           string          `json:"least"`
	CadencesH       float64         `json:"cadences_h"`
	PlannedPerUs2   float64         `json:"planned_per_us2"`
	BestPerUs2      float64         `json:"best_per_us2"`
	PlannedPairs    float64         `json:"planned_pairs_per_us2"`
	BestPairs       float64         `json:"best_pairs_per_us2"`
	HourMorePercent float64         `json:"hour_more_percent"`
	Pairs           int             `json:"pairs"`
	NearPairs       int             `json:"near_pairs"`
	NearShare       float64         `json:"near_share"`
	Gains           []jsonGain      `json:"gains"`
	Sources         []jsonArrayRow  `json:"sources"`
	LeftOut         []jsonArrayLeft `json:"left_out"`
}

type jsonGain struct {
	What         string  `json:"what"`
	Weak         float64 `json:"weak"`
	Intermediate float64 `json:"intermediate"`
}

type jsonArrayRow struct {
	Source      string   `json:"source"`
	Site        string   `json:"site"`
	Receiver    string   `json:"receiver"`
	HourErrorUs float64  `json:"hour_error_us"`
	FloorUs     float64  `json:"floor_us"`
	UpH         float64  `json:"up_h"`
	LeastH      float64  `json:"least_h"`
	PlannedH    float64  `json:"planned_h"`
	BestH       float64  `json:"best_h"`
	PlannedUs   *float64 `json:"planned_us"`
	BestUs      *float64 `json:"best_us"`
}

type jsonArrayLeft struct {
	Source string `json:"source"`
	Reason string `json:"reason"`
}

func arrayJSON(f *campaigns.ArrayForecast) jsonArray {
	out := jsonArray{
		TotalH: round(f.TotalH, 3), Least: string(f.Least), CadencesH: round(f.CadencesH, 3),
		PlannedPerUs2: digits(f.Planned.SumPerUs2), BestPerUs2: digits(f.Best.SumPerUs2),
		PlannedPairs: digits(f.Planned.PairPerUs2), BestPairs: digits(f.Best.PairPerUs2),
		HourMorePercent: round(100*f.HourMore, 3), Pairs: f.Pairs, NearPairs: f.NearPairs, NearShare: round(f.NearShare, 4),
		Gains: []jsonGain{}, Sources: []jsonArrayRow{}, LeftOut: []jsonArrayLeft{},
	}
	for _, g := range f.Gains {
		out.Gains = append(out.Gains, jsonGain{g.What, round(g.Weak, 4), round(g.Intermediate, 4)})
	}
	for i := range f.Rows {
		r := &f.Rows[i]
		out.Sources = append(out.Sources, jsonArrayRow{
			r.Source, r.Site, r.Receiver, digits(r.HourErrorUs), r.FloorUs, round(r.UpH, 3), round(r.LeastH, 3),
			round(r.PlannedH, 3), round(r.BestH, 3), maybeNumber(r.PlannedUs), maybeNumber(r.BestUs),
		})
	}
	for _, l := range f.LeftOut {
		out.LeftOut = append(out.LeftOut, jsonArrayLeft{l.Source, l.Reason})
	}
	return out
}

// digits keeps six of a number's digits, however large or small it is.
func digits(v float64) float64 {
	if v == 0 {
		return 0
	}
	scale := math.Pow10(5 - int(math.Floor(math.Log10(math.Abs(v)))))
	return math.Round(v*scale) / scale
}

func maybeNumber(v float64) *float64 {
	if math.IsInf(v, 0) {
		return nil
	}
	v = digits(v)
	return &v
}
