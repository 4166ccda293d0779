package netlist

import (
	"fmt"
	"slices"
)

// inferShuntPins puts the pins of an adjustable shunt reference into the order that the circuit shows: the reference
// is the pin that hangs on a divider, reached from no source without passing the two others, and of those the cathode
// is the more positive one. Where the circuit does not tell, the customary order stays.
func (c *Circuit) inferShuntPins(id ElementID) {
	e := &c.Elements[id]
	cathode, reference, anode, ok := c.shuntPins(id, e.Nodes)
	placed := []NodeID{cathode, reference, anode}
	if !ok || slices.Equal(placed, e.Nodes) {
		return
	}
	c.setNodes(id, placed)
	c.dropRemark(e.Name, pinsTaken)
	c.Remarks = append(c.Remarks, Remark{Kind: RemarkAssumption, At: e.At, Element: e.Name, Text: fmt.Sprintf(
		"its pins are inferred from the circuit: cathode %s, reference %s, anode %s; state them with part %s ... pins=",
		c.Nodes[cathode].Name, c.Nodes[reference].Name, c.Nodes[anode].Name, e.Name)})
}

func (c *Circuit) shuntPins(id ElementID, nodes []NodeID) (cathode, reference, anode NodeID, ok bool) {
	for k := range nodes {
		a, b := nodes[(k+1)%3], nodes[(k+2)%3]
		if a == b && a != nodes[k] { // the reference tied to the cathode, never to the anode
			return a, a, nodes[k], true
		}
	}
	at := -1
	var feeds [3]feed
	for k, n := range nodes {
		feeds[k] = c.feed(n, id, nodes...)
		if n != Ground && !feeds[k].found {
			if at >= 0 {
				return 0, 0, 0, false
			}
			at = k
		}
	}
	if at < 0 {
		return 0, 0, 0, false
	}
	a, b := (at+1)%3, (at+2)%3
	if nodes[a] != Ground {
		a, b = b, a
	}
	if nodes[a] != Ground || feeds[b].sign == 0 {
		return 0, 0, 0, false
	}
	if feeds[b].sign > 0 {
		return nodes[b], nodes[at], nodes[a], true
	}
	return nodes[a], nodes[at], nodes[b], true
}
