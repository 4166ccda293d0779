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

// surge follows the current of one diode through a start.
type surge struct {
	peak, at float64
	integral float64 // largest of one conduction pulse, at most a period long, A^2 s
	running  float64
	since    float64
	last     float64        // peak of the last period
	highest  solver.Extreme // of the voltage
	lowest   solver.Extreme
}

// follow takes a period into account. A pulse is conduction above a thousandth of the largest current so far.
func (s *surge) follow(tr *solver.Trajectory, d solver.Device, branch int, period float64) {
	b, i := tr.BranchOf(d, branch)
	s.last = 0
	for k := range tr.Samples() {
		t := tr.Start + float64(k)*tr.Step
		if v := tr.Voltage(b, k); v > s.highest.Value {
			s.highest = solver.Extreme{Value: v, At: t}
		} else if v < s.lowest.Value {
			s.lowest = solver.Extreme{Value: v, At: t}
		}
		if i[k] > s.peak {
			s.peak, s.at = i[k], t
		}
		s.last = math.Max(s.last, i[k])
		if k == 0 {
			continue
		}
		if i[k] > 1e-3*s.peak && t-s.since < period {
			s.running += 0.5 * tr.Step * (i[k]*i[k] + i[k-1]*i[k-1])
			s.integral = math.Max(s.integral, s.running)
		} else {
			s.running, s.since = 0, t
		}
	}
	st := tr.Summary(func(k int) float64 { return i[k] })
	if st.Max.Value > s.peak {
		s.peak, s.at = st.Max.Value, st.Max.At
	}
}

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
		watched := map[solver.Device]netlist.ElementID{} // local device -> element
		var order []solver.Device
		diodes, blocked := 0, ""
		for local, d := range island.Devices {
			if why, ok := low.blocked[d]; ok {
				blocked = why
			}
			id, ok := of[d]
			if !ok {
				continue
			}
			switch c.Elements[id].Device.(type) {
			case netlist.Diode:
				diodes++
			case netlist.Capacitor, netlist.Regulator:
				if surgeOnly {
					continue
				}
			default:
				continue
			}
			watched[solver.Device(local)] = id
			order = append(order, solver.Device(local))
		}
		if diodes == 0 && (surgeOnly || len(order) == 0) {
			continue
		}
		fine, coarse, err := settledStart(ctx, island.Network, order, set.Nominal)
		for k, local := range order {
			id := watched[local]
			e := &c.Elements[id]
			_, diode := e.Device.(netlist.Diode)
			if err != nil {
				if diode {
					fail(id, err.Error())
				}
				continue
			}
			f, g := &fine[k], &coarse[k]
			put := func(q Quantity, value, other, at float64) {
				emit(Stress{Element: e.Name, Quantity: q, Unit: unitOf(q), Value: value, Error: math.Abs(value - other), Phase: at, Condition: cond, Unproven: blocked})
			}
			if diode {
				if math.Abs(f.peak-g.peak) > unboundedSurge*f.peak && f.peak > 1 {
					fail(id, "its surge grows as the time step shrinks: nothing but the diode limits the current into an empty capacitor")
				} else {
					put(SurgeCurrent, f.peak, g.peak, f.at)
					put(SurgeI2t, f.integral, g.integral, math.NaN())
				}
				if !surgeOnly {
					put(PeakReverseVoltage, math.Max(0, -f.lowest.Value), math.Max(0, -g.lowest.Value), f.lowest.At)
				}
				continue
			}
			if _, ok := e.Device.(netlist.Capacitor); ok {
				put(MaxVoltage, f.highest.Value, g.highest.Value, f.highest.At)
				put(MinVoltage, f.lowest.Value, g.lowest.Value, f.lowest.At)
				continue
			}
			if law, ok := low.regulators[id]; ok {
				if law.Sign > 0 {
					put(MaxInputVoltage, f.highest.Value, g.highest.Value, f.highest.At)
				} else {
					put(MaxInputVoltage, -f.lowest.Value, -g.lowest.Value, f.lowest.At)
				}
			}
		}
	}
}

// The relative change of a surge from one grid to the next below which a start counts as accurate, of the netlist as
// written and of the many of a check, in which the change counts against the part; and how often a grid is halved.
const (
	coldAccuracy        = 2e-3
	coldWorkingAccuracy = 2e-2
	coldHalvings        = 4
)

// settledStart follows a start on two grids, halved until the surges agree.
func settledStart(ctx context.Context, n *solver.Network, devices []solver.Device, nominal bool) (fine, coarse []surge, err error) {
	steps, accuracy := coldWorkingSteps, coldWorkingAccuracy
	if nominal {
		steps, accuracy = coldSteps, coldAccuracy
	}
	coarse, err = follow(ctx, n, devices, steps/2)
	if err != nil {
		return nil, nil, err
	}
	for k := range coldHalvings {
		fine, err = follow(ctx, n, devices, steps<<k)
		if err != nil {
			return nil, nil, err
		}
		if agree(fine, coarse, accuracy) || k == coldHalvings-1 {
			break
		}
		coarse = fine
	}
	return fine, coarse, nil
}

// agree reports whether the surges of two grids differ by less than the relative accuracy, microamperes aside.
func agree(fine, coarse []surge, accuracy float64) bool {
	for k := range fine {
		f, c := &fine[k], &coarse[k]
		if math.Abs(f.peak-c.peak) > accuracy*f.peak+1e-6 || math.Abs(f.integral-c.integral) > 2*accuracy*f.integral+1e-9 {
			return false
		}
	}
	return true
}

// follow integrates a start until the diode currents have settled.
func follow(ctx context.Context, n *solver.Network, devices []solver.Device, steps int) ([]surge, error) {
	list := make([]surge, len(devices))
	quiet := 0
	period := n.Period
	if period == 0 {
		period = 0.02
	}
	err := solver.ColdStart(ctx, n, 0, steps, coldMaxPeriods, func(_ int, tr *solver.Trajectory) bool {
		calm := true
		for k, d := range devices {
			before := list[k].last
			list[k].follow(tr, d, 0, period)
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
