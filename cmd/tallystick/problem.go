package main

import (
	"errors"
	"fmt"
	"io"

	"github.com/spf13/cobra"

	"example.org/tallystick/sched"
)

func (p *program) problemCommand() *cobra.Command {
	c := &cobra.Command{
		Use:   "problem",
		Short: "Write a session's planning problem for a general solver, to check the planner",
		Long: "Writes exactly the problem that plan solves (same grid, rules, pins, bars and worth) as a mixed-integer program in free MPS form, " +
			"worth to be maximised. The optimum that a solver proves lies between the worth and the ceiling that plan prints with the same --grid.\n" +
			"\n" +
			"Columns named slot_NODE_START_END are the slots, in minutes from the session's start; the comments at the head of the file say " +
			"which source, receiver and turn of the mount each node is. All other columns say how the telescope comes from one slot to the next.\n" +
			"\n" +
			fmt.Sprintf("A coarse grid keeps it small: a session of 4 hours with 15 sources has 25,000 to 35,000 columns on a grid of 5 minutes. "+
				"Above %d columns nothing is written, and the grid that would do is named.", sched.MaxColumns),
		Example: "  tallystick problem --grid 15 --out tonight.mps\n  tallystick problem --session \"2026-12-03 night\" --grid 10 --out night.mps",
		Args:    noArgs,
		RunE: func(*cobra.Command, []string) error {
			d, err := p.open()
			if err != nil {
				return err
			}
			s, err := p.session(d)
			if err != nil {
				return err
			}
			prepared, _, err := p.prepare(d, s)
			if err != nil {
				return err
			}
			model, err := sched.NewModel(prepared.Problem)
			var large *sched.TooLargeError
			if errors.As(err, &large) && large.Fits > 0 {
				return fmt.Errorf("session %s: %w: --grid %d", s.Name, err, large.Fits)
			}
			if err != nil {
				return fmt.Errorf("session %s: %w", s.Name, err)
			}
			columns, binaries, rows := model.Size()
			p.say("%d columns, %d of them slots, and %d rows", columns, binaries, rows)
			return p.deliver(func(w io.Writer) error { return model.WriteMPS(w) })
		},
	}
	p.campaignFlags(c)
	p.sessionFlags(c)
	c.Flags().StringVar(&p.flags.out, "out", "", "write to `FILE`, replacing it whole, instead of standard output")
	p.gridFlag(c)
	c.PreRunE = p.checkGrid
	return c
}
