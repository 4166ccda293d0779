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

// node finds or makes the node of a name at a level.
func (x *expander) node(lv *level, name string) NodeID {
	if isGroundName(name) {
		x.circuit.HasGround = true
		return Ground
	}
	key := strings.ToLower(name)
	if id, ok := lv.ports[key]; ok {
		return id
	}
	full := name
	if lv.prefix != "" && !x.globals[key] {
		key, full = strings.ToLower(lv.prefix)+key, lv.prefix+name
	}
	if name == "?" {
		x.open++
		key = fmt.Sprintf("?%d", x.open)
		full = key
	}
	if id, ok := x.nodes[key]; ok {
		return id
	}
	id := NodeID(len(x.circuit.Nodes))
	x.nodes[key] = id
	x.circuit.Nodes = append(x.circuit.Nodes, Node{Name: full})
	return id
}

// expand adds the elements of a level.
func (x *expander) expand(lv *level) {
	cards := parseAhead(lv.scope.elements)
	for k, line := range lv.scope.elements {
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
			x.parsed(lv, line, cards[k].card, cards[k].fault)
		}
	}
}

// aheadFrom is how many cards a level must have to be parsed on all cores before it is expanded.
const aheadFrom = 2000

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
		x.fault(c.line.Start(), fmt.Sprintf("%s has %d nodes", c.shown, len(nodes)), fmt.Sprintf("%d, as subcircuit %s has", len(definition.pins), name))
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
		if err != nil {
			// Parameters that are no numbers (part numbers, packages) do not concern the circuit.
			if a.value.Atom != nil && !a.value.Atom.IsExpression() {
				continue
			}
			x.fault(c.line.Start(), a.name+": "+err.Error(), "a number")
			continue
		}
		given[a.name] = v
	}
	inner := &level{
		scope: definition, prefix: lv.prefix + c.shown + ".", ports: map[string]NodeID{}, depth: lv.depth + 1,
		env: newEnvironment(x.environmentOf(definition.parent), definition, given),
	}
	for k, pin := range definition.pins {
		inner.ports[strings.ToLower(pin)] = nodes[k]
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
	for _, a := range definition.defaults {
		if a.name == "m" {
			return false
		}
	}
	for _, a := range definition.params {
		if a.name == "m" {
			return false
		}
	}
	return x.copies(lv, c) != 1
}

func (x *expander) unknownWords(lv *level, c *elementCard, words []*syntax.Atom, why string) {
	var nodes []NodeID
	for _, w := range words {
		nodes = append(nodes, x.node(lv, w.Text()))
	}
	x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: why}, "")
}
