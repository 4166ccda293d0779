package solver

import (
	"context"
	"math"
	"testing"
)

// sharp is a diode so close to ideal that its drop (a few millivolts) disappears beside tens of volts.
var sharp = Diode{IS: 1e-9, N: 0.01, VT: ThermalVoltage(27)}

// silicon is an ordinary junction.
var silicon = Diode{IS: 1e-14, N: 1, VT: ThermalVoltage(27)}

const (
	lineFrequency = 50.0
	crest         = 100.0
)

func line(amplitude, phase float64) Wave {
	return Sinusoid{Amplitude: amplitude, Frequency: lineFrequency, Phase: phase}
}

// rectifier is a single-phase supply with the devices that tests look at.
type rectifier struct {
	net       *Network
	diodes    []Device
	source    Device
	reservoir Device
	load      Device
}

// halfWave is a source of crest volts with rs in series, one diode, a reservoir c (0: none) and a load r.
func halfWave(rs, c, r float64, d Diode) rectifier {
	n := New(4)
	n.Period = 1 / lineFrequency
	x := rectifier{net: n, reservoir: -1}
	x.source = n.AddVoltageSource(1, 0, line(crest, 0))
	n.AddResistor(1, 2, rs)
	x.diodes = []Device{n.AddDiode(2, 3, d)}
	if c > 0 {
		x.reservoir = n.AddCapacitor(3, 0, c, 0)
	}
	x.load = n.AddResistor(3, 0, r)
	return x
}

// bridge is the same with four diodes; the source floats.
func bridge(rs, c, r float64, d Diode) rectifier {
	n := New(5)
	n.Period = 1 / lineFrequency
	x := rectifier{net: n, reservoir: -1}
	x.source = n.AddVoltageSource(1, 2, line(crest, 0))
	n.AddResistor(1, 3, rs)
	x.diodes = []Device{n.AddDiode(3, 4, d), n.AddDiode(2, 4, d), n.AddDiode(0, 3, d), n.AddDiode(0, 2, d)}
	if c > 0 {
		x.reservoir = n.AddCapacitor(4, 0, c, 0)
	}
	x.load = n.AddResistor(4, 0, r)
	return x
}

// centreTap has two half windings of crest volts each, rs in each.
func centreTap(rs, c, r float64, d Diode) rectifier {
	n := New(6)
	n.Period = 1 / lineFrequency
	x := rectifier{net: n, reservoir: -1}
	x.source = n.AddVoltageSource(1, 0, line(crest, 0))
	n.AddVoltageSource(0, 2, line(crest, 0))
	n.AddResistor(1, 3, rs)
	n.AddResistor(2, 4, rs)
	x.diodes = []Device{n.AddDiode(3, 5, d), n.AddDiode(4, 5, d)}
	if c > 0 {
		x.reservoir = n.AddCapacitor(5, 0, c, 0)
	}
	x.load = n.AddResistor(5, 0, r)
	return x
}

func steady(t *testing.T, n *Network) *Solution {
	t.Helper()
	s, err := SteadyState(context.Background(), n, Options{})
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// near fails unless found is within a relative tolerance of want.
func near(t *testing.T, what string, found, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(found-want) <= tolerance*math.Abs(want)) {
		t.Errorf("%s: found %.7g, want %.7g within %.2g %%", what, found, want, 100*tolerance)
	}
}
