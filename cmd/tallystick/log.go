package main

import (
	"bytes"
	"fmt"
	"io"
	"os"
	"slices"
	"strconv"
	"strings"
	"time"

	"github.com/spf13/cobra"

	"example.org/tallystick/campaigns"
)

func (p *program) logCommand() *cobra.Command {
	c := &cobra.Command{
		Use:     "log COMMAND",
		Short:   "Write what was observed or lost into the logbook, and read it",
		Example: "  tallystick log show --source J0127+4811\n  tallystick log import night.csv",
		RunE: func(c *cobra.Command, args []string) error {
			found := "none"
			if len(args) > 0 {
				found = strconv.Quote(args[0])
			}
			return usagef("%s takes a command, found %s; accepted: add, import, show", c.CommandPath(), found)
		},
	}
	c.AddCommand(p.logAddCommand(), p.logImportCommand(), p.logShowCommand())
	return c
}

// mayLog refuses to write into what would be forgotten at once.
func (d *desk) mayLog() error {
	if d.Demo() {
		return fmt.Errorf("the demonstration is kept in memory, so nothing written would last; accepted: a campaign of your own, which begins with: tallystick new DIR")
	}
	return nil
}

// knows refuses an entry whose names the campaign does not have: it would never count.
func (d *desk) knows(e *campaigns.Entry) error {
	var receivers []string
	for _, r := range d.Campaign.Receivers {
		if r.Site == e.Site {
			receivers = append(receivers, r.Name)
		}
	}
	for _, n := range []struct {
		kind, name string
		known      []string
	}{{"site", e.Site, siteNames(d.Campaign)}, {"source", e.Source, sourceNames(d.Campaign)}, {"receiver", e.Receiver, receivers}} {
		if slices.Contains(n.known, n.name) {
			continue
		}
		hint := ""
		if meant := campaigns.Nearest(n.name, n.known); meant != "" {
			hint = fmt.Sprintf("; did you mean %q?", meant)
		}
		return fmt.Errorf("%s: found %q; accepted: a %s of the campaign%s", n.kind, n.name, n.kind, hint)
	}
	return nil
}

var outcomes = []string{string(campaigns.Done), string(campaigns.Partial), string(campaigns.Lost)}

// siteAt is the site of the session at a time, or the only site that there is.
func (d *desk) siteAt(at time.Time) (string, error) {
	var found []string
	for _, s := range d.Campaign.Sessions {
		if !at.Before(s.Start) && at.Before(s.End) && !slices.Contains(found, s.Site) {
			found = append(found, s.Site)
		}
	}
	if len(found) == 0 {
		found = siteNames(d.Campaign)
	}
	if len(found) != 1 {
		return "", usagef("--site: found none; accepted: one of %s", strings.Join(siteNames(d.Campaign), ", "))
	}
	return found[0], nil
}

func (p *program) logImportCommand() *cobra.Command {
	c := &cobra.Command{
		Use:   "import FILE",
		Short: "Append the entries of a CSV file with the logbook's columns",
		Long: "All of the file is taken or nothing: a line that cannot be read, or names what the campaign does not have, " +
			"is told and stops it. Entries that the logbook has already, word for word, are left out, so that a file can be imported again. " +
			"An entry with the same start, site, source and receiver as an earlier one corrects it. Columns that the logbook does not have are an error.",
		Example: "  tallystick log import night.csv\n  tallystick log import - < night.csv",
		Args:    oneArg,
		RunE:    func(_ *cobra.Command, args []string) error { return p.importLog(args[0]) },
	}
	p.campaignFlags(c)
	return c
}

func (p *program) importLog(path string) error {
	d, err := p.open()
	if err != nil {
		return err
	}
	if err := d.mayLog(); err != nil {
		return err
	}
	var data []byte
	if path == "-" {
		data, err = io.ReadAll(p.stdin)
	} else {
		data, err = os.ReadFile(path)
	}
	if err != nil {
		return err
	}
	read, faults := campaigns.ReadLogbook(bytes.NewReader(data), path)
	told := 0
	if more, have := read.MoreColumns(), d.Logbook.MoreColumns(); len(more) > 0 && !slices.Equal(more, have) {
		p.sayWrapped(fmt.Sprintf("%s: found the columns %s beside those that every logbook has; accepted: those of this logbook, %s",
			path, strings.Join(more, ","), strings.Join(d.Logbook.Header, ",")))
		told++
	}
	for _, f := range faults {
		p.say("%s", words(f.Error()))
		told++
	}
	if read.Torn != "" {
		p.say("%s: found a last line that is cut short; accepted: whole lines", path)
		told++
	}
	for _, e := range read.Entries {
		if err := d.knows(&e); err != nil {
			p.say("%s:%d: %s", path, e.Line, words(err.Error()))
			told++
		}
	}
	if told > 0 {
		p.say("nothing was written: %s to put right first", count(told, "fault"))
		return exitCode(exitNo)
	}
	fresh, known := d.Logbook.Unknown(read.Entries)
	if len(fresh) > 0 {
		if err := d.AppendLog(fresh); err != nil {
			return err
		}
	}
	text := count(len(fresh), "entry") + " written"
	if known > 0 {
		text += fmt.Sprintf(", %d in the logbook already", known)
	}
	p.say("%s", text)
	return nil
}

func (p *program) logShowCommand() *cobra.Command {
	var source, outcome, since, until string
	var every bool
	c := &cobra.Command{
		Use:   "show",
		Short: "Show the entries of the logbook that count, in order of their start",
		Long: "An entry that a later one corrects is left out, unless --every is given. " +
			"Columns of csv: " + strings.Join(campaigns.LogbookColumns(), ", ") + ".",
		Example: "  tallystick log show --since 2026-11-01\n  tallystick log show --source J0127+4811 --format csv --out j0127.csv",
		Args:    noArgs,
		RunE: func(*cobra.Command, []string) error {
			var from, to time.Time
			var err error
			if since != "" {
				if from, err = instant("--since", since); err != nil {
					return err
				}
			}
			if until != "" {
				if to, err = instant("--until", until); err != nil {
					return err
				}
			}
			d, err := p.open()
			if err != nil {
				return err
			}
			entries := d.Logbook.Effective()
			if every {
				entries = d.Logbook.Entries
			}
			entries = slices.DeleteFunc(slices.Clone(entries), func(e campaigns.Entry) bool {
				return source != "" && e.Source != source || outcome != "" && string(e.Outcome) != outcome ||
					!from.IsZero() && e.Start.Before(from) || !to.IsZero() && !e.Start.Before(to)
			})
			if source != "" && !slices.Contains(sourceNames(d.Campaign), source) {
				p.say("the campaign has no source %q%s", source, meant(source, sourceNames(d.Campaign)))
			}
			return p.deliver(func(w io.Writer) error {
				switch p.flags.format {
				case "csv":
					return logCSV(w, entries)
				case "json":
					return logJSON(w, d, entries)
				}
				return logText(w, entries)
			})
		},
	}
	p.campaignFlags(c)
	f := c.Flags()
	f.StringVar(&source, "source", "", "only of the source `NAME`")
	f.StringVar(&outcome, "outcome", "", "only what was so: `WHAT` is done, partial or lost")
	f.StringVar(&since, "since", "", "only what began at `TIME` or later")
	f.StringVar(&until, "until", "", "only what began before `TIME`")
	f.BoolVar(&every, "every", false, "every line, corrected ones too, in the order of the file")
	c.RegisterFlagCompletionFunc("source", p.completeFrom(sourceNames))
	c.RegisterFlagCompletionFunc("outcome", cobra.FixedCompletions(outcomes, cobra.ShellCompDirectiveNoFileComp))
	c.PreRunE = func(*cobra.Command, []string) error {
		if outcome == "" {
			return nil
		}
		return oneOf("--outcome", outcome, outcomes)
	}
	p.tableFlags(c, "text", "csv", "json")
	return c
}

func meant(name string, known []string) string {
	if near := campaigns.Nearest(name, known); near != "" {
		return fmt.Sprintf("; did you mean %q?", near)
	}
	return ""
}

func logCSV(w io.Writer, entries []campaigns.Entry) error {
	out := [][]string{campaigns.LogbookColumns()}
	for i := range entries {
		out = append(out, entries[i].Cells())
	}
	return printCSV(w, out)
}

func logText(w io.Writer, entries []campaigns.Entry) error {
	if len(entries) == 0 {
		_, err := io.WriteString(w, "No entries.\n")
		return err
	}
	columns := []column{{"UTC", 16, false}, {"Min", 4, true}, {"Source", 14, false}, {"Receiver", 8, false}, {"Outcome", 7, false}, {"Quality", 7, true}, {"S/N", 6, true}, {"TOA us", 7, true}}
	var rows [][]string
	for i := range entries {
		e := &entries[i]
		rows = append(rows, []string{
			e.Start.UTC().Format("2006-01-02 15:04"), fmt.Sprintf("%.0f", e.End.Sub(e.Start).Minutes()), words(e.Source), words(e.Receiver),
			string(e.Outcome), fmt.Sprintf("%.2f", e.Quality), figure(e.SNR), figure(e.ToaUs),
		})
		if e.Note != "" {
			rows = append(rows, remark("  note: ", e.Note))
		}
	}
	return printTable(w, columns, rows)
}

// figure writes what was measured; "-" where nothing was.
func figure(x float64) string {
	if x == 0 {
		return "-"
	}
	return strconv.FormatFloat(x, 'g', 4, 64)
}

type jsonEntry struct {
	StartUTC string   `json:"start_utc"`
	EndUTC   string   `json:"end_utc"`
	Site     string   `json:"site"`
	Source   string   `json:"source"`
	Receiver string   `json:"receiver"`
	Outcome  string   `json:"outcome"`
	Quality  float64  `json:"quality"`
	SNR      *float64 `json:"snr"`
	ToaUs    *float64 `json:"toa_us"`
	Note     string   `json:"note"`
}

func logJSON(w io.Writer, d *desk, entries []campaigns.Entry) error {
	out := struct {
		Format   int         `json:"format"`
		Version  string      `json:"version"`
		Campaign string      `json:"campaign"`
		Entries  []jsonEntry `json:"entries"`
	}{1, version(), d.Campaign.Name, []jsonEntry{}}
	given := func(x float64) *float64 {
		if x == 0 {
			return nil
		}
		return &x
	}
	for i := range entries {
		e := &entries[i]
		out.Entries = append(out.Entries, jsonEntry{
			utc(e.Start), utc(e.End), e.Site, e.Source, e.Receiver, string(e.Outcome), e.Quality, given(e.SNR), given(e.ToaUs), e.Note,
		})
	}
	return printJSON(w, out)
}
