package netlist

import (
	"strings"

	"railproof/netlist/syntax"
)

// scope is the body of a netlist file or of a subcircuit: its cards by name, elements still unparsed.
type scope struct {
	name     string
	parent   *scope
	at       Position
	pins     []string       // of a subcircuit, as written
	defaults []assignment   // its parameters
	elements []*syntax.Line // in order
	models   map[string]*syntax.Line
	subckts  map[string]*scope
	params   []assignment
	named    map[string]bool // names of params
	funcs    map[string]*function
}

// assignment is NAME = value of a .param card or a subcircuit's parameter list.
type assignment struct {
	name  string // lower case
	value *syntax.Value
	line  *syntax.Line
	doubt bool // an .if whose condition is not known may leave it out
}

func newScope(name string, parent *scope) *scope {
	return &scope{
		name: name, parent: parent, models: map[string]*syntax.Line{}, subckts: map[string]*scope{},
		funcs: map[string]*function{}, named: map[string]bool{},
	}
}

// model finds a model card by name in this scope or an enclosing one.
func (s *scope) model(name string) (*syntax.Line, *scope, bool) {
	for at := s; at != nil; at = at.parent {
		if l, ok := at.models[name]; ok {
			return l, at, true
		}
	}
	return nil, nil, false
}

// subckt finds a subcircuit by name in this scope or an enclosing one.
func (s *scope) subckt(name string) (*scope, bool) {
	for at := s; at != nil; at = at.parent {
		if d, ok := at.subckts[name]; ok {
			return d, true
		}
	}
	return nil, false
}

// maxFaults is how many diagnostics one input may have before reading ends.
const maxFaults = 50

// collector sorts the cards of a netlist and of what it includes into scopes.
type collector struct {
	files       *files
	top         *scope
	current     *scope
	inline      []DutyLine
	globals     map[string]bool
	remarks     []Remark
	faults      []Diagnostic
	skipped     map[string]bool // dot cards named once
	temperature float64
	title       string
	titleLine   *syntax.Line
	depth       int
	ended       bool
	branches    []branch              // open .if cards
	doubtful    map[*syntax.Line]bool // elements and models that an .if may leave out
	decisions   []decision            // conditions computed
	ahead       []assignment          // parameters for the conditions of .if
	unread      bool                  // something that may define names was not read
}

func (c *collector) fault(at Position, what, expected string) {
	if len(c.faults) < maxFaults {
		c.faults = append(c.faults, Diagnostic{At: at, What: what, Expected: expected})
	}
}

func (c *collector) remark(kind RemarkKind, at Position, element, text string) {
	c.unread = c.unread || kind == RemarkLibraryNotRead
	c.remarks = append(c.remarks, Remark{Kind: kind, At: at, Element: element, Text: text})
}

// analysis cards and output cards are skipped without complaint.
var silent = words(`tran ac dc op tf sens noise disto pz print plot probe probe64 meas measure save four fourier
	nodeset width option options backanno end ends title wave savebias loadbias net mc wcase`)

// unreadCards says what is missed by passing over a card that is none of these.
var unreadCards = map[string]string{
	"ic":   ": nodes begin at what the elements themselves state",
	"step": ": the circuit is solved with the values of the other cards",
}

// sameCard are other spellings of dot cards.
var sameCard = map[string]string{"macro": "subckt", "eom": "ends", "params": "param", "parameter": "param"}

func words(text string) map[string]bool {
	set := map[string]bool{}
	for _, w := range strings.Fields(text) {
		set[w] = true
	}
	return set
}

// block sorts the logical lines of one file. section limits it to a `.lib NAME` section, lower case.
func (c *collector) block(lines []syntax.Line, section string) {
	skipTo, inside, opened := "", section == "", c.current // skipTo ends a block that is no circuit
	var skipFrom Position
	ifs := len(c.branches)
	if c.depth == 0 {
		c.lookAhead(lines)
		defer c.checkDecisions()
	}
	for k := range lines {
		l := &lines[k]
		if len(c.faults) >= maxFaults {
			return
		}
		word := firstWord(l.Text)
		if skipTo != "" {
			if strings.EqualFold(word, skipTo) {
				skipTo = ""
			}
			if !strings.EqualFold(word, ".end") {
				continue
			}
			// An .end ends the circuit also where the block before it was never closed.
		}
		if c.ended {
			if word != "" && word[0] != '.' && elementBehindEnd(l.Text) && c.depth == 0 {
				c.remark(RemarkAfterEnd, l.Start(), word, "stands behind .end and is not part of the circuit")
			}
			switch strings.ToLower(word) {
			case ".control":
				skipTo = ".endc"
			case ".end":
				c.remark(RemarkAssumption, l.Start(), "", "a second .end: the circuit ends at the first")
			}
			continue
		}
		if word == "" || word[0] == '*' {
			continue
		}
		if word[0] != '.' {
			if out, doubt := c.branched(); inside && !out {
				c.current.elements = append(c.current.elements, l)
				if doubt {
					c.doubtful[l] = true
				}
			}
			continue
		}
		key := strings.ToLower(word[1:])
		if same, ok := sameCard[key]; ok {
			key = same
		}
		if key == "lib" {
			name, end := sectionHead(l.Text), -1
			if name != "" {
				end = sectionEnd(lines, k)
			}
			if end >= 0 { // a section definition
				if section != "" && strings.EqualFold(name, section) {
					inside = true
				} else if section == "" {
					inside = false
				}
				continue
			}
		}
		if key == "endl" {
			inside = section == ""
			continue
		}
		if !inside || c.conditional(strings.SplitN(key, "(", 2)[0], l) {
			continue
		}
		if out, _ := c.branched(); out {
			continue
		}
		switch key {
		case "control":
			skipTo, skipFrom = ".endc", l.Start()
		case "data":
			c.directive(key, l)
			skipTo, skipFrom = ".enddata", l.Start()
		case "end":
			if c.depth == 0 {
				c.ended = true
			}
		default:
			c.directive(key, l)
		}
	}
	if skipTo != "" && skipFrom.Line > 0 {
		c.remark(RemarkNotRead, skipFrom, "", "what stands behind this card: its block has no "+skipTo)
	}
	if len(c.branches) > ifs {
		c.fault(c.branches[len(c.branches)-1].at, ".if without .endif", ".endif before the end of the file")
		c.branches = c.branches[:ifs]
	}
	if c.current != opened && len(c.faults) < maxFaults {
		if c.current.name != "" {
			c.fault(c.current.at, "subcircuit "+c.current.name+" has no .ends", ".ends before the end of the file")
		} else {
			c.fault(lines[len(lines)-1].Start(), "the file has more .ends than .subckt", "one .ends for each .subckt")
		}
		c.current = opened
	}
}

// secondWord is the word behind the first, up to a blank, bracket, comma or equals sign.
func secondWord(text string) string {
	rest := strings.TrimLeft(text[len(firstWord(text)):], " \t")
	if k := strings.IndexAny(rest, " \t(=,"); k >= 0 {
		return rest[:k]
	}
	return rest
}

// firstWord is the text up to the first blank or bracket.
func firstWord(text string) string {
	if k := strings.IndexAny(text, " \t"); k >= 0 {
		return text[:k]
	}
	return text
}

// sectionHead returns NAME of `.lib NAME`, "" if the card has another number of words.
func sectionHead(text string) string {
	if f := strings.Fields(text); len(f) == 2 {
		return f[1]
	}
	return ""
}

// sectionEnd finds the .endl of a section that begins at line k, -1 if another .lib comes first.
func sectionEnd(lines []syntax.Line, k int) int {
	for j := k + 1; j < len(lines); j++ {
		if len(lines[j].Text) > 3 && lines[j].Text[0] == '.' {
			switch word := strings.ToLower(firstWord(lines[j].Text)); word {
			case ".endl":
				return j
			case ".lib":
				if sectionHead(lines[j].Text) != "" {
					return -1
				}
			}
		}
	}
	return -1
}

// looksLikeElement reports a line with a letter first and at least three words.
func looksLikeElement(text string) bool {
	f := strings.Fields(text)
	return len(f) >= 3 && isLetter(f[0][0])
}

// elementBehindEnd reports a line with as many words as an element of its letter has.
func elementBehindEnd(text string) bool {
	if !looksLikeElement(text) {
		return false
	}
	letter, words := upper(text[0]), len(strings.Fields(text))
	need := nodesNeeded[letter]
	if letter == 'R' || letter == 'C' || letter == 'L' {
		need = 3
	}
	return need > 0 && words > need
}

func isLetter(b byte) bool { return b >= 'a' && b <= 'z' || b >= 'A' && b <= 'Z' }

func (c *collector) directive(key string, l *syntax.Line) {
	switch key {
	case "include", "inc", "incl", "lib":
		c.include(key, l)
		return
	case "model":
		written := secondWord(l.Text)
		if written == "" {
			c.fault(l.Start(), ".model without a name", ".model NAME TYPE(parameters)")
			return
		}
		name := strings.ToLower(written)
		if _, double := c.current.models[name]; double {
			c.remark(RemarkModel, l.Start(), "", "model "+written+" is defined again; the first definition holds")
			return
		}
		c.current.models[name] = l
		if _, doubt := c.branched(); doubt {
			c.doubtful[l] = true
		}
		return
	}
	if key == "step" || key == "data" {
		c.unread = true // it may give values to names that no card defines
	}
	if silent[key] && key != "title" && key != "ends" && key != "options" && key != "option" {
		return
	}
	switch key {
	case "subckt", "ends", "param", "func", "global", "temp", "temperature", "title", "options", "option":
	default:
		if !c.skipped[key] {
			c.skipped[key] = true
			c.remark(RemarkNotRead, l.Start(), "", "."+key+unreadCards[key])
		}
		return
	}
	if key == "ends" {
		if c.current.parent == nil {
			c.fault(l.Start(), ".ends without .subckt", ".subckt before it")
			return
		}
		c.current = c.current.parent
		return
	}
	if key == "title" {
		c.title = strings.TrimSpace(l.Text[len(firstWord(l.Text)):])
		return
	}
	card, fault := syntax.ParseDirective(l)
	if fault != nil {
		if key == "options" || key == "option" {
			return
		}
		c.faults = append(c.faults, *fault)
		if key == "subckt" { // keep the nesting right
			c.open("?", l)
		}
		return
	}
	switch key {
	case "subckt":
		c.subckt(card, l)
	case "func":
		c.defineFunction(l)
	case "global":
		for _, a := range atoms(card.Items) {
			c.globals[strings.ToLower(a.Text())] = true
		}
	case "temp", "temperature":
		if list := atoms(card.Items); len(list) > 0 {
			if v, ok := spice(list[0].Text()); ok && v > -273 && v < 1000 {
				c.temperature = v
			}
		}
	case "options", "option":
		for _, i := range card.Items {
			if i.Assign != nil && i.Assign.Value != nil && strings.EqualFold(i.Assign.Key.Text(), "temp") {
				if v, ok := spice(i.Assign.Value.Atom.Text()); ok && v > -273 && v < 1000 {
					c.temperature = v
				}
			}
		}
	default:
		if rest := strings.TrimSpace(l.Text[len(firstWord(l.Text)):]); functionLike(rest) {
			f := *l
			f.Text = ".func " + rest
			c.defineFunction(&f)
			return
		}
		if !plainAssignments(card.Items) {
			c.define(c.looseParameters(l))
			return
		}
		c.define(c.assignments(card.Items, l))
	}
}
