package checks

import (
	"fmt"
	"slices"

	"railproof/checks/parts"
	"railproof/checks/policy"
	"railproof/checks/study"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

var resistorPower = &Check{
	Name: "resistor-power", Title: "resistor power",
	Applies: "every resistor; loads, fuses, inrush limiters, zener resistors and the copper of a declared winding aside",
	Stress:  "mean power over the period", Rating: "P70, derated linearly from 70 degC to nothing at the highest film temperature",
	Worst: "high line; resistor at the end of its tolerance", Policy: policy.ResistorPower,
	Formula:      "P = Vrms^2/R",
	Assumptions:  "film resistor: full power to 70 degC, zero at 155 degC; where P70 is not known, what the smallest leaded type bears, 0.125 W, is taken as proven",
	SeverityRule: standardSeverity,
	Source:       "derating line of metal film resistors: makers' data after IEC 60115",
	Remedy:       "the next standard power rating",
	run: func(p *Pass) {
		p.eachPlainResistor(func(id netlist.ElementID, e *netlist.Element) {
			s, rating := p.get(e.Name, study.MeanPower), p.known(id, "P70")
			f := p.judgeResistor(id, s, rating)
			if rating == nil {
				f = assume(f, p.judgeResistor(id, s, smallestPower))
			}
			p.report(id, f)
		})
	},
}

var resistorVoltage = &Check{
	Name: "resistor-voltage", Title: "resistor voltage",
	Applies: "every resistor; loads, fuses, inrush limiters and the copper of a declared winding aside",
	Stress:  "largest voltage across it", Rating: "Umax, the limiting element voltage",
	Worst: "high line, light load", Policy: policy.ResistorVoltage,
	Formula:      "a bleeder sees the crest of its reservoir",
	Assumptions:  "Umax is held against the crest; where it is not known, what the smallest leaded type bears, 150 V, is taken as proven",
	SeverityRule: standardSeverity,
	Source:       "limiting voltages of 150 to 500 V by size: makers' data of metal film resistors",
	Remedy:       "a larger type, or two in series",
	run: func(p *Pass) {
		p.eachPlainResistor(func(id netlist.ElementID, e *netlist.Element) { p.resistorVoltage(id, e) })
		for _, id := range p.zenerResistors() {
			p.resistorVoltage(id, p.element(id))
		}
	},
}

// The least ratings of the standard leaded types: what stays inside them is proven for a resistor of which nothing
// is stated.
var (
	smallestPower = &Rating{Symbol: "P70", Value: 0.125, Unit: quantity.Watt, Origin: "the smallest standard leaded type, assumed",
		Source: "power steps of metal film resistors, makers' data", Confidence: parts.Seen}
	smallestVoltage = &Rating{Symbol: "Umax", Value: 150, Unit: quantity.Volt, Origin: "the smallest standard leaded type, assumed",
		Source: "limiting voltages of metal film resistors, makers' data", Confidence: parts.Seen}
)

// assume takes the finding on an assumed least rating in place of one that lacks its rating, if it is proven.
func assume(lacking, assumed Finding) Finding {
	if assumed.Verdict == Proven {
		return assumed
	}
	return lacking
}

func (p *Pass) resistorVoltage(id netlist.ElementID, e *netlist.Element) {
	u := upper{
		stress: p.get(e.Name, study.PeakVoltage), rating: p.known(id, "Umax"), symbol: "Umax", unit: quantity.Volt,
		key: policy.ResistorVoltage, remedy: "a larger type, or two in series",
	}
	f := p.judge(u)
	if u.rating == nil {
		u.rating = smallestVoltage
		f = assume(f, p.judge(u))
	}
	p.report(id, f)
}

// eachPlainResistor calls f for every resistor that is neither a load, a fuse, an inrush limiter nor the
// series resistor of a zener.
func (p *Pass) eachPlainResistor(f func(id netlist.ElementID, e *netlist.Element)) {
	zeners := p.zenerResistors()
	p.each(func(id netlist.ElementID, e *netlist.Element) {
		if _, ok := e.Device.(netlist.Resistor); !ok || p.isFuse(id) || p.isLimiter(id) || p.Table.Plan.IsLoad(id) || slices.Contains(zeners, id) || p.isCopper(id) {
			return
		}
		f(id, e)
	})
}

// isCopper reports whether a resistor is drawn for the copper of a declared winding: nothing else meets
// between the two.
func (p *Pass) isCopper(id netlist.ElementID) bool {
	c := p.Circuit()
	for _, w := range p.Supply.Duty.Windings {
		for _, n := range c.Elements[w.Source].Nodes {
			if list := c.Touching(n); n != netlist.Ground && len(list) == 2 && slices.Contains(list, id) {
				return true
			}
		}
	}
	return false
}

// isFuse reports whether a resistor stands for a fuse.
func (p *Pass) isFuse(id netlist.ElementID) bool {
	if _, ok := p.element(id).Device.(netlist.Resistor); !ok {
		return false
	}
	_, rated := p.Supply.Property(id, "IN")
	_, family := p.Supply.Property(id, "family")
	return rated || family
}

// isLimiter reports whether a resistor stands for an inrush limiter.
func (p *Pass) isLimiter(id netlist.ElementID) bool {
	_, ok := p.Supply.Property(id, "Rcold")
	return ok
}

// judgeResistor holds a mean power against P70 at the highest ambient.
func (p *Pass) judgeResistor(id netlist.ElementID, s *study.Stress, rating *Rating) Finding {
	factor, note := p.resistorFactor(rating)
	return p.judgeDerated(upper{
		stress: s, rating: rating, symbol: "P70", unit: quantity.Watt, key: policy.ResistorPower, steps: parts.ResistorPower, note: note,
	}, factor)
}

// resistorFactor is what the ambient leaves of P70.
func (p *Pass) resistorFactor(rating *Rating) (factor float64, note string) {
	line, ok := parts.ResistorLine(parts.DefaultResistorStyle)
	if !ok {
		return 1, ""
	}
	factor = line.Factor(p.ambient())
	if factor < 1 && rating != nil {
		note = fmt.Sprintf("P70 %s derated to %s at %.3g degC", quantity.Format(rating.Value, quantity.Watt, 3),
			quantity.Format(factor*rating.Value, quantity.Watt, 3), p.ambient())
	}
	return factor, note
}

// withShort adds to a finding on power what the part takes with the output shorted: beyond the rating it is
// a fire hazard, major.
func (p *Pass) withShort(id netlist.ElementID, f Finding) Finding {
	short := p.get(p.element(id).Name, study.ShortPower)
	if !found(short) {
		return f
	}
	f.Note = join(f.Note, "output shorted: "+quantity.Format(short.Value, quantity.Watt, 3))
	if f.Rating == nil || f.Verdict == Violated || short.Value+short.Error <= f.Rating.Value {
		return f
	}
	f.Verdict, f.Severity, f.Stress, f.Limit = Violated, Major, short, p.unchanged(f.Rating.Value)
	f.Margin = (f.Rating.Value - short.Value - short.Error) / f.Rating.Value
	f.Remedy = ratingRemedy(upper{symbol: "P70", unit: quantity.Watt, steps: parts.ResistorPower}, short.Value+short.Error)
	return f
}
