package main

import (
	"context"
	"fmt"
	"os"
	"time"

	"github.com/spf13/cobra"

	"railproof/checks"
	"railproof/netlist"
	"railproof/report"
)

// draftOptions is what `railproof draft` is asked to do.
type draftOptions struct {
	sourceFlags
	file string
}

func newDraft(s *streams) *cobra.Command {
	var o draftOptions
	c := &cobra.Command{
		Use:   "draft FILE",
		Short: "Write a starter duty sheet: what is missing, as lines to fill in",
		Args:  cobra.ExactArgs(1),
		RunE:  func(c *cobra.Command, args []string) error { return runDraft(c.Context(), s, &o, args[0]) },
	}
	o.sourceFlags.add(c)
	c.Flags().StringVarP(&o.file, "output", "o", "", "write to the new `FILE` instead of the standard output")
	return c
}

func runDraft(ctx context.Context, s *streams, o *draftOptions, file string) error {
	if info, err := os.Stat(o.file); o.file != "" && err == nil && info.Mode().IsRegular() {
		return fmt.Errorf("%s is there already, and a sheet may have been filled in by hand; expected the name of a new file", o.file)
	}
	if err := o.validate(1); err != nil {
		return err
	}
	options := o.options(file)
	options.Now = time.Now()
	result, diagnostics, err := checks.Run(ctx, options)
	if err != nil {
		return err
	}
	if len(diagnostics) > 0 {
		return s.refuse(diagnostics)
	}
	sheet := netlist.Draft(result.Circuit, result.Duty, report.DraftLines(result))
	if o.file != "" {
		return replaceFile(o.file, sheet)
	}
	_, err = s.out.Write(sheet)
	return err
}
