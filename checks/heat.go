package checks

import (
	"fmt"
	"math"

	"railproof/checks/policy"
	"railproof/checks/study"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

// caseToSink is the thermal resistance from case to heat sink where none is stated, K/W: a greased mica
// washer under a TO-220 tab. Common practice.
const caseToSink = 1.0

// ambient is the highest temperature of the air around the parts, degC.
func (p *Pass) ambient() float64 { return p.Table.Plan.Ambient[1] }

// cooling is the stated thermal resistance from a heat sink to ambient.
func (p *Pass) cooling(id netlist.ElementID) (kelvinPerWatt float64, ok bool) {
	for _, c := range p.Supply.Duty.Coolings {
		if c.Element == id {
			return c.KPerW, true
		}
	}
	return 0, false
}

// heatPath is the way of the heat from a junction to the air.
type heatPath struct {
	resistance float64 // K/W
	inside     float64 // of it up to the sink, K/W; 0 without a sink
	sink       bool
	words      string
	missing    string // the symbol that is not known; then the rest is void
}

// heatPath finds the thermal resistance of an element: with a stated sink RthJC + RthCS + sink, else RthJA.
func (p *Pass) heatPath(id netlist.ElementID) heatPath {
	sink, cooled := p.cooling(id)
	if !cooled {
		r := p.known(id, "RthJA")
		if r == nil {
			return heatPath{missing: "RthJA"}
		}
		return heatPath{resistance: r.Value, words: fmt.Sprintf("RthJA %.3g K/W (%s)", r.Value, r.Origin)}
	}
	jc := p.known(id, "RthJC")
	if jc == nil {
		return heatPath{missing: "RthJC"}
	}
	cs, how := caseToSink, " (common practice)"
	if r := p.known(id, "RthCS"); r != nil {
		cs, how = r.Value, ""
	}
	return heatPath{
		resistance: jc.Value + cs + sink, inside: jc.Value + cs, sink: true,
		words: fmt.Sprintf("RthJC %.3g + RthCS %.3g%s + sink %.3g K/W", jc.Value, cs, how, sink),
	}
}

// What the poorest part bears: proven for a semiconductor of which nothing is stated. Common practice.
const (
	poorestResistance = 600.0 // K/W, junction to ambient, of the smallest cases
	poorestJunction   = 125.0 // degC
)

// junctionOf is a stated Tj, or that of the poorest part.
func junctionOf(limit *Rating) float64 {
	if limit == nil {
		return poorestJunction
	}
	return limit.Value
}

// judgeJunction holds the temperature of a junction at the highest ambient against Tj.
func (p *Pass) judgeJunction(id netlist.ElementID, power *study.Stress, key policy.Key) Finding {
	e := p.element(id)
	if !found(power) {
		return p.unsolvedStress(Finding{Stress: power}, "")
	}
	highest := power.Value + power.Error
	limit := p.known(id, "Tj")
	_, row := p.derate(0, key)
	path := p.heatPath(id)
	if rise := highest * poorestResistance; path.missing == "RthJA" && p.ambient()+rise <= row.Limit(junctionOf(limit)) && power.Unproven == "" {
		if limit == nil {
			limit = &Rating{Symbol: "Tj", Value: poorestJunction, Unit: quantity.Celsius, Origin: "any semiconductor, assumed", Source: "common practice", Confidence: policy.CommonPractice}
		}
		path = heatPath{resistance: poorestResistance, words: fmt.Sprintf("RthJA %g K/W assumed, that of the smallest cases", poorestResistance)}
	}
	if path.missing != "" {
		f := Finding{Stress: power, Rating: limit, Verdict: Unproven, Reason: "no rating " + path.missing + " is known"}
		statement := "rate " + e.Name + " " + path.missing + "=...K/W"
		switch {
		case limit == nil:
			statement += " Tj=...C"
		case highest > 0 && path.missing == "RthJA":
			room := math.Max(0, row.Limit(limit.Value)-p.ambient()) / highest
			statement += fmt.Sprintf(" (at most %.3g K/W), or cooling %s ...K/W", room, e.Name)
		}
		f.Needs = &Needs{Statement: statement}
		return f
	}
	s := derived(power, study.JunctionTemperature, quantity.Celsius, p.ambient(), path.resistance)
	f := p.judge(upper{
		stress: s, rating: limit, symbol: "Tj", unit: quantity.Celsius, key: key,
		note: fmt.Sprintf("%s at %.3g degC, %s", quantity.Format(power.Value, quantity.Watt, 3), p.ambient(), path.words),
	})
	if f.Needs != nil && f.Needs.Symbol == "Tj" {
		f.Needs.Value = s.Value + s.Error + row.Offset
	}
	if f.Verdict == Violated {
		f.Remedy = coolingRemedy(f.Limit.Value-p.ambient(), highest, path)
	}
	return f
}

// coolingRemedy says what thermal resistance would do for a rise in kelvin at a power in watts.
func coolingRemedy(rise, power float64, path heatPath) string {
	need := rise / power
	switch {
	case rise <= 0:
		return "the ambient alone is too hot: lower it"
	case path.sink && need > path.inside:
		return fmt.Sprintf("a heat sink of at most %.2g K/W", roundDown(need-path.inside))
	case path.sink:
		return fmt.Sprintf("no heat sink is enough (%.3g K/W up to the sink, %.3g K/W allowed): lower the power or share it", path.inside, need)
	}
	return fmt.Sprintf("at most %.3g K/W from junction to ambient: a heat sink, more copper, or a part of another case", need)
}

// roundDown rounds to two figures, towards zero.
func roundDown(x float64) float64 {
	if x <= 0 {
		return 0
	}
	scale := math.Pow(10, math.Floor(math.Log10(x))-1)
	return math.Floor(x/scale+1e-9) * scale
}
