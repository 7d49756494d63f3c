package main

import (
	"fmt"
	"io"
	"strings"
	"time"

	"github.com/spf13/cobra"

	"example.org/tallystick/campaigns"
)

func (p *program) arrearsCommand() *cobra.Command {
	c := &cobra.Command{
		Use:   "arrears",
		Short: "Show who is overdue, by how much, why, and when each can next be observed",
		Long: "Debt counts cycles of an aim: 1 is due now, above 1 is overdue. " +
			"Columns of csv: " + strings.Join(arrearsColumns, ", ") + ".",
		Example: "  tallystick arrears\n  tallystick arrears --at 2026-12-03T15:00Z --format csv --out arrears.csv",
		Args:    noArgs,
		RunE: func(*cobra.Command, []string) error {
			d, err := p.open()
			if err != nil {
				return err
			}
			rows, err := campaigns.Arrears(d.Campaign, d.Logbook, d.at)
			if err != nil {
				return err
			}
			return p.deliver(func(w io.Writer) error {
				switch p.flags.format {
				case "csv":
					return arrearsCSV(w, rows)
				case "json":
					return arrearsJSON(w, d, rows)
				}
				return arrearsText(w, d, rows)
			})
		},
	}
	p.campaignFlags(c)
	p.tableFlags(c, "text", "csv", "json")
	return c
}

// Scripts rely on these columns: new ones go at the end.
var arrearsColumns = []string{"source", "aim", "receivers", "debt", "last_utc", "due_utc", "next_start_utc", "next_end_utc", "flags"}

func arrearsCSV(w io.Writer, rows []campaigns.AccountRow) error {
	out := [][]string{arrearsColumns}
	for _, r := range rows {
		out = append(out, []string{
			r.Source, r.Aim, strings.Join(r.Receivers, "+"), fmt.Sprintf("%.4f", r.Debt),
			utc(r.Last), utc(r.Due), utc(r.NextStart), utc(r.NextEnd), strings.Join(r.Flags, "; "),
		})
	}
	return printCSV(w, out)
}

func arrearsText(w io.Writer, d *desk, rows []campaigns.AccountRow) error {
	title := fmt.Sprintf("Arrears of %s at %s UTC, worst first; debt 1 = due now", d.Campaign.Name, d.at.UTC().Format("2006-01-02 15:04"))
	if _, err := fmt.Fprintln(w, hanging("", words(title))); err != nil {
		return err
	}
	columns := []column{{"Debt", 6, true}, {"Source", 14, false}, {"Aim", 22, false}, {"Last", 10, false}, {"Due", 10, false}, {"Next window, UTC", 13, false}}
	var out [][]string
	for _, r := range rows {
		out = append(out, []string{fmt.Sprintf("%.2f", r.Debt), words(r.Source), words(r.Aim), day(r.Last, "never"), day(r.Due, "-"), window(r.NextStart, r.NextEnd)})
		remarks := r.Why
		if len(r.Flags) > 0 {
			remarks = strings.Join(r.Flags, ", ") + "; " + remarks
		}
		out = append(out, remark("       ", remarks))
	}
	return printTable(w, columns, out)
}

type jsonAccount struct {
	Source      string   `json:"source"`
	Aim         string   `json:"aim"`
	Kind        string   `json:"kind"`
	Receivers   []string `json:"receivers"`
	Priority    float64  `json:"priority"`
	Debt        float64  `json:"debt"`
	LastUTC     *string  `json:"last_utc"`
	DueUTC      *string  `json:"due_utc"`
	NextStart   *string  `json:"next_start_utc"`
	NextEnd     *string  `json:"next_end_utc"`
	NextSession string   `json:"next_session"`
	Flags       []string `json:"flags"`
	Why         string   `json:"why"`
}

func arrearsJSON(w io.Writer, d *desk, rows []campaigns.AccountRow) error {
	out := struct {
		Format   int           `json:"format"`
		Version  string        `json:"version"`
		Campaign string        `json:"campaign"`
		AtUTC    string        `json:"at_utc"`
		Accounts []jsonAccount `json:"accounts"`
	}{1, version(), d.Campaign.Name, utc(d.at), []jsonAccount{}}
	for _, r := range rows {
		out.Accounts = append(out.Accounts, jsonAccount{
			r.Source, r.Aim, string(r.Kind), append([]string{}, r.Receivers...), r.Priority, round(r.Debt, 4),
			maybe(r.Last), maybe(r.Due), maybe(r.NextStart), maybe(r.NextEnd), r.NextSession, append([]string{}, r.Flags...), r.Why,
		})
	}
	return printJSON(w, out)
}

// utc writes an instant for scripts: empty when there is none.
func utc(t time.Time) string {
	if t.IsZero() {
		return ""
	}
	return t.UTC().Format(time.RFC3339)
}

func maybe(t time.Time) *string {
	if t.IsZero() {
		return nil
	}
	s := utc(t)
	return &s
}

// day writes a date, or the word for there being none.
func day(t time.Time, none string) string {
	if t.IsZero() {
		return none
	}
	return t.UTC().Format(time.DateOnly)
}

// window puts a date over the hours, to fit a narrow column.
func window(start, end time.Time) string {
	if start.IsZero() {
		return "none"
	}
	return start.UTC().Format(time.DateOnly) + " " + start.UTC().Format("15:04") + "-" + end.UTC().Format("15:04")
}
