package netlist

import "testing"

// Independent sources in every spelling.
func TestPracticeOfSources(t *testing.T) {
	v := func(rest string) string { return "t\nV1 a 0 " + rest + "\nR1 a 0 1\n" }
	is := func(wave string) string { return "V1(a 0)=" + wave + " R1(a 0)=1" }
	sine := is("sin:0:15:50")
	hold(t, []practice{
		{"SIN(", v("SIN(0 15 50)"), sine, ""},
		{"SINE(", v("SINE(0 15 50)"), sine, ""},
		{"SIN without brackets", v("sin 0 15 50"), sine, ""},
		{"SIN with a blank before the bracket", v("SIN (0 15 50)"), sine, ""},
		{"SIN with commas", v("SIN(0,15,50)"), sine, ""},
		{"SIN with units", v("SIN(0 15V 50Hz)"), sine, ""},
		{"SIN of six arguments", v("SIN(0 15 50 0 0 90)"), sine, ""},
		{"SIN of seven arguments", v("SIN(0 15 50 0 0 0 5)"), sine, "assumed: without end"},
		{"SIN over two lines", v("SIN(0\n+ 15 50)"), sine, ""},
		{"SIN without a frequency", v("SIN(0 15)"), is("unknown"), ""},
		{"bare DC, then SIN", v("0 sin(0 15 50)"), sine, ""},
		{"DC, AC, SIN", v("dc 0 ac 1 sin(0 15 50)"), sine, ""},
		{"SIN, then AC", v("sin(0 15 50) ac 1 0"), sine, ""},
		{"AC first", v("ac 1 sin(0 15 50) dc 0"), sine, ""},
		{"bare DC, then AC, then SIN", v("0.0 ac 1.0 sin(0 15 50)"), sine, ""},
		{"dc(48)", v("dc(48)"), is("48"), ""},
		{"DC=48", v("DC=48"), is("48"), ""},
		{"bare value with unit", v("12V"), is("12"), ""},
		{"AC only", v("AC 1"), is("0"), "assumed: AC magnitude"},
		{"amplitude of RMS mains, said by the check of sources", v("SIN(0 230 50)"), is("sin:0:230:50"), ""},
		{"a level with rms behind it", v("230Vrms"), is("230"), "suffix: constant level"},
		{"an amplitude with rms behind it", v("SIN(0 12Vrms 50)"), is("sin:0:12:50"), "suffix: `12Vrms` in a waveform is a peak"},
		{"PULSE", v("PULSE(0 5 0 1n 1n 5u 10u)"), is("pulse:0:5"), ""},
		{"PWL", v("PWL(0 0, 1m 5)"), is("pwl:2"), ""},
		{"PWL from a file", v("PWL file=\"x.txt\""), is("unknown"), "library: V1 its waveform stands in a file"},
		{"EXP", v("EXP(0 5 1u 1u)"), is("exp:0:5"), ""},
		{"no value", v(""), is("0"), ""},
		{"an ammeter", v("0"), is("0"), ""},
		{"Rser", v("9 Rser=0.1"), is("9+0.1ohm"), ""},
		{"value and unit", v("12 V"), is("12"), "assumed: read `12 V` as 12V"},
		{"value and unit with a factor", v("DC 500 mV"), is("0.5"), "assumed: read `500 mV` as 500mV"},
		{"units inside a waveform", v("SIN(0 15 V 50 Hz)"), sine, "assumed: read `15 V`|assumed: read `50 Hz`"},
		{"a parameter that is called like a unit", v("5 V\n.param V=3"), is("unknown"), ""},
		{"a level with VAC behind it", v("230VAC"), is("230"), "suffix: constant level"},
		{"an amplitude with VAC behind it", v("SIN(0 230 Vac 50)"), is("sin:0:230:50"), "assumed: read `230 Vac`|suffix: is a peak"},
		{"Cpar of a source", v("9 Rser = 0.1 Cpar=1u"), is("9+0.1ohm"), "assumed: `Cpar=` behind the value is not read"},
		{"value is a placeholder", v("VSOURCE"), is("unknown"), ""},
		{"a current source", "t\nI1 a 0 DC 1m\nR1 a 0 1\n", "I1(a 0)=0.001 R1(a 0)=1", ""},
	})
	if s, ok := accepted(t, v("")).Elements[0].Device.(VoltageSource); !ok || !s.ValueMissing {
		t.Error("a source without a value must say so")
	}
	refuse(t, map[string]string{
		v("SIN(0)"):            "t.cir:2:8: a sine without amplitude",
		v("SIN(0 x 50)"):       "t.cir:2:14: x is neither a number nor a parameter",
		v("PWL(0 0 2 1 1 5)"):  "times run backwards",
		v("PULSE(0 5 0 -1 1)"): "a negative time",
		"t\nV1 a\nR1 a 0 1\n":  "t.cir:2:1: V1 has 1 word behind its name",
	})
}

// The other elements.
func TestPracticeOfElements(t *testing.T) {
	in := func(cards string) string { return "t\nV1 p 0 1\n" + cards + "\n" }
	is := func(rest string) string { return "V1(p 0)=1 " + rest }
	coils := "L1 a 0 1m\nL2 b 0 2m\nL3 c 0 3m\n"
	read := "L1(a 0)=0.001 L2(b 0)=0.002 L3(c 0)=0.003 "
	hold(t, []practice{
		{"K", in(coils + "K1 L1 L2 0.998"), is(read + "K1()=L1-L2*0.998"), ""},
		{"K by parameter", in(coils + "K1 L1 L2 {k}\n.param k=0.9"), is(read + "K1()=L1-L2*0.9"), ""},
		{"K of three windings", in(coils + "K1 L1 L2 L3 0.9"), is(read + "K1()=L1-L2-L3*0.9"), ""},
		{"K without a factor", in(coils + "K1 L1 L2"), is(read + "K1()=L1-L2*1"), "assumed: taken as 1"},
		{"K before its inductors", in("K1 L1 L2 1\nL1 a 0 1\nL2 b 0 1"), is("K1()=L1-L2*1 L1(a 0)=1 L2(b 0)=1"), ""},
		{"E linear", in("E1 s 0 p 0 0.1"), is("E1(s 0 p 0)=*0.1"), ""},
		{"E with brackets", in("E1 s 0 (p,0) {1/n}\n.param n=10"), is("E1(s 0 p 0)=*0.1"), ""},
		{"G linear", in("G1 s 0 p 0 2m"), is("G1(s 0 p 0)=*0.002"), ""},
		{"F of a voltage source", in("F1 a 0 V1 2"), is("F1(a 0)=V1*2"), ""},
		{"F controlled by an E source", in("F1 p 0 E1 16\nE1 s 0 p 0 0.1"), is("F1(p 0)=E1*16 E1(s 0 p 0)=*0.1"), ""},
		{"H", in("H1 a 0 V1 10"), is("H1(a 0)=V1*10"), ""},
		{"F of a current source", in("F1 a 0 I1 2\nI1 b 0 1"), is("F1(a 0)=unknown I1(b 0)=1"), ""},
		{"VALUE", in("E1 s 0 VALUE={V(p)*2}"), is("E1(s 0)={V(p)*2}"), ""},
		{"VALUE with blanks", in("G1 s 0 VALUE = {V(p)/10}"), is("G1(s 0)={V(p)/10}"), ""},
		{"TABLE", in("E1 s 0 TABLE {V(p)} = (0,0) (1,5)"), is("E1(s 0)={table(V(p),0e+00,0e+00,1e+00,5e+00)}"), ""},
		{"POLY", in("E1 s 0 POLY(1) p 0 0 2"), is("E1(s 0)={(2e+00)*V(p,0)}"), ""},
		{"POLY of currents", in("F1 s 0 POLY(1) V1 0 2"), is("F1(s 0)=unknown"), ""},
		{"LAPLACE", in("E1 s 0 LAPLACE {V(p)} = {1/(1+s)}"), is("E1(s 0)=unknown"), ""},
		{"B with if", in("B1 s 0 V=if(V(p)>1,5,0)"), is("B1(s 0)={if(V(p)>1,5,0)}"), ""},
		{"B with a temperature coefficient", in("B1 s 0 V={V(p)*2} tc=1m"), is("B1(s 0)={V(p)*2}"), "assumed: `tc=` behind the value is not read"},
		{"B without braces, with a temperature coefficient", in("B1 s 0 V=V(p)*2 tc1 = 1m tc2=1u"), is("B1(s 0)={V(p)*2}"), "assumed: `tc1=`|assumed: `tc2=`"},
		{"B with a resistance across it", in("B1 s 0 I={V(p)} Rpar=1k"), is("B1(s 0)=unknown"), ""},
		{"B without braces, with a resistance across it", in("B1 s 0 I=V(p) Rpar=1k"), is("B1(s 0)=unknown"), ""},
		{"B with a comparison is no field", in("B1 s 0 V=V(p)==1 ? 2 : 3"), is("B1(s 0)={V(p)==1?2:3}"), ""},
		{"B with two formulas", in("B1 s 0 V={V(p)} {2*V(p)}"), is("B1(s 0)=unknown"), ""},
		{"B with voltage and current", in("B1 s 0 V={V(p)} I={2*V(p)}"), is("B1(s 0)=unknown"), ""},
		{"B with a word behind its formula", in("B1 s 0 V={V(p)} foo"), is("B1(s 0)={V(p)}"), "assumed: `foo` behind the value is not read"},
		{"VALUE with two formulas", in("E1 s 0 VALUE={V(p)} {2*V(p)}"), is("E1(s 0)=unknown"), ""},
		{"VALUE with a limit", in("E1 s 0 VALUE={V(p)} max=5"), is("E1(s 0)=unknown"), ""},
		{"TABLE behind control nodes", in("E1 s 0 p 0 TABLE (0,0) (1,5)"), is("E1(s 0)={table(V(p,0),0e+00,0e+00,1e+00,5e+00)}"), ""},
		{"TABLE behind control nodes, with a formula", in("G1 s 0 p 0 TABLE {2*V(p)} = (0,0) (1,5)"), is("G1(s 0)={table(2*V(p),0e+00,0e+00,1e+00,5e+00)}"), ""},
		{"TABLE of a voltage without braces", in("E1 s 0 TABLE V(p) = (0,0) (1,5)"), is("E1(s 0)=unknown"), ""},
		{"POLY behind control nodes", in("E1 s 0 p 0 POLY(1) 0 2"), is("E1(s 0 p 0)=unknown"), ""},
		{"B of a bracketed node", in("B1 s 0 V=V(Net-(D1-K))\nR1 Net-(D1-K) 0 1"), is("B1(s 0)={V(Net-(D1-K))} R1(Net-(D1-K) 0)=1"), ""},
		{"B of a node that is not there", in("B1 s 0 V=V(typo)"), is("B1(s 0)=unknown"), ""},
		{"B of a function that is not known", in("B1 s 0 V=wobble(V(p))"), is("B1(s 0)=unknown"), ""},
		{"Q of three nodes", in("Q1 c b e TIP41"), is("Q1(c b e)=TIP41?"), ""},
		{"Q with substrate", in("Q1 c b e 0 TIP41"), is("Q1(c b e 0)=TIP41?"), ""},
		{"Q with substrate and a type that reads like a number", in("Q1 c b e 0 2N9999"), is("Q1(c b e 0)=2N9999?"), ""},
		{"Q with area", in("Q1 c b e QX 2\n.model QX PNP(BF=50)"), is("Q1(c b e)=QX[-1,BF=50]"), ""},
		{"M", in("M1 d g s 0 NX W=1u L=1u\n.model NX NMOS"), is("M1(d g s 0)=NX[+1]"), ""},
		{"M of three nodes", in("M1 d g s IRF1"), is("M1(d g s s)=IRF1?"), ""},
		{"M of another kind", in("M1 d g s NX\n.model NX VDMOS(Rg=3)"), is("M1(d g s s)=unknown"), ""},
		{"S with ON", in("S1 a 0 p 0 sw ON\n.model SW SW(VT=2)"), is("S1(a 0 p 0)=SW[VT=2,on=true]"), ""},
		{"S with OFF", in("S1 a 0 p 0 SW OFF\n.model SW VSWITCH(VON=3 VOFF=1)"), is("S1(a 0 p 0)=SW[VT=2,on=false]"), ""},
		{"S of a hysteresis below 0", in("S1 a 0 p 0 SW\n.model SW SW(VT=2 VH=-1)"), is("S1(a 0 p 0)=unknown"), ""},
		{"A, U, J, T, W, O, Z keep their nodes", in("A1 a b MY\nU1 a b c UX\nJ1 a b c JX\nT1 a 0 b 0 Z0=50\nW1 a b V1 WX\nZ1 a b c ZX"), is("A1(a b)=unknown U1(a b c)=unknown J1(a b c)=unknown T1(a 0 b 0)=unknown W1(a b)=unknown Z1(a b c)=unknown"), ""},
		{"U without nodes", in("U2 __U2"), is("U2()=unknown"), ""},
		{"D with OFF, IC and area", in("D1 a 0 DX 2 OFF IC=0.6"), is("D1(a 0)=DX?"), ""},
		{"diode as a stack by N", in("D1 a 0 DZ\n.model DZ D(N=19)"), is("D1(a 0)=DZ[IS=1e-14,N=19,BV=0]"), "model: string of diodes"},
		{"a word behind the model", in("D1 a 0 1N4007 DO-41"), is("D1(a 0)=1N4007?"), "model: `DO-41` behind the model"},
		{"a diode of a transistor's model", in("D1 a 0 QX\n.model QX NPN"), is("D1(a 0)=unknown"), ""},
		{"a diode of straight lines", in("D1 a 0 DX\n.model DX D(Ron=.1 Vfwd=.7)"), is("D1(a 0)=unknown"), ""},
		{"IC of a capacitor", in("C1 a 0 1u IC=5"), is("C1(a 0)=1e-06"), ""},
		{"small parts around an inductor", in("L1 a 0 10u Rpar=1k Cpar=1p Rser=1m"), is("L1(a 0)=1e-05"), "assumed: `Rpar=`|assumed: `Cpar=`"},
		{"metadata of an inductor", in("L1 a 0 10u Ipk=2 Rser=.05 mfg=\"A B\" pn=\"x y\""), is("L1(a 0)=1e-05"), ""},
	})
	refuse(t, map[string]string{
		in("D1 a b"):                       "t.cir:3:1: D1 has 2 words behind its name",
		in("F1 a 0 V9 1"):                  "t.cir:3:8: F1 is controlled by V9, which is not there",
		in("F1 a 0 R1 1\nR1 a 0 1"):        "t.cir:3:8: F1 is controlled by R1, which is no source",
		in("K1 L1 L9 1\nL1 a 0 1"):         "t.cir:3:7: K1 couples L9, which is not there",
		in(coils + "K1 L1 L2 1.5"):         "a coupling factor of 1.5",
		in("E1 s 0 p 0"):                   "t.cir:3:1: E1 has 4 words behind its name",
		in("S1 a 0 p 0"):                   "S1 has 4 words behind its name",
		in("X1"):                           "X1 has 0 words behind its name",
		in("Q1 a b c"):                     "Q1 has 3 words behind its name",
		in("D1 a 0 D\n.model D D(IS=1x2)"): "model D: is: ",
	})
}

// Calls: black boxes, parameters, known types, diodes and bridges.
func TestPracticeOfCalls(t *testing.T) {
	in := func(cards string) string { return "t\nV1 a 0 1\n" + cards + "\n" }
	is := func(rest string) string { return "V1(a 0)=1 " + rest }
	zener := ".subckt ZENER_12 1 2\nD1 2 1 DF\nDZ 3 2 DR\nVZ 1 3 11\n.ends\n"
	const customary = "assumed: X1 its pins are taken in the customary order"
	hold(t, []practice{
		{"definition absent", in("X1 a b LM2595"), is("X1(a b)=unknown"), ""},
		{"name with a slash", in("X1 a b c ABC/XYZ"), is("X1(a b c)=unknown"), ""},
		{"bare parameters", in("X1 a 0 S r=2k\n.subckt S p q r=1\nR1 p q {r}\n.ends"), is("X1.R1(a 0)=2000"), ""},
		{"PARAMS:", in("X1 a 0 S PARAMS: r=2k\n.subckt S p q params: r=1\nR1 p q {r}\n.ends"), is("X1.R1(a 0)=2000"), ""},
		{"other words with a colon", in("X1 a 0 S pinnames: p q vars: r=2k\n.subckt S p q r=1\nR1 p q {r}\n.ends"), is("X1.R1(a 0)=2000"), ""},
		{"a pin called gnd is a pin", in("X1 a b c S\n.subckt S in out gnd\nR1 in out 1\nR2 out GND 2\nR3 out 0 3\n.ends"), is("X1.R1(a b)=1 X1.R2(b c)=2 X1.R3(b 0)=3"), ""},
		{"regulator", in("X1 a 0 out LM7812"), is("X1(a 0 out)=LM7812"), customary},
		{"regulator by the pin names of its subcircuit", in("X1 out a 0 LM7812\n.subckt LM7812 vout vin gnd\nR1 vout vin 1\n.ends"), is("X1(a 0 out)=LM7812"), "assumed: stands in for the subcircuit"},
		{"regulator whose subcircuit does not tell", in("X1 a 0 out LM7812\n.subckt LM7812 1 2 3\nR1 1 3 1\n.ends"), is("X1(a 0 out)=LM7812"), customary + "|assumed: stands in for the subcircuit"},
		{"regulator with the input last", in("X1 out 0 a LM7812"), is("X1(a 0 out)=LM7812"), "assumed: X1 its pins are inferred from the circuit"},
		{"zener of two diodes and a source", in("X3 k a ZENER_12\n" + zener), is("X3(a k)=ZENER_12?"), "assumed: stands in for the subcircuit"},
		{"zener with named pins", in("X3 k a ZENER_12\n.subckt ZENER_12 cathode anode\nR1 cathode anode 1\n.ends"), is("X3(a k)=ZENER_12?"), "assumed: stands in for the subcircuit"},
		{"zener without a definition", in("X3 k a ZENER_12"), is("X3(k a)=ZENER_12?"), "assumed: first node is taken as the anode"},
		{"bridge", in("X1 a 0 p n DB107"), is("X1.D1(a p)=DB107? X1.D2(0 p)=DB107? X1.D3(n a)=DB107? X1.D4(n 0)=DB107?"), "assumed: AC AC + -"},
		{"bridge by the pin names of its subcircuit", in("X1 p n a 0 DB107\n.subckt DB107 + - ac1 ac2\nR1 + - 1\n.ends"), is("X1.D1(a p)=DB107? X1.D2(0 p)=DB107? X1.D3(n a)=DB107? X1.D4(n 0)=DB107?"), "assumed: four diodes stand in"},
	})
	refuse(t, map[string]string{
		in("X1 a S\n.subckt S p q\nR1 p q 1\n.ends"):              "t.cir:3:1: X1 has 1 node; expected 2, as subcircuit S has",
		in("X1 a 0 S r=zz\n.subckt S p q r=1\nR1 p q {r}\n.ends"): "t.cir:3:1: r: zz is neither a number nor a parameter",
		in("X1 a b S\n.subckt S p p\nR1 p 0 1\n.ends"):            "whose pin p stands twice",
		in("X1 a b S\n.subckt S p 0\nR1 p 0 1\n.ends"):            "a pin of subcircuit S is called 0",
		in("X1 a 0 S\n.subckt S p q\nX2 p q S\n.ends"):            "subcircuits call one another more than 50 deep",
	})
}
