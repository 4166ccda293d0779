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

// interpretDuty reads the statements of the shared sheet, of the netlist and of its own sheet, and resolves them
// against the circuit. Where two of these speak of the same thing the later in this order wins and a remark shows
// both values; within one of them a statement with plain names wins over one with a pattern, and otherwise the
// later one. `part` and `rate` statements may change what an element is taken for: the circuit is updated.
func interpretDuty(c *Circuit, all statements) (*Duty, []Diagnostic) {
	in := &interpreter{circuit: c, checks: all.checks, duty: &Duty{}, places: make(map[string]int)}
	var statements []dutyStatement
	for origin, lines := range all.sheets {
		for _, line := range lines {
			statement, fault := syntax.ParseDuty(line.Text, line.At)
			if fault != nil {
				in.faults = append(in.faults, *fault)
			} else if statement != nil {
				statements = append(statements, dutyStatement{statement, Origin(origin)})
			}
		}
	}
	in.declareKinds(statements)
	c.findShunts()
	for _, s := range statements {
		in.current = s
		before := len(in.entries)
		in.why = "selects nothing for which it has a meaning"
		in.read(s.statement)
		if in.shared() && len(in.entries) == before {
			in.idle(s.statement, in.why)
		}
	}
	in.settle()
	in.remarkFields()
	in.crossCheck()
	return in.duty, in.faults
}

// dutyStatement is a statement with where it comes from.
type dutyStatement struct {
	statement syntax.Statement
	origin    Origin
}

// interpreter gathers entries; each entry claims a key such as "rate C1 UR".
type interpreter struct {
	circuit *Circuit
	duty    *Duty
	faults  []Diagnostic
	entries []dutyEntry
	places  map[string]int // key -> index of the entry that holds it

	checks  []string // that a concession may name; nil: any
	current dutyStatement
	why     string // the current statement has no effect
}

// dutyEntry is one thing stated about one subject.
type dutyEntry struct {
	key       string // what is stated: "rate C1 UR", "ambient"
	value     string // as written
	exact     bool
	origin    Origin
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
	e := dutyEntry{key: key, value: value, exact: exact, origin: in.current.origin, statement: in.current.statement, apply: apply}
	folded := strings.ToLower(key)
	at, taken := in.places[folded]
	if !taken {
		in.places[folded] = len(in.entries)
		in.entries = append(in.entries, e)
		return
	}
	old := &in.entries[at]
	wins := e.origin != old.origin || e.exact || !old.exact // they are read in the order in which they give way
	if wins {
		old.lost = true
		in.places[folded] = len(in.entries)
	} else {
		e.lost = true
	}
	general := old.origin == FromSharedSheet && !old.exact // is there to be narrowed
	if e.origin != old.origin && e.value != old.value && !general {
		in.remark(e.statement.Place(), key+": "+e.origin.String()+" says "+e.value+", "+old.origin.String()+" says "+old.value+" ("+
			old.statement.Place().String()+"); "+e.origin.String()+" counts")
	} else if e.origin == old.origin && e.exact == old.exact && e.value != old.value {
		in.remark(e.statement.Place(), key+": stated as "+old.value+" ("+old.statement.Place().String()+") and as "+e.value+"; the later one counts")
	}
	in.entries = append(in.entries, e)
}

// settle fills in the duty from the entries that hold their keys, and reports statements left without effect.
func (in *interpreter) settle() {
	effective := make(map[syntax.Statement]bool)
	for i := range in.entries {
		e := &in.entries[i]
		if by := in.supersededBy(e); by != nil {
			e.lost = true
			in.remark(by.statement.Place(), e.key+" of the shared sheet ("+e.statement.Place().String()+") gives way to "+by.key)
		}
		if !e.lost {
			e.apply(in.duty)
			effective[e.statement] = true
		}
	}
	in.listStated()
	told := make(map[syntax.Statement]bool)
	for _, e := range in.entries {
		if !effective[e.statement] && !told[e.statement] {
			told[e.statement] = true
			if e.origin == FromSharedSheet {
				in.idle(e.statement, "what the netlist itself states counts")
				continue
			}
			in.remark(e.statement.Place(), "unused: `"+syntax.PrintDuty(e.statement)+"` is overridden by other statements")
		}
	}
}

// idle keeps a statement of the shared sheet that has no effect on this netlist.
func (in *interpreter) idle(statement syntax.Statement, why string) {
	in.duty.Idle = append(in.duty.Idle, Statement{Text: syntax.PrintDuty(statement), Origin: FromSharedSheet, At: statement.Place(), Why: why})
}

// listStated lists what is in force: a statement as it is written where all of it is, and else each thing of it.
func (in *interpreter) listStated() {
	narrowed := make(map[syntax.Statement]bool)
	for _, e := range in.entries {
		narrowed[e.statement] = narrowed[e.statement] || e.lost
	}
	told := make(map[syntax.Statement]bool)
	for _, e := range in.entries {
		text := syntax.PrintDuty(e.statement)
		if narrowed[e.statement] {
			text = e.text()
		} else if told[e.statement] {
			continue
		}
		if !e.lost {
			told[e.statement] = true
			in.duty.Stated = append(in.duty.Stated, Statement{Text: text, Origin: e.origin, At: e.statement.Place()})
		}
	}
}

// text spells an entry as a statement of its own.
func (e *dutyEntry) text() string {
	if strings.HasPrefix(e.key, "rate ") {
		return e.key + "=" + e.value
	}
	return e.key + " " + e.value
}

func (in *interpreter) remark(at Position, text string) {
	in.duty.Remarks = append(in.duty.Remarks, Remark{Kind: RemarkAssumption, At: at, Text: text})
}

func (in *interpreter) fault(at Position, what, expected string) {
	in.faults = append(in.faults, Diagnostic{At: at, What: what, Expected: expected})
}
