package netlist

import (
	"strings"
	"testing"
)

// One netlist for each arrangement, with the chain that a person would draw.
func TestRailMap(t *testing.T) {
	for _, a := range []struct {
		name, cards string
		want        []string
	}{
		{"half-wave", `
V1 s 0 SIN(0 17 50)
D1 s OUT 1N4007
C1 OUT 0 1000u
R1 OUT 0 100`,
			[]string{"V1 17 V peak 50 Hz -> half-wave D1 at OUT -> C1 1000 uF at OUT -> R1"}},
		{"half-wave with winding resistance and ammeter", `
V1 s 0 SIN(0 17 50)
RW s a 0.5
VM a b 0
D1 b OUT 1N4007
VA OUT c 0
RL c 0 100`,
			[]string{"V1 17 V peak 50 Hz -> half-wave D1 at OUT -> RL"}},
		{"half-wave, negative", `
V1 s 0 SIN(0 17 50)
D1 NEG s 1N4007
C1 0 NEG 1000u
R1 NEG 0 100`,
			[]string{"V1 17 V peak 50 Hz -> half-wave D1 at NEG -> C1 1000 uF at NEG -> R1"}},
		{"centre-tap", `
V1 a 0 SIN(0 17 50)
V2 0 b SIN(0 17 50)
D1 a OUT 1N4007
D2 b OUT 1N4007
C1 OUT 0 1000u
R1 OUT 0 100`,
			[]string{"V1 V2 17 V peak 50 Hz -> centre-tap D1 D2 at OUT -> C1 1000 uF at OUT -> R1"}},
		{"bridge, regulator", `
V1 a b SIN(0 17 50)
D1 a VRAW 1N4007
D2 b VRAW 1N4007
D3 0 a 1N4007
D4 0 b 1N4007
C1 VRAW 0 2200u
U1 VRAW 0 OUT 7812
C2 OUT 0 100n
RL OUT 0 20`,
			[]string{"V1 17 V peak 50 Hz -> bridge D1..D4 at VRAW -> C1 2200 uF at VRAW -> three-terminal regulator U1 7812 at OUT -> RL"}},
		{"a bridge, a dual rail and half-wave rectifiers of windings of their own, on one ground", `
V1 a1 b1 SIN(0 12 50)
D1 a1 P1 1N4007
D2 b1 P1 1N4007
D3 0 a1 1N4007
D4 0 b1 1N4007
C1 P1 0 2200u
R1 P1 0 100
V2 a2 b2 SIN(0 24 50)
D5 a2 P2 1N4007
D6 b2 P2 1N4007
D7 0 a2 1N4007
D8 0 b2 1N4007
R2 P2 0 100
V3 a3 0 SIN(0 17 50)
V4 0 b3 SIN(0 17 50)
D9 a3 P3 1N4007
D10 b3 P3 1N4007
D11 N3 a3 1N4007
D12 N3 b3 1N4007
R3 P3 0 100
R4 0 N3 100
V5 a4 0 SIN(0 35 50)
D13 N4 a4 1N4007
R5 0 N4 1k`,
			[]string{
				"V1 12 V peak 50 Hz -> bridge D1..D4 at P1 -> C1 2200 uF at P1 -> R1",
				"V2 24 V peak 50 Hz -> bridge D5..D8 at P2 -> R2",
				"V3 V4 17 V peak 50 Hz -> dual-rail bridge D9..D12 at P3 -> R3",
				"V3 V4 17 V peak 50 Hz -> dual-rail bridge D9..D12 at N3 -> R4",
				"V5 35 V peak 50 Hz -> half-wave D13 at N4 -> R5",
			}},
		{"bridge on a transformer whose primary shares the ground", `
V1 line 0 SIN(0 325 50)
RF line prim 10
L1 prim 0 10
L2 a b 0.05
K1 L1 L2 0.99
D1 a P 1N4007
D2 b P 1N4007
D3 0 a 1N4007
D4 0 b 1N4007
C1 P 0 2200u
R1 P 0 20`,
			[]string{"V1 325 V peak 50 Hz -> transformer L1 L2 -> bridge D1..D4 at P -> C1 2200 uF at P -> R1"}},
		{"bridge on a controlled source", `
V1 line 0 SIN(0 325 50)
RP line 0 10k
E1 a b line 0 0.05
D1 a P 1N4007
D2 b P 1N4007
D3 0 a 1N4007
D4 0 b 1N4007
C1 P 0 2200u
R1 P 0 20`,
			[]string{"V1 325 V peak 50 Hz -> transformer E1 -> bridge D1..D4 at P -> C1 2200 uF at P -> R1"}},
		{"dual-rail bridge", `
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
R1 OUTP 0 20
R2 OUTN 0 20`,
			[]string{
				"V1 V2 17 V peak 50 Hz -> dual-rail bridge D1..D4 at P -> C1 2200 uF at P -> three-terminal regulator U1 7812 at OUTP -> R1",
				"V1 V2 17 V peak 50 Hz -> dual-rail bridge D1..D4 at N -> C2 2200 uF at N -> three-terminal regulator U2 7912 at OUTN -> R2"}},
		{"full-wave doubler", `
V1 a 0 SIN(0 17 50)
D1 a P 1N4007
D2 N a 1N4007
C1 P 0 470u
C2 0 N 470u
R1 P N 1k`,
			[]string{"V1 17 V peak 50 Hz -> full-wave voltage doubler D1 D2 at P -> C1 C2 470 uF each half at P -> R1"}},
		{"two half-waves from one winding", `
V1 a 0 SIN(0 17 50)
D1 a P 1N4007
D2 N a 1N4007
C1 P 0 470u
C2 0 N 470u
R1 P 0 1k
R2 0 N 1k`,
			[]string{
				"V1 17 V peak 50 Hz -> half-wave D1 at P -> C1 470 uF at P -> R1",
				"V1 17 V peak 50 Hz -> half-wave D2 at N -> C2 470 uF at N -> R2"}},
		{"half-wave doubler", `
V1 a 0 SIN(0 17 50)
C1 a j 100u
D1 0 j 1N4007
D2 j OUT 1N4007
C2 OUT 0 100u
R1 OUT 0 10k`,
			[]string{"V1 17 V peak 50 Hz -> half-wave voltage doubler D1 D2 at OUT -> C2 100 uF at OUT -> R1"}},
		{"multiplier by four", `
V1 a 0 SIN(0 17 50)
C1 a n1 10u
D1 0 n1 1N4007
D2 n1 n2 1N4007
C2 n2 0 10u
C3 n1 n3 10u
D3 n2 n3 1N4007
D4 n3 n4 1N4007
C4 n4 n2 10u
R1 n4 0 1meg`,
			[]string{"V1 17 V peak 50 Hz -> voltage multiplier D1..D4 at n4 -> R1"}},
		{"three-phase bridge", `
V1 u 0 SIN(0 325 50 0 0 0)
V2 v 0 SIN(0 325 50 0 0 -120)
V3 w 0 SIN(0 325 50 0 0 120)
D1 u P 1N4007
D2 v P 1N4007
D3 w P 1N4007
D4 N u 1N4007
D5 N v 1N4007
D6 N w 1N4007
R1 P N 100`,
			[]string{"V1..V3 325 V peak 50 Hz -> three-phase bridge D1..D6 at P -> R1"}},
		{"three-phase half-wave", `
V1 u 0 SIN(0 325 50 0 0 0)
V2 v 0 SIN(0 325 50 0 0 -120)
V3 w 0 SIN(0 325 50 0 0 120)
D1 u P 1N4007
D2 v P 1N4007
D3 w P 1N4007
R1 P 0 100`,
			[]string{"V1..V3 325 V peak 50 Hz -> three-phase half-wave D1..D3 at P -> R1"}},
		{"choke input", `
V1 a b SIN(0 17 50)
D1 a P 1N4007
D2 b P 1N4007
D3 0 a 1N4007
D4 0 b 1N4007
L1 P OUT 1
C1 OUT 0 1000u
R1 OUT 0 100`,
			[]string{"V1 17 V peak 50 Hz -> bridge D1..D4 at P -> choke-input filter L1 C1 at OUT -> R1"}},
		{"pi filter", `
V1 a b SIN(0 17 50)
D1 a P 1N4007
D2 b P 1N4007
D3 0 a 1N4007
D4 0 b 1N4007
C1 P 0 47u
L1 P OUT 1
C2 OUT 0 47u
R1 OUT 0 1k`,
			[]string{"V1 17 V peak 50 Hz -> bridge D1..D4 at P -> C1 47 uF at P -> pi filter L1 C2 at OUT -> R1"}},
		{"RC filter", `
V1 s 0 SIN(0 17 50)
D1 s P 1N4007
C1 P 0 47u
R1 P OUT 100
C2 OUT 0 47u
R2 OUT 0 1k`,
			[]string{"V1 17 V peak 50 Hz -> half-wave D1 at P -> C1 47 uF at P -> RC filter R1 C2 at OUT -> R2"}},
		{"zener shunt", `
V1 s 0 SIN(0 24 50)
D1 s P 1N4007
C1 P 0 1000u
R1 P OUT 470
DZ 0 OUT 1N4742A
R2 OUT 0 1k`,
			[]string{"V1 24 V peak 50 Hz -> half-wave D1 at P -> C1 1000 uF at P -> zener shunt R1 DZ at OUT -> R2"}},
		{"zener shunt, negative", `
V1 s 0 SIN(0 24 50)
D1 P s 1N4007
C1 0 P 1000u
R1 P OUT 470
DZ OUT 0 1N4742A
R2 OUT 0 1k`,
			[]string{"V1 24 V peak 50 Hz -> half-wave D1 at P -> C1 1000 uF at P -> zener shunt R1 DZ at OUT -> R2"}},
		{"shunt reference", `
V1 s 0 SIN(0 24 50)
D1 s P 1N4007
C1 P 0 1000u
R1 P OUT 470
U1 OUT ref 0 TL431
R3 OUT ref 10k
R4 ref 0 10k
RL OUT 0 1k`,
			[]string{"V1 24 V peak 50 Hz -> half-wave D1 at P -> C1 1000 uF at P -> shunt reference R1 U1 at OUT -> RL"}},
		{"series pass", `
V1 a b SIN(0 24 50)
D1 a P 1N4007
D2 b P 1N4007
D3 0 a 1N4007
D4 0 b 1N4007
C1 P 0 1000u
R1 P base 470
DZ 0 base 1N4742A
Q1 P base OUT NPN
R2 OUT 0 100`,
			[]string{"V1 24 V peak 50 Hz -> bridge D1..D4 at P -> C1 1000 uF at P -> series-pass regulator Q1 R1 DZ at OUT -> R2"}},
		{"regulators in cascade and a second rail", `
V1 a b SIN(0 24 50)
D1 a P 1N4007
D2 b P 1N4007
D3 0 a 1N4007
D4 0 b 1N4007
C1 P 0 1000u
U1 P 0 V12 7812
U2 V12 0 V5 7805
RL1 V12 0 100
RL2 V5 0 50`,
			[]string{
				"V1 24 V peak 50 Hz -> bridge D1..D4 at P -> C1 1000 uF at P -> three-terminal regulator U1 7812 at V12 -> RL1",
				"V1 24 V peak 50 Hz -> bridge D1..D4 at P -> C1 1000 uF at P -> three-terminal regulator U1 7812 at V12 -> three-terminal regulator in cascade U2 7805 at V5 -> RL2"}},
		{"diodes in series with sharing resistors, free-wheeling diode, indicator, protection diodes", `
V1 s 0 SIN(0 17 50)
D1 s m 1N4007
D2 m P 1N4007
RS1 s m 470k
RS2 m P 470k
D3 0 P 1N4007
C1 P 0 1000u
R9 P led 1k
D9 led 0 LED
U1 P 0 OUT 7812
D4 OUT P 1N4007
D5 0 OUT 1N4007
R1 OUT 0 100`,
			[]string{"V1 17 V peak 50 Hz -> half-wave D1..D3 at P -> C1 1000 uF at P -> three-terminal regulator U1 7812 at OUT -> R1"}},
		{"direct source", `
V1 P 0 24
R1 P OUT 470
DZ 0 OUT 1N4742A
IX OUT 0 5m`,
			[]string{"V1 24 V -> zener shunt R1 DZ at OUT -> IX"}},
		{"isolated return that is not ground", `
V1 a COM SIN(0 17 50)
D1 a P 1N4007
C1 P COM 1000u
R1 P COM 100`,
			[]string{"V1 17 V peak 50 Hz -> half-wave D1 at P -> C1 1000 uF at P -> R1"}},
		{"losses of choke and capacitors drawn", `
V1 a b SIN(0 17 50)
D1 a P 1N4007
D2 b P 1N4007
D3 0 a 1N4007
D4 0 b 1N4007
RE1 P e1 0.1
C1 e1 0 470u
RDC P q 2
L1 q OUT 1
RE2 OUT e2 0.1
LE2 e2 e3 20n
C2 e3 0 470u
R1 OUT 0 100`,
			[]string{"V1 17 V peak 50 Hz -> bridge D1..D4 at P -> C1 470 uF at P -> pi filter RDC L1 C2 at OUT -> R1"}},
		{"bridge whose plus is grounded", `
V1 a b SIN(0 17 50)
D1 a 0 1N4007
D2 b 0 1N4007
D3 N a 1N4007
D4 N b 1N4007
C1 0 N 470u
U1 N 0 OUT 7912
R1 OUT 0 100`,
			[]string{"V1 17 V peak 50 Hz -> bridge D1..D4 at N -> C1 470 uF at N -> three-terminal regulator U1 7912 at OUT -> R1"}},
		{"current-sensing resistor in the return", `
V1 s 0 SIN(0 17 50)
D1 s P 1N4007
C1 P 0 470u
L1 P OUT 1m
RS r 0 0.1
RL OUT r 50`,
			[]string{"V1 17 V peak 50 Hz -> half-wave D1 at P -> C1 470 uF at P -> series choke L1 at OUT -> RL"}},
		{"nothing to recognise", `
R1 a b 1k
C1 b 0 1u`, nil},
	} {
		t.Run(a.name, func(t *testing.T) {
			var got []string
			for _, chain := range build(t, a.cards).RailMap(nil) {
				got = append(got, chain.String())
			}
			if strings.Join(got, "\n") != strings.Join(a.want, "\n") {
				t.Errorf("got\n  %s\nwant\n  %s", strings.Join(got, "\n  "), strings.Join(a.want, "\n  "))
			}
		})
	}
}
