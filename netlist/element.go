package netlist

import (
	"errors"
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
		for _, i := range items {
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
				c.assigns = append(c.assigns, assignment{strings.ToLower(i.Assign.Key.Text()), i.Assign.Value, line})
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
	if upper(line.Text[0]) == 'B' && x.formulaLine(lv, line) {
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
		x.fault(line.Start(), fmt.Sprintf("%s has %d words behind its name", c.shown, len(c.words)), expectedCard[c.letter])
		return
	}
	if at := c.decimalComma(); at >= 0 {
		x.fault(line.Position(at), "a comma inside a number", "a decimal point, as in 4.7k")
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

// passive reads R, C and L.
func (x *expander) passive(lv *level, c *elementCard) {
	nodes := []NodeID{x.node(lv, c.words[0].Text()), x.node(lv, c.words[1].Text())}
	if c.looseFormula() {
		x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: "its value is a formula without braces"}, "")
		return
	}
	rest := c.words[2:]
	typeName := ""
	value, found := 0.0, false
	var number quantity.Spice
	for k := 0; k < len(rest); k++ {
		w := rest[k]
		text := w.Text()
		if !w.IsExpression() {
			if n, ok := quantity.ParseSpice(text); ok {
				if !found {
					value, found, number = n.Value, true, n
					if unit, ok := unitAlone(rest, k+1); ok && n.Factor == "" {
						if joined, ok := quantity.ParseSpice(text + unit); ok {
							value, number = joined.Value, joined
							x.remark(RemarkAssumption, c.line.Start(), lv.prefix+c.shown, "read `"+text+" "+unit+"` as "+text+unit)
							k++
						}
					}
					c.addValueRatings(n.Rest)
				} else {
					c.addValueRatings(text)
				}
				continue
			}
		}
		if !found && w.IsExpression() {
			v, err := lv.env.atom(w)
			if err != nil {
				x.noValue(lv, c, nodes, w, err, "a value")
				return
			}
			value, found = v, true
			continue
		}
		if !found && k == 0 {
			if v, err := lv.env.value(strings.ToLower(text)); err == nil {
				value, found = v, true
				continue
			}
			typeName = text
			continue
		}
		if quote := w.Quoted != ""; !quote && !strings.EqualFold(text, "tc") {
			c.addValueRatings(text)
		}
	}
	key := map[byte]string{'R': "r", 'C': "c", 'L': "l"}[c.letter]
	for _, k := range []string{key, "value", "val"} {
		if v, ok := c.assigned(k); ok && !found {
			n, err := lv.env.evaluate(v, 0)
			if err != nil {
				x.noValue(lv, c, nodes, v.Atom, err, "a value")
				return
			}
			value, found = n, true
		}
	}
	if !found && typeName != "" {
		if m := x.modelCardNamed(lv.scope, typeName); m != nil {
			if v, ok := m.values[key]; ok && m.kind != "" && strings.HasPrefix(m.kind, key) {
				value, found = v, true
			}
		}
	}
	if !found {
		x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: "its value is missing"}, typeName)
		return
	}
	name := lv.prefix + c.shown
	if value < 0 {
		x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: fmt.Sprintf("its value %g is negative", value)}, typeName)
		return
	}
	x.doubtfulValue(c, name, value, number)
	switch copies := x.copies(lv, c); c.letter {
	case 'C':
		value *= copies
	default:
		value /= copies
	}
	var initial *float64
	if v, ok := c.assigned("ic"); ok {
		if n, err := lv.env.evaluate(v, 0); err == nil {
			initial = &n
		}
	}
	switch c.letter {
	case 'R':
		x.add(lv, c, nodes, Resistor{Ohms: value}, typeName)
	case 'C':
		x.add(lv, c, nodes, Capacitor{Farads: value, Initial: initial}, typeName)
	case 'L':
		x.add(lv, c, nodes, Inductor{Henries: value, Initial: initial}, typeName)
	}
}

// decimalComma finds a value of the form 4,7 on a card that takes one value, -1 if there is none.
func (c *elementCard) decimalComma() int {
	if !strings.ContainsRune("RCLVI", rune(c.letter)) || len(c.words) < 4 {
		return -1
	}
	for _, w := range c.words[2:4] { // the value may stand behind DC or a model
		at := w.Pos.Offset + len(w.Word)
		text := c.line.Text
		if _, number := spice(w.Word); number && at+1 < len(text) && text[at] == ',' && text[at+1] >= '0' && text[at+1] <= '9' {
			if before := strings.ToLower(c.words[2].Text()); w == c.words[2] || before == "dc" || c.letter != 'V' && c.letter != 'I' {
				return at
			}
		}
	}
	return -1
}

// areaOf reads an area factor behind a model: a bare number. Another word is named as not read.
func (x *expander) areaOf(lv *level, c *elementCard, w *syntax.Atom) (float64, bool) {
	n, number := quantity.ParseSpice(w.Text())
	plain := !w.IsExpression() && number && n.Unit == "" && n.Rest == "" && !n.Coded
	if v, err := lv.env.atom(w); err == nil && v > 0 && (plain || !number) {
		return v, true
	}
	x.remark(RemarkModel, c.line.Start(), lv.prefix+c.shown, "`"+shorten(w.Text())+"` behind the model is not read")
	return 0, false
}

// looseFormula reports R=, C= or L= with a formula that stands without marks: it goes on behind its first word.
func (c *elementCard) looseFormula() bool {
	v, ok := c.assigned(strings.ToLower(string(c.letter)))
	if !ok || v.Atom == nil || v.Atom.Word == "" {
		return false
	}
	more := strings.TrimLeft(c.line.Text[v.Atom.Pos.Offset+len(v.Atom.Word):], " \t")
	return more != "" && strings.ContainsRune("(*/+-^?", rune(more[0]))
}

// noValue is an element whose value cannot be computed: an error, unless the name may be defined in what was
// not read.
func (x *expander) noValue(lv *level, c *elementCard, nodes []NodeID, w *syntax.Atom, err error, expected string) {
	if x.unread || errors.Is(err, errNoProbe) {
		x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: "its value is not known: " + err.Error()}, "")
		return
	}
	at := c.line.Start()
	if w != nil {
		at = c.line.Position(w.Pos.Offset)
	}
	x.fault(at, err.Error(), expected)
}

// copies is m= of a card: how many equal parts in parallel one symbol stands for.
func (x *expander) copies(lv *level, c *elementCard) float64 {
	v, ok := c.assigned("m")
	if !ok {
		return 1
	}
	m, err := lv.env.evaluate(v, 0)
	if err != nil || m <= 0 {
		return 1
	}
	if m != 1 {
		x.remark(RemarkModel, c.line.Start(), lv.prefix+c.shown,
			fmt.Sprintf("m=%g makes one symbol stand for %g in parallel: ratings hold for one part, stresses for all of them", m, m))
	}
	return m
}

// unitAlone reports whether the word after a number is its unit: `10 uF`.
func unitAlone(words []*syntax.Atom, k int) (string, bool) {
	if k >= len(words) || words[k].Word == "" {
		return "", false
	}
	switch text := words[k].Word; strings.ToLower(strings.NewReplacer("µ", "u", "μ", "u", "Ω", "ohm").Replace(text)) {
	case "f", "uf", "nf", "pf", "mf", "h", "uh", "mh", "nh", "ohm", "ohms", "kohm", "mohm", "k", "u", "n", "p", "meg", "megohm":
		return text, true
	}
	return "", false
}

// addValueRatings reads what exporters write behind a value: `50V`, `2W`, `60V/tantalum`.
func (c *elementCard) addValueRatings(text string) {
	for _, part := range strings.Split(text, "/") {
		part = strings.TrimSpace(part)
		n, ok := quantity.ParseSpice(part)
		key := ""
		switch unit := strings.ToLower(n.Unit); {
		case !ok:
			switch strings.ToLower(part) {
			case "tantalum", "ceramic", "film", "electrolytic", "polymer":
				c.fields = append(c.fields, Field{Key: "technology", Value: strings.ToLower(part), At: c.line.Start()})
			}
			continue
		case unit == "v" || unit == "vdc":
			key = map[byte]string{'C': "UR", 'R': "Umax"}[c.letter]
		case unit == "w" && c.letter == 'R':
			key = "P70"
		case unit == "%":
			key = "tol"
		}
		if key != "" {
			c.fields = append(c.fields, Field{Key: key, Value: part, At: c.line.Start()})
		}
	}
}

// doubtfulValue remarks on numbers that SPICE reads otherwise than their writer may have meant.
func (x *expander) doubtfulValue(c *elementCard, name string, value float64, n quantity.Spice) {
	say := func(text string) { x.remark(RemarkValueSuffix, c.line.Start(), name, text) }
	switch c.letter {
	case 'C':
		switch {
		case value >= 1:
			say(fmt.Sprintf("a capacitance of %g F: was a scale factor (u, n, p) left out?", value))
		case strings.EqualFold(n.Factor, "f"):
			say(fmt.Sprintf("`%s` is femto: the capacitance is %g F", n.Factor, value))
		case n.Factor == "M":
			say(fmt.Sprintf("`M` is milli: the capacitance is %g F", value))
		}
	case 'R':
		switch {
		case n.Factor == "M" && !n.Coded:
			say(fmt.Sprintf("`M` is milli in a netlist, MEG is mega: the resistance is %g ohm", value))
		case value >= 1e9 && n.Factor != "":
			say(fmt.Sprintf("a resistance of %g ohm", value))
		}
	case 'L':
		switch {
		case value >= 1000:
			say(fmt.Sprintf("an inductance of %g H: was a scale factor (m, u) left out?", value))
		case n.Factor == "M":
			say(fmt.Sprintf("`M` is milli: the inductance is %g H", value))
		}
	}
}
