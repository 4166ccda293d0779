package study

import (
	"railproof/netlist"
)

// IsZener reports whether a diode is a zener: by its row, by a stated VZ, or by a breakdown voltage so low
// that it can only be meant to work there.
func (s *Supply) IsZener(id netlist.ElementID) bool {
	if row := s.rows[id]; row != nil {
		return row.Role == netlist.RoleZener
	}
	return s.Circuit.IsZener(id)
}
