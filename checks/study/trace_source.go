package study

import (
	"context"

	"railproof/checks/solver"
	"railproof/netlist"
)

// source is where a signal, or its part in one island, is read.
type source struct {
	island int
	read   *signal
}

// sources finds where each signal is read: usually in one place, for the current of a source that several islands
// share in each of them, nowhere if it has no solution.
func (p *Plan) sources(out *outcome, signals []Signal) [][]source {
	list := make([][]source, len(signals))
	if out.low == nil {
		return list
	}
	for k, s := range signals {
		if s.IsNode {
			list[k] = nodeSource(out, s.Node)
		} else {
			list[k] = p.elementSources(out, s)
		}
	}
	return list
}

func nodeSource(out *outcome, n netlist.NodeID) []source {
	at := out.nodes[n]
	if n == netlist.Ground || at.island < 0 {
		return nil
	}
	return []source{{at.island, potential(at.index)}}
}

func (p *Plan) elementSources(out *outcome, s Signal) []source {
	dev := out.low.devices[s.Element]
	if dev == none || out.home[dev].island < 0 {
		return nil
	}
	e := &p.supply.Circuit.Elements[s.Element]
	if _, ok := e.Device.(netlist.Coupling); ok {
		return nil
	}
	home := out.home[dev]
	local := solver.Device(home.index)
	if d, ok := e.Device.(netlist.Regulator); ok && !d.Shunt {
		sign := out.low.regulators[s.Element].Sign
		switch s.Kind {
		case InputSignal:
			return []source{{home.island, scaled(sign, branchVoltage(local, 0))}}
		case VoltageSignal:
			return []source{{home.island, combine(sign, branchVoltage(local, 0), -sign, branchVoltage(local, 1))}}
		}
		return []source{{home.island, scaled(-sign, branchCurrent(local, 1))}}
	}
	if s.Kind != CurrentSignal {
		return []source{{home.island, branchVoltage(local, 0)}}
	}
	var list []source
	for _, at := range out.uses[dev] {
		list = append(list, source{at.island, branchCurrent(solver.Device(at.index), 0)})
	}
	return list
}

// followSteady repeats the solved period over the window.
func followSteady(out *outcome, list [][]source, end float64) [][]*series {
	found := make([][]*series, len(list))
	for k, parts := range list {
		for _, part := range parts {
			is := &out.islands[part.island]
			if is.solution == nil || is.blocked != "" {
				found[k] = nil
				break
			}
			s := newSeries()
			tr := is.solution.Fine
			read := part.read.of(tr)
			period := out.low.net.Period
			if period == 0 {
				s.append(0, read(0), end)
				s.append(end, read(0), end)
			}
			for n := 0; period > 0 && float64(n)*period < end*(1-sameTime); n++ {
				s.add(tr, read, float64(n)*period, end)
			}
			found[k] = append(found[k], s)
		}
	}
	return found
}

// followCold integrates the switch-on of every island that a signal is read in.
func followCold(ctx context.Context, out *outcome, islands []solver.Island, list [][]source, end float64) [][]*series {
	found := make([][]*series, len(list))
	if out.failed != nil {
		return found
	}
	for k := range list {
		found[k] = make([]*series, len(list[k]))
	}
	period := out.low.net.Period
	if period == 0 {
		period = restPeriod
	}
	for i := range islands {
		wanted := false
		for k, parts := range list {
			for j, part := range parts {
				if part.island == i {
					found[k][j] = newSeries()
					wanted = true
				}
			}
		}
		if !wanted || out.islands[i].blocked != "" {
			continue
		}
		out.islands[i].err = solver.ColdStart(ctx, islands[i].Network, 0, coldSteps, maxWindow, func(n int, tr *solver.Trajectory) bool {
			for k, parts := range list {
				for j, part := range parts {
					if part.island == i {
						found[k][j].add(tr, part.read.of(tr), 0, end)
					}
				}
			}
			return float64(n+1)*period < end*(1-sameTime)
		})
	}
	for k, parts := range list {
		for _, part := range parts {
			if is := &out.islands[part.island]; is.err != nil || is.blocked != "" {
				found[k] = nil
			}
		}
	}
	return found
}
