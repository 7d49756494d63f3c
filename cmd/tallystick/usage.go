package main

import (
	"fmt"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/ui/cell"
)

// A usageError is a command line that was not understood: what was found and what is accepted.
type usageError struct{ text string }

func (e usageError) Error() string { return e.text }

func usagef(form string, a ...any) error { return usageError{fmt.Sprintf(form, a...)} }

// flagError names the flag that was probably meant.
func flagError(c *cobra.Command, err error) error {
	text := err.Error()
	if name, found := strings.CutPrefix(text, "unknown flag: --"); found {
		var known []string
		c.Flags().VisitAll(func(f *pflag.Flag) { known = append(known, f.Name) })
		if meant := campaigns.Nearest(name, known); meant != "" {
			text += "; did you mean --" + meant + "?"
		}
	}
	return usagef("%s\n`%s --help` lists what it takes", text, c.CommandPath())
}

// noArgs and oneArg say what is accepted instead of what cobra calls it.
func noArgs(c *cobra.Command, args []string) error {
	if len(args) > 0 {
		return usagef("%s takes no %q; usage: %s", c.CommandPath(), args[0], c.UseLine())
	}
	return nil
}

func oneArg(c *cobra.Command, args []string) error {
	if len(args) != 1 {
		return usagef("%s takes one argument, found %d; usage: %s", c.CommandPath(), len(args), c.UseLine())
	}
	return nil
}

// oneOf refuses a value that is not in the list.
func oneOf(what, found string, accepted []string) error {
	for _, a := range accepted {
		if a == found {
			return nil
		}
	}
	hint := ""
	if meant := campaigns.Nearest(found, accepted); meant != "" {
		hint = "; did you mean " + meant + "?"
	}
	return usagef("%s: found %q; accepted: %s%s", what, found, strings.Join(accepted, ", "), hint)
}

// help writes one line of purpose, the usage, two examples, then commands and flags, in 80 columns.
func (p *program) help(c *cobra.Command, _ []string) {
	var b strings.Builder
	fmt.Fprintf(&b, "%s\n\nUsage:\n  %s\n", c.Short, c.UseLine())
	fmt.Fprintf(&b, "\nExamples:\n%s\n", c.Example)
	if c.HasAvailableSubCommands() {
		b.WriteString("\nCommands:\n")
		for _, sub := range c.Commands() {
			if sub.IsAvailableCommand() {
				b.WriteString(hanging("  "+cell.Fit(sub.Name(), 12), sub.Short))
			}
		}
	}
	if c.HasAvailableFlags() {
		b.WriteString("\nFlags:\n" + c.Flags().FlagUsagesWrapped(80))
	}
	if c.Long != "" {
		b.WriteString("\n")
		for _, paragraph := range strings.Split(c.Long, "\n") {
			text := strings.TrimLeft(paragraph, " ")
			b.WriteString(hanging(paragraph[:len(paragraph)-len(text)], text))
		}
	}
	fmt.Fprint(p.stdout, b.String())
}

// hanging wraps text to 80 columns under a label.
func hanging(label, text string) string {
	var b strings.Builder
	width := cell.Width(label)
	for i, line := range cell.Wrap(text, 80-width) {
		if i == 0 {
			b.WriteString(label)
		} else {
			b.WriteString(strings.Repeat(" ", width))
		}
		b.WriteString(line + "\n")
	}
	return b.String()
}
