package study

import (
	"context"
	"fmt"
	"math"
	"strings"
	"testing"

	"railproof/checks/parts"
	"railproof/netlist"
)

// within fails unless a stress is near a number.
func within(t *testing.T, table *Table, element string, q Quantity, want, tolerance float64) {
	t.Helper()
	if found := value(t, table, element, q); math.Abs(found-want) > tolerance {
		t.Errorf("%s %s: %.6g, want %.6g +- %.2g", element, q, found, want, tolerance)
	}
}

// A negative regulator is the mirror of a positive one: every stress the same to 1e-9.
func TestMirroredRegulator(t *testing.T) {
	positive := solveText(t, "p\nV1 a 0 SIN(0 22 50)\nRS a b 1\nD1 b in DX\nC1 in 0 2200u\nX1 in 0 out 7812\n*: rate X1 VOUT=12V VDO=2V IQ=5mA\nRL out 0 50\n"+plainModel)
	negative := solveText(t, "n\nV1 0 a SIN(0 22 50)\nRS a b 1\nD1 in b DX\nC1 0 in 2200u\nX1 in 0 out 7912\n*: rate X1 VOUT=-12V VDO=2V IQ=5mA\nRL 0 out 50\n"+plainModel)
	for _, s := range positive.Stresses {
		if strings.HasPrefix(s.Element, "node:") || s.Element == "V1" || s.Element == "RS" {
			continue
		}
		if found := value(t, negative, s.Element, s.Quantity); math.Abs(found-s.Value) > 1e-9*math.Abs(s.Value)+1e-12 {
			t.Errorf("%s %s: %.12g, mirrored %.12g", s.Element, s.Quantity, s.Value, found)
		}
	}
}

// Without any load the reservoir of a bridge rests at the crest less the drop of two diodes that replace their own
// leakage IS in pulses of a few per cent of the period: n VT ln(1 + 20..100) = 1.8 x 25.9 mV x 3.0..4.6 each, 0.28 to
// 0.43 V for both, where plain integration stops two ordinary drops (1.4 V) below the crest.
func TestNoLoadAtAll(t *testing.T) {
	table := solveText(t, "x\nV1 a b SIN(0 20 50)\nRS a c 0.5\nD1 c out DX\nD2 b out DX\nD3 0 c DX\nD4 0 b DX\nC1 out 0 1000u\n"+plainModel)
	v := value(t, table, "C1", MaxVoltage)
	if v < 19.57 || v > 19.72 {
		t.Errorf("unloaded reservoir at %g V, want 19.57 to 19.72 V", v)
	}
}

// Ammeters of 0 V in series and a resistance of 0 carry the current of the branch: 10 V over 5 ohm is 2 A.
func TestAmmetersInSeries(t *testing.T) {
	table := solveText(t, "x\nV1 a 0 10\nVA a b\nVB b c 0\nR0 c d 0\nR1 d 0 5\n")
	for _, element := range []string{"VA", "VB", "R0", "R1"} {
		within(t, table, element, RMSCurrent, 2, 1e-9)
	}
}

// Three sources in star without neutral, and a floating secondary: nothing ties them to ground, and the stresses of
// the elements are those of the grounded circuit: 100 V line to neutral over 50 ohm is 2 A peak in each.
func TestFloatingStar(t *testing.T) {
	text := "x\nVa a n SIN(0 100 50)\nVb b n SIN(0 100 50 0 0 -120)\nVc c n SIN(0 100 50 0 0 120)\nRa a m 50\nRb b m 50\nRc c m 50\n"
	table := solveText(t, text)
	for _, r := range []string{"Ra", "Rb", "Rc"} {
		within(t, table, r, PeakVoltage, 100, 1e-3)
		within(t, table, r, MeanPower, 100, 1e-3)
	}
}

// A capacitor straight across the source carries w C V: 2 pi 50 x 10 uF x 100 V = 0.31416 A peak.
func TestCapacitorAcrossSource(t *testing.T) {
	table := solveText(t, "x\nV1 a 0 SIN(0 100 50)\nC1 a 0 10u\n")
	within(t, table, "C1", RippleCurrentRMS, 2*math.Pi*50*10e-6*100/math.Sqrt2, 1e-4)
}

// Loops of ideal sources have no unique currents: unproven with a reason, at once.
func TestSourceLoops(t *testing.T) {
	for _, text := range []string{
		"x\nV1 a 0 5\nV2 a 0 6\nR1 a 0 1k\n",
		"x\nV1 a 0 SIN(0 10 50)\nV2 b 0 SIN(0 10 50)\nV3 a b 0\nR1 a 0 1k\n",
		"x\nV1 a 0 5\nL1 a b 0\nV2 b 0 5\nR1 a 0 1k\n",
	} {
		c, d, faults := netlist.Parse("t.cir", []byte(text), nil, parts.Default())
		if len(faults) > 0 {
			t.Fatal(faults)
		}
		table := Nominal(context.Background(), NewSupply(c, d, parts.Default()), false)
		s, ok := table.Get("V1", MeanCurrent)
		if !ok || s.Unproven == "" {
			t.Errorf("%q: the current of a source in a loop counts as solved: %v", text, s)
		}
		if len(table.Unsolved) == 0 {
			t.Errorf("%q: no part of the circuit is reported as unsolved", text)
		}
	}
}

// An ideal source onto an empty capacitor has no finite surge: its stress is unproven, not a number.
func TestUnlimitedSurge(t *testing.T) {
	c, d, faults := netlist.Parse("t.cir", []byte("x\nV1 a 0 SIN(0 100 50 0 0 90)\nD1 a b DX\nC1 b 0 1000u\nRL b 0 1k\n.model DX D(IS=1n)\n"), nil, parts.Default())
	if len(faults) > 0 {
		t.Fatal(faults)
	}
	table := Nominal(context.Background(), NewSupply(c, d, parts.Default()), true)
	if s, ok := table.Get("D1", SurgeCurrent); !ok || s.Unproven == "" {
		t.Errorf("surge without limit: %+v", s)
	}
}

// An emitter follower behind a zener, its supply swept from nothing to 300 V: always solved, and from 20 V on the
// output is the zener voltage less one base-emitter drop, 12 V - 0.6..0.8 V.
func TestZenerAndTransistorSwept(t *testing.T) {
	for _, volts := range []float64{0, 0.1, 1, 5, 12, 13, 20, 50, 100, 200, 300} {
		table := solveText(t, fmt.Sprintf("x\nV1 in 0 %g\nR1 in b 1k\nD1 0 b DZ\nQ1 in b out QN\nRL out 0 100\n.model DZ D(BV=12 IBV=5m)\n.model QN NPN(IS=10f BF=100)\n", volts))
		v := value(t, table, "RL", PeakVoltage)
		if volts >= 20 && (v < 11.1 || v > 11.7) || volts == 0 && v > 1e-6 {
			t.Errorf("%g V in: %g V out", volts, v)
		}
	}
}

// At the start of a dual supply whose halves load one another, the slower rail is pulled the wrong way, but no
// further than the drop of a diode.
func TestOppositeRailAtStart(t *testing.T) {
	c, d, faults := netlist.Parse("t.cir", []byte(`x
V1 a 0 SIN(0 20 50)
RA a a1 1
D1 a1 p DX
D2 n a1 DX
C1 p 0 100u
C2 0 n 10000u
RX p n 10
DP 0 p DX
DN n 0 DX
.model DX D(IS=5n N=1.8)
*: winding V1 as-drawn
`), nil, parts.Default())
	if len(faults) > 0 {
		t.Fatal(faults)
	}
	table := Worst(context.Background(), NewSupply(c, d, parts.Default()), 0)
	for _, element := range []string{"C1", "C2"} {
		if v := value(t, table, element, MinVoltage); v < -1.2 {
			t.Errorf("%s reaches %g V, beyond the clamping diode", element, v)
		}
	}
}

// A waveform that does not repeat counts with the value at which it ends.
func TestFinalValues(t *testing.T) {
	table := solveText(t, "x\nV1 a 0 PWL(0 0 10m 12)\nR1 a 0 6\nV2 b 0 PULSE(1 5 0 1u 1u 1m)\nR2 b 0 1\nV3 c 0 SIN(3 9 50 0 100)\nR3 c 0 1\n")
	within(t, table, "R1", PeakVoltage, 12, 1e-9)
	within(t, table, "R2", PeakVoltage, 1, 1e-9)
	within(t, table, "R3", PeakVoltage, 3, 1e-9)
}

// An element without a law makes its own part of the circuit unproven and no other.
func TestUnknownElement(t *testing.T) {
	c, d, faults := netlist.Parse("t.cir", []byte("x\nV1 a 0 10\nX1 a b 0 MYSTERY\nR1 b 0 1k\nV2 c 0 5\nR2 c 0 1k\n"), nil, parts.Default())
	if len(faults) > 0 {
		t.Fatal(faults)
	}
	table := Nominal(context.Background(), NewSupply(c, d, parts.Default()), false)
	if s, _ := table.Get("R1", MeanPower); s == nil || s.Unproven == "" {
		t.Errorf("R1 behind an unknown element: %+v", s)
	}
	within(t, table, "R2", MeanPower, 25e-3, 1e-9)
}
