package study

import (
	"railproof/checks/parts"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

// Supply is a circuit with its duty and the rows of the parts table that its elements were recognised as.
type Supply struct {
	Circuit *netlist.Circuit
	Duty    *netlist.Duty
	Table   *parts.Table

	rows     []*parts.Row // per element, nil if unknown
	origins  []string     // per element: how the row was found
	stated   map[statedKey][]Property
	modelled map[statedKey]Property // by the model card, the last that counts
}

type statedKey struct {
	element netlist.ElementID
	symbol  netlist.Symbol
}

// Property is one rating or property of one element, with where it is known from.
type Property struct {
	Symbol     netlist.Symbol
	Low, High  float64 // equal for a single value
	Unit       quantity.Unit
	Text       string // for symbols that take a word
	Origin     string // "rate C1 UR=25V", "parts table 1N4001", ...
	Source     string // publication, if from a table
	Confidence string // seen, memory, stated
	Condition  string
}

// Value is the single value of a property, or the middle of its range.
func (p Property) Value() float64 { return p.Low + (p.High-p.Low)/2 }

// NewSupply prepares a circuit for study.
func NewSupply(c *netlist.Circuit, d *netlist.Duty, t *parts.Table) *Supply {
	s := &Supply{
		Circuit: c, Duty: d, Table: t,
		rows: make([]*parts.Row, len(c.Elements)), origins: make([]string, len(c.Elements)),
		stated: make(map[statedKey][]Property),
	}
	for k := range c.Elements {
		e := &c.Elements[k]
		if row, ok := s.recognise(e); ok {
			s.rows[k] = row
			s.origins[k] = row.Origin + " " + row.Type
		}
	}
	for _, p := range d.Parts {
		if row, ok := t.Lookup(p.Type); ok {
			s.rows[p.Element] = leg(&c.Elements[p.Element], row)
			s.origins[p.Element] = row.Origin + " " + row.Type
		} else if known, ok := t.Recognise(p.Type); ok {
			if row, ok := t.Lookup(known.Type); ok {
				s.rows[p.Element] = leg(&c.Elements[p.Element], row)
				s.origins[p.Element] = row.Origin + " " + row.Type
			}
		}
	}
	// First stated wins within a key: the duty interpretation puts the winner first.
	for _, r := range d.Ratings {
		if !r.Shared {
			s.state(r.Element, r, "stated")
		}
	}
	s.modelled = map[statedKey]Property{}
	for k := range c.Elements {
		ratings, _ := c.ModelRatings(netlist.ElementID(k))
		for _, r := range ratings {
			s.modelled[statedKey{netlist.ElementID(k), r.Symbol}] = property(r, "stated")
		}
		for _, r := range netlist.FieldRatings(c.Elements[k]) {
			s.state(netlist.ElementID(k), r, "stated")
		}
	}
	for _, r := range d.Ratings {
		if r.Shared {
			s.state(r.Element, r, "stated")
		}
	}
	return s
}

func (s *Supply) state(id netlist.ElementID, r netlist.Rating, confidence string) {
	key := statedKey{id, r.Symbol}
	s.stated[key] = append(s.stated[key], property(r, confidence))
}

func property(r netlist.Rating, confidence string) Property {
	return Property{
		Symbol: r.Symbol, Low: r.Value.Low, High: r.Value.High, Unit: r.Value.Unit, Text: r.Text,
		Origin: r.Written, Confidence: confidence,
	}
}

// leg returns the row that holds for one element: of a bridge drawn as four diodes, the row of one leg.
func leg(e *netlist.Element, row *parts.Row) *parts.Row {
	if _, diode := e.Device.(netlist.Diode); diode {
		return row.Leg()
	}
	return row
}

// recognise looks up the type name of an element whose kind fits the row's.
func (s *Supply) recognise(e *netlist.Element) (*parts.Row, bool) {
	name := e.TypeName
	if name == "" {
		return nil, false
	}
	row, ok := s.Table.Find(name)
	if !ok {
		return nil, false
	}
	switch e.Device.(type) {
	case netlist.Diode:
		switch row.Role {
		case netlist.RoleRectifier, netlist.RoleZener, netlist.RoleBridge:
			return row.Leg(), true
		}
		return nil, false
	case netlist.Regulator:
		return row, row.Role == netlist.RoleRegulator || row.Role == netlist.RoleAdjustable || row.Role == netlist.RoleShunt
	case netlist.Transistor:
		return row, row.Role == netlist.RoleTransistor
	case netlist.Fet:
		return row, row.Role == netlist.RoleTransistor && row.Polarity == 0 // npn and pnp are bipolar
	}
	return nil, false
}

// Row returns the parts row of an element, nil if it is not known.
func (s *Supply) Row(id netlist.ElementID) *parts.Row { return s.rows[id] }

// Property finds a rating of an element: stated in the duty sheet, on its card, in the parts table, or on its model
// card, in that order. ok is false if it is nowhere.
func (s *Supply) Property(id netlist.ElementID, symbol netlist.Symbol) (Property, bool) {
	if list := s.stated[statedKey{id, symbol}]; len(list) > 0 {
		return list[0], true
	}
	row := s.rows[id]
	if row == nil {
		p, ok := s.modelled[statedKey{id, symbol}]
		return p, ok
	}
	v, ok := row.Value(symbol)
	if !ok {
		p, ok := s.modelled[statedKey{id, symbol}]
		return p, ok
	}
	return Property{
		Symbol: symbol, Low: v.Number, High: v.Number, Unit: v.Unit,
		Origin: s.origins[id], Source: v.Source, Confidence: v.Confidence, Condition: v.Condition,
	}, true
}

// number is the value of a property or a fallback.
func (s *Supply) number(id netlist.ElementID, symbol netlist.Symbol, fallback float64) float64 {
	if p, ok := s.Property(id, symbol); ok {
		return p.Value()
	}
	return fallback
}
