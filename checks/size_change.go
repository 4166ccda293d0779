package checks

import (
	"math"
	"slices"

	"railproof/checks/parts"
	"railproof/checks/study"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

// adjustment is one way to change a circuit or its ratings: a series of values to try, nearest first.
type adjustment struct {
	elements []netlist.ElementID // changed together
	symbol   netlist.Symbol      // "C", "R", "L" and SymbolBleeder change the circuit
	unit     quantity.Unit
	from     float64
	series   parts.StepKind
	down     bool
	values   []float64
	// beside says which further ratings a value asks for; nil: none.
	beside func(to float64) []netlist.Rating
}

// circuit reports whether the change asks for a new solution.
func (a *adjustment) circuit() bool {
	switch a.symbol {
	case "C", "R", "L", SymbolBleeder:
		return true
	}
	return false
}

// steps lists up to span values of a series beyond a value, nearest first.
func steps(kind parts.StepKind, from float64, down bool, span int) []float64 {
	const past = 1e-6 // a step is its own next step
	var list []float64
	for at := from; len(list) < span; {
		next, ok := parts.NextUp(kind, at*(1+past))
		if down {
			next, ok = parts.NextDown(kind, at*(1-past))
		}
		if !ok {
			break
		}
		list, at = append(list, next), next
	}
	return list
}

// applied is the supply with the change made.
func (a *adjustment) applied(s *study.Supply, to float64) *study.Supply {
	c, d := *s.Circuit, *s.Duty
	c.Elements = slices.Clone(c.Elements)
	switch {
	case a.symbol == SymbolBleeder:
		addBleeder(&c, a.elements[0], to)
	case a.circuit():
		for _, id := range a.elements {
			c.Elements[id].Device = valued(c.Elements[id].Device, to)
		}
	case a.symbol == sinkSymbol:
		d.Coolings = slices.Clone(d.Coolings)
		for k := range d.Coolings {
			if slices.Contains(a.elements, d.Coolings[k].Element) {
				d.Coolings[k].KPerW = to
			}
		}
	default:
		d.Ratings = slices.Concat(a.ratings(to), d.Ratings) // of two statements the first counts
	}
	return study.NewSupply(&c, &d, s.Table)
}

// ratings are the statements that a changed rating amounts to.
func (a *adjustment) ratings(to float64) []netlist.Rating {
	var list []netlist.Rating
	for _, id := range a.elements {
		list = append(list, stated(id, a.symbol, to, a.unit))
	}
	if a.beside != nil {
		list = append(list, a.beside(to)...)
	}
	return list
}

// stated is a rating as the duty sheet would state it.
func stated(id netlist.ElementID, symbol netlist.Symbol, v float64, unit quantity.Unit) netlist.Rating {
	return netlist.Rating{Element: id, Symbol: symbol, Value: quantity.Interval{Low: v, High: v, Unit: unit},
		Written: string(symbol) + " " + quantity.Format(v, unit, 4) + " as sized"}
}

// valued is a passive device with another value.
func valued(d netlist.Device, to float64) netlist.Device {
	switch x := d.(type) {
	case netlist.Resistor:
		x.Ohms = to
		return x
	case netlist.Capacitor:
		x.Farads = to
		return x
	case netlist.Inductor:
		x.Henries = to
		return x
	}
	return d
}

// bleederExcess is how far a bleeder lies above its value at worst, relative. Common practice.
const bleederExcess = 0.05

// addBleeder puts a resistance across a capacitor, at the high end of its tolerance. It is drawn as a conductance
// that its own voltage controls, so that it is not mistaken for a load that may be open.
func addBleeder(c *netlist.Circuit, across netlist.ElementID, ohms float64) {
	id := netlist.ElementID(len(c.Elements))
	x := &c.Elements[across]
	a, b := x.Nodes[0], x.Nodes[1]
	e := netlist.Element{
		Name: "bleeder across " + x.Name, At: x.At, Nodes: []netlist.NodeID{a, b, a, b},
		Device: netlist.VoltageControlled{Output: netlist.OutCurrent, Gain: 1 / (ohms * (1 + bleederExcess))},
	}
	c.Elements = append(c.Elements, e)
	c.Nodes = slices.Clone(c.Nodes)
	for pin, n := range e.Nodes {
		c.Nodes[n].Terminals = append(slices.Clone(c.Nodes[n].Terminals), netlist.Terminal{Element: id, Pin: pin})
	}
}

// changes puts a value that was found into the form of a remedy.
func (z *sizer) changes(a *adjustment, to float64) []Change {
	var list []Change
	for _, id := range a.elements {
		list = append(list, Change{Element: z.supply.Circuit.Elements[id].Name, Symbol: a.symbol, From: a.from, To: to,
			Unit: a.unit, Series: a.series, AtMost: a.down})
	}
	if a.beside != nil {
		for _, r := range a.beside(to) {
			from := math.NaN()
			if p, ok := z.supply.Property(r.Element, r.Symbol); ok {
				from = p.Value()
			}
			list = append(list, Change{Element: z.supply.Circuit.Elements[r.Element].Name, Symbol: r.Symbol, From: from,
				To: r.Value.Low, Unit: r.Value.Unit, AtMost: true})
		}
	}
	return list
}
