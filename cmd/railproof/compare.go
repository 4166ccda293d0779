package main

import (
	"io"
	"os"

	"github.com/spf13/cobra"

	"railproof/report"
)

// compareOptions is what `railproof compare` is asked to do.
type compareOptions struct {
	outputFlags
	gate          string
	allowUnproven bool
}

func newCompare(s *streams) *cobra.Command {
	var o compareOptions
	c := &cobra.Command{
		Use:   "compare OLD.json NEW.json",
		Short: "Tell what a change did: new, cleared, better, worse",
		Long: `compare takes two reports of check --format json. The gate looks only at what is new or worse: the status is 1
if a violation at or above the gate is, and 3 if a headline check is newly unproven.`,
		Args:              cobra.ExactArgs(2),
		ValidArgsFunction: whileWanted(completeFiles(".json")),
		RunE:              func(_ *cobra.Command, args []string) error { return runCompare(s, &o, args[0], args[1]) },
	}
	o.outputFlags.add(c, report.ComparisonFormats())
	c.Flags().StringVar(&o.gate, "gate", report.DefaultGate, "severities that stop: `LIST` of critical, major, minor, or never; graver ones are implied")
	c.Flags().BoolVar(&o.allowUnproven, "allow-unproven", false, "let the gate pass while headline checks are newly unproven")
	completeList(c, "gate", "critical", "major", "minor", "never")
	return c
}

func runCompare(s *streams, o *compareOptions, before, after string) error {
	targets, err := o.targets(report.ComparisonFormats())
	if err != nil {
		return err
	}
	gate, err := report.ParseGate(o.gate)
	if err != nil {
		return err
	}
	if err := spare(named(targets), []string{before, after}); err != nil {
		return err
	}
	oldText, err := os.ReadFile(before)
	if err != nil {
		return err
	}
	newText, err := os.ReadFile(after)
	if err != nil {
		return err
	}
	c, err := report.CompareReports(before, oldText, after, newText, gate, o.allowUnproven)
	if err != nil {
		return err
	}
	if err := deliver(s, targets, func(w io.Writer, format string, style report.Style) error { return c.Write(w, format, style) }); err != nil {
		return err
	}
	if c.Exit != report.ExitPassed {
		return exitStatus(c.Exit)
	}
	return nil
}
