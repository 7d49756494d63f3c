package main

import (
	"fmt"

	"github.com/spf13/cobra"

	"example.org/tallystick/campaigns"
)

func (p *program) newCommand() *cobra.Command {
	c := &cobra.Command{
		Use:   "new DIR",
		Short: "Write a starter campaign, commented, into a new folder",
		Long:  "Nothing is ever overwritten: a folder that holds a campaign already is refused. The session that it begins with lies two days ahead.",
		Example: "  tallystick new watch\n" +
			"  tallystick new ~/campaigns/2027 && tallystick ~/campaigns/2027",
		Args: oneArg,
		RunE: func(_ *cobra.Command, args []string) error {
			now, given, err := p.moment()
			if err != nil {
				return err
			}
			if !given {
				now = p.now()
			}
			if err := campaigns.WriteStarter(args[0], now); err != nil {
				return err
			}
			_, err = fmt.Fprintf(p.stdout, "wrote a starter campaign into %s\nedit its campaign.toml, then: tallystick check --campaign %s\n", args[0], args[0])
			return err
		},
	}
	p.atFlag(c)
	return c
}
