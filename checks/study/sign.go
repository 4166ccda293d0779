package study

import (
	"fmt"
	"math"

	"railproof/netlist/quantity"
)

// searchEffort bounds the search of an island's signs: its toleranced parameters times the square of its nodes. A
// hundred parameters among two hundred nodes are searched.
const searchEffort = 4e6

// beyondSearch reports whether the tolerances of an island are too many to be searched.
func (p *Plan) beyondSearch(island int) bool {
	if island < 0 || island >= len(p.sizes) {
		return false
	}
	nodes := float64(p.sizes[island])
	return float64(p.searched[island])*nodes*nodes > searchEffort
}

// unsearched marks the stresses of islands whose tolerances were not searched: they prove nothing.
func (t *Table) unsearched() {
	for k := range t.Stresses {
		s := &t.Stresses[k]
		home, ok := t.home[s.Element]
		if !ok || home < 0 || s.Unproven != "" || !t.Plan.beyondSearch(home) {
			continue
		}
		s.Unproven = fmt.Sprintf("its part of the circuit has %d toleranced parameters among %d nodes, more than are searched for their worst ends", t.Plan.searched[home], t.Plan.sizes[home])
	}
}

// badEnd says at which end of a parameter a stress is worst: -1, 1, or 0 if where it is now is the worst; matters is
// false if it changes too little at either end to count.
func badEnd(at, low, high *Stress) (end float64, matters bool) {
	threshold := indifferent*math.Abs(at.Value) + trifle(at.Unit)
	gain := func(s *Stress) float64 {
		if s == nil || math.IsNaN(s.Value) {
			return 0
		}
		return badness(at.Quantity, s.Value) - badness(at.Quantity, at.Value)
	}
	l, h := gain(low), gain(high)
	switch {
	case l > threshold && l >= h:
		return -1, true
	case h > threshold:
		return 1, true
	}
	return 0, l < -threshold || h < -threshold
}

// bends reports whether the effect of a parameter on a stress has a corner between its ends.
func (p Parameter) bends(at, low, high *Stress) bool {
	if low == nil || high == nil || p.Low >= 0 || p.High <= 0 {
		return false
	}
	below, above := (at.Value-low.Value)/-p.Low, (high.Value-at.Value)/p.High
	largest := math.Max(math.Abs(at.Value-low.Value), math.Abs(high.Value-at.Value))
	return largest > 5*resolved*math.Abs(at.Value)+trifle(at.Unit) && math.Abs(below-above) > bent*math.Max(math.Abs(below), math.Abs(above))
}

// trifle is a change too small to count beside any rating of a supply: a tenth of a millivolt, ten microamperes, ten
// microwatts, a hundred thousandth of ripple.
func trifle(u quantity.Unit) float64 {
	switch u {
	case quantity.Volt:
		return 1e-4
	case quantity.Ampere, quantity.Watt, quantity.One:
		return 1e-5
	}
	return 0
}
