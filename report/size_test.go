package report

import (
	"bytes"
	"math"
	"strings"
	"testing"
	"unicode/utf8"

	"railproof/checks"
	"railproof/checks/parts"
	"railproof/checks/study"
	"railproof/netlist/quantity"
)

// sized is a violation of a diode by 41 V, with what is done about it.
func sized(element string, remedies []checks.Remedy, short, unproven string) (checks.Finding, checks.Sizing) {
	condition := study.Condition{Name: "high line, light load", Line: "high", Load: "light", Start: "steady"}
	f := checks.Finding{
		Check: "diode-reverse-voltage", Headline: true, Element: element, Verdict: checks.Violated, Severity: checks.Major,
		Stress: &study.Stress{Element: element, Quantity: study.PeakReverseVoltage, Value: 41, Unit: quantity.Volt, Phase: math.NaN(), Condition: condition},
		Rating: &checks.Rating{Symbol: "VRRM", Value: 50, Unit: quantity.Volt}, Limit: &checks.Limit{Value: 40, Factor: 0.8, Rule: "rating x 0.8"},
	}
	return f, checks.Sizing{Finding: f, Remedies: remedies, Short: short, Unproven: unproven}
}

// step is the change of a diode to the next VRRM.
func step(element string, after *study.Stress) []checks.Remedy {
	return []checks.Remedy{{
		Changes: []checks.Change{{Element: element, Symbol: "VRRM", From: 50, To: 100, Unit: quantity.Volt, Series: parts.VRRMSteps}},
		After:   after, Limit: &checks.Limit{Value: 80, Factor: 0.8, Rule: "rating x 0.8"},
	}}
}

func sizeReport(findings []checks.Finding, list []checks.Sizing) *SizeReport {
	return NewSizeReport(&checks.Result{File: "a.cir", Title: "supply", Findings: findings}, list, "test", day)
}

func TestSizeExit(t *testing.T) {
	helped, withStep := sized("D1", nil, "", "")
	withStep.Remedies = step("D1", helped.Stress)
	_, none := sized("D1", nil, "no value helps: turn it round", "")
	_, open := sized("D1", nil, "no resistance helps", "R1: no solution")
	blind := helped
	blind.Element, blind.Verdict = "D2", checks.Unproven
	for _, c := range []struct {
		name     string
		findings []checks.Finding
		list     []checks.Sizing
		want     Exit
		word     string
	}{
		{"nothing", nil, nil, ExitPassed, "NOTHING TO SIZE"},
		{"a remedy", []checks.Finding{helped}, []checks.Sizing{withStep}, ExitPassed, "SIZED"},
		{"none", []checks.Finding{helped}, []checks.Sizing{none}, ExitViolated, "NOT SIZED"},
		{"unproven remedy", []checks.Finding{helped}, []checks.Sizing{open}, ExitUnproven, "NOT PROVEN"},
		{"headline unproven", []checks.Finding{helped, blind}, []checks.Sizing{withStep}, ExitUnproven, "NOT PROVEN"},
		{"none before unproven", []checks.Finding{helped, blind}, []checks.Sizing{none}, ExitViolated, "NOT SIZED"},
	} {
		r := sizeReport(c.findings, c.list)
		if word, _ := r.SizeOutcome(); r.Exit != c.want || word != c.word {
			t.Errorf("%s: exit %d %s, want %d %s", c.name, r.Exit, word, c.want, c.word)
		}
	}
}

// Four diodes with one remedy are one entry and one line of what to change; the document follows its schema.
func TestSizeReport(t *testing.T) {
	var findings []checks.Finding
	var list []checks.Sizing
	for _, name := range []string{"D1", "D2", "D3", "D4"} {
		f, s := sized(name, nil, "", "")
		s.Remedies = step(name, f.Stress)
		if name == "D4" {
			other, _ := sized("C1", nil, "", "")
			other.Check = "capacitor-voltage"
			s.Remedies[0].Worse, s.Remedies[0].Mends, s.Remedies[0].Solved = []checks.Finding{other}, []checks.Finding{other}, true
		}
		findings, list = append(findings, f), append(list, s)
	}
	r := sizeReport(findings, list)
	var b bytes.Buffer
	if err := r.WriteJSON(&b); err != nil {
		t.Fatal(err)
	}
	if err := validate(schemaOf(t, "size-1"), b.Bytes()); err != nil {
		t.Error(err)
	}
	b.Reset()
	if err := r.WriteText(&b, false); err != nil {
		t.Fatal(err)
	}
	text := b.String()
	for _, want := range []string{
		"violated: 4   with a remedy: 4   without: 0",
		"MAJOR     D1..D3  peak reverse voltage\n          found 41.0 V   allows 40.0 V   over by 1 V\n",
		"size  D1..D3 VRRM 50 V -> 100 V (standard step)\n          then  found 41.0 V, allows 80.0 V, spare 39 V (judged again)\n",
		"MAJOR     D4  peak", "but   C1 capacitor voltage: 41.0 V of 40.0 V, major\n", "mends C1 capacitor voltage\n",
		"SIZED  every violation has a remedy",
	} {
		if !strings.Contains(text, want) {
			t.Errorf("missing %q in\n%s", want, text)
		}
	}
	for _, line := range strings.Split(text, "\n") {
		if utf8.RuneCountInString(line) > width {
			t.Errorf("%d columns: %s", utf8.RuneCountInString(line), line)
		}
	}
}

func TestChangeWords(t *testing.T) {
	for _, c := range []struct {
		change checks.Change
		want   string
	}{
		{checks.Change{Symbol: "C", From: 1e-3, To: 4.7e-3, Unit: quantity.Farad, Series: parts.E6}, "X 1000 uF -> 4700 uF (E6)"},
		{checks.Change{Symbol: "P70", From: 0.6, To: 1, Unit: quantity.Watt, Series: parts.ResistorPower}, "X P70 600 mW -> 1 W (standard step)"},
		{checks.Change{Symbol: "P70", From: 0.6, To: 7, Unit: quantity.Watt, Series: parts.ResistorPower}, "X P70 600 mW -> 7 W (standard step, from memory)"},
		{checks.Change{Symbol: "IZM", From: 0.076, To: 0.12, Unit: quantity.Ampere}, "X IZM 76 mA -> at least 120 mA"},
		{checks.Change{Symbol: "RthJA", From: math.NaN(), To: 63, Unit: quantity.KelvinPerWatt, AtMost: true}, "X RthJA at most 63 K/W"},
		{checks.Change{Symbol: checks.SymbolBleeder, From: math.Inf(1), To: 9100, Unit: quantity.Ohm, Series: parts.E24, AtMost: true}, "across X a bleeder of 9.1 kOhm (E24)"},
	} {
		if got := changeWords(c.change, "X"); got != c.want {
			t.Errorf("%q, want %q", got, c.want)
		}
	}
}
