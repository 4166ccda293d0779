package netlist

import (
	"slices"
	"strings"
)

// adoptPart takes an element for a row of the parts table, as `part ELEMENT TYPE pins=...` says: a diode
// becomes a zener or a rectifier, a call of an undefined type becomes the regulator or diode it names, and
// the nodes of a regulator are put in the order that pins= states. why is not empty when that is not possible.
func (c *Circuit) adoptPart(id ElementID, typeName string, stated []string) (why string) {
	var part KnownPart
	known := false
	if c.Library != nil {
		part, known = c.Library.Named(typeName)
	}
	pins := pinsOf(stated)
	e := &c.Elements[id]
	switch d := e.Device.(type) {
	case Diode:
		if known {
			c.setZener(id, part.Role == RoleZener)
		}
		if len(pins) == 2 && pins[0] == PinCathode {
			c.setNodes(id, []NodeID{e.Nodes[1], e.Nodes[0]})
		}
	case Regulator:
		if known {
			d.takeRole(part)
		}
		return c.placeRegulator(id, d, d.Written, pins)
	case Transistor:
		if pins != nil {
			return c.placeTransistor(id, pins)
		}
	case Unknown:
		return c.adoptUnknown(id, part, pins)
	}
	return ""
}

// placeTransistor puts the nodes of a bipolar transistor, written in the order of pins, into the order of the device.
func (c *Circuit) placeTransistor(id ElementID, pins []Pin) (why string) {
	nodes := c.Elements[id].Nodes
	if len(nodes) != 3 {
		return "a transistor has three nodes"
	}
	ordered, ok := orderPins(nodes, pins, RoleTransistor)
	if !ok {
		return "its pins do not name collector, base and emitter"
	}
	c.setNodes(id, ordered)
	c.dropRemark(c.Elements[id].Name, transistorPinsTaken)
	return ""
}

// transistorPinsTaken begins the remark of a reader that had to assume the order of a transistor's nodes.
const transistorPinsTaken = "its nodes are taken as collector, base, emitter"

// adoptUnknown gives a law to a call of an undefined type.
func (c *Circuit) adoptUnknown(id ElementID, part KnownPart, pins []Pin) (why string) {
	e := &c.Elements[id]
	assumed := pins == nil
	if assumed {
		pins = part.Pins
	}
	switch {
	case part.Role == RoleRectifier || part.Role == RoleZener || slices.Contains(pins, PinAnode) && len(pins) == 2:
		if len(e.Nodes) != 2 {
			return "a diode has two nodes"
		}
		e.Device = Diode{Area: 1}
		c.setZener(id, part.Role == RoleZener)
		if len(pins) == 2 && pins[0] == PinCathode {
			c.setNodes(id, []NodeID{e.Nodes[1], e.Nodes[0]})
		}
	case part.Role == RoleTransistor || slices.Contains(pins, PinBase):
		if part.Role != RoleTransistor || part.Polarity == 0 {
			return "the table has no law for it"
		}
		if pins == nil {
			pins = part.Pins
		}
		if why := c.placeTransistor(id, pins); why != "" {
			return why
		}
		e.Device = Transistor{Area: 1}
		if assumed {
			c.Remarks = append(c.Remarks, Remark{Kind: RemarkAssumption, At: e.At, Element: e.Name, Text: transistorPinsTaken})
		}
	case part.Role == RoleRegulator || part.Role == RoleAdjustable || part.Role == RoleShunt || slices.Contains(pins, PinIn):
		d := Regulator{Polarity: Positive, PinsAssumed: true}
		d.takeRole(part)
		why := c.placeRegulator(id, d, slices.Clone(e.Nodes), pins)
		if placed, ok := e.Device.(Regulator); ok && assumed {
			placed.PinsAssumed = true
			e.Device = placed
		}
		return why
	}
	return ""
}

func (d *Regulator) takeRole(part KnownPart) {
	d.Adjustable, d.Shunt = part.Role == RoleAdjustable, part.Role == RoleShunt
	if part.Polarity != 0 {
		d.Polarity = part.Polarity
	}
}

// placeRegulator puts the nodes of a regulator, written in the order of pins, into the order of the device.
// Without pins they stay as they are.
func (c *Circuit) placeRegulator(id ElementID, d Regulator, written []NodeID, pins []Pin) (why string) {
	if len(written) == 0 {
		written = slices.Clone(c.Elements[id].Nodes)
	}
	if len(written) != 3 {
		return "a three-terminal regulator has three nodes"
	}
	d.Written = written
	if pins != nil {
		role := RoleRegulator
		if d.Shunt {
			role = RoleShunt
		}
		ordered, ok := orderPins(written, pins, role)
		if !ok {
			return "its pins do not name input, reference and output"
		}
		c.setNodes(id, ordered)
		d.PinsAssumed = false
		c.dropRemark(c.Elements[id].Name, pinsTaken)
	}
	c.Elements[id].Device = d
	return ""
}

// pinsTaken begins the remark of a reader that had to assume the order of an element's pins.
const pinsTaken = "its pins are taken in the customary order"

// dropRemark removes an assumption about an element that a statement has settled.
func (c *Circuit) dropRemark(element, beginning string) {
	c.Remarks = slices.DeleteFunc(c.Remarks, func(r Remark) bool {
		return r.Kind == RemarkAssumption && r.Element == element && strings.HasPrefix(r.Text, beginning)
	})
}

// adoptRegulator takes a call of an undefined type with three nodes for a three-terminal regulator, in
// the customary order in, gnd (or adjust), out; of a regulator it settles the polarity.
func (c *Circuit) adoptRegulator(id ElementID, adjustable, negative bool) {
	polarity := Positive
	if negative {
		polarity = Negative
	}
	e := &c.Elements[id]
	switch d := e.Device.(type) {
	case Unknown:
		if len(e.Nodes) == 3 {
			e.Device = Regulator{Polarity: polarity, Adjustable: adjustable, PinsAssumed: true, Written: slices.Clone(e.Nodes)}
		}
	case Regulator:
		if negative {
			d.Polarity = Negative
			e.Device = d
		}
	}
}

// setNodes puts an element on other nodes, and its terminals with them.
func (c *Circuit) setNodes(id ElementID, nodes []NodeID) {
	e := &c.Elements[id]
	for _, n := range e.Nodes {
		c.Nodes[n].Terminals = slices.DeleteFunc(c.Nodes[n].Terminals, func(t Terminal) bool { return t.Element == id })
	}
	e.Nodes = nodes
	for pin, n := range nodes {
		list := c.Nodes[n].Terminals
		at := slices.IndexFunc(list, func(t Terminal) bool { return t.Element > id })
		if at < 0 {
			at = len(list)
		}
		c.Nodes[n].Terminals = slices.Insert(list, at, Terminal{id, pin})
	}
}

// pinsOf turns the words of pins= into pins; nil when none are stated.
func pinsOf(stated []string) []Pin {
	var pins []Pin
	for _, word := range stated {
		pins = append(pins, dutyPins[slices.IndexFunc(dutyPins, func(p dutyPin) bool { return p.word == word })].pin)
	}
	return pins
}

// dutyPin is a word that pins= takes.
type dutyPin struct {
	word string
	pin  Pin
}

// dutyPins in the order of the reference.
var dutyPins = []dutyPin{
	{"in", PinIn}, {"gnd", PinReference}, {"out", PinOut}, {"adj", PinReference}, {"ref", PinReference},
	{"k", PinCathode}, {"a", PinAnode}, {"cathode", PinCathode}, {"anode", PinAnode},
	{"c", PinCollector}, {"b", PinBase}, {"e", PinEmitter},
}

func dutyPinWords() []string {
	var words []string
	for _, p := range dutyPins {
		words = append(words, p.word)
	}
	return words
}
