package main

import (
	"errors"
	"fmt"
	"io"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"example.org/tallystick/campaigns"
)

func (p *program) checkCommand() *cobra.Command {
	c := &cobra.Command{
		Use:   "check [DIR]",
		Short: "Check a campaign, its logbook and its saved plans, and list every fault",
		Long: "Faults go to standard output, one a line: file:line: key: what was found and what is accepted. " +
			"Exit 0 without a fault, 1 with one.",
		Example: "  tallystick check\n  tallystick check --campaign ~/campaigns/2027",
		Args:    p.folderArg,
		RunE: func(c *cobra.Command, args []string) error {
			d, err := p.open()
			var faults campaigns.Complaints
			switch {
			case errors.As(err, &faults):
				return p.listFaults(faults)
			case err != nil:
				return err
			}
			plans, err := planFaults(d)
			if err != nil {
				return err
			}
			if faults := append(slices.Clone(d.Damage), plans...); len(faults) > 0 {
				return p.listFaults(faults)
			}
			return p.deliver(func(w io.Writer) error { return printCounts(w, d) })
		},
	}
	p.campaignFlags(c)
	return c
}

// folderArg lets a folder be given as the argument too.
func (p *program) folderArg(c *cobra.Command, args []string) error {
	switch {
	case len(args) > 1:
		return usagef("%s takes one folder, found %d; usage: %s", c.CommandPath(), len(args), c.UseLine())
	case len(args) == 1 && p.flags.campaign != "":
		return usagef("found both %s and --campaign %s; give one of them", args[0], p.flags.campaign)
	case len(args) == 1:
		p.flags.campaign = args[0]
	}
	return nil
}

func (p *program) listFaults(faults campaigns.Complaints) error {
	for _, f := range faults {
		for line := range strings.Lines(f.Error()) {
			if _, err := fmt.Fprintln(p.stdout, words(strings.TrimSuffix(line, "\n"))); err != nil {
				return err
			}
		}
	}
	p.say("%s", count(len(faults), "fault"))
	return exitCode(exitNo)
}

// planFaults reads every saved plan.
func planFaults(d *desk) (faults campaigns.Complaints, err error) {
	for _, s := range d.Campaign.Sessions {
		_, err := d.Plan(s.Name)
		var found campaigns.Complaints
		switch {
		case errors.As(err, &found):
			faults = append(faults, found...)
		case err != nil:
			return nil, err
		}
	}
	return faults, nil
}

func printCounts(w io.Writer, d *desk) error {
	c := d.Campaign
	aims, plans := 0, 0
	for _, s := range c.Sources {
		aims += len(s.Aims)
	}
	coming := 0
	for _, s := range c.Sessions {
		if s.End.After(d.at) {
			coming++
		}
		if plan, err := d.Plan(s.Name); err == nil && plan != nil {
			plans++
		}
	}
	_, err := fmt.Fprintf(w, "%s (%s): no faults\n%s, %s, %s with %s\n%s, %d of them still to come, %s\n%s\n",
		words(c.Name), words(d.Name()), count(len(c.Sites), "site"), count(len(c.Receivers), "receiver"),
		count(len(c.Sources), "source"), count(aims, "aim"),
		count(len(c.Sessions), "session"), coming, count(plans, "saved plan"),
		count(len(d.Logbook.Entries), "logbook entry"))
	return err
}
