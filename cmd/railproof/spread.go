package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"

	"github.com/spf13/cobra"

	"railproof/checks"
	"railproof/checks/study"
	"railproof/report"
)

// spreadOptions is what `railproof spread` is asked to do.
type spreadOptions struct {
	sourceFlags
	outputFlags
	trials       int
	seed, first  uint64
	distribution string
	stresses     []string
	merge        bool
}

// mostTrials is how many trials one run takes: their values are all kept.
const mostTrials = 1_000_000

func newSpread(s *streams) *cobra.Command {
	var o spreadOptions
	c := &cobra.Command{
		Use:   "spread FILE | spread --merge PART.json...",
		Short: "Draw line, loads and tolerances at random, and hold the stresses against their worst case",
		Long: `spread solves the steady state of a netlist many times, with the line, the loads, the ambient and every tolerance
drawn at random within the ends that the worst case takes, and shows how each stress is distributed below its
worst-case bound. Switch-on, line off and shorted outputs are in the bounds, but no trial has them.

A trial depends on the seed and its own number alone. So a study can be cut into pieces, for several machines or
one after the other, and put together again; the whole is, byte for byte, what one run over all trials writes.

Text shows the stresses of the headline checks, or those that --stress names; JSON and CSV hold all.

Exit status: 0 no trial lies beyond a worst-case bound; 1 a trial does, of any stress: then that bound is not
proven; 2 a file could not be read or the usage is wrong; 3 none does, but a stress that was asked for has no
proven bound or a trial without a value, or a part of the circuit is unsolved.`,
		Example: `  railproof spread a.cir --first 1 --trials 5000 --format json=1.json
  railproof spread a.cir --first 5001 --trials 5000 --format json=2.json
  railproof spread --merge 1.json 2.json`,
		Args: cobra.MinimumNArgs(1),
		ValidArgsFunction: func(c *cobra.Command, args []string, typed string) ([]string, cobra.ShellCompDirective) {
			switch {
			case o.merge:
				return completeFiles(".json")(c, args, typed)
			case len(args) > 0:
				return nil, cobra.ShellCompDirectiveNoFileComp
			}
			return completeFiles(netlistEndings...)(c, args, typed)
		},
		RunE: func(c *cobra.Command, args []string) error {
			if o.merge {
				return runMerge(c, s, &o, args)
			}
			if len(args) > 1 {
				return fmt.Errorf("%d files; expected one netlist, or --merge", len(args))
			}
			return runSpread(c.Context(), s, &o, args[0])
		},
	}
	o.sourceFlags.add(c)
	o.outputFlags.add(c, report.SpreadFormats())
	c.Flags().IntVarP(&o.trials, "trials", "n", 1000, "how many trials to solve")
	c.Flags().Uint64Var(&o.seed, "seed", 1, "the seed of the random numbers")
	c.Flags().Uint64Var(&o.first, "first", 1, "the `NUMBER` of the first trial")
	c.Flags().StringVar(&o.distribution, "distribution", string(study.Uniform), "of the tolerances: uniform, or normal with the ends at 3 sigma and cut off there; line, loads and ambient stay uniform")
	c.Flags().StringArrayVar(&o.stresses, "stress", nil, "a stress to show, `ELEMENT=QUANTITY`, repeatable")
	c.Flags().BoolVar(&o.merge, "merge", false, "join JSON spreads of separate trials of one study")
	completeWords(c, "distribution", string(study.Uniform), string(study.Normal))
	return c
}

func (o *spreadOptions) sampling() (study.SpreadOptions, error) {
	d := study.Distribution(o.distribution)
	switch {
	case o.trials < 1 || o.trials > mostTrials:
		return study.SpreadOptions{}, fmt.Errorf("--trials %d; expected 1 to %d, more in pieces (--first)", o.trials, mostTrials)
	case o.seed > report.LargestTrial:
		return study.SpreadOptions{}, fmt.Errorf("--seed %d; expected at most %d", o.seed, uint64(report.LargestTrial))
	case o.first < 1 || o.first > report.LargestTrial-mostTrials:
		return study.SpreadOptions{}, fmt.Errorf("--first %d; expected 1 to %d", o.first, uint64(report.LargestTrial-mostTrials))
	case d != study.Uniform && d != study.Normal:
		return study.SpreadOptions{}, fmt.Errorf("--distribution %q; expected %s or %s", o.distribution, study.Uniform, study.Normal)
	}
	return study.SpreadOptions{Seed: o.seed, First: o.first, Trials: o.trials, Distribution: d}, nil
}

func runSpread(ctx context.Context, s *streams, o *spreadOptions, file string) error {
	targets, err := o.targets(report.SpreadFormats())
	if err != nil {
		return err
	}
	trials, err := o.sampling()
	if err != nil {
		return err
	}
	if err := errors.Join(o.validate(1), spare(named(targets), o.reads(file))); err != nil {
		return err
	}
	var chosen []int
	var bar *progress
	trials.Begin = func(sampled *study.Spread) error {
		if err := o.spare(targets); err != nil {
			return err
		}
		var err error
		if chosen, err = report.SelectStresses(sampled, o.stresses); err == nil {
			bar = newProgress(s, o.trials, "trials")
		}
		return err
	}
	trials.Done = func() { bar.step() }
	result, diagnostics, err := checks.Spread(ctx, o.options(file), trials)
	if bar != nil {
		bar.end()
	}
	switch {
	case ctx.Err() != nil:
		return errors.New("interrupted")
	case err != nil:
		return err
	case len(diagnostics) > 0:
		return s.refuse(diagnostics)
	}
	spread := report.NewSpread(result, version)
	spread.Selected = chosen
	return deliverSpread(s, targets, spread)
}

// runOnly are the flags of a run that --merge cannot change.
var runOnly = []string{"trials", "seed", "first", "distribution", "duty", "no-shared", "policy", "parts", "include", "jobs"}

func runMerge(c *cobra.Command, s *streams, o *spreadOptions, files []string) error {
	for _, name := range runOnly {
		if c.Flags().Changed(name) {
			return fmt.Errorf("--%s is for a run; with --merge everything stands in the files", name)
		}
	}
	targets, err := o.targets(report.SpreadFormats())
	if err != nil {
		return err
	}
	if err := spare(named(targets), files); err != nil {
		return err
	}
	var list []*report.Spread
	for _, file := range files {
		text, err := os.ReadFile(file)
		if err != nil {
			return err
		}
		part, err := report.ReadSpread(file, text)
		if err != nil {
			return err
		}
		list = append(list, part)
	}
	whole, err := report.MergeSpreads(files, list)
	if err != nil {
		return err
	}
	if whole.Selected, err = report.SelectStresses(whole.Study, o.stresses); err != nil {
		return err
	}
	return deliverSpread(s, targets, whole)
}

func deliverSpread(s *streams, targets []target, spread *report.Spread) error {
	err := deliver(s, targets, func(w io.Writer, format string, style report.Style) error { return spread.Write(w, format, style) })
	if err != nil {
		return err
	}
	if exit := spread.Exit(); exit != report.ExitPassed {
		return exitStatus(exit)
	}
	return nil
}
