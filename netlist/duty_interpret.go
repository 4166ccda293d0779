package netlist

import (
	"strings"

	"railproof/netlist/syntax"
)

// DutyLine is one line of a duty sheet, or of a netlist behind `*:`.
type DutyLine struct {
	Text string
	At   Position // of the first character of Text
}

// DutyLines splits the text of a duty sheet into its lines. LF, CRLF and CR end a line.
func DutyLines(file, text string) []DutyLine {
	text = strings.TrimPrefix(text, "\ufeff")
	text = strings.NewReplacer("\r\n", "\n", "\r", "\n").Replace(text)
	var lines []DutyLine
	for i, line := range strings.Split(text, "\n") {
		lines = append(lines, DutyLine{line, Position{File: file, Line: i + 1, Column: 1}})
	}
	return lines
}

// interpretDuty reads the statements that stand in the netlist and those of the sheet, and resolves them
// against the circuit. Where both speak of the same thing the sheet wins and a remark shows both values;
// within one of them a statement with plain names wins over one with a pattern, and otherwise the later
// one. `part` and `rate` statements may change what an element is taken for: the circuit is updated.
func interpretDuty(c *Circuit, inline []DutyLine, sheet []DutyLine) (*Duty, []Diagnostic) {
	in := &interpreter{circuit: c, duty: &Duty{}, places: make(map[string]int)}
	var statements []dutyStatement
	for _, source := range []struct {
		lines []DutyLine
		sheet bool
	}{{inline, false}, {sheet, true}} {
		for _, line := range source.lines {
			statement, fault := syntax.ParseDuty(line.Text, line.At)
			if fault != nil {
				in.faults = append(in.faults, *fault)
			} else if statement != nil {
				statements = append(statements, dutyStatement{statement, source.sheet})
			}
		}
	}
	in.declareKinds(statements)
	c.findShunts()
	for _, s := range statements {
		in.current = s
		in.kept, in.offered = 0, 0
		in.read(s.statement)
	}
	in.settle()
	in.remarkFields()
	in.crossCheck()
	return in.duty, in.faults
}

// dutyStatement is a statement with where it comes from.
type dutyStatement struct {
	statement syntax.Statement
	sheet     bool
}

// interpreter gathers entries; each entry claims a key such as "rate C1 UR".
type interpreter struct {
	circuit *Circuit
	duty    *Duty
	faults  []Diagnostic
	entries []dutyEntry
	places  map[string]int // key -> index of the entry that holds it

	current       dutyStatement
	kept, offered int
}

// dutyEntry is one thing stated about one subject.
type dutyEntry struct {
	key       string // what is stated: "rate C1 UR", "ambient"
	value     string // as written
	exact     bool
	sheet     bool
	statement syntax.Statement
	apply     func(*Duty)
	lost      bool
}

// read turns one statement into entries.
func (in *interpreter) read(statement syntax.Statement) {
	switch s := statement.(type) {
	case *syntax.LineStatement:
		in.line(s)
	case *syntax.WindingStatement:
		in.winding(s)
	case *syntax.AmbientStatement:
		in.ambient(s)
	case *syntax.LoadStatement:
		in.load(s)
	case *syntax.PartStatement:
		in.part(s)
	case *syntax.RateStatement:
		in.rate(s)
	case *syntax.CoolingStatement:
		in.cooling(s)
	case *syntax.RailStatement:
		in.rail(s)
	case *syntax.PolicyStatement:
		at := s.Name.At()
		name := s.Name.Text()
		in.state("policy", name, true, func(d *Duty) { d.Policy, d.PolicyAt = name, at })
	case *syntax.LifeStatement:
		in.life(s)
	case *syntax.ProfileStatement:
		in.profile(s)
	case *syntax.ConcessionStatement:
		in.concession(s)
	}
}

// state enters one thing stated, and settles who wins where the key is taken.
func (in *interpreter) state(key, value string, exact bool, apply func(*Duty)) {
	e := dutyEntry{key: key, value: value, exact: exact, sheet: in.current.sheet, statement: in.current.statement, apply: apply}
	folded := strings.ToLower(key)
	at, taken := in.places[folded]
	if !taken {
		in.places[folded] = len(in.entries)
		in.entries = append(in.entries, e)
		return
	}
	old := &in.entries[at]
	wins := e.sheet != old.sheet || e.exact || !old.exact // the sheet is read after the netlist
	if wins {
		old.lost = true
		in.places[folded] = len(in.entries)
	} else {
		e.lost = true
	}
	if e.sheet != old.sheet && e.value != old.value {
		in.remark(e.statement.Place(), key+": the sheet says "+e.value+", the netlist says "+old.value+" ("+
			old.statement.Place().String()+"); the sheet counts")
	} else if e.sheet == old.sheet && e.exact == old.exact && e.value != old.value {
		in.remark(e.statement.Place(), key+": stated as "+old.value+" ("+old.statement.Place().String()+") and as "+e.value+"; the later one counts")
	}
	in.entries = append(in.entries, e)
}

// settle fills in the duty from the entries that hold their keys, and reports statements left without effect.
func (in *interpreter) settle() {
	effective := make(map[syntax.Statement]bool)
	for _, e := range in.entries {
		if !e.lost {
			e.apply(in.duty)
			effective[e.statement] = true
		}
	}
	told := make(map[syntax.Statement]bool)
	for _, e := range in.entries {
		if !effective[e.statement] && !told[e.statement] {
			told[e.statement] = true
			in.remark(e.statement.Place(), "unused: `"+syntax.PrintDuty(e.statement)+"` is overridden by other statements")
		}
	}
}

func (in *interpreter) remark(at Position, text string) {
	in.duty.Remarks = append(in.duty.Remarks, Remark{Kind: RemarkAssumption, At: at, Text: text})
}

func (in *interpreter) fault(at Position, what, expected string) {
	in.faults = append(in.faults, Diagnostic{At: at, What: what, Expected: expected})
}
