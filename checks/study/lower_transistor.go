package study

import (
	"regexp"
	"strings"

	"railproof/checks/parts"
	"railproof/checks/solver"
	"railproof/netlist"
)

// tableLaw is the law that the parts table gives a bipolar transistor whose netlist has no model card or an empty
// one; nil where the card counts or the table knows no law.
func (s *Supply) tableLaw(id netlist.ElementID, d *netlist.Transistor) *parts.BipolarLaw {
	if row := s.rows[id]; row != nil && (d.Model == nil || d.Model.Bare) {
		return row.Bipolar()
	}
	return nil
}

// polarityName is a type name that says no more than the polarity: NPN, QPNP, Q_NPN_BCE.
var polarityName = regexp.MustCompile(`(?i)^(?:Q_?)?(NPN|PNP)(?:[^A-Z].*)?$`)

// emptyCard is the model card of which nothing is written but the polarity: the defaults of the card.
func emptyCard(p netlist.Polarity) *netlist.TransistorModel {
	return &netlist.TransistorModel{Polarity: p, IS: 1e-16, BF: 100, BR: 1, NF: 1, NR: 1, Bare: true}
}

// bipolarPolarity is that of the model card, else of the parts table, else of the type name; 0 if nothing states it.
func (s *Supply) bipolarPolarity(id netlist.ElementID, d *netlist.Transistor) netlist.Polarity {
	if d.Model != nil {
		return d.Model.Polarity
	}
	if law := s.tableLaw(id, d); law != nil {
		return law.Polarity
	}
	if m := polarityName.FindStringSubmatch(s.Circuit.Elements[id].TypeName); m != nil {
		if strings.EqualFold(m[1], "PNP") {
			return netlist.Negative
		}
		return netlist.Positive
	}
	return 0
}

// bipolar returns the law of a transistor with its current gain multiplied by a factor, its junctions at a
// temperature, or says why it has none.
func (s *Supply) bipolar(id netlist.ElementID, d *netlist.Transistor, gain, celsius float64) (q solver.Bipolar, why string) {
	polarity := s.bipolarPolarity(id, d)
	if polarity == 0 {
		name := word(s.Circuit.Elements[id].TypeName)
		return q, "no .model and no known type for " + name + ": it may be NPN or PNP; state `.model " + name + " NPN` or `PNP`, or `part " +
			s.Circuit.Elements[id].Name + " TYPE` with a type of the parts table"
	}
	q = solver.Bipolar{Sign: float64(polarity), BR: 1, NF: 1, NR: 1, VT: solver.ThermalVoltage(celsius)}
	if law := s.tableLaw(id, d); law != nil {
		// Each junction of a Darlington moves with temperature like a single one.
		q.IS, q.BF, q.NF = saturation(law.IS, 1, s.Circuit.Temperature, celsius), law.BF, law.NF
	} else {
		m := d.Model
		if m == nil {
			m = emptyCard(polarity)
		}
		q.IS, q.BF, q.BR, q.NF, q.NR = saturation(m.IS, m.NF, s.Circuit.Temperature, celsius), m.BF, m.BR, m.NF, m.NR
		q.VAF, q.RB, q.RC, q.RE = m.VAF, m.RB, m.RC, m.RE
	}
	q.BF *= gain
	if area := d.Area; area > 0 && area != 1 {
		q.IS *= area
		q.RB, q.RC, q.RE = q.RB/area, q.RC/area, q.RE/area
	}
	return q, ""
}

// fet returns the law of a field-effect transistor, or says why it has none: no table states a threshold.
func (s *Supply) fet(id netlist.ElementID, d *netlist.Fet) (f solver.Fet, why string) {
	m := d.Model
	if m == nil {
		name := word(s.Circuit.Elements[id].TypeName)
		return f, "no .model for " + name + ": it may be of N or P channel, and its threshold is not known; state `.model " + name +
			" NMOS(VTO=... KP=...)` or `PMOS(...)`"
	}
	f = solver.Fet{
		Sign: float64(m.Polarity), VTO: m.VTO, KP: m.KP, Lambda: m.Lambda, Gamma: m.Gamma, Phi: m.Phi,
		RD: m.RD, RS: m.RS,
	}
	if d.Width > 0 && d.Length > 0 {
		f.KP *= d.Width / d.Length
	}
	return f, ""
}

// transistorAssumption names what was taken for a bipolar transistor beyond its model card.
func (s *Supply) transistorAssumption(id netlist.ElementID, d *netlist.Transistor) (Assumption, bool) {
	e := &s.Circuit.Elements[id]
	law, row := s.tableLaw(id, d), s.rows[id]
	switch {
	case law != nil && d.Model == nil:
		return Assumption{e.Name, "no model for " + word(e.TypeName) + ": " + law.Quality, s.origins[id] + memoryMark(law.Confidence)}, true
	case law != nil:
		return Assumption{e.Name, "model " + d.Model.Name + " states no more than " + parts.PolarityWord(d.Model.Polarity) + ": gain and VBE of the table", s.origins[id] + memoryMark(law.Confidence)}, true
	case d.Model != nil && d.Model.Bare:
		return Assumption{e.Name, parts.PolarityWord(d.Model.Polarity) + " by the defaults of an empty model card (IS 1e-16 A, BF 100)", "model " + d.Model.Name}, true
	case d.Model == nil && s.bipolarPolarity(id, d) != 0:
		return Assumption{e.Name, parts.PolarityWord(s.bipolarPolarity(id, d)) + " by the name " + e.TypeName + ", with the defaults of an empty model card (IS 1e-16 A, BF 100)", "type name"}, true
	case d.Model != nil && row != nil && row.Polarity != 0 && row.Polarity != d.Model.Polarity:
		return Assumption{e.Name, parts.PolarityWord(d.Model.Polarity) + " by its model card, though " + row.Type + " is " + parts.PolarityWord(row.Polarity), "model " + d.Model.Name}, true
	}
	return Assumption{}, false
}

// memoryMark follows an origin whose value was not read in a source.
func memoryMark(confidence string) string {
	if confidence == parts.Memory {
		return ", from memory"
	}
	return ""
}

// gainTolerance adds the spread of a gain from the table: its published ends, and common practice for one it lacks.
func (p *Plan) gainTolerance(id netlist.ElementID, law *parts.BipolarLaw) {
	low, high, origin := -gainLow, gainHigh, p.supply.origins[id]+" hFE"+memoryMark(law.Confidence)
	if law.LeastGain > 0 {
		low = law.LeastGain/law.BF - 1
	}
	if law.MostGain > 0 {
		high = law.MostGain/law.BF - 1
	}
	switch {
	case law.LeastGain == 0 && law.MostGain == 0:
		origin = byPractice
	case law.LeastGain == 0 || law.MostGain == 0:
		origin += ", the other end " + byPractice
	}
	p.addParameter(Parameter{Element: id, Symbol: symbolGain, Low: low, High: high, Origin: origin})
}
