package netlist

// adoptPart takes an element for a row of the parts table.
func (c *Circuit) adoptPart(id ElementID, typeName string, pins []string) {
	e := &c.Elements[id]
	if c.Library == nil {
		return
	}
	part, ok := c.Library.Recognise(typeName)
	if !ok {
		return
	}
	switch e.Device.(type) {
	case Diode:
		c.setZener(id, part.Role == RoleZener)
	}
}

// adoptRegulator takes a call of an undefined type with three nodes for a three-terminal regulator, in
// the customary order in, gnd (or adjust), out.
func (c *Circuit) adoptRegulator(id ElementID, adjustable bool) {
	if e := &c.Elements[id]; len(e.Nodes) == 3 {
		e.Device = Regulator{Polarity: Positive, Adjustable: adjustable, PinsAssumed: true}
	}
}
