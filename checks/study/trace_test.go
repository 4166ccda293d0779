package study

import (
	"context"
	"math"
	"strings"
	"testing"

	"railproof/checks/parts"
	"railproof/netlist"
)

// traceText follows signals of a netlist exactly as written: "out" is a node, "D1:voltage" of an element.
func traceText(t *testing.T, text string, cold bool, w Window, names ...string) *Trace {
	t.Helper()
	c, d, faults := netlist.Parse("test.cir", []byte(text), nil, parts.Default())
	if len(faults) > 0 {
		t.Fatal(faults)
	}
	var signals []Signal
	for _, name := range names {
		element, kind, ok := strings.Cut(name, ":")
		if !ok {
			id, _ := c.FindNode(name)
			signals = append(signals, Signal{IsNode: true, Node: id, Kind: VoltageSignal})
			continue
		}
		id, _ := c.Find(element)
		signals = append(signals, Signal{Element: id, Kind: SignalKind(kind)})
	}
	p := NewPlan(NewSupply(c, d, parts.Default()))
	tr := p.Trace(context.Background(), Setting{Nominal: true, Cold: cold}, signals, w)
	for _, wave := range tr.Waveforms {
		if wave.Unproven != "" || len(wave.Values) != len(tr.Times) || len(tr.Times) < 2 {
			t.Fatalf("%s: %q, %d values at %d times", wave.Name, wave.Unproven, len(wave.Values), len(tr.Times))
		}
	}
	return tr
}

func near(t *testing.T, what string, got, want, relative float64) {
	t.Helper()
	if !(math.Abs(got-want) <= relative*math.Abs(want)) {
		t.Errorf("%s is %g, want %g", what, got, want)
	}
}

// An RC low-pass of 1 kOhm and 1 uF at 50 Hz: w R C = 0.314159, gain 1/sqrt(1 + 0.314159^2) = 0.954027, lag
// atan 0.314159 = 0.304397 rad = 0.968926 ms, so the crest of the output is at 5.968926 ms.
func TestTraceOfLowPass(t *testing.T) {
	tr := traceText(t, "t\nV1 in 0 SIN(0 10 50)\nR1 in out 1k\nC1 out 0 1u\n", false, Window{Periods: 2}, "out", "C1:current", "V1:current")
	out := tr.Waveforms[0]
	near(t, "crest", out.Max.Value, 9.54027, 1e-4)
	near(t, "its time", out.Max.Time, 5.968926e-3, 2e-3)
	near(t, "trough", out.Min.Value, -9.54027, 1e-4)
	near(t, "end", tr.Times[len(tr.Times)-1], 0.04, 1e-9)
	for n, at := range tr.Times {
		want := 9.54027 * math.Sin(2*math.Pi*50*at-0.304397)
		if math.Abs(out.Values[n]-want) > 3e-3 {
			t.Fatalf("at %g s the output is %g V, want %g V", at, out.Values[n], want)
		}
		if n > 0 && at < tr.Times[n-1] {
			t.Fatalf("time runs back at %g s", at)
		}
		// What flows into the capacitor comes out of the source.
		if sum := tr.Waveforms[1].Values[n] + tr.Waveforms[2].Values[n]; math.Abs(sum) > 1e-9 {
			t.Fatalf("at %g s %g A are lost", at, sum)
		}
	}
	// w C |U| = 314.159 x 1e-6 x 9.54027
	near(t, "current", tr.Waveforms[1].Max.Value, 2.997164e-3, 2e-3)
}

// The mean of a half-wave rectified sine is its amplitude over pi: 10 V / pi = 3.18310 V.
func TestTraceOfHalfWave(t *testing.T) {
	tr := traceText(t, "t\nV1 in 0 SIN(0 10 50)\nD1 in out DX\nR1 out 0 100\n"+sharpModel, false, Window{Periods: 3}, "out", "D1:voltage")
	sum, values := 0.0, tr.Waveforms[0].Values
	for n := 1; n < len(tr.Times); n++ {
		sum += (tr.Times[n] - tr.Times[n-1]) * (values[n] + values[n-1]) / 2
	}
	near(t, "mean", sum/0.06, 10/math.Pi, 3e-3)
	near(t, "reverse voltage", tr.Waveforms[1].Min.Value, -10, 1e-4)
	near(t, "its time", tr.Waveforms[1].Min.Time, 0.015, 1e-3)
}

// A capacitor charged through a resistor: 10 V (1 - exp(-t/RC)), RC = 10 ms; the window ends at 35 ms, inside a step.
func TestTraceOfColdStart(t *testing.T) {
	tr := traceText(t, "t\nV1 in 0 10\nR1 in out 1k\nC1 out 0 10u\n", true, Window{Duration: 0.035}, "out")
	near(t, "end", tr.Times[len(tr.Times)-1], 0.035, 1e-9)
	for n, at := range tr.Times {
		if want := 10 * (1 - math.Exp(-at/0.01)); math.Abs(tr.Waveforms[0].Values[n]-want) > 2e-3 {
			t.Fatalf("at %g s %g V, want %g V", at, tr.Waveforms[0].Values[n], want)
		}
	}
	near(t, "highest", tr.Waveforms[0].Max.Value, 10*(1-math.Exp(-3.5)), 1e-4)
}

// A diode that cuts the current of a choke off: its voltage jumps from the drop to the source's, and both sides of
// the jump stand in the trace, closer together than the steps of the solution.
func TestTraceKeepsBothSidesOfAJump(t *testing.T) {
	tr := traceText(t, "t\nV1 in 0 SIN(0 10 50)\nD1 in a DX\nL1 a out 10m\nR1 out 0 3\n"+sharpModel, false, Window{Periods: 1}, "D1:voltage", "in")
	step, jumps := tr.Times[1]-tr.Times[0], 0
	for n := 1; n < len(tr.Times); n++ {
		apart := tr.Times[n] - tr.Times[n-1]
		change := tr.Waveforms[0].Values[n] - tr.Waveforms[0].Values[n-1]
		if apart < 0.999*step && change < -3 {
			jumps++
			near(t, "voltage behind the jump", tr.Waveforms[0].Values[n], tr.Waveforms[1].Values[n], 1e-3)
			if before := tr.Waveforms[0].Values[n-1]; math.Abs(before) > 0.5 {
				t.Errorf("%g V before the jump", before)
			}
		}
	}
	if jumps != 1 {
		t.Errorf("%d jumps in a period, want 1", jumps)
	}
}

// Two supplies on one source are solved apart; what the source delivers is the sum.
func TestTraceOfSharedSource(t *testing.T) {
	tr := traceText(t, "t\nV1 in 0 SIN(0 10 50)\nR1 in a 100\nC1 a 0 100u\nD1 in b DX\nR2 b 0 50\n"+sharpModel, false, Window{Periods: 2},
		"V1:current", "R1:current", "D1:current")
	for n := range tr.Times {
		if sum := tr.Waveforms[0].Values[n] + tr.Waveforms[1].Values[n] + tr.Waveforms[2].Values[n]; math.Abs(sum) > 1e-6 {
			t.Fatalf("at %g s %g A are lost", tr.Times[n], sum)
		}
	}
}

// A point that only one series has survives in all, in order, and the others are interpolated.
func TestAlign(t *testing.T) {
	a := &series{times: []float64{0, 1, 1, 2}, values: []float64{0, 1, 5, 6}}
	b := &series{times: []float64{0, 0.5, 2}, values: []float64{0, 1, 4}}
	times, values := align([]*series{a, b})
	want := [][3]float64{{0, 0, 0}, {0.5, 0.5, 1}, {1, 1, 2}, {1, 5, 2}, {2, 6, 4}}
	if len(times) != len(want) {
		t.Fatalf("%v", times)
	}
	for n, w := range want {
		if times[n] != w[0] || values[0][n] != w[1] || values[1][n] != w[2] {
			t.Errorf("row %d is %g %g %g, want %v", n, times[n], values[0][n], values[1][n], w)
		}
	}
}
