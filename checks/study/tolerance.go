package study

import (
	"fmt"
	"math"

	"railproof/netlist"
)

// Parameter is a quantity with a tolerance: of one element, of several that vary together, or of the whole supply.
type Parameter struct {
	Element netlist.ElementID // the first; supplyWide for a circumstance of the whole supply
	Others  []netlist.ElementID
	Symbol  netlist.Symbol // of the quantity that varies: "R", "C", "L", "ESR", "VZ", "VOUT", "VDO", "VF", "Rw", "BF", "f", "TA"
	// Low and High are the relative ends: -0.2, +0.2; of "TA" the ambient in degC.
	Low, High float64
	Origin    string // where the tolerance is known from
}

// supplyWide stands for the element of a parameter that no element has.
const supplyWide netlist.ElementID = -1

// Circumstances that are parameters of the whole supply.
const (
	symbolFrequency netlist.Symbol = "f"
	symbolAmbient   netlist.Symbol = "TA"
	symbolWinding   netlist.Symbol = "Rw" // resistance of a stated winding
	symbolForward   netlist.Symbol = "VF"
	symbolGain      netlist.Symbol = "BF"
)

// factor is the multiplier of a parameter at its position.
func (p Parameter) factor(position float64) float64 {
	if position < 0 {
		return 1 - position*p.Low
	}
	return 1 + position*p.High
}

// byPractice marks a tolerance that a rule of thumb gives.
const byPractice = "common practice"

// Tolerances where nothing is said, each common practice unless another source stands beside it.
const (
	resistorTolerance     = 0.05
	electrolyticTolerance = 0.20
	zenerTolerance        = 0.05
	chokeTolerance        = 0.20
	// electrolyticFrom is the capacitance from which a capacitor is taken as an electrolytic, F.
	electrolyticFrom = 10e-6
	// An electrolytic ages by a fifth of its capacitance and to twice its series resistance; a stated resistance is
	// the largest of a new part, half of which is common.
	agedCapacitance   = 0.20
	agedResistance    = 2.0
	leastResistance   = 0.5
	forwardTolerance  = 0.10 // of a forward voltage from a model card
	forwardBelowLimit = 0.20 // by which the forward voltage may stay below the maximum that a table states
	// Copper at 20 degC has four fifths of its resistance at 80 degC (0.393 %/K, IEC 60028); tables and statements
	// give a warm winding.
	coldCopper, hotCopper  = 0.20, 0.10
	gainLow, gainHigh      = 0.5, 1.0
	frequencyTolerance     = 0.01
	frequencyToleranceFrom = "EN 50160 (from memory): 50 Hz +/-1 % for 99.5 % of a year"
	ambientFrom            = "the ambient"
)

// planTolerances lists the toleranced parameters of the supply.
func (p *Plan) planTolerances() {
	c := p.supply.Circuit
	if p.period > 0 {
		origin := byPractice
		if cycles := p.period * 50; math.Abs(cycles-math.Round(cycles)) < 1e-6 {
			origin = frequencyToleranceFrom
		}
		p.addParameter(Parameter{Element: supplyWide, Symbol: symbolFrequency, Low: -frequencyTolerance, High: frequencyTolerance, Origin: origin})
	}
	if p.hasJunctions() && p.Ambient[1] > p.Ambient[0] {
		p.addParameter(Parameter{Element: supplyWide, Symbol: symbolAmbient, Low: p.Ambient[0], High: p.Ambient[1], Origin: ambientFrom})
	}
	for k := range c.Elements {
		p.elementTolerances(netlist.ElementID(k), &c.Elements[k])
	}
	p.forwardTolerances()
	for _, q := range p.Parameters {
		if q.Element != supplyWide && p.islands[q.Element] >= 0 {
			p.searched[p.islands[q.Element]]++
		}
	}
}

func (p *Plan) addParameter(q Parameter) {
	if q.Low == 0 && q.High == 0 {
		return
	}
	for _, id := range append([]netlist.ElementID{q.Element}, q.Others...) {
		p.index[statedKey{id, q.Symbol}] = len(p.Parameters)
	}
	p.Parameters = append(p.Parameters, q)
}

func (p *Plan) hasJunctions() bool {
	for k := range p.supply.Circuit.Elements {
		switch p.supply.Circuit.Elements[k].Device.(type) {
		case netlist.Diode, netlist.Transistor:
			return true
		}
	}
	return false
}

// elementTolerances adds the parameters that one element has for itself.
func (p *Plan) elementTolerances(id netlist.ElementID, e *netlist.Element) {
	s := p.supply
	low, high, origin := 0.0, 0.0, ""
	if t, ok := s.Property(id, "tolerance"); ok {
		low, high, origin = t.Low, t.High, t.Origin
		if low == high {
			low, high = -math.Abs(low), math.Abs(low)
		}
	}
	stated := origin != ""
	otherwise := func(a, b float64) {
		if !stated {
			low, high, origin = a, b, byPractice
		}
	}
	add := func(symbol netlist.Symbol, low, high float64, origin string) {
		p.addParameter(Parameter{Element: id, Symbol: symbol, Low: low, High: high, Origin: origin})
	}
	switch d := e.Device.(type) {
	case netlist.Resistor:
		if p.IsLoad(id) && !stated || d.Ohms == 0 {
			return
		}
		otherwise(-resistorTolerance, resistorTolerance)
		add("R", low, high, origin)
	case netlist.Capacitor:
		if d.Farads >= electrolyticFrom {
			otherwise(-electrolyticTolerance, electrolyticTolerance)
			low, origin = (1+low)*(1-agedCapacitance)-1, origin+", aged -20 % (common practice)"
			if _, ok := s.Property(id, "ESR"); ok {
				add("ESR", leastResistance-1, agedResistance-1, "half of a new part to twice when aged, common practice")
			}
		}
		add("C", low, high, origin)
	case netlist.Inductor:
		if !p.coupled(id) && d.Henries > 0 {
			otherwise(-chokeTolerance, chokeTolerance)
		}
		add("L", low, high, origin)
	case netlist.Diode:
		vz, ok := s.zenerVoltage(id)
		if !ok {
			return
		}
		otherwise(-zenerTolerance, zenerTolerance)
		vmin, okMin := s.Property(id, "VZmin")
		vmax, okMax := s.Property(id, "VZmax")
		if !stated && okMin && okMax {
			low, high, origin = vmin.Value()/vz-1, vmax.Value()/vz-1, vmin.Origin
		}
		add("VZ", low, high, origin)
	case netlist.Transistor:
		if law := s.tableLaw(id, &d); law != nil {
			p.gainTolerance(id, law)
		} else if d.Model != nil && !d.Model.Bare {
			add(symbolGain, -gainLow, gainHigh, byPractice)
		}
	case netlist.VoltageSource:
		if w, ok := p.windings[id]; ok && !w.AsDrawn {
			add(symbolWinding, -coldCopper, hotCopper, "cold to hot copper, common practice")
		}
	case netlist.Regulator:
		p.regulatorTolerances(id, &d, stated, low, high, origin)
	}
}

func (p *Plan) regulatorTolerances(id netlist.ElementID, d *netlist.Regulator, stated bool, low, high float64, origin string) {
	s := p.supply
	nominal, min, max := netlist.Symbol("VOUT"), netlist.Symbol("VOUTmin"), netlist.Symbol("VOUTmax")
	if d.Adjustable || d.Shunt {
		nominal, min, max = "VREF", "VREFmin", "VREFmax"
	}
	if !stated {
		v, ok := s.Property(id, nominal)
		vmin, okMin := s.Property(id, min)
		vmax, okMax := s.Property(id, max)
		if ok && okMin && okMax && v.Value() != 0 && !s.isStated(id, nominal) {
			low, high, origin = vmin.Value()/v.Value()-1, vmax.Value()/v.Value()-1, vmin.Origin
		}
	}
	p.addParameter(Parameter{Element: id, Symbol: "VOUT", Low: low, High: high, Origin: origin})
	typical, okTypical := s.Property(id, "VDOtyp")
	most, okMost := s.Property(id, "VDO")
	if okTypical && okMost && !s.isStated(id, "VDO") && most.Value() > typical.Value() && typical.Value() > 0 {
		p.addParameter(Parameter{Element: id, Symbol: "VDO", Low: typical.Value()/most.Value() - 1, Origin: typical.Origin})
	}
}

// forwardTolerances adds the forward voltages of the diodes: those of one type in one independent part of the
// circuit vary together, as parts of one reel do.
func (p *Plan) forwardTolerances() {
	type group struct {
		island int
		of     string
	}
	var order []group
	members := map[group][]netlist.ElementID{}
	c := p.supply.Circuit
	for k := range c.Elements {
		d, ok := c.Elements[k].Device.(netlist.Diode)
		if !ok {
			continue
		}
		name := c.Elements[k].TypeName
		if d.Model != nil {
			name = d.Model.Name
		}
		g := group{p.islands[k], name}
		if members[g] == nil {
			order = append(order, g)
		}
		members[g] = append(members[g], netlist.ElementID(k))
	}
	for _, g := range order {
		list := members[g]
		q := Parameter{Element: list[0], Others: list[1:], Symbol: symbolForward, Low: -forwardTolerance, High: forwardTolerance, Origin: byPractice}
		d := c.Elements[list[0]].Device.(netlist.Diode)
		if row := p.supply.rows[list[0]]; d.Model == nil && row != nil && row.Model != nil {
			q.Low, q.High = -forwardBelowLimit, 0
			q.Origin = "the table states a maximum; below it common practice"
		}
		p.addParameter(q)
	}
}

// planIslands finds out which elements depend on one another.
func (p *Plan) planIslands() {
	c := p.supply.Circuit
	p.islands = make([]int, len(c.Elements))
	laid, parts := p.lay(Setting{})
	p.sizes, p.searched = make([]int, len(parts)), make([]int, len(parts))
	for i, part := range parts {
		p.sizes[i] = len(part.Nodes)
	}
	for k := range p.islands {
		p.islands[k] = laid.islandOf(c, netlist.ElementID(k))
	}
}

// coupled reports whether an inductor is a winding of a transformer.
func (p *Plan) coupled(id netlist.ElementID) bool {
	for k := range p.supply.Circuit.Elements {
		if d, ok := p.supply.Circuit.Elements[k].Device.(netlist.Coupling); ok {
			for _, l := range d.Inductors {
				if l == id {
					return true
				}
			}
		}
	}
	return false
}

// temperature is that of the junctions, degC: of a netlist as written its own, else that of the ambient end in
// question, else as near to the netlist's own as the ambient allows.
func (p *Plan) temperature(set *Setting) float64 {
	own := p.supply.Circuit.Temperature
	if set.Nominal {
		return own
	}
	middle := math.Min(math.Max(own, p.Ambient[0]), p.Ambient[1])
	k, ok := p.index[statedKey{supplyWide, symbolAmbient}]
	if !ok || set.Shift == nil {
		return middle
	}
	position := set.Shift[k]
	if position < 0 {
		return middle - position*(p.Ambient[0]-middle)
	}
	return middle + position*(p.Ambient[1]-middle)
}

// shiftWords puts a parameter at a position into words: "C1 at -20 %", "junctions at 0 degC".
func (p *Plan) shiftWords(k int, set *Setting) string {
	q := p.Parameters[k]
	position := set.Shift[k]
	if q.Symbol == symbolAmbient {
		return fmt.Sprintf("junctions at %.3g degC", p.temperature(set))
	}
	end := q.High
	if position < 0 {
		end = q.Low
	}
	return fmt.Sprintf("%s at %+.3g %%", p.ParameterName(k), 100*end*math.Abs(position))
}

// ParameterName names a parameter: "C1", "U1 VOUT", "D1..D4 VF", "line frequency".
func (p *Plan) ParameterName(k int) string {
	q := p.Parameters[k]
	switch q.Symbol {
	case symbolFrequency:
		return "line frequency"
	case symbolAmbient:
		return "junction temperature"
	}
	c := p.supply.Circuit
	name := c.Elements[q.Element].Name
	switch len(q.Others) {
	case 0:
	case 1:
		name += ", " + c.Elements[q.Others[0]].Name
	default:
		name += ".." + c.Elements[q.Others[len(q.Others)-1]].Name
	}
	switch q.Symbol {
	case "R", "C", "L":
		return name
	case symbolWinding:
		return name + " winding resistance"
	case symbolGain:
		return name + " current gain"
	}
	return name + " " + string(q.Symbol)
}
