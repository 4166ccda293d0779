package solver

import (
	"fmt"
	"math"
)

// system is a network with its unknowns numbered: the part of the equations that does not depend on the step.
//
// Unknowns z: node potentials (without the reference), then the currents of the devices that carry one.
// States x: capacitor voltages (V), then inductor flux linkages (V s).
// Inputs u: the values of the independent sources.
// Ports p: those of the nonlinear devices.
type system struct {
	net      *Network
	unknowns int
	current  []int // device -> unknown index of its current, or -1

	capacitors []Device
	inductors  []Device
	inductance dense // inductors x inductors, H, couplings included
	sources    []Device

	ports   []port
	guess   []float64 // their stand-in conductances, S
	laws    []lawSlot
	sharers []int // the laws that are Sharers
	slopes  int   // room for the derivatives of all laws
	timed   bool  // a law depends on the time
	// lossless lists the inductors that ideal sources alone drive: a constant current in them is undetermined.
	lossless []int
	// regulating marks the ports of regulators, see march.cutsOff.
	regulating []bool
}

// lawSlot places a law's ports in the port vector, and its derivatives, row by row, among those of all laws.
type lawSlot struct {
	law       Law
	junction  *junction // the law, if it is one
	piecewise Piecewise // the same, if it is one
	first     int
	count     int
	block     int
}

// region is the range of the law that holds its ports among all port voltages v; see Piecewise.
func (l *lawSlot) region(v []float64) int {
	switch {
	case l.junction != nil:
		return l.junction.region(v[l.first])
	case l.piecewise != nil:
		return l.piecewise.Region(v[l.first : l.first+l.count])
	}
	return 0
}

func newSystem(n *Network) (*system, error) {
	s := &system{net: n, current: make([]int, len(n.devices))}
	next := n.nodes - 1
	inductorIndex := make(map[Device]int)
	for k := range n.devices {
		d := &n.devices[k]
		s.current[k] = -1
		if d.carriesCurrent() {
			s.current[k] = next
			next++
		}
		switch d.kind {
		case capacitor:
			s.capacitors = append(s.capacitors, Device(k))
		case inductor:
			inductorIndex[Device(k)] = len(s.inductors)
			s.inductors = append(s.inductors, Device(k))
		case voltageSource, currentSource:
			s.sources = append(s.sources, Device(k))
		case nonlinear:
			if _, ok := d.law.(Sharer); ok {
				s.sharers = append(s.sharers, len(s.laws))
			}
			slot := lawSlot{law: d.law, first: len(s.ports), count: len(d.ports), block: s.slopes}
			slot.junction, _ = d.law.(*junction)
			slot.piecewise, _ = d.law.(Piecewise)
			s.laws = append(s.laws, slot)
			s.slopes += slot.count * slot.count
			_, regulates := d.law.(*regulator)
			for range d.ports {
				s.regulating = append(s.regulating, regulates)
			}
			if _, ok := d.law.(functionLaw); ok {
				s.timed = true
			}
			for _, p := range d.ports {
				s.ports, s.guess = append(s.ports, p), append(s.guess, p.guess)
			}
		}
	}
	s.unknowns = next
	fixed := n.fixedNodes()
	for k, d := range s.inductors {
		if b := n.devices[d].branches[0]; fixed[b.A] && fixed[b.B] {
			s.lossless = append(s.lossless, k)
		}
	}
	s.inductance = newDense(len(s.inductors), len(s.inductors))
	for k, d := range s.inductors {
		s.inductance.row(k)[k] = n.devices[d].value
	}
	for k := range n.devices {
		d := &n.devices[k]
		switch d.kind {
		case coupling:
			i, iok := inductorIndex[d.partner]
			j, jok := inductorIndex[d.second]
			if !iok || !jok {
				return nil, fmt.Errorf("a coupling refers to something that is no inductor")
			}
			m := d.value * math.Sqrt(s.inductance.row(i)[i]*s.inductance.row(j)[j])
			s.inductance.row(i)[j] += m
			s.inductance.row(j)[i] += m
		case currentControlledVoltage, currentControlledCurrent:
			if s.current[d.partner] < 0 {
				return nil, fmt.Errorf("a current-controlled source refers to an element whose current is not an unknown")
			}
		}
	}
	return s, nil
}

func (s *system) states() int { return len(s.capacitors) + len(s.inductors) }

// stateScale returns the natural size of each state, so that states of different units can be compared:
// 1 V for a capacitor, the flux of 1 A for an inductor.
func (s *system) stateScale() []float64 {
	scale := make([]float64, s.states())
	for k := range s.capacitors {
		scale[k] = 1
	}
	for k := range s.inductors {
		for _, l := range s.inductance.row(k) {
			scale[len(s.capacitors)+k] += math.Abs(l)
		}
	}
	return scale
}

// node maps a circuit node to its unknown, -1 for the reference.
func node(n Node) int { return int(n) - 1 }

// matrix is a square matrix under assembly.
type matrix struct {
	n    int
	data []float64
}

func (m matrix) add(r, c int, v float64) {
	if r >= 0 && c >= 0 {
		m.data[r*m.n+c] += v
	}
}

// conductance stamps g between the nodes of b.
func (m matrix) conductance(b Branch, g float64) {
	p, q := node(b.A), node(b.B)
	m.add(p, p, g)
	m.add(q, q, g)
	m.add(p, q, -g)
	m.add(q, p, -g)
}

// incidence stamps the current unknown k flowing through b, and the voltage of b into row k.
func (m matrix) incidence(b Branch, k int) {
	p, q := node(b.A), node(b.B)
	m.add(p, k, 1)
	m.add(q, k, -1)
	m.add(k, p, 1)
	m.add(k, q, -1)
}

// assemble writes the nodal matrix for the step length sigma of one implicit stage into data, with the
// stand-in conductances of the ports included.
func (s *system) assemble(data []float64, sigma float64) {
	m := matrix{s.unknowns, data}
	for k := range data {
		data[k] = 0
	}
	index := 0
	for k := range s.net.devices {
		d := &s.net.devices[k]
		c := s.current[k]
		if c >= 0 {
			m.incidence(d.branches[0], c)
		}
		switch d.kind {
		case resistor:
			if d.value != 0 {
				m.conductance(d.branches[0], 1/d.value)
			}
		case capacitor:
			m.conductance(d.branches[0], d.value/sigma)
		case inductor:
			for j, l := range s.inductance.row(index) {
				if l != 0 {
					m.add(c, s.current[s.inductors[j]], -l/sigma)
				}
			}
			index++
		case voltageControlledVoltage:
			m.add(c, node(d.control.A), -d.value)
			m.add(c, node(d.control.B), d.value)
		case voltageControlledCurrent:
			p, q := node(d.branches[0].A), node(d.branches[0].B)
			a, b := node(d.control.A), node(d.control.B)
			m.add(p, a, d.value)
			m.add(p, b, -d.value)
			m.add(q, a, -d.value)
			m.add(q, b, d.value)
		case currentControlledVoltage:
			m.add(c, s.current[d.partner], -d.value)
		case currentControlledCurrent:
			m.add(node(d.branches[0].A), s.current[d.partner], d.value)
			m.add(node(d.branches[0].B), s.current[d.partner], -d.value)
		case nonlinear:
			for _, p := range d.ports {
				if p.output == outCurrent && p.guess != 0 {
					m.conductance(p.sense, p.guess)
				}
			}
		}
	}
}

// stateColumn writes the right-hand side of a unit value of state k for stage length sigma.
func (s *system) stateColumn(b []float64, k int, sigma float64) {
	if k < len(s.capacitors) {
		d := &s.net.devices[s.capacitors[k]]
		addTo(b, node(d.branches[0].A), d.value/sigma)
		addTo(b, node(d.branches[0].B), -d.value/sigma)
		return
	}
	b[s.current[s.inductors[k-len(s.capacitors)]]] = -1 / sigma
}

// inputColumn writes the right-hand side of a unit value of source k.
func (s *system) inputColumn(b []float64, k int) {
	d := &s.net.devices[s.sources[k]]
	if d.kind == voltageSource {
		b[s.current[s.sources[k]]] = 1
		return
	}
	addTo(b, node(d.branches[0].A), -1)
	addTo(b, node(d.branches[0].B), 1)
}

// portColumn writes the right-hand side of a unit of port k's output beyond its stand-in conductance.
func (s *system) portColumn(b []float64, k int, voltageRow int) {
	p := s.ports[k]
	switch p.output {
	case outCurrent:
		addTo(b, node(p.sense.A), -1)
		addTo(b, node(p.sense.B), 1)
	case outVoltage:
		b[voltageRow] = 1
	}
}

func addTo(b []float64, k int, v float64) {
	if k >= 0 {
		b[k] += v
	}
}

// voltageRows returns for each port the unknown of the source branch it drives, or -1.
func (s *system) voltageRows() []int {
	rows := make([]int, 0, len(s.ports))
	for k := range s.net.devices {
		d := &s.net.devices[k]
		if d.kind != nonlinear {
			continue
		}
		for _, p := range d.ports {
			if p.output == outVoltage {
				rows = append(rows, s.current[k])
			} else {
				rows = append(rows, -1)
			}
		}
	}
	return rows
}
