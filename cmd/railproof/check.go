package main

import (
	"context"
	"fmt"
	"io"
	"os"
	"runtime"
	"slices"
	"strings"
	"time"

	"github.com/spf13/cobra"
	"golang.org/x/sync/errgroup"

	"railproof/checks"
	"railproof/report"
)

// checkOptions is what `railproof check` is asked to do.
type checkOptions struct {
	sourceFlags
	outputFlags
	gate          string
	allowUnproven bool
	now           string
	baseline      string
	newOnly       bool
	proven        bool
	waves         bool // some format shows curves
	watch         bool

	fresh func() // called before a run first writes; may be nil
}

func newCheck(s *streams) *cobra.Command {
	var o checkOptions
	c := &cobra.Command{
		Use:   "check FILE|DIR...",
		Short: "Check netlists and report findings",
		Long: `check solves every condition of each netlist and judges each part. Of a folder every netlist below it is taken:
files that end in ` + strings.Join(netlistEndings, ", ") + `; folders whose name begins with a dot are passed over. A file
given by name is taken whatever its ending.

When an input cannot be read, its faults stand on the error stream, no FILE is written, and the status is 2.`,
		Args: cobra.MinimumNArgs(1),
		RunE: func(c *cobra.Command, args []string) error {
			if o.watch {
				return watchCheck(c.Context(), s, &o, args)
			}
			return checkOnce(c.Context(), s, &o, args)
		},
	}
	o.sourceFlags.add(c)
	o.outputFlags.add(c, report.Formats())
	c.Flags().StringVar(&o.gate, "gate", report.DefaultGate, "severities that stop a release: `LIST` of critical, major, minor, or never; graver ones are implied")
	c.Flags().BoolVar(&o.allowUnproven, "allow-unproven", false, "let the gate pass while headline checks are unproven")
	c.Flags().StringVar(&o.now, "now", "", "the `DATE` on which concessions are judged, as 2006-01-02 (default: today)")
	c.Flags().StringVar(&o.baseline, "baseline", "", "an earlier JSON report `FILE`: findings it has are marked unchanged, others new")
	c.Flags().BoolVar(&o.newOnly, "new-only", false, "with --baseline: the gate looks at new findings only")
	c.Flags().BoolVar(&o.proven, "proven", false, "let the text ledger list all that is proven, not the headline checks alone")
	c.Flags().BoolVar(&o.watch, "watch", false, "check again after each save of a file that is read; Ctrl-C ends, with the status of the last check")
	completeFlag(c, "baseline", completeFiles(".json"))
	completeList(c, "gate", "critical", "major", "minor", "never")
	return c
}

func checkOnce(ctx context.Context, s *streams, o *checkOptions, args []string) error {
	targets, err := o.targets(report.Formats())
	if err != nil {
		return err
	}
	drawn, err := o.report()
	if err != nil {
		return err
	}
	files, err := findInputs(args)
	if err != nil {
		return err
	}
	if err := o.validate(len(files)); err != nil {
		return err
	}
	if err := spare(named(targets), append(o.reads(files...), o.baseline)); err != nil {
		return err
	}
	o.waves = slices.ContainsFunc(targets, func(t target) bool { return report.ShowsWaves(t.format) })
	inputs := checkAll(ctx, s, o, files, drawn.Now)
	if ctx.Err() != nil {
		return fmt.Errorf("interrupted")
	}
	if o.fresh != nil {
		o.fresh()
	}
	if err := o.spare(targets); err != nil {
		return err
	}
	complain(s, inputs)
	r := report.New(inputs, drawn)
	if r.Exit == report.ExitBadInput {
		targets = standardOnly(s, targets, r)
	}
	err = deliver(s, targets, func(w io.Writer, format string, style report.Style) error {
		style.Proven = o.proven
		return r.Write(w, format, style)
	})
	if err != nil {
		return err
	}
	if r.Exit != report.ExitPassed {
		return exitStatus(r.Exit)
	}
	return nil
}

// report turns the flags into the options of the report.
func (o *checkOptions) report() (report.Options, error) {
	gate, err := report.ParseGate(o.gate)
	if err != nil {
		return report.Options{}, err
	}
	now, err := parseDay(o.now)
	if err != nil {
		return report.Options{}, err
	}
	drawn := report.Options{Version: version, Gate: gate, AllowUnproven: o.allowUnproven, Now: now, NewOnly: o.newOnly}
	if o.newOnly && o.baseline == "" {
		return drawn, fmt.Errorf("--new-only needs --baseline")
	}
	if o.baseline != "" {
		text, err := os.ReadFile(o.baseline)
		if err != nil {
			return drawn, err
		}
		if drawn.Baseline, err = report.ReadBaseline(o.baseline, text); err != nil {
			return drawn, err
		}
	}
	return drawn, nil
}

func parseDay(text string) (time.Time, error) {
	if text == "" {
		return time.Now(), nil
	}
	for _, layout := range []string{time.DateOnly, time.RFC3339} {
		if t, err := time.Parse(layout, text); err == nil {
			return t, nil
		}
	}
	return time.Time{}, fmt.Errorf("--now %q; expected a date such as 2006-01-02", text)
}

// checkAll checks the files, several at once; the order of the results is that of the files.
func checkAll(ctx context.Context, s *streams, o *checkOptions, files []string, now time.Time) []report.Input {
	inputs := make([]report.Input, len(files))
	jobs := o.jobs
	if jobs == 0 {
		jobs = runtime.GOMAXPROCS(0)
	}
	progress := newProgress(s, len(files), "files")
	var group errgroup.Group
	group.SetLimit(jobs)
	for k, file := range files {
		group.Go(func() error {
			options := o.options(file)
			options.Now, options.Waves = now, o.waves
			if len(files) > 1 {
				options.Jobs = 1
			}
			inputs[k] = checkOne(ctx, options)
			progress.step()
			return nil
		})
	}
	_ = group.Wait() // the functions return none
	progress.end()
	return inputs
}

// checkOne checks a file. A fault of the program itself becomes a failure of the file, not the end of the run.
func checkOne(ctx context.Context, o checks.Options) (in report.Input) {
	in.File = o.Source.File
	defer func() {
		if r := recover(); r != nil {
			in.Result, in.Failure = nil, fmt.Errorf("%s: internal fault: %v; please report it with the netlist", o.Source.File, r)
		}
	}()
	in.Result, in.Diagnostics, in.Failure = checks.Run(ctx, o)
	return in
}

// complain writes what is wrong with the inputs to the error stream, each message once.
func complain(s *streams, inputs []report.Input) {
	said := map[string]bool{}
	for _, in := range inputs {
		for _, d := range in.Diagnostics {
			if !said[d.Error()] { // several netlists may share a sheet
				said[d.Error()] = true
				s.say(d.Error())
			}
		}
		if in.Failure != nil && !said[in.Failure.Error()] {
			said[in.Failure.Error()] = true
			s.say("railproof: " + in.Failure.Error())
		}
	}
}

// standardOnly drops the files from the targets, since a report with unread inputs must not stand where a
// whole one is looked for, and the text ledger too where nothing was checked.
func standardOnly(s *streams, targets []target, r *report.Report) []target {
	var kept []target
	for _, t := range targets {
		switch {
		case t.file != "":
			s.say("railproof: " + t.file + " is not written")
		case t.format == "text" && r.Unread() == len(r.Files):
		default:
			kept = append(kept, t)
		}
	}
	return kept
}
