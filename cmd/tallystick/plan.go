package main

import (
	"context"
	"fmt"
	"io"
	"runtime"
	"slices"
	"strconv"
	"strings"

	"github.com/spf13/cobra"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/campaigns/export"
	"example.org/tallystick/sched"
)

// efforts is what --effort buys in words: steps of search after the first plan. Steps are counted, not
// timed, so that the same effort gives the same plan on every machine. On the demonstration's ten-hour
// session quick answers in a fifth of a second, normal in less than half a second, thorough proves its plan in a few seconds.
var efforts = map[string]sched.Options{
	"quick":    {Rounds: -1},
	"normal":   {Work: sched.StepsPerSecond / 3},
	"thorough": {Work: 30 * sched.StepsPerSecond},
}

var effortNames = []string{"quick", "normal", "thorough"}

// mostSeconds is an hour: by then every session that can be proved has been.
const mostSeconds = 3600

// searchOptions reads --effort: a word, or seconds that only choose how many steps of search are made.
func searchOptions(effort string) (sched.Options, error) {
	if o, ok := efforts[effort]; ok {
		return o, nil
	}
	if seconds, err := strconv.ParseFloat(effort, 64); err == nil {
		if seconds > 0 && seconds <= mostSeconds {
			return sched.Options{Work: max(1, int(seconds*sched.StepsPerSecond))}, nil
		}
		return sched.Options{}, usagef("--effort: found %s; accepted: above 0 to %d seconds", effort, mostSeconds)
	}
	return sched.Options{}, oneOf("--effort", effort, append(slices.Clone(effortNames), "a number of seconds"))
}

func (p *program) planCommand() *cobra.Command {
	c := &cobra.Command{
		Use:   "plan",
		Short: "Plan a session and print the slot list, its worth and what is left out and why",
		Long: "Pins and bars of the session's saved plan are kept. In a session that is under way, slots of the saved plan that have begun are kept " +
			"and the rest is planned anew. " + export.Safety,
		Example: "  tallystick plan\n  tallystick plan --session \"2026-12-03 night\" --effort thorough --save",
		Args:    noArgs,
		RunE: func(*cobra.Command, []string) error {
			d, err := p.open()
			if err != nil {
				return err
			}
			if p.flags.save && d.Demo() {
				return fmt.Errorf("the demonstration is kept in memory, so --save would save nothing; accepted: a campaign of your own, which begins with: tallystick new DIR")
			}
			s, err := p.session(d)
			if err != nil {
				return err
			}
			made, err := p.planAnew(d, s)
			if err != nil {
				return err
			}
			if p.flags.save {
				if err := p.savePlan(d, made); err != nil {
					return err
				}
			}
			return p.deliver(func(w io.Writer) error {
				if p.flags.format == "text" {
					return planText(w, made)
				}
				return export.Write(w, p.flags.format, made.sheet)
			})
		},
	}
	p.campaignFlags(c)
	p.sessionFlags(c)
	p.searchFlags(c)
	c.Flags().BoolVar(&p.flags.save, "save", false, "keep the plan with the campaign")
	p.tableFlags(c, "text", "csv", "json")
	return c
}

func (p *program) searchFlags(c *cobra.Command) {
	p.gridFlag(c)
	c.Flags().StringVar(&p.flags.effort, "effort", "normal", "`HOW` long to search: "+strings.Join(effortNames, ", ")+", or about so many seconds of one core")
	c.RegisterFlagCompletionFunc("effort", cobra.FixedCompletions(effortNames, cobra.ShellCompDirectiveNoFileComp))
	c.PreRunE = func(c *cobra.Command, args []string) error {
		if err := p.checkGrid(c, args); err != nil {
			return err
		}
		_, err := searchOptions(p.flags.effort)
		return err
	}
}

func (p *program) gridFlag(c *cobra.Command) {
	c.Flags().IntVar(&p.flags.grid, "grid", 1, "slots end on multiples of `MIN` minutes of the session, 1 to 60")
}

func (p *program) checkGrid(*cobra.Command, []string) error {
	if p.flags.grid < 1 || p.flags.grid > 60 {
		return usagef("--grid: found %d; accepted: 1 to 60 minutes", p.flags.grid)
	}
	return nil
}

// A madePlan is a plan with the problem it answers and the sheet that tells it.
type madePlan struct {
	prepared *campaigns.Prepared
	result   sched.Result
	sheet    export.Sheet
}

// planAnew plans a session around the pins and bars of its saved plan.
func (p *program) planAnew(d *desk, s *campaigns.Session) (*madePlan, error) {
	prepared, saved, err := p.prepare(d, s)
	if err != nil {
		return nil, err
	}
	search, err := searchOptions(p.flags.effort)
	if err != nil {
		return nil, err
	}
	search.Workers, search.Warm = runtime.GOMAXPROCS(0), saved
	result, err := sched.Solve(context.Background(), prepared.Problem, search)
	if err != nil {
		return nil, fmt.Errorf("session %s: %w", s.Name, err)
	}
	return &madePlan{prepared, result, export.New(prepared, result.Plan, export.Origin{
		MadeAt: d.at, Version: version(), Ceiling: result.Ceiling, HasCeiling: result.HasCeiling,
		Rounds: result.Rounds, Entries: len(d.Logbook.Entries),
	})}, nil
}

// prepare makes the problem of a session with the pins and bars of its saved plan, and returns with it
// that plan, or nil where there is none.
func (p *program) prepare(d *desk, s *campaigns.Session) (*campaigns.Prepared, *sched.Plan, error) {
	saved, err := d.Plan(s.Name)
	if err != nil {
		return nil, nil, err
	}
	options := campaigns.PrepareOptions{At: d.at, GridMin: p.flags.grid, Keep: saved.Sources()}
	if saved != nil {
		options.Bars = saved.Bars
	}
	if d.at.After(s.Start) && d.at.Before(s.End) {
		options.FromMin = int(d.at.Sub(s.Start).Minutes()) + 1
	}
	prepared, err := campaigns.Prepare(d.Campaign, d.Logbook, s, options)
	if err != nil || saved == nil {
		return prepared, nil, err
	}
	plan, lost := prepared.Bind(saved)
	p.sayLost(lost)
	begun := 0
	for i, slot := range plan.Slots {
		if slot.Start < options.FromMin && !slot.Pinned {
			plan.Slots[i].Pinned = true // nobody can change it any more
			begun++
		}
		if plan.Slots[i].Pinned {
			prepared.Problem.Pins = append(prepared.Problem.Pins, plan.Slots[i])
		}
	}
	if begun > 0 {
		p.say("%s begun by %s: kept as saved, and pinned", hasBegun(begun), d.at.UTC().Format("15:04Z"))
	}
	return prepared, &plan, nil
}

func hasBegun(slots int) string {
	if slots == 1 {
		return "1 slot has"
	}
	return fmt.Sprintf("%d slots have", slots)
}

func (p *program) sayLost(lost []string) {
	for _, l := range lost {
		p.say("a slot of the saved plan is left out: %s", l)
	}
}

func (p *program) savePlan(d *desk, made *madePlan) error {
	proved, _ := sched.BoundOf(made.prepared.Problem, made.result)
	if err := d.SavePlan(made.prepared.Saved(made.result.Plan, proved, version())); err != nil {
		return fmt.Errorf("the plan was not saved: %w", err)
	}
	p.say("saved with the campaign as the plan of session %s", made.sheet.Session.Name)
	return nil
}

func planText(w io.Writer, made *madePlan) error {
	s := made.sheet
	var b strings.Builder
	b.WriteString(hanging("", words(fmt.Sprintf("Plan of session %s at %s, campaign %s", s.Session.Name, s.Site.Name, s.Campaign))))
	fmt.Fprintf(&b, "%s to %s UTC\n\n", s.Session.Start.UTC().Format("2006-01-02 15:04"), s.Session.End.UTC().Format("2006-01-02 15:04"))
	columns := []column{{"No", 4, true}, {"UTC", 11, false}, {"Min", 3, true}, {"Source", 15, false}, {"Receiver", 8, false},
		{"Az", 6, true}, {"El", 4, true}, {"to Az", 6, true}, {"El", 4, true}, {"Worth", 7, true}}
	var rows [][]string
	for _, r := range s.Rows {
		number := fmt.Sprintf("%d ", r.Slot)
		if r.Pinned {
			number = fmt.Sprintf("%d*", r.Slot)
		}
		rows = append(rows, []string{
			number, r.Start.UTC().Format("15:04") + "-" + r.End.UTC().Format("15:04"), fmt.Sprintf("%.0f", r.End.Sub(r.Start).Minutes()),
			words(r.Source), words(r.Receiver), fmt.Sprintf("%.1f", r.AzStartDeg), fmt.Sprintf("%.1f", r.ElStartDeg),
			fmt.Sprintf("%.1f", r.AzEndDeg), fmt.Sprintf("%.1f", r.ElEndDeg), fmt.Sprintf("%.3f", r.Worth),
		})
		if r.Note != "" {
			rows = append(rows, remark("     note: ", r.Note))
		}
		for _, breach := range r.Breaches {
			rows = append(rows, remark("  !! breaks a limit: ", breach))
		}
	}
	if err := printTable(&b, columns, rows); err != nil {
		return err
	}
	b.WriteString("Az is the mount's, within its cable travel; * is a pin.\n\n")
	b.WriteString(planWorth(s))
	for _, m := range s.Missing {
		b.WriteString(hanging("Incomplete: ", words(m+" should be in this plan and could have been")))
	}
	if len(s.Absent) > 0 {
		fmt.Fprintf(&b, "\nNot in this plan, and why (%s)\n", count(len(s.Absent), "source"))
		for _, l := range s.Absent {
			label := words(l.Source + " " + l.Receiver)
			b.WriteString(hanging("  "+label+": ", words(l.Reason)))
		}
	}
	_, err := io.WriteString(w, b.String())
	return err
}

func planWorth(s export.Sheet) string {
	var b strings.Builder
	fmt.Fprintf(&b, "Worth    %.3f in %s\n", s.Worth, count(len(s.Rows), "slot"))
	share, known := s.Distance()
	switch {
	case known && share == 0:
		fmt.Fprintf(&b, "Ceiling  %.3f: no plan of this session can be worth more\nDistance none: this is the best plan\n", s.Ceiling)
	case known:
		fmt.Fprintf(&b, "Ceiling  %.3f: no plan of this session can be worth more\nDistance %.2f %% at most from the best plan\n", s.Ceiling, 100*share)
	default:
		b.WriteString("Ceiling  no ceiling yet\n")
	}
	fmt.Fprintf(&b, "Search   %s, slot ends on a grid of %d min\n", count(s.Rounds, "round"), s.GridMin)
	return b.String()
}

// remark is a line of its own below a row of a table.
func remark(label, text string) []string {
	return []string{strings.TrimSuffix(hanging(label, words(text)), "\n")}
}
