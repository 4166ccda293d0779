package report

import (
	"strings"

	"railproof/checks"
	"railproof/netlist"
)

// DraftLines lists what a starter duty sheet should ask for: each rating that an unproven finding of a
// result waits for, with how much is needed and what it is for.
func DraftLines(r *checks.Result) []netlist.DraftLine {
	f := File{Findings: newFindings(r)}
	var lines []netlist.DraftLine
	type asked struct {
		element netlist.ElementID
		symbol  netlist.Symbol
	}
	seen := map[asked]bool{}
	add := func(element string, symbol netlist.Symbol, hint, purpose string) {
		id, ok := r.Circuit.Find(element)
		if key := (asked{id, symbol}); ok && !seen[key] {
			seen[key] = true
			lines = append(lines, netlist.DraftLine{Element: id, Symbol: symbol, Hint: hint, For: purpose})
		}
	}
	for _, n := range f.demands() {
		hint := n.Bound()
		if n.Next > 0 {
			hint += ", next step " + n.NextStep()
		}
		add(n.Elements[0], n.Symbol, hint, strings.Join(n.Checks, ", "))
	}
	for _, x := range f.Findings {
		if x.Verdict == checks.Unproven && x.Needs != nil {
			for _, symbol := range askedSymbols(x.Needs.Statement) {
				add(x.Element, symbol, "", x.Check)
			}
		}
	}
	return lines
}

// askedSymbols are the symbols of a statement such as "rate D1 RthJA=...K/W Tj=...C".
func askedSymbols(statement string) []netlist.Symbol {
	words := strings.Fields(statement)
	if len(words) < 3 || words[0] != "rate" {
		return nil
	}
	var symbols []netlist.Symbol
	for _, w := range words[2:] {
		if name, _, ok := strings.Cut(w, "="); ok {
			if symbol, known := netlist.FindSymbol(name); known {
				symbols = append(symbols, symbol)
			}
		}
	}
	return symbols
}
