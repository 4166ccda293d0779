package netlist

import (
	"fmt"
	"strings"
)

// known puts a call of a part that the library knows into the circuit whole, and reports whether it did.
func (x *expander) known(lv *level, c *elementCard, name string, nodes []NodeID, definition *scope) bool {
	if x.library == nil {
		return false
	}
	part, ok := x.library.Recognise(name)
	if !ok {
		return false
	}
	full := lv.prefix + c.shown
	macromodel := definition != nil
	assume := func(text string) { x.remark(RemarkAssumption, c.line.Start(), full, text) }
	switch part.Role {
	case RoleRegulator, RoleAdjustable, RoleShunt:
		if len(nodes) != 3 {
			return false
		}
		r := Regulator{
			Polarity: part.Polarity, Adjustable: part.Role == RoleAdjustable, Shunt: part.Role == RoleShunt,
			Macromodel: macromodel, Written: nodes,
		}
		if r.Polarity == 0 {
			r.Polarity = Positive
		}
		pins := part.Pins
		if named := pinsByName(definition, part.Role); named != nil {
			pins = named
		} else {
			r.PinsAssumed = true
			assume("its pins are taken in the customary order: " + orderWords(pins))
		}
		ordered, ok := orderPins(nodes, pins, part.Role)
		if !ok {
			return false
		}
		if macromodel {
			assume("the law of a " + part.Type + " stands in for the subcircuit that the netlist carries for it")
		}
		x.add(lv, c, ordered, r, name)
		return true
	case RoleRectifier, RoleZener:
		if len(nodes) != 2 {
			return false
		}
		anode, cathode := nodes[0], nodes[1]
		if a, k, ok := diodePins(definition); ok {
			anode, cathode = nodes[a], nodes[k]
		} else {
			assume("its first node is taken as the anode")
		}
		if macromodel {
			assume("the law of a " + part.Type + " stands in for the subcircuit that the netlist carries for it")
		}
		x.add(lv, c, []NodeID{anode, cathode}, Diode{Area: 1}, name)
		return true
	case RoleBridge:
		if len(nodes) != 4 {
			return false
		}
		ac1, ac2, plus, minus := nodes[0], nodes[1], nodes[2], nodes[3]
		if order := bridgePins(definition); order != nil {
			ac1, ac2, plus, minus = nodes[order[0]], nodes[order[1]], nodes[order[2]], nodes[order[3]]
		} else {
			assume("its pins are taken as AC AC + -")
		}
		if macromodel {
			assume("four diodes stand in for the subcircuit that the netlist carries for a " + part.Type)
		}
		for k, d := range [][2]NodeID{{ac1, plus}, {ac2, plus}, {minus, ac1}, {minus, ac2}} {
			leg := *c
			leg.shown = fmt.Sprintf("%s.D%d", c.shown, k+1)
			x.add(lv, &leg, []NodeID{d[0], d[1]}, Diode{Area: 1}, name)
		}
		return true
	case RoleTransistor:
		if len(nodes) != 3 || macromodel || part.Polarity == 0 {
			return false // what the netlist carries for it is solved as it is
		}
		assume(transistorPinsTaken + "; state others with part " + full + " ... pins=")
		x.add(lv, c, nodes, Transistor{Area: 1}, name)
		return true
	}
	return false
}

// pinsByName reads the roles of a subcircuit's pins off their names, nil if they do not tell.
func pinsByName(definition *scope, role Role) []Pin {
	if definition == nil || len(definition.pins) != 3 {
		return nil
	}
	var pins []Pin
	seen := map[Pin]bool{}
	for _, p := range definition.pins {
		pin, ok := pinNames[strings.ToLower(p)]
		if role == RoleShunt {
			pin, ok = shuntPinNames[strings.ToLower(p)]
		}
		if !ok || seen[pin] {
			return nil
		}
		seen[pin] = true
		pins = append(pins, pin)
	}
	return pins
}

var pinNames = map[string]Pin{
	"in": PinIn, "vin": PinIn, "input": PinIn, "i": PinIn, "vi": PinIn,
	"gnd": PinReference, "ground": PinReference, "adj": PinReference, "com": PinReference, "common": PinReference, "g": PinReference, "adjust": PinReference, "0": PinReference,
	"out": PinOut, "vout": PinOut, "output": PinOut, "o": PinOut, "vo": PinOut,
}

var shuntPinNames = map[string]Pin{
	"k": PinCathode, "c": PinCathode, "cat": PinCathode, "cathode": PinCathode,
	"r": PinReference, "ref": PinReference, "fb": PinReference,
	"a": PinAnode, "ano": PinAnode, "anode": PinAnode,
}

// orderPins puts nodes written in the order of pins into the order of the device of a role, a regulator or transistor.
func orderPins(nodes []NodeID, pins []Pin, role Role) ([]NodeID, bool) {
	want := []Pin{PinIn, PinReference, PinOut}
	switch role {
	case RoleShunt:
		want = []Pin{PinCathode, PinReference, PinAnode}
	case RoleTransistor:
		want = []Pin{PinCollector, PinBase, PinEmitter}
	}
	var ordered []NodeID
	for _, w := range want {
		for k, p := range pins {
			if p == w && k < len(nodes) {
				ordered = append(ordered, nodes[k])
			}
		}
	}
	return ordered, len(ordered) == 3
}

func orderWords(pins []Pin) string {
	var list []string
	for _, p := range pins {
		list = append(list, map[Pin]string{
			PinIn: "in", PinReference: "gnd or adjust", PinOut: "out", PinAnode: "anode", PinCathode: "cathode",
			PinAC1: "ac", PinAC2: "ac", PinPlus: "+", PinMinus: "-",
		}[p])
	}
	return strings.Join(list, ", ")
}

// diodePins finds the anode of a two-pin subcircuit: by the diodes that lie straight across its pins, which
// conduct forward, else by the names of the pins.
func diodePins(definition *scope) (anode, cathode int, ok bool) {
	if definition == nil || len(definition.pins) != 2 {
		return 0, 0, false
	}
	first := strings.ToLower(definition.pins[0])
	second := strings.ToLower(definition.pins[1])
	forward, reverse := false, false
	for _, l := range definition.elements {
		if w := strings.Fields(strings.ToLower(l.Text)); len(w) >= 4 && w[0][0] == 'd' {
			forward = forward || w[1] == first && w[2] == second
			reverse = reverse || w[1] == second && w[2] == first
		}
	}
	if forward != reverse {
		return truthIndex(reverse), truthIndex(forward), true
	}
	is := func(name string, names ...string) bool {
		for _, n := range names {
			if name == n {
				return true
			}
		}
		return false
	}
	switch {
	case is(first, "a", "an", "anode", "p") && is(second, "k", "c", "ca", "cathode", "n"):
		return 0, 1, true
	case is(first, "k", "c", "ca", "cathode") && is(second, "a", "an", "anode"):
		return 1, 0, true
	}
	return 0, 0, false
}

func truthIndex(b bool) int {
	if b {
		return 1
	}
	return 0
}

// bridgePins returns the positions of AC, AC, + and - among a subcircuit's pins, nil if their names do not tell.
func bridgePins(definition *scope) []int {
	if definition == nil || len(definition.pins) != 4 {
		return nil
	}
	order := []int{-1, -1, -1, -1}
	for k, p := range definition.pins {
		switch name := strings.ToLower(p); {
		case strings.HasPrefix(name, "ac") || name == "~" || name == "~1" || name == "~2":
			if order[0] < 0 {
				order[0] = k
			} else {
				order[1] = k
			}
		case name == "+" || name == "p" || name == "plus" || name == "pos" || name == "dc+":
			order[2] = k
		case name == "-" || name == "n" || name == "minus" || name == "neg" || name == "dc-":
			order[3] = k
		}
	}
	for _, k := range order {
		if k < 0 {
			return nil
		}
	}
	return order
}
