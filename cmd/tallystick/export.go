package main

import (
	"io"

	"github.com/spf13/cobra"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/campaigns/export"
)

func (p *program) exportCommand() *cobra.Command {
	formats, abouts := export.Formats()
	long := "The saved plan of the session is exported or, where there is none, one made now. Formats:\n"
	for i, f := range formats {
		long += "  " + f + ": " + abouts[i] + "\n"
	}
	c := &cobra.Command{
		Use:   "export",
		Short: "Write the slot list of a session for the operator or for another program",
		Long:  long + export.Safety,
		Example: "  tallystick export --out tonight.txt\n" +
			"  tallystick export --session \"2026-12-03 night\" --format csv --out tonight.csv",
		Args: noArgs,
		RunE: func(*cobra.Command, []string) error {
			d, err := p.open()
			if err != nil {
				return err
			}
			s, err := p.session(d)
			if err != nil {
				return err
			}
			sheet, err := p.sheet(d, s)
			if err != nil {
				return err
			}
			return p.deliver(func(w io.Writer) error { return export.Write(w, p.flags.format, *sheet) })
		},
	}
	p.campaignFlags(c)
	p.sessionFlags(c)
	p.searchFlags(c)
	p.tableFlags(c, formats...)
	return c
}

// sheet is that of the saved plan or, where there is none, of a plan made now.
func (p *program) sheet(d *desk, s *campaigns.Session) (*export.Sheet, error) {
	saved, err := d.Plan(s.Name)
	if err != nil {
		return nil, err
	}
	if saved == nil {
		p.say("session %s has no saved plan: planned now", s.Name)
		made, err := p.planAnew(d, s)
		if err != nil {
			return nil, err
		}
		return &made.sheet, nil
	}
	prepared, err := campaigns.Prepare(d.Campaign, d.Logbook, s, campaigns.PrepareOptions{At: d.at, GridMin: max(1, saved.GridMin), Bars: saved.Bars, Keep: saved.Sources()})
	if err != nil {
		return nil, err
	}
	plan, lost := prepared.Bind(saved)
	p.sayLost(lost)
	origin := export.Origin{MadeAt: saved.MadeAt, Version: version(), Saved: true, Entries: len(d.Logbook.Entries)}
	// Its ceiling was proved for the campaign as it was then; what another source is owed may have risen since.
	switch proved, ok := prepared.Proved(saved, plan); {
	case ok && proved.Holds(plan):
		origin.Ceiling, origin.HasCeiling = proved.Ceiling, true
	case saved.HasProof():
		p.say(campaigns.ProofLost)
	}
	sheet := export.New(prepared, plan, origin)
	return &sheet, nil
}
