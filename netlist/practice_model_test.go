package netlist

import "testing"

// Models.
func TestPracticeOfModels(t *testing.T) {
	d := func(cards string) string { return "t\nV1 a 0 1\nD1 a 0 DX\n" + cards + "\n" }
	is := func(model string) string { return "V1(a 0)=1 D1(a 0)=" + model }
	full := is("DX[IS=1e-09,N=1.5,BV=75]")
	hold(t, []practice{
		{"model behind its use", d(".model DX D(IS=1n N=1.5 BV=75)"), full, ""},
		{"no brackets", d(".model DX D IS=1n N=1.5 BV=75"), full, ""},
		{"bracket with blanks", d(".model DX D ( IS=1n N=1.5 BV=75 )"), full, ""},
		{"blanks round =, commas", d(".model DX D IS = 1n, N= 1.5 ,BV =75"), full, ""},
		{"bracket never closed", d(".model DX D(IS=1n N=1.5 BV=75"), full, ""},
		{"bracket closed twice", d(".model DX D(IS=1n N=1.5 BV=75))"), full, ""},
		{"upper and lower case", d(".MODEL dx d(is=1N n=1.5 bv=75)"), is("dx[IS=1e-09,N=1.5,BV=75]"), ""},
		{"parameters by formula", d(".param n0=1.5\n.model DX D(IS={2n/2} N=n0 BV='75')"), full, ""},
		{"AKO:", d(".model DB D(IS=1n N=9 BV=75)\n.model DX AKO:DB (N=1.5)"), full, ""},
		{"AKO: with a blank and a kind", d(".model DB D(IS=1n N=9 BV=75)\n.model DX AKO: DB D(N=1.5)"), full, ""},
		{"AKO: of nothing", d(".model DX AKO:DB D(IS=1n)"), is("DX[IS=1e-09,N=1,BV=0]"), "model: based on DB, which is not defined"},
		{"catch-all", "t\nV1 a 0 1\nD1 a 0 D\n.model D D\n", is("D[IS=1e-14,N=1,BV=0]"), ""},
		{"without parameters, empty brackets", d(".model DX D()"), is("DX[IS=1e-14,N=1,BV=0]"), ""},
		{"two of one name", d(".model DX D(IS=1n N=1.5 BV=75)\n.model DX D(IS=9n)"), full, "model: model DX is defined again; the first definition holds"},
		{"a model of no use may be odd", d(".model DX D(IS=1n N=1.5 BV=75)\n.model QQ WHAT(((="), full, ""},
		{"a law that cannot be", d(".model DX D(N=0)"), is("unknown"), ""},
		{"without a kind", d(".model DX"), is("unknown"), ""},
	})
	for text, bare := range map[string]bool{".model DX D": true, ".model DX D()": true, ".model DX D(IS=1n)": false} {
		if m := accepted(t, d(text)).Elements[1].Device.(Diode).Model; m == nil || m.Bare != bare {
			t.Errorf("%s: %+v", text, m)
		}
	}
	c := accepted(t, "t\nV1 a 0 1\nD1 a 0 1N-odd\n.model 1N-odd D(IS=1n Vpk=75 Iave=1 mfg=\"A B\" type=silicon)\n")
	if m := c.Elements[1].Device.(Diode).Model; m == nil || len(m.Ratings) != 4 || m.Ratings[0] != (Field{Key: "Vpk", Value: "75", At: m.Ratings[0].At}) {
		t.Errorf("ratings on a model card: %+v", m)
	}
}

// Subcircuits and the names they see.
func TestPracticeOfSubcircuits(t *testing.T) {
	in := func(cards string) string { return "t\nV1 a 0 1\n" + cards + "\n" }
	is := func(rest string) string { return "V1(a 0)=1 " + rest }
	hold(t, []practice{
		{".ends bare and named", in("X1 a S\nX2 a T\n.subckt S p\nR1 p 0 1\n.ends\n.SUBCKT T p\nR1 p 0 2\n.ENDS T"), is("X1.R1(a 0)=1 X2.R1(a 0)=2"), ""},
		{"nested definitions, models inside", in("X1 a S\nD1 a 0 DI\n.subckt S p\nX2 p T\n.subckt T q\nD1 q 0 DI\n.model DI D(N=3)\n.ends T\n.ends S"), is("X1.X2.D1(a 0)=DI[IS=1e-14,N=3,BV=0] D1(a 0)=DI?"), ""},
		{"a model inside hides the one outside", in("X1 a S\nD1 a 0 DI\n.model DI D(N=2)\n.subckt S p\nD1 p 0 DI\n.model DI D(N=3)\n.ends S"), is("X1.D1(a 0)=DI[IS=1e-14,N=3,BV=0] D1(a 0)=DI[IS=1e-14,N=2,BV=0]"), ""},
		{"defaults and parameters", in("X1 a S r={k*2}\nX2 a S\n.param k=5\n.subckt S p r=1k\n.param h={r/2}\nR1 p m {h}\nR2 m 0 r\n.ends"), is("X1.R1(a X1.m)=5 X1.R2(X1.m 0)=10 X2.R1(a X2.m)=500 X2.R2(X2.m 0)=1000"), ""},
		{"a default by the netlist's parameter", in("X1 a S\n.param k=5\n.subckt S p r={k*3}\nR1 p 0 {r}\n.ends"), is("X1.R1(a 0)=15"), ""},
		{".global", in(".global vdd\nX1 a S\nR9 VDD 0 1\n.subckt S p\nR1 p vdd 2\n.ends"), is("X1.R1(a vdd)=2 R9(vdd 0)=1"), ""},
		{"nodes inside are their own", in("X1 a S\nX2 a S\n.subckt S p\nR1 p m 2\nR2 m 0 2\n.ends"), is("X1.R1(a X1.m)=2 X1.R2(X1.m 0)=2 X2.R1(a X2.m)=2 X2.R2(X2.m 0)=2"), ""},
		{"controlled inside", in("X1 a S\n.subckt S p\nVS p m 0\nF1 m 0 VS 2\nR1 m 0 1\n.ends"), is("X1.VS(a X1.m)=0 X1.F1(X1.m 0)=X1.VS*2 X1.R1(X1.m 0)=1"), ""},
		{"two of one name", in("X1 a S\n.subckt S p\nR1 p 0 1\n.ends\n.subckt S p\nR1 p 0 2\n.ends"), is("X1.R1(a 0)=1"), "model: subcircuit S is defined again"},
		{"copies by m= of a call", in("X1 a S m=2\n.subckt S p\nR1 p 0 1\n.ends"), is("X1(a)=unknown"), "model: in parallel"},
	})
	refuse(t, map[string]string{
		in("X1 a S\n.subckt S p\nR1 p 0 1"): "subcircuit S has no .ends",
		in(".subckt\nR1 a 0 1\n.ends"):      ".subckt without a name",
	})
	c, _, faults := Parse("t.lib", []byte("* models\n.model DX D(IS=1n)\n.subckt S p\nR1 p 0 1\n.ends\n"), nil, nil)
	if len(faults) > 0 || !remarked(c, RemarkModel, "definitions only") {
		t.Errorf("a library alone: %v", faults)
	}
}

// Names of libraries that are not there: never an error, never opened, never the folder in the text.
func TestPracticeOfMissingLibraries(t *testing.T) {
	for line, base := range map[string]string{
		".lib C:\\My Docs\\standard.dio": "standard.dio", ".include /opt/x/parts.lib": "parts.lib", ".inc \"..\\m.lib\"": "m.lib",
		".incl \\\\server\\share\\q.lib": "q.lib", ".lib tt.lib TT": "tt.lib", ".include ~/a b.lib": "a b.lib", ".LIB 'x y.lib'": "x y.lib",
	} {
		c, faults := readDeck(t, "a.cir", "t\nV1 a 0 1\nR1 a 0 1\n"+line+"\n")
		if len(faults) > 0 || told(c) != "V1(a 0)=1 R1(a 0)=1" {
			t.Errorf("%s: %v", line, faults)
		}
		checkRemarks(t, c, "library: "+base+" is not beside the netlist")
	}
	c, faults := readDeck(t, "a.cir", "t\nV1 a 0 1\nD1 a 0 DX\n.include Parts.LIB\n", "parts.lib", ".model DX D(IS=1n) ; first line\n")
	if len(faults) > 0 || told(c) != "V1(a 0)=1 D1(a 0)=DX[IS=1e-09,N=1,BV=0]" {
		t.Errorf("a file whose name differs in case: %v %s", faults, told(c))
	}
	c, faults = readDeck(t, "a.cir", "t\nV1 a 0 1\nR1 a 0 1\n.include b.lib\n", "b.lib", "(export (version D)\n (x))\n")
	if len(faults) > 0 {
		t.Error(faults)
	}
	checkRemarks(t, c, "library: b.lib is a board netlist in S-expressions")
	c, faults = readDeck(t, "a.cir", "t\n.include x.net\n.inc alias.inc\n", "x.net", "V1 a 0 5 ; source\nR1 a b 1k\n", "alias.inc", "R2 b 0 2k ; alias\n.end\n")
	if len(faults) > 0 || told(c) != "V1(a 0)=5 R1(a b)=1000 R2(b 0)=2000" {
		t.Errorf("deck split in two: %v %s", faults, told(c))
	}
}
