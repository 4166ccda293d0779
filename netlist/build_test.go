package netlist

import (
	"strconv"
	"strings"

	"railproof/netlist/quantity"
)

// build makes a circuit from cards of a small subset, one a line, so that the graph and the duty sheet
// are tested apart from the reader: R C L with a value, V and I with a value or SIN(offset amplitude
// frequency [delay damping phase]), D with a type name and optionally BV=, Q with NPN or PNP, K, E (gain),
// and U with a regulator type, nodes in gnd out.
func build(t interface {
	Helper()
	Fatalf(format string, args ...any)
}, cards string) *Circuit {
	t.Helper()
	c := &Circuit{File: "test.cir", Temperature: 27, Nodes: []Node{{Name: "0"}}, Library: knownTypes{}}
	number := func(text string) float64 {
		v, ok := quantity.ParseSpice(text)
		if !ok {
			t.Fatalf("no number: %q", text)
		}
		return v.Value
	}
	node := func(name string) NodeID {
		if id, ok := c.FindNode(name); ok {
			return id
		}
		c.Nodes = append(c.Nodes, Node{Name: name})
		return NodeID(len(c.Nodes) - 1)
	}
	for i, card := range strings.Split(strings.TrimSpace(cards), "\n") {
		words := strings.Fields(strings.NewReplacer("(", " ", ")", " ").Replace(card))
		if len(words) == 0 {
			continue
		}
		e := Element{Name: words[0], At: Position{File: "test.cir", Line: i + 1, Column: 1}}
		pins := 2
		switch strings.ToUpper(words[0][:1]) {
		case "Q", "U":
			pins = 3
		case "E":
			pins = 4
		case "K":
			pins = 0
		}
		for _, name := range words[1 : 1+pins] {
			e.Nodes = append(e.Nodes, node(name))
		}
		rest := words[1+pins:]
		for len(rest) > 0 && strings.Contains(rest[len(rest)-1], "=") {
			key, value, _ := strings.Cut(rest[len(rest)-1], "=")
			e.Fields = append([]Field{{Key: key, Value: value, At: e.At}}, e.Fields...)
			rest = rest[:len(rest)-1]
		}
		wave := func() Waveform {
			if strings.EqualFold(rest[0], "sin") {
				v := make([]float64, 6)
				for j := range rest[1:] {
					v[j] = number(rest[j+1])
				}
				return Sine{v[0], v[1], v[2], v[3], v[4], v[5]}
			}
			return Constant{number(rest[len(rest)-1])}
		}
		switch strings.ToUpper(words[0][:1]) {
		case "R":
			e.Device = Resistor{number(rest[0])}
		case "C":
			e.Device = Capacitor{Farads: number(rest[0])}
		case "L":
			e.Device = Inductor{Henries: number(rest[0])}
		case "V":
			e.Device = VoltageSource{Wave: wave()}
		case "I":
			e.Device = CurrentSource{Wave: wave()}
		case "D":
			e.TypeName = rest[0]
			d := Diode{Area: 1, Model: &DiodeModel{Name: rest[0]}}
			if len(e.Fields) > 0 && e.Fields[0].Key == "BV" {
				d.Model.BV = number(e.Fields[0].Value)
				e.Fields = nil
			}
			e.Device = d
		case "Q":
			q := Transistor{Model: &TransistorModel{Name: rest[0], Polarity: Positive}, Area: 1}
			if rest[0] == "PNP" {
				q.Model.Polarity = Negative
			}
			e.TypeName, e.Device = rest[0], q
		case "E":
			e.Device = VoltageControlled{Output: OutVoltage, Gain: number(rest[0])}
		case "U":
			e.TypeName = rest[0]
			e.Device = Unknown{Letter: 'X', Why: "no definition of subcircuit " + rest[0]}
			if part, ok := c.Library.Recognise(rest[0]); ok {
				e.Device = Regulator{Polarity: part.Polarity, Shunt: part.Role == RoleShunt, Adjustable: part.Role == RoleAdjustable}
			}
		case "K":
			k := Coupling{}
			for _, name := range words[1 : len(words)-1] {
				id, ok := c.Find(name)
				if !ok {
					t.Fatalf("no inductor %q", name)
				}
				k.Inductors = append(k.Inductors, id)
			}
			k.Factor, _ = strconv.ParseFloat(words[len(words)-1], 64)
			e.Device = k
		default:
			t.Fatalf("no such card: %q", card)
		}
		c.Elements = append(c.Elements, e)
		for pin, n := range e.Nodes {
			c.Nodes[n].Terminals = append(c.Nodes[n].Terminals, Terminal{ElementID(len(c.Elements) - 1), pin})
		}
	}
	c.HasGround = len(c.Nodes[Ground].Terminals) > 0
	return c
}

// knownTypes is a small library of generic types.
type knownTypes struct{}

func (k knownTypes) Named(name string) (KnownPart, bool) { return k.Recognise(name) }

func (knownTypes) Recognise(name string) (KnownPart, bool) {
	switch strings.ToUpper(name) {
	case "1N4007":
		return KnownPart{Type: "1N4007", Role: RoleRectifier}, true
	case "1N4742A":
		return KnownPart{Type: "1N4742A", Role: RoleZener}, true
	case "7805", "7812":
		return KnownPart{Type: name, Role: RoleRegulator, Polarity: Positive, Pins: []Pin{PinIn, PinReference, PinOut}}, true
	case "7912":
		return KnownPart{Type: name, Role: RoleRegulator, Polarity: Negative, Pins: []Pin{PinIn, PinReference, PinOut}}, true
	case "TL431":
		return KnownPart{Type: name, Role: RoleShunt, Polarity: Positive, Pins: []Pin{PinCathode, PinReference, PinAnode}}, true
	}
	return KnownPart{}, false
}
