package checks

import "railproof/netlist"

// remarkCheck is a check that passes on what was found while the netlist was read.
func remarkCheck(kind netlist.RemarkKind, severity Severity, c Check) *Check {
	c.Stress, c.Rating, c.Worst, c.Formula = "none", "none", "none", "none"
	c.run = func(p *Pass) {
		for _, m := range p.Circuit().Remarks {
			if m.Kind == kind {
				p.add(Finding{Element: m.Element, At: m.At, Verdict: Violated, Severity: severity, Reason: m.Text, Remedy: p.check.Remedy})
			}
		}
	}
	return &c
}

var valueSuffix = remarkCheck(netlist.RemarkValueSuffix, Major, Check{
	Name: "value-suffix", Title: "value with an implausible suffix",
	Applies:      "values of R, C and L",
	Assumptions:  "the value is taken as SPICE reads it: F is femto, M is milli",
	SeverityRule: "major: the circuit that was solved is probably not the one that was meant",
	Source:       "scale factors of Berkeley SPICE",
	Remedy:       "write the factor that is meant: 1, 10MEG, 2200U",
})

var duplicateName = remarkCheck(netlist.RemarkDuplicateName, Major, Check{
	Name: "duplicate-name", Title: "name used twice",
	Applies:      "elements",
	Assumptions:  "what the remark says was done with the second one",
	SeverityRule: "major: statements of the duty sheet cannot tell them apart",
	Source:       "Berkeley SPICE: names are unique within a circuit",
	Remedy:       "rename one of them",
})

var libraryNotRead = remarkCheck(netlist.RemarkLibraryNotRead, Minor, Check{
	Name: "library-not-read", Title: "library that was not read",
	Applies:      ".include and .lib cards",
	Assumptions:  "what it would have defined comes from the type number, or stays unknown",
	SeverityRule: "minor; what stays unknown makes its own part of the circuit unproven",
	Source:       "files outside the folders of the netlist and of --include are never opened",
	Remedy:       "put the file beside the netlist, or name its folder with --include",
})

var afterEnd = remarkCheck(netlist.RemarkAfterEnd, Minor, Check{
	Name: "after-end", Title: "elements behind .end",
	Applies:      "lines behind the first .end",
	Assumptions:  "the circuit ends at the first .end",
	SeverityRule: "minor",
	Source:       "Berkeley SPICE: .end closes the circuit",
	Remedy:       "move the .end to the end, or delete what follows",
})

var modelNote = remarkCheck(netlist.RemarkModel, Minor, Check{
	Name: "model-note", Title: "doubtful model",
	Applies:      "models",
	Assumptions:  "what the remark says",
	SeverityRule: "minor",
	Source:       "common practice",
	Remedy:       "keep one definition of each model",
})
