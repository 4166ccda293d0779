package netlist

import (
	"strings"
	"testing"
)

// lastDevice is the device of the last element of a card set behind two others.
func lastDevice(t *testing.T, card string) (Device, *Circuit) {
	t.Helper()
	c := accepted(t, "t\nV0 a 0 5\nR0 b 0 1\n"+card+"\n")
	return c.Elements[len(c.Elements)-1].Device, c
}

// What would be read wrongly in silence is refused.
func TestAmbiguousCardsAreRefused(t *testing.T) {
	for card, want := range map[string]string{
		"R1 a 0 4,7k":             "comma inside a number",
		"C1 a 0 2,2u":             "comma inside a number",
		"V1 a 0 12,5":             "comma inside a number",
		"V1 a 0 DC 12,5":          "comma inside a number",
		"D1 a b":                  "2 words",
		"R1 a 0 {zz}":             "neither a number nor a parameter",
		"F1 a 0 V9 1":             "not there",
		"K1 L1 L9 1\nL1 a 0 1":    "not there",
		"R1 a 0 x\n.param x=1 2":  "formula",
		".param x=1\n.param y= ":  "value",
		"X1 a S\n.subckt S p q\n": "no .ends",
	} {
		_, _, faults := Parse("t.cir", []byte("t\nV0 a 0 5\nR0 b 0 1\n"+card+"\n"), nil, regulators{})
		if card == "R1 a 0 x\n.param x=1 2" && len(faults) == 0 {
			t.Errorf("%q was accepted", card)
			continue
		}
		if len(faults) == 0 || !strings.Contains(faults[0].Error(), want) {
			t.Errorf("%q: %v, want %s", card, faults, want)
		}
	}
}

// What cannot be modelled is kept as unknown, so that its island stays unproven.
func TestWhatIsNotModelledIsKeptAsUnknown(t *testing.T) {
	for card, why := range map[string]string{
		"I1 a 0 tbl=(0 0, 1 1)":               "tbl=",
		"V1 a 0 wavefile=x.wav":               "wavefile=",
		"V1 a 0 PWL(0 0 1m 5) R=0":            "repeats",
		"V1 a 0 PWL REPEAT FOREVER (0 0 1 5)": "repeats",
		"V1 a 0 PWL(0 0 +1m 5)":               "relative",
		"V1 a 0 trnoise(1 1n 0 0)":            "trnoise",
		"V1 a 0 5 3":                          "two values",
		"E1 a 0 b 0 10 max=5":                 "max=",
		"G1 a 0 b 0 table=(0 0, 1 1)":         "table=",
		"G1 a 0 b 0 1m m=2":                   "parallel",
		"I1 a 0 1 m=2":                        "parallel",
		"R1 a 0 R=V(b)":                       "without braces",
		"R1 a 0 R=5 * 2":                      "without braces",
		"R1 a 0 {V(b)*2}":                     "voltage or current",
		"R1 a 0 {rl}\n.step param rl 1 9 1":   "rl is neither",
		"R1 a 0 {rl}\n.include gone.lib":      "rl is neither",
		"F1 a 0 V9 1\n.include gone.lib":      "V9",
		"X1 a 0 S9 m=2":                       "no definition",
		"V1 a 0 PWL(0 0 1m 5 2m)":             "pwl",
		"E1 a 0 OPAMP b 0":                    "opamp",
		"U2 __U2":                             "not modelled",
		"J1 a b 0 JX":                         "junction FET",
		"E1 a 0 LAPLACE {V(b)} = {1/(1+s)}":   "laplace",
	} {
		d, _ := lastDevice(t, card)
		if u, ok := d.(Unknown); !ok || !strings.Contains(u.Why, why) {
			t.Errorf("%q: %+v, want unknown: %s", card, d, why)
		}
	}
}

// m= copies in parallel: R and L shrink, C and junction areas grow, and it is said.
func TestCopiesInParallel(t *testing.T) {
	for card, want := range map[string]Device{
		"R1 a 0 1k m=2": Resistor{500}, "C1 a 0 1u m=3": Capacitor{Farads: 3e-6}, "L1 a 0 1m M=4": Inductor{Henries: 0.25e-3},
		"D1 a 0 DX 2 m=2": Diode{Area: 4}, "Q1 a b 0 QX m=2": Transistor{Area: 2}, "R1 a 0 1k m=1": Resistor{1000},
	} {
		d, c := lastDevice(t, card)
		if r, ok := d.(Capacitor); ok {
			if w := want.(Capacitor); r.Farads < w.Farads*0.999 || r.Farads > w.Farads*1.001 {
				t.Errorf("%s: %+v", card, d)
			}
		} else if d != want {
			t.Errorf("%s: %+v, want %+v", card, d, want)
		}
		if said := remarked(c, RemarkModel, "in parallel"); said == strings.HasSuffix(card, "m=1") {
			t.Errorf("%s: remarked %v", card, said)
		}
	}
}

// Accepted with a remark.
func TestDoubtfulCardsAreRemarked(t *testing.T) {
	for card, want := range map[string]struct {
		kind RemarkKind
		text string
	}{
		"V1 a 0 AC 230 50":                    {RemarkAssumption, "AC magnitude"},
		"V1 a 0 SIN(0 15 50 0 0 0 3)":         {RemarkAssumption, "without end"},
		"V1 a 0 PULSE(0 5 0 1n 1n 1m 2m 10)":  {RemarkAssumption, "without end"},
		"V1 a 0 12Vrms":                       {RemarkValueSuffix, "12vrms"},
		"D1 a 0 1N4007 1N4148":                {RemarkModel, "1N4148"},
		"Q1 a b 0 2N3055 12V":                 {RemarkModel, "12V"},
		"K1 L1 L2\nL1 a 0 1\nL2 b 0 1":        {RemarkAssumption, "taken as 1"},
		"R1 a 0 1\n.endA":                     {RemarkNotRead, ".enda"},
		"R1 a 0 1\n.if (x)\n.endif":           {RemarkNotRead, "condition of .if"},
		"C1 a 0 10MF":                         {RemarkValueSuffix, "milli"},
		"D1 a 0 DX\n.model DX AKO:DY (IS=1n)": {RemarkModel, "DY"},
		".subckt S a\nR1 a 0 1\n.ends\n.subckt S a\nR1 a 0 2\n.ends\nX1 a S": {RemarkModel, "first definition holds"},
	} {
		if _, c := lastDevice(t, card); !remarked(c, want.kind, want.text) {
			t.Errorf("%q: no remark %q in %+v", card, want.text, c.Remarks)
		}
	}
}

// A line keeps all four of its nodes.
func TestLineKeepsItsNodes(t *testing.T) {
	if c := accepted(t, "t\nV1 a 0 5\nT1 a 0 b c Z0=50 TD=1n\n"); shape(c) != "V1(a 0) T1(a 0 b c)" {
		t.Errorf("read %s", shape(c))
	}
}

// The values read from spellings that differ.
func TestValuesOfOddSpellings(t *testing.T) {
	for card, want := range map[string]Device{
		"R1 a 0 rl\n.param rl = 5 * 2":                                     Resistor{10},
		"R1 a 0 rl\n.param k=3 rl=2*sqrt(4) j = 1, i=2":                    Resistor{4},
		"R1 a 0 rl\n.param rl=(1+2)*3":                                     Resistor{9},
		"R1 a 0 rl\n.param rl 5k":                                          Resistor{5000},
		"R1 a 0 rl\n.params rl='a1*2'\n.param a1={2}":                      Resistor{4},
		"R1 a 0 1k // 2k":                                                  Resistor{1000},
		"R1\u00a0a\u00a00\u00a01k":                                         Resistor{1000},
		"X1 a 0 S r=7\n.macro S p q r=1\nR1 p q {r}\n.eom":                 Resistor{7},
		"X1 a 0 / S\n.subckt S p q / r=3\nR1 p q {r}\n.ends S":             Resistor{3},
		"X1 a 0 S r=2 x=y z\n.subckt S p q params: r=1\nR1 p q {r}\n.ends": Resistor{2},
		"R1 a 0 {f(2)}\n.param f(x)={x*2}":                                 Resistor{4},
		"Q1 a b 0 QX area=2":                                               Transistor{Area: 2},
		"V1 a 0 value=5":                                                   VoltageSource{Wave: Constant{5}},
		"V1 a 0 DC = 5V":                                                   VoltageSource{Wave: Constant{5}},
		"V1 a 0 SIN 0 1 1k":                                                VoltageSource{Wave: Sine{Amplitude: 1, Frequency: 1000}},
		"I1 a 0 1 load":                                                    CurrentSource{Constant{1}},
		"S1 a 0 b 0 SX on":                                                 Switch{On: true},
		"E1 a 0 (b ,0) 10":                                                 VoltageControlled{Gain: 10},
		"R1 a 0 5\n.data x\n1 2\n.enddata":                                 Resistor{5},
	} {
		if d, _ := lastDevice(t, card); d != want {
			t.Errorf("%q: %+v, want %+v", card, d, want)
		}
	}
}
