package study

import (
	"context"

	"railproof/netlist"
)

// coldPhases is how many start phases of a period are tried.
const coldPhases = 8

// surgeEnds are the ends of the tolerances that make the surge of a start largest: empty capacitors large and without
// resistance, cold copper and small resistances before them, low forward voltages, a slow line whose half cycles last.
var surgeEnds = map[netlist.Symbol]float64{
	"C": 1, "ESR": -1, "R": -1, "L": -1, symbolWinding: -1, symbolForward: -1, symbolFrequency: -1, symbolAmbient: 1, symbolGain: 1,
}

// overshootEnds are those that let an inductance carry a small capacitor furthest beyond the crest.
var overshootEnds = map[netlist.Symbol]float64{
	"C": -1, "ESR": -1, "R": -1, "L": 1, symbolWinding: -1, symbolForward: -1, symbolAmbient: 1,
}

// ends is a position of every parameter by the symbol of its quantity; parameters of other symbols stay nominal.
func (p *Plan) ends(of map[netlist.Symbol]float64) []float64 {
	shift := make([]float64, len(p.Parameters))
	for k, q := range p.Parameters {
		shift[k] = of[q.Symbol]
	}
	return shift
}

// hasChoke reports whether an inductance can drive a capacitor beyond the crest.
func (p *Plan) hasChoke() bool {
	for k := range p.supply.Circuit.Elements {
		if d, ok := p.supply.Circuit.Elements[k].Device.(netlist.Inductor); ok && d.Henries > 0 {
			return true
		}
	}
	return false
}

// coldSettings lists the starts to follow: at high line, full and light load, at several phases.
func (p *Plan) coldSettings() []Setting {
	corners := [][]float64{p.ends(surgeEnds)}
	if p.hasChoke() {
		corners = append(corners, p.ends(overshootEnds))
	}
	var settings []Setting
	for _, shift := range corners {
		for phase := range coldPhases {
			for _, load := range []float64{1, 0} {
				if load == 0 && phase%2 == 1 {
					continue // the light load changes little: half the phases do
				}
				loads := make([]float64, len(p.loads))
				for k := range loads {
					loads[k] = load
				}
				settings = append(settings, Setting{Line: LineHigh, Loads: loads, Shift: shift, Phase: float64(phase) / coldPhases})
				if len(p.loads) == 0 {
					break
				}
			}
		}
	}
	return settings
}

// coldStarts adds the switch-on from empty. Every start is followed on a coarse grid; on finer ones only those that may
// be the worst for some part.
func (p *Plan) coldStarts(ctx context.Context, settings []Setting, jobs int, t *Table) {
	starts := make([]*start, len(settings))
	inParallel(len(settings), jobs, func(k int) {
		starts[k] = p.start(settings[k], false)
		for i := range starts[k].islands {
			starts[k].islands[i].survey(ctx, false)
			starts[k].islands[i].network = nil // large, and soon built again where it is needed
		}
	})
	races := newRaces(t, starts)
	for open := races.open(starts); len(open) > 0 && ctx.Err() == nil; open = races.open(starts) {
		inParallel(len(open), jobs, func(n int) {
			st := starts[open[n].start]
			again := p.start(st.set, false)
			for _, i := range open[n].islands {
				st.islands[i].network = again.islands[i].network
				st.islands[i].refine(ctx, false)
				st.islands[i].network = nil
			}
		})
		races.note(starts)
	}
	for _, st := range starts {
		t.Solved++
		st.emit(t.merge)
	}
}
