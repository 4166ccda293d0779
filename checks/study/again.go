package study

import "context"

// Again solves the condition of one stress once more, on a supply that differs from the table's in the values of
// its elements, and returns the table of that one condition. What varies keeps its place by element and symbol; a
// tolerance that the table's plan does not have stays nominal. ok is false for a condition that is only words, or that
// is the netlist as written.
func (t *Table) Again(ctx context.Context, s *Supply, c Condition) (once *Table, ok bool) {
	if c.setting == nil || c.setting.Nominal {
		return nil, false
	}
	p := NewPlan(s)
	once = newTable(p)
	set := p.adopt(t.Plan, *c.setting)
	cold, off, discharge, short := set.Cold, set.LineOff, set.NoBleed, set.Short
	set.Cold, set.LineOff, set.NoBleed, set.Charge, set.Short = false, false, false, nil, nil
	steady := p.solve(ctx, set, nil)
	if off {
		p.lineOff(ctx, steady, discharge, once.merge)
	}
	if cold {
		p.coldStart(ctx, set, false, once.merge)
	}
	if short != nil {
		shorted := set
		shorted.Short = short
		p.shortStresses(p.solve(ctx, shorted, nil), *short, once.merge)
	}
	once.take(p.settle(steady))
	once.order(s.Circuit)
	once.block()
	return once, true
}

// adopt is a setting of another plan in the loads and parameters of this one.
func (p *Plan) adopt(old *Plan, set Setting) Setting {
	if set.Loads != nil {
		loads := make([]float64, len(p.loads))
		for k, l := range p.loads {
			if j, ok := old.loadOf(l.element); ok && j < len(set.Loads) {
				loads[k] = set.Loads[j]
			}
		}
		set.Loads = loads
	}
	if set.Shift != nil {
		shift := make([]float64, len(p.Parameters))
		for k, q := range p.Parameters {
			if j, ok := old.index[statedKey{q.Element, q.Symbol}]; ok && j < len(set.Shift) {
				shift[k] = set.Shift[j]
			}
		}
		set.Shift = shift
	}
	return set
}
