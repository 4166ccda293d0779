package netlist

import (
	"fmt"
	"os"
	"path/filepath"
	"strings"

	"railproof/netlist/syntax"
)

// Source says where a netlist is to be read from and what may be read with it.
type Source struct {
	File        string   // netlist path
	DutyFile    string   // --duty; empty: FILE with the ending .duty beside it, if there
	IncludeDirs []string // --include folders
	Library     Library  // known types; may be nil
	NoShared    bool     // pass over the shared sheet
	Checks      []string // the checks that a concession may name; nil: any

	Opened func(file string) // told of each file before it is read, and of an included one that is missing; may be nil
}

// Read reads a netlist, what it includes, and its duty sheet. Diagnostics mean that the input is not to be
// used; err means that a file could not be read at all.
func Read(src Source) (*Circuit, *Duty, []Diagnostic, error) {
	if src.Opened == nil {
		src.Opened = func(string) {}
	}
	text, err := src.read(src.File)
	if err != nil {
		return nil, nil, nil, err
	}
	folders := append([]string{filepath.Dir(src.File)}, src.IncludeDirs...)
	opened, err := newFiles(folders)
	if err != nil {
		return nil, nil, nil, err
	}
	defer opened.close()
	opened.told = src.Opened
	own := src.ownSheet()
	var stated sheets
	if stated[FromSheet], err = src.readSheet(own); err != nil {
		return nil, nil, nil, err
	}
	shared := ""
	if !src.NoShared {
		shared = FindSharedSheet(src.File, own)
	}
	if stated[FromSharedSheet], err = src.readSheet(shared); err != nil {
		return nil, nil, nil, err
	}
	c, d, faults := parse(src.File, text, statements{stated, src.Checks}, src.Library, opened)
	if d != nil {
		d.SharedSheet = shared
	}
	return c, d, faults, nil
}

// Parse reads a netlist and a duty sheet that are not on disk; includes are not followed.
func Parse(name string, text, sheet []byte, library Library) (*Circuit, *Duty, []Diagnostic) {
	var stated statements
	if sheet != nil {
		stated.sheets[FromSheet] = DutyLines(name+".duty", syntax.Decode(sheet))
	}
	return parse(name, text, stated, library, nil)
}

func readFile(name string) ([]byte, error) {
	file, err := os.Open(name)
	if err != nil {
		return nil, err
	}
	defer file.Close()
	if info, err := file.Stat(); err == nil && info.IsDir() {
		return nil, fmt.Errorf("%s is a folder", name)
	}
	text, err := readLimited(file)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", name, err)
	}
	return text, nil
}

func (src *Source) read(name string) ([]byte, error) {
	src.Opened(name)
	return readFile(name)
}

// ownSheet is the path of the netlist's own duty sheet: the one named, or the one beside the netlist if there is
// one; empty if not.
func (src *Source) ownSheet() string {
	if src.DutyFile != "" {
		return src.DutyFile
	}
	name := strings.TrimSuffix(src.File, filepath.Ext(src.File)) + ".duty"
	if _, err := os.Stat(name); err != nil {
		return ""
	}
	return name
}

// readSheet reads a duty sheet; no name gives no lines.
func (src *Source) readSheet(name string) ([]DutyLine, error) {
	if name == "" {
		return nil, nil
	}
	text, err := src.read(name)
	if err != nil {
		return nil, err
	}
	return DutyLines(name, syntax.Decode(text)), nil
}

func parse(name string, text []byte, stated statements, library Library, opened *files) (*Circuit, *Duty, []Diagnostic) {
	decoded := syntax.Decode(text)
	if kind := syntax.Foreign(decoded); kind != "" {
		return nil, nil, []Diagnostic{{At: Position{File: name, Line: 1, Column: 1}, What: "this is " + kind + ", not a SPICE-style netlist", Expected: "element cards such as `R1 in out 1k`"}}
	}
	if decoded == "" || strings.TrimSpace(decoded) == "" {
		return nil, nil, []Diagnostic{{At: Position{File: name, Line: 1, Column: 1}, What: "the file is empty", Expected: "a netlist"}}
	}
	lines, inline, faults := syntax.Lines(name, decoded)
	x := &expander{
		collector: collector{
			files: opened, globals: map[string]bool{}, skipped: map[string]bool{}, doubtful: map[*syntax.Line]bool{}, temperature: 27, faults: faults,
		},
		library: library, nodes: map[string]NodeID{}, models: map[*syntax.Line]*modelCard{},
		environments: map[*scope]*environment{}, names: map[string]bool{}, cards: map[*syntax.Line]aheadCard{}, byName: map[string]ElementID{},
		circuit: &Circuit{File: name, Nodes: []Node{{Name: "0"}}, Library: library},
	}
	x.top = newScope("", nil)
	x.current = x.top
	for _, i := range inline {
		x.inline = append(x.inline, DutyLine{Text: i.Text, At: i.At})
	}
	lines = x.takeTitle(lines)
	x.block(lines, "")
	x.expand(&level{scope: x.top, env: x.environmentOf(x.top)})
	x.checkParameters()
	x.titleElement()
	x.finish()
	c := x.circuit
	c.Title, c.Temperature, c.Remarks = x.title, x.temperature, x.remarks
	if len(x.faults) == 0 && len(c.Elements) == 0 && len(x.top.subckts)+len(x.top.models) > 0 {
		c.Remarks = append(c.Remarks, Remark{Kind: RemarkModel, At: Position{File: name, Line: 1, Column: 1}, Text: "the file holds definitions only: there is no circuit to check"})
	} else if len(x.faults) == 0 && len(c.Elements) == 0 {
		x.fault(Position{File: name, Line: 1, Column: 1}, "the file holds no element", "element cards such as `R1 in out 1k`")
	}
	if len(x.faults) >= foreignFaults && !plausible(lines) {
		x.faults = []Diagnostic{{At: Position{File: name, Line: 1, Column: 1}, What: "no line of the file reads like a SPICE-style card", Expected: "element cards such as `R1 in out 1k`"}}
	}
	if len(x.faults) > 0 {
		return c, nil, x.faults[:min(len(x.faults), maxFaults)]
	}
	if !c.HasGround {
		c.Remarks = append(c.Remarks, Remark{Kind: RemarkAssumption, At: Position{File: name, Line: 1, Column: 1}, Text: "no element touches node 0: voltages between nodes hold, voltages to ground are arbitrary"})
	}
	stated.sheets[FromNetlist] = x.inline
	d, faults := interpretDuty(c, stated)
	c.inferPins()
	if len(faults) > 0 {
		return c, d, faults[:min(len(faults), maxFaults)]
	}
	return c, d, nil
}

// takeTitle takes the first line as the title, unless it is a dot card.
func (x *expander) takeTitle(lines []syntax.Line) []syntax.Line {
	if len(lines) == 0 {
		return lines
	}
	first := &lines[0]
	if p := first.Start(); p.Line != 1 {
		return lines // a blank or comment title was not kept as a line
	}
	text := first.Text
	switch {
	case text == "":
	case text[0] == '*':
		x.title = strings.TrimSpace(text[1:])
	case text[0] == '.':
		return lines
	default:
		x.title = strings.TrimSpace(text)
		x.titleLine = first
	}
	return lines[1:]
}

// titleElement takes the title for an element if it is plainly one: well formed, every node of it is a node of
// the circuit, and what stands behind them is a value, a model or a subcircuit. It is then said so.
func (x *expander) titleElement() {
	if x.titleLine == nil {
		return
	}
	l := x.titleLine.WithoutComment()
	if !looksLikeElement(l.Text) {
		return
	}
	words := strings.Fields(l.Text)
	letter := upper(words[0][0])
	pins := nodesOnly[letter]
	if letter == 'X' {
		pins = len(words) - 2
	}
	if pins < 2 || len(words) < pins+2 {
		return
	}
	switch after := words[pins+1]; letter {
	case 'R', 'C', 'L', 'V', 'I':
		if _, number := spice(after); !number && !keyword(strings.SplitN(after, "(", 2)[0]) {
			return
		}
	case 'X':
		if _, defined := x.top.subckt(strings.ToLower(after)); !defined && !x.recognised(after) {
			return
		}
	case 'D', 'Q', 'M', 'S':
		if _, _, defined := x.top.model(strings.ToLower(after)); !defined && !x.recognised(after) {
			return
		}
	default:
		return
	}
	first := true
	for _, name := range words[1 : pins+1] {
		if isGroundName(name) {
			first = first && x.circuit.HasGround
		} else if _, met := x.nodes[strings.ToLower(name)]; !met {
			first = false
		}
	}
	if !first || words[1] == words[2] {
		x.remark(RemarkAssumption, l.Start(), "", "the first line reads like an element but is the title")
		return
	}
	before, faults := len(x.circuit.Elements), len(x.faults)
	x.element(&level{scope: x.top, env: x.environmentOf(x.top)}, &l)
	if len(x.faults) == faults && len(x.circuit.Elements) > before {
		x.remark(RemarkAssumption, l.Start(), x.circuit.Elements[before].Name, "the first line is taken as an element, not as the title: its nodes are those of the circuit")
		x.title = ""
	}
}

// recognised reports a type name that the library knows.
func (x *expander) recognised(name string) bool {
	if x.library == nil {
		return false
	}
	_, ok := x.library.Recognise(name)
	return ok
}

// checkParameters evaluates the parameters of the netlist that nothing asked for, so that a mistake in one
// is not passed over.
func (x *expander) checkParameters() {
	env := x.environmentOf(x.top)
	for _, a := range x.top.params {
		if a.value.Atom != nil && a.value.Atom.Quoted != "" {
			continue
		}
		if _, err := env.value(a.name); err != nil {
			if x.unknowable(err) {
				x.remark(RemarkNotRead, a.line.Start(), "", "parameter "+a.name+": "+err.Error())
				continue
			}
			x.fault(a.line.Start(), "parameter "+a.name+": "+err.Error(), "a number or a formula of parameters")
		}
	}
}

// foreignFaults is from how many faults on a file is looked at as a whole: is it one of another kind?
const foreignFaults = 10
