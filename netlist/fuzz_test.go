package netlist

import (
	"strings"
	"testing"

	"railproof/netlist/syntax"
)

// FuzzParse feeds arbitrary bytes through the whole reader: no panic, and every place named lies inside the file.
func FuzzParse(f *testing.F) {
	for _, seed := range []string{
		"title\nV1 a 0 SIN(0 17 50)\nD1 a b DX\nC1 b 0 470uF/35V\nR1 b 0 {2*n}\n.param n=5\n.model DX D(IS=1n\n+ N=1.8)\n.end\n",
		"x\n.subckt s a b params: r=1\nR1 a b {r}\n.ends s\nX1 p 0 s r=2k\nV1 p 0 dc 5 ac 1\n*: ambient 0C..40C\n",
		"x\nK1 L1 L2 0.99\nL1 a 0 1m\nL2 b 0 1m\nV1 a 0 pulse(0 1 0 1n 1n 1u 2u)\nF1 b 0 V1 2\nE1 c 0 a 0 3\n",
		"x\nB1 o 0 V=V(a)*I(V1)+sqrt(time)\nV1 a 0 pwl(0 0 1 1)\n.func g(x) {x^2}\nR1 o 0 {g(3)}\n",
		"x\nX1 raw 0 out LM7812\nQ1 c b e 0 QX area\nM1 d g s NM W=1u\nS1 a b c d SW ON\n.control\nrun\n.endc\n",
		"x\r.include a.lib\r.lib b.lib tt\rR1 a b 1k ; comment\rR2 a b 1k $ note\r.end\rR3 a b 1\r",
		"\xff\xfex\x00\n\x00R\x001\x00 \x00a\x00 \x000\x00 \x001\x00",
		"(export (version D))", "", "x\nR1 a 0 1e999\nC1 a 0 nan\nL1 a 0 {1/0}\n",
	} {
		f.Add([]byte(seed))
	}
	f.Fuzz(func(t *testing.T, text []byte) {
		if len(text) > 4096 {
			return
		}
		c, _, faults := Parse("fuzz.cir", text, nil, regulators{})
		lines := 1 + strings.Count(syntax.Decode(text), "\n")
		inside := func(at Position) {
			if at.File == "fuzz.cir" && (at.Line < 1 || at.Line > lines || at.Column < 1) {
				t.Fatalf("%v lies outside the %d lines of %q", at, lines, text)
			}
		}
		for _, d := range faults {
			inside(d.At)
		}
		if c == nil {
			return
		}
		for _, r := range c.Remarks {
			if r.At.Line > 0 {
				inside(r.At)
			}
		}
		for k := range c.Elements {
			inside(c.Elements[k].At)
			for _, n := range c.Elements[k].Nodes {
				if int(n) >= len(c.Nodes) {
					t.Fatalf("%s is on node %d of %d", c.Elements[k].Name, n, len(c.Nodes))
				}
			}
		}
	})
}
