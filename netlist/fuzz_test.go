package netlist

import (
	"fmt"
	"math"
	"reflect"
	"strings"
	"testing"
	"time"
	"unicode/utf8"

	"railproof/netlist/syntax"
)

// FuzzParse feeds arbitrary bytes through the whole reader: no panic, no waiting, every place named lies inside the
// file, every number that is read is finite, and reading again gives the same.
func FuzzParse(f *testing.F) {
	for _, seed := range []string{
		"title\nV1 a 0 SIN(0 17 50)\nD1 a b DX\nC1 b 0 470uF/35V\nR1 b 0 {2*n}\n.param n=5\n.model DX D(IS=1n\n+ N=1.8)\n.end\n",
		"x\n.subckt s a b params: r=1\nR1 a b {r}\n.ends s\nX1 p 0 s r=2k\nV1 p 0 dc 5 ac 1\n*: ambient 0C..40C\n",
		"x\nK1 L1 L2 0.99\nL1 a 0 1m\nL2 b 0 1m\nV1 a 0 pulse(0 1 0 1n 1n 1u 2u)\nF1 b 0 V1 2\nE1 c 0 a 0 3\n",
		"x\nB1 o 0 V=V(a)*I(V1)+sqrt(time)\nV1 a 0 pwl(0 0 1 1)\n.func g(x) {x^2}\nR1 o 0 {g(3)}\n",
		"x\nX1 raw 0 out LM7812\nQ1 c b e 0 QX area\nM1 d g s NM W=1u\nS1 a b c d SW ON\n.control\nrun\n.endc\n",
		"x\r.include a.lib\r.lib b.lib tt\rR1 a b 1k ; comment\rR2 a b 1k $ note\r.end\rR3 a b 1\r",
		"x\n.if (q>1)\nR1 a 0 1\n.elseif (2)\nR1 a 0 2 m=3\n.else\nR2 a 0 3\n.endif\n.param q={r} r={q}\n",
		"x\nX1 a ZENER_12\nX2 a 0 b c DB107\nE1 a 0 POLY(2) a 0 b 0 1 2 3\nG1 a 0 TABLE {V(a)} = (0,1) (1,2)\n.model D D(AKO:D N=1))\n",
		"\xff\xfex\x00\n\x00R\x001\x00 \x00a\x00 \x000\x00 \x001\x00",
		"(export (version D))", "", "x\nR1 a 0 1e999\nC1 a 0 nan\nL1 a 0 {1/0}\n",
	} {
		f.Add([]byte(seed))
	}
	f.Fuzz(func(t *testing.T, text []byte) {
		if len(text) > 4096 {
			return
		}
		start := time.Now()
		c, _, faults := Parse("fuzz.cir", text, nil, regulators{})
		if took := time.Since(start); took > hanging {
			t.Fatalf("%v for %q", took, text)
		}
		lines := strings.Split(syntax.Decode(text), "\n")
		inside := func(at Position) {
			if at.File != "fuzz.cir" {
				return
			}
			if at.Line < 1 || at.Line > len(lines) || at.Column < 1 || at.Column > utf8.RuneCountInString(lines[at.Line-1])+2 {
				t.Fatalf("%v lies outside the %d lines of %q", at, len(lines), text)
			}
		}
		for _, d := range faults {
			inside(d.At)
		}
		if c == nil {
			return
		}
		for _, r := range c.Remarks {
			inside(r.At)
		}
		for k := range c.Elements {
			e := &c.Elements[k]
			inside(e.At)
			for pin, n := range e.Nodes {
				if int(n) >= len(c.Nodes) {
					t.Fatalf("%s is on node %d of %d", e.Name, n, len(c.Nodes))
				}
				met := false
				for _, at := range c.Nodes[n].Terminals {
					met = met || at == Terminal{Element: ElementID(k), Pin: pin}
				}
				if !met {
					t.Fatalf("node %s does not know pin %d of %s", c.Nodes[n].Name, pin, e.Name)
				}
			}
			finite(t, e.Name, reflect.ValueOf(e.Device))
		}
		again, _, _ := Parse("fuzz.cir", text, nil, regulators{})
		if a, b := told(c)+fmt.Sprint(c.Remarks), told(again)+fmt.Sprint(again.Remarks); a != b {
			t.Fatalf("read as %s and then as %s", a, b)
		}
	})
}

// hanging is far beyond what 4 KiB take on a slow and busy machine.
const hanging = time.Minute

// finite fails on a number in a device that is none.
func finite(t *testing.T, name string, v reflect.Value) {
	switch v.Kind() {
	case reflect.Float64:
		if math.IsNaN(v.Float()) || math.IsInf(v.Float(), 0) {
			t.Fatalf("%s holds %g", name, v.Float())
		}
	case reflect.Struct:
		for k := range v.NumField() {
			finite(t, name, v.Field(k))
		}
	case reflect.Slice:
		for k := range v.Len() {
			finite(t, name, v.Index(k))
		}
	case reflect.Pointer, reflect.Interface:
		if _, formula := v.Interface().(Expression); !v.IsNil() && !formula {
			finite(t, name, v.Elem())
		}
	}
}
