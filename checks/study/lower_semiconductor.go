package study

import (
	"math"

	"railproof/checks/solver"
	"railproof/netlist"
)

// Defaults of a diode that neither a model card nor the parts table describes: the defaults of a D card.
const (
	defaultIS = 1e-14 // A
	defaultN  = 1.0
)

// breakdownSlope is NBV of a zener whose dynamic impedance is unknown.
const breakdownSlope = 1.0

// diode returns the law of a diode: its model card, else the forward law of its row, else the defaults;
// with the breakdown of its zener voltage where the card states none.
func (s *Supply) diode(id netlist.ElementID, d *netlist.Diode, set *Setting, plan *Plan) solver.Diode {
	celsius := plan.temperature(set)
	vt := solver.ThermalVoltage(celsius)
	law := solver.Diode{IS: defaultIS, N: defaultN, VT: vt, NBV: 1}
	row := s.rows[id]
	if d.Model != nil {
		m := d.Model
		law.IS, law.N, law.RS = m.IS, m.N, m.RS
		law.BV, law.IBV, law.NBV = m.BV, m.IBV, m.NBV
	} else if row != nil && row.Model != nil {
		law.IS, law.N, law.RS = row.Model.IS, row.Model.N, row.Model.RS
	}
	if area := d.Area; area > 0 && area != 1 {
		law.IS *= area
		law.IBV *= area
		law.RS /= area
	}
	if law.BV == 0 {
		if vz, ok := s.zenerVoltage(id); ok {
			izt := s.number(id, "IZT", 5e-3)
			law.BV, law.IBV, law.NBV = vz, izt, breakdownSlope
			if zzt, ok := s.Property(id, "ZZT"); ok {
				law.NBV = math.Max(1, zzt.Value()*izt/vt)
			}
		}
	}
	law.IS = saturation(law.IS, law.N, s.Circuit.Temperature, celsius)
	if law.BV > 0 {
		law.BV *= plan.factor(set, id, "VZ") * (1 + s.number(id, "TC", 0)*(celsius-s.Circuit.Temperature))
	}
	if law.IBV <= 0 {
		law.IBV = 1e-3
	}
	if shift := plan.factor(set, id, symbolForward); shift != 1 {
		// A forward voltage lower or higher by a fraction: scale the emission coefficient and resistance.
		law.N *= shift
		law.RS *= shift
	}
	return law
}

// zenerVoltage is the rated working voltage of a zener, if the element is known to be one.
func (s *Supply) zenerVoltage(id netlist.ElementID) (float64, bool) {
	if p, ok := s.Property(id, "VZ"); ok {
		return p.Value(), true
	}
	return 0, false
}

// regulator adds a regulator, or says why it cannot.
func (low *lowered) regulator(s *Supply, id netlist.ElementID, e *netlist.Element, d *netlist.Regulator, set *Setting, plan *Plan) (solver.Device, string) {
	n := low.net
	node := func(k int) solver.Node { return solver.Node(e.Nodes[k]) }
	if d.Shunt {
		ref, ok := s.Property(id, "VREF")
		if !ok {
			return none, "no reference voltage (rate " + e.Name + " VREF=) is known"
		}
		gain := 5.0 // S, equal to the 0.2 ohm typical of the type (common practice) where no row states it
		if z, ok := s.Property(id, "ZKA"); ok && z.Value() > 0 {
			gain = 1 / z.Value()
		}
		if set.Nominal && !s.isStated(id, "ZKA") {
			gain = 1e3 // as good as ideal: 1 mV/A
		}
		return n.AddShuntReference(node(0), node(1), node(2), solver.ShuntReference{
			Set: ref.Value() * plan.factor(set, id, "VOUT"), Gain: gain, Minimum: 0.5,
		}), ""
	}
	law, why := s.regulatorLaw(id, e, d, set, plan)
	if why != "" {
		return none, why
	}
	low.regulators[id] = law
	return n.AddRegulator(node(0), node(1), node(2), law), ""
}

// dividerCurrent is what a regulator's own divider draws from its output, A: less than that of any common type
// (from memory), enough to drain the leakage of diodes around it.
const dividerCurrent = 100e-6

// regulatorLaw gathers the law of a series regulator from its ratings.
func (s *Supply) regulatorLaw(id netlist.ElementID, e *netlist.Element, d *netlist.Regulator, set *Setting, plan *Plan) (solver.Regulator, string) {
	symbol := netlist.Symbol("VOUT")
	if d.Adjustable {
		symbol = "VREF"
	}
	vout, ok := s.Property(id, symbol)
	if !ok && d.Adjustable {
		vout, ok = s.Property(id, "VOUT")
	}
	if !ok {
		return solver.Regulator{}, "its output voltage is unknown (rate " + e.Name + " VOUT= or part " + e.Name + " TYPE)"
	}
	dropout, ok := s.Property(id, "VDO")
	if set.Nominal {
		if typical, has := s.Property(id, "VDOtyp"); has && !s.isStated(id, "VDO") {
			dropout, ok = typical, true
		}
	}
	if !ok {
		return solver.Regulator{}, "its drop-out voltage is unknown (rate " + e.Name + " VDO=)"
	}
	quiescent := s.number(id, "IQ", 0)
	if d.Adjustable {
		quiescent = s.number(id, "IADJ", s.number(id, "IQ", 0))
	}
	if typical, has := s.Property(id, "IQtyp"); has && set.Nominal && !s.isStated(id, "IQ") && !d.Adjustable {
		quiescent = typical.Value()
	}
	if set.NoBleed {
		quiescent = 0
	}
	sink := 0.0
	if !set.Nominal && !set.NoBleed && vout.Value() != 0 {
		sink = dividerCurrent / math.Abs(vout.Value())
	}
	limit := 0.0
	if p, ok := s.Property(id, "Ilim"); ok && (set.Short != nil || set.Cold && !set.Nominal) {
		limit = p.Value()
	} else if set.Short != nil {
		return solver.Regulator{}, "its current limit is unknown (rate " + e.Name + " Ilim=)"
	}
	sign := float64(d.Polarity)
	if sign == 0 {
		sign = 1
	}
	return solver.Regulator{
		Sign: sign, Set: math.Abs(vout.Value()) * plan.factor(set, id, "VOUT"),
		Dropout: math.Abs(dropout.Value()) * plan.factor(set, id, "VDO"), Quiescent: math.Abs(quiescent),
		ROut: s.number(id, "Rout", 0), Held: set.Held, CurrentLimit: limit, Sink: sink,
	}, ""
}

// isStated reports whether a property stands in the duty sheet or on the card rather than in a table.
func (s *Supply) isStated(id netlist.ElementID, symbol netlist.Symbol) bool {
	return len(s.stated[statedKey{id, symbol}]) > 0
}

// writtenOnCard reports whether a property stands on the element's own card.
func (s *Supply) writtenOnCard(id netlist.ElementID, symbol netlist.Symbol) bool {
	for _, r := range netlist.FieldRatings(s.Circuit.Elements[id]) {
		if r.Symbol == symbol {
			return true
		}
	}
	return false
}
