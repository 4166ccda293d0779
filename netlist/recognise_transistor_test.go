package netlist

import (
	"strings"
	"testing"
)

// A transistor drawn as a call of a type of the table is one: its nodes are collector, base, emitter unless pins= says
// otherwise. A subcircuit that the netlist carries for the type is solved as it is.
func TestTransistorAsCall(t *testing.T) {
	const called = "t\nV1 c 0 12\nR1 c b 1k\nRE e 0 1k\n"
	for _, f := range []struct{ card, duty, want, remark string }{
		{"XQ1 c b e BD139", "", "c b e", transistorPinsTaken},
		{"XQ1 e c b BD139", "part XQ1 BD139 pins=e,c,b", "c b e", ""},
		{"XQ1 e c b ANOTHER", "part XQ1 BD139 pins=e,c,b", "c b e", ""},
		{"XQ1 c b e ANOTHER", "part XQ1 BD139", "c b e", transistorPinsTaken},
		{"Q1 e c b BD139", "part Q1 BD139 pins=e,c,b", "c b e", ""},
	} {
		text := called + f.card + "\n"
		if f.duty != "" {
			text += "*: " + f.duty + "\n"
		}
		c, _, faults := Parse("t.cir", []byte(text), nil, regulators{})
		if len(faults) > 0 {
			t.Fatal(f.card, faults)
		}
		id, _ := c.Find(strings.Fields(f.card)[0])
		var names, remarks []string
		for _, n := range c.Elements[id].Nodes {
			names = append(names, c.Nodes[n].Name)
		}
		for _, r := range c.Remarks {
			if r.Element == c.Elements[id].Name {
				remarks = append(remarks, r.Text)
			}
		}
		if _, ok := c.Elements[id].Device.(Transistor); !ok || strings.Join(names, " ") != f.want {
			t.Errorf("%s / %s: a %T at %v", f.card, f.duty, c.Elements[id].Device, names)
		}
		if told := strings.Join(remarks, "\n"); strings.Contains(told, transistorPinsTaken) != (f.remark != "") {
			t.Errorf("%s / %s: %q", f.card, f.duty, told)
		}
	}
	c, _, faults := Parse("t.cir", []byte(called+".subckt BD139 1 2 3\nQ1 1 2 3 M\n.model M NPN(BF=63)\n.ends\nXQ1 c b e BD139\n"), nil, regulators{})
	if len(faults) > 0 {
		t.Fatal(faults)
	}
	if id, ok := c.Find("XQ1.Q1"); !ok || c.Elements[id].Device.(Transistor).Model == nil {
		t.Error("the subcircuit of the netlist is not what is solved")
	}
}

// Pins that are none of a transistor's, or too many, are refused where they stand.
func TestTransistorPinsThatDoNotFit(t *testing.T) {
	for duty, want := range map[string]string{
		"part Q1 BD139 pins=in,gnd,out": "its pins do not name collector, base and emitter",
		"part Q1 BD139 pins=c,b":        "2 pins for Q1",
		"part Q1 BD139 pins=c,b,x":      `pin "x" is unknown`,
	} {
		_, _, faults := Parse("t.cir", []byte("t\nV1 c 0 12\nR1 c b 1k\nRE e 0 1k\nQ1 c b e BD139\n*: "+duty+"\n"), nil, regulators{})
		if len(faults) != 1 || !strings.Contains(faults[0].Error(), want) {
			t.Errorf("%s: %v, want %s", duty, faults, want)
		}
	}
}
