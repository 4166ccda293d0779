package main

import (
	"context"
	"fmt"
	"io"

	"github.com/spf13/cobra"

	"railproof/checks"
	"railproof/report"
)

type sizeOptions struct {
	sourceFlags
	outputFlags
	now string
}

func newSize(s *streams) *cobra.Command {
	var o sizeOptions
	c := &cobra.Command{
		Use:   "size FILE",
		Short: "Find the smallest value or rating that makes each violated check pass",
		Long: `size tries, for every violated check, the steps of preferred values (IEC 60063: E6 for electrolytics, E12, E24) and
of standard ratings, and prints the smallest that makes it pass, with the stress before and after. A changed rating
is judged again. A changed value (reservoir, series resistor of a zener, bleeder, choke) is solved again: first in
the condition that was worst, then in all of them, and what it newly violates is told. Each remedy is tried alone.

Exit status: 0 every violation has a remedy and every headline check was judged; 1 no value helps against a
violation, and what is short is told; 2 a file could not be read or the usage is wrong; 3 something unproven
prevents it: a remedy, a headline check, or a part of the circuit without a solution. 1 goes before 3.`,
		Args: cobra.ExactArgs(1),
		RunE: func(c *cobra.Command, args []string) error { return runSize(c.Context(), s, &o, args[0]) },
	}
	o.sourceFlags.add(c)
	o.outputFlags.add(c, report.SizeFormats())
	c.Flags().StringVar(&o.now, "now", "", "the `DATE` on which concessions are judged, as 2006-01-02 (default: today)")
	return c
}

func runSize(ctx context.Context, s *streams, o *sizeOptions, file string) error {
	targets, err := o.targets(report.SizeFormats())
	if err != nil {
		return err
	}
	now, err := parseDay(o.now)
	if err != nil {
		return err
	}
	if err := o.validate(1); err != nil {
		return err
	}
	if err := spare(named(targets), o.reads(file)); err != nil {
		return err
	}
	options := o.options(file)
	options.Now = now
	result, sizes, diagnostics, err := checks.Size(ctx, options)
	switch {
	case err != nil:
		return err
	case ctx.Err() != nil:
		return fmt.Errorf("interrupted")
	}
	if len(diagnostics) > 0 {
		return s.refuse(diagnostics)
	}
	if err := o.spare(targets); err != nil {
		return err
	}
	r := report.NewSizeReport(result, sizes, version, now)
	if err := deliver(s, targets, func(w io.Writer, format string, style report.Style) error { return r.Write(w, format, style) }); err != nil {
		return err
	}
	if r.Exit != report.ExitPassed {
		return exitStatus(r.Exit)
	}
	return nil
}
