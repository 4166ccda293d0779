package netlist

import (
	"cmp"
	"slices"
	"strings"
)

// Neighbour is an element met at a node together with the node at its other end.
type Neighbour struct {
	Element ElementID
	Node    NodeID
}

// Neighbours lists the two-terminal connections that leave a node: for every element there, each other
// node among its current-carrying terminals. Elements come in the order of the netlist. Pins that only
// sense (the control pins of controlled sources and switches) do not connect.
func (c *Circuit) Neighbours(node NodeID) []Neighbour {
	var list []Neighbour
	for _, t := range c.Nodes[node].Terminals {
		e := &c.Elements[t.Element]
		pins := carrying(e)
		if t.Pin >= pins {
			continue
		}
		for pin := range pins {
			n := Neighbour{t.Element, e.Nodes[pin]}
			if pin == t.Pin || n.Node == node || slices.Contains(list[max(0, len(list)-4):], n) {
				continue
			}
			list = append(list, n)
		}
	}
	return list
}

// Between lists the elements that have a current-carrying terminal on each of two nodes, in netlist order.
func (c *Circuit) Between(a, b NodeID) []ElementID {
	var list []ElementID
	for _, n := range c.Neighbours(a) {
		if n.Node == b && !slices.Contains(list, n.Element) {
			list = append(list, n.Element)
		}
	}
	return list
}

// Touching lists the elements with a current-carrying terminal on a node, in netlist order, each once.
func (c *Circuit) Touching(node NodeID) []ElementID {
	var list []ElementID
	for _, t := range c.Nodes[node].Terminals {
		if t.Pin < carrying(&c.Elements[t.Element]) && (len(list) == 0 || list[len(list)-1] != t.Element) {
			list = append(list, t.Element)
		}
	}
	return list
}

// carrying is how many of an element's leading nodes carry current.
func carrying(e *Element) int {
	switch e.Device.(type) {
	case VoltageControlled, Behavioural, CurrentControlled, Switch, VoltageSource, CurrentSource,
		Resistor, Capacitor, Inductor, Diode:
		return min(2, len(e.Nodes))
	}
	return len(e.Nodes)
}

// Find returns the element of a name, upper and lower case aside.
func (c *Circuit) Find(name string) (ElementID, bool) {
	i := slices.IndexFunc(c.Elements, func(e Element) bool { return strings.EqualFold(e.Name, name) })
	return ElementID(i), i >= 0
}

// FindNode returns the node of a name, upper and lower case aside; gnd is the ground.
func (c *Circuit) FindNode(name string) (NodeID, bool) {
	if strings.EqualFold(name, "gnd") {
		return Ground, true
	}
	i := slices.IndexFunc(c.Nodes, func(n Node) bool { return strings.EqualFold(n.Name, name) })
	return NodeID(i), i >= 0
}

// Island is a part of the circuit that hangs together when ground and ideal sources are taken away.
type Island struct {
	Nodes    []NodeID    // in order of their numbers, ground left out
	Elements []ElementID // in netlist order; sources that touch a node of the island are among them
}

// Islands splits the circuit into its islands: two nodes belong together when an element other than an
// ideal voltage source joins them or a coupling ties their inductors. Ground joins nothing. Islands come in
// the order of their first element.
func (c *Circuit) Islands() []Island {
	sets := newSets(len(c.Nodes))
	for i := range c.Elements {
		e := &c.Elements[i]
		switch d := e.Device.(type) {
		case VoltageSource:
			if d.SeriesOhms == 0 {
				continue
			}
		case Coupling:
			for _, l := range d.Inductors[1:] {
				c.joinNodes(sets, append(slices.Clone(c.Elements[d.Inductors[0]].Nodes), c.Elements[l].Nodes...))
			}
			continue
		}
		// A sensing pin ties the islands together as well: neither can be solved alone.
		c.joinNodes(sets, e.Nodes)
		if d, ok := e.Device.(CurrentControlled); ok {
			c.joinNodes(sets, append(slices.Clone(e.Nodes), c.Elements[d.Control].Nodes...))
		}
	}
	return c.gatherIslands(sets)
}

func (c *Circuit) joinNodes(sets disjointSets, nodes []NodeID) {
	last := Ground
	for _, n := range nodes {
		if n == Ground {
			continue
		}
		if last != Ground {
			sets.join(int(last), int(n))
		}
		last = n
	}
}

func (c *Circuit) gatherIslands(sets disjointSets) []Island {
	index := make(map[int]int)
	var islands []Island
	for i := range c.Elements {
		for _, n := range c.Elements[i].Nodes {
			if n == Ground {
				continue
			}
			root := sets.find(int(n))
			at, ok := index[root]
			if !ok {
				at = len(islands)
				index[root] = at
				islands = append(islands, Island{})
			}
			if last := islands[at].Elements; len(last) == 0 || last[len(last)-1] != ElementID(i) {
				islands[at].Elements = append(islands[at].Elements, ElementID(i))
			}
		}
	}
	for n := range c.Nodes {
		if at, ok := index[sets.find(n)]; ok && NodeID(n) != Ground {
			islands[at].Nodes = append(islands[at].Nodes, NodeID(n))
		}
	}
	return islands
}

// Path is a way through the circuit: Nodes has one entry more than Elements.
type Path struct {
	Nodes    []NodeID
	Elements []ElementID
}

// maxPaths bounds the number of paths that Paths returns.
const maxPaths = 256

// Paths lists the simple ways from one node to another that run only through elements for which through
// says yes, and through ground only where it is an end; shorter ones first, then in netlist order. At
// most 256 are returned.
func (c *Circuit) Paths(from, to NodeID, through func(ElementID) bool) []Path {
	var found []Path
	queue := []Path{{Nodes: []NodeID{from}}}
	for steps := 0; len(queue) > 0 && len(found) < maxPaths && steps < 64*maxPaths; steps++ {
		p := queue[0]
		queue = queue[1:]
		end := p.Nodes[len(p.Nodes)-1]
		if end == to && len(p.Elements) > 0 {
			found = append(found, p)
			continue
		}
		if end == Ground && len(p.Elements) > 0 {
			continue
		}
		for _, n := range c.Neighbours(end) {
			if !through(n.Element) || (n.Node != to && slices.Contains(p.Nodes, n.Node)) {
				continue
			}
			queue = append(queue, Path{append(slices.Clone(p.Nodes), n.Node), append(slices.Clone(p.Elements), n.Element)})
		}
	}
	return found
}

// Reach is the set of nodes that can be reached from the given ones through elements for which through
// says yes, in rising order; it includes the start and stops at ground.
func (c *Circuit) Reach(from []NodeID, through func(ElementID) bool) []NodeID {
	var list []NodeID
	c.reach(from, func(_ NodeID, n Neighbour) bool { return through(n.Element) }, func(n NodeID) bool {
		list = append(list, n)
		return true
	})
	slices.SortFunc(list, cmp.Compare[NodeID])
	return list
}

// reach goes on from the given nodes, nearest first, by the steps that through allows and not on from ground; it
// ends when visit says no.
func (c *Circuit) reach(from []NodeID, through func(at NodeID, next Neighbour) bool, visit func(NodeID) bool) {
	seen := make(map[NodeID]bool)
	queue := slices.Clone(from)
	for len(queue) > 0 {
		n := queue[0]
		queue = queue[1:]
		if seen[n] {
			continue
		}
		seen[n] = true
		if !visit(n) {
			return
		}
		if n == Ground && !slices.Contains(from, Ground) {
			continue
		}
		for _, next := range c.Neighbours(n) {
			if !seen[next.Node] && through(n, next) {
				queue = append(queue, next.Node)
			}
		}
	}
}

// disjointSets is a union-find forest.
type disjointSets []int

func newSets(n int) disjointSets {
	s := make(disjointSets, n)
	for i := range s {
		s[i] = i
	}
	return s
}

func (s disjointSets) find(i int) int {
	for s[i] != i {
		s[i] = s[s[i]]
		i = s[i]
	}
	return i
}

func (s disjointSets) join(a, b int) {
	a, b = s.find(a), s.find(b)
	s[max(a, b)] = min(a, b)
}
