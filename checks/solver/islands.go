package solver

// Island is a part of a network that can be solved alone.
type Island struct {
	Network *Network
	Devices []Device // Devices[k] is the device of the whole network that the island's device k is
	Nodes   []Node   // Nodes[k] is the node of the whole network that the island's node k is
}

// forest is a partition of 0..n-1 into sets, each a tree whose root names it.
type forest []int

func newForest(n int) forest {
	f := make(forest, n)
	for k := range f {
		f[k] = k
	}
	return f
}

// root names the set that k is in.
func (f forest) root(k int) int {
	for f[k] != k {
		f[k] = f[f[k]]
		k = f[k]
	}
	return k
}

// Islands splits a network into parts that influence one another only through the reference and through
// nodes whose potential independent voltage sources fix. A source that fixes a node of several islands is
// copied into each. Controlling quantities and couplings hold islands together.
func (n *Network) Islands() []Island {
	fixed := n.fixedNodes()
	parent := newForest(n.nodes + len(n.devices))
	join := func(a, b int) { parent[parent.root(a)] = parent.root(b) }
	joinNode := func(d int, k Node) {
		if !fixed[k] {
			join(n.nodes+d, int(k))
		}
	}
	anchors := make([]bool, len(n.devices)) // sources between fixed nodes only
	for d := range n.devices {
		dev := &n.devices[d]
		if dev.kind == voltageSource && fixed[dev.branches[0].A] && fixed[dev.branches[0].B] {
			anchors[d] = true
		}
	}
	referenced := make([]bool, len(n.devices))
	for d := range n.devices {
		dev := &n.devices[d]
		if anchors[d] {
			continue
		}
		for _, b := range dev.branches {
			joinNode(d, b.A)
			joinNode(d, b.B)
		}
		for _, p := range dev.ports {
			if p.isCurrent {
				join(n.nodes+d, n.nodes+int(p.senseOf))
				referenced[p.senseOf] = true
				continue
			}
			joinNode(d, p.sense.A)
			joinNode(d, p.sense.B)
		}
		switch dev.kind {
		case voltageControlledVoltage, voltageControlledCurrent:
			joinNode(d, dev.control.A)
			joinNode(d, dev.control.B)
		case currentControlledVoltage, currentControlledCurrent:
			join(n.nodes+d, n.nodes+int(dev.partner))
			referenced[dev.partner] = true
		case coupling:
			join(n.nodes+d, n.nodes+int(dev.partner))
			join(n.nodes+d, n.nodes+int(dev.second))
		}
	}
	// A source whose current controls something carries the current of every island that touches it: all
	// of them stay together.
	for d := range n.devices {
		if anchors[d] && referenced[d] {
			return []Island{n.whole()}
		}
	}

	order := []int{}
	index := map[int]int{}
	for d := range n.devices {
		if anchors[d] {
			continue
		}
		root := parent.root(n.nodes + d)
		if _, ok := index[root]; !ok {
			index[root] = len(order)
			order = append(order, root)
		}
	}
	if len(order) <= 1 {
		return []Island{n.whole()}
	}
	members := make([][]Device, len(order))
	for d := range n.devices {
		if !anchors[d] {
			k := index[parent.root(n.nodes+d)]
			members[k] = append(members[k], Device(d))
		}
	}
	support := n.support(fixed, anchors)
	tied := 0
	for _, is := range anchors {
		if is {
			tied++
		}
	}
	if tied > len(support) {
		// More sources than the nodes they fix: a loop of ideal sources, which the whole network must show.
		return []Island{n.whole()}
	}
	islands := make([]Island, len(order))
	for k, devices := range members {
		islands[k] = n.extract(devices, fixed, support)
	}
	return islands
}

// fixedNodes marks the nodes that chains of independent voltage sources tie to the reference.
func (n *Network) fixedNodes() []bool {
	fixed := make([]bool, n.nodes)
	fixed[Reference] = true
	for changed := true; changed; {
		changed = false
		for d := range n.devices {
			dev := &n.devices[d]
			if dev.kind != voltageSource {
				continue
			}
			b := dev.branches[0]
			if fixed[b.A] != fixed[b.B] {
				fixed[b.A], fixed[b.B] = true, true
				changed = true
			}
		}
	}
	return fixed
}

// support returns for each fixed node the sources that tie it to the reference, as a spanning tree:
// support[k] is the source next to node k and toward[k] the node behind it.
func (n *Network) support(fixed, anchors []bool) map[Node]Device {
	via := map[Node]Device{}
	reached := map[Node]bool{Reference: true}
	for changed := true; changed; {
		changed = false
		for d := range n.devices {
			if !anchors[d] {
				continue
			}
			b := n.devices[d].branches[0]
			switch {
			case reached[b.A] && !reached[b.B]:
				via[b.B], reached[b.B], changed = Device(d), true, true
			case reached[b.B] && !reached[b.A]:
				via[b.A], reached[b.A], changed = Device(d), true, true
			}
		}
	}
	return via
}

func (n *Network) whole() Island {
	is := Island{Network: n}
	for d := range n.devices {
		is.Devices = append(is.Devices, Device(d))
	}
	for k := range n.nodes {
		is.Nodes = append(is.Nodes, Node(k))
	}
	return is
}

// extract copies devices, and the sources that fix their nodes, into a network of their own.
func (n *Network) extract(devices []Device, fixed []bool, via map[Node]Device) Island {
	need := map[Device]bool{}
	touch := func(k Node) {
		for k != Reference && fixed[k] {
			d, ok := via[k]
			if !ok {
				return
			}
			need[d] = true
			b := n.devices[d].branches[0]
			if b.A == k {
				k = b.B
			} else {
				k = b.A
			}
		}
	}
	each := func(d *device, f func(*Node)) {
		for k := range d.branches {
			f(&d.branches[k].A)
			f(&d.branches[k].B)
		}
		for k := range d.ports {
			f(&d.ports[k].sense.A)
			f(&d.ports[k].sense.B)
		}
		f(&d.control.A)
		f(&d.control.B)
		if d.measured != nil {
			f(&d.measured.A)
			f(&d.measured.B)
		}
	}
	for _, d := range devices {
		dev := n.devices[d]
		each(&dev, func(k *Node) { touch(*k) })
	}
	all := make([]Device, 0, len(devices)+len(need))
	for d := range n.devices {
		if need[Device(d)] {
			all = append(all, Device(d))
		}
	}
	all = append(all, devices...)

	is := Island{Network: &Network{Period: n.Period, nodes: 1}, Devices: all, Nodes: []Node{Reference}}
	nodes := map[Node]Node{Reference: Reference}
	local := map[Device]Device{}
	for k, d := range all {
		local[d] = Device(k)
	}
	for _, d := range all {
		dev := n.devices[d]
		dev.branches = append([]Branch(nil), dev.branches...)
		dev.ports = append([]port(nil), dev.ports...)
		if dev.measured != nil {
			m := *dev.measured
			dev.measured = &m
		}
		each(&dev, func(k *Node) {
			if _, ok := nodes[*k]; !ok {
				nodes[*k] = Node(is.Network.nodes)
				is.Network.nodes++
				is.Nodes = append(is.Nodes, *k)
			}
			*k = nodes[*k]
		})
		for k := range dev.ports {
			dev.ports[k].senseOf = local[dev.ports[k].senseOf]
		}
		dev.partner, dev.second = local[dev.partner], local[dev.second]
		is.Network.devices = append(is.Network.devices, dev)
	}
	return is
}

// Anchor ties each galvanically separate part of the network that lacks the reference to it through one
// resistor, which carries no current: the potentials become defined, the stresses of elements stay the same.
func (n *Network) Anchor() {
	parent := newForest(n.nodes)
	join := func(b Branch) {
		parent[parent.root(int(b.A))] = parent.root(int(b.B))
	}
	for d := range n.devices {
		dev := &n.devices[d]
		if dev.kind == nonlinear {
			// All terminals of one law belong together.
			for _, p := range dev.ports {
				if p.output != outNone && !p.isCurrent {
					join(p.sense)
					join(Branch{dev.ports[0].sense.A, p.sense.A})
				}
			}
			continue
		}
		for _, b := range dev.branches {
			join(b)
		}
	}
	for k := 1; k < n.nodes; k++ {
		if parent.root(k) == parent.root(int(Reference)) {
			continue
		}
		n.AddResistor(Node(k), Reference, 1)
		parent[parent.root(k)] = parent.root(int(Reference))
	}
}
