package report

import (
	"bytes"
	"math"
	"strings"
	"testing"

	"railproof/checks"
	"railproof/checks/policy"
	"railproof/checks/study"
	"railproof/netlist/quantity"
)

// Every row of every policy is printed with its rule, and its source and confidence stand below.
func TestPolicyShowsSources(t *testing.T) {
	for _, name := range policy.Names() {
		p, err := policy.Named(name)
		if err != nil {
			t.Fatal(err)
		}
		var b bytes.Buffer
		if err := WritePolicy(&b, p, false); err != nil {
			t.Fatal(err)
		}
		text := strings.Join(strings.Fields(b.String()), " ")
		if !strings.Contains(text, p.Version()) {
			t.Errorf("%s: no version", name)
		}
		for _, row := range p.Rows() {
			for _, want := range []string{row.Source, row.Confidence, row.Rule()} {
				if want == "" || !strings.Contains(text, strings.Join(strings.Fields(want), " ")) {
					t.Errorf("%s %s: %q is not shown", name, row.Quantity, want)
				}
			}
		}
		for _, line := range strings.Split(b.String(), "\n") {
			if columns(line) > width {
				t.Errorf("%s: %d columns: %s", name, columns(line), line)
			}
		}
	}
}

// A stress without a value has no error either: the cell is empty, not 0.
func TestNoErrorBesideAnUnknownValue(t *testing.T) {
	for _, s := range []*study.Stress{
		{Element: "D1", Quantity: study.PeakReverseVoltage, Value: math.NaN(), Unit: quantity.Volt, Phase: math.NaN()},
		{Element: "D1", Quantity: study.PeakReverseVoltage, Value: math.Inf(1), Unit: quantity.Volt, Error: 1, Phase: math.NaN()},
	} {
		if row := csvStress("a.cir", "D1", s); row[3] != "" || row[5] != "" {
			t.Errorf("%q", row)
		}
		var b bytes.Buffer
		table := NewStressTable(&checks.Result{File: "a.cir", Stresses: []study.Stress{*s}}, false)
		if err := table.WriteCSV(&b); err != nil {
			t.Fatal(err)
		}
		if !strings.Contains(b.String(), ",,V,,") {
			t.Error(b.String())
		}
	}
	known := &study.Stress{Element: "D1", Quantity: study.PeakReverseVoltage, Value: 3, Unit: quantity.Volt}
	if row := csvStress("a.cir", "D1", known); row[3] != "3" || row[5] != "0" {
		t.Errorf("%q", row)
	}
}
