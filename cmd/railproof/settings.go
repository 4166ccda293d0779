package main

import (
	"io"

	"github.com/spf13/cobra"

	"railproof/checks"
	"railproof/report"
)

// settingsOptions is what `railproof settings` is asked to do.
type settingsOptions struct {
	sourceFlags
	outputFlags
}

func newSettings(s *streams) *cobra.Command {
	var o settingsOptions
	c := &cobra.Command{
		Use:   "settings FILE",
		Short: "Print what is in force for a netlist, and where each statement comes from",
		Long: `settings reads a netlist with its duty sheet and the shared sheet and prints every statement in force with its place:
the sheet, the netlist, the shared sheet or a flag; what is assumed because nothing was stated, with its source; and
what the shared sheet says without an effect on this netlist. Nothing is solved.`,
		Args: cobra.ExactArgs(1),
		RunE: func(_ *cobra.Command, args []string) error { return runSettings(s, &o, args[0]) },
	}
	o.sourceFlags.add(c)
	o.outputFlags.add(c, report.SettingsFormats())
	return c
}

func runSettings(s *streams, o *settingsOptions, file string) error {
	targets, err := o.targets(report.SettingsFormats())
	if err != nil {
		return err
	}
	if err := o.validate(1); err != nil {
		return err
	}
	if err := spare(named(targets), o.reads(file)); err != nil {
		return err
	}
	settings, diagnostics, err := checks.SettingsOf(o.options(file))
	if err != nil {
		return err
	}
	if len(diagnostics) > 0 {
		return s.refuse(diagnostics)
	}
	if err := o.spare(targets); err != nil {
		return err
	}
	page := report.NewSettings(settings)
	return deliver(s, targets, func(w io.Writer, format string, style report.Style) error { return page.Write(w, format, style) })
}
