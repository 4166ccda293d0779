// Package solver finds the periodic steady state, the operating point and the start-up transient of a
// network of lumped elements. It knows circuits and numerics only, nothing of ratings or checks.
//
// Method. The linear part of the network is written by modified nodal analysis (Ho, Ruehli and Brennan,
// IEEE Trans. CAS-22, 1975) and factorised once per step size; what remains to be solved in a time step is a
// Newton problem of the size of the nonlinear ports (the reduction known as K-method: Borin, De Poli and
// Rocchesso, IEEE Trans. Speech Audio Proc. 8, 2000). Of these, laws that are exactly linear around the last
// solution - blocking junctions, regulators in regulation - are eliminated too, so that in most steps Newton's
// method has one or two conducting junctions left, or none. Time is integrated by the two-stage, stiffly accurate,
// L-stable singly diagonally implicit Runge-Kutta rule of order 2 (Alexander, SIAM J. Numer. Anal. 14, 1977).
// Periodicity is found by Newton's method on the state at the start of the period
// (Aprille and Trick, Proc. IEEE 60, 1972).
package solver

import "math"

// Node is a circuit node; Reference is the node whose potential is zero.
type Node int

// Reference is the ground node.
const Reference Node = 0

// Device identifies a device of a Network in the order it was added.
type Device int

// Branch is a pair of nodes with a voltage from A to B and a current that flows from A to B through the device.
type Branch struct{ A, B Node }

// Boltzmann constant over elementary charge, V/K (exact SI values, 2019).
const boltzmannOverCharge = 1.380649e-23 / 1.602176634e-19

// ThermalVoltage returns kT/q in volts at a temperature in degC.
func ThermalVoltage(celsius float64) float64 { return boltzmannOverCharge * (celsius + 273.15) }

// Network is the circuit to be solved. Build it with the Add methods.
type Network struct {
	// Period is the common period of all sources in seconds; 0 when every source is constant.
	Period float64

	nodes   int
	devices []device
}

// New returns a network with the given number of nodes, the reference included.
func New(nodes int) *Network { return &Network{nodes: nodes} }

// Nodes returns the number of nodes, internal ones and the reference included.
func (n *Network) Nodes() int { return n.nodes }

// Devices returns the number of devices.
func (n *Network) Devices() int { return len(n.devices) }

// Branches returns the branches of a device, whose voltages and currents the solution reports.
func (n *Network) Branches(d Device) []Branch { return n.devices[d].branches }

type kind uint8

const (
	resistor kind = iota
	capacitor
	inductor
	coupling
	voltageSource
	currentSource
	voltageControlledVoltage
	voltageControlledCurrent
	currentControlledVoltage
	currentControlledCurrent
	nonlinear
)

// device is one element. Which fields count depends on its kind.
type device struct {
	kind     kind
	branches []Branch // what is measured; ports of a nonlinear device may lie on internal nodes
	value    float64  // ohm, F, H, gain, or coupling factor
	wave     Wave
	control  Branch  // controlling voltage
	partner  Device  // controlling current (branch 0 of that device), or first of a coupled pair
	second   Device  // second inductor of a coupled pair
	ports    []port  // nonlinear only
	law      Law     // nonlinear only
	measured *Branch // what the voltage of branch 0 is reported across, if not the branch itself
	initial  float64 // state before a cold start: V or A
}

// port is where a nonlinear law meets the linear network: it senses a quantity and injects one.
type port struct {
	sense     Branch // voltage sensed
	senseOf   Device // or, if senseCurrent, the current of branch 0 of this device
	isCurrent bool
	output    output
	guess     float64 // conductance stamped into the linear part in place of the law, S
}

type output uint8

const (
	outCurrent output = iota // the law returns the current from A to B
	outNone                  // a controlling quantity only: the law's current is zero
	outVoltage               // the law returns the voltage from A to B of a source branch
)

func (n *Network) add(d device) Device {
	n.devices = append(n.devices, d)
	return Device(len(n.devices) - 1)
}

// AddNode adds a node to the network.
func (n *Network) AddNode() Node {
	n.nodes++
	return Node(n.nodes - 1)
}

// MeasureAcross makes the voltage that the solution reports for a device the one between a and b, which a
// series resistance of the same part may lie between. It does not change the circuit.
func (n *Network) MeasureAcross(d Device, a, b Node) {
	n.devices[d].measured = &Branch{a, b}
}

// AddResistor adds a resistance in ohms; zero is a short whose current is found.
func (n *Network) AddResistor(a, b Node, ohms float64) Device {
	return n.add(device{kind: resistor, branches: []Branch{{a, b}}, value: ohms})
}

// AddCapacitor adds a capacitance in farads; initial is its voltage before a cold start.
func (n *Network) AddCapacitor(a, b Node, farads, initial float64) Device {
	return n.add(device{kind: capacitor, branches: []Branch{{a, b}}, value: farads, initial: initial})
}

// AddInductor adds an inductance in henries; initial is its current before a cold start.
func (n *Network) AddInductor(a, b Node, henries, initial float64) Device {
	return n.add(device{kind: inductor, branches: []Branch{{a, b}}, value: henries, initial: initial})
}

// AddCoupling couples two inductors with factor k, |k| <= 1.
func (n *Network) AddCoupling(first, second Device, k float64) Device {
	return n.add(device{kind: coupling, value: k, partner: first, second: second})
}

// AddVoltageSource adds an independent voltage source, plus at a.
func (n *Network) AddVoltageSource(a, b Node, w Wave) Device {
	return n.add(device{kind: voltageSource, branches: []Branch{{a, b}}, wave: w})
}

// AddCurrentSource adds an independent current source that drives current from a through itself to b.
func (n *Network) AddCurrentSource(a, b Node, w Wave) Device {
	return n.add(device{kind: currentSource, branches: []Branch{{a, b}}, wave: w})
}

// AddVoltageControlledVoltage adds v(a,b) = gain v(control).
func (n *Network) AddVoltageControlledVoltage(a, b Node, control Branch, gain float64) Device {
	return n.add(device{kind: voltageControlledVoltage, branches: []Branch{{a, b}}, control: control, value: gain})
}

// AddVoltageControlledCurrent adds i(a to b) = gain v(control), gain in S.
func (n *Network) AddVoltageControlledCurrent(a, b Node, control Branch, gain float64) Device {
	return n.add(device{kind: voltageControlledCurrent, branches: []Branch{{a, b}}, control: control, value: gain})
}

// AddCurrentControlledVoltage adds v(a,b) = gain i(control), gain in ohms. The controlling device must be one
// that carries its current as an unknown: a voltage source, controlled voltage source, inductor or short.
func (n *Network) AddCurrentControlledVoltage(a, b Node, control Device, gain float64) Device {
	return n.add(device{kind: currentControlledVoltage, branches: []Branch{{a, b}}, partner: control, value: gain})
}

// AddCurrentControlledCurrent adds i(a to b) = gain i(control), with control as in AddCurrentControlledVoltage.
func (n *Network) AddCurrentControlledCurrent(a, b Node, control Device, gain float64) Device {
	return n.add(device{kind: currentControlledCurrent, branches: []Branch{{a, b}}, partner: control, value: gain})
}

// carriesCurrent reports whether the current of the device is an unknown of the nodal equations.
func (d *device) carriesCurrent() bool {
	switch d.kind {
	case voltageSource, voltageControlledVoltage, currentControlledVoltage, inductor:
		return true
	case resistor:
		return d.value == 0
	case nonlinear:
		return d.ports[0].output == outVoltage
	}
	return false
}

// Wave is the value of an independent source over time, periodic in the period of the network.
type Wave interface{ At(t float64) float64 }

// Level is a constant source value.
type Level float64

// At returns the level.
func (l Level) At(float64) float64 { return float64(l) }

// Sinusoid is Offset + Amplitude sin(2 pi Frequency t + Phase), Phase in radians.
type Sinusoid struct{ Offset, Amplitude, Frequency, Phase float64 }

// At evaluates the sinusoid at time t.
func (s Sinusoid) At(t float64) float64 {
	return s.Offset + s.Amplitude*math.Sin(2*math.Pi*s.Frequency*t+s.Phase)
}

// Func is a source given by an arbitrary function of time.
type Func func(t float64) float64

// At calls the function.
func (f Func) At(t float64) float64 { return f(t) }
