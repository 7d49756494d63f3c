package main

import (
	"context"
	"fmt"
	"io"
	"runtime"
	"strings"

	"github.com/spf13/cobra"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/ui/cell"
)

// seasonTables are what a season comes to, each a table of its own in csv.
var seasonTables = []string{"cadences", "sessions", "lst", "connect", "sun", "debts", "array", "repeats"}

func (p *program) seasonCommand() *cobra.Command {
	table := seasonTables[0]
	c := &cobra.Command{
		Use:   "season",
		Short: "Play all coming sessions forward: what is kept, missed, and to be asked for",
		Long: "Plans every coming session in turn, with all that was planned before it taken as observed. Saved plans are not looked " +
			"at and nothing is ever lost, so this is the best to be hoped for.\n" +
			"A cadence is kept if it is never overdue, late if it is overdue for a while, missed if it is overdue at the end. " +
			"Hours wanted are those of visits that fall due, missing phase coverage and passages, and calibration, at the zenith with " +
			"set-up and without slews, put where time is granted while the source is within limits; what finds no room is spread evenly " +
			"over the sidereal time in which it is up, and asked for. Measure and connect aims ask for none, and of aims that one slot can serve at once the largest counts.\n" +
			"The array's table compares the hours planned on each pulsar with the division of as many in which one hour more is worth the " +
			"same on every pulsar; each keeps at least what its cadences and its count of turns need, where the hours cover that. It is advice for asking for time; no plan follows it.\n" +
			"An orbit keeps step with the days when transits show the same parts of it, at most six, for two months or more.\n" +
			"Columns of csv:\n" + seasonColumnWords("\n"),
		Example: "  tallystick season\n  tallystick season --table lst --format csv --out hours.csv",
		Args:    noArgs,
		RunE: func(*cobra.Command, []string) error {
			d, err := p.open()
			if err != nil {
				return err
			}
			s, err := campaigns.PlaySeason(context.Background(), d.Campaign, d.Logbook, d.at, campaigns.SeasonOptions{Workers: runtime.GOMAXPROCS(0)})
			if err != nil {
				return err
			}
			return p.deliver(func(w io.Writer) error {
				switch p.flags.format {
				case "csv":
					return seasonCSV(w, s, table)
				case "json":
					return seasonJSON(w, d, s)
				}
				return seasonText(w, d, s)
			})
		},
	}
	p.campaignFlags(c)
	c.Flags().StringVar(&table, "table", table, "`TABLE` to write as csv: "+strings.Join(seasonTables, ", "))
	c.RegisterFlagCompletionFunc("table", cobra.FixedCompletions(seasonTables, cobra.ShellCompDirectiveNoFileComp))
	c.PreRunE = func(*cobra.Command, []string) error { return oneOf("--table", table, seasonTables) }
	p.tableFlags(c, "text", "csv", "json")
	return c
}

// Scripts rely on these columns: new ones go at the end.
var seasonColumns = map[string][]string{
	"cadences": {"source", "aim", "receivers", "outcome", "due", "planned", "overdue_days", "debt_now", "debt_worst", "debt_end", "sessions_up"},
	"sessions": {"session", "site", "start_utc", "end_utc", "granted_h", "on_source_h", "slots", "worth", "overdue"},
	"lst":      {"site", "lst_h", "wanted_h", "granted_h", "planned_h", "ask_h"},
	"connect":  {"source", "limit_turns", "by_utc", "planned_utc", "lost", "by_at_end_utc"},
	"sun":      {"source", "limit_deg", "from_utc", "to_utc", "closest_utc", "closest_deg"},
	"debts":    {"source", "aim", "receivers", "debt_end", "last_utc", "due_utc", "flags"},
	"repeats":  {"source", "site", "step_turns", "parts", "part_turns", "seen_share", "days"},
	"array":    {"source", "site", "receiver", "hour_error_us", "floor_us", "up_h", "least_h", "planned_h", "best_h", "planned_us", "best_us", "left_out"},
}

func seasonColumnWords(sep string) string {
	var all []string
	for _, t := range seasonTables {
		all = append(all, t+": "+strings.Join(seasonColumns[t], ", "))
	}
	return strings.Join(all, sep)
}

func seasonCSV(w io.Writer, s *campaigns.Season, table string) error {
	out := [][]string{seasonColumns[table]}
	switch table {
	case "cadences":
		for _, c := range s.Cadences {
			out = append(out, []string{
				c.Source, c.Aim, strings.Join(c.Receivers, "+"), string(c.Outcome), fmt.Sprint(c.Due), fmt.Sprint(c.Planned),
				fmt.Sprint(c.OverdueDays), fmt.Sprintf("%.4f", c.DebtNow), fmt.Sprintf("%.4f", c.DebtWorst), fmt.Sprintf("%.4f", c.DebtEnd),
				fmt.Sprint(c.Up),
			})
		}
	case "sessions":
		for _, x := range s.Sessions {
			out = append(out, []string{
				x.Session.Name, x.Session.Site, utc(x.Session.Start), utc(x.Session.End), fmt.Sprintf("%.3f", x.Hours),
				fmt.Sprintf("%.3f", float64(x.OnSourceMin)/60), fmt.Sprint(len(x.Rows)), fmt.Sprintf("%.4f", x.Worth), fmt.Sprint(x.Overdue),
			})
		}
	case "lst":
		for i := range s.Pressure {
			l := &s.Pressure[i]
			ask := l.AskH()
			for h := range ask {
				out = append(out, []string{
					l.Site, fmt.Sprint(h), fmt.Sprintf("%.3f", l.WantedH[h]), fmt.Sprintf("%.3f", l.GrantedH[h]),
					fmt.Sprintf("%.3f", l.PlannedH[h]), fmt.Sprintf("%.3f", ask[h]),
				})
			}
		}
	case "connect":
		for i := range s.Connects {
			c := &s.Connects[i]
			out = append(out, []string{c.Source, fmt.Sprintf("%g", c.LimitTurns), utc(c.By), utc(c.Planned), fmt.Sprint(c.Lost), utc(c.ByAtEnd)})
		}
	case "sun":
		for _, g := range s.Sun {
			out = append(out, []string{
				g.Source, fmt.Sprintf("%g", g.LimitDeg), utc(g.From), utc(g.To), utc(g.ClosestAt), fmt.Sprintf("%.3f", g.ClosestDeg),
			})
		}
	case "debts":
		for _, r := range s.Debts {
			out = append(out, []string{
				r.Source, r.Aim, strings.Join(r.Receivers, "+"), fmt.Sprintf("%.4f", r.Debt), utc(r.Last), utc(r.Due), strings.Join(r.Flags, "; "),
			})
		}
	case "repeats":
		for i := range s.Repeats {
			r := &s.Repeats[i]
			out = append(out, []string{
				r.Source, r.Site, fmt.Sprintf("%.5f", r.StepTurns), fmt.Sprint(r.Parts), fmt.Sprintf("%.4f", r.PartTurns),
				fmt.Sprintf("%.4f", r.SeenShare()), fmt.Sprintf("%.0f", r.Days),
			})
		}
	case "array":
		out = append(out, arrayCells(&s.Array)...)
	}
	return printCSV(w, out)
}

func seasonText(w io.Writer, d *desk, s *campaigns.Season) error {
	var b strings.Builder
	title := fmt.Sprintf("Season of %s, %s to %s UTC: %s, each planned quickly and taken as observed", d.Campaign.Name,
		s.From.UTC().Format("2006-01-02 15:04"), s.To.UTC().Format("2006-01-02 15:04"), count(len(s.Sessions), "session"))
	b.WriteString(hanging("", words(title)))
	for _, part := range []func(io.Writer, *campaigns.Season) error{
		sessionsText, cadencesText, debtsText, connectsText, lstText, sunText, repeatsText, arrayText,
	} {
		b.WriteString("\n")
		if err := part(&b, s); err != nil {
			return err
		}
	}
	if len(s.Unserved) > 0 {
		b.WriteString("\n" + hanging("", words("No coming session mounts these receivers that aims ask for: "+strings.Join(s.Unserved, ", ")+".")))
	}
	_, err := io.WriteString(w, b.String())
	return err
}

func sessionsText(w io.Writer, s *campaigns.Season) error {
	columns := []column{{"Session", 22, false}, {"Start, UTC", 16, false}, {"Hours", 5, true}, {"On source", 9, true}, {"Slots", 5, true}, {"Worth", 7, true}, {"Overdue", 7, true}}
	var rows [][]string
	for _, x := range s.Sessions {
		rows = append(rows, []string{
			words(x.Session.Name), x.Session.Start.UTC().Format("2006-01-02 15:04"), fmt.Sprintf("%.1f", x.Hours),
			fmt.Sprintf("%.1f h", float64(x.OnSourceMin)/60), fmt.Sprint(len(x.Rows)), fmt.Sprintf("%.2f", x.Worth), fmt.Sprint(x.Overdue),
		})
	}
	if err := printTable(w, columns, rows); err != nil {
		return err
	}
	_, err := io.WriteString(w, "Overdue: cadences that are overdue when the session starts.\n")
	return err
}

// outcomeCounts counts the cadences of each outcome.
func outcomeCounts(s *campaigns.Season) map[campaigns.CadenceOutcome]int {
	n := map[campaigns.CadenceOutcome]int{}
	for _, c := range s.Cadences {
		n[c.Outcome]++
	}
	return n
}

func cadencesText(w io.Writer, s *campaigns.Season) error {
	n := outcomeCounts(s)
	fmt.Fprintf(w, "%s: %d kept, %d late, %d missed\n", count(len(s.Cadences), "cadence"), n[campaigns.CadenceKept], n[campaigns.CadenceLate], n[campaigns.CadenceMissed])
	columns := []column{{"Outcome", 7, false}, {"Source", 14, false}, {"Aim", 19, false}, {"Up", 3, true}, {"Due", 3, true}, {"Planned", 7, true}, {"Overdue", 7, true}, {"Debt", 6, true}, {"At end", 6, true}}
	var rows [][]string
	for _, c := range s.Cadences {
		rows = append(rows, []string{
			string(c.Outcome), words(c.Source), words(c.Aim), fmt.Sprint(c.Up), fmt.Sprint(c.Due), fmt.Sprint(c.Planned), fmt.Sprintf("%d d", c.OverdueDays),
			fmt.Sprintf("%.2f", c.DebtNow), fmt.Sprintf("%.2f", c.DebtEnd),
		})
	}
	if err := printTable(w, columns, rows); err != nil {
		return err
	}
	_, err := io.WriteString(w, "Up: sessions in which it could be observed. Due and planned are visits. Overdue:\ndays with a debt above 1.\n")
	return err
}

// debtsText tells the other accounts: cadences and counts of turns have their own tables.
func debtsText(w io.Writer, s *campaigns.Season) error {
	columns := []column{{"Debt", 5, true}, {"Source", 14, false}, {"Aim", 26, false}, {"Why", 32, false}}
	var rows [][]string
	for _, r := range s.Debts {
		if r.Kind != campaigns.Cadence && r.Kind != campaigns.Connect && r.Kind != campaigns.Calibration && r.Debt > 0 {
			rows = append(rows, []string{fmt.Sprintf("%.2f", r.Debt), words(r.Source), words(r.Aim), words(r.Why)})
		}
	}
	if _, err := fmt.Fprintln(w, "Other accounts at the end of the season"); err != nil {
		return err
	}
	if len(rows) == 0 {
		_, err := fmt.Fprintln(w, "All settled.")
		return err
	}
	return printTable(w, columns, rows)
}

func connectsText(w io.Writer, s *campaigns.Season) error {
	columns := []column{{"Source", 14, false}, {"Observe by", 10, false}, {"Planned", 10, false}, {"Count", 7, false}, {"Then by", 12, false}}
	var rows [][]string
	for i := range s.Connects {
		c := &s.Connects[i]
		if c.By.IsZero() {
			continue
		}
		verdict := "kept"
		if c.Lost {
			verdict = "at risk"
		}
		rows = append(rows, []string{words(c.Source), day(c.By, ""), day(c.Planned, "never"), verdict, day(c.ByAtEnd, "no date")})
	}
	if _, err := fmt.Fprintf(w, "Counts of turns that need an observation by a date: %d of %d\n", len(rows), len(s.Connects)); err != nil || len(rows) == 0 {
		return err
	}
	return printTable(w, columns, rows)
}

func lstText(w io.Writer, s *campaigns.Season) error {
	for i := range s.Pressure {
		l := &s.Pressure[i]
		ask := l.AskH()
		most := 1.0
		for h := range ask {
			most = max(most, l.WantedH[h], l.GrantedH[h])
		}
		fmt.Fprint(w, hanging("", words(fmt.Sprintf("LST pressure at %s: %.1f h wanted, %.1f h granted, %.1f h planned on source; hours to ask for: %.1f",
			l.Site, campaigns.SumH(l.WantedH), campaigns.SumH(l.GrantedH), campaigns.SumH(l.PlannedH), campaigns.SumH(ask)))))
		columns := []column{{"LST", 5, false}, {"Wanted", 6, true}, {"Granted", 7, true}, {"Planned", 7, true}, {"Ask for", 7, true}, {"", 40, false}}
		var rows [][]string
		for h := range ask {
			rows = append(rows, []string{
				fmt.Sprintf("%02d-%02d", h, h+1), fmt.Sprintf("%.1f", l.WantedH[h]), fmt.Sprintf("%.1f", l.GrantedH[h]),
				fmt.Sprintf("%.1f", l.PlannedH[h]), fmt.Sprintf("%.1f", ask[h]), pressureBar(l.WantedH[h], l.GrantedH[h], most, 40),
			})
		}
		if err := printTable(w, columns, rows); err != nil {
			return err
		}
		io.WriteString(w, "# granted and wanted, + wanted and not granted, - granted and not wanted\n")
	}
	return nil
}

// pressureBar draws hours wanted against hours granted.
func pressureBar(wanted, granted, most float64, width int) string {
	n := func(h float64) int { return cell.Width(cell.Gauge(h, most, width, "#", "")) }
	w, g := n(wanted), n(granted)
	return strings.Repeat("#", min(w, g)) + strings.Repeat("+", max(0, w-g)) + strings.Repeat("-", max(0, g-w))
}

func sunText(w io.Writer, s *campaigns.Season) error {
	if len(s.Sun) == 0 {
		_, err := fmt.Fprintln(w, "No source comes nearer to the Sun than its limit.")
		return err
	}
	fmt.Fprintln(w, "Nearer to the Sun than the limit")
	columns := []column{{"Source", 14, false}, {"From", 10, false}, {"To", 10, false}, {"Closest", 10, false}, {"Deg", 5, true}, {"Limit", 5, true}}
	var rows [][]string
	for _, g := range s.Sun {
		rows = append(rows, []string{
			words(g.Source), day(g.From, ""), day(g.To, ""), day(g.ClosestAt, ""), fmt.Sprintf("%.1f", g.ClosestDeg), fmt.Sprintf("%.1f", g.LimitDeg),
		})
	}
	return printTable(w, columns, rows)
}

// repeatsText tells of orbits that keep step with the days.
func repeatsText(w io.Writer, s *campaigns.Season) error {
	if len(s.Repeats) == 0 {
		_, err := fmt.Fprintln(w, "No orbit keeps step with the days: all of each can be seen within two months.")
		return err
	}
	fmt.Fprintln(w, "Orbits that keep step with the days: the same parts are up for months")
	columns := []column{{"Source", 14, false}, {"Site", 14, false}, {"Step, turns", 11, true}, {"Parts", 5, true}, {"Seen", 5, true}, {"All seen after", 14, true}}
	var rows [][]string
	for i := range s.Repeats {
		r := &s.Repeats[i]
		rows = append(rows, []string{
			words(r.Source), words(r.Site), fmt.Sprintf("%.4f", r.StepTurns), fmt.Sprint(r.Parts), fmt.Sprintf("%.0f %%", 100*r.SeenShare()), fmt.Sprintf("%.0f d", r.Days),
		})
	}
	if err := printTable(w, columns, rows); err != nil {
		return err
	}
	_, err := io.WriteString(w, "Step: of the orbital phase from transit to transit. Seen: of the orbit until\nthen.\n")
	return err
}

type jsonSeason struct {
	Format   int            `json:"format"`
	Version  string         `json:"version"`
	Campaign string         `json:"campaign"`
	FromUTC  string         `json:"from_utc"`
	ToUTC    string         `json:"to_utc"`
	Sessions []jsonPlayed   `json:"sessions"`
	Cadences []jsonCadence  `json:"cadences"`
	Connect  []jsonConnect  `json:"connect"`
	LST      []jsonPressure `json:"lst"`
	Sun      []jsonSun      `json:"sun"`
	Debts    []jsonDebt     `json:"debts"`
	Repeats  []jsonRepeat   `json:"repeats"`
	Unserved []string       `json:"receivers_in_no_session"`
	Array    jsonArray      `json:"array"`
}

type jsonPlayed struct {
	Session   string  `json:"session"`
	Site      string  `json:"site"`
	StartUTC  string  `json:"start_utc"`
	EndUTC    string  `json:"end_utc"`
	GrantedH  float64 `json:"granted_h"`
	OnSourceH float64 `json:"on_source_h"`
	Slots     int     `json:"slots"`
	Worth     float64 `json:"worth"`
	Overdue   int     `json:"overdue"`
}

type jsonCadence struct {
	Source      string   `json:"source"`
	Aim         string   `json:"aim"`
	Receivers   []string `json:"receivers"`
	Outcome     string   `json:"outcome"`
	Due         int      `json:"due"`
	Planned     int      `json:"planned"`
	OverdueDays int      `json:"overdue_days"`
	DebtNow     float64  `json:"debt_now"`
	DebtWorst   float64  `json:"debt_worst"`
	DebtEnd     float64  `json:"debt_end"`
	SessionsUp  int      `json:"sessions_up"`
}

type jsonConnect struct {
	Source  string  `json:"source"`
	Limit   float64 `json:"limit_turns"`
	By      *string `json:"by_utc"`
	Planned *string `json:"planned_utc"`
	Lost    bool    `json:"lost"`
	ByAtEnd *string `json:"by_at_end_utc"`
}

type jsonPressure struct {
	Site    string    `json:"site"`
	Wanted  []float64 `json:"wanted_h"`
	Granted []float64 `json:"granted_h"`
	Planned []float64 `json:"planned_h"`
	Ask     []float64 `json:"ask_h"`
}

type jsonSun struct {
	Source     string  `json:"source"`
	LimitDeg   float64 `json:"limit_deg"`
	FromUTC    string  `json:"from_utc"`
	ToUTC      string  `json:"to_utc"`
	ClosestUTC string  `json:"closest_utc"`
	ClosestDeg float64 `json:"closest_deg"`
}

type jsonRepeat struct {
	Source string  `json:"source"`
	Site   string  `json:"site"`
	Step   float64 `json:"step_turns"`
	Parts  int     `json:"parts"`
	Part   float64 `json:"part_turns"`
	Seen   float64 `json:"seen_share"`
	Days   float64 `json:"days"`
}

type jsonDebt struct {
	Source string  `json:"source"`
	Aim    string  `json:"aim"`
	Kind   string  `json:"kind"`
	Debt   float64 `json:"debt_end"`
	Why    string  `json:"why"`
}

func seasonJSON(w io.Writer, d *desk, s *campaigns.Season) error {
	out := jsonSeason{
		Format: 1, Version: version(), Campaign: d.Campaign.Name, FromUTC: utc(s.From), ToUTC: utc(s.To), Sessions: []jsonPlayed{},
		Cadences: []jsonCadence{}, Connect: []jsonConnect{}, LST: []jsonPressure{}, Sun: []jsonSun{}, Repeats: []jsonRepeat{}, Debts: []jsonDebt{},
		Unserved: append([]string{}, s.Unserved...), Array: arrayJSON(&s.Array),
	}
	for _, x := range s.Sessions {
		out.Sessions = append(out.Sessions, jsonPlayed{
			x.Session.Name, x.Session.Site, utc(x.Session.Start), utc(x.Session.End), round(x.Hours, 3), round(float64(x.OnSourceMin)/60, 3),
			len(x.Rows), round(x.Worth, 4), x.Overdue,
		})
	}
	for _, c := range s.Cadences {
		out.Cadences = append(out.Cadences, jsonCadence{
			c.Source, c.Aim, append([]string{}, c.Receivers...), string(c.Outcome), c.Due, c.Planned, c.OverdueDays,
			round(c.DebtNow, 4), round(c.DebtWorst, 4), round(c.DebtEnd, 4), c.Up,
		})
	}
	for i := range s.Connects {
		c := &s.Connects[i]
		out.Connect = append(out.Connect, jsonConnect{c.Source, c.LimitTurns, maybe(c.By), maybe(c.Planned), c.Lost, maybe(c.ByAtEnd)})
	}
	for i := range s.Pressure {
		l := &s.Pressure[i]
		out.LST = append(out.LST, jsonPressure{l.Site, rounded(l.WantedH), rounded(l.GrantedH), rounded(l.PlannedH), rounded(l.AskH())})
	}
	for _, g := range s.Sun {
		out.Sun = append(out.Sun, jsonSun{g.Source, g.LimitDeg, utc(g.From), utc(g.To), utc(g.ClosestAt), round(g.ClosestDeg, 3)})
	}
	for i := range s.Repeats {
		r := &s.Repeats[i]
		out.Repeats = append(out.Repeats, jsonRepeat{r.Source, r.Site, round(r.StepTurns, 5), r.Parts, round(r.PartTurns, 4), round(r.SeenShare(), 4), round(r.Days, 0)})
	}
	for _, r := range s.Debts {
		out.Debts = append(out.Debts, jsonDebt{r.Source, r.Aim, string(r.Kind), round(r.Debt, 4), r.Why})
	}
	return printJSON(w, out)
}

func rounded(hours [24]float64) []float64 {
	out := make([]float64, len(hours))
	for h := range hours {
		out[h] = round(hours[h], 3)
	}
	return out
}
