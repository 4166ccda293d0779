package checks

import (
	"math"

	"railproof/checks/study"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

// typicalRejection is the part of a typical ripple rejection that counts where no least one is known: 6 dB less,
// common practice.
const typicalRejection = 0.5

func (p *Pass) judgeRailRipple(r *netlist.Rail, node string) Finding {
	swing, factor := p.get(node, study.RipplePeakToPeak), p.get(node, study.RippleFactor)
	rating := &Rating{Symbol: "ripple", Value: *r.Ripple, Unit: quantity.Volt, Confidence: "stated",
		Origin: "rail " + p.Circuit().Nodes[r.Node].Name + " ripple=" + quantity.Format(*r.Ripple, quantity.Volt, 4)}
	if swing == nil {
		return p.unsolvedStress(Finding{Rating: rating}, "the voltage of this node was not solved")
	}
	note := ""
	if found(factor) {
		note = "ripple factor " + quantity.Percent(factor.Value, 3)
	}
	u := upper{
		stress: swing, rating: rating, symbol: "ripple", unit: quantity.Volt, note: note, critical: Major,
		remedy: "a larger reservoir, a second filter, or a regulator with more ripple rejection",
	}
	id, regulated := p.regulatorOf(r.Node)
	if !regulated {
		return p.judgePlain(u)
	}
	e := p.element(id)
	input := p.get("node:"+p.Circuit().Nodes[e.Nodes[0]].Name, study.RipplePeakToPeak)
	if !found(input) || !found(swing) {
		return p.judgePlain(u)
	}
	rejection, about, known := p.rejection(id)
	if !known {
		f := p.judgePlain(u)
		if f.Verdict == Proven && input.Value > 0 {
			f.Verdict, f.Reason = Unproven, "how much of the ripple at its input "+e.Name+" lets through is unknown"
			f.Needs = &Needs{Symbol: "PSRRmin", Value: math.Ceil((input.Value + input.Error) / math.Max(*r.Ripple-swing.Value-swing.Error, *r.Ripple/100)), Unit: quantity.One}
		}
		return f
	}
	through := *swing
	passed := input.Value / rejection
	through.Value += passed
	through.Error += input.Error / rejection
	u.stress = &through
	u.note = join(u.note, quantity.Format(passed, quantity.Volt, 3)+" of it let through by "+e.Name+" from "+quantity.Format(input.Value, quantity.Volt, 3)+" at its input, "+about)
	return p.judgePlain(u)
}

// regulatorOf finds the series regulator that puts out a node.
func (p *Pass) regulatorOf(node netlist.NodeID) (netlist.ElementID, bool) {
	for k := range p.Circuit().Elements {
		e := &p.Circuit().Elements[k]
		if d, ok := e.Device.(netlist.Regulator); ok && !d.Shunt && len(e.Nodes) > 2 && e.Nodes[2] == node {
			return netlist.ElementID(k), true
		}
	}
	return 0, false
}

// rejection is the ratio of the ripple at the input of a regulator to what it lets through.
func (p *Pass) rejection(id netlist.ElementID) (ratio float64, about string, known bool) {
	if least := p.known(id, "PSRRmin"); least != nil && least.Value > 0 {
		return least.Value, decibels(least.Value) + " at least", true
	}
	if typical := p.known(id, "PSRR"); typical != nil && typical.Value > 0 {
		return typical.Value * typicalRejection, decibels(typical.Value) + " typical, 6 dB less counted", true
	}
	return 0, "", false
}

func decibels(ratio float64) string {
	return quantity.Format(math.Round(20*math.Log10(ratio)), quantity.One, 3) + " dB"
}
