package parts

import (
	"math"
	"testing"
)

func close(got, want, relative float64) bool { return math.Abs(got-want) <= relative*math.Abs(want) }

func TestClassFilesAreClean(t *testing.T) {
	if _, problems := readCapacitors(); len(problems) > 0 {
		t.Error(problems)
	}
	if _, problems := readFuses(); len(problems) > 0 {
		t.Error(problems)
	}
	if _, problems := readResistors(); len(problems) > 0 {
		t.Error(problems)
	}
	if _, problems := readSeries(); len(problems) > 0 {
		t.Error(problems)
	}
	for _, c := range capacitorFigures() {
		if math.IsNaN(c.value.Number) || c.value.Number <= 0 || c.value.Source == "" {
			t.Errorf("%+v", c)
		}
	}
}

// E24 and its neighbours as IEC 60063 lists them; E48 and E96 equal 100 x 10^(i/N) rounded.
func TestNextSteps(t *testing.T) {
	for _, c := range []struct {
		kind     StepKind
		value    float64
		up, down float64 // 0: none
	}{
		{E12, 1900e-6, 2200e-6, 1800e-6}, {E6, 1900e-6, 2200e-6, 1500e-6}, {E12, 2200e-6, 2200e-6, 2200e-6}, {E24, 9.2, 10, 9.1}, {E12, 0.83, 1, 0.82},
		{E12, 8.3, 10, 8.2}, {E3, 3.3e-3, 4.7e-3, 2.2e-3}, {E96, 1000.0001, 1020, 1000}, {E96, 976.5, 1000, 976}, {E48, 1.96, 1.96, 1.96}, {E24, 1e-12, 1e-12, 1e-12}, {E24, 3.95e6, 4.3e6, 3.9e6},
		{VRRMSteps, 77.3, 100, 50}, {VRRMSteps, 100, 100, 100}, {VRRMSteps, 1000.1, 0, 1000}, {VRRMSteps, 10, 50, 0}, {VRRMSteps, 401, 600, 400},
		{ElectrolyticVoltage, 25.5, 35, 25}, {ElectrolyticVoltage, 451, 0, 450}, {ResistorPower, 0.6, 1, 0.5}, {ResistorPower, 6, 7, 5}, {ZenerPower, 0.7, 1, 0.5}, {FuseCurrent, 0.66, 0.8, 0.63},
	} {
		up, ok := NextUp(c.kind, c.value)
		if ok != (c.up != 0) || up != c.up {
			t.Errorf("NextUp(%s, %g) = %g %v, want %g", c.kind, c.value, up, ok, c.up)
		}
		down, ok := NextDown(c.kind, c.value)
		if ok != (c.down != 0) || down != c.down {
			t.Errorf("NextDown(%s, %g) = %g %v, want %g", c.kind, c.value, down, ok, c.down)
		}
	}
	for _, value := range []float64{0, -1, math.NaN(), math.Inf(1)} {
		if _, ok := NextUp(E12, value); ok {
			t.Errorf("NextUp of %g must have no answer", value)
		}
	}
	if _, ok := NextUp("E7", 1); ok {
		t.Error("an unknown series must have no answer")
	}
	if n := len(Steps(E96)); n != 96 {
		t.Errorf("E96 has %d values", n)
	}
	for i, want := range []float64{100, 102, 105, 107, 110, 113, 115} {
		if got := Steps(E96)[i].Value; got != want {
			t.Errorf("E96 value %d is %g, want %g", i, got, want)
		}
	}
	if step := Steps(ResistorPower); step[0].Confidence != Seen || step[len(step)-1].Confidence != Memory {
		t.Error("the power steps of film types were read, those of wire-wound types are from memory")
	}
}

// tan delta/(2 pi f C) by hand. 2200 uF 25 V: (0.14 + 0.02 x 1.2)/(2 pi 120 x 2.2e-3) = 0.164/1.6588 = 0.0989 ohm.
// 100 uF 16 V: 0.16/0.075398 = 2.122 ohm. 10 uF 40 V, between 35 V (0.12) and 50 V (0.10): 0.12/0.0075398 = 15.92 ohm.
func TestElectrolyticESR(t *testing.T) {
	for _, c := range []struct{ farads, rated, want float64 }{{2200e-6, 25, 0.0989}, {100e-6, 16, 2.122}, {10e-6, 40, 15.92}, {2200e-6, 6.3, 0.1531}} {
		if v, ok := ElectrolyticESR(c.farads, c.rated); !ok || !close(v.Number, c.want, 1e-3) {
			t.Errorf("%g F %g V: %g ohm %v, want %g", c.farads, c.rated, v.Number, ok, c.want)
		}
	}
	for _, c := range []struct{ farads, rated float64 }{{0, 25}, {math.NaN(), 25}, {1e-3, 4}, {1e-3, 1000}} {
		if v, ok := ElectrolyticESR(c.farads, c.rated); ok {
			t.Errorf("%g F %g V must be unknown, got %g", c.farads, c.rated, v.Number)
		}
	}
}

func TestElectrolyticFigures(t *testing.T) {
	for _, c := range []struct {
		figure      Figure
		rated, want float64
		confidence  string
	}{
		{SurgeFactor, 25, 1.15, Seen}, {SurgeFactor, 315, 1.15, Seen}, {SurgeFactor, 400, 1.10, Memory},
		{ReverseVoltage, 25, 1, Seen}, {CapTolerance, 25, 0.2, Seen}, {LifeDoublingStep, 25, 10, Memory}, {Endurance, 50, 2000, Seen},
	} {
		if v, ok := Electrolytic(c.figure, c.rated); !ok || v.Number != c.want || v.Confidence != c.confidence {
			t.Errorf("%s at %g V: %+v %v", c.figure, c.rated, v, ok)
		}
	}
}

// Multipliers of the data sheet, 40 to 100 V class: 50 Hz 0.91, 100 Hz 1, 1 kHz 1.13, 10 kHz and above 1.22.
func TestRippleCurves(t *testing.T) {
	curve := RippleCurveByVoltage(63)
	for _, c := range []struct{ hertz, want float64 }{{50, 0.91}, {100, 1}, {1000, 1.13}, {10e3, 1.22}, {1e6, 1.22}, {20, 0.91}} {
		if got := curve.K(c.hertz); !close(got, c.want, 1e-12) {
			t.Errorf("k(%g Hz) = %g, want %g", c.hertz, got, c.want)
		}
	}
	// Half way in the logarithm between 100 and 200 Hz: 141.42 Hz.
	if got := curve.K(100 * math.Sqrt2); !close(got, 1.025, 1e-9) {
		t.Errorf("k(141 Hz) = %g, want 1.025", got)
	}
	if got := RippleCurveByVoltage(25).K(50); got != 0.93 {
		t.Errorf("25 V belongs to the lowest class: k(50 Hz) = %g", got)
	}
	if got := RippleCurveByVoltage(400).K(1000); got != 1.29 {
		t.Errorf("400 V: k(1 kHz) = %g", got)
	}
	for _, c := range []struct{ farads, want float64 }{{47e-6, 0.7}, {100e-6, 0.75}, {1000e-6, 0.75}, {2200e-6, 0.8}} {
		if got := RippleCurveByCapacitance(c.farads).K(50); got != c.want {
			t.Errorf("%g F: k(50 Hz) = %g, want %g", c.farads, got, c.want)
		}
	}
	if got := curve.ReferredTo(120).K(100); got != 0.92 {
		t.Errorf("a 120 Hz rating at 100 Hz: k = %g, want 0.92", got)
	}
	if got := curve.ReferredTo(1000).K(1000); !close(got, 1, 1e-12) {
		t.Errorf("a 1 kHz rating at 1 kHz: k = %g, want 1", got)
	}
	for i := 1; i < len(curve.Hertz); i++ {
		if curve.Hertz[i] <= curve.Hertz[i-1] || curve.Factor[i] < curve.Factor[i-1] {
			t.Error("multipliers must climb with frequency")
		}
	}
}

func TestResistorLines(t *testing.T) {
	line, ok := ResistorLine(DefaultResistorStyle)
	if !ok {
		t.Fatal("no film line")
	}
	// Full to 70 degC, nothing at 155 degC: at 125 degC 30/85 = 35.3 %, which a maker's note prints as 35 %.
	for _, c := range []struct{ celsius, want float64 }{{-40, 1}, {70, 1}, {125, 30.0 / 85}, {155, 0}, {200, 0}} {
		if got := line.Factor(c.celsius); !close(got, c.want, 1e-12) {
			t.Errorf("factor at %g degC = %g, want %g", c.celsius, got, c.want)
		}
	}
	if line.Factor(math.NaN()) != 0 {
		t.Error("an unknown temperature leaves no power")
	}
	if _, ok := ResistorLine("paper"); ok {
		t.Error("an unknown style has a line")
	}
}

func TestFuses(t *testing.T) {
	for marking, want := range map[string]FuseFamily{"T": TimeLagLow, "TL-250V": TimeLagLow, "T-250V": TimeLagLow, "T500mAH250V": TimeLagHigh, "TH": TimeLagHigh, "F": QuickLow, "F1AL250VAC": QuickLow, "fh": QuickHigh} {
		if got, ok := FuseFamilyOf(marking); !ok || got != want {
			t.Errorf("%q is %q, want %q", marking, got, want)
		}
	}
	for _, marking := range []string{"", "FF", "TT", "M", "250V", "slow", "FAST", "T?"} {
		if got, ok := FuseFamilyOf(marking); ok {
			t.Errorf("%q was read as %q", marking, got)
		}
	}
	// Sheet 3: 1.5 IN for at least 1 h, 2.1 IN at most 2 min, 2.75 IN 0.6 to 10 s, 4 IN 0.15 to 3 s, 10 IN 0.02 to 0.3 s.
	want := []FuseGate{{Multiple: 1.5, AtLeast: 3600, AtMost: math.Inf(1)}, {Multiple: 2.1, AtMost: 120}, {Multiple: 2.75, AtLeast: 0.6, AtMost: 10}, {Multiple: 4, AtLeast: 0.15, AtMost: 3}, {Multiple: 10, AtLeast: 0.02, AtMost: 0.3}}
	gates := FuseGates(TimeLagLow, 0.5)
	if len(gates) != len(want) {
		t.Fatalf("%d gates: %+v", len(gates), gates)
	}
	for i, g := range gates {
		if g.Multiple != want[i].Multiple || g.AtLeast != want[i].AtLeast || g.AtMost != want[i].AtMost || g.Source == "" {
			t.Errorf("gate %d: %+v, want %+v", i, g, want[i])
		}
	}
	// 500 mA time-lag: 1.4 A2s at 10 ms, 3.1 A2s at 10 IN.
	if integral, cold, ok := FuseMelting(TimeLagLow, 0.5); !ok || integral.Number != 1.4 || cold.Number != 0.54 {
		t.Errorf("T 500 mA: %+v %+v %v", integral, cold, ok)
	}
	if _, _, ok := FuseMelting(QuickLow, 0.5); ok {
		t.Error("no melting integral of quick fuses is known")
	}
	if _, _, ok := FuseMelting(TimeLagLow, 0.55); ok {
		t.Error("nothing may be interpolated between ratings")
	}
}
