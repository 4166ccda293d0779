package netlist

import (
	"fmt"
	"slices"
	"strings"
)

// inferPins puts the pins of regulators whose order nothing states into the order that ground and the circuit
// around them show, where the customary order contradicts it: the reference of a fixed type is the pin on
// ground, and the input is the pin that a rectifier or source feeds.
func (c *Circuit) inferPins() {
	for k := range c.Elements {
		id, e := ElementID(k), &c.Elements[k]
		d, ok := e.Device.(Regulator)
		if !ok || !d.PinsAssumed || len(e.Nodes) != 3 {
			continue
		}
		if d.Shunt {
			c.inferShuntPins(id)
			continue
		}
		in, reference, out := e.Nodes[0], e.Nodes[1], e.Nodes[2]
		moved := false
		if d.Adjustable {
			in, reference, out, moved = c.adjustablePins(id, e.Nodes)
		} else if reference != Ground {
			switch Ground {
			case in:
				in, reference, moved = reference, in, true
			case out:
				out, reference, moved = reference, out, true
			}
		}
		if !d.Adjustable && !c.fed(in, id) && c.fed(out, id) {
			in, out, moved = out, in, true
		}
		if !moved {
			continue
		}
		c.setNodes(id, []NodeID{in, reference, out})
		c.dropRemark(e.Name, pinsTaken)
		c.Remarks = append(c.Remarks, Remark{Kind: RemarkAssumption, At: e.At, Element: e.Name, Text: fmt.Sprintf(
			"its pins are inferred from the circuit: in %s, reference %s, out %s; state them with part %s ... pins=",
			c.Nodes[in].Name, c.Nodes[reference].Name, c.Nodes[out].Name, e.Name)})
	}
}

// adjustablePins finds the input as the one pin that is fed. Of the two others the output is the one that its name or
// what hangs on it shows; else the adjust pin stands first, as in every customary order.
func (c *Circuit) adjustablePins(id ElementID, nodes []NodeID) (in, reference, out NodeID, moved bool) {
	at := -1
	for k, n := range nodes {
		if c.fed(n, id) && (at < 0 || at > 0 && k == 2) {
			at = k
		}
	}
	if at <= 0 { // the customary order
		return nodes[0], nodes[1], nodes[2], false
	}
	rest := slices.Delete(slices.Clone(nodes), at, at+1)
	if c.looksLikeOutput(rest[0], id) && !c.looksLikeOutput(rest[1], id) {
		slices.Reverse(rest)
	}
	return nodes[at], rest[0], rest[1], true
}

// looksLikeOutput reports a pin whose name says output, or on which more hangs than the divider of an adjust pin.
func (c *Circuit) looksLikeOutput(n NodeID, regulator ElementID) bool {
	name := strings.ToLower(c.Nodes[n].Name)
	switch {
	case strings.Contains(name, "adj"):
		return false
	case strings.Contains(name, "out"):
		return true
	}
	for _, t := range c.Nodes[n].Terminals {
		e := &c.Elements[t.Element]
		switch e.Device.(type) {
		case Transistor, Fet, Switch: // on the adjust pin they shut it down
		case Resistor, Capacitor, Diode:
			for _, m := range e.Nodes {
				if _, resistor := e.Device.(Resistor); resistor && m != Ground && !slices.Contains(c.Elements[regulator].Nodes, m) {
					return true
				}
			}
		default:
			if t.Element != regulator {
				return true
			}
		}
	}
	return false
}

// across reports whether two nodes are both pins of the regulator.
func (c *Circuit) across(nodes []NodeID, regulator ElementID) bool {
	pins := c.Elements[regulator].Nodes
	return slices.Contains(pins, nodes[0]) && slices.Contains(pins, nodes[1]) && nodes[0] != Ground && nodes[1] != Ground
}

// fed reports whether a node is reached from a rectifier or a source without passing the regulator itself, ground
// or another regulator.
func (c *Circuit) fed(start NodeID, regulator ElementID) bool { return c.feed(start, regulator).found }

// feed is a rectifier or source that reaches a node, and whether it makes it positive or negative; sign is 0 where it
// does not tell.
type feed struct {
	found bool
	sign  Polarity
}

// feed looks for what feeds a node without passing the regulator, ground, another regulator or one of the stops.
func (c *Circuit) feed(start NodeID, regulator ElementID, stops ...NodeID) feed {
	if start == Ground {
		return feed{}
	}
	seen := map[NodeID]bool{Ground: true}
	for _, n := range stops {
		seen[n] = true
	}
	seen[start] = true
	queue := []NodeID{start}
	for len(queue) > 0 {
		n := queue[0]
		queue = queue[1:]
		for _, t := range c.Nodes[n].Terminals {
			if t.Element == regulator {
				continue
			}
			e := &c.Elements[t.Element]
			switch d := e.Device.(type) {
			case Diode:
				if c.across(e.Nodes, regulator) {
					continue // it protects the regulator
				}
				if !c.IsZener(t.Element) {
					return feed{true, signOf(t.Pin == 1)}
				}
			case VoltageSource:
				w, constant := d.Wave.(Constant)
				switch {
				case !constant:
					return feed{found: true}
				case w.Level != 0:
					return feed{true, signOf((t.Pin == 0) == (w.Level > 0))}
				}
			case VoltageControlled, CurrentControlled, Transistor, Fet, Switch:
				return feed{found: true}
			case Regulator:
				if !d.Shunt && len(e.Nodes) == 3 && e.Nodes[2] == n {
					return feed{true, d.Polarity}
				}
				continue
			case Resistor, Inductor:
			default:
				continue
			}
			for _, m := range e.Nodes {
				if !seen[m] {
					seen[m] = true
					queue = append(queue, m)
				}
			}
		}
	}
	return feed{}
}

func signOf(positive bool) Polarity {
	if positive {
		return Positive
	}
	return Negative
}
