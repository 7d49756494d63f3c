package main

import (
	"fmt"
	"io"
	"math"
	"strings"

	"github.com/spf13/cobra"

	"example.org/tallystick/campaigns"
)

func (p *program) conjunctionsCommand() *cobra.Command {
	site, days := "", 0
	c := &cobra.Command{
		Use:   "conjunctions",
		Short: "Show the coming conjunctions and eclipses of binaries above the site's horizon",
		Long: "Times are those of the observatory's clock. Superior: the pulsar is behind its companion. Usable means within " +
			"elevation limits, horizon mask and Sun limit; session is the one under way then. Of orbits under a day only " +
			"what falls in a session is listed.\n" +
			"A prediction is judged against the half-width of the source's conjunction aim, else against " +
			fmt.Sprintf("%g", campaigns.UnaimedHalfWidthTurns) + " turns: trustworthy where three sigma lie inside it, widened where one does, else " +
			"refused; unknown where the ephemeris gives no errors. Columns of csv: " + strings.Join(conjunctionsColumns, ", ") + ".",
		Example: "  tallystick conjunctions\n  tallystick conjunctions --days 60 --format csv --out conjunctions.csv",
		Args:    noArgs,
		RunE: func(*cobra.Command, []string) error {
			d, err := p.open()
			if err != nil {
				return err
			}
			place, err := d.findSite(site)
			if err != nil {
				return err
			}
			rows, short, err := campaigns.Conjunctions(d.Campaign, place, d.at, d.at.AddDate(0, 0, days))
			if err != nil {
				return err
			}
			t := conjunctionsTable{d, place, days, rows, short}
			return p.deliver(func(w io.Writer) error {
				switch p.flags.format {
				case "csv":
					return t.csv(w)
				case "json":
					return t.json(w)
				}
				return t.text(w)
			})
		},
	}
	p.campaignFlags(c)
	c.Flags().IntVar(&days, "days", 14, "how many days `N` from now on, 1 to 400")
	c.Flags().StringVar(&site, "site", "", "`NAME` of the site; without it that of the next session, else the first")
	c.RegisterFlagCompletionFunc("site", p.completeFrom(siteNames))
	c.PreRunE = func(*cobra.Command, []string) error {
		if days < 1 || days > 400 {
			return usagef("--days: found %d; accepted: 1 to 400", days)
		}
		return nil
	}
	p.tableFlags(c, "text", "csv", "json")
	return c
}

// Scripts rely on these columns: new ones go at the end.
var conjunctionsColumns = []string{"source", "kind", "time_utc", "sigma_min", "elevation_deg", "sun_separation_deg", "usable", "session"}

type conjunctionsTable struct {
	*desk
	site  *campaigns.Site
	days  int
	rows  []campaigns.ConjunctionRow
	short []string // sources of which only sessions are listed
}

// kindWords is what happens, and with which receiver where that matters.
func kindWords(r *campaigns.ConjunctionRow) string {
	if len(r.Receivers) == 0 {
		return string(r.Kind)
	}
	return string(r.Kind) + ", " + words(strings.Join(r.Receivers, "+"))
}

// sigmaMin is the error of a predicted time in minutes.
func sigmaMin(r *campaigns.ConjunctionRow) float64 { return r.Prediction.SigmaDays * 24 * 60 }

func (t conjunctionsTable) csv(w io.Writer) error {
	out := [][]string{conjunctionsColumns}
	for i := range t.rows {
		r := &t.rows[i]
		sigma := ""
		if r.SigmaKnown {
			sigma = fmt.Sprintf("%.6f", sigmaMin(r))
		}
		out = append(out, []string{
			r.Source, kindWords(r), utc(r.At), sigma, fmt.Sprintf("%.3f", r.ElevationDeg),
			fmt.Sprintf("%.3f", r.SunSeparationDeg), fmt.Sprint(r.Usable), r.Session,
		})
	}
	return printCSV(w, out)
}

func (t conjunctionsTable) text(w io.Writer) error {
	title := fmt.Sprintf("Conjunctions and eclipses above the horizon of %s, %s from %s UTC; times are the observatory's, UTC",
		t.site.Name, count(t.days, "day"), t.at.UTC().Format("2006-01-02 15:04"))
	if _, err := fmt.Fprintln(w, hanging("", words(title))); err != nil {
		return err
	}
	if len(t.rows) == 0 {
		if _, err := io.WriteString(w, "None.\n"); err != nil {
			return err
		}
		return t.notes(w)
	}
	columns := []column{{"UTC", 5, false}, {"Local", 5, false}, {"Source", 18, false}, {"What", 13, false}, {"+-min", 6, true}, {"El", 3, true}, {"Sun", 3, true}, {"Usable", 6, false}, {"Prediction", 12, false}}
	var out [][]string
	group := ""
	for i := range t.rows {
		r := &t.rows[i]
		if g := r.At.UTC().Format("2006-01-02 Monday") + ", " + sessionWords(r.Session); g != group {
			out, group = append(out, remark("", g)), g
		}
		use := "no"
		if r.Usable {
			use = "yes"
		}
		out = append(out, []string{
			r.At.UTC().Format("15:04"), r.At.In(t.site.TimeZone).Format("15:04"), words(r.Source), strings.TrimSuffix(kindWords(r), " conjunction"),
			shortSigma(r), fmt.Sprintf("%.0f", r.ElevationDeg), fmt.Sprintf("%.0f", r.SunSeparationDeg), use, r.Trust(),
		})
	}
	if err := printTable(w, columns, out); err != nil {
		return err
	}
	return t.notes(w)
}

func sessionWords(session string) string {
	if session == "" {
		return "no session"
	}
	return "session " + session
}

// shortSigma fits an error into its column.
func shortSigma(r *campaigns.ConjunctionRow) string {
	switch m := sigmaMin(r); {
	case !r.SigmaKnown:
		return "?"
	case m < 0.01:
		return "<0.01"
	case m < 100:
		return fmt.Sprintf("%.2f", m)
	case m < 1e6:
		return fmt.Sprintf("%.0f", m)
	}
	return ">1e6"
}

// notes say what is left out, and why predictions are not simply trusted.
func (t conjunctionsTable) notes(w io.Writer) error {
	var b strings.Builder
	if len(t.short) > 0 {
		b.WriteString("\n" + hanging("", words("Orbits under a day, listed within sessions only: "+strings.Join(t.short, ", ")+".")))
	}
	seen := map[string]bool{}
	for i := range t.rows {
		r := &t.rows[i]
		if r.Trust() == "trustworthy" || seen[r.Source] {
			continue
		}
		if len(seen) == 0 {
			b.WriteString("\n")
		}
		seen[r.Source] = true
		b.WriteString(hanging("", words(r.Source+": "+r.Why()+".")))
	}
	_, err := io.WriteString(w, b.String())
	return err
}

type jsonConjunction struct {
	Source           string   `json:"source"`
	Kind             string   `json:"kind"`
	TimeUTC          string   `json:"time_utc"`
	SigmaMin         *float64 `json:"sigma_min"`
	ElevationDeg     float64  `json:"elevation_deg"`
	SunSeparationDeg float64  `json:"sun_separation_deg"`
	Usable           bool     `json:"usable"`
	Session          *string  `json:"session"`
	Prediction       string   `json:"prediction"`
	Why              string   `json:"why"`
	Cautions         []string `json:"cautions"`
}

func (t conjunctionsTable) json(w io.Writer) error {
	out := struct {
		Format       int               `json:"format"`
		Version      string            `json:"version"`
		Campaign     string            `json:"campaign"`
		Site         string            `json:"site"`
		AtUTC        string            `json:"at_utc"`
		Days         int               `json:"days"`
		SessionsOnly []string          `json:"listed_within_sessions_only"`
		Conjunctions []jsonConjunction `json:"conjunctions"`
	}{1, version(), t.Campaign.Name, t.site.Name, utc(t.at), t.days, append([]string{}, t.short...), []jsonConjunction{}}
	for i := range t.rows {
		r := &t.rows[i]
		j := jsonConjunction{
			Source: r.Source, Kind: kindWords(r), TimeUTC: utc(r.At), ElevationDeg: round(r.ElevationDeg, 3),
			SunSeparationDeg: round(r.SunSeparationDeg, 3), Usable: r.Usable, Prediction: r.Trust(), Why: r.Why(), Cautions: []string{},
		}
		if r.SigmaKnown {
			sigma := round(math.Min(sigmaMin(r), 1e12), 6)
			j.SigmaMin = &sigma
		}
		if r.Session != "" {
			j.Session = &r.Session
		}
		for _, c := range r.Prediction.Cautions {
			j.Cautions = append(j.Cautions, string(c))
		}
		out.Conjunctions = append(out.Conjunctions, j)
	}
	return printJSON(w, out)
}
