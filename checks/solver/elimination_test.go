package solver

import (
	"context"
	"math"
	"testing"

	"pgregory.net/rapid"
)

// drawSupply draws a rectifier with a reservoir and what may follow it.
func drawSupply(t *rapid.T) (n *Network, amplitude float64) {
	between := func(low, high float64, what string) float64 {
		return low * math.Pow(high/low, rapid.Float64Range(0, 1).Draw(t, what))
	}
	n = New(3)
	n.Period = 1 / lineFrequency
	amplitude = between(5, 300, "crest")
	d := Diode{IS: between(1e-14, 1e-8, "IS"), N: between(1, 2, "N"), VT: ThermalVoltage(27)}
	source := n.AddNode()
	if rapid.Bool().Draw(t, "half wave") {
		n.AddVoltageSource(source, 0, line(amplitude, 0))
		n.AddResistor(source, 1, between(0.05, 5, "winding"))
		anode := n.AddNode()
		n.AddDiode(1, anode, d)
		n.AddResistor(anode, 2, 0.01)
	} else {
		other := n.AddNode()
		n.AddVoltageSource(source, other, line(amplitude, 0))
		n.AddResistor(source, 1, between(0.05, 5, "winding"))
		n.AddDiode(1, 2, d)
		n.AddDiode(other, 2, d)
		n.AddDiode(0, 1, d)
		n.AddDiode(0, other, d)
	}
	n.AddCapacitor(2, 0, between(20e-6, 5e-3, "reservoir"), 0)
	load := between(0.01, 1, "load")
	out := n.AddNode()
	switch rapid.IntRange(0, 4).Draw(t, "what follows") {
	case 0: // a regulator that may drop out and limit, with a diode back and a capacitor
		r := Regulator{Sign: 1, Set: amplitude * between(0.2, 1.2, "set"), Dropout: between(0.2, 2.5, "drop-out"), ROut: 0.02, Quiescent: 5e-3, Rejection: 1e-3}
		if rapid.Bool().Draw(t, "limits") {
			r.CurrentLimit = load * between(0.5, 3, "limit")
		}
		n.AddRegulator(2, 0, out, r)
		n.AddDiode(out, 2, d)
		n.AddCapacitor(out, 0, between(0.1e-6, 100e-6, "output capacitor"), 0)
		n.AddConstantCurrentLoad(out, 0, load, 0.5)
	case 1: // a zener behind a resistor
		n.AddResistor(2, out, amplitude/load*between(0.1, 1, "series"))
		n.AddDiode(0, out, Diode{IS: 1e-14, N: 1, BV: amplitude * between(0.2, 0.9, "zener"), IBV: 5e-3, VT: d.VT})
		n.AddResistor(out, 0, amplitude/load)
	case 2: // a load that the ripple switches
		n.AddSwitch(2, out, Branch{2, 0}, Switch{Threshold: 0.8 * amplitude, Hysteresis: 0.05 * amplitude, ROn: 0.1, ROff: 1e6})
		n.AddResistor(out, 0, amplitude/load)
	case 3: // an emitter follower
		base := n.AddNode()
		n.AddResistor(2, base, 10*amplitude/load)
		n.AddDiode(0, base, Diode{IS: 1e-14, N: 1, BV: 0.5 * amplitude, IBV: 1e-3, VT: d.VT})
		n.AddBipolar(2, base, out, Bipolar{Sign: 1, IS: 1e-14, BF: 100, BR: 1, NF: 1, NR: 1, VT: d.VT})
		n.AddResistor(out, 0, amplitude/load)
	default:
		n.AddConstantCurrentLoad(2, out, load, 0.5)
		n.AddResistor(out, 0, 0.1)
	}
	return n, amplitude
}

// A period steps to the same state, with the same derivatives, whether or not laws are eliminated.
func TestEliminationChangesNothing(t *testing.T) {
	used, unsolved, compared := 0, 0, 0
	rapid.Check(t, func(t *rapid.T) {
		n, amplitude := drawSupply(t)
		sys, err := newSystem(n)
		if err != nil {
			t.Fatal(err)
		}
		steps := rapid.SampledFrom([]int{32, 64, 100}).Draw(t, "steps")
		var marches [2]*march
		for k := range marches {
			if marches[k], err = newMarch(sys, n.Period/float64(steps)); err != nil {
				t.Fatal(err)
			}
		}
		with, without := marches[0], marches[1]
		without.stage.eliminates = false
		for period := range 3 {
			if err := without.period(context.Background(), 0, steps, true, nil, false); err != nil {
				unsolved++ // with elimination it may be; there is nothing to compare
				return
			}
			if err := with.period(context.Background(), 0, steps, true, nil, false); err != nil {
				t.Fatalf("with elimination alone: %v", err)
			}
			for k := range with.x {
				if math.Abs(with.x[k]-without.x[k]) > 1e-5*amplitude {
					t.Fatalf("period %d: state %d is %.9g with elimination, %.9g without", period, k, with.x[k], without.x[k])
				}
			}
			for k, v := range without.flow.data {
				if math.Abs(with.flow.data[k]-v) > 0.003+0.03*math.Abs(v) { // without, they are exact to the slack of the slopes
					t.Fatalf("period %d: derivative %d is %.6g with elimination, %.6g without", period, k, with.flow.data[k], v)
				}
			}
		}
		used += len(with.stage.eliminations)
		compared++
	})
	if used == 0 || unsolved > compared/20 {
		t.Errorf("%d eliminations; %d of %d supplies could not be stepped at all", used, unsolved, unsolved+compared)
	}
}
