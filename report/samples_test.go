package report

import (
	"bytes"
	"context"
	"path/filepath"
	"strings"
	"testing"
	"unicode/utf8"

	"railproof/checks"
	"railproof/netlist"
)

// What the engine finds on the sample supplies goes through every writer: valid by the schemas, no wider than
// the page, every check and quantity known.
func TestSampleSupplies(t *testing.T) {
	samples, err := filepath.Glob("../testdata/*.cir")
	if err != nil || len(samples) < 6 {
		t.Fatalf("%d sample supplies, %v", len(samples), err)
	}
	reports, stresses := schemaOf(t, "report-1"), schemaOf(t, "stress-1")
	var inputs []Input
	for _, file := range samples {
		o := checks.Options{Source: netlist.Source{File: file}, Now: day}
		result, faults, err := checks.Run(context.Background(), o)
		if err != nil || len(faults) > 0 {
			t.Fatal(file, err, faults)
		}
		inputs = append(inputs, Input{File: file, Result: result})
		nominal, _, err := checks.Stresses(context.Background(), o, true, true)
		if err != nil {
			t.Fatal(err)
		}
		for _, table := range []*StressTable{NewStressTable(result, false), NewStressTable(nominal, true)} {
			var b bytes.Buffer
			if err := table.WriteJSON(&b); err != nil {
				t.Fatal(err)
			}
			if err := validate(stresses, b.Bytes()); err != nil {
				t.Errorf("%s: %v", file, err)
			}
		}
	}
	r := New(inputs, Options{Version: "test", Gate: gateAt(t, "critical"), Now: day})
	if err := validate(reports, written(t, r, "json", Style{})); err != nil {
		t.Error(err)
	}
	for _, line := range strings.Split(string(written(t, r, "text", Style{})), "\n") {
		if utf8.RuneCountInString(line) > width {
			t.Errorf("%d columns: %s", utf8.RuneCountInString(line), line)
		}
	}
	for _, f := range r.Files {
		seen := map[string]bool{}
		for _, x := range f.Findings {
			if x.Title == x.Check {
				t.Errorf("%s: check %s has no title", f.Name, x.Check)
			}
			if seen[x.Fingerprint] {
				t.Errorf("%s: the fingerprint of %s on %s stands twice", f.Name, x.Check, x.Element)
			}
			seen[x.Fingerprint] = true
		}
	}
	for _, name := range Formats() {
		if len(written(t, r, name, Style{})) == 0 {
			t.Errorf("%s is empty", name)
		}
	}
}
