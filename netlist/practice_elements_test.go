package netlist

import "testing"

// Spellings that hardware projects use and that are no mistake: each is accepted.
func TestSpellingsThatAreNoMistake(t *testing.T) {
	for _, card := range []string{
		"V1 a 0 5 // five", "R1 a 0 1k // load", "V1 a 0 SIN 0 1 1k", "V1 a 0 PULSE (0 5 0 1n 1n 1m 2m)", "V1 a 0 DC 5 AC 1 0",
		"V1 a 0 DC=5", "V1 a 0 DC = 5V", "V1 a 0 AC=1 SIN(0 1 1k)", "V1 a 0 5 AC", "I1 a 0 1 load", "I1 a 0 tbl=(0 0, 1 1)",
		"V1 a 0 PWL(0 0 1m 5) R=0", "V1 a 0 PWL REPEAT FOREVER (0 0 1m 5) ENDREPEAT", "V1 a 0 PWL(0 0 +1m 5)", "V1 a 0 wavefile=x.wav chan=0",
		"V1 a 0 trnoise(1 1n 0 0)", "V1 a 0 SIN(0 15 50 0 0 0 3)", "V1 a 0 dc 0 sin(0 {10*sqrt(2)} 50Hz)",
		"R1 a 0 1k m=2", "R1 a 0 1k tc=1m,2u", "R1 a 0 1k tc1=1m tc2=2u", "R1 a 0 RMOD 1k", "R1 a 0 1k RMOD", "R1 a 0 1k temp=27",
		"C1 a 0 10u IC=0V", "C1 a 0 10u 25V", "L1 a 0 10m Rser=0.1 Rpar=1k Cpar=1p", "C1 a 0 {c1}\n.param c1=1u, c2 = 2u",
		"R1 a 0 {rl}\n.step param rl 1 10 1", "R1 a 0 {rl}\n.step param rl list 1 10", "R1 a 0 {rl}\n.include missing.lib", ".param x={zz}\n.include missing.lib",
		"R1 a 0 rl\n.param rl = 5 * 2", "R1 a 0 rl\n.param rl=230*sqrt(2)", "R1 a 0 {rl}\n.param rl='5*2' freq=50", "R1 a 0 {f(2)}\n.func f(x) {x*2}", "R1 a 0 rl\n.param rl 5",
		"Q1 c b e 0 2N3904", "Q1 c b e sub QX 2", "Q1 c b e QX off", "Q1 c b e [sub] QX", "M1 d g s IRF540", "M1 d g s s IRF540N m=2", "J1 d g s JX",
		"D1 a 0 DX 2 off", "D1 a 0 DX temp=27 ic=0.5", "D1 a 0 DX m=4", "S1 a 0 b 0 SWX off", "W1 a 0 V1 WX", "T1 a 0 b 0 Z0=50 TD=1n", "U2 __U2", "A1 [a b] c AX",
		"X1 a b c / SUB", "X1 (a b c) SUB", "X1 a b SUB r = 2k c={1u}", "X1 a b SUB r=1 trailing", "X1 a b SUB PARAMS: r=1 c=2", "X1 a b SUB m=2",
		"X1 a 0 S r=2 c=3\n.subckt S p q r=1\nR1 p q {r}\n.ends S", "X1 a 0 S\n.subckt S p q PARAMS: r=1\nR1 p q {r}\n.ENDS S ; end", "X1 a 0 S\n.subckt S p q / r=1\nR1 p q {r}\n.ends",
		"X1 a 0 S\n.macro S p q\nR1 p q 1\n.eom",
		"E1 a 0 VALUE {V(b)*2}", "E1 a 0 VALUE = {V(b)*2}", "E1 a 0 vol='V(b)*2'", "E1 a 0 TABLE {V(b)} = (0,0) (1,1)", "G1 a 0 b 0 table=(0 0, 1 1)", "E1 a 0 POLY(1) b 0 0 2",
		"E1 a 0 POLY(2) (b,0) (c,0) 0 1 1", "E1 a 0 LAPLACE {V(b)} = {1/(1+s)}", "B1 a 0 V=V(b)>2?1:0", "B1 a 0 I={V(b)/2}", "B1 a 0 V = if(V(b)>1, 1, 0)", "B1 a 0 R=V(b)",
		"F1 a 0 V9 2\n.include missing.lib", "K1 L1 L2 k=0.9\nL1 a 0 1m\nL2 b 0 1m", "K1 L1 L2 0.9 CORE\nL1 a 0 1m\nL2 b 0 1m", "K1 L1 L2 {k}\n.param k=0.9\nL1 a 0 1m\nL2 b 0 1m",
		"Q1 c b e QX\n.model QX NPN(BF=100\n+ IS=1f,\n+ VAF=80)", "D1 a 0 DX\n.model DX D (IS=1e-14 Rs=.1 mfg=House type=silicon)", "D1 a 0 DX\n.model DX D(IS=1n", ".ic V(a)=5", ".nodeset v(a)=5 v(b)=2",
		".model DX D(IS=1n) ; note", "R1 a 0 1k\x1a", "\x1a", "R1\u00a0a\u00a00\u00a01k", ".options reltol=1e-3 temp=50", ".temp 25 50", ".global vcc vee", ".save all", ".print tran v(a)", ".meas tran x AVG V(a)\n+ FROM=1 TO=2",
		".end\ngarbage ( ' {",
	} {
		if _, _, faults := Parse("t.cir", []byte("t\nV0 a 0 5\nR0 b 0 1\n"+card+"\n"), nil, regulators{}); len(faults) > 0 {
			t.Errorf("%q: %v", card, faults)
		}
	}
}
