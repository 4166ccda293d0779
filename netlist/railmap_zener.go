package netlist

import (
	"math"
	"slices"
	"strings"
)

const (
	// zenerLimit is the breakdown voltage in V from which a diode with nothing but BV on its model is never
	// taken for a zener: common series of zeners end at 200 V.
	zenerLimit = 200
	// feederOhms is the least resistance in ohm that feeds a shunt: less is a winding or an ammeter.
	feederOhms = 5
)

// IsZener reports whether a diode is used in breakdown. The first that speaks decides: a duty statement
// that gives it a zener's symbol or type; what the library knows of its type or model name; a zener's
// symbol on its card; a name that contains "zener"; a model with a breakdown voltage below 200 V where the
// diode stands reversed as a shunt behind a resistor, with no winding at either end, and the sources can
// reach that voltage, or stands back to back with another such. A diode about which all are silent is a rectifier.
func (c *Circuit) IsZener(id ElementID) bool {
	e := &c.Elements[id]
	d, ok := e.Device.(Diode)
	if !ok {
		return false
	}
	if said, ok := c.zeners[id]; ok {
		return said
	}
	names := []string{e.TypeName}
	if d.Model != nil {
		names = append(names, d.Model.Name)
	}
	for _, name := range names {
		if c.Library == nil || name == "" {
			continue
		}
		if part, ok := c.Library.Recognise(name); ok {
			return part.Role == RoleZener
		}
	}
	for _, f := range e.Fields {
		if meaning, _, ok := fieldMeaning(f.Key, KindDiode); ok && meaning.Kinds == KindZener {
			return true
		}
	}
	for _, name := range names {
		if strings.Contains(strings.ToLower(name), "zener") {
			return true
		}
	}
	if c.shunts != nil {
		return c.shunts[id]
	}
	return mayBreakDown(d) && newRailFinder(c, nil).standsAsShunt(id, d.Model.BV)
}

// mayBreakDown reports whether a diode's model breaks down at a zener's voltage.
func mayBreakDown(d Diode) bool { return d.Model != nil && d.Model.BV > 0 && d.Model.BV < zenerLimit }

// findShunts settles once for all diodes which of them stand as shunts.
func (c *Circuit) findShunts() {
	c.shunts = make(map[ElementID]bool)
	var f *railFinder
	for i := range c.Elements {
		if d, ok := c.Elements[i].Device.(Diode); ok && mayBreakDown(d) {
			if f == nil {
				f = newRailFinder(c, nil)
			}
			c.shunts[ElementID(i)] = f.standsAsShunt(ElementID(i), d.Model.BV)
		}
	}
}

// standsAsShunt reports whether a diode is fed in reverse through a resistor, from a voltage that can reach
// its breakdown.
func (f *railFinder) standsAsShunt(id ElementID, breakdown float64) bool {
	c := f.c
	anode, cathode := c.Elements[id].Nodes[0], c.Elements[id].Nodes[1]
	if f.backToBack(cathode, 1) || f.backToBack(anode, 0) {
		return true
	}
	for _, n := range []NodeID{anode, cathode} {
		if n != Ground && f.cluster[n] != none {
			return false
		}
	}
	if breakdown >= f.reach {
		return false
	}
	return f.fedThroughResistor(id, cathode, anode, +1) || f.fedThroughResistor(id, anode, cathode, -1)
}

// backToBack reports whether two diodes with a zener's breakdown voltage meet at a node, alone and with the
// same pin: nothing else works in breakdown either way.
func (f *railFinder) backToBack(node NodeID, pin int) bool {
	meeting := f.c.Nodes[node].Terminals
	return node != Ground && len(meeting) == 2 && meeting[0].Element != meeting[1].Element && !slices.ContainsFunc(meeting, func(t Terminal) bool {
		d, ok := f.c.Elements[t.Element].Device.(Diode)
		return !ok || t.Pin != pin || !mayBreakDown(d)
	})
}

// sourceReach is the voltage that the sources of the circuit can add up to, in V.
func (c *Circuit) sourceReach() float64 {
	reach := 0.0
	for i := range c.Elements {
		v, ok := c.Elements[i].Device.(VoltageSource)
		if !ok {
			continue
		}
		switch w := v.Wave.(type) {
		case Sine:
			reach += 2 * math.Abs(w.Amplitude) // a doubler behind it may reach twice the crest
		case Constant:
			reach += math.Abs(w.Level)
		case Pulse:
			reach += max(math.Abs(w.Low), math.Abs(w.High))
		}
	}
	return reach
}

// fedThroughResistor reports whether a resistor ties a node to a rail of the given sign. Further diodes in
// the same direction may stand between, as in a string of zeners.
func (f *railFinder) fedThroughResistor(diode ElementID, node, far NodeID, sign int) bool {
	seen := []ElementID{diode}
	for range 16 {
		if len(f.feeders(node, far, sign)) > 0 {
			return true
		}
		next := slices.IndexFunc(f.c.Touching(node), func(id ElementID) bool {
			e := &f.c.Elements[id]
			_, ok := e.Device.(Diode)
			return ok && !slices.Contains(seen, id) && (sign > 0 && e.Nodes[0] == node || sign < 0 && e.Nodes[1] == node)
		})
		if next < 0 || node == Ground {
			return false
		}
		id := f.c.Touching(node)[next]
		seen = append(seen, id)
		if sign > 0 {
			node = f.c.Elements[id].Nodes[1]
		} else {
			node = f.c.Elements[id].Nodes[0]
		}
	}
	return false
}

// feeders lists the resistors at a node whose other end lies on a rail of the given sign, reached without
// the node and its far side.
func (f *railFinder) feeders(node, far NodeID, sign int) []ElementID {
	if node == Ground {
		return nil
	}
	var list []ElementID
	for _, n := range f.c.Neighbours(node) {
		d, ok := f.c.Elements[n.Element].Device.(Resistor)
		if ok && d.Ohms >= feederOhms && n.Node != far && n.Node != Ground && f.onRail(n.Node, node, far, sign) {
			list = append(list, n.Element)
		}
	}
	return list
}

// railReach is how many nodes are looked at, nearest first, to find the rail that a node hangs on.
const railReach = 64

// onRail reports whether a node hangs on a rectifier's output or a direct source of the given sign, through
// anything but capacitors and diodes, without passing two nodes.
func (f *railFinder) onRail(node, without, far NodeID, sign int) bool {
	found, looked := false, 0
	f.c.reach([]NodeID{node}, func(at NodeID, next Neighbour) bool {
		if next.Node == without || next.Node == far {
			return false
		}
		e := &f.c.Elements[next.Element]
		switch e.Device.(type) {
		case Resistor, Inductor, Switch:
			return true
		case Transistor, Fet, Regulator:
			return passEnd(e, at) == next.Node
		case VoltageSource:
			return f.c.isAmmeter(next.Element)
		}
		return false
	}, func(n NodeID) bool {
		looked++
		found = n != Ground && (f.railEnd(n, sign) || far == Ground && f.droppedAt(n))
		return !found && looked < railReach
	})
	return found
}

// railEnd reports whether a rectifier delivers at a node, or a direct source stands there.
func (f *railFinder) railEnd(n NodeID, sign int) bool {
	for _, id := range f.c.Touching(n) {
		e := &f.c.Elements[id]
		switch d := e.Device.(type) {
		case Diode:
			out, in := e.Nodes[1], e.Nodes[0]
			if sign < 0 {
				out, in = in, out
			}
			if out == n && in != n && in != Ground && (f.cluster[in] != none || f.diodeJoint(in)) {
				return true
			}
		case VoltageSource:
			if w, ok := d.Wave.(Constant); ok && w.Level != 0 {
				up := e.Nodes[0] == n && e.Nodes[1] == Ground
				down := e.Nodes[1] == n && e.Nodes[0] == Ground
				if up && (w.Level > 0) == (sign > 0) || down && (w.Level < 0) == (sign > 0) {
					return true
				}
			}
		}
	}
	return false
}

// droppedAt reports whether a capacitor ties a node to a winding, as in a capacitive dropper.
func (f *railFinder) droppedAt(n NodeID) bool {
	return slices.ContainsFunc(f.c.Neighbours(n), func(next Neighbour) bool {
		_, capacitor := f.c.Elements[next.Element].Device.(Capacitor)
		return capacitor && next.Node != Ground && f.cluster[next.Node] != none
	})
}

// isAmmeter reports whether an element is a direct-voltage source of 0 V.
func (c *Circuit) isAmmeter(id ElementID) bool {
	v, ok := c.Elements[id].Device.(VoltageSource)
	if !ok {
		return false
	}
	w, ok := v.Wave.(Constant)
	return ok && w.Level == 0
}

// ZenerFeed is a shunt zener, or shunt reference, and the resistor that feeds it.
type ZenerFeed struct {
	Resistor, Zener ElementID
}

// ZenerFeeds lists the resistors that feed a shunt zener or reference, by zener and then in netlist order.
// A zener may stand in a string; each is fed by the resistor at the string's end.
func (c *Circuit) ZenerFeeds() []ZenerFeed {
	f := newRailFinder(c, nil)
	var list []ZenerFeed
	for i := range c.Elements {
		id := ElementID(i)
		var cathode, anode NodeID
		switch d := c.Elements[i].Device.(type) {
		case Diode:
			if !c.IsZener(id) {
				continue
			}
			anode, cathode = c.Elements[i].Nodes[0], c.Elements[i].Nodes[1]
		case Regulator:
			if !d.Shunt {
				continue
			}
			cathode, anode = c.Elements[i].Nodes[0], c.Elements[i].Nodes[2]
		default:
			continue
		}
		for _, r := range f.stringFeeders(id, cathode, anode) {
			list = append(list, ZenerFeed{r, id})
		}
	}
	return list
}

// stringFeeders finds the feeding resistors of a zener, at its own ends or at those of its string.
func (f *railFinder) stringFeeders(id ElementID, cathode, anode NodeID) []ElementID {
	for _, sign := range []int{+1, -1} {
		node, far := cathode, anode
		if sign < 0 {
			node, far = anode, cathode
		}
		seen := []ElementID{id}
		for range 16 {
			if found := f.feeders(node, far, sign); len(found) > 0 {
				return found
			}
			next := slices.IndexFunc(f.c.Touching(node), func(o ElementID) bool {
				e := &f.c.Elements[o]
				_, ok := e.Device.(Diode)
				return ok && node != Ground && !slices.Contains(seen, o) && f.c.IsZener(o) &&
					(sign > 0 && e.Nodes[0] == node || sign < 0 && e.Nodes[1] == node)
			})
			if next < 0 {
				break
			}
			o := f.c.Touching(node)[next]
			seen = append(seen, o)
			node = f.c.Elements[o].Nodes[0]
			if sign > 0 {
				node = f.c.Elements[o].Nodes[1]
			}
		}
	}
	return nil
}
