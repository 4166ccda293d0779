package netlist

import (
	"strings"
	"testing"
)

// read parses a netlist that must be accepted.
func accepted(t *testing.T, text string) *Circuit {
	t.Helper()
	c, _, faults := Parse("t.cir", []byte(text), nil, regulators{})
	if len(faults) > 0 {
		t.Fatalf("refused: %v\n%s", faults, text)
	}
	return c
}

// shape is the circuit in one line an element: NAME KIND nodes.
func shape(c *Circuit) string {
	var lines []string
	for _, e := range c.Elements {
		var nodes []string
		for _, n := range e.Nodes {
			nodes = append(nodes, c.Nodes[n].Name)
		}
		lines = append(lines, e.Name+"("+strings.Join(nodes, " ")+")")
	}
	return strings.Join(lines, " ")
}

// remarked reports whether a remark of a kind contains a text.
func remarked(c *Circuit, kind RemarkKind, text string) bool {
	for _, r := range c.Remarks {
		if r.Kind == kind && strings.Contains(r.Element+" "+r.Text, text) {
			return true
		}
	}
	return false
}

// What public netlists contain, row by row: the file itself, lines and comments, names.
func TestHabitsOfFilesAndNames(t *testing.T) {
	const two = "V1(a 0) R1(a 0)"
	for name, c := range map[string]struct{ text, want string }{
		"CRLF":                       {"t\r\nV1 a 0 5\r\nR1 a 0 1k\r\n", two},
		"CR alone and mixed":         {"t\rV1 a 0 5\r\nR1 a 0 1k\n", two},
		"Latin-1 micro":              {"t\nV1 a 0 5\nR1 a 0 1k\nC1 a 0 10\xb5\n", two + " C1(a 0)"},
		"Latin-1 path":               {"* D:\\Ol\xe1\\a\nV1 a 0 5\nR1 a 0 1k\n", two},
		"UTF-8 micro":                {"t\nV1 a 0 5\nR1 a 0 1k\nC1 a 0 10µ\n", two + " C1(a 0)"},
		"UTF-16LE without mark":      {"t\x00\n\x00V\x001\x00 \x00a\x00 \x000\x00 \x005\x00\n\x00R\x001\x00 \x00a\x00 \x000\x00 \x001\x00\n\x00", two},
		"UTF-16LE with mark":         {"\xff\xfet\x00\n\x00V\x001\x00 \x00a\x00 \x000\x00 \x005\x00\n\x00R\x001\x00 \x00a\x00 \x000\x00 \x001\x00\n\x00", two},
		"tabs":                       {"t\nV1\ta\t0\t5\nR1\ta\t0\t1k\n", two},
		"blank first line":           {"\nV1 a 0 5\nR1 a 0 1k\n", two},
		"comment title":              {"* supply\nV1 a 0 5\nR1 a 0 1k\n", two},
		"free title":                 {"Bridge with 470u\nV1 a 0 5\nR1 a 0 1k\n", two},
		"title like an element":      {"Lab 4, Task 2, EE 101\nV1 a 0 5\nR1 a 0 1k\n", two},
		"directive first":            {".options x\nV1 a 0 5\nR1 a 0 1k\n", two},
		".title":                     {".title x\nV1 a 0 5\nR1 a 0 1k\n", two},
		"control after end":          {"t\nV1 a 0 5\nR1 a 0 1k\n.end\n.control\nR9 a 0 1\n.endc\n", two},
		".end twice":                 {"t\nV1 a 0 5\nR1 a 0 1k\n.end\n.end\n", two},
		"typos of directives":        {"t\nV1 a 0 5\nR1 a 0 1k\n.endA\n.trans 1\n", two},
		"continuation":               {"t\nV1 a 0\n+ 5\nR1 a\n+0 1k\n", two},
		"continuation after comment": {"t\nV1 a 0\n* note\n\n+ 5\nR1 a 0 1k\n", two},
		"; inline and whole":         {"t\nV1 a 0 5 ; five\n;tran 10m\nR1 a 0 1k\n", two},
		"$ inline":                   {"t\nV1 a 0 5 $ five\nR1 a 0 1k\n", two},
		"# and // lines":             {"t\n# x\n// y\n   * z\nV1 a 0 5\nR1 a 0 1k\n", two},
		"indented":                   {"t\n    V1 a 0 5\n  R1 a 0 1k\n", two},
		"control block":              {"t\nV1 a 0 5\n.control\necho \"unbalanced\n.tran 1\nrun > x\n.endc\nR1 a 0 1k\n", two},
		"case of directives":         {"t\n.PARAM r=1k\nV1 a 0 5\nR1 a 0 {R}\n.END\n", two},
		"ground alias":               {"t\nV1 a GND 5\nR1 a gnd 1k\n", two},
		"case of nodes":              {"t\nV1 +5V 0 5\nR1 +5v 0 1k\n", "V1(+5V 0) R1(+5V 0)"},
		"odd nodes":                  {"t\nV1 Net-(D1-K) V- 5\nR1 Net-_D1-Pad2_ /psu/VRAW 1k\nR2 12V 5V_raw 1\nR3 $N_0007 a# 1\nR4 N$12 Out+ 1\n", "V1(Net-(D1-K) V-) R1(Net-_D1-Pad2_ /psu/VRAW) R2(12V 5V_raw) R3($N_0007 a#) R4(N$12 Out+)"},
		"unconnected":                {"t\nV1 a 0 5\nR1 a ? 1\nR2 a ? 1\n", "V1(a 0) R1(a ?1) R2(a ?2)"},
		"spaces round commas":        {"t\nV1 a 0 5\nGx a 0 (a ,0) 7m\n", "V1(a 0) Gx(a 0 a 0)"},
		"designators":                {"t\nV1 a 0 5\nX§U1 a 0 NOTHING\nR-load a 0 1\nR(PULL)3 a 0 1\nR6.1 a 0 1\nRR3 a 0 1\nC a 0 1u\n", "V1(a 0) U1(a 0) R-load(a 0) R(PULL)3(a 0) R6.1(a 0) RR3(a 0) C(a 0)"},
		"part and model of one name": {"t\nV1 a 0 5\nD1 a 0 d1\n.model d1 D(N=2)\n", "V1(a 0) D1(a 0)"},
	} {
		t.Run(name, func(t *testing.T) {
			if got := shape(accepted(t, c.text)); got != c.want {
				t.Errorf("read %s, want %s", got, c.want)
			}
		})
	}
	c := accepted(t, "t\nV1 a 0 5\nR1 a 0 1k\n.end\nCx a 0 1u\n")
	if shape(c) != two || !remarked(c, RemarkAfterEnd, "Cx") {
		t.Error("an element behind .end must be named and left out")
	}
	if c = accepted(t, "R1 a 0 1.2k\nV1 a 0 5\nR2 a 0 1\n"); !remarked(c, RemarkAssumption, "first line is taken as an element") || len(c.Elements) != 3 {
		t.Errorf("a first line that is plainly an element: %s", shape(c))
	}
	if c = accepted(t, "t\nV1 a b 5\nR1 a b 1\n"); c.HasGround || !remarked(c, RemarkAssumption, "node 0") {
		t.Error("a circuit without ground must say so")
	}
	if c = accepted(t, "t\nV1 a 0 5\nR1 a 0 1\nR1 a 0 2\n"); !remarked(c, RemarkDuplicateName, "R1") || len(c.Elements) != 3 {
		t.Errorf("duplicate names must be kept apart: %s", shape(c))
	}
	if c = accepted(t, "t\nV1 a 0 5\nR1 a 0 1\n.simulator x\n"); !remarked(c, RemarkNotRead, ".simulator") {
		t.Error("other dot cards must be named once")
	}
}

// Elements, numbers, models and includes.
func TestHabitsOfElementsAndModels(t *testing.T) {
	source := func(card string) Waveform {
		c := accepted(t, "t\n"+card+"\nR1 a 0 1k\n")
		return c.Elements[0].Device.(VoltageSource).Wave
	}
	sine := Sine{Amplitude: 15, Frequency: 50}
	for _, card := range []string{
		"V1 a 0 SIN(0 15 50)", "V1 a 0 SINE(0 15 50)", "V1 a 0 sin 0 15 50", "V1 a 0 SIN (0,15,50)", "V1 a 0 0 sin(0 15 50)",
		"V1 a 0 dc 0 ac 1 sin(0 15 50)", "V1 a 0 sin(0 15 50) ac 1 0", "V1 a 0 ac 1 dc 0 sin(0 15 50)", "V1 a 0 SIN(0 'sqrt(9)*5' {100/2})",
	} {
		if w := source(card); w != sine {
			t.Errorf("%s: %+v", card, w)
		}
	}
	for card, level := range map[string]float64{
		"V1 a 0 12V": 12, "V1 a 0 dc(48)": 48, "V1 a 0 DC=5": 5, "V1 a 0 0.0 ac 1.0": 0, "V1 a 0": 0, "V1 a 0 DC 9 Rser=0.1": 9,
	} {
		if w := source(card); w != (Constant{level}) {
			t.Errorf("%s: %+v", card, w)
		}
	}
	resistance := func(card string) (Device, *Circuit) {
		c := accepted(t, "t\nV1 a 0 1\n.param rl=5\n"+card+"\n")
		return c.Elements[1].Device, c
	}
	for card, ohms := range map[string]float64{
		"R1 a 0 1k": 1e3, "R1 a 0 1Meg": 1e6, "R1 a 0 2kOhm": 2e3, "R1 a 0 .1": 0.1, "R1 a 0 0k": 0, "R1 a 0 {2*rl}": 10, "R1 a 0 '2*rl'": 10,
		"R1 a 0 rl": 5, "R1 a 0 R=2k": 2e3, "R1 a 0 330 tol=1 pwr=0.5": 330, "R1 a 0 4k7": 4700, "R1 a 0 2000M": 2, "R1 a 0 1k TC=0.001,0.002": 1e3,
	} {
		if d, _ := resistance(card); d != (Resistor{ohms}) {
			t.Errorf("%s: %+v", card, d)
		}
	}
	if _, c := resistance("R1 a 0 2000M"); !remarked(c, RemarkValueSuffix, "milli") {
		t.Error("2000M must be remarked as milli")
	}
	if d, _ := resistance("R1 a 0 R"); d != (Unknown{'R', "its value is missing"}) {
		t.Errorf("a value that is a word: %+v", d)
	}
	c := accepted(t, "t\nV1 a 0 1\nC1 a 0 22u V=50 Irms=.13 mfg=\"A B\" type=\"Al el\"\nC2 a 0 1F\nC3 a 0 10 uF (0805)\n")
	if e := c.Elements[1]; len(FieldRatings(e)) < 2 {
		t.Errorf("ratings on the card: %+v", e.Fields)
	}
	if !remarked(c, RemarkValueSuffix, "femto") || c.Elements[3].Device.(Capacitor).Farads != 10e-6 || !remarked(c, RemarkAssumption, "10 uF") {
		t.Error("1F and `10 uF` must be read and remarked")
	}
	for card, want := range map[string]string{
		"Q1 c b e 0 TIP41":      "Q1(c b e 0)",
		"Q1 c b e QN":           "Q1(c b e)",
		"K1 L1 L2 0.998":        "K1()",
		"F1 a 0 E1 16":          "F1(a 0)",
		"S1 a 0 b 0 sw ON":      "S1(a 0 b 0)",
		"M1 d g s b NM W=1u":    "M1(d g s b)",
		"X1 a b op Avol=1Meg":   "X1(a b)",
		"X1 a b op PARAMS: x=1": "X1(a b)",
		"X1 a b c ABC/XYZ":      "X1(a b c)",
		"X1 raw 0 out LM7812":   "X1(raw 0 out)",
	} {
		c := accepted(t, "t\n"+card+"\nE1 a 0 b 0 0.1\nL1 a 0 1\nL2 b 0 1H\n.model QN NPN\n.model sw SW\n.model NM NMOS\n")
		if got := shape(c); !strings.HasPrefix(got, want+" ") {
			t.Errorf("%s: %s", card, got)
		}
	}
	// Models: after use, catch-all, without parameters, in every punctuation, based on another, defined twice.
	for _, model := range []string{".model DX D(IS=1n N=1.5)", ".model DX D IS = 1n, N=1.5", ".model DX D ( IS=1n\n+ N=1.5 )", ".MODEL dx d is=1n n=1.5", ".model DB D(IS=1n N=9)\n.model DX AKO:DB (N=1.5)"} {
		c := accepted(t, "t\nV1 a 0 1\nD1 a 0 DX\n"+model+"\n")
		if m := c.Elements[1].Device.(Diode).Model; m == nil || m.IS != 1e-9 || m.N != 1.5 {
			t.Errorf("%s: %+v", model, m)
		}
	}
	c = accepted(t, "t\nV1 a 0 1\nD1 a 0 D\nD2 a 0 1N-odd\nD3 a 0 DZ\n.model D D\n.model 1N-odd D(BV=75)\n.model 1N-odd D(BV=5)\n.model DZ D(N=19)\n")
	if m := c.Elements[1].Device.(Diode).Model; m == nil || !m.Bare {
		t.Errorf("catch-all: %+v", m)
	}
	if m := c.Elements[2].Device.(Diode).Model; m == nil || m.BV != 75 || !remarked(c, RemarkModel, "defined again") || !remarked(c, RemarkModel, "string of diodes") {
		t.Errorf("the first of two models holds, a stack by N is remarked: %+v", m)
	}
	// Subcircuits: nested, with parameters and models of their own; globals.
	c = accepted(t, "t\n.global vdd\nV1 vdd 0 5\nX1 a outer r=2k\n.subckt outer p r=1k\nR1 p vdd {r}\nX2 p inner\n.subckt inner q\nD1 q 0 DI\n.model DI D(N=3)\n.ends inner\n.ends\n")
	if got := shape(c); got != "V1(vdd 0) X1.R1(a vdd) X1.X2.D1(a 0)" || c.Elements[1].Device != (Resistor{2000}) {
		t.Errorf("subcircuits: %s %+v", got, c.Elements[1].Device)
	}
	// Libraries of the author's machine are named and not opened.
	for _, line := range []string{".lib C:\\My Docs\\standard.dio", ".include /opt/x/parts.lib", ".inc \"..\\m.lib\"", ".incl \\\\server\\share\\q.lib", ".lib tt.lib TT"} {
		if c := accepted(t, "t\nV1 a 0 1\nR1 a 0 1\n"+line+"\n"); !remarked(c, RemarkLibraryNotRead, "") {
			t.Errorf("%s must be remarked as not read", line)
		}
	}
}
