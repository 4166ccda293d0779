package netlist

import (
	"fmt"
	"slices"
	"strings"
)

// Fact is something the structure of the circuit shows before anything is solved.
type Fact struct {
	Check   string // polarity, floating-node, no-dc-path, shorted-element, source-loop, unconnected-terminal
	Element string // full path, or "node:NAME"
	At      Position
	Text    string // one sentence
	Remedy  string // the smallest change, one line; may be empty
}

// Structure gathers all facts about the circuit, check by check, each in netlist order. d may be nil.
func (c *Circuit) Structure(d *Duty) []Fact {
	return slices.Concat(c.PolarityFacts(d), c.FloatingNodes(), c.NodesWithoutDCPath(), c.ShortedElements(),
		c.SourceLoops(), c.UnconnectedTerminals())
}

// factAbout is a fact about an element.
func (c *Circuit) factAbout(check string, id ElementID, text, remedy string) Fact {
	return Fact{Check: check, Element: c.Elements[id].Name, At: c.Elements[id].At, Text: text, Remedy: remedy}
}

// factAtNode is a fact about a node; its place is that of the first element there.
func (c *Circuit) factAtNode(check string, node NodeID, text, remedy string) Fact {
	f := Fact{Check: check, Element: "node:" + c.Nodes[node].Name, Text: text, Remedy: remedy}
	if t := c.Nodes[node].Terminals; len(t) > 0 {
		f.At = c.Elements[t[0].Element].At
	}
	return f
}

// Unconnected reports whether a node is a name for "not connected": exporters write ? or NC_01 there.
func (n Node) Unconnected() bool {
	name := strings.ToUpper(n.Name[strings.LastIndexByte(n.Name, '.')+1:])
	return strings.HasPrefix(name, "?") || strings.HasPrefix(name, "NC_") || name == "NC" || strings.HasPrefix(name, "UNCONNECTED-")
}

// FloatingNodes finds the parts of the circuit that nothing ties to ground, not even a capacitor: their
// voltages to ground are arbitrary. One fact a part. Without a ground in the circuit there are none.
func (c *Circuit) FloatingNodes() []Fact {
	if !c.HasGround {
		return nil
	}
	sets := newSets(len(c.Nodes))
	for i := range c.Elements {
		c.tie(sets, c.Elements[i].Nodes[:carrying(&c.Elements[i])])
	}
	var facts []Fact
	for _, nodes := range c.apart(sets) {
		facts = append(facts, c.factAtNode("floating-node", nodes[0],
			"nothing ties "+c.nodeList(nodes)+" to ground: the voltage to ground is arbitrary", "connect its return to node 0"))
	}
	return facts
}

// NodesWithoutDCPath finds nodes that only capacitors, current sources and control pins tie to ground, so
// that no direct voltage is defined there. One fact for nodes that hang together.
func (c *Circuit) NodesWithoutDCPath() []Fact {
	if !c.HasGround {
		return nil
	}
	direct, any := newSets(len(c.Nodes)), newSets(len(c.Nodes))
	for i := range c.Elements {
		e := &c.Elements[i]
		all := e.Nodes[:carrying(e)]
		c.tie(any, all)
		switch d := e.Device.(type) {
		case Capacitor, CurrentSource:
			continue
		case VoltageControlled:
			if d.Output == OutCurrent {
				continue
			}
		case CurrentControlled:
			if d.Output == OutCurrent {
				continue
			}
		case Behavioural:
			if d.Output == OutCurrent {
				continue
			}
		case Fet:
			if len(e.Nodes) >= 3 {
				all = append([]NodeID{e.Nodes[0]}, e.Nodes[2:]...) // the gate carries no direct current
			}
		}
		c.tie(direct, all)
	}
	ground := any.find(int(Ground))
	var facts []Fact
	for _, nodes := range c.apart(direct) {
		if any.find(int(nodes[0])) != ground {
			continue // floating altogether
		}
		if slices.ContainsFunc(nodes, func(n NodeID) bool {
			return c.Nodes[n].Unconnected() || len(c.Nodes[n].Terminals) < 2 && len(nodes) == 1
		}) {
			continue
		}
		facts = append(facts, c.factAtNode("no-dc-path", nodes[0],
			"no direct current can flow between "+c.nodeList(nodes)+" and ground", "a resistor from there to ground, as leakage or bleeder"))
	}
	return facts
}

// tie joins all nodes of a list.
func (c *Circuit) tie(sets disjointSets, nodes []NodeID) {
	for k := 1; k < len(nodes); k++ {
		sets.join(int(nodes[0]), int(nodes[k]))
	}
}

// apart lists the sets of nodes that do not hold ground, by their lowest node; nodes without a terminal
// are left out.
func (c *Circuit) apart(sets disjointSets) [][]NodeID {
	index := make(map[int]int)
	var list [][]NodeID
	for n := range c.Nodes {
		root := sets.find(n)
		if root == sets.find(int(Ground)) || len(c.Nodes[n].Terminals) == 0 {
			continue
		}
		at, ok := index[root]
		if !ok {
			at = len(list)
			index[root] = at
			list = append(list, nil)
		}
		list[at] = append(list[at], NodeID(n))
	}
	return list
}

// nodeList names up to four nodes.
func (c *Circuit) nodeList(nodes []NodeID) string {
	var names []string
	for _, n := range nodes[:min(4, len(nodes))] {
		names = append(names, c.Nodes[n].Name)
	}
	text := "node " + names[0]
	if len(nodes) > 1 {
		text = "nodes " + strings.Join(names, ", ")
	}
	if more := len(nodes) - len(names); more > 0 {
		text += fmt.Sprintf(" and %d more", more)
	}
	return text
}

// ShortedElements finds elements whose ends lie on one node.
func (c *Circuit) ShortedElements() []Fact {
	var facts []Fact
	for i := range c.Elements {
		e := &c.Elements[i]
		first, second := 0, 1
		switch e.Device.(type) {
		case Coupling, Unknown:
			continue
		case Regulator, Transistor, Fet:
			second = 2 // input and output, collector and emitter, drain and source
		}
		if second < len(e.Nodes) && e.Nodes[first] == e.Nodes[second] {
			facts = append(facts, c.factAbout("shorted-element", ElementID(i),
				fmt.Sprintf("the %s and the %s of %s are both on node %s", pinName(e, first), pinName(e, second), e.Name, c.Nodes[e.Nodes[first]].Name),
				"check its nodes"))
		}
	}
	return facts
}

// SourceLoops finds ideal voltage sources that close a loop of such sources: their currents have no
// solution, or infinitely many. The fact is about the last source of the loop.
func (c *Circuit) SourceLoops() []Fact {
	sets := newSets(len(c.Nodes))
	ideal := make([]bool, len(c.Elements))
	var facts []Fact
	for i := range c.Elements {
		e := &c.Elements[i]
		switch d := e.Device.(type) {
		case VoltageSource:
			ideal[i] = d.SeriesOhms == 0
		case VoltageControlled:
			ideal[i] = d.Output == OutVoltage
		case CurrentControlled:
			ideal[i] = d.Output == OutVoltage
		case Behavioural:
			ideal[i] = d.Output == OutVoltage
		}
		if !ideal[i] || e.Nodes[0] == e.Nodes[1] {
			continue
		}
		a, b := int(e.Nodes[0]), int(e.Nodes[1])
		if sets.find(a) != sets.find(b) {
			sets.join(a, b)
			continue
		}
		ideal[i] = false
		text := e.Name + " closes a loop of ideal voltage sources"
		if paths := c.sourcePaths(e.Nodes[0], e.Nodes[1], ideal); len(paths) > 0 {
			var names []string
			for _, id := range paths[0].Elements {
				names = append(names, c.Elements[id].Name)
			}
			text += " with " + strings.Join(names, ", ")
		}
		facts = append(facts, c.factAbout("source-loop", ElementID(i), text, "a resistance in series with "+e.Name))
	}
	return facts
}

// sourcePaths finds a way between two nodes through ideal sources, through ground as well.
func (c *Circuit) sourcePaths(from, to NodeID, ideal []bool) []Path {
	through := func(id ElementID) bool { return ideal[id] }
	if paths := c.Paths(from, to, through); len(paths) > 0 || from == Ground || to == Ground {
		return paths
	}
	one, two := c.Paths(from, Ground, through), c.Paths(Ground, to, through)
	if len(one) == 0 || len(two) == 0 {
		return nil
	}
	return []Path{{Elements: append(one[0].Elements, two[0].Elements...)}}
}

// UnconnectedTerminals finds terminals that meet nothing else. Nodes named ? or NC_... are meant so.
func (c *Circuit) UnconnectedTerminals() []Fact {
	var facts []Fact
	for i := range c.Elements {
		e := &c.Elements[i]
		for pin, n := range e.Nodes {
			if len(c.Nodes[n].Terminals) != 1 || n == Ground || c.Nodes[n].Unconnected() {
				continue
			}
			facts = append(facts, c.factAbout("unconnected-terminal", ElementID(i),
				fmt.Sprintf("the %s of %s is alone on node %s", pinName(e, pin), e.Name, c.Nodes[n].Name),
				"check the spelling of the node, or name it NC_1 if it is meant so"))
		}
	}
	return facts
}

// pinName is the trade's word for a pin of an element.
func pinName(e *Element, pin int) string {
	var names []string
	switch d := e.Device.(type) {
	case Diode:
		names = []string{"anode", "cathode"}
	case Capacitor, VoltageSource:
		names = []string{"plus", "minus"}
	case Transistor:
		names = []string{"collector", "base", "emitter", "substrate"}
	case Fet:
		names = []string{"drain", "gate", "source", "bulk"}
	case Regulator:
		names = []string{"input", "reference pin", "output"}
		if d.Shunt {
			names = []string{"cathode", "reference pin", "anode"}
		}
	}
	if pin < len(names) {
		return names[pin]
	}
	return fmt.Sprintf("terminal %d", pin+1)
}
