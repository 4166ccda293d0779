package report

import (
	"encoding/json"
	"fmt"
	"path"

	"railproof/checks"
)

// Baseline is an earlier JSON report, against which findings are new or unchanged.
type Baseline struct {
	name     string
	document jsonReport
}

// ReadBaseline reads a JSON report as WriteJSON writes it.
func ReadBaseline(name string, text []byte) (*Baseline, error) {
	b := Baseline{name: name}
	if err := json.Unmarshal(text, &b.document); err != nil {
		return nil, fmt.Errorf("%s: not a JSON report: %w", name, err)
	}
	if b.document.Schema != ReportSchema {
		return nil, fmt.Errorf("%s: schema %q; expected %q, as `railproof check --format json` writes", name, b.document.Schema, ReportSchema)
	}
	return &b, nil
}

// unread is the first file that was not checked, empty if all were.
func (b *Baseline) unread() string {
	for _, f := range b.document.Files {
		if len(f.Diagnostics) > 0 {
			return f.File
		}
	}
	return ""
}

// file finds the file of an earlier report that a file is to be compared with: the one of the same path, or
// of the same base name if only one has it, or the only one there is when alone is set.
func (b *Baseline) file(name string, alone bool) *jsonFile {
	var same []*jsonFile
	for k := range b.document.Files {
		f := &b.document.Files[k]
		if f.File == name {
			return f
		}
		if path.Base(f.File) == path.Base(name) {
			same = append(same, f)
		}
	}
	if len(same) == 1 {
		return same[0]
	}
	if alone && len(b.document.Files) == 1 {
		return &b.document.Files[0]
	}
	return nil
}

// mark gives the violated and unproven findings of a file their state. One is unchanged if the baseline has
// the same fingerprint with a verdict as bad. A violation that was milder before is new, and so is what was
// judged before and is unproven now: a gate must not open because a rating was taken away.
func (b *Baseline) mark(f *File, alone bool) {
	old := map[string]*jsonFinding{}
	if o := b.file(f.Name, alone); o != nil {
		for k := range o.Findings {
			old[o.Findings[k].Fingerprint] = &o.Findings[k]
		}
	}
	for k := range f.Findings {
		x := &f.Findings[k]
		if x.Verdict != checks.Violated && x.Verdict != checks.Unproven {
			continue
		}
		x.State = IsNew
		if o := old[x.Fingerprint]; o != nil && !judgementLost(o.Verdict, x.Verdict) && badness(o.Verdict, severityOf(o)) >= badness(x.Verdict, x.Severity) {
			x.State = IsUnchanged
		}
	}
}

func severityOf(f *jsonFinding) checks.Severity {
	if f.Severity == nil {
		return ""
	}
	return checks.Severity(*f.Severity)
}

// judgementLost reports whether a finding was judged before and is unproven now.
func judgementLost(before, after checks.Verdict) bool {
	return after == checks.Unproven && before != checks.Unproven
}

// badness orders outcomes: proven and conceded, unproven, then violations from minor to critical.
func badness(v checks.Verdict, s checks.Severity) int {
	switch v {
	case checks.Violated:
		return 1 + len(severities) - severityRank(s)
	case checks.Unproven:
		return 1
	}
	return 0
}
