package checks

import (
	"context"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"railproof/checks/parts"
	"railproof/checks/study"
	"railproof/netlist"
)

// sizes is what Size finds for a netlist.
func sizes(t *testing.T, file string) []Sizing {
	t.Helper()
	_, list, diagnostics, err := Size(context.Background(), Options{Source: netlist.Source{File: file}, Jobs: 1})
	for _, d := range diagnostics {
		t.Error(d)
	}
	if err != nil {
		t.Fatal(err)
	}
	return list
}

// sizesOf is what Size finds for a netlist that is given as text.
func sizesOf(t *testing.T, deck, duty string) []Sizing {
	t.Helper()
	file := filepath.Join(t.TempDir(), "case.cir")
	for name, text := range map[string]string{file: "case\n" + deck + "\n.end\n", strings.TrimSuffix(file, ".cir") + ".duty": duty + "\n"} {
		if err := os.WriteFile(name, []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	return sizes(t, file)
}

// sizeOf is the sizing of one check on one element.
func sizeOf(t *testing.T, list []Sizing, check, element string) Sizing {
	t.Helper()
	for _, s := range list {
		if s.Finding.Check == check && s.Finding.Element == element {
			return s
		}
	}
	t.Fatalf("%s on %s is not violated", check, element)
	return Sizing{}
}

// changeOf is the first change of a symbol among the remedies, with its remedy.
func changeOf(t *testing.T, s Sizing, symbol netlist.Symbol) (Change, Remedy) {
	t.Helper()
	for _, r := range s.Remedies {
		if r.Changes[0].Symbol == symbol {
			return r.Changes[0], r
		}
	}
	t.Fatalf("%s: no remedy changes %s: %+v %s", s.Finding.Check, symbol, s.Remedies, s.Short)
	return Change{}, Remedy{}
}

// within holds that a value was changed to lie between two bounds worked out by hand.
func within(t *testing.T, s Sizing, symbol netlist.Symbol, low, high float64) Remedy {
	t.Helper()
	c, r := changeOf(t, s, symbol)
	if c.To < low*(1-1e-9) || c.To > high*(1+1e-9) {
		t.Errorf("%s: %s goes to %g, by hand %g to %g", s.Finding.Check, symbol, c.To, low, high)
	}
	if next, ok := parts.NextUp(c.Series, c.To); c.Series == "" || !ok || math.Abs(next-c.To) > 1e-9*c.To {
		t.Errorf("%s: %g is no value of %q", s.Finding.Check, c.To, c.Series)
	}
	return r
}

// P = (V - VZ)^2/R: (26.4 V - 11.4 V)^2/(0.95 x 470 ohm) = 0.504 W; over 0.6 that is 0.84 W. With the output shorted
// it is (26.4 V)^2/470 ohm = 1.48 W, so that 1 W does not do and 2 W does. At 0.6 W the resistor must be at least
// 697 V^2/0.6 W = 1162 ohm: 1.2 kohm of E24.
func TestSizeZenerResistor(t *testing.T) {
	list := sizes(t, filepath.Join(demos, "zener-resistor-power", "fail.cir"))
	s := sizeOf(t, list, "zener-resistor-power", "R1")
	if r := within(t, s, "P70", 2, 2); r.Solved || r.Limit.Value != 1.2 || math.Abs(r.After.Value-0.504) > 0.015 {
		t.Errorf("2 W: %+v %+v", r.After, r.Limit)
	}
	r := within(t, s, "R", 1200, 1200)
	if !r.Solved || r.After.Value > 0.36 {
		t.Errorf("1.2 kohm: %+v", r.After)
	}
}

// The crest at low line is 0.9 x 20 V less two drops of 0.06 V and 0.05 V in RW: 17.8 V. The regulator needs 12.6 V +
// 2.5 V + 0.5 V = 15.6 V, which leaves 2.2 V of ripple. 0.508 A discharge the reservoir for 8 to 10.1 ms, until the
// next crest: C = I t/dV = 1.85 to 2.33 mF, over 0.8 for its age 2.3 to 2.9 mF: 3.3 mF of E6. At high line the diodes
// then carry w C V sin(theta) = 314/s x 4 mF x 21.8 V x 0.3 = 8 A, and 4 to 5 A at 1 mF; they are rated for 7 A.
func TestSizeReservoir(t *testing.T) {
	if testing.Short() {
		t.Skip("takes long; held by the full run")
	}
	list := sizesOf(t, `V1  a   b   SIN(0 20 50)
RW  a   c   0.005
D1  c   raw DI
D2  b   raw DI
D3  0   c   DI
D4  0   b   DI
C1  raw 0   1000u
X1  raw 0   out LM7812
C2  out 0   1u
ILOAD out 0 0.5
.model DI D(IS=1n N=0.1)`, `winding V1 as-drawn
load ILOAD 0A..0.5A
part X1 7812 pins=in,gnd,out
cooling X1 3K/W
rate C1 UR=35V tolerance=-0.001%..+0.001%
rate D1..D4 IFRM=7A`)
	s := sizeOf(t, list, "regulator-headroom", "X1")
	r := within(t, s, "C", 2.3e-3, 3.3e-3)
	if !r.Solved || r.After.Value < 0.5 || r.After.Value > 1.2 {
		t.Errorf("headroom then %+v", r.After)
	}
	worse := ""
	for _, f := range r.Worse {
		worse += f.Check + " " + f.Element + " " + string(f.Verdict) + "; "
	}
	if !strings.Contains(worse, "diode-repetitive-peak-current D1 violated") {
		t.Errorf("made worse: %q", worse)
	}
}

// 0.5 A/(49.5 Hz x 0.8 C) is 0.5 V at 25.3 mF, C at its age and the line at its lowest frequency; the fortieth of the
// period in which the diode conducts takes 0.6 mF off. The next value of E6 is 33 mF.
func TestSizeRipple(t *testing.T) {
	list := sizes(t, filepath.Join(demos, "rail-ripple", "fail.cir"))
	within(t, sizeOf(t, list, "rail-ripple", "node:out"), "C", 33e-3, 33e-3)
}

// A direct input of 0.9 x 16 V = 14.4 V is 1.2 V below 12.6 V + 2.5 V + 0.5 V, whatever the reservoir.
func TestSizeNoneHelps(t *testing.T) {
	s := sizeOf(t, sizes(t, filepath.Join(demos, "regulator-headroom", "fail.cir")), "regulator-headroom", "X1")
	if len(s.Remedies) > 0 || s.Unproven != "" || !strings.Contains(s.Short, "the crest at low line is short by 1.2 V") {
		t.Errorf("%+v", s)
	}
}

// (21.6 V - VZ)/(1.05 R) = 25 mA + 0.25 mA; at the knee VZ is 11.7 V to 12.6 V: R is 339 to 373 ohm, 330 or 360 ohm.
func TestSizeZenerFeed(t *testing.T) {
	s := sizeOf(t, sizes(t, filepath.Join(demos, "zener-regulation", "fail.cir")), "zener-regulation", "DZ1")
	if r := within(t, s, "R", 330, 373); !r.Changes[0].AtMost || r.After.Value < 0.25e-3 {
		t.Errorf("%+v", r)
	}
}

// 12.6 V x (26.4 V - 12.6 V)/(0.95 R) = 0.547 W at R = 335 ohm: 360 ohm of E24. A part of more power carries 0.833 W
// over 0.6 = 1.39 W in air of 45 degC only with (200 - 45)/1.39 W = 111 K/W: 110 K/W, PD 5 W.
func TestSizeZenerPower(t *testing.T) {
	s := sizeOf(t, sizes(t, filepath.Join(demos, "zener-power", "fail.cir")), "zener-power", "DZ1")
	within(t, s, "R", 330, 360)
	r := within(t, s, "PD", 5, 5)
	if len(r.Changes) != 2 || r.Changes[1].Symbol != "RthJA" || r.Changes[1].To != 110 {
		t.Errorf("%+v", r.Changes)
	}
}

// t = R C ln(V0/60 V): 2 s/(1.05 x 1.2 x 100 uF x ln(330/60)) = 9.31 kohm, in E24 9.1 kohm.
func TestSizeBleeder(t *testing.T) {
	s := sizeOf(t, sizes(t, filepath.Join(demos, "stored-charge", "fail.cir")), "stored-charge", "C1")
	if r := within(t, s, SymbolBleeder, 9100, 9100); !math.IsInf(r.Changes[0].From, 1) || r.After.Value > 2 || r.After.Value < 1.8 {
		t.Errorf("%+v", r)
	}
}

// L = R/(3 w) = 2000/942 = 2.12 H, by a tolerance of a fifth and a frequency 1 % lower 2.68 H; the harmonics beyond the
// second ask for a little more: 2.7 H or 3.3 H of E12.
func TestSizeChoke(t *testing.T) {
	if testing.Short() {
		t.Skip("takes long; held by the full run")
	}
	s := sizeOf(t, sizes(t, filepath.Join(demos, "choke-inductance", "fail.cir")), "choke-inductance", "L1")
	within(t, s, "L", 2.7, 3.3)
}

// 1.089 A over 0.75 is 1.45 A: the next step of R10 is 1.6 A.
func TestSizeFuse(t *testing.T) {
	s := sizeOf(t, sizes(t, filepath.Join(demos, "fuse-current", "fail.cir")), "fuse-current", "RF1")
	if r := within(t, s, "IN", 1.6, 1.6); r.Solved {
		t.Error("a fuse of another rating is the same circuit")
	}
}

// Of a value found, the one before it was tried and fails; few are tried.
func TestSmallest(t *testing.T) {
	for _, n := range []int{1, 2, 3, 18, 48} {
		for want := -1; want < n; want++ {
			tried := map[int]bool{}
			got := smallest(n, func(k int) bool {
				tried[k] = true
				return want >= 0 && k >= want
			})
			if got != want || want > 0 && !tried[want-1] || len(tried) > 11 {
				t.Errorf("%d of %d: got %d after %d tries", want, n, got, len(tried))
			}
		}
	}
}

// IEC 60063: E6 from 1000 uF up, E24 from 470 ohm down.
func TestSeriesSteps(t *testing.T) {
	for _, c := range []struct {
		kind parts.StepKind
		from float64
		down bool
		want []float64
	}{
		{parts.E6, 1000e-6, false, []float64{1500e-6, 2200e-6, 3300e-6, 4700e-6}},
		{parts.E24, 470, true, []float64{430, 390, 360, 330}},
		{parts.ResistorPower, 0.6, false, []float64{1, 2, 3, 5}},
		{parts.VRRMSteps, 800, false, []float64{1000}},
	} {
		got := steps(c.kind, c.from, c.down, 4)
		if len(got) != len(c.want) {
			t.Errorf("%s from %g: %g", c.kind, c.from, got)
			continue
		}
		for k := range got {
			if math.Abs(got[k]-c.want[k]) > 1e-9*c.want[k] {
				t.Errorf("%s from %g: %g, want %g", c.kind, c.from, got, c.want)
			}
		}
	}
}

// What nothing stresses asks for no rating in figures; what is stressed does.
func TestNeedsOfNothing(t *testing.T) {
	for value, want := range map[float64]float64{0: 0, 1e-13: 0, 40: 50} {
		list := findings(t, "diode-reverse-voltage", "V1 a 0 10\nD1 a b DX\nR1 b 0 1k\n.model DX D(RS=1)", "", of("D1", study.PeakReverseVoltage, value))
		if len(list) != 1 || list[0].Verdict != Unproven || list[0].Needs == nil || math.Abs(list[0].Needs.Value-want) > 1e-9 ||
			strings.Contains(list[0].Reason, "any will do") != (want == 0) {
			t.Errorf("%g V: %+v", value, list)
		}
	}
}
