package netlist

import (
	"strings"
	"testing"
)

func namesOf(c *Circuit, ids []ElementID) string {
	var names []string
	for _, id := range ids {
		names = append(names, c.Elements[id].Name)
	}
	return strings.Join(names, " ")
}

func TestFindLoads(t *testing.T) {
	const bridge = `
V1 a b SIN(0 17 50)
D1 a P 1N4007
D2 b P 1N4007
D3 0 a 1N4007
D4 0 b 1N4007
C1 P 0 1000u
`
	for _, l := range []struct{ name, cards, sheet, want string }{
		{"the last of several", bridge + "RB P 0 10k\nR1 P 0 20", "", "R1"},
		{"a name wins over the last", bridge + "RLOAD P 0 20\nRB P 0 10k", "", "RLOAD"},
		{"a statement as well", bridge + "R1 P 0 20\nRB P 0 10k", "load R1 20Ohm..open", "R1"},
		{"a current source by name", bridge + "ILOAD P 0 1\nRB P 0 10k", "", "ILOAD"},
		{"two named loads", bridge + "U1 P 0 OUT 7812\nRL1 P 0 100\nRL2 OUT 0 100", "", "RL1 RL2"},
		{"an RL that is no load: in series", bridge + "RLIM P OUT 10\nC2 OUT 0 100u\nR1 OUT 0 100", "", "R1"},
		{"a divider is no load", bridge + "U1 P 0 OUT 7812\nR1 OUT m 10k\nR2 m 0 10k", "", ""},
		{"no rail, but a name and a ground", "V1 a 0 5\nRL a 0 1k", "", "RL"},
	} {
		c := build(t, l.cards)
		d, faults := interpretDuty(c, statements{sheets: sheets{FromSheet: DutyLines("a.duty", l.sheet)}})
		if len(faults) > 0 {
			t.Errorf("%s: %v", l.name, faults)
		}
		if got := namesOf(c, c.FindLoads(d)); got != l.want {
			t.Errorf("%s: %q, want %q", l.name, got, l.want)
		}
	}
}

// Which diode works in breakdown, where nothing but the breakdown voltage of its model says so.
func TestIsZener(t *testing.T) {
	const supply = `
V1 a b SIN(0 34 50)
DB1 a P DX
DB2 b P DX
DB3 0 a DX
DB4 0 b DX
C1 P 0 1000u
`
	for _, z := range []struct {
		name, cards string
		want        bool
	}{
		{"shunt behind a resistor", supply + "R1 P k 470\nD1 0 k DZ BV=12", true},
		{"the same on a negative rail", "V1 s 0 SIN(0 34 50)\nDB P s DX\nC1 0 P 1m\nR1 P k 470\nD1 k 0 DZ BV=12", true},
		{"upper of a string of two", supply + "R1 P k 470\nD1 m k DZ BV=6\nD2 0 m DZ BV=6", true},
		{"lower of a string of two", supply + "R1 P k 470\nD2 m k DZ BV=6\nD1 0 m DZ BV=6", true},
		{"reference of an emitter follower", supply + "R1 P k 470\nD1 0 k DZ BV=12\nQ1 P k OUT NPN\nRL OUT 0 100", true},
		{"behind a ballast on a direct source", "V1 P 0 24\nR1 P k 470\nD1 0 k DZ BV=12", true},
		{"behind a dropping capacitor", "V1 a 0 SIN(0 325 50)\nC9 a m 330n\nR1 m k 100\nD1 0 k DZ BV=12\nD2 k P DX\nC1 P 0 470u", true},
		{"rectifier with a low breakdown voltage", "V1 s 0 SIN(0 34 50)\nD1 s P DX BV=50\nC1 P 0 1m\nR1 P 0 100", false},
		{"rectifier behind winding resistance", "V1 s 0 SIN(0 60 50)\nR1 s m 10\nD1 m P DX BV=50\nC1 P 0 1m\nRL P 0 100", false},
		{"clamp across a regulated output", supply + "U1 P 0 OUT 7812\nD1 0 OUT DX BV=50\nRL OUT 0 100", false},
		{"indicator, forward", supply + "R1 P k 1k\nD1 k 0 LED BV=5", false},
		{"breakdown out of reach of the source", supply + "R1 P k 470\nD1 0 k DX BV=100", false}, // 2 x 34 V = 68 V
		{"diode of a doubler", "V1 a 0 SIN(0 60 50)\nC1 a j 100u\nD1 0 j DX BV=50\nD2 j OUT DX\nC2 OUT 0 100u\nRL OUT 0 1k", false},
		{"clipper of two back to back", "V1 s 0 SIN(0 40 50)\nR1 s k 470\nD1 k m DZ BV=12\nD2 0 m DZ BV=12", true},
		{"a known rectifier stays one", supply + "R1 P k 470\nD1 0 k 1N4007", false},
		{"a known zener is one anywhere", "V1 s 0 SIN(0 34 50)\nD1 s P 1N4742A\nR1 P 0 1k", true},
		{"by its name", "V1 s 0 SIN(0 34 50)\nD1 s P MyZener5V1\nR1 P 0 1k", true},
		{"by a field", "V1 s 0 SIN(0 34 50)\nD1 s P DX VZ=5.1\nR1 P 0 1k", true},
	} {
		c := build(t, z.cards)
		id, _ := c.Find("D1")
		if got := c.IsZener(id); got != z.want {
			t.Errorf("%s: %v", z.name, got)
		}
		if c.findShunts(); c.IsZener(id) != z.want {
			t.Errorf("%s: changes when settled for all diodes", z.name)
		}
	}
}

func TestZenerFeeds(t *testing.T) {
	c := build(t, `
V1 a b SIN(0 34 50)
D1 a P 1N4007
D2 b P 1N4007
D3 0 a 1N4007
D4 0 b 1N4007
C1 P 0 1000u
R1 P k 470
DZ1 m k 1N4742A
DZ2 0 m 1N4742A
R2 k 0 1k
R3 k base 100
Q1 P base OUT NPN
RL OUT 0 100
R4 P r 1k
U1 r ref 0 TL431
R5 r ref 10k
R6 ref 0 10k`)
	var got []string
	for _, f := range c.ZenerFeeds() {
		got = append(got, c.Elements[f.Resistor].Name+">"+c.Elements[f.Zener].Name)
	}
	if want := "R1>DZ1 R1>DZ2 R4>U1"; strings.Join(got, " ") != want {
		t.Errorf("%v, want %s", got, want)
	}
}

func TestPolarised(t *testing.T) {
	c := build(t, `
V1 a 0 5
C1 a 0 10u
C2 a 0 9.9u
C3 a 0 470u class=X2
C4 a 0 47u type=film
C5 a 0 1u type=Al_electrolytic
C6 a 0 100u
C7 a 0 1u polarised=yes`)
	d, faults := interpretDuty(c, statements{sheets: sheets{FromSheet: DutyLines("a.duty", "rate C6 polarised=no")}})
	var got []ElementID
	for i := range c.Elements {
		if c.Polarised(ElementID(i), d) {
			got = append(got, ElementID(i))
		}
	}
	if len(faults) > 0 || namesOf(c, got) != "C1 C5 C7" {
		t.Errorf("%v %s", faults, namesOf(c, got))
	}
}

func TestSineSources(t *testing.T) {
	c := build(t, `
V1 line 0 SIN(0 230 50)
L1 line 0 10
L2 a 0 0.05
K1 L1 L2 0.99
V2 b 0 SIN(0 17 50)
V3 c 0 SIN(0 325.27 50)
V4 d 0 SIN(0 120 60)
V5 e 0 5`)
	d, faults := interpretDuty(c, statements{sheets: sheets{FromSheet: DutyLines("a.duty", "line V3 230V -10%..+10%\nwinding V2 as-drawn\nline 230V -10%..+10%")}})
	if len(faults) > 0 {
		t.Fatal(faults)
	}
	want := []struct {
		stands Standing
		rms    bool
	}{{DrivesTransformer, true}, {DeclaredWinding, false}, {DeclaredLine, false}, {Undeclared, true}}
	got := c.SineSources(d)
	if len(got) != len(want) {
		t.Fatalf("%+v", got)
	}
	for i, s := range got {
		if s.Stands != want[i].stands || s.LooksRMS != want[i].rms {
			t.Errorf("%s: %+v, want %+v", c.Elements[s.Element].Name, s, want[i])
		}
	}
}

func TestGraph(t *testing.T) {
	c := build(t, `
V1 a 0 5
R1 a b 1k
R2 b 0 1k
R3 a b 2k
C1 b c 1u
R4 c 0 1k
V2 x 0 3
R5 x y 1k
D1 y 0 1N4007`)
	a, _ := c.FindNode("A")
	b, _ := c.FindNode("b")
	if got := namesOf(c, c.Between(a, b)); got != "R1 R3" {
		t.Errorf("between a and b: %s", got)
	}
	if got := namesOf(c, c.Touching(b)); got != "R1 R2 R3 C1" {
		t.Errorf("touching b: %s", got)
	}
	var islands []string
	for _, i := range c.Islands() {
		islands = append(islands, namesOf(c, i.Elements))
	}
	if got := strings.Join(islands, " | "); got != "V1 R1 R2 R3 C1 R4 | V2 R5 D1" {
		t.Errorf("islands: %s", got)
	}
	var paths []string
	for _, p := range c.Paths(a, Ground, func(id ElementID) bool { _, ok := c.Elements[id].Device.(Resistor); return ok }) {
		paths = append(paths, namesOf(c, p.Elements))
	}
	if got := strings.Join(paths, " | "); got != "R1 R2 | R3 R2" {
		t.Errorf("paths: %s", got)
	}
	cNode, _ := c.FindNode("c")
	if got := c.Reach([]NodeID{cNode}, func(ElementID) bool { return true }); len(got) != 4 || got[0] != Ground {
		t.Errorf("reach: %v", got)
	}
}
