package report

import (
	"fmt"
	"strings"

	"railproof/checks"
)

// shareFrom is how many entries must wait for the same thing to be told as one.
const shareFrom = 3

// unprovenGroups gathers the unproven entries of a file; the order is that of the first of each group.
func unprovenGroups(f *File) [][]Folded {
	var entries []Folded
	count := map[string]int{}
	for _, x := range fold(f.Findings) {
		if x.Verdict == checks.Unproven {
			entries = append(entries, x)
			count[waitsFor(&x)]++
		}
	}
	var groups [][]Folded
	index := map[string]int{}
	for _, x := range entries {
		key := waitsFor(&x)
		if k, ok := index[key]; ok {
			groups[k] = append(groups[k], x)
			continue
		}
		if key != "" && count[key] >= shareFrom {
			index[key] = len(groups)
		}
		groups = append(groups, []Folded{x})
	}
	return groups
}

// waitsFor is what an entry waits for if that is no rating of its own, else empty.
func waitsFor(f *Folded) string {
	if f.Check == unsolvedCheck || f.Needs != nil && f.Needs.Symbol != "" || f.Element != "" && strings.Contains(f.Reason, f.Element) {
		return ""
	}
	return f.Reason + "\x00" + needWords(&f.Finding)
}

// groupWords tells a group in a line: how many findings, and what they wait for.
func groupWords(group []Folded) string {
	n := 0
	for k := range group {
		n += len(group[k].Elements)
	}
	return fmt.Sprintf("%d findings: %s", n, group[0].Reason)
}

// groupLines lists the findings of a group, one line a check.
func groupLines(group []Folded) []string {
	var lines []string
	for k := 0; k < len(group); {
		check, title, names := group[k].Check, group[k].Title, []string{}
		if group[k].Headline {
			title += " (headline)"
		}
		seen := map[string]bool{}
		for ; k < len(group) && group[k].Check == check; k++ {
			for _, name := range group[k].Elements {
				if !seen[name] {
					seen[name] = true
					names = append(names, name)
				}
			}
		}
		lines = append(lines, title+": "+strings.Join(foldNames(names), " "))
	}
	return lines
}
