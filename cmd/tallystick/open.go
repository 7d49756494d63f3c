package main

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"strings"
	"time"

	"github.com/spf13/cobra"

	"example.org/tallystick/campaigns"
)

// flags are the common ones; each command declares those that it obeys.
type flags struct {
	campaign, at, format, out, session, effort string
	grid, days                                 int
	save, ascii, noMouse                       bool
}

func (p *program) campaignFlags(c *cobra.Command) {
	c.Flags().StringVar(&p.flags.campaign, "campaign", "", "folder `DIR` of the campaign; without it this folder if it holds a campaign.toml, else the built-in demonstration")
	c.MarkFlagDirname("campaign")
	p.atFlag(c)
}

func (p *program) atFlag(c *cobra.Command) {
	c.Flags().StringVar(&p.flags.at, "at", "", "pretend it is this `TIME`, ISO 8601 UTC")
}

func (p *program) tableFlags(c *cobra.Command, formats ...string) {
	c.Flags().StringVar(&p.flags.format, "format", formats[0], "`FORMAT` to print in: "+strings.Join(formats, ", "))
	c.Flags().StringVar(&p.flags.out, "out", "", "write to `FILE`, replacing it whole, instead of standard output")
	c.RegisterFlagCompletionFunc("format", cobra.FixedCompletions(formats, cobra.ShellCompDirectiveNoFileComp))
	before := c.PreRunE
	c.PreRunE = func(c *cobra.Command, args []string) error {
		if before != nil {
			if err := before(c, args); err != nil {
				return err
			}
		}
		return oneOf("--format", p.flags.format, formats)
	}
}

func (p *program) sessionFlags(c *cobra.Command) {
	c.Flags().StringVar(&p.flags.session, "session", "next", "`NAME` of the session, or next: the first that has not ended")
	c.RegisterFlagCompletionFunc("session", p.completeFrom(sessionNames))
}

// A desk is an opened campaign and the moment it is looked at.
type desk struct {
	*campaigns.Folder
	at time.Time
}

// open finds the campaign that the command is about, and says so when that is the demonstration.
func (p *program) open() (*desk, error) {
	at, given, err := p.moment()
	if err != nil {
		return nil, err
	}
	folder, err := p.folder(p.flags.campaign)
	if err != nil {
		return nil, err
	}
	for _, n := range folder.Notices {
		p.say("%s", n)
	}
	now, fixed := folder.Now()
	switch {
	case given:
		now = at
	case !fixed:
		now = p.now().UTC()
	}
	if folder.Demo() {
		p.sayWrapped("no campaign.toml here: this is the built-in demonstration, invented data, looked at as of " + now.UTC().Format("2006-01-02T15:04Z"))
	}
	return &desk{folder, now}, nil
}

func (p *program) folder(dir string) (*campaigns.Folder, error) {
	if dir != "" {
		return campaigns.Open(dir)
	}
	_, err := os.Stat("campaign.toml")
	switch {
	case err == nil:
		return campaigns.Open(".")
	case errors.Is(err, fs.ErrNotExist):
		return campaigns.OpenDemo()
	}
	return nil, err
}

// moment reads --at.
func (p *program) moment() (at time.Time, given bool, err error) {
	if p.flags.at == "" {
		return time.Time{}, false, nil
	}
	at, err = instant("--at", p.flags.at)
	return at, err == nil, err
}

// instant reads a time that a flag gives.
func instant(flag, text string) (time.Time, error) {
	for _, layout := range []string{time.RFC3339, "2006-01-02T15:04Z07:00", "2006-01-02T15:04:05", "2006-01-02T15:04", time.DateOnly} {
		if t, err := time.Parse(layout, text); err == nil {
			return t.UTC(), nil
		}
	}
	return time.Time{}, usagef("%s: found %q; accepted: a time in ISO 8601, UTC unless it says otherwise, as 2026-12-03T18:00:00Z", flag, text)
}

// session finds the session that --session names, and says when it has ended.
func (p *program) session(d *desk) (*campaigns.Session, error) {
	s, err := d.Campaign.Session(p.flags.session, d.at)
	if err != nil {
		return nil, err
	}
	if !s.End.After(d.at) {
		p.say("session %s ended at %s: looked at as if it were still to come", s.Name, s.End.UTC().Format(time.RFC3339))
	}
	return s, nil
}

// deliver hands the answer over: to --out, replaced whole or not at all, or to standard output.
func (p *program) deliver(write func(io.Writer) error) error {
	var b bytes.Buffer
	if err := write(&b); err != nil {
		return err
	}
	if p.flags.out == "" {
		_, err := p.stdout.Write(b.Bytes())
		return err
	}
	if err := campaigns.WriteFile(p.flags.out, b.Bytes()); err != nil {
		return fmt.Errorf("%s was not written: %w", p.flags.out, err)
	}
	return nil
}
