package netlist

import (
	"math"
	"slices"
)

// Standing is what the duty sheet and the circuit say a sinusoidal source stands for.
type Standing uint8

// The standings.
const (
	Undeclared        Standing = iota // nothing says what its source resistance and off-load rise are
	DeclaredLine                      // `line V1 ...`
	DeclaredWinding                   // `winding V1 ...`
	DrivesTransformer                 // its load is a modelled transformer
)

// SineSource is a sinusoidal voltage source and what it stands for.
type SineSource struct {
	Element ElementID
	Wave    Sine
	Stands  Standing
	// LooksRMS is set when the amplitude is a usual rms value of the mains (100..127, 208, 220..240 V) and
	// the source is undeclared or drives a transformer: peak or rms is then in doubt.
	LooksRMS bool
}

// SineSources lists the sinusoidal voltage sources in netlist order. d may be nil.
func (c *Circuit) SineSources(d *Duty) []SineSource {
	f := newRailFinder(c, d)
	var list []SineSource
	for i := range c.Elements {
		wave, ok := c.sineOf(ElementID(i))
		if !ok {
			continue
		}
		s := SineSource{Element: ElementID(i), Wave: wave}
		declared := false
		if d != nil {
			for _, l := range d.Lines {
				if l.Source == s.Element {
					s.Stands, declared = DeclaredLine, true
				}
			}
			for _, w := range d.Windings {
				if w.Source == s.Element {
					s.Stands, declared = DeclaredWinding, true
				}
			}
		}
		if !declared && f.drivesTransformer(s.Element) {
			s.Stands = DrivesTransformer
		}
		s.LooksRMS = !declared && usualMains(math.Abs(wave.Amplitude))
		list = append(list, s)
	}
	return list
}

// usualMains reports whether a voltage is a usual rms value of the mains (IEC 60038 and its predecessors).
func usualMains(volts float64) bool {
	return volts >= 100 && volts <= 127 || volts == 208 || volts >= 220 && volts <= 240
}

// sineOf is the waveform of a sinusoidal voltage source.
func (c *Circuit) sineOf(id ElementID) (Sine, bool) {
	if v, ok := c.Elements[id].Device.(VoltageSource); ok {
		if w, ok := v.Wave.(Sine); ok && w.Amplitude != 0 {
			return w, true
		}
	}
	return Sine{}, false
}

// acPort is a pair of nodes between which an alternating voltage stands: a sinusoidal source, the
// secondary winding of a modelled transformer, or a controlled source that follows one.
type acPort struct {
	plus, minus NodeID
	element     ElementID
	from        int // index of the port that drives it; -1 for a source
	through     []ElementID
}

// railFinder recognises rails. Nodes belong to a cluster when they are the same alternating potential
// apart from what stands in series with a winding: its resistance, a fuse, an ammeter.
type railFinder struct {
	c       *Circuit
	d       *Duty
	ports   []acPort
	reach   float64          // what the sources can add up to, in V
	cluster []NodeID         // by node: the first node of its cluster, none if it is in none
	portsAt map[NodeID][]int // by cluster, once all are known
	inPort  map[ElementID]bool
	chains  []RailChain
	visited map[NodeID]bool // nodes that some chain has delivered at
	loads   []ElementID     // what the chains end in
	returns []NodeID        // of all chains
	tied    map[NodeID][]NodeID
	most    int // chains at which the present way ends
}

const none NodeID = -1

// reservoirFrom is the capacitance in F from which a capacitor across a rail counts as part of the chain.
const reservoirFrom = 0.47e-6

func newRailFinder(c *Circuit, d *Duty) *railFinder {
	f := &railFinder{c: c, d: d, cluster: make([]NodeID, len(c.Nodes)), inPort: make(map[ElementID]bool), visited: make(map[NodeID]bool), tied: make(map[NodeID][]NodeID), reach: c.sourceReach()}
	for i := range f.cluster {
		f.cluster[i] = none
	}
	for i := range c.Elements {
		if _, ok := c.sineOf(ElementID(i)); ok {
			f.addPort(acPort{element: ElementID(i), from: -1})
		}
	}
	f.spread(0)
	// Secondaries may drive further transformers: go on until nothing new is found.
	for done := 0; done < len(f.ports); {
		done = len(f.ports)
		f.addSecondaries()
		f.spread(done)
	}
	return f
}

func (f *railFinder) addPort(p acPort) {
	nodes := f.c.Elements[p.element].Nodes
	p.plus, p.minus = nodes[0], nodes[1]
	f.ports = append(f.ports, p)
	f.inPort[p.element] = true
	for _, n := range []NodeID{p.plus, p.minus} {
		if f.cluster[n] == none {
			f.cluster[n] = n
		}
	}
}

// addSecondaries adds the windings coupled to a driven inductor and the controlled sources that follow a port.
func (f *railFinder) addSecondaries() {
	for i := range f.c.Elements {
		id := ElementID(i)
		switch d := f.c.Elements[i].Device.(type) {
		case Coupling:
			for _, primary := range d.Inductors {
				port := f.portAcross(f.c.Elements[primary].Nodes)
				if port < 0 {
					continue
				}
				f.inPort[primary] = true
				for _, l := range d.Inductors {
					if !f.inPort[l] {
						f.addPort(acPort{element: l, from: port, through: []ElementID{primary, l}})
					}
				}
			}
		case VoltageControlled:
			if d.Output != OutVoltage || f.inPort[id] || len(f.c.Elements[i].Nodes) < 4 {
				continue
			}
			if port := f.portAcross(f.c.Elements[i].Nodes[2:]); port >= 0 {
				f.addPort(acPort{element: id, from: port, through: []ElementID{id}})
			}
		}
	}
}

// portAcross is the index of the port whose two clusters hold a pair of nodes; -1 if none does.
func (f *railFinder) portAcross(nodes []NodeID) int {
	a, b := f.cluster[nodes[0]], f.cluster[nodes[1]]
	if a == none || b == none || a == b {
		return -1
	}
	return slices.IndexFunc(f.ports, func(p acPort) bool {
		plus, minus := f.cluster[p.plus], f.cluster[p.minus]
		return plus == a && minus == b || plus == b && minus == a
	})
}

func (f *railFinder) drivesTransformer(source ElementID) bool {
	return slices.ContainsFunc(f.ports, func(p acPort) bool { return p.from >= 0 && f.ports[p.from].element == source })
}

// spread lets the clusters of the ports from first on grow along what stands in series with them.
func (f *railFinder) spread(first int) {
	var queue []NodeID
	for _, p := range f.ports[first:] {
		queue = append(queue, p.plus, p.minus)
	}
	for len(queue) > 0 {
		n := queue[0]
		queue = queue[1:]
		if n == Ground || f.endsSeries(n) {
			continue
		}
		for _, next := range f.c.Neighbours(n) {
			if f.inPort[next.Element] || next.Node == Ground || f.cluster[next.Node] != none || !f.inSeries(next) {
				continue
			}
			f.cluster[next.Node] = f.cluster[n]
			queue = append(queue, next.Node)
		}
	}
}

// endsSeries reports whether a node is where the rectifier begins or a reservoir returns to.
func (f *railFinder) endsSeries(n NodeID) bool {
	for _, id := range f.c.Touching(n) {
		switch d := f.c.Elements[id].Device.(type) {
		case Diode:
			return true
		case Capacitor:
			if d.Farads >= reservoirFrom {
				return true
			}
		}
	}
	return false
}

// inSeries reports whether an element carries the winding's current on to the next node.
func (f *railFinder) inSeries(next Neighbour) bool {
	switch d := f.c.Elements[next.Element].Device.(type) {
	case Resistor:
		if d.Ohms > 1e6 {
			return false
		}
	case Inductor, Switch:
	case VoltageSource:
		if w, ok := d.Wave.(Constant); !ok || w.Level != 0 {
			return false
		}
	default:
		return false
	}
	// A load behind the rectifier leads back from its return: no series element ends where a diode from a
	// cluster arrives.
	for _, id := range f.c.Touching(next.Node) {
		if _, ok := f.c.Elements[id].Device.(Diode); ok {
			nodes := f.c.Elements[id].Nodes
			for _, other := range nodes {
				if other != next.Node && other != Ground && f.cluster[other] != none {
					return false
				}
			}
		}
	}
	return true
}

// portsOf lists the ports that have a cluster as an end.
func (f *railFinder) portsOf(cluster NodeID) []int {
	if f.portsAt == nil {
		f.portsAt = make(map[NodeID][]int)
		for i, p := range f.ports {
			a, b := f.cluster[p.plus], f.cluster[p.minus]
			f.portsAt[a] = append(f.portsAt[a], i)
			if b != a {
				f.portsAt[b] = append(f.portsAt[b], i)
			}
		}
	}
	return f.portsAt[cluster]
}

// otherEnd is the cluster at the other end of a port.
func (f *railFinder) otherEnd(port int, cluster NodeID) NodeID {
	p := f.ports[port]
	if f.cluster[p.plus] == cluster {
		return f.cluster[p.minus]
	}
	return f.cluster[p.plus]
}
