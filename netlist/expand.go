package netlist

import (
	"fmt"
	"runtime"
	"strings"
	"sync"

	"railproof/netlist/syntax"
)

// maxElements is how many elements a netlist may have after its subcircuits are expanded.
const maxElements = 250_000

// expander turns scopes into the flat circuit.
type expander struct {
	collector
	circuit      *Circuit
	library      Library
	nodes        map[string]NodeID
	models       map[*syntax.Line]*modelCard
	environments map[*scope]*environment
	names        map[string]bool // element names in use, lower case
	open         int             // `?` nodes so far
	calls        int             // subcircuit calls so far
	overflow     bool            // a limit of the expansion was met: nothing more is added
	late         []lateCard
	cards        map[*syntax.Line]aheadCard // parsed lines of subcircuits
	formulas     []func()                   // compile what refers to elements by name, when all are known
	byName       map[string]ElementID       // lower case full path
}

// lateCard is an element that refers to others by name, resolved when all are known.
type lateCard struct {
	card  *elementCard
	level *level
	id    ElementID
}

// level is one instance of a scope: the netlist itself or a subcircuit call.
type level struct {
	scope  *scope
	env    *environment
	prefix string            // "X1." or ""
	ports  map[string]NodeID // pin name, lower case -> node outside
	depth  int
}

// environmentOf returns an environment for evaluating the models of a scope: defaults of its parameters.
func (x *expander) environmentOf(s *scope) *environment {
	if s == nil {
		return nil
	}
	if e, ok := x.environments[s]; ok {
		return e
	}
	e := newEnvironment(x.environmentOf(s.parent), s, nil)
	x.environments[s] = e
	return e
}

func isGroundName(name string) bool {
	switch strings.ToLower(name) {
	case "0", "gnd", "gnd!", "00", "000":
		return true
	}
	return false
}

// nodeKey is the key of a node at a level and its full name; found says that it is there already.
func (x *expander) nodeKey(lv *level, name string) (id NodeID, key, full string, found bool) {
	key = strings.ToLower(name)
	if id, ok := lv.ports[key]; ok { // also a pin that is called gnd
		return id, key, name, true
	}
	if isGroundName(name) {
		return Ground, key, name, true
	}
	full = name
	if lv.prefix != "" && !x.globals[key] {
		key, full = strings.ToLower(lv.prefix)+key, lv.prefix+name
	}
	id, found = x.nodes[key]
	return id, key, full, found
}

// node finds or makes the node of a name at a level. Each `?` is a node of its own.
func (x *expander) node(lv *level, name string) NodeID {
	id, key, full, found := x.nodeKey(lv, name)
	if name == "?" {
		x.open++
		key = fmt.Sprintf("?%d", x.open)
		full, found = key, false
	}
	if found {
		x.circuit.HasGround = x.circuit.HasGround || id == Ground
		return id
	}
	id = NodeID(len(x.circuit.Nodes))
	x.nodes[key] = id
	x.circuit.Nodes = append(x.circuit.Nodes, Node{Name: full})
	return id
}

// expand adds the elements of a level.
func (x *expander) expand(lv *level) {
	lines := lv.scope.elements
	var cards []aheadCard
	for k, line := range lines {
		if k%aheadWindow == 0 {
			cards = parseAhead(lines[k:min(k+aheadWindow, len(lines))])
		}
		if len(x.faults) >= maxFaults || x.overflow {
			return
		}
		if len(x.circuit.Elements) > maxElements {
			x.fault(line.Start(), fmt.Sprintf("the netlist has more than %d elements after expansion", maxElements), "a smaller netlist")
			x.overflow = true
			return
		}
		if cards == nil {
			x.element(lv, line)
		} else {
			x.parsed(lv, line, cards[k%aheadWindow].card, cards[k%aheadWindow].fault)
		}
	}
}

// Cards of a level are parsed on all cores, a window at a time so that a huge file needs no huge memory; fewer than
// aheadFrom are not worth it.
const (
	aheadFrom   = 2000
	aheadWindow = 16 << 10
)

type aheadCard struct {
	card  *syntax.ElementCard
	fault *syntax.Diagnostic
}

// parseAhead parses many cards at once; nil if there are too few to be worth it.
func parseAhead(lines []*syntax.Line) []aheadCard {
	if len(lines) < aheadFrom {
		return nil
	}
	cards := make([]aheadCard, len(lines))
	workers := runtime.GOMAXPROCS(0)
	var group sync.WaitGroup
	for w := range workers {
		group.Add(1)
		go func() {
			defer group.Done()
			for k := len(lines) * w / workers; k < len(lines)*(w+1)/workers; k++ {
				cards[k].card, cards[k].fault = syntax.ParseElement(lines[k])
			}
		}()
	}
	group.Wait()
	return cards
}

// add puts an element into the circuit and returns its number.
func (x *expander) add(lv *level, c *elementCard, nodes []NodeID, d Device, typeName string) ElementID {
	name := lv.prefix + c.shown
	key := strings.ToLower(name)
	if x.names[key] {
		n := 2
		for x.names[fmt.Sprintf("%s#%d", key, n)] {
			n++
		}
		x.remark(RemarkDuplicateName, c.line.Start(), name, fmt.Sprintf("the name %s is used again; this one is called %s#%d here", name, name, n))
		name = fmt.Sprintf("%s#%d", name, n)
		key = strings.ToLower(name)
	} else {
		x.byName[key] = ElementID(len(x.circuit.Elements))
	}
	x.names[key] = true
	id := ElementID(len(x.circuit.Elements))
	for pin, n := range nodes {
		x.circuit.Nodes[n].Terminals = append(x.circuit.Nodes[n].Terminals, Terminal{Element: id, Pin: pin})
	}
	x.circuit.Elements = append(x.circuit.Elements, Element{
		Name: name, At: c.line.Start(), Nodes: nodes, Device: d, TypeName: typeName, Fields: c.fields,
	})
	return id
}

// call expands `X node ... NAME param=value`.
func (x *expander) call(lv *level, c *elementCard) {
	if len(c.words) == 0 {
		x.unknownWords(lv, c, nil, "the call names no subcircuit")
		return
	}
	for k, w := range c.words {
		if k > 0 && strings.HasSuffix(w.Word, ":") { // PARAMS: and its like end the nodes and the name
			c.words = c.words[:k]
			break
		}
	}
	c.words = c.words[:max(1, min(len(c.words), wordsAhead(c.tail)))]
	if n := len(c.words); n > 2 && c.words[n-2].Word == "/" { // a stroke between the nodes and the name
		c.words = append(c.words[:n-2:n-2], c.words[n-1])
	}
	at := len(c.words) - 1
	name := c.words[at].Text()
	if k := c.bracketNode(at); k >= 0 {
		x.fault(c.line.Position(k), "a bracket touches the name of a node", "a blank between them, or a node without brackets")
		return
	}
	var nodes []NodeID
	for _, w := range c.words[:at] {
		nodes = append(nodes, x.node(lv, w.Text()))
	}
	definition, defined := lv.scope.subckt(strings.ToLower(name))
	if x.known(lv, c, name, nodes, definition) {
		return
	}
	if !defined {
		x.add(lv, c, nodes, Unknown{Letter: 'X', Why: "no definition of subcircuit " + name}, name)
		return
	}
	if len(nodes) != len(definition.pins) {
		x.fault(c.line.Start(), c.shown+" has "+counted(len(nodes), "node"), fmt.Sprintf("%d, as subcircuit %s has", len(definition.pins), name))
		return
	}
	if x.calls++; x.calls > maxElements {
		x.fault(c.line.Start(), fmt.Sprintf("the netlist calls more than %d subcircuits", maxElements), "a smaller netlist")
		x.overflow = true
		return
	}
	if lv.depth+1 > maxSubcktDepth {
		x.fault(c.line.Start(), fmt.Sprintf("subcircuits call one another more than %d deep", maxSubcktDepth), "no subcircuit that contains itself")
		x.overflow = true
		return
	}
	if x.multiplied(lv, c, definition) {
		x.add(lv, c, nodes, Unknown{Letter: 'X', Why: "copies in parallel (m=) are not modelled here"}, name)
		return
	}
	given := map[string]float64{}
	for _, a := range c.assigns {
		v, err := lv.env.evaluate(a.value, 0)
		switch {
		case err == nil:
			given[a.name] = v
		case a.value.Atom != nil && !a.value.Atom.IsExpression() && !definition.takes(a.name):
			// What is no number and no parameter of the definition (part numbers, packages) does not concern the circuit.
		case x.unknowable(err):
			x.add(lv, c, nodes, Unknown{Letter: 'X', Why: a.name + " is not known: " + err.Error()}, name)
			return
		default:
			x.fault(c.line.Start(), a.name+": "+err.Error(), "a number")
		}
	}
	inner := &level{
		scope: definition, prefix: lv.prefix + c.shown + ".", ports: map[string]NodeID{}, depth: lv.depth + 1,
		env: newEnvironment(x.environmentOf(definition.parent), definition, given),
	}
	for k, pin := range definition.pins {
		key := strings.ToLower(pin)
		if other, double := inner.ports[key]; double && other != nodes[k] {
			x.fault(c.line.Start(), fmt.Sprintf("%s joins %s and %s", c.shown, x.circuit.Nodes[other].Name, x.circuit.Nodes[nodes[k]].Name),
				fmt.Sprintf("two pins of subcircuit %s, whose pin %s stands twice", definition.name, pin))
			return
		}
		if key == "0" && nodes[k] != Ground {
			x.fault(c.line.Start(), "a pin of subcircuit "+definition.name+" is called 0, which is ground everywhere", "another name, or ground at this place of the call")
			return
		}
		inner.ports[key] = nodes[k]
	}
	x.expand(inner)
}

// wordsAhead counts the words of a call before its first KEY=value: what follows it is no node and no name.
func wordsAhead(items []*syntax.Item) int {
	n := 0
	for _, i := range items {
		switch {
		case i.Group != nil:
			n += len(atoms(i.Group.Items))
		case i.Assign != nil && i.Assign.Value == nil:
			n++
		case i.Assign != nil && n > 0:
			return n
		}
	}
	return n
}

// multiplied reports a call with m= that the definition does not take for a parameter of its own.
func (x *expander) multiplied(lv *level, c *elementCard, definition *scope) bool {
	return !definition.takes("m") && x.copies(lv, c) != 1
}

// takes reports whether a subcircuit has a parameter of a name, lower case.
func (s *scope) takes(name string) bool {
	for _, list := range [][]assignment{s.defaults, s.params} {
		for _, a := range list {
			if a.name == name {
				return true
			}
		}
	}
	return false
}

func (x *expander) unknownWords(lv *level, c *elementCard, words []*syntax.Atom, why string) {
	var nodes []NodeID
	for _, w := range words {
		nodes = append(nodes, x.node(lv, w.Text()))
	}
	x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: why}, "")
}
