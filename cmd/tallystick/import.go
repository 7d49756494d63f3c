package main

import (
	"fmt"
	"io"
	"os"
	"strings"

	"github.com/spf13/cobra"

	"example.org/tallystick/campaigns/ephemeris"
)

func (p *program) importCommand() *cobra.Command {
	c := &cobra.Command{
		Use:   "import FILE...",
		Short: "Turn keyword-value ephemeris files into [[source]] entries",
		Long: "The entries go to standard output, as TOML to paste into campaign.toml or to include from it; every digit is " +
			"kept. What is derived, assumed, left out or in contradiction goes to standard error, and is said beside " +
			"the number. Times in TCB are changed to TDB, ecliptic positions to ICRS; glitches are added to the spin, which is then that of a later date. Each entry has a cadence of " +
			fmt.Sprintf("%d days to start with: set it right. ", ephemeris.StarterEveryDays) +
			"Exit 1 when a file could not be read; the others are written all the same.",
		Example: "  tallystick import J0102+0304.par\n  tallystick import ephemerides/*.par --out sources/imported.toml",
		Args: func(c *cobra.Command, args []string) error {
			if len(args) == 0 {
				return usagef("%s takes at least one file, found none; usage: %s", c.CommandPath(), c.UseLine())
			}
			return nil
		},
		RunE: func(_ *cobra.Command, args []string) error { return p.importFiles(args) },
	}
	c.Flags().StringVar(&p.flags.out, "out", "", "write to `FILE`, replacing it whole, instead of standard output")
	return c
}

func (p *program) importFiles(paths []string) error {
	var entries []string
	from := map[string]string{} // the file in which each pulsar was found
	for _, path := range paths {
		f, err := p.importFile(path)
		if err != nil {
			p.say("%s", words(err.Error()))
			continue
		}
		if first, twice := from[f.Name]; twice {
			p.say("%s: %s was imported from %s already; this one is left out", words(path), words(f.Name), words(first))
			continue
		}
		from[f.Name] = path
		entries = append(entries, f.Source())
	}
	p.say("%d of %s imported", len(entries), count(len(paths), "file"))
	if len(entries) > 0 {
		head := fmt.Sprintf("# Imported by tallystick %s: %s.\n\n", version(), count(len(entries), "source"))
		err := p.deliver(func(w io.Writer) error {
			_, err := io.WriteString(w, head+strings.Join(entries, "\n"))
			return err
		})
		if err != nil {
			return err
		}
	}
	if len(entries) < len(paths) {
		return exitCode(exitNo)
	}
	return nil
}

// importFile reads one file and says what there is to say about it.
func (p *program) importFile(path string) (*ephemeris.File, error) {
	file, err := os.Open(path)
	if err != nil {
		return nil, err
	}
	defer file.Close()
	f, err := ephemeris.Read(file, path)
	for _, r := range f.Remarks {
		p.say("%s", words(r.String()))
	}
	return f, err
}
