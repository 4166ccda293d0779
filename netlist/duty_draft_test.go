package netlist

import (
	"strings"
	"testing"
)

func draftedCircuit(t *testing.T) (*Circuit, []DraftLine) {
	c := build(t, `
V1 a b SIN(0 17 50)
D1 a P DX
D2 b P DX
D3 0 a DX
D4 0 b DX
C1 P 0 1000u
U1 P 0 OUT 7812
RL OUT 0 100
ILOAD OUT 0 0.1`)
	var needs []DraftLine
	for _, n := range []struct {
		element string
		symbol  Symbol
		hint    string
	}{
		{"C1", "UR", "at least 21 V, next step 25 V"}, {"D1", "VRRM", "at least 20 V, next step 50 V"}, {"D2", "VRRM", "at least 20 V, next step 50 V"},
		{"D3", "VRRM", "at least 20 V, next step 50 V"}, {"D4", "VRRM", "at least 20 V, next step 50 V"}, {"C1", "tolerance", ""}, {"C1", "category", ""},
	} {
		id, _ := c.Find(n.element)
		needs = append(needs, DraftLine{id, n.symbol, n.hint, "some-check"})
	}
	return c, needs
}

func TestDraft(t *testing.T) {
	c, needs := draftedCircuit(t)
	text := string(Draft(c, nil, needs))
	for _, want := range []string{
		"# winding V1 ?V ?A regulation=?% ",
		"# ambient ?C..?C ",
		"# load RL ?Ohm..open ",
		"# load ILOAD 0A..?A ",
		"# rail OUT ?V..?V ripple=?mV ",
		"# rate D1..D4 VRRM=?V ", "# repetitive peak reverse voltage; at least 20 V, next step 50 V (some-check)",
		"# rate C1 UR=?V ",
		"# rate C1 tolerance=-?%..+?% ",
		"# rate C1 category=?C ",
	} {
		if !strings.Contains(text, want) {
			t.Errorf("no %q in\n%s", want, text)
		}
	}
	if strings.Count(text, "VRRM=") != 1 {
		t.Errorf("the diodes do not share a line:\n%s", text)
	}
	// As written the sheet states nothing and is no error.
	d, faults := interpretDuty(c, statements{sheets: sheets{FromSheet: DutyLines("a.duty", text)}})
	if len(faults) > 0 || len(d.Ratings)+len(d.Lines)+len(d.Windings)+len(d.Loads) > 0 || d.Policy != "" {
		t.Errorf("%v %+v", faults, d)
	}
}

// Filled in, every line is read, and a second draft asks for none of them again.
func TestDraftFilledIn(t *testing.T) {
	c, needs := draftedCircuit(t)
	var filled []string
	for _, line := range strings.Split(string(Draft(c, nil, needs)), "\n") {
		statement, isStatement := strings.CutPrefix(line, "# ")
		word, _, _ := strings.Cut(statement, " ")
		switch {
		case !isStatement || !strings.Contains(statement, "?") && word != "policy" && word != "profile":
			continue
		case strings.HasPrefix(statement, "Duty sheet"), strings.HasPrefix(statement, "line V1"):
			continue
		}
		statement, _, _ = strings.Cut(statement, " # ")
		statement = strings.Replace(statement, "?V..?V", "11V..13V", 1)
		statement = strings.Replace(statement, "?C..?C", "0C..45C", 1)
		filled = append(filled, strings.ReplaceAll(statement, "?", "50"))
	}
	sheet := strings.Join(filled, "\n")
	d, faults := interpretDuty(c, statements{sheets: sheets{FromSheet: DutyLines("a.duty", sheet)}})
	if len(faults) > 0 {
		t.Fatalf("%v in\n%s", faults, sheet)
	}
	if len(d.Lines) != 1 || len(d.Windings) != 1 || d.Ambient == nil || len(d.Loads) != 2 || len(d.Rails) != 1 || len(d.Ratings) != 7 || d.Life == nil || d.Profile == nil || d.Policy != "common" {
		t.Errorf("%+v from\n%s", d, sheet)
	}
	again := string(Draft(c, d, nil))
	if strings.Contains(again, "?") && strings.Count(again, "?") > 1 { // the heading explains the sign
		t.Errorf("asked again:\n%s", again)
	}
	// A ? left in place is an error with the unit that is expected.
	_, faults = interpretDuty(c, statements{sheets: sheets{FromSheet: DutyLines("a.duty", "rate C1 UR=?V")}})
	if len(faults) != 1 || !strings.Contains(faults[0].Error(), `a.duty:1:12: "?V": no number; expected a voltage in V`) {
		t.Errorf("%v", faults)
	}
}
