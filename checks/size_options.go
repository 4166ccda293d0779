package checks

import (
	"math"
	"slices"

	"railproof/checks/parts"
	"railproof/checks/policy"
	"railproof/checks/study"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

// How many steps of a series are tried: three decades of E6, two of E24, two of E12.
const (
	capacitorSpan = 18
	resistorSpan  = 48
	chokeSpan     = 24
)

// largestReservoir is the capacitance beyond which no reservoir is offered, F. Common practice.
const largestReservoir = 0.1

// valueOptions lists, by check, the values whose change may mend its violations, the first to try first.
var valueOptions = map[string]func(z *sizer, f *Finding, id netlist.ElementID) []adjustment{
	regulatorHeadroom.Name: func(z *sizer, _ *Finding, id netlist.ElementID) []adjustment { return z.reservoirUp(id) },
	zenerPower.Name:        func(z *sizer, _ *Finding, id netlist.ElementID) []adjustment { return z.feederOf(id, false) },
	zenerRegulation.Name: func(z *sizer, _ *Finding, id netlist.ElementID) []adjustment {
		return append(z.feederOf(id, true), z.reservoirUp(id)...)
	},
	zenerResistorPower.Name: func(z *sizer, _ *Finding, id netlist.ElementID) []adjustment { return z.resistor(id, false) },
	chokeInductance.Name:    func(z *sizer, _ *Finding, id netlist.ElementID) []adjustment { return z.chokeUp(id) },
	storedCharge.Name:       func(z *sizer, _ *Finding, id netlist.ElementID) []adjustment { return z.bleeder(id) },
}

// adjustments lists what may mend a violation: ratings first, then values.
func (z *sizer) adjustments(f *Finding) []adjustment {
	id, part := z.supply.Circuit.Find(f.Element)
	if !part {
		if f.Check == railRipple.Name || f.Check == railVoltage.Name && tooLow(f) {
			return z.railReservoir(f.Element)
		}
		return nil
	}
	list := z.ratings(f, id)
	if option, ok := valueOptions[f.Check]; ok {
		list = append(list, option(z, f, id)...)
	}
	return slices.DeleteFunc(list, func(a adjustment) bool { return len(a.values) == 0 })
}

// tooLow reports whether a rail is too near to zero, as a reservoir may mend: of a negative rail that is its upper end.
func tooLow(f *Finding) bool { return f.Limit != nil && f.Floor == (f.Limit.Value > 0) }

// reservoirUp offers a larger reservoir of the rail that an element is in.
func (z *sizer) reservoirUp(id netlist.ElementID) []adjustment {
	for _, rail := range z.rails {
		holds := slices.ContainsFunc(rail.Stages, func(s netlist.RailStage) bool { return slices.Contains(s.Elements, id) })
		if a := z.reservoir(rail); holds && a != nil {
			return a
		}
	}
	if e := z.pass.element(id); len(e.Nodes) == 3 {
		return z.larger(z.pass.capacitorsAt(e, 0))
	}
	return nil
}

// railReservoir offers a larger reservoir of the rail that delivers at a node.
func (z *sizer) railReservoir(node string) []adjustment {
	for _, rail := range z.rails {
		passes := slices.ContainsFunc(rail.Stages, func(s netlist.RailStage) bool { return "node:"+s.NodeName == node })
		if a := z.reservoir(rail); passes && a != nil {
			return a
		}
	}
	return nil
}

func (z *sizer) reservoir(rail netlist.RailChain) []adjustment {
	stage, ok := rail.Stage(netlist.StageReservoir)
	if !ok {
		return nil
	}
	return z.larger(stage.Elements)
}

// larger offers more capacitance in the largest of some capacitors; equal ones change together.
func (z *sizer) larger(list []netlist.ElementID) []adjustment {
	a := adjustment{symbol: "C", unit: quantity.Farad}
	for _, id := range list {
		c, ok := z.supply.Circuit.Elements[id].Device.(netlist.Capacitor)
		switch {
		case !ok || c.Farads < a.from || c.Farads <= 0:
		case c.Farads > a.from:
			a.from, a.elements = c.Farads, []netlist.ElementID{id}
		default:
			a.elements = append(a.elements, id)
		}
	}
	if a.elements == nil {
		return nil
	}
	a.series = parts.E12
	if a.from >= electrolyticFrom {
		a.series = parts.E6
	}
	a.values = steps(a.series, a.from, false, capacitorSpan)
	if k := slices.IndexFunc(a.values, func(v float64) bool { return v > largestReservoir }); k >= 0 {
		a.values = a.values[:k]
	}
	return []adjustment{a}
}

// feederOf offers another series resistor of a zener.
func (z *sizer) feederOf(zener netlist.ElementID, down bool) []adjustment {
	for _, feed := range z.supply.Circuit.ZenerFeeds() {
		if feed.Zener == zener {
			return z.resistor(feed.Resistor, down)
		}
	}
	return nil
}

func (z *sizer) resistor(id netlist.ElementID, down bool) []adjustment {
	r, ok := z.supply.Circuit.Elements[id].Device.(netlist.Resistor)
	if !ok || r.Ohms <= 0 {
		return nil
	}
	return []adjustment{{elements: []netlist.ElementID{id}, symbol: "R", unit: quantity.Ohm, from: r.Ohms, series: parts.E24, down: down,
		values: steps(parts.E24, r.Ohms, down, resistorSpan)}}
}

func (z *sizer) chokeUp(id netlist.ElementID) []adjustment {
	l, ok := z.supply.Circuit.Elements[id].Device.(netlist.Inductor)
	if !ok || l.Henries <= 0 {
		return nil
	}
	return []adjustment{{elements: []netlist.ElementID{id}, symbol: "L", unit: quantity.Henry, from: l.Henries, series: parts.E12,
		values: steps(parts.E12, l.Henries, false, chokeSpan)}}
}

// bleeder offers a smaller resistor across a capacitor, or where there is none one from twice the value that the
// formula gives.
func (z *sizer) bleeder(id netlist.ElementID) []adjustment {
	e := z.pass.element(id)
	for _, other := range z.supply.Circuit.Between(e.Nodes[0], e.Nodes[1]) {
		if _, ok := z.supply.Circuit.Elements[other].Device.(netlist.Resistor); ok && !z.table.Plan.IsLoad(other) {
			return z.resistor(other, true)
		}
	}
	c, ok := e.Device.(netlist.Capacitor)
	crest := z.pass.largerMagnitude(e.Name, study.MaxVoltage, study.MinVoltage)
	profile, _ := z.pass.profile()
	if !ok || !found(crest) || crest.Value <= profile.Voltage {
		return nil
	}
	start := 2 * Bleeder(c.Farads, crest.Value+crest.Error, profile.Voltage, profile.Within)
	return []adjustment{{elements: []netlist.ElementID{id}, symbol: SymbolBleeder, unit: quantity.Ohm, from: math.Inf(1), series: parts.E24,
		down: true, values: steps(parts.E24, start, true, resistorSpan)}}
}

// sinkSymbol stands for the thermal resistance of a heat sink that the duty sheet states.
const sinkSymbol netlist.Symbol = "cooling"

// ratings offers a higher rating: the steps of its series, or where there is none the rating that is needed.
func (z *sizer) ratings(f *Finding, id netlist.ElementID) []adjustment {
	if f.Rating == nil || f.Limit == nil || !found(f.Stress) {
		return nil
	}
	a := adjustment{elements: []netlist.ElementID{id}, symbol: f.Rating.Symbol, unit: f.Rating.Unit, from: f.Rating.Value}
	switch {
	case a.symbol == "Tj":
		return z.cooler(f, id)
	case f.Check == capacitorVoltage.Name && a.symbol == "US":
		a.symbol = "UR"
	case f.Check == fuseSurge.Name:
		if fuse := z.fuseSteps(id, false); len(fuse) > 0 && z.pass.known(id, "I2t") == nil {
			return fuse
		}
	case f.Check == fuseCurrent.Name && a.symbol == "IN":
		return z.fuseSteps(id, f.Floor)
	case f.Floor, f.Check == regulatorBackflow.Name: // a diode protects it, no type bears its own output
		return nil
	}
	if _, known := netlist.FindSymbol(string(a.symbol)); !known {
		return nil
	}
	if p, ok := z.supply.Property(id, a.symbol); ok {
		a.from = p.Value()
	}
	needed := (f.Stress.Value + f.Stress.Error) * a.from / f.Limit.Value
	if !(needed > a.from) || math.IsInf(needed, 0) {
		return nil
	}
	if a.series = z.seriesOf(id, a.symbol); a.series == "" {
		a.values = []float64{roundUp(needed)}
		return []adjustment{a}
	}
	a.values = steps(a.series, a.from, false, len(parts.Steps(a.series)))
	if tj, rth := z.pass.known(id, "Tj"), z.pass.known(id, "RthJA"); a.symbol == "PD" && tj != nil && rth != nil {
		a.beside = z.coolerPart(f, id, tj.Value)
	}
	return []adjustment{a}
}

// coolerPart is the thermal resistance that a zener of more power must have too: in free air that is what limits it.
func (z *sizer) coolerPart(f *Finding, id netlist.ElementID, tj float64) func(float64) []netlist.Rating {
	_, row := z.pass.derate(1, policy.ZenerPower)
	left := (f.Stress.Value + f.Stress.Error) / row.Factor
	return func(float64) []netlist.Rating {
		return []netlist.Rating{stated(id, "RthJA", roundDown((tj-z.pass.ambient())/left), quantity.KelvinPerWatt)}
	}
}

func (z *sizer) fuseSteps(id netlist.ElementID, down bool) []adjustment {
	in := z.pass.known(id, "IN")
	if in == nil {
		return nil
	}
	return []adjustment{{elements: []netlist.ElementID{id}, symbol: "IN", unit: quantity.Ampere, from: in.Value, series: parts.FuseCurrent, down: down,
		values: steps(parts.FuseCurrent, in.Value, down, len(parts.Steps(parts.FuseCurrent)))}}
}

// cooler offers less thermal resistance: of the stated sink, else from junction to ambient.
func (z *sizer) cooler(f *Finding, id netlist.ElementID) []adjustment {
	path := z.pass.heatPath(id)
	rise, had := f.Limit.Value-z.pass.ambient(), f.Stress.Value+f.Stress.Error-z.pass.ambient()
	if path.missing != "" || rise <= 0 || had <= 0 {
		return nil
	}
	to := path.resistance * rise / had
	a := adjustment{elements: []netlist.ElementID{id}, symbol: "RthJA", unit: quantity.KelvinPerWatt, from: path.resistance, down: true}
	if path.sink {
		a.symbol, a.from, to = sinkSymbol, path.resistance-path.inside, to-path.inside
	}
	if to = roundDown(to); to > 0 {
		a.values = []float64{to}
	}
	return []adjustment{a}
}

// seriesOf is the series of standard ratings of an element, empty where there is none.
func (z *sizer) seriesOf(id netlist.ElementID, symbol netlist.Symbol) parts.StepKind {
	switch d := z.pass.element(id).Device.(type) {
	case netlist.Diode:
		switch symbol {
		case "VRRM":
			return parts.VRRMSteps
		case "IFAV":
			return parts.IFAVSteps
		case "PD":
			return parts.ZenerPower
		}
	case netlist.Capacitor:
		if symbol == "UR" {
			_, steps := z.pass.dielectric(id, &d)
			return steps
		}
	case netlist.Resistor:
		switch symbol {
		case "P70":
			return parts.ResistorPower
		case "IN":
			return parts.FuseCurrent
		}
	case netlist.Regulator:
		if symbol == "IO" {
			return parts.RegulatorCurrent
		}
	}
	return ""
}
