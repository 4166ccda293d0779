package study

import (
	"fmt"
	"strings"

	"railproof/netlist"
	"railproof/netlist/quantity"
)

// Assumption is a default that was used because nothing was stated.
type Assumption struct{ About, Value, Source string }

// Assumptions lists every default the plan uses, in a fixed order.
func (p *Plan) Assumptions() []Assumption {
	c := p.supply.Circuit
	var list []Assumption
	if p.DefaultLine && len(p.lines) > 0 {
		list = append(list, Assumption{"supply line", "-10 %..+10 % of the sources as drawn", DefaultLineSource})
	}
	if p.DefaultAmbient {
		list = append(list, Assumption{"ambient", "0..40 degC", "common practice"})
	}
	if p.LoadsAsDrawn {
		list = append(list, Assumption{"load", "none recognised: loads only as drawn", "the netlist names none"})
	} else {
		stated := map[netlist.ElementID]bool{}
		for _, l := range p.supply.Duty.Loads {
			stated[l.Element] = true
		}
		for _, l := range p.loads {
			if !stated[l.element] {
				list = append(list, Assumption{c.Elements[l.element].Name, "taken as the load, from none to its drawn value", "its name or its place on the rail"})
			}
		}
	}
	for k, q := range p.Parameters {
		if a, ok := p.toleranceAssumed(k, q); ok {
			list = append(list, a)
		}
	}
	for k := range c.Elements {
		e := &c.Elements[k]
		switch d := e.Device.(type) {
		case netlist.VoltageSource:
			if level, ends := finalLevel(d.Wave); ends {
				list = append(list, Assumption{e.Name, "does not repeat: its steady state is that of its final value, " + quantity.Format(level, quantity.Volt, 4), "its waveform"})
			}
		case netlist.Diode:
			if a, ok := p.supply.zenerAssumption(netlist.ElementID(k), &d); ok {
				list = append(list, a)
			}
			if p.supply.unknownBreakdown(netlist.ElementID(k), &d) != "" {
				continue
			}
			if d.Model != nil && !d.Model.Bare {
				continue
			}
			switch {
			case d.Model != nil:
				list = append(list, Assumption{e.Name, "forward law by the defaults of an empty model card (IS 1e-14 A, N 1)", "model " + d.Model.Name})
			case p.supply.rows[k] != nil && p.supply.rows[k].Model != nil:
				list = append(list, Assumption{e.Name, "forward law of the parts table: " + p.supply.rows[k].Model.Quality, p.supply.origins[k]})
			default:
				list = append(list, Assumption{e.Name, "no model for " + word(e.TypeName) + ": forward law by default (IS 1e-14 A, N 1)", "from memory"})
			}
		case netlist.Transistor:
			if a, ok := p.supply.transistorAssumption(netlist.ElementID(k), &d); ok {
				list = append(list, a)
			}
		case netlist.Fet:
			if d.Model != nil && d.Model.Bare {
				list = append(list, Assumption{e.Name, "by the defaults of an empty model card (VTO 0 V, KP 2e-5 A/V²)", "model " + d.Model.Name})
			}
		}
	}
	return list
}

// toleranceAssumed is the assumption behind a tolerance that nobody stated.
func (p *Plan) toleranceAssumed(k int, q Parameter) (Assumption, bool) {
	switch {
	case q.Symbol == symbolAmbient:
		return Assumption{"junctions", "as cold and as warm as the ambient, their forward law moved with it", "EG 1.11 eV and XTI 3, a metal barrier 0.69 eV and 2 (from memory)"}, true
	case strings.Contains(q.Origin, byPractice), strings.Contains(q.Origin, "memory"):
		return Assumption{p.ParameterName(k) + " tolerance", fmt.Sprintf("%+.3g %%..%+.3g %%", 100*q.Low, 100*q.High), q.Origin}, true
	}
	return Assumption{}, false
}

func word(name string) string {
	if name == "" {
		return "it"
	}
	return name
}

// LineWords puts the supply line into words: "207..253 V 50 Hz", or relative to the drawing.
func (p *Plan) LineWords() string {
	var words []string
	for _, l := range p.supply.Duty.Lines {
		text := l.Range.Format(4)
		if l.Frequency > 0 {
			text += " " + quantity.Format(l.Frequency, quantity.Hertz, 0)
		}
		if l.Source >= 0 {
			text = p.supply.Circuit.Elements[l.Source].Name + " " + text
		}
		words = append(words, text)
	}
	if len(words) == 0 {
		if len(p.lines) == 0 {
			return "no source"
		}
		return "as drawn -10 %..+10 %"
	}
	return strings.Join(words, ", ")
}

// LoadWords puts the load ranges into words: "ILOAD 0..0.6 A".
func (p *Plan) LoadWords() string {
	var words []string
	for _, l := range p.loads {
		r := quantity.Interval{Low: l.light, High: l.full, Unit: quantity.Ampere}
		if l.ohms {
			r = quantity.Interval{Low: l.full, High: l.light, Unit: quantity.Ohm}
		}
		words = append(words, p.supply.Circuit.Elements[l.element].Name+" "+r.Format(3))
	}
	if len(words) == 0 {
		return "as drawn"
	}
	return strings.Join(words, ", ")
}
