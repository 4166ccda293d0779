package netlist

import (
	"strings"
	"testing"
)

func TestStructure(t *testing.T) {
	const bridge = `
V1 a b SIN(0 17 50)
D1 a P 1N4007
D2 b P 1N4007
D3 0 a 1N4007
D4 0 b 1N4007
C1 P 0 1000u
U1 P 0 OUT 7812
C2 OUT 0 10u
R1 OUT 0 100
`
	for _, s := range []struct{ name, cards, want string }{
		{"a sound supply", bridge, ""},
		{"a sound dual supply", `
V1 a 0 SIN(0 17 50)
V2 0 b SIN(0 17 50)
D1 a P 1N4007
D2 b P 1N4007
D3 N a 1N4007
D4 N b 1N4007
C1 P 0 2200u
C2 0 N 2200u
U1 P 0 OUTP 7812
U2 N 0 OUTN 7912
C3 OUTP 0 100u
C4 0 OUTN 100u
R1 OUTP OUTN 20`, ""},
		{"sound doublers", `
V1 a 0 SIN(0 17 50)
C1 j a 100u
D1 0 j 1N4007
D2 j OUT 1N4007
C2 OUT 0 100u
R1 OUT 0 10k
V2 c 0 SIN(0 17 50)
D3 c P 1N4007
D4 N c 1N4007
C3 P 0 470u
C4 0 N 470u
R2 P N 1k`, ""},
		{"a sound zener shunt", "V1 P 0 24\nR1 P k 470\nD1 0 k 1N4742A\nR2 k 0 1k\nC1 k 0 10u", ""},

		{"reversed reservoir", strings.Replace(bridge, "C1 P 0", "C1 0 P", 1),
			"polarity C1: C1 (taken as polarised, node 1 plus) has its plus on 0 and its minus on P, a reverse voltage"},
		{"reversed output capacitor", strings.Replace(bridge, "C2 OUT 0", "C2 0 OUT", 1),
			"polarity C2: C2 (taken as polarised, node 1 plus) has its plus on 0 and its minus on OUT, a reverse voltage"},
		{"reservoir of a negative rail drawn as a positive one", "V1 s 0 SIN(0 17 50)\nD1 N s 1N4007\nC1 N 0 100u\nR1 N 0 1k",
			"polarity C1: C1 (taken as polarised, node 1 plus) has its plus on N and its minus on 0, a reverse voltage"},
		{"electrolytic across the winding", "V1 a b SIN(0 17 50)\nC1 a b 100u\nR1 a 0 1k\nR2 b 0 1k",
			"polarity C1: C1 (taken as polarised, node 1 plus) stands across an alternating voltage"},
		{"bridge with a diode turned round", strings.Replace(bridge, "D2 b P", "D2 P b", 1),
			"polarity D2: D1 and D2 lead straight through node P from one end of a winding to the other and short it every cycle"},
		{"negative regulator on a positive rail", strings.Replace(bridge, "7812", "7912", 1),
			"polarity U1: U1 is a negative regulator with its input on a positive rail"},
		{"zener turned round", "V1 P 0 24\nR1 P k 470\nD1 k 0 1N4742A\nR2 k 0 1k", "polarity D1: zener D1 stands in forward direction across the rail"},

		{"floating secondary", "V1 a 0 SIN(0 17 50)\nR1 a 0 1k\nV2 b c SIN(0 17 50)\nR2 b c 1k",
			"floating-node node:b: nothing ties nodes b, c to ground: the voltage to ground is arbitrary"},
		{"no ground at all is said elsewhere", "V1 a b 5\nR1 a b 1k", ""},
		{"midpoint of two capacitors", "V1 a 0 5\nC1 a m 1u\nC2 m 0 1u",
			"no-dc-path node:m: no direct current can flow between node m and ground"},
		{"behind a capacitor and a current source", "V1 a 0 5\nR1 a 0 1k\nC1 a m 1u\nI1 m 0 1m",
			"no-dc-path node:m: no direct current can flow between node m and ground"},
		{"shorted parts", "V1 a 0 5\nR1 a 0 1k\nD1 a a 1N4007\nU1 a 0 a 7812",
			"shorted-element D1: the anode and the cathode of D1 are both on node a\nshorted-element U1: the input and the output of U1 are both on node a"},
		{"loop of sources", "V1 a 0 5\nV2 a b 1\nV3 b 0 4\nR1 a 0 1k",
			"source-loop V3: V3 closes a loop of ideal voltage sources with V2, V1"},
		{"parallel sources through ground", "V1 a 0 5\nV2 b 0 5\nV3 a b 0\nR1 a 0 1k",
			"source-loop V3: V3 closes a loop of ideal voltage sources with V1, V2"},
		{"open ends", "V1 a 0 5\nR1 a x 1k\nR2 a NC_01 1k\nR3 a ? 1k\nD1 a y 1N4007\nR4 a 0 1k",
			"unconnected-terminal R1: the terminal 2 of R1 is alone on node x\nunconnected-terminal D1: the cathode of D1 is alone on node y"},
	} {
		c := build(t, s.cards)
		var got []string
		for _, f := range c.Structure(nil) {
			got = append(got, f.Check+" "+f.Element+": "+f.Text)
			if f.At.Line == 0 {
				t.Errorf("%s: %s has no place", s.name, f.Text)
			}
		}
		if strings.Join(got, "\n") != s.want {
			t.Errorf("%s: got\n  %s\nwant\n  %s", s.name, strings.Join(got, "\n  "), s.want)
		}
	}
}
