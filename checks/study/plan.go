package study

import (
	"fmt"
	"math"
	"strings"

	"railproof/netlist"
	"railproof/netlist/quantity"
)

// The supply line where nothing is said: -10 %..+10 % (IEC 60038 as commonly quoted; common practice).
const (
	defaultLineLow  = 0.9
	defaultLineHigh = 1.1
	// DefaultLineSource names where the default range is from.
	DefaultLineSource                     = "common practice, after IEC 60038"
	defaultAmbientLow, defaultAmbientHigh = 0, 40 // degC, common practice for indoor equipment
)

// Plan is what the study of a supply varies: the line, the loads, the ambient.
type Plan struct {
	supply   *Supply
	period   float64 // s; 0: all sources constant
	Blocked  string  // why no steady state exists at all; empty: it does
	loads    []loadRange
	windings map[netlist.ElementID]netlist.Winding
	lines    map[netlist.ElementID][2]float64 // factors at low and high line, by source
	Ambient  [2]float64
	// Parameters are the toleranced quantities.
	Parameters []Parameter
	index      map[statedKey]int
	sizes      []int // of each island, its nodes
	searched   []int // of each island, its toleranced parameters
	islands    []int // of each element, the independent part of the circuit it belongs to; -1: none
	// Doubtful lists the sources whose amplitude looks like an RMS value of the mains.
	Doubtful []netlist.ElementID
	// Undeclared lists the sinusoidal sources that are neither line nor winding.
	Undeclared                                []netlist.ElementID
	DefaultLine, DefaultAmbient, LoadsAsDrawn bool
}

// loadRange is a load that varies. For a resistor the light end is the higher resistance.
type loadRange struct {
	element     netlist.ElementID
	light, full float64 // A or ohm
	ohms        bool
}

// resistance at a position from 0 (light) to 1 (full): conductance goes linearly between the ends.
func (l loadRange) resistance(position float64) float64 {
	light := 0.0
	if !math.IsInf(l.light, 1) && l.light > 0 {
		light = 1 / l.light
	}
	g := light + (1/l.full-light)*position
	if g <= 1/openOhms {
		return openOhms
	}
	return 1 / g
}

func (l loadRange) current(position float64) float64 { return l.light + (l.full-l.light)*position }

// NewPlan decides what to vary.
func NewPlan(s *Supply) *Plan {
	p := &Plan{
		supply: s, windings: map[netlist.ElementID]netlist.Winding{},
		lines: map[netlist.ElementID][2]float64{}, index: map[statedKey]int{},
		Ambient: [2]float64{defaultAmbientLow, defaultAmbientHigh}, DefaultAmbient: true,
	}
	period, err := commonPeriod(s.Circuit)
	if err != nil {
		p.Blocked = err.Error()
	}
	p.period = period
	if a := s.Duty.Ambient; a != nil {
		p.Ambient, p.DefaultAmbient = [2]float64{a.Low, a.High}, false
	}
	for _, w := range s.Duty.Windings {
		p.windings[w.Source] = w
	}
	for _, source := range s.Circuit.SineSources(s.Duty) {
		if source.LooksRMS {
			p.Doubtful = append(p.Doubtful, source.Element)
		}
	}
	p.planLine()
	p.planLoads()
	p.planIslands()
	p.planTolerances()
	return p
}

func (p *Plan) planLine() {
	general := [2]float64{defaultLineLow, defaultLineHigh}
	p.DefaultLine = true
	declared := map[netlist.ElementID]bool{}
	for _, l := range p.supply.Duty.Lines {
		ends := [2]float64{l.Range.Low / l.Nominal, l.Range.High / l.Nominal}
		if l.Source < 0 {
			general, p.DefaultLine = ends, false
			continue
		}
		p.lines[l.Source] = ends
		declared[l.Source] = true
		p.DefaultLine = false
	}
	sines := false
	for k := range p.supply.Circuit.Elements {
		if _, sine := sineOf(&p.supply.Circuit.Elements[k]); sine {
			sines = true
		}
	}
	for k := range p.supply.Circuit.Elements {
		id, e := netlist.ElementID(k), &p.supply.Circuit.Elements[k]
		v, isVoltage := e.Device.(netlist.VoltageSource)
		_, sine := sineOf(e)
		constant, isConstant := v.Wave.(netlist.Constant)
		if !sine && !(isVoltage && isConstant && constant.Level != 0 && !sines) {
			continue
		}
		if _, ok := p.lines[id]; !ok {
			p.lines[id] = general
		}
		if sine && isVoltage && !declared[id] {
			if _, ok := p.windings[id]; !ok && !p.drivesTransformer(id) {
				p.Undeclared = append(p.Undeclared, id)
			}
		}
	}
}

// sineOf returns the sine of an independent source.
func sineOf(e *netlist.Element) (netlist.Sine, bool) {
	switch d := e.Device.(type) {
	case netlist.VoltageSource:
		s, ok := d.Wave.(netlist.Sine)
		return s, ok && s.Amplitude != 0
	case netlist.CurrentSource:
		s, ok := d.Wave.(netlist.Sine)
		return s, ok && s.Amplitude != 0
	}
	return netlist.Sine{}, false
}

// drivesTransformer reports whether a source feeds a modelled transformer: coupled inductors reached
// through resistances, switches and fuses.
func (p *Plan) drivesTransformer(id netlist.ElementID) bool {
	c := p.supply.Circuit
	coupled := map[netlist.ElementID]bool{}
	for k := range c.Elements {
		if d, ok := c.Elements[k].Device.(netlist.Coupling); ok {
			for _, l := range d.Inductors {
				coupled[l] = true
			}
		}
	}
	seen := map[netlist.NodeID]bool{}
	queue := append([]netlist.NodeID(nil), c.Elements[id].Nodes...)
	for len(queue) > 0 {
		n := queue[0]
		queue = queue[1:]
		if seen[n] || n == netlist.Ground {
			continue
		}
		seen[n] = true
		for _, t := range c.Nodes[n].Terminals {
			if coupled[t.Element] {
				return true
			}
			e := &c.Elements[t.Element]
			switch e.Device.(type) {
			case netlist.Resistor, netlist.Inductor:
				queue = append(queue, e.Nodes...)
			}
		}
	}
	return false
}

// bare reports whether a source has no resistance or inductance drawn in series with it.
func (p *Plan) bare(id netlist.ElementID) bool {
	c := p.supply.Circuit
	if v, ok := c.Elements[id].Device.(netlist.VoltageSource); !ok || v.SeriesOhms > 0 {
		return false
	}
	for _, n := range c.Elements[id].Nodes {
		if n == netlist.Ground || len(c.Nodes[n].Terminals) != 2 {
			continue
		}
		for _, t := range c.Nodes[n].Terminals {
			switch d := c.Elements[t.Element].Device.(type) {
			case netlist.Resistor:
				if d.Ohms > 0 {
					return false
				}
			case netlist.Inductor:
				return false
			}
		}
	}
	return true
}

func (p *Plan) planLoads() {
	given := map[netlist.ElementID]bool{}
	for _, l := range p.supply.Duty.Loads {
		e := &p.supply.Circuit.Elements[l.Element]
		given[l.Element] = true
		r := loadRange{element: l.Element}
		if l.Range.Unit == quantity.Ohm {
			r.ohms, r.full, r.light = true, l.Range.Low, l.Range.High
		} else if res, ok := e.Device.(netlist.Resistor); ok {
			// Amperes stated for a resistor: it stands for a load of that current at its drawn voltage.
			r.ohms, r.full, r.light = true, res.Ohms, math.Inf(1)
		} else {
			r.light, r.full = l.Range.Low, l.Range.High
		}
		p.loads = append(p.loads, r)
	}
	for _, id := range p.supply.Circuit.FindLoads(p.supply.Duty) {
		if given[id] {
			continue
		}
		switch d := p.supply.Circuit.Elements[id].Device.(type) {
		case netlist.Resistor:
			if d.Ohms > 0 {
				p.loads = append(p.loads, loadRange{element: id, full: d.Ohms, light: math.Inf(1), ohms: true})
			}
		case netlist.CurrentSource:
			if w, ok := d.Wave.(netlist.Constant); ok {
				p.loads = append(p.loads, loadRange{element: id, full: w.Level})
			}
		}
	}
	p.LoadsAsDrawn = len(p.loads) == 0
}

func (p *Plan) loadOf(id netlist.ElementID) (int, bool) {
	for k, l := range p.loads {
		if l.element == id {
			return k, true
		}
	}
	return 0, false
}

// IsLoad reports whether an element is one of the loads.
func (p *Plan) IsLoad(id netlist.ElementID) bool { _, ok := p.loadOf(id); return ok }

// Loads returns the elements that are loads.
func (p *Plan) Loads() []netlist.ElementID {
	ids := make([]netlist.ElementID, len(p.loads))
	for k, l := range p.loads {
		ids[k] = l.element
	}
	return ids
}

func (p *Plan) lineFactor(id netlist.ElementID, set *Setting) float64 {
	ends, ok := p.lines[id]
	if !ok {
		return 1
	}
	switch set.Line {
	case LineLow:
		return ends[0]
	case LineHigh:
		return ends[1]
	case LineBetween:
		return ends[0] + (ends[1]-ends[0])*set.LineAt
	}
	return 1
}

// factor is the multiplier of a toleranced quantity in a setting, 1 if it has no tolerance.
func (p *Plan) factor(set *Setting, id netlist.ElementID, symbol netlist.Symbol) float64 {
	if set.Shift == nil {
		return 1
	}
	k, ok := p.index[statedKey{id, symbol}]
	if !ok {
		return 1
	}
	return p.Parameters[k].factor(set.Shift[k])
}

// condition puts a setting into words.
func (p *Plan) condition(set *Setting) Condition {
	solved := *set
	if set.Nominal {
		start := "steady"
		if set.Cold {
			start = "cold"
		}
		return Condition{Name: "nominal", Line: "as-written", Load: "as-written", Start: start, setting: &solved}
	}
	c := Condition{Line: set.Line.String(), Load: "as-written", Start: "steady", setting: &solved}
	if set.Cold {
		c.Start = "cold"
	}
	words := []string{set.Line.String() + " line"}
	if set.Line == LineBetween {
		words[0] = fmt.Sprintf("line at %.0f %% of its range", 100*set.LineAt)
	}
	if len(p.loads) > 0 {
		c.Load = p.loadWords(set.Loads)
		words = append(words, c.Load+" load")
		if strings.Contains(c.Load, " ") {
			words[len(words)-1] = c.Load
		}
	} else {
		words = append(words, "load as drawn")
	}
	if set.Cold {
		words = append(words, "cold start")
	}
	c.Name = strings.Join(words, ", ")
	for k, position := range set.Shift {
		if position == 0 {
			continue
		}
		c.Also = append(c.Also, p.shiftWords(k, set))
	}
	return c
}

func (p *Plan) loadWords(positions []float64) string {
	light, full := true, true
	for _, x := range positions {
		light = light && x == 0
		full = full && x == 1
	}
	switch {
	case light:
		return "light"
	case full:
		return "full"
	case len(positions) == 1:
		return fmt.Sprintf("%.0f %% load", 100*positions[0])
	}
	parts := make([]string, len(positions))
	for k, x := range positions {
		word := fmt.Sprintf("at %.0f %%", 100*x)
		if x == 0 {
			word = "light"
		} else if x == 1 {
			word = "full"
		}
		parts[k] = p.supply.Circuit.Elements[p.loads[k].element].Name + " " + word
	}
	return strings.Join(parts, ", ")
}
