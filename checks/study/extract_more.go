package study

import (
	"math"

	"railproof/checks/parts"
	"railproof/checks/solver"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

// harmonics is up to which multiple of the line frequency the ripple current is taken apart; what lies above
// counts with the multiplier of the last.
const harmonics = 40

// checkStresses are the stresses that only the checks read; the netlist exactly as written has none of them.
func (c *collector) checkStresses(id netlist.ElementID, e *netlist.Element, dev solver.Device) {
	v, i := c.voltage(dev, 0), c.current(dev, 0)
	switch d := e.Device.(type) {
	case netlist.Capacitor:
		c.put(RMSVoltage, quantity.Volt, v, rms)
		c.put(SteadyMaxVoltage, quantity.Volt, v, magnitude)
		c.equivalentRipple(id, &d, dev)
	case netlist.Diode:
		if !c.plan.supply.IsZener(id) {
			return
		}
		c.put(MeanReverseCurrent, quantity.Ampere, scaled(-1, i), mean)
	case netlist.Inductor:
		c.put(DCCurrent, quantity.Ampere, i, func(st solver.Stats) (float64, float64) { return math.Abs(st.Mean), math.NaN() })
		c.put(LeastCurrent, quantity.Ampere, i, func(st solver.Stats) (float64, float64) {
			if st.Mean < 0 {
				return -st.Max.Value, st.Max.At
			}
			return st.Min.Value, st.Min.At
		})
	case netlist.VoltageSource:
		c.put(DCCurrent, quantity.Ampere, i, func(st solver.Stats) (float64, float64) { return math.Abs(st.Mean), math.NaN() })
	case netlist.Transistor:
		sign := 1.0
		if c.plan.supply.bipolarPolarity(id, &d) < 0 {
			sign = -1
		}
		c.put(MaxVEB, quantity.Volt, scaled(-sign, c.voltage(dev, 1)), positive)
		c.put(PeakPower, quantity.Watt, combine(1, product(v, i), 1, product(c.voltage(dev, 1), c.current(dev, 1))), largest)
	case netlist.Fet:
		c.put(MaxVGS, quantity.Volt, c.voltage(dev, 1), magnitude)
		c.put(PeakPower, quantity.Watt, product(v, i), largest)
	case netlist.Regulator:
		if d.Shunt {
			return
		}
		sign := 1.0
		if d.Polarity < 0 {
			sign = -1
		}
		c.put(MaxDifferential, quantity.Volt, combine(sign, v, -sign, c.voltage(dev, 1)), largest)
		c.put(MinOutputCurrent, quantity.Ampere, scaled(-sign, c.current(dev, 1)), smallest)
	}
}

// equivalentRipple puts the RMS current at the rating's reference frequency that heats the capacitor as much
// as its current does: I^2 = sum (In/kn)^2, with the multipliers kn of its voltage class.
func (c *collector) equivalentRipple(id netlist.ElementID, d *netlist.Capacitor, dev solver.Device) {
	if c.plan.period == 0 || d.Farads < electrolyticFrom {
		return
	}
	rated := c.plan.supply.number(id, "UR", 0)
	curve := parts.RippleCurveByCapacitance(d.Farads)
	if rated > 0 {
		curve = parts.RippleCurveByVoltage(rated)
	}
	local := c.local(dev)
	base := 1 / c.plan.period
	c.put(RippleCurrentEquivalent, quantity.Ampere, figure(func(tr *solver.Trajectory) float64 {
		_, current := tr.BranchOf(local, 0)
		return weighted(current[:tr.Samples()], base, curve)
	}), mean)
}

// weighted is sqrt(sum (In/kn)^2) of one period of a current.
func weighted(current []float64, base float64, curve parts.RippleCurve) float64 {
	n := len(current) - 1
	total := 0.0
	for _, i := range current[:n] {
		total += i * i
	}
	total /= float64(n)
	sum := 0.0
	k := 1.0
	for h := 1; h <= harmonics && 2*h < n; h++ {
		re, im := 0.0, 0.0
		// The rotation advances by one angle a sample: two multiplications instead of a sine each.
		cos, sin := math.Cos(2*math.Pi*float64(h)/float64(n)), math.Sin(2*math.Pi*float64(h)/float64(n))
		x, y := 1.0, 0.0
		for _, i := range current[:n] {
			re += i * x
			im += i * y
			x, y = x*cos-y*sin, x*sin+y*cos
		}
		power := 2 * (re*re + im*im) / (float64(n) * float64(n))
		k = curve.K(float64(h) * base)
		sum += power / (k * k)
		total -= power
	}
	return math.Sqrt(sum + math.Max(0, total)/(k*k))
}
