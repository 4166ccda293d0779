package main

import (
	"context"
	"errors"
	"fmt"
	"io"

	"github.com/spf13/cobra"

	"railproof/checks"
	"railproof/checks/study"
	"railproof/netlist/quantity"
	"railproof/report"
)

// traceOptions is what `railproof trace` is asked to do.
type traceOptions struct {
	sourceFlags
	outputFlags
	line, stress, duration string
	loads                  []string
	nominal, cold          bool
	phase                  float64
	periods                int
}

func newTrace(s *streams) *cobra.Command {
	var o traceOptions
	c := &cobra.Command{
		Use:   "trace FILE [NODE or ELEMENT...]",
		Short: "Draw waveforms over two line cycles or from cold start",
		Long: `trace solves one condition and writes its waveforms as numbers (csv) or as a drawing (svg, png).

  OUT            the voltage of node OUT against ground (node:OUT where an element has the same name)
  D1             the voltage and the current of element D1
  D1:voltage     its voltage alone: first terminal against second, anode to cathode, collector to emitter
  D1:current     its current alone: into the first terminal; of a voltage source that is into its plus
  U1             of a regulator: its input above its output, and the current out of its output

Without names: what reservoirs, filters and regulators of each rail deliver.

The condition is nominal line and full load unless --line and --load say otherwise, with the air at the high end of
its range and no part off its drawn value. --nominal takes the netlist exactly as written, without what its duty sheet varies;
--stress D1=peak-reverse-voltage the condition in which that stress is worst, tolerances included: the quantities are
those of ` + "`railproof stress`" + `, and without names the part itself is traced.

The steady state is shown over two periods of the sources, a cold start over ten. In CSV there is one line a moment:
time_s, then NAME:voltage_V or NAME:current_A, nodes as node:NAME; every value that was solved is there, before and
after a jump too, and what has none at that moment is interpolated. In a drawing a dot marks the highest point of a
curve and a ring the lowest; no peak is lost to its resolution.

Exit status: 0 every waveform asked for is written; 2 a file could not be read or the usage is wrong; 3 a waveform has
no solution: the error stream says why, and the others are written.`,
		Example: `  railproof trace supply.cir OUT D1:current --format png --output out.png
  railproof trace supply.cir --line low --load 50% --format svg --output rails.svg
  railproof trace supply.cir --stress D1=peak-reverse-voltage
  railproof trace supply.cir D1:current --cold-start --phase 90 --periods 20`,
		Args: cobra.MinimumNArgs(1),
		RunE: func(c *cobra.Command, args []string) error { return runTrace(c.Context(), s, &o, c, args) },
	}
	o.sourceFlags.add(c)
	o.outputFlags.add(c, report.TraceFormats())
	f := c.Flags()
	f.StringVar(&o.line, "line", "nominal", "`END` of the supply line: low, nominal or high")
	f.StringArrayVar(&o.loads, "load", nil, "`LEVEL` of all loads, light, full or a percentage, or NAME=LEVEL of one, repeatable (default full)")
	f.BoolVar(&o.nominal, "nominal", false, "the netlist exactly as written")
	f.StringVar(&o.stress, "stress", "", "the condition in which a stress is worst, as `ELEMENT=QUANTITY`")
	f.BoolVar(&o.cold, "cold-start", false, "from empty instead of the steady state")
	f.Float64Var(&o.phase, "phase", 0, "with --cold-start: where in the period of the sources it begins, in `DEGREES`")
	f.IntVar(&o.periods, "periods", 0, "how many periods of the sources (default 2, of a cold start 10)")
	f.StringVar(&o.duration, "duration", "", "how long instead, a `TIME` such as 50ms")
	completeWords(c, "line", "low", "nominal", "high")
	completeWords(c, "load", "light", "full")
	return c
}

func runTrace(ctx context.Context, s *streams, o *traceOptions, c *cobra.Command, args []string) error {
	for _, pair := range contrary {
		if c.Flags().Changed(pair[0]) && c.Flags().Changed(pair[1]) {
			return fmt.Errorf("--%s and --%s exclude each other", pair[0], pair[1])
		}
	}
	targets, err := o.targets(report.TraceFormats())
	if err != nil {
		return err
	}
	for _, t := range targets {
		if t.format == "png" && t.file == "" && s.outTerm {
			return errors.New("png is no text for a terminal; expected --output FILE")
		}
	}
	window, err := o.window(c)
	if err != nil {
		return err
	}
	if err := o.validate(1); err != nil {
		return err
	}
	file := args[0]
	if err := spare(named(targets), o.reads(file)); err != nil {
		return err
	}
	traced, diagnostics, err := checks.Trace(ctx, checks.TraceOptions{
		Options: o.options(file), Signals: args[1:], Line: o.line, Loads: o.loads, Nominal: o.nominal, Stress: o.stress,
		Cold: o.cold, Degrees: o.phase, Window: window,
	})
	if err != nil {
		return err
	}
	if len(diagnostics) > 0 {
		return s.refuse(diagnostics)
	}
	if err := o.spare(targets); err != nil {
		return err
	}
	return writeTrace(s, targets, traced)
}

// contrary are flags of which one makes the other void.
var contrary = [][2]string{
	{"nominal", "stress"}, {"nominal", "line"}, {"nominal", "load"}, {"stress", "line"}, {"stress", "load"},
	{"stress", "cold-start"}, {"periods", "duration"},
}

// window reads how long the trace is to be.
func (o *traceOptions) window(c *cobra.Command) (study.Window, error) {
	w := study.Window{Periods: o.periods}
	if c.Flags().Changed("periods") && o.periods < 1 {
		return w, fmt.Errorf("--periods %d; expected 1 or more", o.periods)
	}
	if o.duration != "" {
		v, err := quantity.Parse(o.duration, quantity.Second)
		if err != nil {
			return w, fmt.Errorf("--duration %w", err)
		}
		if !(v.Number > 0) {
			return w, fmt.Errorf("--duration %s; expected a time above zero", o.duration)
		}
		w.Duration = v.Number
	}
	if c.Flags().Changed("phase") && !o.cold {
		return w, errors.New("--phase needs --cold-start")
	}
	if !(o.phase >= 0 && o.phase <= 360) {
		return w, fmt.Errorf("--phase %g; expected 0 to 360 degrees", o.phase)
	}
	return w, nil
}

// writeTrace writes what has a solution and says what has none.
func writeTrace(s *streams, targets []target, traced *checks.Traced) error {
	sheet := report.NewTraceSheet(traced)
	for _, note := range append(traced.Notes, sheet.Doubts()...) {
		s.say("railproof: note: " + note)
	}
	unsolved := sheet.Unsolved()
	for _, why := range unsolved {
		s.say("railproof: " + why)
	}
	if len(unsolved) < len(traced.Trace.Waveforms) {
		err := deliver(s, targets, func(w io.Writer, format string, _ report.Style) error { return sheet.Write(w, format) })
		if err != nil {
			return err
		}
	}
	if len(unsolved) > 0 {
		return exitStatus(report.ExitUnproven)
	}
	return nil
}
