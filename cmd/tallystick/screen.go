package main

import (
	"bytes"
	"errors"
	"fmt"
	"time"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/campaigns/export"
	"example.org/tallystick/sched"
	"example.org/tallystick/ui"
)

// screen opens the terminal interface.
func (p *program) screen() error {
	d, err := p.open()
	if err != nil {
		return err
	}
	if _, err := d.Campaign.Session(p.flags.session, d.at); err != nil {
		return err
	}
	formats, _ := export.Formats()
	config := ui.Config{
		Folder: d.Folder, Session: p.flags.session, Version: version(),
		Mouse: !p.flags.noMouse, ASCII: p.flags.ascii,
		In: p.stdin, Out: p.stdout,
		Formats: formats, Export: d.exportPlan,
	}
	if p.flags.at != "" {
		config.Now = func() time.Time { return d.at }
	}
	err = ui.Run(config)
	if errors.Is(err, ui.ErrNoTerminal) {
		return fmt.Errorf("%w\nwithout one, use a plain command: tallystick plan, tallystick arrears, tallystick --help", err)
	}
	return err
}

// exportPlan writes a plan that the screen holds.
func (d *desk) exportPlan(format, path string, prepared *campaigns.Prepared, plan sched.Plan, proved sched.Bound) (string, error) {
	sheet := export.New(prepared, plan, export.Origin{MadeAt: prepared.At, Version: version(), Entries: len(d.Logbook.Entries),
		Ceiling: proved.Ceiling, HasCeiling: proved.Of != nil})
	var b bytes.Buffer
	if err := export.Write(&b, format, sheet); err != nil {
		return "", err
	}
	if err := campaigns.WriteFile(path, b.Bytes()); err != nil {
		return "", err
	}
	return fmt.Sprintf("wrote %s as %s to %s", count(len(sheet.Rows), "slot"), format, path), nil
}
