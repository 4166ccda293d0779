// Package report turns the results of checks into one Report value and writes it in every format: the text
// ledger, the machine formats and the page. A writer sees only the Report.
package report

import (
	"strings"
	"time"

	"railproof/checks"
	"railproof/checks/study"
	"railproof/netlist"
)

// Report is everything that a run found.
type Report struct {
	Version  string // of the tool
	Files    []File // in the order of the inputs
	Totals   Totals
	Gated    Totals // what the gate looked at: all, or with NewOnly what the baseline does not have
	Gate     Gate
	Exit     Exit
	Compared bool // a baseline was given: findings carry a State
	NewOnly  bool // the gate looked at new findings only
}

// File is the outcome of one input.
type File struct {
	Name          string // as given, with forward slashes
	Title         string
	Circumstances checks.Circumstances
	RailMap       []string            // one line a rail, in words
	Rails         []netlist.RailChain // the same as a structure
	Findings      []Finding           // in the total order of Sort
	Assumptions   []checks.Assumption
	NotRead       []string
	Stresses      []study.Stress
	Diagnostics   []netlist.Diagnostic // bad input: then there is nothing else
	Failure       string               // the file could not be read, in words; empty otherwise
	PartsVersion  string
	PolicyVersion string
	SharedSheet   string // path of the shared sheet that was read; empty: none
	Totals        Totals
}

// Unread reports whether the file was not checked at all.
func (f *File) Unread() bool { return f.Failure != "" || len(f.Diagnostics) > 0 }

// Finding is a finding with what the report adds to it.
type Finding struct {
	checks.Finding
	Title       string // of its check, in words
	Fingerprint string
	State       State
	rank        int // of its check in the catalogue
	place       int // of its element in the netlist
}

// State tells a finding of the baseline from one that is new. It is empty without a baseline.
type State string

// The states.
const (
	IsNew       State = "new"
	IsUnchanged State = "unchanged"
)

// Totals counts findings by verdict, violations by severity.
type Totals struct {
	Critical, Major, Minor, Unproven, Proven, Conceded int

	// HeadlineUnproven counts the unproven findings of headline checks, Unsolved the parts of circuits
	// without a solution; either keeps a release gate shut.
	HeadlineUnproven, Unsolved int
}

func (t *Totals) add(o Totals) {
	t.Critical += o.Critical
	t.Major += o.Major
	t.Minor += o.Minor
	t.Unproven += o.Unproven
	t.Proven += o.Proven
	t.Conceded += o.Conceded
	t.HeadlineUnproven += o.HeadlineUnproven
	t.Unsolved += o.Unsolved
}

func (t *Totals) count(f *Finding) {
	switch f.Verdict {
	case checks.Proven:
		t.Proven++
	case checks.Conceded:
		t.Conceded++
	case checks.Unproven:
		t.Unproven++
		if f.Headline {
			t.HeadlineUnproven++
		}
		if f.Check == unsolvedCheck {
			t.Unsolved++
		}
	case checks.Violated:
		switch f.Severity {
		case checks.Critical:
			t.Critical++
		case checks.Major:
			t.Major++
		case checks.Minor:
			t.Minor++
		}
	}
}

// unsolvedCheck is the check that names the parts of a circuit without a solution.
const unsolvedCheck = "unsolved"

// Input is the outcome of one file: a result, or why there is none.
type Input struct {
	File        string
	Result      *checks.Result
	Diagnostics []netlist.Diagnostic
	Failure     error
}

// Options says how a report is to be drawn up.
type Options struct {
	Version       string
	Gate          Gate
	AllowUnproven bool      // an unproven headline check does not keep the gate shut
	Now           time.Time // the day on which concessions are judged
	Baseline      *Baseline // nil: none
	NewOnly       bool      // the gate looks only at findings that the baseline does not have
}

// New draws up the report of a run.
func New(inputs []Input, o Options) *Report {
	r := &Report{Version: o.Version, Gate: o.Gate, Compared: o.Baseline != nil, NewOnly: o.NewOnly}
	unread := false
	for _, in := range inputs {
		f := newFile(in, o.Now)
		if o.Baseline != nil {
			o.Baseline.mark(&f, len(inputs) == 1)
		}
		for k := range f.Findings {
			f.Totals.count(&f.Findings[k])
			if !o.NewOnly || f.Findings[k].State != IsUnchanged {
				r.Gated.count(&f.Findings[k])
			}
		}
		unread = unread || f.Unread()
		r.Totals.add(f.Totals)
		r.Files = append(r.Files, f)
	}
	r.Gate.close(r.Gated)
	r.Exit = exitOf(unread, r.Gate, r.Gated, o.AllowUnproven)
	return r
}

func newFile(in Input, now time.Time) File {
	f := File{Name: slashed(in.File), Diagnostics: in.Diagnostics}
	if in.Failure != nil {
		f.Failure = in.Failure.Error()
	}
	r := in.Result
	if r == nil || f.Unread() {
		return f
	}
	f.Title, f.Circumstances, f.RailMap = ownTitle(r.Title), r.Circumstances, r.RailMap
	f.Assumptions, f.NotRead, f.Stresses = r.Assumptions, r.NotRead, r.Stresses
	f.PartsVersion, f.PolicyVersion = r.PartsVersion, r.PolicyVersion
	if r.Circuit != nil {
		f.Rails = r.Circuit.RailMap(r.Duty)
	}
	f.Findings = newFindings(r)
	if r.Duty != nil {
		f.SharedSheet = slashed(r.Duty.SharedSheet)
		f.concede(r.Duty.Concessions, now)
	}
	sortFindings(f.Findings)
	fingerprint(f.Findings)
	return f
}

// newFindings takes over the findings of a result, each with its place in the netlist.
func newFindings(r *checks.Result) []Finding {
	places := map[string]int{"": -1}
	behind := -1
	if r.Circuit != nil {
		behind = len(r.Circuit.Elements)
		for k := range r.Circuit.Elements {
			places[r.Circuit.Elements[k].Name] = k
		}
	}
	list := make([]Finding, 0, len(r.Findings))
	for _, f := range r.Findings {
		title, rank := titleOf(f.Check)
		place, ok := places[f.Element]
		if !ok {
			place = behind
		}
		list = append(list, Finding{Finding: f, Title: title, rank: rank, place: place})
	}
	return list
}

// titleOf is the title of a check and its rank in the catalogue; a check that is not there keeps its name.
func titleOf(name string) (string, int) {
	for k, c := range Catalogue() {
		if c.Name == name {
			return c.Title, k
		}
	}
	return name, len(Catalogue())
}

// Catalogue is every check a report can speak of: those on parts, and the one on concessions.
func Catalogue() []*checks.Check { return append(checks.Catalogue(), ConcessionCheck) }

// Unread is how many inputs were not checked.
func (r *Report) Unread() int {
	n := 0
	for k := range r.Files {
		if r.Files[k].Unread() {
			n++
		}
	}
	return n
}

// ownTitle leaves out a title that is only the path of the author's own drawing, which exporters write there.
func ownTitle(title string) string {
	slashed := strings.ReplaceAll(title, `\`, "/")
	drive := len(slashed) > 2 && slashed[1] == ':' && slashed[2] == '/'
	if drive || strings.HasPrefix(slashed, "/") || strings.HasPrefix(slashed, "~/") {
		return ""
	}
	return title
}
