package main

import (
	"context"
	"errors"
	"fmt"

	"github.com/spf13/cobra"

	"railproof/report"
)

// exitStatus is the outcome of a verb that did its work and has a status to give.
type exitStatus report.Exit

func (e exitStatus) Error() string { return fmt.Sprintf("exit status %d", int(e)) }

// run is the whole program: arguments in, exit status out. Here, and only here, errors become exit codes: a
// status of a verb is passed on, and every other error is bad usage or bad input.
func run(ctx context.Context, args []string, s streams) int {
	root := newRoot(&s)
	root.SetArgs(args)
	root.SetIn(s.in)
	root.SetOut(s.out)
	root.SetErr(s.err)
	err := root.ExecuteContext(ctx)
	var status exitStatus
	switch {
	case err == nil:
		return int(report.ExitPassed)
	case errors.As(err, &status):
		return int(status)
	}
	s.say("railproof: " + err.Error())
	return int(report.ExitBadInput)
}

func newRoot(s *streams) *cobra.Command {
	root := &cobra.Command{
		Use:   "railproof",
		Short: "Prove that every part of a mains-fed DC supply stays inside its rating",
		Long: `railproof reads the netlist of a mains-fed DC power supply (SPICE element cards) and its duty sheet, solves
the conditions the supply will meet, and proves or refutes that every part stays inside its rating.

Exit status: 0 the gate passed and every headline check was judged; 1 a violation at or above the gate; 2 a
file could not be read or the usage is wrong; 3 nothing violates the gate, but a headline check is unproven
or a part of the circuit unsolved. Over several files the gravest wins: 2, then 1, then 3.`,
		SilenceErrors: true, SilenceUsage: true, Args: cobra.NoArgs,
		RunE: func(c *cobra.Command, _ []string) error {
			c.SetOut(s.err)
			_ = c.Help()
			return errors.New("a command is missing")
		},
	}
	root.PersistentFlags().StringVar(&s.colour, "color", "auto", "colour: auto, always or never")
	completeWords(root, "color", "auto", "always", "never")
	root.PersistentPreRunE = func(*cobra.Command, []string) error { return s.checkColour() }
	root.SetFlagErrorFunc(func(c *cobra.Command, err error) error {
		return fmt.Errorf("%w; see `%s --help`", err, c.CommandPath())
	})
	root.AddCommand(newCheck(s), newStress(s), newSpread(s), newTrace(s), newDraft(s), newCompare(s), newBasis(s), newParts(s), newVersion(s))
	root.AddCommand(newSettings(s), newMan(s))
	root.AddCommand(newSize(s))
	return root
}
