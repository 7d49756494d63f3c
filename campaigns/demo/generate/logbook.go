package main

import (
	"encoding/csv"
	"fmt"
	"strconv"
	"strings"
	"time"
)

// logbookText writes the observations as the program itself would.
func logbookText(log []observation) string {
	var b strings.Builder
	w := csv.NewWriter(&b)
	lines := [][]string{{"start_utc", "end_utc", "site", "source", "receiver", "outcome", "quality", "snr", "toa_us", "note"}}
	for _, o := range log {
		lines = append(lines, []string{
			o.start.Format(time.RFC3339), o.end.Format(time.RFC3339), siteName, o.source, o.receiver,
			o.outcome, fmt.Sprintf("%.2f", o.quality), measured(o.snr), measured(o.toaUs), o.note,
		})
	}
	if err := w.WriteAll(lines); err != nil {
		panic(err) // a strings.Builder does not fail
	}
	return b.String()
}

// measured writes a number that may not have been measured.
func measured(x float64) string {
	if x == 0 {
		return ""
	}
	return strconv.FormatFloat(x, 'f', -1, 64)
}
