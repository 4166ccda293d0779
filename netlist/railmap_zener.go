package netlist

import "strings"

// zenerLimit is the breakdown voltage in V from which a diode with nothing but BV on its model is
// never taken for a zener: common series of zeners end at 200 V.
const zenerLimit = 200

// IsZener reports whether a diode is used in breakdown. The first that speaks decides: a duty statement
// that gives it a zener's symbol or type; what the library knows of its type or model name; a name that
// contains "zener"; a model with a breakdown voltage below 200 V where the diode stands as a shunt
// behind a resistor (see shuntPlace).
func (c *Circuit) IsZener(id ElementID) bool {
	e := &c.Elements[id]
	d, ok := e.Device.(Diode)
	if !ok {
		return false
	}
	if said, ok := c.zeners[id]; ok {
		return said
	}
	names := []string{e.TypeName}
	if d.Model != nil {
		names = append(names, d.Model.Name)
	}
	for _, name := range names {
		if c.Library == nil || name == "" {
			break
		}
		if part, ok := c.Library.Recognise(name); ok {
			return part.Role == RoleZener
		}
	}
	for _, f := range e.Fields {
		if meaning, _, ok := fieldMeaning(f.Key, KindDiode); ok && meaning.Kinds == KindZener {
			return true
		}
	}
	for _, name := range names {
		if strings.Contains(strings.ToLower(name), "zener") {
			return true
		}
	}
	return d.Model != nil && d.Model.BV > 0 && d.Model.BV < zenerLimit && c.shuntPlace(id, d.Model.BV)
}

// shuntPlace is replaced by the graph's judgement.
func (c *Circuit) shuntPlace(id ElementID, breakdown float64) bool { return false }
