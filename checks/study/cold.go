package study

import (
	"context"
	"errors"
	"math"

	"railproof/checks/solver"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

const (
	// Steps a period of a cold start, of the netlist as written and of the many of a check; the error is taken from
	// half as many.
	coldSteps        = 256
	coldWorkingSteps = 128
	coldMaxPeriods   = 500
	// coldSettled is the relative change of the diodes' peak currents from one period to the next below
	// which a start counts as over.
	coldSettled = 0.03
	coldQuiet   = 3 // such periods in a row
)

// unboundedSurge is the relative change of a peak current from one grid to the next from which nothing limits it.
const unboundedSurge = 0.2

// start is a switch-on from empty in one setting, island by island.
type start struct {
	plan      *Plan
	set       Setting
	condition Condition
	why       string // it cannot be followed at all
	islands   []startIsland
}

// startIsland is an independent part of a start: what is watched in it, followed on two grids.
type startIsland struct {
	network      *solver.Network
	parts        []watched
	blocked      string
	coarse, fine []surge // fine: nil before it is refined
	err          error
}

// start lays a switch-on out in one setting; with surgeOnly nothing but the surges of diodes are watched.
func (p *Plan) start(set Setting, surgeOnly bool) *start {
	set.Cold = true
	st := &start{plan: p, set: set, condition: p.condition(&set)}
	low, err := p.supply.lower(&set, p)
	if err == nil && p.Blocked != "" {
		err = errors.New(p.Blocked)
	}
	if err != nil {
		st.why = err.Error()
		return st
	}
	of := map[solver.Device]netlist.ElementID{}
	for k, d := range low.devices {
		if d != none {
			of[d] = netlist.ElementID(k)
		}
	}
	for _, island := range low.net.Islands() {
		if parts, blocked := p.watch(low, of, island, surgeOnly); len(parts) > 0 {
			st.islands = append(st.islands, startIsland{network: island.Network, parts: parts, blocked: blocked})
		}
	}
	return st
}

// coldStart follows a switch-on in one setting and emits the surge of each diode, and the extreme voltages of diodes,
// capacitors and regulator inputs on the way.
func (p *Plan) coldStart(ctx context.Context, set Setting, surgeOnly bool, emit func(Stress)) {
	st := p.start(set, surgeOnly)
	for i := range st.islands {
		st.islands[i].survey(ctx, set.Nominal)
		st.islands[i].refine(ctx, set.Nominal)
	}
	st.emit(emit)
}

// emit hands over the stresses of the islands that are refined or could not be followed.
func (st *start) emit(emit func(Stress)) {
	c := st.plan.supply.Circuit
	fail := func(id netlist.ElementID, why string) {
		if _, diode := c.Elements[id].Device.(netlist.Diode); !diode {
			return
		}
		for _, q := range []Quantity{SurgeCurrent, SurgeI2t} {
			emit(Stress{Element: c.Elements[id].Name, Quantity: q, Unit: unitOf(q), Value: math.NaN(), Phase: math.NaN(), Condition: st.condition, Unproven: why})
		}
	}
	if st.why != "" {
		for k := range c.Elements {
			fail(netlist.ElementID(k), st.why)
		}
	}
	for i := range st.islands {
		is := &st.islands[i]
		for k, w := range is.parts {
			switch {
			case is.err != nil:
				fail(w.id, is.err.Error())
				continue
			case is.fine == nil:
				continue
			}
			unbounded := is.unbounded(k)
			if unbounded {
				fail(w.id, "its surge grows as the time step shrinks: nothing but the diode limits the current into an empty capacitor")
			}
			other := w.reads(&is.coarse[k])
			for n, r := range w.reads(&is.fine[k]) {
				if unbounded && (r.quantity == SurgeCurrent || r.quantity == SurgeI2t) {
					continue
				}
				emit(Stress{Element: c.Elements[w.id].Name, Quantity: r.quantity, Unit: unitOf(r.quantity), Value: r.value,
					Error: math.Abs(r.value - other[n].value), Phase: r.at, Condition: st.condition, Unproven: is.blocked})
			}
		}
	}
}

// watch lists the parts of an island whose start counts, and why nothing can be proven of them, if so.
func (p *Plan) watch(low *lowered, of map[solver.Device]netlist.ElementID, island solver.Island, surgeOnly bool) (parts []watched, blocked string) {
	for local, d := range island.Devices {
		if why, ok := low.blocked[d]; ok {
			blocked = why
		}
		id, ok := of[d]
		if !ok {
			continue
		}
		var reads func(s *surge) []reached
		switch p.supply.Circuit.Elements[id].Device.(type) {
		case netlist.Diode:
			reads = diodeStart
			if surgeOnly {
				reads = bursts
			}
		case netlist.Capacitor:
			reads = capacitorStart
		case netlist.Regulator:
			if law, ok := low.regulators[id]; ok && law.Sign > 0 {
				reads = positiveInputStart
			} else if ok {
				reads = negativeInputStart
			}
		}
		if _, diode := p.supply.Circuit.Elements[id].Device.(netlist.Diode); reads != nil && (diode || !surgeOnly) {
			parts = append(parts, watched{solver.Device(local), id, diode, reads})
		}
	}
	return parts, blocked
}

// The relative change of a surge from one grid to the next below which a start counts as accurate, of the netlist as
// written and of the many of a check, in which the change counts against the part; and how often a grid is halved.
const (
	coldAccuracy        = 2e-3
	coldWorkingAccuracy = 2e-2
	coldHalvings        = 4
)

// grid is the first fine grid of a start and the accuracy at which its refinement ends.
func grid(nominal bool) (steps int, accuracy float64) {
	if nominal {
		return coldSteps, coldAccuracy
	}
	return coldWorkingSteps, coldWorkingAccuracy
}

// survey follows the start on the coarse grid.
func (is *startIsland) survey(ctx context.Context, nominal bool) {
	steps, _ := grid(nominal)
	is.coarse, is.err = follow(ctx, is.network, is.parts, steps/2)
}

// refine follows a surveyed start on finer grids, until the stresses of two agree.
func (is *startIsland) refine(ctx context.Context, nominal bool) {
	steps, accuracy := grid(nominal)
	for k := 0; is.err == nil && k < coldHalvings; k++ {
		if k > 0 {
			is.coarse = is.fine
		}
		is.fine, is.err = follow(ctx, is.network, is.parts, steps<<k)
		if is.err == nil && agree(is.parts, is.fine, is.coarse, accuracy) {
			return
		}
	}
}

// unbounded reports that nothing but the diode limits the surge of a part.
func (is *startIsland) unbounded(part int) bool {
	f, c := is.fine[part].peak, is.coarse[part].peak
	return is.parts[part].diode && f > 1 && math.Abs(f-c) > unboundedSurge*f
}

// agree reports whether the stresses of two grids differ by less than the relative accuracy, micro-units aside; a
// squared current may differ by twice that.
func agree(parts []watched, fine, coarse []surge, accuracy float64) bool {
	for k, w := range parts {
		other := w.reads(&coarse[k])
		for n, r := range w.reads(&fine[k]) {
			allowed := accuracy*math.Abs(r.value) + 1e-6
			if r.quantity == SurgeI2t {
				allowed = 2*accuracy*r.value + 1e-9
			}
			if math.Abs(r.value-other[n].value) > allowed {
				return false
			}
		}
	}
	return true
}

// follow integrates a start until the diode currents have settled.
func follow(ctx context.Context, n *solver.Network, parts []watched, steps int) ([]surge, error) {
	list := make([]surge, len(parts))
	quiet := 0
	period := n.Period
	if period == 0 {
		period = 0.02
	}
	err := solver.ColdStart(ctx, n, 0, steps, coldMaxPeriods, func(_ int, tr *solver.Trajectory) bool {
		calm := true
		for k, w := range parts {
			before := list[k].last
			list[k].follow(tr, w.device, 0, period)
			if math.Abs(list[k].last-before) > coldSettled*math.Max(list[k].peak, 1e-6) {
				calm = false
			}
		}
		if calm {
			quiet++
		} else {
			quiet = 0
		}
		return quiet < coldQuiet
	})
	return list, err
}

// unitOf is the unit of a stress quantity.
func unitOf(q Quantity) quantity.Unit {
	switch q {
	case MeanCurrent, RMSCurrent, PeakCurrent, MinCurrent, SurgeCurrent, RippleCurrentRMS, MaxOutputCurrent:
		return quantity.Ampere
	case MeanPower:
		return quantity.Watt
	case SurgeI2t:
		return quantity.AmpereSquaredSecond
	case RippleFactor:
		return quantity.One
	}
	return quantity.Volt
}
