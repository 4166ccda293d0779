package study

import (
	"fmt"
	"math"

	"railproof/checks/solver"
	"railproof/netlist"
)

// lowered is a supply turned into equations for one setting.
type lowered struct {
	net     *solver.Network
	devices []solver.Device // element -> its device, -1 if it has none
	// headroom describes each regulator element for the extraction of its stresses.
	regulators map[netlist.ElementID]solver.Regulator
	// blocked says why the elements of the islands of these devices cannot be proven.
	blocked map[solver.Device]string
}

const none solver.Device = -1

// shortOhms stands for a shorted output: a few centimetres of wire and its joints (our choice).
const shortOhms = 10e-3

// openOhms stands for an open load.
const openOhms = 1e15

// loadKnee is the voltage below which a constant-current load fades, V (our choice: loads of practice stop
// drawing their rated current somewhere below their working voltage).
const loadKnee = 1.0

// nominalKnee is the same for a load exactly as written, V.
const nominalKnee = 1e-3

// lower builds the network of the supply in one setting.
func (s *Supply) lower(set *Setting, plan *Plan) (*lowered, error) {
	c := s.Circuit
	low := &lowered{
		net: solver.New(len(c.Nodes)), devices: make([]solver.Device, len(c.Elements)),
		regulators: map[netlist.ElementID]solver.Regulator{}, blocked: map[solver.Device]string{},
	}
	low.net.Period = plan.period / plan.factor(set, supplyWide, symbolFrequency)
	for k := range low.devices {
		low.devices[k] = none
	}
	// Elements that others refer to come first.
	for pass := range 2 {
		for k := range c.Elements {
			e := &c.Elements[k]
			_, controlled := e.Device.(netlist.CurrentControlled)
			_, coupled := e.Device.(netlist.Coupling)
			_, behavioural := e.Device.(netlist.Behavioural)
			if late := controlled || coupled || behavioural; late != (pass == 1) {
				continue
			}
			if err := low.add(s, netlist.ElementID(k), e, set, plan); err != nil {
				return nil, fmt.Errorf("%s: %w", e.Name, err)
			}
		}
	}
	low.net.Anchor()
	return low, nil
}

func (low *lowered) add(s *Supply, id netlist.ElementID, e *netlist.Element, set *Setting, plan *Plan) error {
	n := low.net
	at := func(k int) solver.Node {
		if k < len(e.Nodes) {
			return solver.Node(e.Nodes[k])
		}
		return solver.Reference
	}
	if set.Short != nil && *set.Short == id && len(e.Nodes) >= 2 {
		low.devices[id] = n.AddResistor(at(0), at(1), shortOhms)
		return nil
	}
	shift := func(symbol netlist.Symbol) float64 { return plan.factor(set, id, symbol) }
	var dev solver.Device
	switch d := e.Device.(type) {
	case netlist.Resistor:
		ohms := d.Ohms
		if load, ok := plan.loadOf(id); ok && set.Loads != nil {
			ohms = plan.loads[load].resistance(set.Loads[load])
		} else if ohms < 0 {
			return fmt.Errorf("a negative resistance of %g ohm has no stress", ohms)
		}
		if cold, ok := s.Property(id, "Rcold"); ok && set.Nominal && set.Cold {
			ohms = cold.Value()
		}
		if hot, ok := s.Property(id, "Rhot"); ok && !set.Nominal {
			// An inrush limiter is hot in the steady state, and at the restart after a dip, which is worse than
			// the cold start with it cold.
			ohms = hot.Value()
		}
		dev = n.AddResistor(at(0), at(1), ohms*shift("R"))
	case netlist.Capacitor:
		farads := d.Farads * shift("C")
		if esr := s.number(id, "ESR", 0) * shift("ESR"); esr > 0 && !set.Nominal || esr > 0 && s.writtenOnCard(id, "ESR") {
			inner := n.AddNode()
			dev = n.AddCapacitor(at(0), inner, farads, set.Charge[id])
			n.AddResistor(inner, at(1), esr)
			n.MeasureAcross(dev, at(0), at(1))
			break
		}
		dev = n.AddCapacitor(at(0), at(1), farads, set.Charge[id])
	case netlist.Inductor:
		if d.Henries == 0 {
			dev = n.AddResistor(at(0), at(1), 0)
			break
		}
		if esr := s.number(id, "Rcu", 0); esr > 0 && s.writtenOnCard(id, "Rcu") {
			inner := n.AddNode()
			dev = n.AddInductor(at(0), inner, d.Henries*shift("L"), 0)
			n.AddResistor(inner, at(1), esr)
			n.MeasureAcross(dev, at(0), at(1))
			break
		}
		dev = n.AddInductor(at(0), at(1), d.Henries*shift("L"), 0)
	case netlist.Coupling:
		for i, a := range d.Inductors {
			for _, b := range d.Inductors[i+1:] {
				if low.devices[a] == none || low.devices[b] == none {
					return fmt.Errorf("couples an inductor that is not there")
				}
				dev = n.AddCoupling(low.devices[a], low.devices[b], d.Factor)
			}
		}
	case netlist.Diode:
		if why := s.unknownBreakdown(id, &d); why != "" {
			low.block(n, e, why)
			return nil
		}
		dev = n.AddDiode(at(0), at(1), s.diode(id, &d, set, plan))
	case netlist.Transistor:
		law, why := s.bipolar(id, &d, shift(symbolGain), plan.temperature(set))
		if why != "" {
			low.block(n, e, why)
			return nil
		}
		dev = n.AddBipolar(at(0), at(1), at(2), law)
	case netlist.Fet:
		bulk := at(3)
		if len(e.Nodes) < 4 {
			bulk = at(2)
		}
		law, why := s.fet(id, &d)
		if why != "" {
			low.block(n, e, why)
			return nil
		}
		dev = n.AddFet(at(0), at(1), at(2), bulk, law)
	case netlist.Switch:
		if d.Model == nil {
			low.block(n, e, "no .model for the switch")
			return nil
		}
		dev = n.AddSwitch(at(0), at(1), solver.Branch{A: at(2), B: at(3)}, solver.Switch{
			Threshold: d.Model.VT, Hysteresis: math.Abs(d.Model.VH), ROn: math.Max(d.Model.RON, 1e-6), ROff: d.Model.ROFF,
		})
	case netlist.VoltageSource:
		dev = low.voltageSource(s, id, e, &d, set, plan)
	case netlist.CurrentSource:
		dev = low.currentSource(id, e, &d, set, plan)
	case netlist.VoltageControlled:
		control := solver.Branch{A: at(2), B: at(3)}
		if d.Output == netlist.OutVoltage {
			dev = n.AddVoltageControlledVoltage(at(0), at(1), control, d.Gain)
		} else {
			dev = n.AddVoltageControlledCurrent(at(0), at(1), control, d.Gain)
		}
	case netlist.CurrentControlled:
		control := low.devices[d.Control]
		if control == none {
			return fmt.Errorf("is controlled by an element that carries no current")
		}
		if d.Output == netlist.OutVoltage {
			dev = n.AddCurrentControlledVoltage(at(0), at(1), control, d.Gain)
		} else {
			dev = n.AddCurrentControlledCurrent(at(0), at(1), control, d.Gain)
		}
	case netlist.Behavioural:
		dev = low.behavioural(e, &d)
	case netlist.Regulator:
		added, why := low.regulator(s, id, e, &d, set, plan)
		if why != "" {
			low.block(n, e, why)
			return nil
		}
		dev = added
	case netlist.Unknown:
		low.block(n, e, d.Why)
		return nil
	default:
		return fmt.Errorf("unexpected device %T", d)
	}
	low.devices[id] = dev
	return nil
}

// block marks the islands that an element without a model touches: its terminals are tied by resistances so
// high that they change nothing but keep the island together.
func (low *lowered) block(n *solver.Network, e *netlist.Element, why string) {
	reason := e.Name + ": " + why
	for k := 1; k < len(e.Nodes); k++ {
		low.blocked[n.AddResistor(solver.Node(e.Nodes[0]), solver.Node(e.Nodes[k]), 1e12)] = reason
	}
	if len(e.Nodes) == 1 {
		low.blocked[n.AddResistor(solver.Node(e.Nodes[0]), solver.Reference, 1e12)] = reason
	}
}

func (low *lowered) voltageSource(s *Supply, id netlist.ElementID, e *netlist.Element, d *netlist.VoltageSource, set *Setting, plan *Plan) solver.Device {
	n := low.net
	plus, minus := solver.Node(e.Nodes[0]), solver.Node(e.Nodes[1])
	ohms := d.SeriesOhms
	wave := d.Wave
	if w, ok := plan.windings[id]; ok && !set.Nominal && !w.AsDrawn {
		if sine, ok := wave.(netlist.Sine); ok {
			sine.Amplitude = math.Copysign(math.Sqrt2*w.Voltage*(1+w.Regulation), sine.Amplitude)
			wave = sine
			ohms += w.Voltage * w.Regulation / w.Current * plan.factor(set, id, symbolWinding)
		}
	}
	if _, fed := plan.lines[id]; fed && set.LineOff {
		return n.AddResistor(plus, minus, openOhms)
	}
	source := plan.wave(wave, plan.lineFactor(id, set), set)
	if ohms > 0 {
		inner := n.AddNode()
		n.AddResistor(plus, inner, ohms)
		dev := n.AddVoltageSource(inner, minus, source)
		n.MeasureAcross(dev, plus, minus)
		return dev
	}
	return n.AddVoltageSource(plus, minus, source)
}

func (low *lowered) currentSource(id netlist.ElementID, e *netlist.Element, d *netlist.CurrentSource, set *Setting, plan *Plan) solver.Device {
	n := low.net
	plus, minus := solver.Node(e.Nodes[0]), solver.Node(e.Nodes[1])
	if load, ok := plan.loadOf(id); ok {
		if set.Loads != nil && !set.Nominal {
			return n.AddConstantCurrentLoad(plus, minus, plan.loads[load].current(set.Loads[load]), loadKnee)
		}
		if w, constant := d.Wave.(netlist.Constant); constant && w.Level > 0 {
			// Constant but for the last millivolt, so that it cannot drive an empty supply negative.
			return n.AddConstantCurrentLoad(plus, minus, w.Level, nominalKnee)
		}
	}
	return n.AddCurrentSource(plus, minus, plan.wave(d.Wave, 1, set))
}

func (low *lowered) behavioural(e *netlist.Element, d *netlist.Behavioural) solver.Device {
	probes := d.Expression.Probes()
	list := make([]solver.Probe, len(probes))
	for k, p := range probes {
		if p.Current {
			list[k] = solver.Probe{IsCurrent: true, Current: low.devices[p.Element]}
		} else {
			list[k] = solver.Probe{Voltage: solver.Branch{A: solver.Node(p.Plus), B: solver.Node(p.Minus)}}
		}
	}
	return low.net.AddFunctionSource(solver.Node(e.Nodes[0]), solver.Node(e.Nodes[1]), d.Output == netlist.OutVoltage, list, d.Expression.Evaluate)
}
