package study

import (
	"errors"
	"fmt"
	"math"

	"railproof/checks/solver"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

// collector receives the stresses of one outcome.
type collector struct {
	plan    *Plan
	out     *outcome
	element string
	island  *solvedIsland
	emit    func(Stress)
	cond    Condition
	joint   *solver.Device // set when the element was put together from several islands
}

// A solution that could not be refined far enough still proves a stress whose own numerical error, which counts
// against the part, is below these: relative, and absolute in the unit of the quantity.
const (
	loose      = 0.01
	looseFloor = 1e-3
)

func (c *collector) put(q Quantity, unit quantity.Unit, s *signal, pick func(solver.Stats) (float64, float64)) {
	st := Stress{Element: c.element, Quantity: q, Unit: unit, Condition: c.cond, Phase: math.NaN(), Value: math.NaN()}
	switch {
	case c.island.blocked != "":
		st.Unproven = c.island.blocked
	case c.island.err != nil && (!errors.Is(c.island.err, solver.ErrInaccurate) || c.island.solution == nil):
		st.Unproven = c.island.err.Error()
	}
	if c.island.solution != nil && c.island.blocked == "" {
		st.Value, st.Error, st.Phase = s.read(c.island.solution, pick)
		if c.island.err != nil && st.Unproven == "" && st.Error > loose*math.Abs(st.Value)+looseFloor {
			st.Unproven = fmt.Sprintf("its value changes with the time step, by %s at the finest", quantity.Format(st.Error, unit, 2))
		}
	}
	c.emit(st)
}

// extract reads every stress of an outcome and hands it to emit, elements in netlist order, then nodes.
func (p *Plan) extract(out *outcome, emit func(Stress)) {
	circuit := p.supply.Circuit
	cond := p.condition(&out.set)
	for k := range circuit.Elements {
		id, e := netlist.ElementID(k), &circuit.Elements[k]
		c := &collector{plan: p, out: out, element: e.Name, emit: emit, cond: cond}
		dev := none
		c.island = &solvedIsland{err: out.failed}
		if out.low != nil {
			dev = out.low.devices[id]
			i := out.islandOf(circuit, id)
			if out.only != nil && !out.only[i] {
				continue
			}
			if i >= 0 {
				c.island = &out.islands[i]
			}
		}
		c.elementStresses(id, e, dev)
		if !out.set.Nominal && (dev != none || c.island.solution == nil) {
			c.checkStresses(id, e, dev)
		}
	}
	for k := 1; k < len(circuit.Nodes); k++ {
		c := &collector{plan: p, out: out, element: "node:" + circuit.Nodes[k].Name, emit: emit, cond: cond}
		c.island = &solvedIsland{err: out.failed}
		local := 0
		if out.only != nil && !out.only[out.nodes[k].island] {
			continue
		}
		if out.low != nil && out.nodes[k].island >= 0 {
			c.island = &out.islands[out.nodes[k].island]
			local = out.nodes[k].index
		} else if out.failed == nil {
			continue
		}
		v := potential(local)
		alternates := 0.01
		if out.set.Nominal {
			alternates = 1e-6
		}
		c.put(MeanVoltage, quantity.Volt, v, mean)
		c.put(MinVoltage, quantity.Volt, v, smallest)
		c.put(MaxVoltage, quantity.Volt, v, largest)
		c.put(RippleRMS, quantity.Volt, v, alternating)
		c.put(RipplePeakToPeak, quantity.Volt, v, swing)
		c.put(RippleFactor, quantity.One, v, func(st solver.Stats) (float64, float64) {
			ac, _ := alternating(st)
			if math.Abs(st.Mean) < 1e-9+alternates*ac { // of an alternating voltage there is none
				return 0, math.NaN()
			}
			return ac / math.Abs(st.Mean), math.NaN()
		})
	}
}

// voltage and current are the signals of a branch of the device that stands for the element.
func (c *collector) voltage(dev solver.Device, branch int) *signal {
	return branchVoltage(c.local(dev), branch)
}

func (c *collector) current(dev solver.Device, branch int) *signal {
	return branchCurrent(c.local(dev), branch)
}

// share puts a source that several islands use together again: its current is the sum of its currents there.
func (c *collector) share(dev solver.Device) {
	if dev == none || len(c.out.uses[dev]) < 2 {
		return
	}
	var fine, coarse []*solver.Trajectory
	var devices []solver.Device
	joint := solvedIsland{}
	for _, p := range c.out.uses[dev] {
		is := &c.out.islands[p.island]
		if is.blocked != "" && joint.blocked == "" {
			joint.blocked = is.blocked
		}
		if is.err != nil && joint.err == nil {
			joint.err = is.err
		}
		if is.solution == nil {
			c.island = &joint
			return
		}
		fine, coarse = append(fine, is.solution.Fine), append(coarse, is.solution.Coarse)
		devices = append(devices, solver.Device(p.index))
	}
	f, local := solver.Sum(fine, devices)
	g, _ := solver.Sum(coarse, devices)
	joint.solution = &solver.Solution{Fine: f, Coarse: g}
	c.island = &joint
	c.joint = &local
}

func (c *collector) local(dev solver.Device) solver.Device {
	if c.joint != nil {
		return *c.joint
	}
	if dev == none || c.out.home == nil {
		return 0
	}
	return solver.Device(c.out.home[dev].index)
}

func (c *collector) elementStresses(id netlist.ElementID, e *netlist.Element, dev solver.Device) {
	if dev == none && c.island.solution != nil {
		c.island = &solvedIsland{err: c.island.err, blocked: c.island.blocked}
		if c.island.blocked == "" && c.island.err == nil {
			return
		}
	}
	v, i := c.voltage(dev, 0), c.current(dev, 0)
	power := product(v, i)
	switch d := e.Device.(type) {
	case netlist.Diode:
		c.put(PeakReverseVoltage, quantity.Volt, scaled(-1, v), positive)
		c.put(MeanCurrent, quantity.Ampere, i, mean)
		c.put(RMSCurrent, quantity.Ampere, i, rms)
		c.put(PeakCurrent, quantity.Ampere, i, magnitude)
		if !c.out.set.Nominal && c.plan.supply.IsZener(id) {
			c.put(MinCurrent, quantity.Ampere, scaled(-1, i), smallest) // its working current
		}
		c.put(MeanPower, quantity.Watt, power, mean)
	case netlist.Capacitor:
		c.put(MaxVoltage, quantity.Volt, v, largest)
		c.put(MinVoltage, quantity.Volt, v, smallest)
		c.put(MeanVoltage, quantity.Volt, v, mean)
		c.put(RippleCurrentRMS, quantity.Ampere, i, rms)
	case netlist.Resistor:
		c.put(MeanPower, quantity.Watt, power, mean)
		c.put(PeakVoltage, quantity.Volt, v, magnitude)
		c.put(RMSCurrent, quantity.Ampere, i, rms)
	case netlist.Inductor, netlist.VoltageSource, netlist.CurrentSource, netlist.VoltageControlled, netlist.CurrentControlled, netlist.Behavioural:
		c.share(dev)
		i = c.current(dev, 0)
		c.put(RMSCurrent, quantity.Ampere, i, rms)
		c.put(MeanCurrent, quantity.Ampere, i, mean)
		c.put(PeakCurrent, quantity.Ampere, i, magnitude)
		c.put(MinCurrent, quantity.Ampere, i, smallest)
		local := c.local(dev)
		c.put(MeanPower, quantity.Watt, figure(func(tr *solver.Trajectory) float64 { return tr.MeanPower(local, 0) }), mean)
	case netlist.Transistor, netlist.Fet:
		q := MaxVCE
		if _, fet := d.(netlist.Fet); fet {
			q = MaxVDS
		}
		c.put(q, quantity.Volt, v, magnitude)
		c.put(PeakCurrent, quantity.Ampere, i, magnitude)
		base := product(c.voltage(dev, 1), c.current(dev, 1))
		c.put(MeanPower, quantity.Watt, combine(1, power, 1, base), mean)
	case netlist.Switch:
		c.put(MeanPower, quantity.Watt, power, mean)
		c.put(PeakVoltage, quantity.Volt, v, magnitude)
		c.put(RMSCurrent, quantity.Ampere, i, rms)
	case netlist.Regulator:
		c.regulatorStresses(id, &d, dev)
	}
}

// positive picks the largest value, not below zero.
func positive(st solver.Stats) (float64, float64) {
	if st.Max.Value < 0 {
		return 0, math.NaN()
	}
	return st.Max.Value, st.Max.At
}

// wrongWay is the mean input voltage, V, against its polarity from which a regulator's pins count as mistaken.
const wrongWay = 1.0

// meanOf is the mean of a signal of the island's solution.
func (c *collector) meanOf(s *signal) float64 { return s.stats(c.island.solution.Fine).Mean }

func (c *collector) regulatorStresses(id netlist.ElementID, d *netlist.Regulator, dev solver.Device) {
	if d.Shunt {
		v, i := c.voltage(dev, 0), c.current(dev, 0)
		c.put(MeanPower, quantity.Watt, product(v, i), mean)
		c.put(MaxInputVoltage, quantity.Volt, v, largest)
		c.put(MaxOutputCurrent, quantity.Ampere, i, largest)
		c.put(MinCurrent, quantity.Ampere, i, smallest)
		return
	}
	law := solver.Regulator{Sign: 1}
	if c.out.low != nil {
		if l, ok := c.out.low.regulators[id]; ok {
			law = l
		}
	}
	vin, iin := c.voltage(dev, 0), c.current(dev, 0)
	vout, iout := c.voltage(dev, 1), c.current(dev, 1)
	differential := combine(law.Sign, vin, -law.Sign, vout)
	if c.island.solution != nil && c.island.blocked == "" && law.Sign*c.meanOf(vin) < -wrongWay {
		doubtful := *c.island
		doubtful.blocked = "its input has the wrong polarity for its type: state its pins with part ... pins="
		c.island = &doubtful
	}
	set, dropout := law.Set, law.Dropout
	if !c.out.set.Nominal {
		// Held against the high end of the output voltage, wherever in its tolerance this condition has it.
		set = c.plan.highOutput(id, law.Set/c.plan.factor(&c.out.set, id, "VOUT"))
	}
	c.put(MinDifferential, quantity.Volt, differential, smallest)
	c.put(MinHeadroom, quantity.Volt, scaled(law.Sign, vin), func(st solver.Stats) (float64, float64) {
		return st.Min.Value - set - dropout, st.Min.At
	})
	c.put(MaxInputVoltage, quantity.Volt, scaled(law.Sign, vin), largest)
	c.put(MeanPower, quantity.Watt, combine(1, product(vin, iin), 1, product(vout, iout)), mean)
	c.put(MaxOutputCurrent, quantity.Ampere, scaled(-law.Sign, iout), largest)
}

// highOutput is the output voltage of a regulator at the high end of its tolerance.
func (p *Plan) highOutput(id netlist.ElementID, set float64) float64 {
	if k, ok := p.index[statedKey{id, "VOUT"}]; ok {
		return set * (1 + p.Parameters[k].High)
	}
	return set
}
