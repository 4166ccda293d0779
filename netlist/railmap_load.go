package netlist

import (
	"slices"
	"strings"
)

// polarisedFrom is the capacitance in F from which a capacitor is taken for an electrolytic with node 1
// plus, if nothing else is said of it.
const polarisedFrom = 10e-6

// FindLoads lists the elements that are loads, in netlist order: those with a `load` statement; resistors
// and current sources named RL..., RLOAD... or ILOAD... that end in a return; and, on a rail with neither, the last
// resistor or current source from its last node to its return. d may be nil.
func (c *Circuit) FindLoads(d *Duty) []ElementID {
	f := newRailFinder(c, d)
	f.rectifiers()
	f.direct()
	loads := slices.Clone(f.loads)
	for i := range c.Elements {
		if id := ElementID(i); f.stated(id) || f.named(id) {
			loads = append(loads, id)
		}
	}
	slices.Sort(loads)
	return slices.Compact(loads)
}

// canLoad reports whether an element is a resistor or a current source.
func (f *railFinder) canLoad(id ElementID) bool {
	switch f.c.Elements[id].Device.(type) {
	case Resistor, CurrentSource:
		return true
	}
	return false
}

// stated reports whether a `load` statement names the element.
func (f *railFinder) stated(id ElementID) bool {
	return f.d != nil && slices.ContainsFunc(f.d.Loads, func(l Load) bool { return l.Element == id })
}

// named reports whether an element is named as a load and stands across a rail: one of its ends is ground
// or the return of a rail.
func (f *railFinder) named(id ElementID) bool {
	if !f.canLoad(id) {
		return false
	}
	name := strings.ToUpper(f.c.Elements[id].Name)
	name = name[strings.LastIndexByte(name, '.')+1:]
	_, resistor := f.c.Elements[id].Device.(Resistor)
	if resistor && !strings.HasPrefix(name, "RL") || !resistor && !strings.HasPrefix(name, "ILOAD") {
		return false
	}
	return slices.ContainsFunc(f.c.Elements[id].Nodes, func(n NodeID) bool {
		return n == Ground || slices.Contains(f.returns, n)
	})
}

// across lists the resistors and current sources from a node to the return, in netlist order.
func (f *railFinder) across(w way) []ElementID {
	var list []ElementID
	for _, n := range f.c.Neighbours(w.node) {
		if f.canLoad(n.Element) && slices.Contains(w.back, n.Node) {
			list = append(list, n.Element)
		}
	}
	return list
}

// hasStatedLoad reports whether a stated or named load stands at a node.
func (f *railFinder) hasStatedLoad(w way) bool {
	return slices.ContainsFunc(f.across(w), func(id ElementID) bool { return f.stated(id) || f.named(id) })
}

// loadsAt lists the loads at the last node of a chain.
func (f *railFinder) loadsAt(w way) []ElementID {
	all := f.across(w)
	chosen := slices.DeleteFunc(slices.Clone(all), func(id ElementID) bool { return !f.stated(id) && !f.named(id) })
	if len(chosen) == 0 && len(all) > 0 {
		chosen = all[len(all)-1:]
	}
	return chosen
}

// otherLoads lists what draws current at the end of a rail without being a resistor or an independent source.
func (f *railFinder) otherLoads(w way) []ElementID {
	var list []ElementID
	for _, n := range f.c.Neighbours(w.node) {
		if !slices.Contains(w.back, n.Node) {
			continue
		}
		draws := false
		switch d := f.c.Elements[n.Element].Device.(type) {
		case Behavioural:
			draws = d.Output == OutCurrent
		case VoltageControlled:
			draws = d.Output == OutCurrent
		case CurrentControlled:
			draws = d.Output == OutCurrent
		case Unknown:
			draws = true
		}
		if draws && !slices.Contains(list, n.Element) {
			list = append(list, n.Element)
		}
	}
	return list
}

// Polarised reports whether a capacitor must keep its node 1 positive. The first that speaks decides: a
// `rate ... polarised=` statement or field; what it is made of or its interference class; its capacitance, from 10 uF on.
// d may be nil.
func (c *Circuit) Polarised(id ElementID, d *Duty) bool {
	capacitor, ok := c.Elements[id].Device.(Capacitor)
	if !ok {
		return false
	}
	fields, _ := c.FieldRatings(id)
	if d != nil {
		stated := slices.DeleteFunc(slices.Clone(d.Ratings), func(r Rating) bool { return r.Element != id })
		fields = append(stated, fields...)
	}
	for _, r := range fields {
		if r.Symbol == "polarised" {
			return r.Text == "yes"
		}
	}
	for _, r := range fields {
		switch {
		case r.Symbol == "technology":
			return r.Text == "electrolytic" || r.Text == "tantalum"
		case r.Symbol == "class":
			return false
		}
	}
	return capacitor.Farads >= polarisedFrom*(1-1e-9)
}
