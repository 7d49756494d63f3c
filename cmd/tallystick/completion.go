package main

import (
	"strings"

	"github.com/spf13/cobra"

	"example.org/tallystick/campaigns"
)

var shells = []string{"bash", "zsh", "fish"}

func (p *program) completionCommand() *cobra.Command {
	return &cobra.Command{
		Use:   "completion SHELL",
		Short: "Write the completion script of a shell: bash, zsh or fish",
		Long:  "Sessions, sources and formats are completed too, from the campaign that the command would use.",
		Example: "  source <(tallystick completion bash)\n" +
			"  tallystick completion fish > ~/.config/fish/completions/tallystick.fish",
		Args: func(c *cobra.Command, args []string) error {
			if err := oneArg(c, args); err != nil {
				return err
			}
			return oneOf("shell", args[0], shells)
		},
		ValidArgs: shells,
		RunE: func(c *cobra.Command, args []string) error {
			switch args[0] {
			case "bash":
				return c.Root().GenBashCompletionV2(p.stdout, true)
			case "zsh":
				return c.Root().GenZshCompletion(p.stdout)
			}
			return c.Root().GenFishCompletion(p.stdout, true)
		},
	}
}

// completeFrom offers names of the campaign that the command would use; none if it cannot be read.
func (p *program) completeFrom(names func(*campaigns.Campaign) []string) cobra.CompletionFunc {
	return func(_ *cobra.Command, _ []string, begun string) ([]string, cobra.ShellCompDirective) {
		folder, err := p.folder(p.flags.campaign)
		if err != nil {
			return nil, cobra.ShellCompDirectiveError
		}
		var out []string
		for _, n := range names(folder.Campaign) {
			if strings.HasPrefix(strings.ToLower(n), strings.ToLower(begun)) {
				out = append(out, n)
			}
		}
		return out, cobra.ShellCompDirectiveNoFileComp
	}
}

func sessionNames(c *campaigns.Campaign) []string {
	names := []string{"next"}
	for _, s := range c.Sessions {
		names = append(names, s.Name)
	}
	return names
}

func sourceNames(c *campaigns.Campaign) (names []string) {
	for _, s := range c.Sources {
		names = append(names, s.Name)
	}
	return names
}

func siteNames(c *campaigns.Campaign) (names []string) {
	for _, s := range c.Sites {
		names = append(names, s.Name)
	}
	return names
}
