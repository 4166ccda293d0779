package netlist

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// sharedDuty reads a shared sheet, lines in the netlist and the netlist's own sheet over the same circuit.
func sharedDuty(t *testing.T, shared, inline, own string) (*Circuit, *Duty) {
	t.Helper()
	c := build(t, dutyCircuit)
	d, faults := interpretDuty(c, statements{sheets: sheets{DutyLines("railproof.duty", shared), DutyLines("a.cir", inline), DutyLines("a.duty", own)}})
	for _, f := range faults {
		t.Errorf("%v", f)
	}
	return c, d
}

// Statement by statement, the netlist's own word goes before the shared sheet's, and the sheet's before the netlist's.
func TestOwnStatementsGoBeforeShared(t *testing.T) {
	shared := "ambient 0C..40C\npolicy common\nlife 40000h\nrate C1 UR=25V IR=1A\nrate D* VRRM=400V"
	c, d := sharedDuty(t, shared, "ambient 0C..50C\nrate D3 VRRM=600V", "rate C1 UR=35V\nambient 0C..60C")
	if d.Ambient.High != 60 || d.Policy != "common" || d.Life.Number != 40000 {
		t.Errorf("ambient %+v policy %q life %v", d.Ambient, d.Policy, d.Life)
	}
	for _, want := range []struct {
		element string
		symbol  Symbol
		value   float64
		shared  bool
	}{{"C1", "UR", 35, false}, {"C1", "IR", 1, true}, {"D1", "VRRM", 400, true}, {"D3", "VRRM", 600, false}} {
		if r := ratingOf(c, d, want.element, want.symbol); r == nil || r.Value.High != want.value || r.Shared != want.shared {
			t.Errorf("%s %s: %+v", want.element, want.symbol, r)
		}
	}
	told := remarksOf(d)
	if !strings.Contains(told, "ambient: the netlist says 0C..50C, the shared sheet says 0C..40C (railproof.duty:1:1); the netlist counts") ||
		!strings.Contains(told, "rate C1 UR: the sheet says 35V, the shared sheet says 25V") || strings.Contains(told, "VRRM") {
		t.Error(told)
	}
}

// What a netlist does not have is no fault and no remark; it is kept as idle, with the reason.
func TestSharedStatementsForOtherNetlists(t *testing.T) {
	shared := `line V9 120V 60Hz
winding V9 as-drawn
load ILOAD9 0A..1A
part U9 7812 pins=in,gnd,out
part Z*,U9 7812
rate C99 UR=25V
rate D77..D79 VRRM=100V
cooling U9 6K/W
rail elsewhere 11V..13V
concession rail-ripple node:elsewhere up to 20mV until 2027-03-31 "accepted"
concession diode-reverse-voltage D77 up to 460V until 2027-03-31 "accepted"
rate D3..D77 VRRM=200V
rate C9,C1 UR=50V`
	c, d := sharedDuty(t, shared, "", "")
	if told := remarksOf(d); told != "" {
		t.Errorf("remarks: %s", told)
	}
	if len(d.Idle) != 11 || d.Idle[0].Why == "" || d.Idle[0].At.String() != "railproof.duty:1:1" {
		t.Errorf("%d idle: %+v", len(d.Idle), d.Idle)
	}
	if r := ratingOf(c, d, "D4", "VRRM"); r == nil || r.Value.High != 200 {
		t.Errorf("a range counts for those of it that are there: %+v", r)
	}
	if r := ratingOf(c, d, "C1", "UR"); r == nil || r.Value.High != 50 {
		t.Errorf("a list counts for those of it that are there: %+v", r)
	}
}

// A mistake in a shared sheet is one for every netlist, whether or not the part is there.
func TestSharedSheetMistakes(t *testing.T) {
	for text, want := range map[string]string{
		"ambeint 0C..40C":              "railproof.duty:1:1:",
		"rate C99 UR=25A":              "railproof.duty:1:15:",
		"rate C99 URR=25V":             "railproof.duty:1:10:",
		"rate C99 IR=25V":              "railproof.duty:1:15:",
		"load ILOAD9 0W..1W":           "railproof.duty:1:14:",
		"load ILOAD9 0A..1":            "railproof.duty:1:18:",
		"line V9 120A":                 "railproof.duty:1:12:",
		"winding V9 12V 1.5A":          "railproof.duty:1:1:",
		"cooling U9 6K":                "railproof.duty:1:13:",
		"rail elsewhere 11V":           "railproof.duty:1:16:",
		"part U9 7812 pins=in,gnd,uot": "railproof.duty:1:19:",
		"rate D4..D1 VRRM=4V":          "railproof.duty:1:6:",
		`concession x D77 up to 4V until 2027-13-31 "a"`: "railproof.duty:1:33:",
	} {
		_, faults := interpretDuty(build(t, dutyCircuit), statements{sheets: sheets{FromSharedSheet: DutyLines("railproof.duty", text)}})
		if len(faults) != 1 || !strings.HasPrefix(faults[0].Error(), want) {
			t.Errorf("%s: %v, want one at %s", text, faults, want)
		}
	}
}

// What names an element of the netlist that it cannot be meant for is passed over and told.
func TestSharedStatementThatDoesNotFit(t *testing.T) {
	_, d := sharedDuty(t, "line V2 230V\nrate C1 VRRM=400V\nload C1 0A..1A\ncooling C1 6K/W", "", "")
	if told := remarksOf(d); strings.Count(told, "the shared sheet does not fit this netlist") != 4 || len(d.Idle) != 4 {
		t.Errorf("%d idle; %s", len(d.Idle), told)
	}
}

// A source is the line or a winding: the netlist's word on it leaves that of the shared sheet aside.
func TestSharedLineGivesWay(t *testing.T) {
	for _, l := range []struct {
		shared, own     string
		lines, windings int
	}{
		{"line V1 230V", "winding V1 as-drawn", 0, 1},
		{"winding V1 as-drawn", "line V1 230V", 1, 0},
		{"line 230V -10%..+10%", "line V1 230V -5%..+5%", 1, 0},
		{"line V1 230V -10%..+10%", "line 230V -15%..+15%", 1, 0},
		{"winding V2 as-drawn", "line 230V -15%..+15%", 1, 1},
	} {
		_, d := sharedDuty(t, l.shared, "", l.own)
		if len(d.Lines) != l.lines || len(d.Windings) != l.windings || len(d.Lines) > 0 && d.Lines[0].At.File != "a.duty" {
			t.Errorf("%s / %s: lines %+v windings %+v", l.shared, l.own, d.Lines, d.Windings)
		}
		if gone := l.lines+l.windings == 1; gone != strings.Contains(remarksOf(d), "gives way") {
			t.Errorf("%s / %s: %s", l.shared, l.own, remarksOf(d))
		}
	}
}

// The type and pins that the netlist states leave those of the shared sheet without a trace.
func TestOwnPartGoesBeforeShared(t *testing.T) {
	c, d := sharedDuty(t, "part U2 7812 pins=out,gnd,in", "", "part U2 7812 pins=in,gnd,out")
	id, _ := c.Find("U2")
	if first := c.Nodes[c.Elements[id].Nodes[0]].Name; first != "VRAW" || len(d.Parts) != 1 {
		t.Errorf("input at %s, parts %+v", first, d.Parts)
	}
}

func TestStatedIsWhatCounts(t *testing.T) {
	_, d := sharedDuty(t, "ambient 0C..40C\npolicy common", "life 20000h", "ambient 0C..45C\nrate C1 UR=25V")
	var lines []string
	for _, s := range d.Stated {
		lines = append(lines, s.Text+" | "+s.Origin.String()+" | "+s.At.String())
	}
	want := "policy common | the shared sheet | railproof.duty:2:1\nlife 20000h | the netlist | a.cir:1:1\n" +
		"ambient 0C..45C | the sheet | a.duty:1:1\nrate C1 UR=25V | the sheet | a.duty:2:1"
	if got := strings.Join(lines, "\n"); got != want {
		t.Errorf("got\n%s\nwant\n%s", got, want)
	}
}

// The walk up finds the nearest shared sheet, ends with the folder that holds .git, and does not take a netlist's
// own sheet.
func TestFindSharedSheet(t *testing.T) {
	top := t.TempDir()
	write := func(name string) string {
		path := filepath.Join(top, filepath.FromSlash(name))
		if err := os.MkdirAll(filepath.Dir(path), 0o755); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(path, []byte("ambient 0C..40C\n"), 0o644); err != nil {
			t.Fatal(err)
		}
		return path
	}
	outside := write("railproof.duty")
	write("repo/.git/HEAD")
	if got := FindSharedSheet(filepath.Join(top, "repo/boards/deep/a.cir"), ""); got != "" {
		t.Errorf("beyond .git: %s", got)
	}
	shared := write("repo/railproof.duty")
	if got := FindSharedSheet(filepath.Join(top, "repo/boards/deep/a.cir"), ""); got != shared {
		t.Errorf("%s, want %s", got, shared)
	}
	nearer := write("repo/boards/railproof.duty")
	if got := FindSharedSheet(filepath.Join(top, "repo/boards/deep/a.cir"), ""); got != nearer {
		t.Errorf("%s, want %s", got, nearer)
	}
	if got := FindSharedSheet(filepath.Join(top, "repo/boards/railproof.cir"), nearer); got != shared {
		t.Errorf("own sheet: %s, want %s", got, shared)
	}
	if got := FindSharedSheet(filepath.Join(top, "other/a.cir"), ""); got != outside {
		t.Errorf("%s, want %s", got, outside)
	}
	t.Chdir(filepath.Join(top, "repo", "boards"))
	if got := FindSharedSheet("a.cir", nearer); got != filepath.Join("..", "railproof.duty") {
		t.Errorf("relative: %s", got)
	}
}
