package report

import (
	"cmp"
	"path/filepath"
	"slices"

	"railproof/checks"
)

// sortFindings puts findings into their one total order: violations by severity, then what is unproven,
// conceded and proven; headline checks first; then the order of the catalogue and of the netlist.
func sortFindings(list []Finding) {
	slices.SortStableFunc(list, func(a, b Finding) int {
		return cmp.Or(
			cmp.Compare(verdictRank(a.Verdict), verdictRank(b.Verdict)),
			cmp.Compare(severityRank(a.Severity), severityRank(b.Severity)),
			cmp.Compare(after(a.Headline), after(b.Headline)),
			cmp.Compare(a.rank, b.rank),
			cmp.Compare(a.place, b.place),
			cmp.Compare(a.Element, b.Element),
			cmp.Compare(a.quantity(), b.quantity()),
			cmp.Compare(a.At.File, b.At.File),
			cmp.Compare(a.At.Line, b.At.Line),
			cmp.Compare(a.At.Column, b.At.Column),
			cmp.Compare(a.Reason, b.Reason),
		)
	})
}

func after(headline bool) int {
	if headline {
		return 0
	}
	return 1
}

func verdictRank(v checks.Verdict) int {
	return slices.Index([]checks.Verdict{checks.Violated, checks.Unproven, checks.Conceded, checks.Proven}, v)
}

// severityRank is 0 for the gravest.
func severityRank(s checks.Severity) int {
	if k := slices.Index(severities, s); k >= 0 {
		return k
	}
	return len(severities)
}

// severities, gravest first.
var severities = []checks.Severity{checks.Critical, checks.Major, checks.Minor}

// quantity is the name of the stress, empty for a structural finding.
func (f *Finding) quantity() string {
	if f.Stress == nil {
		return ""
	}
	return string(f.Stress.Quantity)
}

func slashed(path string) string { return filepath.ToSlash(path) }
