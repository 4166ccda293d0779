package netlist

import "testing"

// Names of nodes and parts.
func TestPracticeOfNames(t *testing.T) {
	hold(t, []practice{
		{"ground and its alias", "t\nV1 a GND 5\nR1 a 0 1\nR2 a gnd 2\n", "V1(a 0)=5 R1(a 0)=1 R2(a 0)=2", ""},
		{"no ground at all", "t\nV1 a b 5\nR1 a b 1\n", "V1(a b)=5 R1(a b)=1", "assumed: no element touches node 0"},
		{"nodes that differ in case only", "t\nV1 +5V 0 5\nR1 +5v 0 1\n", "V1(+5V 0)=5 R1(+5V 0)=1", ""},
		{"numbered nodes of exporters", "t\nV1 N001 0 5\nR1 N001 NC_01 1\nR2 P001 N001 1\n", "V1(N001 0)=5 R1(N001 NC_01)=1 R2(P001 N001)=1", ""},
		{"pad names", "t\nV1 Net-_D1-Pad2_ 0 5\nR1 Net-(D1-K) Net-_D1-Pad2_ 1\n", "V1(Net-_D1-Pad2_ 0)=5 R1(Net-(D1-K) Net-_D1-Pad2_)=1", ""},
		{"slashes", "t\nV1 /VCC 0 5\nR1 /psu/VRAW /VCC 1\n", "V1(/VCC 0)=5 R1(/psu/VRAW /VCC)=1", ""},
		{"signs and a bare +", "t\nV1 +12V V- 5\nR1 Out+ + 1\nR2 +12V - 1\n", "V1(+12V V-)=5 R1(Out+ +)=1 R2(+12V -)=1", "assumed: no element touches node 0"},
		{"digits first", "t\nV1 12V 0 5\nR1 5V_raw 12V 1\nR2 10k 1meg 7\n", "V1(12V 0)=5 R1(5V_raw 12V)=1 R2(10k 1meg)=7", ""},
		{"dollar, hash, dot", "t\nV1 $N_0007 0 5\nR1 a# N$12 1\nR2 a.b x#y 1\n", "V1($N_0007 0)=5 R1(a# N$12)=1 R2(a.b x#y)=1", ""},
		{"micro sign in a name", "t\nV1 µC 0 5\nR1 µC 0 1\n", "V1(µC 0)=5 R1(µC 0)=1", ""},
		{"? is unconnected, each its own", "t\nV1 a 0 5\nR1 a ? 1\nR2 a ? 2\n", "V1(a 0)=5 R1(a ?1)=1 R2(a ?2)=2", ""},
		{"blanks round commas in a node list", "t\nV1 a 0 5\nGx a 0 (c ,d) 7m\n", "V1(a 0)=5 Gx(a 0 c d)=*0.007", ""},
		{"odd designators", "t\nV1 a 0 5\nX§U1 a 0 b LM7812\nR-load a 0 1\nR(PULL)3 a 0 2\nR6.1 a 0 3\nR$1 a 0 4\n", "V1(a 0)=5 U1(a 0 b)=LM7812 R-load(a 0)=1 R(PULL)3(a 0)=2 R6.1(a 0)=3 R$1(a 0)=4", "assumed: U1 its pins are taken in the customary order"},
		{"a bracket at the end of a designator", "t\nV1 a 0 5\nR(x) a GND 5k1\nSIN(1) a 0 b 0 sw\n", "V1(a 0)=5 R(x)(a 0)=5100 SIN(1)(a 0 b 0)=sw?", ""},
		{"one-letter designators", "t\nV a 0 5\nC a 0 1u\nL1 a 0 1\nL2 a 0 1\nK L1 L2 1\n", "V(a 0)=5 C(a 0)=1e-06 L1(a 0)=1 L2(a 0)=1 K()=L1-L2*1", ""},
		{"part and model of one name", "t\nV1 a 0 5\nD1 a 0 d1\n.model d1 D(N=2)\n", "V1(a 0)=5 D1(a 0)=d1[IS=1e-14,N=2,BV=0]", ""},
		{"duplicate designators are kept apart", "t\nV1 a 0 5\nR1 a 0 1\nr1 a 0 2\nR1 a 0 3\n", "V1(a 0)=5 R1(a 0)=1 r1#2(a 0)=2 R1#3(a 0)=3", "duplicate: this one is called r1#2|duplicate: this one is called R1#3"},
		{"doubled prefix", "t\nV1 a 0 5\nRR3 a 0 100\n", "V1(a 0)=5 RR3(a 0)=100", ""},
		{"a number for a designator's tail", "t\nV1 a 0 5\nR2N3 a 0 100\n", "V1(a 0)=5 R2N3(a 0)=100", ""},
	})
	refuse(t, map[string]string{
		"t\nV1 a 0 5\nR1 a(b) c 1\n":     "t.cir:3:5: a bracket touches the name of a node",
		"t\nV1 a 0 5\nX1 a(b) c SUB\n":   "t.cir:3:5: a bracket touches the name of a node",
		"t\nV1 a 0 5\nR1 a=b c 1\n":      "t.cir:3:4: `a=` where a node was expected",
		"t\nV1 a 0 5\n1N4007 a 0 x\n":    "t.cir:3:1: \"1N4007\" is no element name",
		"t\nV1 a 0 5\nR1 \"a b c 1\n":    "a \" is not closed",
		"t\nV1 a 0 5\n(R1 a 0 1)\n":      "t.cir:3:1: unexpected `(`",
		"t\nV1 a 0 5\nR1 a 0 1\n- - -\n": "is no element name",
	})
}
