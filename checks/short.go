package checks

import (
	"railproof/checks/parts"
	"railproof/checks/study"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

var outputShort = &Check{
	Name: "output-short", Title: "stress with an output shorted",
	Applies: "resistors, diodes, zeners, regulators, transistors and windings, with each output shorted in turn",
	Stress:  "mean power; of diodes the mean and of windings the RMS current; until a fuse or a current limit acts",
	Rating:  "the rating itself, without policy: P70, PD, IFAV, Irms, Tj", Worst: "high line",
	Formula:      "zener resistor: Vin^2/R; regulator: Vin Ilim; winding: E/Rs",
	Assumptions:  "an advisory fault study: the short lasts until what limits it acts",
	SeverityRule: "minor; what blows at once is stated by fuse-current",
	Source:       "common practice of fault analysis",
	Remedy:       "a fuse or a current limit before the part, or a part that bears it",
	run: func(p *Pass) {
		solved, coupled := false, p.coupled()
		p.each(func(id netlist.ElementID, e *netlist.Element) {
			if f, ok := p.judgeShort(id, e, coupled[id]); ok {
				solved = true
				p.report(id, f)
			}
		})
		if !solved && len(p.Table.Plan.Loads()) > 0 {
			for _, id := range p.Table.Plan.Loads() {
				p.report(id, Finding{Verdict: Unproven, Reason: "the supply was not solved with this output shorted"})
			}
		}
	},
}

// judgeShort holds the stress of one part with an output shorted against its rating. ok is false where the
// table has none.
func (p *Pass) judgeShort(id netlist.ElementID, e *netlist.Element, coupled bool) (f Finding, ok bool) {
	power, current := p.get(e.Name, study.ShortPower), p.get(e.Name, study.ShortCurrent)
	const remedy = "a fuse or a current limit before it, or a part that bears it"
	u := upper{critical: Minor, remedy: remedy}
	watts := func(symbol netlist.Symbol) {
		u.stress, u.symbol, u.unit = power, symbol, quantity.Watt
	}
	amperes := func(symbol netlist.Symbol) {
		u.stress, u.symbol, u.unit = current, symbol, quantity.Ampere
	}
	switch e.Device.(type) {
	case netlist.Resistor:
		if p.isFuse(id) || p.isLimiter(id) || p.Table.Plan.IsLoad(id) || p.isCopper(id) {
			return Finding{}, false
		}
		watts("P70")
		u.steps = parts.ResistorPower
	case netlist.Diode:
		if p.Supply.IsZener(id) {
			watts("PD")
		} else {
			amperes("IFAV")
		}
	case netlist.Regulator:
		// It limits itself: its current is what counts, and heat is left to its thermal shutdown.
		amperes("Ilim")
	case netlist.Transistor, netlist.Fet:
		watts("PD")
	case netlist.Inductor, netlist.VoltageSource:
		rating, is := p.windingRating(id, coupled)
		if !is {
			return Finding{}, false
		}
		amperes("Irms")
		u.rating = rating
	}
	if u.stress == nil {
		return Finding{}, false
	}
	if u.rating == nil {
		u.rating = p.known(id, u.symbol)
	}
	return p.judgePlain(u), true
}
