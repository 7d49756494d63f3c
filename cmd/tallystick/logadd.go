package main

import (
	"fmt"
	"slices"
	"strconv"
	"time"

	"github.com/spf13/cobra"

	"example.org/tallystick/campaigns"
)

// An addition is what `log add` was told.
type addition struct {
	site, source, receiver, start, end string // said one by one
	slot, session                      string // or taken from a saved plan
	outcome, note                      string
	quality, snr, toa                  float64
	rated                              bool // --quality was given
}

// allSlots is what --slot takes beside a number.
const allSlots = "all"

func (p *program) logAddCommand() *cobra.Command {
	a := &addition{}
	c := &cobra.Command{
		Use:   "add",
		Short: "Append an entry to the logbook, or one for each slot of a saved plan",
		Long: "Nothing is ever removed: an entry with the same start, site, source and receiver as an earlier one corrects it. " +
			"When the command ends well the entry is on the disk.\n" +
			"--slot takes source, receiver and times from the session's saved plan; --slot all records every slot that is " +
			"not in the logbook yet.",
		Example: "  tallystick log add --slot 3 --outcome partial --quality 0.6 --note wind\n" +
			"  tallystick log add --slot all --session \"2026-12-08 evening\"\n" +
			"  tallystick log add --source J0127+4811 --receiver L \\\n" +
			"      --start 2026-12-08T17:10Z --end 2026-12-08T17:40Z --snr 31",
		Args: noArgs,
		RunE: func(c *cobra.Command, _ []string) error {
			a.rated = c.Flags().Changed("quality")
			return p.addToLog(a)
		},
		PreRunE: func(*cobra.Command, []string) error { return a.check() },
	}
	p.campaignFlags(c)
	f := c.Flags()
	f.StringVar(&a.slot, "slot", "", "`NO` of a slot of the saved plan, or all")
	f.StringVar(&a.session, "session", "", "`NAME` of the session that --slot is about; without it the last that has begun")
	f.StringVar(&a.source, "source", "", "`NAME` of the source")
	f.StringVar(&a.receiver, "receiver", "", "`NAME` of the receiver")
	f.StringVar(&a.site, "site", "", "`NAME` of the site; without it that of the session then, or the only one")
	f.StringVar(&a.start, "start", "", "`TIME` when it began on source, ISO 8601 UTC")
	f.StringVar(&a.end, "end", "", "`TIME` when it ended, ISO 8601 UTC; with --slot when it ended early or late")
	f.StringVar(&a.outcome, "outcome", "done", "`WHAT` became of it: done, partial, lost")
	f.Float64Var(&a.quality, "quality", 0, "`SHARE` of the wanted sensitivity that was reached, 0 to 1; done has 1 unless given")
	f.Float64Var(&a.snr, "snr", 0, "`S/N` that was reached")
	f.Float64Var(&a.toa, "toa-us", 0, "`ERROR` of the time of arrival, microseconds")
	f.StringVar(&a.note, "note", "", "`TEXT` to remember")
	c.RegisterFlagCompletionFunc("session", p.completeFrom(sessionNames))
	c.RegisterFlagCompletionFunc("source", p.completeFrom(sourceNames))
	c.RegisterFlagCompletionFunc("site", p.completeFrom(siteNames))
	c.RegisterFlagCompletionFunc("outcome", cobra.FixedCompletions(outcomes, cobra.ShellCompDirectiveNoFileComp))
	return c
}

// check refuses flags that do not go together.
func (a *addition) check() error {
	said := []struct{ flag, value string }{{"source", a.source}, {"receiver", a.receiver}, {"start", a.start}, {"end", a.end}, {"site", a.site}}
	switch {
	case a.slot == "":
		for _, s := range said[:4] {
			if s.value == "" {
				return usagef("--%s: found none; accepted: one, for an entry needs --source, --receiver, --start and --end, or else --slot", s.flag)
			}
		}
		if a.session != "" {
			return usagef("--session: found it without --slot; accepted: together")
		}
	default:
		for _, s := range said {
			if s.value != "" && (s.flag != "end" || a.slot == allSlots) {
				return usagef("--%s: found it beside --slot %s; accepted: what the saved plan does not say", s.flag, a.slot)
			}
		}
		if n, err := strconv.Atoi(a.slot); a.slot != allSlots && (err != nil || n < 1) {
			return usagef("--slot: found %q; accepted: the number of a slot, or all", a.slot)
		}
	}
	if a.slot == allSlots && (a.snr != 0 || a.toa != 0) {
		return usagef("--snr, --toa-us: found beside --slot all; accepted: with one slot")
	}
	return oneOf("--outcome", a.outcome, outcomes)
}

// addToLog writes what was told.
func (p *program) addToLog(a *addition) error {
	if !a.rated {
		switch campaigns.Outcome(a.outcome) {
		case campaigns.Done:
			a.quality = 1
		case campaigns.Partial:
			return usagef("--quality: found none; accepted with --outcome partial: the share of the wanted sensitivity that was reached, 0 to 1")
		}
	}
	d, err := p.open()
	if err != nil {
		return err
	}
	if err := d.mayLog(); err != nil {
		return err
	}
	entries, err := a.entries(d)
	if err != nil {
		return err
	}
	for i := range entries {
		if err := d.knows(&entries[i]); err != nil {
			return err
		}
	}
	before := d.Logbook.Entries
	if err := d.AppendLog(entries); err != nil {
		return err
	}
	for _, e := range entries {
		what := "written"
		if slices.ContainsFunc(before, e.Corrects) {
			what = "corrected"
		}
		p.say("%s: %s with %s at %s, %s", what, e.Source, e.Receiver, e.Start.Format(time.RFC3339), e.Outcome)
	}
	if len(entries) == 0 {
		p.say("every slot of the plan is in the logbook already: nothing was written")
	}
	return nil
}

// entries are what is to be written.
func (a *addition) entries(d *desk) ([]campaigns.Entry, error) {
	e := campaigns.Entry{
		Site: a.site, Source: a.source, Receiver: a.receiver, Outcome: campaigns.Outcome(a.outcome),
		Quality: a.quality, SNR: a.snr, ToaUs: a.toa, Note: a.note,
	}
	var err error
	if a.end != "" {
		if e.End, err = instant("--end", a.end); err != nil {
			return nil, err
		}
	}
	if a.slot != "" {
		return a.slots(d, e)
	}
	if e.Start, err = instant("--start", a.start); err != nil {
		return nil, err
	}
	if e.Site == "" {
		if e.Site, err = d.siteAt(e.Start); err != nil {
			return nil, err
		}
	}
	return []campaigns.Entry{e}, nil
}

// slots are the entries about slots of a saved plan; like holds what is the same in all.
func (a *addition) slots(d *desk, like campaigns.Entry) ([]campaigns.Entry, error) {
	s, err := d.begun(a.session)
	if err != nil {
		return nil, err
	}
	plan, err := d.Plan(s.Name)
	if err != nil {
		return nil, err
	}
	if plan == nil {
		return nil, fmt.Errorf("session %s has no saved plan to take slots from; accepted: one that was saved, or --source, --receiver, --start and --end", s.Name)
	}
	number, _ := strconv.Atoi(a.slot)
	if number > len(plan.Slots) {
		return nil, fmt.Errorf("--slot: found %d; accepted: 1 to %d, the slots of the saved plan of %s", number, len(plan.Slots), s.Name)
	}
	planned := slices.Clone(plan.Slots)
	slices.SortStableFunc(planned, func(x, y campaigns.SavedSlot) int { return x.Start.Compare(y.Start) })
	var out []campaigns.Entry
	for i, slot := range planned {
		if number > 0 && i != number-1 {
			continue
		}
		e := like
		e.Site, e.Source, e.Receiver, e.Start = s.Site, slot.Source, slot.Receiver, slot.Start
		if e.End.IsZero() {
			e.End = slot.End
		}
		if e.Note == "" {
			e.Note = slot.Note
		}
		if number == 0 && slices.ContainsFunc(d.Logbook.Entries, e.Corrects) {
			continue
		}
		out = append(out, e)
	}
	return out, nil
}

// begun is the session of a name, or the last that has begun.
func (d *desk) begun(name string) (*campaigns.Session, error) {
	if name != "" {
		return d.Campaign.Session(name, d.at)
	}
	for i := range slices.Backward(d.Campaign.Sessions) {
		if s := &d.Campaign.Sessions[i]; !s.Start.After(d.at) {
			return s, nil
		}
	}
	return nil, usagef("--session: found none, and no session has begun; accepted: the name of one")
}
