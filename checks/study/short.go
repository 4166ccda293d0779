package study

import (
	"context"

	"railproof/netlist"
)

// outputShorts adds the steady state with each output shorted in turn, at high line with the other loads full:
// the mean power of what may get hot, and the current of what would have to carry it or clear it.
func (p *Plan) outputShorts(ctx context.Context, jobs int, t *Table) {
	results := make([][]Stress, len(p.loads))
	inParallel(len(p.loads), jobs, func(k int) {
		loads := make([]float64, len(p.loads))
		for j := range loads {
			loads[j] = 1
		}
		id := p.loads[k].element
		out := p.solve(ctx, Setting{Line: LineHigh, Loads: loads, Short: &id}, nil)
		p.shortStresses(out, id, func(s Stress) { results[k] = append(results[k], s) })
	})
	for _, list := range results {
		t.Solved++
		for _, s := range list {
			t.merge(s)
		}
	}
}

// shortStresses hands on what an outcome with a shorted output says of the other parts.
func (p *Plan) shortStresses(out *outcome, output netlist.ElementID, emit func(Stress)) {
	c := p.supply.Circuit
	shorted := c.Elements[output].Name
	p.extract(out, func(s Stress) {
		id, ok := c.Find(s.Element)
		if !ok || id == output {
			return
		}
		_, diode := c.Elements[id].Device.(netlist.Diode)
		switch {
		case s.Quantity == MeanPower:
			s.Quantity = ShortPower
		case s.Quantity == MeanCurrent && diode, s.Quantity == RMSCurrent && !diode:
			s.Quantity = ShortCurrent
		default:
			return
		}
		s.Condition.Name = "high line, output " + shorted + " shorted"
		s.Condition.Load = "shorted"
		emit(s)
	})
}
