package netlist

import "fmt"

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
		if !d.Adjustable && reference != Ground {
			switch Ground {
			case in:
				in, reference, moved = reference, in, true
			case out:
				out, reference, moved = reference, out, true
			}
		}
		if !c.fed(in, id) && c.fed(out, id) {
			in, out, moved = out, in, true
		} else if d.Adjustable && !c.fed(in, id) && c.fed(reference, id) {
			// Written with the adjust pin first, as the case has it: adjust, out, in or adjust, in, out.
			in, reference, moved = reference, in, true
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
