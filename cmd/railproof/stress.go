package main

import (
	"context"
	"io"

	"github.com/spf13/cobra"

	"railproof/checks"
	"railproof/report"
)

// stressOptions is what `railproof stress` is asked to do.
type stressOptions struct {
	sourceFlags
	outputFlags
	nominal, cold bool
}

func newStress(s *streams) *cobra.Command {
	var o stressOptions
	c := &cobra.Command{
		Use:   "stress FILE",
		Short: "Print the stress table of every part, rated or not",
		Long: `stress prints what every part is subjected to, at its worst over all conditions. With --nominal the netlist is
solved once, exactly as written: no variation of line, load or tolerance. The worst over all conditions holds the
switch-on anyway; --cold-start adds it to the netlist as written.`,
		Args: cobra.ExactArgs(1),
		RunE: func(c *cobra.Command, args []string) error { return runStress(c.Context(), s, &o, args[0]) },
	}
	o.sourceFlags.add(c)
	o.outputFlags.add(c, report.StressFormats())
	c.Flags().BoolVar(&o.nominal, "nominal", false, "the netlist exactly as written")
	c.Flags().BoolVar(&o.cold, "cold-start", false, "with --nominal: also the switch-on from empty")
	return c
}

func runStress(ctx context.Context, s *streams, o *stressOptions, file string) error {
	targets, err := o.targets(report.StressFormats())
	if err != nil {
		return err
	}
	if err := o.validate(1); err != nil {
		return err
	}
	if err := spare(named(targets), o.reads(file)); err != nil {
		return err
	}
	result, diagnostics, err := checks.Stresses(ctx, o.options(file), o.nominal, o.cold)
	if err != nil {
		return err
	}
	if len(diagnostics) > 0 {
		return s.refuse(diagnostics)
	}
	if err := o.spare(targets); err != nil {
		return err
	}
	table := report.NewStressTable(result, o.nominal)
	return deliver(s, targets, func(w io.Writer, format string, style report.Style) error { return table.Write(w, format, style) })
}
