package main

import (
	"fmt"
	"io"
	"strings"
	"time"

	"github.com/spf13/cobra"

	"example.org/tallystick/campaigns"
)

func (p *program) passesCommand() *cobra.Command {
	site := ""
	c := &cobra.Command{
		Use:   "passes SOURCE",
		Short: "Show when a source rises, transits and sets, and when it can be used",
		Long: "Usable means within elevation limits, horizon mask and Sun limit; receivers, sessions and the cable aside. " +
			"A pass that is cut in several windows has several lines. Columns of csv: " + strings.Join(passesColumns, ", ") + ".",
		Example:           "  tallystick passes J0512+1730\n  tallystick passes J0512+1730 --days 30 --format csv",
		Args:              oneArg,
		ValidArgsFunction: p.completeFrom(sourceNames),
		RunE: func(_ *cobra.Command, args []string) error {
			d, err := p.open()
			if err != nil {
				return err
			}
			source, err := findSource(d.Campaign, args[0])
			if err != nil {
				return err
			}
			place, err := d.findSite(site)
			if err != nil {
				return err
			}
			rows, err := campaigns.Passes(place, source, d.at, d.at.AddDate(0, 0, p.flags.days))
			if err != nil {
				return err
			}
			if len(rows) == 0 {
				return fmt.Errorf("%s does not rise above %g deg at %s within %s", source.Name, place.ElevationLimitsDeg[0], place.Name, count(p.flags.days, "day"))
			}
			return p.deliver(func(w io.Writer) error {
				switch p.flags.format {
				case "csv":
					return passesCSV(w, source.Name, rows)
				case "json":
					return passesJSON(w, d, place, source.Name, rows)
				}
				return passesText(w, place, source.Name, rows)
			})
		},
	}
	p.campaignFlags(c)
	c.Flags().IntVar(&p.flags.days, "days", 7, "how many days `N` from now on, 1 to 400")
	c.Flags().StringVar(&site, "site", "", "`NAME` of the site; without it that of the next session, else the first")
	c.RegisterFlagCompletionFunc("site", p.completeFrom(siteNames))
	c.PreRunE = func(*cobra.Command, []string) error {
		if p.flags.days < 1 || p.flags.days > 400 {
			return usagef("--days: found %d; accepted: 1 to 400", p.flags.days)
		}
		return nil
	}
	p.tableFlags(c, "text", "csv", "json")
	return c
}

// Scripts rely on these columns: new ones go at the end.
var passesColumns = []string{"source", "rise_utc", "transit_utc", "set_utc", "usable_start_utc", "usable_end_utc", "limited_by"}

func findSource(c *campaigns.Campaign, name string) (*campaigns.Source, error) {
	for i := range c.Sources {
		if c.Sources[i].Name == name {
			return &c.Sources[i], nil
		}
	}
	return nil, notFound("source", name, sourceNames(c))
}

// findSite finds a site by its name; without one it is that of the next session, or the first.
func (d *desk) findSite(name string) (*campaigns.Site, error) {
	if name == "" {
		name = d.Campaign.Sites[0].Name
		if next, err := d.Campaign.Session(campaigns.NextSession, d.at); err == nil {
			name = next.Site
		}
	}
	for i := range d.Campaign.Sites {
		if d.Campaign.Sites[i].Name == name {
			return &d.Campaign.Sites[i], nil
		}
	}
	return nil, notFound("site", name, siteNames(d.Campaign))
}

func notFound(kind, name string, known []string) error {
	if meant := campaigns.Nearest(name, known); meant != "" {
		return fmt.Errorf("found no %s %q; did you mean %q?", kind, name, meant)
	}
	return fmt.Errorf("found no %s %q; the campaign has %s", kind, name, strings.Join(known, ", "))
}

func passesCSV(w io.Writer, source string, rows []campaigns.PassRow) error {
	out := [][]string{passesColumns}
	for _, r := range rows {
		out = append(out, []string{source, utc(r.Rise), utc(r.Transit), utc(r.Set), utc(r.UsableStart), utc(r.UsableEnd), r.LimitedBy})
	}
	return printCSV(w, out)
}

func passesText(w io.Writer, site *campaigns.Site, source string, rows []campaigns.PassRow) error {
	if _, err := fmt.Fprint(w, hanging("", words(fmt.Sprintf("Passes of %s over %s; elevation limits %g to %g deg, %s; all times UTC", source, site.Name, site.ElevationLimitsDeg[0], site.ElevationLimitsDeg[1], site.Air()))), "\n"); err != nil {
		return err
	}
	columns := []column{{"Transit", 16, false}, {"El", 4, true}, {"Rise", 5, true}, {"Set", 5, true}, {"Usable", 13, false}, {"Limited by", 31, false}}
	var out [][]string
	for _, r := range rows {
		out = append(out, []string{
			r.Transit.UTC().Format("2006-01-02 15:04"), fmt.Sprintf("%.1f", r.HighestDeg), hour(r.Rise), hour(r.Set),
			hours(r.UsableStart, r.UsableEnd), words(strings.ReplaceAll(r.LimitedBy, "horizon mask", "mask")),
		})
	}
	return printTable(w, columns, out)
}

func hour(t time.Time) string {
	if t.IsZero() {
		return "-"
	}
	return t.UTC().Format("15:04")
}

func hours(start, end time.Time) string {
	if start.IsZero() {
		return "not usable"
	}
	return hour(start) + " - " + hour(end)
}

type jsonPass struct {
	RiseUTC     *string `json:"rise_utc"`
	TransitUTC  *string `json:"transit_utc"`
	SetUTC      *string `json:"set_utc"`
	UsableStart *string `json:"usable_start_utc"`
	UsableEnd   *string `json:"usable_end_utc"`
	HighestDeg  float64 `json:"highest_deg"`
	LimitedBy   string  `json:"limited_by"`
}

func passesJSON(w io.Writer, d *desk, site *campaigns.Site, source string, rows []campaigns.PassRow) error {
	out := struct {
		Format   int        `json:"format"`
		Version  string     `json:"version"`
		Campaign string     `json:"campaign"`
		Site     string     `json:"site"`
		Source   string     `json:"source"`
		AtUTC    string     `json:"at_utc"`
		Passes   []jsonPass `json:"passes"`
	}{1, version(), d.Campaign.Name, site.Name, source, utc(d.at), []jsonPass{}}
	for _, r := range rows {
		out.Passes = append(out.Passes, jsonPass{maybe(r.Rise), maybe(r.Transit), maybe(r.Set), maybe(r.UsableStart), maybe(r.UsableEnd), round(r.HighestDeg, 3), r.LimitedBy})
	}
	return printJSON(w, out)
}
