package main

import (
	"os"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/campaigns/export"
)

func (p *program) root() *cobra.Command {
	root := &cobra.Command{
		Use:   "tallystick [DIR]",
		Short: "Schedule a pulsar-timing campaign: who is owed time, and a session's best plan",
		Long: "Without a command: opens the screen on the campaign in DIR or, without it, in this folder; where there is " +
			"no campaign.toml, on the built-in demonstration. " + export.Safety,
		Example: "  tallystick\n  tallystick ~/campaigns/2027 --ascii",
		Version: version(),
		Args:    p.rootArgs,
		RunE:    func(*cobra.Command, []string) error { return p.screen() },

		SilenceErrors: true, SilenceUsage: true,
		CompletionOptions: cobra.CompletionOptions{DisableDefaultCmd: true},
	}
	root.SetOut(p.stdout)
	root.SetErr(p.stderr)
	root.SetIn(p.stdin)
	root.SetHelpFunc(p.help)
	root.SetFlagErrorFunc(flagError)
	root.SetVersionTemplate("tallystick {{.Version}}\n")
	root.SetHelpCommand(p.helpCommand())
	p.campaignFlags(root)
	p.sessionFlags(root)
	root.Flags().BoolVar(&p.flags.ascii, "ascii", false, "draw with ASCII only")
	root.Flags().BoolVar(&p.flags.noMouse, "no-mouse", false, "leave the mouse to the terminal, for selecting text")
	root.AddCommand(p.arrearsCommand(), p.checkCommand(), p.completionCommand(), p.conjunctionsCommand(), p.exportCommand(),
		p.importCommand(), p.logCommand(), p.newCommand(), p.passesCommand(), p.planCommand(), p.problemCommand(), p.seasonCommand())
	return root
}

// rootArgs takes a folder. A word that is none is more often a command with a slip in it.
func (p *program) rootArgs(c *cobra.Command, args []string) error {
	if len(args) == 0 {
		return nil
	}
	if _, err := os.Stat(args[0]); err != nil && !strings.ContainsRune(args[0], filepath.Separator) {
		var names []string
		for _, sub := range c.Commands() {
			names = append(names, sub.Name())
		}
		if meant := campaigns.Nearest(args[0], names); meant != "" {
			return usagef("found %q, which is neither a command nor a folder; did you mean %s?", args[0], meant)
		}
		return usagef("found %q, which is neither a command nor a folder; commands: %s", args[0], strings.Join(names, ", "))
	}
	return p.folderArg(c, args)
}

func (p *program) helpCommand() *cobra.Command {
	return &cobra.Command{
		Use:     "help [COMMAND]",
		Short:   "Show how a command is used",
		Example: "  tallystick help\n  tallystick help plan",
		RunE: func(c *cobra.Command, args []string) error {
			about, rest, err := c.Root().Find(args)
			if err != nil || len(rest) > 0 {
				return p.rootArgs(c.Root(), append(rest, ""))
			}
			return about.Help()
		},
	}
}
