package netlist

import (
	"cmp"
	"slices"
)

// multipliers finds the ladders of diodes whose joints a capacitor ties to a winding, follows the rails
// behind them, and returns their diodes.
func (f *railFinder) multipliers() map[ElementID]bool {
	used := make(map[ElementID]bool)
	joints := f.joints()
	if len(joints) == 0 {
		return used
	}
	for i := range f.c.Elements {
		id := ElementID(i)
		if _, ok := f.c.Elements[i].Device.(Diode); !ok || used[id] {
			continue
		}
		// The first diode leads from the winding's return to a joint (or from a joint to it, for a negative rail).
		for pin := range 2 {
			start, joint := f.c.Elements[i].Nodes[pin], f.c.Elements[i].Nodes[1-pin]
			k := slices.IndexFunc(joints, func(j tiedJoint) bool { return j.node == joint })
			if k < 0 || f.cluster[start] == none || f.returnOf(joints[k].cluster) != f.cluster[start] {
				continue
			}
			f.ladder(id, pin, joints[k], start, used)
		}
	}
	return used
}

// tiedJoint is a node between two diodes of a ladder that a capacitor ties to a winding.
type tiedJoint struct {
	node, cluster NodeID
}

// joints lists the nodes outside every cluster at which both an anode and a cathode meet and which a
// capacitor, or a chain of such nodes, ties to a winding.
func (f *railFinder) joints() []tiedJoint {
	var list []tiedJoint
	seen := make(map[NodeID]bool)
	visit := func(from, cluster NodeID) {
		for _, next := range f.c.Neighbours(from) {
			if _, ok := f.c.Elements[next.Element].Device.(Capacitor); !ok || next.Node == Ground || seen[next.Node] || f.cluster[next.Node] != none || f.acrossDiode([]NodeID{from, next.Node}) {
				continue
			}
			if f.diodeJoint(next.Node) {
				seen[next.Node] = true
				list = append(list, tiedJoint{next.Node, cluster})
			}
		}
	}
	for n := range f.c.Nodes {
		if k := f.cluster[n]; k != none && NodeID(n) != Ground {
			visit(NodeID(n), k)
		}
	}
	for i := 0; i < len(list); i++ {
		visit(list[i].node, list[i].cluster)
	}
	slices.SortFunc(list, func(a, b tiedJoint) int { return cmp.Compare(a.node, b.node) })
	return list
}

// diodeJoint reports whether an anode and a cathode of different diodes meet at a node.
func (f *railFinder) diodeJoint(n NodeID) bool {
	anode, cathode := false, false
	for _, id := range f.c.Touching(n) {
		e := &f.c.Elements[id]
		if _, ok := e.Device.(Diode); ok {
			anode = anode || e.Nodes[0] == n
			cathode = cathode || e.Nodes[1] == n
		}
	}
	return anode && cathode
}

// ladder goes up a ladder of diodes from its first one; pin is the end of the diodes that looks back.
func (f *railFinder) ladder(first ElementID, pin int, joint tiedJoint, start NodeID, used map[ElementID]bool) {
	diodes := []ElementID{first}
	node := joint.node
	for len(diodes) < 64 {
		next := ElementID(-1)
		for _, id := range f.c.Touching(node) {
			e := &f.c.Elements[id]
			if _, ok := e.Device.(Diode); ok && e.Nodes[pin] == node && !slices.Contains(diodes, id) && !f.c.IsZener(id) {
				next = id
				break
			}
		}
		if next < 0 {
			break
		}
		diodes = append(diodes, next)
		node = f.c.Elements[next].Nodes[1-pin]
	}
	if len(diodes) < 2 {
		return
	}
	for _, id := range diodes {
		used[id] = true
	}
	arrangement := HalfWaveDoubler
	if len(diodes) > 2 {
		arrangement = Multiplier
	}
	slices.Sort(diodes)
	stages := append(f.sourceStages([]NodeID{joint.cluster}), f.stage(StageRectifier, arrangement, diodes, node))
	f.follows(stages, node, start, pin == 1)
}
