package study

import (
	"railproof/checks/parts"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

// IsZener reports whether a diode is a zener: by its row, by a stated VZ, or by a breakdown voltage so low
// that it can only be meant to work there.
func (s *Supply) IsZener(id netlist.ElementID) bool {
	if row := s.rows[id]; row != nil {
		return row.Role == netlist.RoleZener
	}
	return s.Circuit.IsZener(id)
}

// unknownBreakdown says why a diode that is called a zener has no law: nothing states the voltage at which it
// breaks down. A model card with parameters but no BV counts as it is written.
func (s *Supply) unknownBreakdown(id netlist.ElementID, d *netlist.Diode) string {
	if !s.calledZener(id) || d.Model != nil && (!d.Model.Bare || d.Model.BV > 0) {
		return ""
	}
	e := &s.Circuit.Elements[id]
	return e.TypeName + " is a zener whose voltage its name does not tell; state `rate " + e.Name + " VZ=...V`, or BV= on its model card"
}

// calledZener reports whether a diode of no known voltage has a zener's name.
func (s *Supply) calledZener(id netlist.ElementID) bool {
	_, known := s.zenerVoltage(id)
	return !known && s.rows[id] == nil && parts.NamesZener(s.Circuit.Elements[id].TypeName)
}

// zenerAssumption names what was taken for the breakdown of a diode from its name alone.
func (s *Supply) zenerAssumption(id netlist.ElementID, d *netlist.Diode) (Assumption, bool) {
	e := &s.Circuit.Elements[id]
	if d.Model != nil && d.Model.BV > 0 {
		return Assumption{}, false
	}
	if vz, ok := s.Property(id, "VZ"); ok && vz.Source == typeNameSource {
		return Assumption{e.Name, "a zener of " + quantity.Format(vz.Value(), quantity.Volt, 3), "type name " + e.TypeName}, true
	}
	if d.Model != nil && s.calledZener(id) {
		return Assumption{e.Name, "solved without breakdown: its model card states no BV", "model " + d.Model.Name}, true
	}
	return Assumption{}, false
}

// typeNameSource is the source of a voltage read from a type name.
const typeNameSource = "type name"
