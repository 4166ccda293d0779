package main

import (
	"fmt"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"

	"railproof/checks"
	"railproof/checks/policy"
	"railproof/netlist"
)

// sourceFlags says what is read beside a netlist.
type sourceFlags struct {
	duty, policy, parts string
	include             []string
	noShared            bool

	opened fileList // what the runs have read so far
	jobs   int
}

func (f *sourceFlags) add(c *cobra.Command) {
	c.Flags().StringVar(&f.duty, "duty", "", "duty sheet `FILE` (default: the netlist's name with the ending .duty, if it is there)")
	c.Flags().BoolVar(&f.noShared, "no-shared", false, "pass over the shared sheet "+netlist.SharedSheet+" of the netlist's folder or one above it")
	c.Flags().StringVar(&f.policy, "policy", "", "derating policy, a built-in `NAME` or a CSV file (default: the duty sheet's, else "+policy.Default+")")
	c.Flags().StringVar(&f.parts, "parts", "", "ratings of your own, a CSV `FILE` with the columns of the built-in tables")
	c.Flags().StringArrayVar(&f.include, "include", nil, "`DIR` in which included files are looked for, repeatable")
	c.Flags().IntVar(&f.jobs, "jobs", 0, "how much is solved at once (default: one a core)")
	completeFlag(c, "policy", completePolicy)
	completeFlag(c, "duty", completeFiles(".duty"))
	completeFlag(c, "parts", completeFiles(".csv"))
	completeFlag(c, "include", completeFolders)
	if c.ValidArgsFunction == nil {
		c.ValidArgsFunction = whileWanted(completeFiles(netlistEndings...))
	}
}

func (f *sourceFlags) validate(files int) error {
	if f.duty != "" && files > 1 {
		return fmt.Errorf("--duty names the sheet of one netlist, but %d are given", files)
	}
	if f.jobs < 0 {
		return fmt.Errorf("--jobs %d; expected 0 or more", f.jobs)
	}
	return nil
}

// reads lists every file that a run over netlists reads by name: the netlists, their sheets, and the tables.
func (f *sourceFlags) reads(netlists ...string) []string {
	list := []string{f.duty, f.parts}
	if policy.IsFile(f.policy) {
		list = append(list, f.policy)
	}
	for _, n := range netlists {
		own := strings.TrimSuffix(n, filepath.Ext(n)) + ".duty"
		if f.duty != "" {
			own = f.duty
		}
		list = append(list, n, own)
		if !f.noShared {
			list = append(list, netlist.FindSharedSheet(n, own))
		}
	}
	return list
}

// spare refuses to write over what was read, included files too.
func (f *sourceFlags) spare(targets []target) error { return spare(named(targets), f.opened.list()) }

func (f *sourceFlags) options(file string) checks.Options {
	return checks.Options{
		Source: netlist.Source{File: file, DutyFile: f.duty, IncludeDirs: f.include, NoShared: f.noShared, Opened: f.opened.add},
		Policy: f.policy, PartsFile: f.parts, Jobs: f.jobs,
	}
}
