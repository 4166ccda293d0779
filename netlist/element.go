package netlist

import (
	"fmt"
	"strings"

	"railproof/netlist/quantity"
	"railproof/netlist/syntax"
)

// elementCard is an element's card sorted into words and assignments.
type elementCard struct {
	line    *syntax.Line
	letter  byte   // upper case
	name    string // as written
	shown   string // as shown: without an exporter's mark before the designator
	words   []*syntax.Atom
	assigns []assignment
	fields  []Field
	tail    []*syntax.Item // all items, brackets kept
	early   *syntax.Atom   // the name of a KEY=value that stands before all nodes are named
}

// sortCard splits a card. Brackets and commas separate like blanks.
func sortCard(line *syntax.Line, card *syntax.ElementCard) *elementCard {
	c := &elementCard{line: line, name: card.Name.Text(), tail: card.Items}
	c.shown = c.name
	if k := strings.Index(c.name, "§"); k > 0 && k+len("§") < len(c.name) {
		c.shown = c.name[k+len("§"):]
	}
	c.letter = upper(c.name[0])
	var walk func(items []*syntax.Item)
	walk = func(items []*syntax.Item) {
		inList, comma := false, false // behind KEY=value; behind a comma there
		for _, i := range items {
			if i.Comma {
				comma = true
				continue
			}
			if inList && comma && i.Assign != nil && i.Assign.Value == nil && isValue(i.Assign.Key) {
				comma = false
				continue // the second value of TC=0.01,0.02
			}
			inList, comma = i.Assign != nil && i.Assign.Value != nil, false
			switch {
			case i.Group != nil:
				walk(i.Group.Items)
			case i.Assign != nil && i.Assign.Value == nil:
				c.words = append(c.words, i.Assign.Key)
			case i.Assign != nil && i.Assign.Key.IsExpression():
				// TABLE {formula} = (x,y) ...: the points are words too.
				c.words = append(c.words, i.Assign.Key)
				if i.Assign.Value.Group != nil {
					walk(i.Assign.Value.Group.Items)
				} else {
					c.words = append(c.words, i.Assign.Value.Atom)
				}
			case i.Assign != nil:
				if c.early == nil && len(c.words) < nodesOnly[c.letter] {
					c.early = i.Assign.Key
				}
				c.assigns = append(c.assigns, assignment{name: strings.ToLower(i.Assign.Key.Text()), value: i.Assign.Value, line: line})
				if i.Assign.Value.Atom != nil {
					c.fields = append(c.fields, Field{
						Key: i.Assign.Key.Text(), Value: i.Assign.Value.Atom.Text(), At: line.Position(i.Assign.Key.Pos.Offset),
					})
				}
			}
		}
	}
	walk(card.Items)
	return c
}

// isValue reports a number or an expression.
func isValue(a *syntax.Atom) bool {
	_, number := spice(a.Text())
	return number || a.IsExpression()
}

func upper(b byte) byte {
	if b >= 'a' && b <= 'z' {
		return b - 'a' + 'A'
	}
	return b
}

// assigned finds KEY=value by its lower-case key.
func (c *elementCard) assigned(key string) (*syntax.Value, bool) {
	for _, a := range c.assigns {
		if a.name == key {
			return a.value, true
		}
	}
	return nil, false
}

// element reads one card of a level.
func (x *expander) element(lv *level, line *syntax.Line) {
	known, ok := x.cards[line]
	if !ok {
		known.card, known.fault = syntax.ParseElement(line)
		if lv.depth > 0 { // a subcircuit may be called again
			x.cards[line] = known
		}
	}
	x.parsed(lv, line, known.card, known.fault)
}

// parsed reads one parsed card of a level.
func (x *expander) parsed(lv *level, line *syntax.Line, card *syntax.ElementCard, fault *syntax.Diagnostic) {
	if upper(line.Text[0]) == 'B' && !x.doubtful[line] && x.formulaLine(lv, line) {
		return
	}
	if fault != nil {
		x.faults = append(x.faults, *fault)
		return
	}
	name := card.Name.Text()
	if name == "" || !isLetter(name[0]) {
		x.fault(line.Start(), fmt.Sprintf("%q is no element name", shorten(name)), "a letter that says the kind of element, or a card that begins with .")
		return
	}
	c := sortCard(line, card)
	if need := nodesNeeded[c.letter]; len(c.words) < need {
		x.fault(line.Start(), fmt.Sprintf("%s has %s behind its name", c.shown, counted(len(c.words), "word")), expectedCard[c.letter])
		return
	}
	if c.early != nil {
		x.fault(line.Position(c.early.Pos.Offset), fmt.Sprintf("`%s=` where a node was expected", shorten(c.early.Text())), expectedCard[c.letter])
		return
	}
	if at := c.bracketNode(min(nodesOnly[c.letter], len(c.words))); at >= 0 {
		x.fault(line.Position(at), "a bracket touches the name of a node", "a blank between them, or a node without brackets")
		return
	}
	if at := c.decimalComma(); at >= 0 {
		x.fault(line.Position(at), "a comma inside a number", "a decimal point, as in 4.7k")
		return
	}
	if x.doubtful[line] {
		x.unknownWords(lv, c, c.words[:min(max(nodesOnly[c.letter], 0), len(c.words))], "an .if whose condition is not known may leave it out")
		return
	}
	switch c.letter {
	case 'R', 'C', 'L':
		x.passive(lv, c)
	case 'D':
		x.diode(lv, c)
	case 'Q':
		x.transistor(lv, c)
	case 'M':
		x.fet(lv, c)
	case 'V', 'I':
		x.source(lv, c)
	case 'E', 'G':
		x.voltageControlled(lv, c)
	case 'B':
		x.behaviouralCard(lv, c)
	case 'F', 'H', 'K':
		x.late = append(x.late, lateCard{card: c, level: lv, id: x.reserve(lv, c)})
	case 'S':
		x.switchCard(lv, c)
	case 'X':
		x.call(lv, c)
	default:
		x.other(lv, c)
	}
}

// counted is a number with its noun: 1 word, 2 words.
func counted(n int, noun string) string {
	if n == 1 {
		return "1 " + noun
	}
	return fmt.Sprintf("%d %ss", n, noun)
}

// nodesOnly is how many words behind the name can be nothing but nodes.
var nodesOnly = map[byte]int{
	'R': 2, 'C': 2, 'L': 2, 'D': 2, 'V': 2, 'I': 2, 'E': 2, 'G': 2, 'B': 2, 'F': 2, 'H': 2, 'Q': 3, 'M': 3, 'J': 3, 'Z': 3, 'S': 4,
}

// bracketNode finds an opening bracket that touches one of the first n words, -1 if there is none: `a(b)` may be
// one node or two.
func (c *elementCard) bracketNode(n int) int {
	for _, w := range c.words[:n] {
		if end := w.Pos.Offset + len(w.Word); w.Word != "" && end < len(c.line.Text) && c.line.Text[end] == '(' {
			return end
		}
	}
	return -1
}

// nodesNeeded is how many words each kind of element must have at the least, and expectedCard its form.
var (
	nodesNeeded = map[byte]int{
		'R': 2, 'C': 2, 'L': 2, 'D': 3, 'Q': 4, 'M': 4, 'V': 2, 'I': 2, 'E': 2, 'G': 2, 'B': 2, 'F': 2, 'H': 2, 'K': 2,
		'S': 5, 'X': 1,
	}
	expectedCard = map[byte]string{
		'R': "Rname node node value", 'C': "Cname node node value", 'L': "Lname node node value",
		'D': "Dname anode cathode model", 'Q': "Qname collector base emitter model",
		'M': "Mname drain gate source bulk model", 'V': "Vname plus minus value", 'I': "Iname plus minus value",
		'E': "Ename plus minus control+ control- gain", 'G': "Gname plus minus control+ control- gain",
		'B': "Bname plus minus V=formula or I=formula", 'F': "Fname plus minus source gain",
		'H': "Hname plus minus source gain", 'K': "Kname inductor inductor factor",
		'S': "Sname node node control+ control- model", 'X': "Xname node ... subcircuit",
	}
)

// other keeps an element of a kind that is not modelled, with its nodes.
func (x *expander) other(lv *level, c *elementCard) {
	pins := map[byte]int{'J': 3, 'Z': 3, 'T': 4, 'O': 4, 'W': 2, 'U': 3}
	words := c.words
	if n, ok := pins[c.letter]; ok && n <= len(words) {
		words = words[:n]
	} else if len(words) > 0 {
		words = words[:len(words)-1]
	}
	names := map[byte]string{
		'J': "a junction FET", 'Z': "a MESFET", 'T': "a transmission line", 'O': "a lossy line",
		'W': "a current-controlled switch", 'U': "a distributed line or digital part",
	}
	what, ok := names[c.letter]
	if !ok {
		what = "an element of kind " + string(c.letter)
	}
	x.unknownWords(lv, c, words, what+" is not modelled")
}

// decimalComma finds a value of the form 4,7 on a card that takes one value, -1 if there is none.
func (c *elementCard) decimalComma() int {
	if !strings.ContainsRune("RCLVI", rune(c.letter)) || len(c.words) < 4 {
		return -1
	}
	for _, w := range c.words[2:4] { // the value may stand behind DC or a model
		at := w.Pos.Offset + len(w.Word)
		text := c.line.Text
		if n, number := quantity.ParseSpice(w.Word); number && n.Factor+n.Unit+n.Rest == "" && at+1 < len(text) && text[at] == ',' && text[at+1] >= '0' && text[at+1] <= '9' {
			if before := strings.ToLower(c.words[2].Text()); w == c.words[2] || before == "dc" || c.letter != 'V' && c.letter != 'I' {
				return at
			}
		}
	}
	return -1
}
