package study

import (
	"context"
	"math"

	"railproof/checks/solver"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

const (
	releaseFirst   = 1e-3 // s, the first stretch after line off
	releaseSteps   = 64   // steps a stretch; stretches double
	releaseOctaves = 26   // 1 ms x 2^25: nine hours
	// safeVoltage is the voltage that a capacitor must have fallen to unless the duty sheet states a profile:
	// 60 V dc, IEC 62368-1 table 4 (from memory).
	safeVoltage = 60.0
)

// lineOff removes the line from the steady state of a setting and follows the discharge: how long each
// capacitor takes to fall to the voltage of the profile, and how far each regulator's output stands above its
// input. For the discharge regulators draw nothing themselves: they are no bleeders.
func (p *Plan) lineOff(ctx context.Context, steady *outcome, discharge bool, emit func(Stress)) {
	c := p.supply.Circuit
	set := steady.set
	set.LineOff, set.NoBleed = true, discharge
	set.Charge = p.crests(steady)
	low, err := p.supply.lower(&set, p)
	if err != nil || p.Blocked != "" {
		return
	}
	cond := p.condition(&set)
	cond.Name += ", line off"
	target := safeVoltage
	if profile := p.supply.Duty.Profile; profile != nil {
		target = profile.Voltage
	}
	of := map[solver.Device]netlist.ElementID{}
	for k, d := range low.devices {
		if d != none {
			of[d] = netlist.ElementID(k)
		}
	}
	for _, island := range low.net.Islands() {
		blocked := ""
		type watch struct {
			id      netlist.ElementID
			device  solver.Device
			time    float64 // of the last moment above target, s
			level   float64 // voltage at the end
			highest solver.Extreme
		}
		var list []*watch
		for local, d := range island.Devices {
			if why, ok := low.blocked[d]; ok {
				blocked = why
			}
			id, ok := of[d]
			if !ok {
				continue
			}
			switch dev := c.Elements[id].Device.(type) {
			case netlist.Capacitor:
				if discharge {
					list = append(list, &watch{id: id, device: solver.Device(local)})
				}
			case netlist.Regulator:
				if !discharge && !dev.Shunt {
					list = append(list, &watch{id: id, device: solver.Device(local), highest: solver.Extreme{Value: math.Inf(-1)}})
				}
			}
		}
		if len(list) == 0 {
			continue
		}
		err := solver.Release(ctx, island.Network, releaseFirst, releaseSteps, releaseOctaves, func(tr *solver.Trajectory) bool {
			busy := false
			for _, w := range list {
				b, _ := tr.BranchOf(w.device, 0)
				if discharge {
					for k := range tr.Samples() {
						v := math.Abs(tr.Voltage(b, k))
						if v > target {
							w.time = tr.Start + float64(k)*tr.Step
							if k+1 < tr.Samples() {
								if next := math.Abs(tr.Voltage(b, k+1)); next <= target {
									w.time += tr.Step * (v - target) / (v - next)
								}
							}
						}
						w.level = v
					}
					busy = busy || w.level > target
					continue
				}
				out, _ := tr.BranchOf(w.device, 1)
				sign := low.regulators[w.id].Sign
				for k := range tr.Samples() {
					if d := sign * (tr.Voltage(out, k) - tr.Voltage(b, k)); d > w.highest.Value {
						w.highest = solver.Extreme{Value: d, At: tr.Start + float64(k)*tr.Step}
					}
				}
				busy = busy || math.Abs(tr.Voltage(out, tr.Samples()-1)) > 0.1
			}
			return busy
		})
		for _, w := range list {
			s := Stress{Element: c.Elements[w.id].Name, Condition: cond, Phase: math.NaN(), Unproven: blocked}
			if discharge {
				s.Quantity, s.Unit, s.Value = DischargeTime, quantity.Second, w.time
				if w.level > target {
					s.Value = math.Inf(1)
				}
				if !math.IsInf(s.Value, 0) {
					s.Error = s.Value / releaseSteps
				}
			} else {
				s.Quantity, s.Unit, s.Value, s.Phase = MaxBackflow, quantity.Volt, w.highest.Value, w.highest.At
			}
			if err != nil {
				s.Value, s.Unproven = math.NaN(), err.Error()
			}
			if steady.failed != nil {
				s.Unproven = steady.failed.Error()
			} else if i := steady.islandOf(c, w.id); i >= 0 && steady.islands[i].err != nil && steady.islands[i].solution == nil {
				s.Unproven = steady.islands[i].err.Error()
			}
			emit(s)
		}
	}
}

// crests is the voltage of each capacitor at its largest magnitude in a steady state.
func (p *Plan) crests(steady *outcome) map[netlist.ElementID]float64 {
	crests := map[netlist.ElementID]float64{}
	c := p.supply.Circuit
	for k := range c.Elements {
		if _, ok := c.Elements[k].Device.(netlist.Capacitor); !ok || steady.low == nil || steady.low.devices[k] == none {
			continue
		}
		at := steady.home[steady.low.devices[k]]
		if at.island < 0 || steady.islands[at.island].solution == nil {
			continue
		}
		tr := steady.islands[at.island].solution.Fine
		b, _ := tr.BranchOf(solver.Device(at.index), 0)
		v := tr.Summary(func(n int) float64 { return tr.Voltage(b, n) })
		crests[netlist.ElementID(k)] = v.Max.Value
		if -v.Min.Value > v.Max.Value {
			crests[netlist.ElementID(k)] = v.Min.Value
		}
	}
	return crests
}

// lineOffs adds the removal of the line: at high line with the loads light, capacitors and resistors at their
// high ends, for the discharge; at high line, light and full, for the regulators.
func (p *Plan) lineOffs(ctx context.Context, jobs int, t *Table) {
	loads := func(position float64) []float64 {
		list := make([]float64, len(p.loads))
		for k := range list {
			list[k] = position
		}
		return list
	}
	slow := make([]float64, len(p.Parameters))
	for k, q := range p.Parameters {
		if q.Symbol == "R" || q.Symbol == "C" {
			slow[k] = 1
		}
	}
	type run struct {
		set       Setting
		discharge bool
	}
	runs := []run{{Setting{Line: LineHigh, Loads: loads(0), Shift: slow}, true}}
	if p.held() {
		runs = append(runs, run{Setting{Line: LineHigh, Loads: loads(0)}, false})
		if len(p.loads) > 0 {
			runs = append(runs, run{Setting{Line: LineHigh, Loads: loads(1)}, false})
		}
	}
	results := make([][]Stress, len(runs))
	inParallel(len(runs), jobs, func(k int) {
		p.lineOff(ctx, p.solve(ctx, runs[k].set, nil), runs[k].discharge, func(s Stress) { results[k] = append(results[k], s) })
	})
	for _, list := range results {
		t.Solved++
		for _, s := range list {
			t.merge(s)
		}
	}
}
