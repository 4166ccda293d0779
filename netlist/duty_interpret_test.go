package netlist

import (
	"math"
	"strings"
	"testing"

	"railproof/netlist/quantity"
)

// A 12 V supply: bridge, reservoir, regulator; a zener and a transistor beside it.
const dutyCircuit = `
V1 ac1 ac2 SIN(0 325.27 50)
V2 s 0 SIN(0 17 50)
D1 ac1 VRAW 1N4007
D2 ac2 VRAW 1N4007
D3 0 ac1 1N4007
D4 0 ac2 1N4007
D5 0 zk 1N4742A
C1 VRAW 0 2200u
C2 OUT 0 100n
U1 VRAW 0 OUT 7812
U2 VRAW 0 aux MYREG
R1 VRAW zk 1k
RFUSE s VRAW 0.1
RL OUT 0 20
ILOAD OUT 0 0.5
Q1 VRAW zk e NPN
L1 e aux 10m`

func interpretText(t *testing.T, inline, sheet string) (*Circuit, *Duty, []Diagnostic) {
	t.Helper()
	c := build(t, dutyCircuit)
	var lines []DutyLine
	if inline != "" {
		lines = DutyLines("a.cir", inline)
	}
	d, faults := interpretDuty(c, statements{sheets: sheets{FromNetlist: lines, FromSheet: DutyLines("a.duty", sheet)}})
	return c, d, faults
}

func readDuty(t *testing.T, sheet string) (*Circuit, *Duty) {
	t.Helper()
	c, d, faults := interpretText(t, "", sheet)
	for _, f := range faults {
		t.Errorf("%v", f)
	}
	return c, d
}

func ratingOf(c *Circuit, d *Duty, name string, symbol Symbol) *Rating {
	for i := range d.Ratings {
		if r := &d.Ratings[i]; c.Elements[r.Element].Name == name && r.Symbol == symbol {
			return r
		}
	}
	return nil
}

func near(a, b float64) bool { return math.Abs(a-b) <= 1e-9*max(1, math.Abs(b)) }

func TestLineStatement(t *testing.T) {
	_, d := readDuty(t, "line 230V -10%..+6% 50Hz # label only")
	l := d.Lines[0]
	if l.Source != -1 || l.Nominal != 230 || !near(l.Range.Low, 207) || !near(l.Range.High, 243.8) || l.Frequency != 50 {
		t.Errorf("%+v", l)
	}
	c, d := readDuty(t, "line V1 230V 207V..253V 50Hz")
	if l := d.Lines[0]; c.Elements[l.Source].Name != "V1" || l.Range.Low != 207 || l.Range.High != 253 {
		t.Errorf("%+v", l)
	}
	_, d = readDuty(t, "line 230V")
	if l := d.Lines[0]; !near(l.Range.Low, 207) || !near(l.Range.High, 253) || len(d.Remarks) != 1 {
		t.Errorf("default range: %+v, %v", l, d.Remarks)
	}
}

func TestOtherStatements(t *testing.T) {
	c, d := readDuty(t, `
winding V2 12V 1.5A regulation=12%
ambient 0C..45C
load ILOAD 0A..0.6A
load RL 20Ohm..open
part U1 7812 pins=in,gnd,out
cooling U1 6K/W
rail OUT 11.4V..12.6V ripple=10mV
policy common
life 40000h
profile accessible-terminals
concession diode-reverse-voltage D3 up to 460V until 2027-03-31 "avalanche-rated part, review 12"
concession rail-ripple node:OUT up to 20mV until 2027-03-31 "accepted"`)
	if w := d.Windings[0]; w.Voltage != 12 || w.Current != 1.5 || !near(w.Regulation, 0.12) || w.AsDrawn {
		t.Errorf("winding %+v", w)
	}
	if a := d.Ambient; a.Low != 0 || a.High != 45 || a.At.Line != 3 {
		t.Errorf("ambient %+v", a)
	}
	if l := d.Loads[0]; l.Range != (quantity.Interval{Low: 0, High: 0.6, Unit: quantity.Ampere}) {
		t.Errorf("load %+v", l)
	}
	if l := d.Loads[1]; l.Range.Low != 20 || !math.IsInf(l.Range.High, 1) {
		t.Errorf("load %+v", l)
	}
	if p := d.Parts[0]; p.Type != "7812" || strings.Join(p.Pins, " ") != "in gnd out" || c.Elements[p.Element].Name != "U1" {
		t.Errorf("part %+v", p)
	}
	if k := d.Coolings[0]; k.KPerW != 6 {
		t.Errorf("cooling %+v", k)
	}
	if r := d.Rails[0]; c.Nodes[r.Node].Name != "OUT" || r.Range.High != 12.6 || *r.Ripple != 0.01 {
		t.Errorf("rail %+v", r)
	}
	if d.Policy != "common" || d.PolicyAt.Line != 9 || d.Life.Number != 40000 || d.Profile.Voltage != 60 || d.Profile.Within != 2 {
		t.Errorf("policy %q life %v profile %+v", d.Policy, d.Life, d.Profile)
	}
	if k := d.Concessions[0]; k.Target != "D3" || k.Ceiling != (quantity.Value{Number: 460, Unit: quantity.Volt}) || k.Until != "2027-03-31" || k.Reason != "avalanche-rated part, review 12" {
		t.Errorf("concession %+v", k)
	}
	if k := d.Concessions[1]; k.Target != "node:OUT" || k.Element != -1 {
		t.Errorf("concession %+v", k)
	}
	_, d = readDuty(t, "winding V2 as-drawn")
	if w := d.Windings[0]; !w.AsDrawn {
		t.Errorf("winding %+v", w)
	}
	_, d = readDuty(t, "winding V2 12V 18VA regulation=0.12\nrail OUT 12V -5%..+5%\nprofile 42.4V 5s")
	if w, r := d.Windings[0], d.Rails[0].Range; w.Current != 1.5 || !near(r.Low, 11.4) || !near(r.High, 12.6) || d.Profile.Voltage != 42.4 {
		t.Errorf("winding %+v, rail %+v, profile %+v", w, r, d.Profile)
	}
}

func TestRateStatement(t *testing.T) {
	c, d := readDuty(t, `
rate C1 UR=25V IR=1.2A tolerance=-20%..+20% ESR=90mOhm category=105C endurance=2000h polarised=no
rate D1..D4 VRRM=400V IFAV=1A IFSM=30A
rate R1 P70=2W Umax=350V tolerance=5%
rate RFUSE IN=500mA I2t=1.2A2s family=T-250V
rate U2 VOUT=12V VDO=1.2V IQ=5mA IO=1A VI=35V`)
	for _, w := range []struct {
		element   string
		symbol    Symbol
		low, high float64
		unit      quantity.Unit
	}{
		{"C1", "UR", 25, 25, quantity.Volt},
		{"C1", "IR", 1.2, 1.2, quantity.Ampere},
		{"C1", "tolerance", -0.2, 0.2, quantity.One},
		{"C1", "ESR", 0.09, 0.09, quantity.Ohm},
		{"C1", "category", 105, 105, quantity.Celsius},
		{"C1", "endurance", 2000, 2000, quantity.Hour},
		{"D1", "VRRM", 400, 400, quantity.Volt},
		{"D4", "IFSM", 30, 30, quantity.Ampere},
		{"R1", "P70", 2, 2, quantity.Watt},
		{"R1", "tolerance", -0.05, 0.05, quantity.One}, // one figure counts both ways
		{"RFUSE", "IN", 0.5, 0.5, quantity.Ampere},
		{"RFUSE", "I2t", 1.2, 1.2, quantity.AmpereSquaredSecond},
		{"U2", "VOUT", 12, 12, quantity.Volt},
		{"U2", "VDO", 1.2, 1.2, quantity.Volt},
	} {
		r := ratingOf(c, d, w.element, w.symbol)
		if r == nil || r.Value != (quantity.Interval{Low: w.low, High: w.high, Unit: w.unit}) {
			t.Errorf("%s %s = %+v, want %v..%v", w.element, w.symbol, r, w.low, w.high)
		}
	}
	if r := ratingOf(c, d, "RFUSE", "family"); r == nil || r.Text != "T-250V" {
		t.Errorf("family %+v", r)
	}
	if r := ratingOf(c, d, "C1", "polarised"); r == nil || r.Text != "no" {
		t.Errorf("polarised %+v", r)
	}
	if r := ratingOf(c, d, "C1", "UR"); r.Written != "rate C1 UR=25V" || r.At != (Position{File: "a.duty", Line: 2, Column: 1}) {
		t.Errorf("written %q at %v", r.Written, r.At)
	}
	if id, _ := c.Find("U2"); c.KindOf(id) != KindRegulator {
		t.Errorf("a stated output voltage does not make U2 a regulator")
	}
}

// Patterns leave alone what their symbol means nothing for.
func TestPatterns(t *testing.T) {
	for _, p := range []struct{ pattern, want string }{
		{"D*", "D1 D2 D3 D4"}, // D5 is a zener
		{"d?", "D1 D2 D3 D4"},
		{"D1..D3", "D1 D2 D3"},
		{"D2..4", "D2 D3 D4"},
		{`"D1,D3"`, "D1 D3"},
		{"D1,D3..D4", "D1 D3 D4"},
		{"*", "D1 D2 D3 D4"},
	} {
		c, d := readDuty(t, "rate "+p.pattern+" VRRM=400V")
		var names []string
		for _, r := range d.Ratings {
			names = append(names, c.Elements[r.Element].Name)
		}
		if got := strings.Join(names, " "); got != p.want {
			t.Errorf("%s: %s, want %s", p.pattern, got, p.want)
		}
	}
	c, d := readDuty(t, "rate D* PD=1W")
	if len(d.Ratings) != 1 || c.Elements[d.Ratings[0].Element].Name != "D5" {
		t.Errorf("PD on %+v", d.Ratings)
	}
	_, d = readDuty(t, "rate D1..D4 VZ=12V")
	if len(d.Ratings) != 0 || len(d.Remarks) != 1 || !strings.Contains(d.Remarks[0].Text, "unused: VZ has no meaning") {
		t.Errorf("%+v %+v", d.Ratings, d.Remarks)
	}
}

// A diode stated by name with a zener's symbol is a zener, and the other way round.
func TestDeclaredKind(t *testing.T) {
	c, d := readDuty(t, "rate D1 VZ=12V\nrate D5 VRRM=50V")
	d1, _ := c.Find("D1")
	d5, _ := c.Find("D5")
	if !c.IsZener(d1) || c.IsZener(d5) || len(d.Ratings) != 2 {
		t.Errorf("D1 %v, D5 %v, %+v", c.IsZener(d1), c.IsZener(d5), d.Ratings)
	}
	c, _ = readDuty(t, "part D2 1N4742A")
	if d2, _ := c.Find("D2"); !c.IsZener(d2) {
		t.Error("a stated zener type does not make D2 a zener")
	}
}

func TestWhoWins(t *testing.T) {
	c, d, faults := interpretText(t, "rate C1 UR=35V\nambient 0C..40C\npolicy rating", "rate C1 UR=25V\nambient 0C..40C")
	if len(faults) > 0 || ratingOf(c, d, "C1", "UR").Value.Low != 25 || len(d.Ratings) != 1 || d.Policy != "rating" {
		t.Fatalf("%v %+v", faults, d)
	}
	var all []string
	for _, r := range d.Remarks {
		all = append(all, r.At.String()+" "+r.Text)
	}
	text := strings.Join(all, "\n")
	for _, want := range []string{
		"a.duty:1:1 rate C1 UR: the sheet says 25V, the netlist says 35V (a.cir:1:1); the sheet counts",
		"a.cir:1:1 unused: `rate C1 UR=35V`",
		"a.cir:2:1 unused: `ambient 0C..40C`",
	} {
		if !strings.Contains(text, want) {
			t.Errorf("no remark %q in\n%s", want, text)
		}
	}
	// Within one sheet: names before patterns, in either order; of equals the later.
	for _, sheet := range []string{"rate D* VRRM=400V\nrate D3 VRRM=600V", "rate D3 VRRM=600V\nrate D* VRRM=400V", "rate D3 VRRM=200V\nrate D3 VRRM=600V"} {
		c, d, _ := interpretText(t, "", sheet)
		if r := ratingOf(c, d, "D3", "VRRM"); r.Value.Low != 600 {
			t.Errorf("%q: D3 VRRM %v", sheet, r.Value)
		}
	}
}

func TestDutyFaults(t *testing.T) {
	for _, f := range []struct{ sheet, want string }{
		{"rate C1 UR=25", `a.duty:1:14: "25": the unit is missing; expected a voltage in V, such as 25V`},
		{"rate C1 UR=25A", `a.duty:1:14: "25A": the unit A means a current in A; expected a voltage in V`},
		{"rate C1 ESR=90MOHM", `a.duty:1:15: "90MOHM": MOHM is not in SI case`},
		{"rate C1 UR=20V..25V", `a.duty:1:12: "20V..25V": UR is a single value, not a range`},
		{"rate C1 UR=-25V", "UR must be more than zero"},
		{"rate C1 tolerance=20", "no tolerance; expected a range about zero, such as -20%..+20%"},
		{"rate C1 polarised=perhaps", "no such polarised; expected one of yes, no"},
		{"rate C1 VRRM=25V", "a.duty:1:9: VRRM has no meaning for C1, a capacitor; expected one of UR"},
		{"rate C1 URR=25V", `a.duty:1:9: no rating symbol "URR"; expected UR`},
		{"rate D1 VRMM=400V", `no rating symbol "VRMM"; expected VRRM`},
		{"rate C1 UR=25V UR=35V", "a.duty:1:16: UR is stated twice"},
		{"rate C11 UR=25V", `a.duty:1:6: no element "C11"; expected C1`},
		{"rate D1..D9 VRRM=50V", `no element "D9"; expected D1`},
		{"rate D4..D1 VRRM=50V", `"D4..D1" is no range of elements`},
		{"rate Z* VZ=5V", `"Z*" matches no element`},
		{"rate C1", "a.duty:1:8: the statement ends too early; expected rate ELEMENT SYMBOL=VALUE"},
		{"rate C1 25V", `a.duty:1:9: "25V" does not fit here`},
		{"rat C1 UR=25V", `a.duty:1:1: no statement begins with "rat"; expected rate`},
		{"rate C1 UR=\"25V", "a.duty:1:12: the quotation mark is not closed"},
		{"line 230", "the unit is missing"},
		{"line 230V 240V..253V", "does not contain the nominal voltage"},
		{"line 230V 5%..10%", "is no range about the nominal voltage"},
		{"line V2 230V", "a.duty:1:9: V2 is drawn with an amplitude of 17 V, which is 12.02 V rms; expected the amplitude 325.3 V for 230V rms"},
		{"line V1 230V -10%..+10% 60Hz", "a.duty:1:25: V1 is drawn at 50 Hz"},
		{"line V9 230V", `no element "V9"; expected V1`},
		{"line C1 230V", "C1 is no sinusoidal voltage source"},
		{"winding V2 12V 1.5A", "the winding's regulation is missing"},
		{"winding V2 12V 1.5A regulation=12V", `a.duty:1:34: "12V": the unit V means a voltage`},
		{"winding V2 12V 1.5A regulatoin=12%", `no setting "regulatoin" here; expected regulation`},
		{"winding V2 12V", "the statement ends too early"},
		{"winding V2 12V 1.5A regulation=500%", "no regulation of a transformer"},
		{"line V1 230V -10%..10%\nwinding V1 as-drawn", "V1 is stated as the line (a.duty:1:1) and as a winding"},
		{"ambient 45C..0C", "the lower end first: 0C..45C"},
		{"ambient 0..45C", "the lower end has no unit"},
		{"ambient 0C..450C", "no air temperature"},
		{"load RL 0A..0.6A", `"0A..0.6A": the unit A means a current in A; expected a resistance in Ohm`},
		{"load ILOAD 20Ohm..open", "expected a current in A"},
		{"load C1 1A", "C1 cannot be a load"},
		{"load RL 0Ohm..10Ohm", "a load of no ohms is a short"},
		{"part U1 7812 pins=in,ground,out", `pin "ground" is unknown`},
		{"part U1 7812 pins=in,out", "2 pins for U1; expected 3"},
		{"cooling U1 6W/K", "the unit W/K means a derating slope"},
		{"cooling C1 6K/W", "cooling has no meaning for C1"},
		{"rail OUTT 11.4V..12.6V", `no node "OUTT"; expected OUT`},
		{"rail OUT 12V", "a rail of one voltage; expected a range"},
		{"rail OUT 11.4V..12.6V riple=10mV", `no setting "riple" here; expected ripple`},
		{"rail 0 11.4V..12.6V", "the ground is no rail"},
		{"life 5y", `"y" is no unit; expected a time in h`},
		{"rate R* VRRM=70A", "expected a voltage in V"}, // even where it selects nothing that has one
		{"life 0h", "must be more than zero"},
		{"profile acessible-terminals", "expected accessible-terminals"},
		{`concession diode-reverse-voltage D3 up to 460 until 2027-03-31 "x"`, "no value with a unit"},
		{`concession diode-reverse-voltage D3 up to 460V until 2027-02-30 "x"`, "is no date"},
		{`concession diode-reverse-voltage D3 up to 460V until 2027-03-31 " "`, "gives no reason"},
		{`concession diode-reverse-voltage D3 until 2027-03-31 "x"`, `"until" does not fit here`},
		{"rate C1 UR=25V \x00", "a character that is no text"},
		{"rate C1 " + strings.Repeat("x", 5000), "the statement has 5008 bytes; expected at most 4096"},
	} {
		_, _, faults := interpretText(t, "", f.sheet)
		if len(faults) != 1 || !strings.Contains(faults[0].Error(), f.want) {
			t.Errorf("%s:\n got %v\nwant %s", f.sheet, faults, f.want)
		}
	}
}

func TestDutyRemarks(t *testing.T) {
	for _, f := range []struct{ sheet, want string }{
		{"winding V2 12V 1.5A regulation=12%", "V2 is drawn with a crest of 17 V; its winding statement gives 19.01 V off load"}, // 12 x 1.12 x sqrt 2 = 19.007
		{"line 230V -10%..10% 60Hz", "no source is drawn at that frequency"},
		{"cooling R* 6K/W", "unused: R* selects no semiconductor"},
		{"part D1 1N40O7", "type 1N40O7 names no rectifier"},
	} {
		_, d, faults := interpretText(t, "", f.sheet)
		if len(faults) > 0 || len(d.Remarks) != 1 || !strings.Contains(d.Remarks[0].Text, f.want) {
			t.Errorf("%s: %v %+v", f.sheet, faults, d.Remarks)
		}
	}
}

// pins= says in which order the netlist line lists the nodes, whatever was assumed before.
func TestPins(t *testing.T) {
	for _, name := range []string{"U1 7812", "U2 MYREG"} {
		c, _ := readDuty(t, "part "+name+" pins=gnd,in,out")
		id, _ := c.Find(name[:2])
		e := c.Elements[id]
		if got := c.Nodes[e.Nodes[0]].Name + " " + c.Nodes[e.Nodes[1]].Name; got != "0 VRAW" {
			t.Errorf("%s: input and reference on %s", name, got)
		}
		for pin, n := range e.Nodes {
			found := false
			for _, at := range c.Nodes[n].Terminals {
				found = found || at == Terminal{id, pin}
			}
			if !found {
				t.Errorf("%s: no terminal of pin %d on its node", name, pin)
			}
		}
	}
	c, d := readDuty(t, "rate U2 VOUT=-12V")
	id, _ := c.Find("U2")
	if r := c.Elements[id].Device.(Regulator); r.Polarity != Negative || ratingOf(c, d, "U2", "VOUT").Value.Low != 12 {
		t.Errorf("%+v %+v", r, d.Ratings)
	}
}
