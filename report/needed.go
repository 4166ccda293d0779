package report

import (
	"fmt"
	"slices"
	"strings"

	"railproof/checks"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

// Needed is one line of the shopping list: what parts must be rated so that what is unproven is proven.
type Needed struct {
	Elements []string
	Symbol   netlist.Symbol
	Value    float64
	Unit     quantity.Unit
	Floor    bool    // the rating must be at most Value, not at least
	Next     float64 // next standard rating, 0 if there is none
	Checks   []string
	Doubtful bool // the stress behind it proves nothing yet
}

// Name lists the parts, runs shortened.
func (n Needed) Name() string { return strings.Join(foldNames(n.Elements), " ") }

// Bound is the rating in words, rounded to the safe side: "at least 77.4 V". What rests on a stress that
// proves nothing yet bears a question mark.
func (n Needed) Bound() string {
	if n.Doubtful {
		if n.Value == 0 {
			return "?"
		}
		n.Doubtful = false
		return n.Bound() + " ?"
	}
	word := "at least "
	switch {
	case n.Floor:
		word = "at most "
	case n.Value == 0:
		return "any" // nothing stresses the part
	}
	return word + upward(n.Value, n.Unit, n.Floor)
}

// NextStep is the next standard rating in words, "-" if there is none.
func (n Needed) NextStep() string {
	if n.Next <= 0 {
		return "-"
	}
	return quantity.Format(n.Next, n.Unit, 4)
}

// Needed gathers the ratings that unproven findings of a file wait for. Parts with the same demand share a line.
func (f *File) Needed() []Needed {
	var out []Needed
	index := map[string]int{}
	for _, s := range f.demands() {
		key := fmt.Sprint(s.Symbol, s.Floor, rounded(s.Value), s.Next, s.Checks, s.Doubtful)
		k, ok := index[key]
		if !ok {
			index[key] = len(out)
			out = append(out, s)
			continue
		}
		out[k].Elements = append(out[k].Elements, s.Elements...)
		if (s.Value > out[k].Value) != s.Floor {
			out[k].Value = s.Value
		}
	}
	return out
}

// advisoryCheck studies a fault; what it asks for is no demand on the part where another check makes one.
const advisoryCheck = "output-short"

// demands lists the ratings that unproven findings wait for, one part a line. Where several checks ask for
// one rating of a part, the severest demand stands, that of a fault study aside.
func (f *File) demands() []Needed {
	var single []Needed
	index := map[string]int{}
	for _, x := range f.Findings {
		n := x.Needs
		if x.Verdict != checks.Unproven || n == nil || n.Symbol == "" {
			continue
		}
		demand := Needed{[]string{x.Element}, n.Symbol, n.Value, n.Unit, x.Floor, n.NextStandard, []string{x.Check}, false}
		demand.Doubtful = (&x).doubtful()
		key := fmt.Sprint(x.Element, "\x00", n.Symbol, x.Floor)
		k, ok := index[key]
		if !ok {
			index[key] = len(single)
			single = append(single, demand)
			continue
		}
		o := &single[k]
		switch {
		case x.Check == advisoryCheck:
			continue
		case o.Checks[0] == advisoryCheck:
			*o = demand
			continue
		}
		o.Doubtful = o.Doubtful || demand.Doubtful
		if !slices.Contains(o.Checks, x.Check) {
			o.Checks = append(o.Checks, x.Check)
		}
		if (n.Value > o.Value) != x.Floor && n.Value != o.Value {
			o.Value, o.Next = n.Value, n.NextStandard
		}
	}
	return single
}

// doubtNote explains the question marks of a list, empty if it has none.
func doubtNote(list []Needed) string {
	if !slices.ContainsFunc(list, func(n Needed) bool { return n.Doubtful }) {
		return ""
	}
	return "?: so far; the stress behind it is not proven, and may turn out worse"
}

// Statements lists the duty statements that unproven findings wait for, each once, in the order of the findings.
func (f *File) Statements() []string {
	var out []string
	seen := map[string]bool{"": true}
	for _, x := range fold(f.Findings) {
		if x.Verdict != checks.Unproven {
			continue
		}
		if s := x.statement(); !seen[s] {
			seen[s] = true
			out = append(out, s)
		}
	}
	return out
}

// statement is the missing duty statement, the parts of the entry in place of the one.
func (f *Folded) statement() string {
	if f.Needs == nil {
		return ""
	}
	return f.forAll(f.Needs.Statement)
}

// forAll puts the parts of the entry where a text names the one.
func (f *Folded) forAll(text string) string {
	if len(f.Elements) < 2 {
		return text
	}
	words := strings.Split(text, " ")
	for k, w := range words {
		if w == f.Element {
			words[k] = strings.Join(foldNames(f.Elements), ",")
		}
	}
	return strings.Join(words, " ")
}
