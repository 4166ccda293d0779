package parts

import (
	"fmt"
	"math"
	"regexp"
	"strings"

	"railproof/checks/parts/records"
	"railproof/netlist"
	"railproof/netlist/syntax"
)

// Columns that are not ratings.
const (
	columnType       = "type"
	columnKind       = "kind"
	columnPolarity   = "polarity"
	columnSource     = "source"
	columnConfidence = "confidence"
	columnNote       = "note"
)

// readRows reads part rows. titles resolves the keys of the source column; a key it does not have
// stands for itself. strict refuses a source that is not in titles.
//
// A rating cell is a number in SI units (degC for temperatures, dB for ripple rejection), a condition
// behind an @ where it has one: "1 @ TA=75C". Where it depends on the case: "TO-220=65; DPAK=92", the
// customary case first.
//
// The source column is one key or text for the whole row, or keys with the columns they cover in
// brackets: "S01[VRRM IFAV]; S03[VF2]". The confidence column is seen or memory, with exceptions in
// the same way: "seen; memory[IQ PSRR]".
func readRows(file string, data []byte, titles map[string]string, strict bool) ([]*Row, []syntax.Diagnostic) {
	table, problems := records.Read(file, data, columnType, columnKind)
	if len(problems) > 0 && len(table.Records) == 0 {
		return nil, problems
	}
	header := syntax.Position{File: file, Line: 1, Column: 1}
	var known []column
	for _, name := range table.Columns {
		switch name {
		case columnType, columnKind, columnPolarity, columnSource, columnConfidence, columnNote, "":
			continue
		}
		c, ok := columnOf(netlist.Symbol(name))
		if !ok {
			problems = append(problems, syntax.Diagnostic{At: header, What: fmt.Sprintf("unknown column %q", name), Expected: "a rating symbol" + nearest(name)})
			continue
		}
		known = append(known, c)
	}
	first := map[string]syntax.Position{}
	var rows []*Row
	for _, record := range table.Records {
		row, found := readRow(record, known, titles, strict)
		if len(problems)+len(found) > records.MaxProblem {
			return rows, append(problems, found...)
		}
		problems = append(problems, found...)
		if row == nil {
			continue
		}
		key := fold(row.Type)
		if at, twice := first[key]; twice {
			problems = append(problems, syntax.Diagnostic{At: record.At, What: fmt.Sprintf("type %s stands twice; first at %s", row.Type, at), Expected: "each type once"})
			continue
		}
		first[key] = record.At
		rows = append(rows, row)
	}
	return rows, problems
}

func readRow(record records.Record, known []column, titles map[string]string, strict bool) (*Row, []syntax.Diagnostic) {
	var problems []syntax.Diagnostic
	fault := func(column, what, expected string) {
		problems = append(problems, syntax.Diagnostic{At: record.Place(column), What: what, Expected: expected})
	}
	row := &Row{Type: record.Text(columnType), Kind: strings.ToLower(record.Text(columnKind)), Note: record.Text(columnNote)}
	if !typeForm.MatchString(row.Type) {
		fault(columnType, fmt.Sprintf("type name %q", row.Type), "letters, digits and . - + / _, at most 40, beginning with a letter or digit")
		return nil, problems
	}
	role, ok := roleOf(row.Kind)
	if !ok {
		fault(columnKind, fmt.Sprintf("unknown kind %q", row.Kind), "one of "+kindNames())
		return nil, problems
	}
	row.Role, row.Pins = role, pinsOf(row.Kind)
	switch role {
	case netlist.RoleRectifier, netlist.RoleZener, netlist.RoleShunt:
		row.PinsDoubtful = true
	}
	polarity, expected := polarityOf(role, record.Text(columnPolarity))
	if expected != "" {
		fault(columnPolarity, fmt.Sprintf("polarity %q", record.Text(columnPolarity)), expected)
	}
	row.Polarity = polarity

	sources := attribution(record.Text(columnSource))
	confidences := attribution(record.Text(columnConfidence))
	for _, item := range confidences {
		switch item.key {
		case Seen, Memory, Stated, "":
		default:
			fault(columnConfidence, fmt.Sprintf("confidence %q", item.key), "seen or memory, with exceptions as memory[IQ PSRR]")
		}
	}
	for _, list := range []struct {
		column string
		items  []attributed
	}{{columnSource, sources}, {columnConfidence, confidences}} {
		for _, item := range list.items {
			for _, symbol := range item.columns {
				if record.Text(symbol) == "" {
					fault(list.column, fmt.Sprintf("%s names %s, which has no value here", item.key, symbol), "columns that have a value")
				}
			}
		}
	}
	for _, item := range sources {
		if strict && titles[item.key] == "" {
			fault(columnSource, fmt.Sprintf("source key %q has no title", item.key), "a key of sources.csv")
		}
	}

	for _, c := range known {
		text := record.Text(string(c.symbol))
		if text == "" {
			continue
		}
		cases, err := readCell(text)
		if err != nil {
			fault(string(c.symbol), fmt.Sprintf("%s: %v", c.symbol, err), "a number, with its condition behind an @")
			continue
		}
		v := Value{Unit: c.unit, Confidence: keyOf(confidences, string(c.symbol))}
		if v.Confidence == "" {
			v.Confidence = Stated
		}
		if key := keyOf(sources, string(c.symbol)); v.Confidence == Memory {
			v.Source = fromMemory
		} else if v.Source = titles[key]; v.Source == "" {
			v.Source = key
		}
		for i := range cases {
			number := cases[i].Number
			if number < c.low || number > c.high {
				fault(string(c.symbol), fmt.Sprintf("%s = %g is outside %g to %g", c.symbol, number, c.low, c.high), "SI units")
			}
			condition := cases[i].Condition
			cases[i].Value = v
			cases[i].Number, cases[i].Condition = number, join(cases[i].Case, condition)
			if c.decibel {
				cases[i].Number = math.Pow(10, number/20)
				cases[i].Condition = join(fmt.Sprintf("%g dB at 120 Hz", number), condition)
			}
			if at := record.Text(string(c.at)); c.at != "" && at != "" {
				cases[i].Condition = join(fmt.Sprintf("%s = %s", c.at, at), cases[i].Condition)
			}
		}
		row.set(c.symbol, cases...)
	}
	problems = append(problems, row.contradictions(record)...)
	if len(problems) > 0 {
		return nil, problems
	}
	if len(row.values) == 0 {
		fault(columnType, "type "+row.Type+" has no rating", "at least one value")
		return nil, problems
	}
	row.complete()
	return row, nil
}

// polarityOf reads the polarity column: of regulators positive or negative, of bipolar transistors npn or pnp;
// a transistor without one has ratings but no known law. expected is not empty for another word.
func polarityOf(role netlist.Role, text string) (polarity netlist.Polarity, expected string) {
	switch text {
	case "npn", "pnp":
		if role != netlist.RoleTransistor {
			return 0, "positive or negative"
		}
		if text == "pnp" {
			return netlist.Negative, ""
		}
		return netlist.Positive, ""
	case "", "positive", "negative":
		switch {
		case role == netlist.RoleTransistor && text != "":
			return 0, "npn or pnp"
		case text == "negative":
			return netlist.Negative, ""
		case role == netlist.RoleRegulator || role == netlist.RoleAdjustable || role == netlist.RoleShunt:
			return netlist.Positive, ""
		}
		return 0, ""
	}
	if role == netlist.RoleTransistor {
		return 0, "npn or pnp"
	}
	return 0, "positive or negative"
}

// contradictions finds values of one row that cannot hold together.
func (r *Row) contradictions(record records.Record) []syntax.Diagnostic {
	var problems []syntax.Diagnostic
	ordered := [][]netlist.Symbol{{VZmin, VZ, VZmax}, {VOUTmin, VOUT, VOUTmax}, {VREFmin, VREF, VREFmax}, {VDOtyp, VDO}, {IQtyp, IQ}, {Tj, TjAbs}, {ESRmin, ESRmax}, {PSRRmin, PSRR}, {VOUT, VImin, VI}, {HFEmin, HFE, HFEmax}, {VCEO, VCBO}, {IC, ICM}}
	for _, symbols := range ordered {
		last, lastSymbol := math.Inf(-1), netlist.Symbol("")
		for _, symbol := range symbols {
			v, ok := r.Value(symbol)
			if !ok {
				continue
			}
			if v.Number < last {
				problems = append(problems, syntax.Diagnostic{At: record.Place(string(symbol)), What: fmt.Sprintf("%s of %s is less than its %s", symbol, r.Type, lastSymbol), Expected: "values in ascending order"})
			}
			last, lastSymbol = v.Number, symbol
		}
	}
	required := map[string][]netlist.Symbol{"zener": {VZ}, "fixed": {VOUT}, "adjustable": {VREF}, "shunt": {VREF}}
	for _, symbol := range required[r.Kind] {
		if _, ok := r.Value(symbol); !ok {
			problems = append(problems, syntax.Diagnostic{At: record.At, What: fmt.Sprintf("%s is a %s without %s", r.Type, r.Kind, symbol), Expected: "a value for it"})
		}
	}
	return problems
}

var typeForm = regexp.MustCompile(`^[A-Za-z0-9][A-Za-z0-9.+/_-]{0,39}$`)

// readCell reads "65", "1 @ TA=75C" or "TO-220=65; DPAK=92".
func readCell(text string) ([]CaseValue, error) {
	equals, at := strings.IndexByte(text, '='), strings.IndexByte(text, '@')
	if equals < 0 || at >= 0 && at < equals {
		number, condition, _ := strings.Cut(text, "@")
		value, err := records.ParseNumber(strings.TrimSpace(number))
		if err != nil {
			return nil, fmt.Errorf("%q is not a number", strings.TrimSpace(number))
		}
		return []CaseValue{{Value: Value{Number: value, Condition: strings.TrimSpace(condition)}}}, nil
	}
	var cases []CaseValue
	for _, part := range strings.Split(text, ";") {
		name, number, _ := strings.Cut(part, "=")
		value, err := records.ParseNumber(strings.TrimSpace(number))
		if err != nil {
			return nil, fmt.Errorf("%q is not a number", strings.TrimSpace(number))
		}
		cases = append(cases, CaseValue{Case: strings.TrimSpace(name), Value: Value{Number: value}})
	}
	return cases, nil
}

// attributed is one item of a source or confidence column.
type attributed struct {
	key     string
	columns []string // empty: every column not named by another item
}

var bracketed = regexp.MustCompile(`^(.*?)\s*\[([^\]]*)\]$`)

// attribution splits "S01[VRRM IFAV]; S03". Items without brackets are joined into one default, so
// that free text with semicolons stays whole.
func attribution(text string) []attributed {
	var items []attributed
	var rest []string
	for _, part := range strings.Split(text, ";") {
		part = strings.TrimSpace(part)
		if m := bracketed.FindStringSubmatch(part); m != nil {
			columns := strings.Fields(m[2])
			all := len(columns) > 0
			for _, c := range columns {
				if _, ok := columnOf(netlist.Symbol(c)); !ok {
					all = false
				}
			}
			if all {
				items = append(items, attributed{m[1], columns})
				continue
			}
		}
		if part != "" {
			rest = append(rest, part)
		}
	}
	if len(rest) > 0 {
		items = append(items, attributed{key: strings.Join(rest, "; ")})
	}
	return items
}

func keyOf(items []attributed, column string) string {
	key := ""
	for _, item := range items {
		if len(item.columns) == 0 {
			key = item.key
		}
	}
	for _, item := range items {
		if containsText(item.columns, column) {
			key = item.key
		}
	}
	return key
}

// nearest proposes the symbol that a misspelt column may mean.
func nearest(name string) string {
	for _, c := range vocabulary {
		if strings.EqualFold(string(c.symbol), name) {
			return fmt.Sprintf(", such as %s", c.symbol)
		}
	}
	return ", such as VRRM, IFAV or VOUT"
}
