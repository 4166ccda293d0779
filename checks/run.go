package checks

import (
	"context"
	"fmt"
	"os"
	"path/filepath"
	"time"

	"railproof/checks/parts"
	"railproof/checks/policy"
	"railproof/checks/study"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

// Options says what to check and with which tables.
type Options struct {
	Source    netlist.Source
	Policy    string // name of a built-in policy or a CSV file; empty: the duty sheet's, else the default
	PartsFile string // a user's parts table, which wins over the built-in one; empty: none
	Jobs      int    // conditions solved at once; 0: one a core
	Now       time.Time
	Only      []string // names of the checks to run; empty: all
	Waves     bool     // follow the curve of each finding that has one
}

// Circumstances puts the duty into words for the head of a report.
type Circumstances struct{ Line, Load, Ambient, Policy string }

// Assumption is something that was taken as given because nothing was stated.
type Assumption struct{ About, Value, Source string }

// Result is the outcome of a run on one netlist.
type Result struct {
	File, Title   string
	Circuit       *netlist.Circuit
	Duty          *netlist.Duty
	Table         *study.Table
	RailMap       []string // one line a rail, in words
	Circumstances Circumstances
	Findings      []Finding
	Assumptions   []Assumption
	NotRead       []string
	Stresses      []study.Stress
	PartsVersion  string
	PolicyVersion string
}

// prepared is an input read and matched with its tables.
type prepared struct {
	result *Result
	supply *study.Supply
	policy *policy.Policy
}

func prepare(o Options) (*prepared, []netlist.Diagnostic, error) {
	if o.Source.Opened == nil {
		o.Source.Opened = func(string) {}
	}
	table, err := readParts(o.PartsFile, o.Source.Opened)
	if err != nil {
		return nil, nil, err
	}
	o.Source.Library = table
	for _, c := range catalogue {
		o.Source.Checks = append(o.Source.Checks, c.Name)
	}
	circuit, duty, diagnostics, err := netlist.Read(o.Source)
	if err != nil || len(diagnostics) > 0 {
		return nil, diagnostics, err
	}
	rules, fault, err := o.readPolicy(duty)
	if err != nil || fault != nil {
		return nil, fault, err
	}
	r := &Result{
		File: o.Source.File, Title: circuit.Title, Circuit: circuit, Duty: duty,
		PartsVersion: table.Version(), PolicyVersion: rules.Version(),
	}
	return &prepared{r, study.NewSupply(circuit, duty, table), rules}, nil, nil
}

func readParts(file string, opened func(string)) (*parts.Table, error) {
	if file == "" {
		return parts.Default(), nil
	}
	opened(file)
	text, err := os.ReadFile(file)
	if err != nil {
		return nil, err
	}
	return parts.Load(file, text)
}

// readPolicy takes the policy of the options, of the duty, or the default: the name of a built-in one or the path
// of a CSV file. One that a duty statement names wrongly is a fault of that statement.
func (o *Options) readPolicy(d *netlist.Duty) (*policy.Policy, []netlist.Diagnostic, error) {
	beside := filepath.Dir(o.Source.File)
	name, folders := o.Policy, []string{"", beside}
	if name == "" && d.Policy != "" {
		name, folders = d.Policy, []string{filepath.Dir(d.PolicyAt.File), beside, ""}
	}
	if name == "" {
		name = policy.Default
	}
	rules, err := o.findPolicy(name, folders)
	if err != nil && o.Policy == "" && d.Policy != "" {
		return nil, []netlist.Diagnostic{{At: d.PolicyAt, What: err.Error()}}, nil
	}
	return rules, nil, err
}

// findPolicy reads a policy file from the first of the folders that has it.
func (o *Options) findPolicy(name string, folders []string) (*policy.Policy, error) {
	if !policy.IsFile(name) {
		return policy.Named(name)
	}
	if filepath.IsAbs(name) {
		folders = []string{""}
	}
	var first error
	for _, folder := range folders {
		path := filepath.Join(folder, name)
		text, err := os.ReadFile(path)
		if err == nil {
			o.Source.Opened(path)
			rules, err := policy.FromCSV(path, text)
			if err == nil {
				rules.Name = name
			}
			return rules, err
		}
		if first == nil {
			first = err
		}
	}
	return nil, first
}

// Run reads a netlist with its duty sheet, solves its conditions and applies the checks. Diagnostics mean
// bad input: there is then no result. An error means that a file could not be read or an option is wrong.
func Run(ctx context.Context, o Options) (*Result, []netlist.Diagnostic, error) {
	selected, err := selection(o.Only)
	if err != nil {
		return nil, nil, err
	}
	p, diagnostics, err := prepare(o)
	if p == nil {
		return nil, diagnostics, err
	}
	table := study.Worst(ctx, p.supply, o.Jobs)
	if ctx.Err() != nil {
		return nil, nil, ctx.Err()
	}
	r := p.result
	r.Table, r.Stresses = table, table.Stresses
	r.Findings = judge(selected, p.supply, table, p.policy)
	remedied(ctx, p, o.Jobs, table, r.Findings)
	if o.Waves {
		addWaves(ctx, r.Circuit, table.Plan, r.Findings)
	}
	r.describe(p, table)
	return r, nil, nil
}

// Stresses solves the stress table of a netlist: in every condition of its duty, or with nominal exactly as
// written, and with cold from an empty start too.
func Stresses(ctx context.Context, o Options, nominal, cold bool) (*Result, []netlist.Diagnostic, error) {
	p, diagnostics, err := prepare(o)
	if p == nil {
		return nil, diagnostics, err
	}
	var table *study.Table
	if nominal {
		table = study.Nominal(ctx, p.supply, cold)
	} else {
		table = study.Worst(ctx, p.supply, o.Jobs)
	}
	if ctx.Err() != nil {
		return nil, nil, ctx.Err()
	}
	p.result.Table, p.result.Stresses = table, table.Stresses
	p.result.describe(p, table)
	return p.result, nil, nil
}

func selection(only []string) ([]*Check, error) {
	if len(only) == 0 {
		return catalogue, nil
	}
	var list []*Check
	for _, name := range only {
		c, ok := Named(name)
		if !ok {
			return nil, fmt.Errorf("no check is named %q; see `railproof basis`", name)
		}
		list = append(list, c)
	}
	return list, nil
}

// describe fills the words of the report: circumstances, rail map and assumptions.
func (r *Result) describe(p *prepared, table *study.Table) {
	plan := table.Plan
	r.Circumstances = Circumstances{
		Line: plan.LineWords(), Load: plan.LoadWords(), Policy: p.policy.Name,
		Ambient: quantity.Interval{Low: plan.Ambient[0], High: plan.Ambient[1], Unit: quantity.Celsius}.String(),
	}
	for _, rail := range r.Circuit.RailMap(r.Duty) {
		r.RailMap = append(r.RailMap, rail.String())
	}
	for _, a := range plan.Assumptions() {
		r.Assumptions = append(r.Assumptions, Assumption(a))
	}
	for _, m := range r.Circuit.Remarks {
		switch m.Kind {
		case netlist.RemarkAssumption:
			r.Assumptions = append(r.Assumptions, Assumption{About: m.Element, Value: m.Text, Source: m.At.String()})
		case netlist.RemarkNotRead:
			r.NotRead = append(r.NotRead, m.Text)
		}
	}
	for _, m := range r.Duty.Remarks {
		r.Assumptions = append(r.Assumptions, Assumption{About: m.Element, Value: m.Text, Source: m.At.String()})
	}
}
