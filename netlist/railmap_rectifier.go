package netlist

import "slices"

// arm is a rectifier diode, or several in series or in parallel, between a cluster and a direct node.
type arm struct {
	diodes  []ElementID
	cluster NodeID
	node    NodeID // the direct-voltage end
}

// side gathers the arms of windings that belong together which deliver at one node (feeding) or which that node returns
// through (draining). Supplies side by side often return through the same ground.
type side struct {
	node  NodeID
	group NodeID // of the windings; see railFinder.groups
	arms  []arm
}

// clusters lists the clusters of the arms, each once, in rising order.
func (s side) clusters() []NodeID {
	var list []NodeID
	for _, a := range s.arms {
		list = append(list, a.cluster)
	}
	slices.Sort(list)
	return slices.Compact(list)
}

func (s side) diodes() []ElementID {
	var list []ElementID
	for _, a := range s.arms {
		list = append(list, a.diodes...)
	}
	slices.Sort(list)
	return slices.Compact(list)
}

// rectifiers finds the arrangements of the diodes at the clusters, and follows the rails behind them.
func (f *railFinder) rectifiers() {
	used := f.multipliers()
	feeds, drains := f.arms(used)
	inGroup := make(map[NodeID][]int)
	for i, n := range drains {
		inGroup[n.group] = append(inGroup[n.group], i)
	}
	paired := make(map[int]bool)
	for _, p := range feeds {
		if f.quietOnly(p) {
			continue // a clamp or free-wheeling diode from the return
		}
		clusters := p.clusters()
		at := slices.IndexFunc(inGroup[p.group], func(i int) bool { return !paired[i] && slices.Equal(drains[i].clusters(), clusters) })
		if at < 0 {
			f.oneSided(p, false)
			continue
		}
		i := inGroup[p.group][at]
		paired[i] = true
		f.twoSided(p, drains[i], clusters)
	}
	for i, n := range drains {
		if !paired[i] && !f.quietOnly(n) {
			f.oneSided(n, true)
		}
	}
}

// groups tells which clusters belong together: those that windings and sources join. It maps a cluster to the first
// of its group.
func (f *railFinder) groups() func(cluster NodeID) NodeID {
	parent := make(map[NodeID]NodeID)
	first := func(k NodeID) NodeID {
		for p, ok := parent[k]; ok; p, ok = parent[k] {
			if above, ok := parent[p]; ok {
				parent[k] = above
			}
			k = p
		}
		return k
	}
	for _, p := range f.ports {
		a, b := first(f.cluster[p.plus]), first(f.cluster[p.minus])
		if a != b {
			parent[max(a, b)] = min(a, b)
		}
	}
	return first
}

// arms collects the diodes between clusters and direct nodes, in the order of their first diode.
func (f *railFinder) arms(used map[ElementID]bool) (feeds, drains []side) {
	group := f.groups()
	type place struct {
		sides       *[]side
		node, group NodeID
	}
	index := make(map[place]int)
	add := func(sides *[]side, node NodeID, a arm) {
		at := place{sides, node, group(a.cluster)}
		i, ok := index[at]
		if !ok {
			i = len(*sides)
			index[at] = i
			*sides = append(*sides, side{node: node, group: at.group})
		}
		(*sides)[i].arms = append((*sides)[i].arms, a)
	}
	for i := range f.c.Elements {
		id := ElementID(i)
		if _, ok := f.c.Elements[i].Device.(Diode); !ok || used[id] || f.c.IsZener(id) {
			continue
		}
		anode, cathode := f.c.Elements[i].Nodes[0], f.c.Elements[i].Nodes[1]
		out, in := f.alternating(anode, cathode), f.alternating(cathode, anode)
		switch {
		case out && !in:
			string, end := f.follow(id, cathode, 1)
			add(&feeds, end, arm{string, f.cluster[anode], end})
		case in && !out:
			string, end := f.follow(id, anode, 0)
			add(&drains, end, arm{string, f.cluster[cathode], end})
		}
	}
	return feeds, drains
}

// alternating reports whether a node is an end of a winding as seen from the other end of a diode: ground is
// one only if a winding on the other side of the arrangement ends there and the other end is no winding.
func (f *railFinder) alternating(node, other NodeID) bool {
	if f.cluster[node] == none {
		return false
	}
	return node != Ground || f.cluster[other] == none
}

// follow goes along a string of diodes in series: towards the cathodes (pin 1) or the anodes (pin 0). Across
// them may stand resistors and capacitors that share the voltage.
func (f *railFinder) follow(id ElementID, end NodeID, pin int) ([]ElementID, NodeID) {
	list := []ElementID{id}
	for end != Ground && f.cluster[end] == none && len(list) < 64 {
		var next ElementID = -1
		for _, other := range f.c.Touching(end) {
			e := f.c.Elements[other]
			switch e.Device.(type) {
			case Diode:
				if slices.Contains(list, other) {
					continue
				}
				if next >= 0 || e.Nodes[1-pin] != end || f.c.IsZener(other) {
					return list, end
				}
				next = other
			case Resistor, Capacitor:
				if !f.acrossDiode(e.Nodes) {
					return list, end
				}
			default:
				return list, end
			}
		}
		if next < 0 {
			break
		}
		list = append(list, next)
		end = f.c.Elements[next].Nodes[pin]
	}
	return list, end
}

// acrossDiode reports whether a diode joins the two nodes.
func (f *railFinder) acrossDiode(nodes []NodeID) bool {
	return slices.ContainsFunc(f.c.Between(nodes[0], nodes[1]), func(id ElementID) bool {
		_, ok := f.c.Elements[id].Device.(Diode)
		return ok
	})
}

// quietOnly reports whether all arms come from the ground.
func (f *railFinder) quietOnly(s side) bool {
	return !slices.ContainsFunc(s.arms, func(a arm) bool { return a.cluster != f.cluster[Ground] || f.cluster[Ground] == none })
}

// twoSided names the arrangement that feeds the node of p and returns through that of n, from the same clusters.
func (f *railFinder) twoSided(p, n side, clusters []NodeID) {
	output, back, negative := p.node, n.node, false
	if p.node == Ground {
		output, back, negative = n.node, p.node, true // a bridge whose plus is grounded
	}
	diodes := slices.Concat(p.diodes(), n.diodes())
	slices.Sort(diodes)
	sources := f.sourceStages(clusters)
	rectifier := func(a Arrangement, node NodeID) []RailStage {
		return append(slices.Clone(sources), f.stage(StageRectifier, a, diodes, node))
	}
	switch {
	case len(clusters) >= 3:
		f.follows(rectifier(ThreePhaseBridge, output), output, back, negative)
	case len(clusters) == 2:
		tap := f.tap(clusters[0], clusters[1])
		if tap == none || !f.tapUsed(tap) {
			f.follows(rectifier(Bridge, output), output, back, negative)
			return
		}
		node := f.nodeOf(tap)
		f.follows(rectifier(DualRailBridge, p.node), p.node, node, false)
		f.follows(rectifier(DualRailBridge, n.node), n.node, node, true)
	default:
		f.doublerOrTwo(p, n, rectifier)
	}
}

// doublerOrTwo tells a doubler, whose midpoint holds capacitors alone, from two half-wave rectifiers.
func (f *railFinder) doublerOrTwo(p, n side, rectifier func(Arrangement, NodeID) []RailStage) {
	back := f.returnOf(p.arms[0].cluster)
	if back == none {
		return
	}
	middle := f.nodeOf(back)
	capacitors := f.c.Between(p.node, middle)
	loaded := false
	for _, id := range append(slices.Clone(capacitors), f.c.Between(n.node, middle)...) {
		switch f.c.Elements[id].Device.(type) {
		case Resistor, CurrentSource:
			loaded = true
		}
	}
	regulated := slices.ContainsFunc(f.c.Touching(middle), func(id ElementID) bool {
		switch f.c.Elements[id].Device.(type) {
		case Regulator, Transistor, Fet, Unknown:
			return true
		}
		return false
	})
	if loaded || regulated {
		f.oneSided(p, false)
		f.oneSided(n, true)
		return
	}
	output, far, negative := p.node, n.node, false
	if output == Ground {
		output, far, negative = n.node, p.node, true
	}
	stages := rectifier(FullWaveDoubler, output)
	held := append(f.capacitorsAt(p.node, []NodeID{middle}), f.capacitorsAt(n.node, []NodeID{middle})...)
	if slices.Sort(held); len(held) > 0 {
		s := f.stage(StageReservoir, "", slices.Compact(held), output)
		s.Note = f.c.describe(held[0]) + " each half at " + s.NodeName
		stages = append(stages, s)
	}
	f.follows(stages, output, far, negative)
}

// oneSided names an arrangement with diodes on one side only, and its return.
func (f *railFinder) oneSided(s side, negative bool) {
	clusters := slices.DeleteFunc(s.clusters(), func(k NodeID) bool { return k == f.cluster[Ground] && k != none })
	var arrangement Arrangement
	back := none
	switch len(clusters) {
	case 1:
		arrangement, back = HalfWave, f.returnOf(clusters[0])
	case 2:
		arrangement, back = CentreTap, f.tap(clusters[0], clusters[1])
	default:
		arrangement, back = ThreePhaseStar, f.tap(clusters[0], clusters[1])
	}
	if back == none {
		return
	}
	stages := append(f.sourceStages(clusters), f.stage(StageRectifier, arrangement, s.diodes(), s.node))
	f.follows(stages, s.node, f.nodeOf(back), negative)
}

// returnOf is the cluster at the other end of a winding.
func (f *railFinder) returnOf(cluster NodeID) NodeID {
	for _, p := range f.portsOf(cluster) {
		return f.otherEnd(p, cluster)
	}
	return none
}

// tap is the cluster where the windings that end in two clusters meet; none if one winding spans them.
func (f *railFinder) tap(a, b NodeID) NodeID {
	for _, i := range f.portsOf(a) {
		if f.otherEnd(i, a) == b {
			return none
		}
	}
	for _, i := range f.portsOf(a) {
		for _, j := range f.portsOf(b) {
			if k := f.otherEnd(i, a); k == f.otherEnd(j, b) {
				return k
			}
		}
	}
	return none
}

// tapUsed reports whether anything but windings and what stands in series with them meets a tap.
func (f *railFinder) tapUsed(tap NodeID) bool {
	for n := range f.c.Nodes {
		if f.cluster[n] != tap {
			continue
		}
		for _, id := range f.c.Touching(NodeID(n)) {
			if !f.inPort[id] && slices.ContainsFunc(f.c.Elements[id].Nodes, func(m NodeID) bool { return f.cluster[m] != tap }) {
				return true
			}
		}
	}
	return false
}

// nodeOf is the node of a cluster at which the direct side returns: the one where most elements meet.
func (f *railFinder) nodeOf(cluster NodeID) NodeID {
	best, most := cluster, -1
	for n := range f.c.Nodes {
		if count := len(f.c.Nodes[n].Terminals); f.cluster[n] == cluster && count > most {
			best, most = NodeID(n), count
		}
	}
	return best
}

// sourceStages describes the sources, and the transformer if there is one, behind some clusters.
func (f *railFinder) sourceStages(clusters []NodeID) []RailStage {
	var ports []int
	for _, k := range clusters {
		for _, p := range f.portsOf(k) {
			if !slices.Contains(ports, p) {
				ports = append(ports, p)
			}
		}
	}
	slices.Sort(ports)
	var sources, windings []ElementID
	for _, p := range ports {
		through := f.ports[p]
		for through.from >= 0 {
			windings = append(windings, through.through...)
			through = f.ports[through.from]
		}
		sources = append(sources, through.element)
	}
	stage := func(role StageRole, a Arrangement, list []ElementID) RailStage {
		slices.Sort(list)
		return f.stage(role, a, slices.Compact(list), f.c.Elements[list[0]].Nodes[0])
	}
	source := stage(StageSource, AlternatingSource, sources)
	source.Note = f.c.describe(source.Elements[0])
	stages := []RailStage{source}
	if windings != nil {
		stages = append(stages, stage(StageTransformer, "", windings))
	}
	return stages
}

func (f *railFinder) stage(role StageRole, a Arrangement, elements []ElementID, node NodeID) RailStage {
	s := RailStage{Role: role, Arrangement: a, Elements: elements, Node: node, NodeName: f.c.Nodes[node].Name}
	for _, id := range elements {
		s.Names = append(s.Names, f.c.Elements[id].Name)
	}
	return s
}
