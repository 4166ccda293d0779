package checks

import (
	"context"
	"fmt"

	"railproof/checks/parts"
	"railproof/checks/study"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

// Sizing is a violation with the changes that would make its check pass.
type Sizing struct {
	Finding  Finding
	Remedies []Remedy // each alone makes the check pass; empty: none was found
	Short    string   // why no value helps and which quantity is short; empty where one helps
	Unproven string   // what keeps a remedy from being proven; empty if nothing does
}

// Remedy is the smallest change of one kind that makes a violated check pass. It was tried: a changed rating by
// judging again, a changed value by solving every condition again.
type Remedy struct {
	Changes []Change
	Solved  bool          // the circuit changes, and all its conditions were solved again
	After   *study.Stress // what the check finds then; nil: the check no longer applies
	Limit   *Limit        // the limit that it is held against then
	Floor   bool
	Worse   []Finding // what is violated or unproven then and was not before, or is graver
	Mends   []Finding // other violations that are proven then
}

// Change is one value or rating of a part, before and after.
type Change struct {
	Element  string
	Symbol   netlist.Symbol // "C", "R", "L" for the value of a part, SymbolBleeder, else a rating
	From, To float64        // SI; From is NaN where nothing was known
	Unit     quantity.Unit
	Series   parts.StepKind // the series of To; empty where there is none
	AtMost   bool           // smaller is safer: To is the largest that passes
}

// SymbolBleeder stands for a resistor that is added across a capacitor.
const SymbolBleeder netlist.Symbol = "bleeder"

// Size is Run with the smallest remedies of every violation, in the order of the findings.
func Size(ctx context.Context, o Options) (*Result, []Sizing, []netlist.Diagnostic, error) {
	selected, err := selection(o.Only)
	if err != nil {
		return nil, nil, nil, err
	}
	p, diagnostics, err := prepare(o)
	if p == nil {
		return nil, nil, diagnostics, err
	}
	r := p.result
	r.Table = study.Worst(ctx, p.supply, o.Jobs)
	r.Stresses = r.Table.Stresses
	r.Findings = judge(selected, p.supply, r.Table, p.policy)
	r.describe(p, r.Table)
	z := newSizer(ctx, p, o.Jobs, r.Table, r.Findings, selected)
	var list []Sizing
	for k := range r.Findings {
		if r.Findings[k].Verdict == Violated {
			list = append(list, z.size(&r.Findings[k]))
		}
	}
	if ctx.Err() != nil {
		return nil, nil, nil, ctx.Err()
	}
	return r, list, nil, nil
}

// size looks for the remedies of a violation: every rating that helps, and the first changed value that does.
func (z *sizer) size(f *Finding) Sizing {
	s := Sizing{Finding: *f}
	solved := false
	var short []string
	for _, option := range z.adjustments(f) {
		a := &option
		if a.circuit() && solved {
			continue
		}
		remedy, miss := z.try(f, a)
		if remedy != nil {
			s.Remedies = append(s.Remedies, *remedy)
			solved = solved || remedy.Solved
			continue
		}
		if miss.unproven != "" && s.Unproven == "" {
			s.Unproven = fmt.Sprintf("%s: %s", z.names(a.elements), miss.unproven)
		}
		short = append(short, miss.words)
	}
	if len(s.Remedies) > 0 {
		s.Unproven = ""
		return s
	}
	for _, words := range short {
		s.Short = join(s.Short, words)
	}
	if s.Short == "" {
		s.Short = lacking(f)
	}
	return s
}
