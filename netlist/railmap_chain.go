package netlist

import "slices"

// maxChains bounds the number of rails behind one rectifier or source.
const maxChains = 64

// way is how far a rail has been followed.
type way struct {
	stages    []RailStage
	node      NodeID
	home      NodeID   // the return
	back      []NodeID // the return and what ammeters and small resistors tie to it
	negative  bool
	seen      []NodeID
	reservoir bool // a reservoir stands at or before the node
	regulated bool // a regulator stands before the node
}

// smallOhms is the resistance in ohm up to which a resistor at the return is a wire or senses current: a load
// of less would draw 20 A from 5 V.
const smallOhms = 0.25

// follows goes along the direct-voltage side from a node and adds the chains it finds.
func (f *railFinder) follows(stages []RailStage, node, back NodeID, negative bool) {
	if node == back {
		return // a diode straight across a winding
	}
	w := way{stages: stages, node: node, home: back, negative: negative, seen: []NodeID{node}}
	w.back = slices.DeleteFunc(slices.Clone(f.tiedTo(back)), func(n NodeID) bool { return n == node })
	f.returns = append(f.returns, w.back...)
	f.most = len(f.chains) + maxChains
	f.walk(w)
}

// tiedTo lists the nodes that ammeters and small resistors tie to a return, and itself.
func (f *railFinder) tiedTo(back NodeID) []NodeID {
	tied, ok := f.tied[back]
	if !ok {
		tied = f.c.Reach([]NodeID{back}, func(id ElementID) bool {
			switch d := f.c.Elements[id].Device.(type) {
			case VoltageSource:
				k, ok := d.Wave.(Constant)
				return ok && k.Level == 0
			case Resistor:
				return d.Ohms <= smallOhms
			}
			return false
		})
		f.tied[back] = tied
	}
	return tied
}

// direct follows rails that begin at a direct-voltage source instead of a rectifier.
func (f *railFinder) direct() {
	for i := range f.c.Elements {
		v, ok := f.c.Elements[i].Device.(VoltageSource)
		if !ok {
			continue
		}
		k, ok := v.Wave.(Constant)
		plus, minus := f.c.Elements[i].Nodes[0], f.c.Elements[i].Nodes[1]
		if !ok || k.Level == 0 || plus == minus || f.cluster[plus] != none && f.cluster[minus] != none {
			continue
		}
		node, back, negative := plus, minus, k.Level < 0
		if plus == Ground {
			node, back, negative = minus, plus, k.Level > 0
		}
		if f.visited[node] {
			continue
		}
		source := f.stage(StageSource, DirectSource, []ElementID{ElementID(i)}, node)
		source.Note = f.c.describe(ElementID(i))
		f.inPort[ElementID(i)] = true
		f.follows([]RailStage{source}, node, back, negative)
	}
}

// walk adds the stages at a node and goes on along every way that leads further.
func (f *railFinder) walk(w way) {
	f.visited[w.node] = true
	if held := f.capacitorsAt(w.node, w.back); len(held) > 0 && !w.reservoir && !w.regulated {
		s := f.stage(StageReservoir, "", held, w.node)
		s.Note = f.c.describe(held[0]) + " at " + s.NodeName
		w.stages = append(slices.Clone(w.stages), s)
		w.reservoir = true
	}
	onward := f.onward(w)
	if len(onward) == 0 || f.hasStatedLoad(w) {
		f.end(w)
	}
	for _, next := range onward {
		if len(f.chains) < f.most && len(next.stages) < maxChains {
			f.walk(next)
		}
	}
}

// capacitorsAt lists the capacitors across a rail that are large enough to hold it, also behind a resistor
// and an inductor that draw their losses: their far node then meets nothing else.
func (f *railFinder) capacitorsAt(node NodeID, back []NodeID) []ElementID {
	var list []ElementID
	for _, n := range f.c.Neighbours(node) {
		capacitor, end := n.Element, n.Node
		if h := f.hop(node, back, n); len(h.elements) > 0 {
			if capacitor, end = f.lossyCapacitor(h); capacitor < 0 {
				continue
			}
		}
		if d, ok := f.c.Elements[capacitor].Device.(Capacitor); ok && d.Farads >= reservoirFrom && slices.Contains(back, end) {
			list = append(list, capacitor)
		}
	}
	return list
}

// lossOhms is the resistance in ohm up to which a resistor in series with a capacitor is its own.
const lossOhms = 10

// lossyCapacitor finds the capacitor whose losses a run of resistors and inductors draws, and its far node;
// -1 if the run leads elsewhere.
func (f *railFinder) lossyCapacitor(h hopped) (ElementID, NodeID) {
	if h.ohms > lossOhms || h.node == Ground || len(f.c.Nodes[h.node].Terminals) != 2 {
		return -1, none
	}
	id, end := f.acrossJoint(h.elements[len(h.elements)-1], h.node)
	if id >= 0 {
		if _, ok := f.c.Elements[id].Device.(Capacitor); ok {
			return id, end
		}
	}
	return -1, none
}

// hopped is a run of resistors and inductors in series with nothing between them.
type hopped struct {
	elements []ElementID
	node     NodeID // at its end
	choke    bool   // an inductor is among them
	ohms     float64
}

// hop follows a neighbour as far as resistors and inductors are simply in series, and not on to the return;
// no elements if it is neither.
func (f *railFinder) hop(from NodeID, back []NodeID, n Neighbour) hopped {
	h := hopped{node: from}
	for len(h.elements) < 16 {
		switch d := f.c.Elements[n.Element].Device.(type) {
		case Inductor:
			h.choke = true
		case Resistor:
			h.ohms += d.Ohms
		default:
			return h
		}
		h.elements, h.node = append(h.elements, n.Element), n.Node
		if n.Node == Ground || n.Node == from || len(f.c.Nodes[n.Node].Terminals) != 2 {
			return h
		}
		n.Element, n.Node = f.acrossJoint(n.Element, n.Node)
		if n.Element < 0 || n.Node == Ground || slices.Contains(back, n.Node) {
			return h
		}
	}
	return h
}

// acrossJoint is the other element at a node where two meet, and its far end; -1 if there is none.
func (f *railFinder) acrossJoint(element ElementID, node NodeID) (ElementID, NodeID) {
	for _, n := range f.c.Neighbours(node) {
		if n.Element != element {
			return n.Element, n.Node
		}
	}
	return -1, none
}

// onward lists the ways from a node to the next, in netlist order.
func (f *railFinder) onward(w way) []way {
	var ways []way
	bases := f.passBases(w)
	for _, n := range f.c.Neighbours(w.node) {
		if f.inPort[n.Element] || slices.Contains(w.seen, n.Node) || slices.Contains(w.back, n.Node) || f.cluster[n.Node] != none {
			continue
		}
		e := &f.c.Elements[n.Element]
		next := w
		next.node = n.Node
		next.seen = append(slices.Clone(w.seen), n.Node)
		add := func(stages ...RailStage) {
			next.stages = append(slices.Clone(w.stages), stages...)
			ways = append(ways, next)
		}
		switch d := e.Device.(type) {
		case VoltageSource:
			if k, ok := d.Wave.(Constant); ok && k.Level == 0 {
				add()
			}
		case Switch:
			add(f.stage(StageSeries, "", []ElementID{n.Element}, n.Node))
		case Diode:
			forward := e.Nodes[0] == w.node
			if !f.c.IsZener(n.Element) && forward != w.negative {
				add(f.stage(StageSeries, "", []ElementID{n.Element}, n.Node))
			}
		case Inductor, Resistor:
			h := f.hop(w.node, w.back, n)
			if lossy, _ := f.lossyCapacitor(h); lossy >= 0 {
				continue
			}
			if slices.Contains(w.seen, h.node) || slices.Contains(w.back, h.node) || slices.Contains(bases, h.node) {
				continue
			}
			next.node, next.seen = h.node, append(slices.Clone(w.seen), h.node)
			if h.choke {
				next.reservoir = true
				add(f.filter(w, h, SeriesChoke, PiFilter, ChokeInput))
			} else {
				f.throughResistor(w, h, &next, add)
			}
		case Regulator:
			if !d.Shunt && e.Nodes[0] == w.node && e.Nodes[2] == n.Node {
				f.regulated(&next, &w, ThreeTerminal, []ElementID{n.Element}, f.c.describe(n.Element), add)
			}
		case Transistor, Fet:
			if control := e.Nodes[1]; control != w.node && control != n.Node && n.Node == passEnd(e, w.node) {
				f.regulated(&next, &w, SeriesPass, f.passParts(n.Element, w), "", add)
			}
		}
	}
	return ways
}

// regulated adds a regulator stage.
func (f *railFinder) regulated(next, w *way, a Arrangement, parts []ElementID, note string, add func(...RailStage)) {
	s := f.stage(StageRegulator, a, parts, next.node)
	s.Cascade, s.Note = w.regulated, note
	next.regulated = true
	add(s)
}

// filter names a filter by what stands before and behind its series element.
func (f *railFinder) filter(w way, h hopped, bare, both, behind Arrangement) RailStage {
	held := f.capacitorsAt(h.node, w.back)
	a := bare
	switch {
	case len(held) > 0 && w.reservoir:
		a = both
	case len(held) > 0 || !w.reservoir && behind == ChokeInput:
		a = behind
	}
	return f.stage(StageFilter, a, append(slices.Clone(h.elements), held...), h.node)
}

// throughResistor goes on behind a resistor if it feeds a shunt regulator, a filter capacitor or something
// that draws the current of a supply; otherwise it is a divider or an indicator, and no way onward.
func (f *railFinder) throughResistor(w way, h hopped, next *way, add func(...RailStage)) {
	if shunts, a := f.shuntsAt(h.node, w); len(shunts) > 0 {
		f.regulated(next, &w, a, append(slices.Clone(h.elements), shunts...), "", add)
		return
	}
	if len(f.capacitorsAt(h.node, w.back)) > 0 {
		next.reservoir = true
		add(f.filter(w, h, RCFilter, RCFilter, RCFilter))
		return
	}
	behind := *next
	for _, m := range f.c.Neighbours(h.node) {
		e := &f.c.Elements[m.Element]
		switch d := e.Device.(type) {
		case Regulator:
			if !d.Shunt && e.Nodes[0] == h.node {
				add(f.stage(StageSeries, "", h.elements, h.node))
				return
			}
		case Transistor, Fet:
			if e.Nodes[1] != h.node && passEnd(e, h.node) == m.Node && !slices.Contains(w.back, m.Node) && !slices.Contains(w.seen, m.Node) {
				add(f.stage(StageSeries, "", h.elements, h.node))
				return
			}
		}
	}
	if f.hasStatedLoad(behind) {
		add(f.stage(StageSeries, "", h.elements, h.node))
	}
}

// shuntsAt lists the zeners, strings of zeners or shunt references that hold a node against the return.
func (f *railFinder) shuntsAt(node NodeID, w way) ([]ElementID, Arrangement) {
	high, low := 1, 0 // the cathode is at the rail
	if w.negative {
		high, low = 0, 1
	}
	var list []ElementID
	a := ZenerShunt
	for _, id := range f.c.Touching(node) {
		e := &f.c.Elements[id]
		switch d := e.Device.(type) {
		case Diode:
			var found []ElementID
			at := id
			for len(found) < 16 && f.c.IsZener(at) && f.c.Elements[at].Nodes[high] != f.c.Elements[at].Nodes[low] {
				if len(found) == 0 && f.c.Elements[at].Nodes[high] != node {
					break
				}
				found = append(found, at)
				end := f.c.Elements[at].Nodes[low]
				if slices.Contains(w.back, end) {
					list = append(list, found...)
					break
				}
				next := slices.IndexFunc(f.c.Touching(end), func(o ElementID) bool {
					_, diode := f.c.Elements[o].Device.(Diode)
					return diode && f.c.Elements[o].Nodes[high] == end
				})
				if next < 0 {
					break
				}
				at = f.c.Touching(end)[next]
			}
		case Regulator:
			if d.Shunt && e.Nodes[0] == node && slices.Contains(w.back, e.Nodes[2]) {
				list, a = append(list, id), ReferenceShunt
			}
		}
	}
	return list, a
}

// passEnd is the other end of a transistor's main path; none if the node is not one end of it.
func passEnd(e *Element, node NodeID) NodeID {
	switch node {
	case e.Nodes[0]:
		return e.Nodes[2]
	case e.Nodes[2]:
		return e.Nodes[0]
	}
	return none
}

// passBases lists the bases and gates of transistors whose main path leaves the node.
func (f *railFinder) passBases(w way) []NodeID {
	var list []NodeID
	for _, id := range f.c.Touching(w.node) {
		e := &f.c.Elements[id]
		switch e.Device.(type) {
		case Transistor, Fet:
			if end := passEnd(e, w.node); end != none && !slices.Contains(w.back, end) {
				list = append(list, e.Nodes[1])
			}
		}
	}
	return list
}

// passParts lists a pass transistor with the resistor and zener that set its base.
func (f *railFinder) passParts(pass ElementID, w way) []ElementID {
	base := f.c.Elements[pass].Nodes[1]
	parts := []ElementID{pass}
	for _, id := range f.c.Between(w.node, base) {
		if _, ok := f.c.Elements[id].Device.(Resistor); ok {
			parts = append(parts, id)
		}
	}
	shunts, _ := f.shuntsAt(base, w)
	return append(parts, shunts...)
}

// end closes a chain with the load it finds at its last node.
func (f *railFinder) end(w way) {
	loads := f.loadsAt(w)
	f.loads = append(f.loads, loads...)
	if len(loads) == 0 {
		loads = f.otherLoads(w)
	}
	s := f.stage(StageLoad, "", loads, w.node)
	f.chains = append(f.chains, RailChain{
		Stages: append(slices.Clone(w.stages), s), Output: w.node, Return: w.home, Negative: w.negative,
	})
}
