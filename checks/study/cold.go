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

// coldStart integrates a switch-on of every island in one setting and emits the surge of each diode, and the
// extreme voltages of diodes, capacitors and regulator inputs on the way.
func (p *Plan) coldStart(ctx context.Context, set Setting, surgeOnly bool, emit func(Stress)) {
	set.Cold = true
	c := p.supply.Circuit
	cond := p.condition(&set)
	fail := func(id netlist.ElementID, why string) {
		for _, q := range []Quantity{SurgeCurrent, SurgeI2t} {
			emit(Stress{Element: c.Elements[id].Name, Quantity: q, Unit: unitOf(q), Value: math.NaN(), Phase: math.NaN(), Condition: cond, Unproven: why})
		}
	}
	low, err := p.supply.lower(&set, p)
	if err == nil && p.Blocked != "" {
		err = errors.New(p.Blocked)
	}
	if err != nil {
		for k := range c.Elements {
			if _, ok := c.Elements[k].Device.(netlist.Diode); ok {
				fail(netlist.ElementID(k), err.Error())
			}
		}
		return
	}
	of := map[solver.Device]netlist.ElementID{}
	for k, d := range low.devices {
		if d != none {
			of[d] = netlist.ElementID(k)
		}
	}
	for _, island := range low.net.Islands() {
		parts, blocked := p.watch(low, of, island, surgeOnly)
		if len(parts) == 0 {
			continue
		}
		fine, coarse, err := settledStart(ctx, island.Network, parts, set.Nominal)
		for k, w := range parts {
			_, diode := c.Elements[w.id].Device.(netlist.Diode)
			if err != nil {
				if diode {
					fail(w.id, err.Error())
				}
				continue
			}
			unbounded := diode && fine[k].peak > 1 && math.Abs(fine[k].peak-coarse[k].peak) > unboundedSurge*fine[k].peak
			if unbounded {
				fail(w.id, "its surge grows as the time step shrinks: nothing but the diode limits the current into an empty capacitor")
			}
			other := w.reads(&coarse[k])
			for n, r := range w.reads(&fine[k]) {
				if unbounded && (r.quantity == SurgeCurrent || r.quantity == SurgeI2t) {
					continue
				}
				emit(Stress{Element: c.Elements[w.id].Name, Quantity: r.quantity, Unit: unitOf(r.quantity), Value: r.value,
					Error: math.Abs(r.value - other[n].value), Phase: r.at, Condition: cond, Unproven: blocked})
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
			parts = append(parts, watched{solver.Device(local), id, reads})
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

// settledStart follows a start on two grids, halved until the surges agree.
func settledStart(ctx context.Context, n *solver.Network, parts []watched, nominal bool) (fine, coarse []surge, err error) {
	steps, accuracy := coldWorkingSteps, coldWorkingAccuracy
	if nominal {
		steps, accuracy = coldSteps, coldAccuracy
	}
	coarse, err = follow(ctx, n, parts, steps/2)
	if err != nil {
		return nil, nil, err
	}
	for k := range coldHalvings {
		fine, err = follow(ctx, n, parts, steps<<k)
		if err != nil {
			return nil, nil, err
		}
		if agree(parts, fine, coarse, accuracy) || k == coldHalvings-1 {
			break
		}
		coarse = fine
	}
	return fine, coarse, nil
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
