package study

import (
	"context"
	"encoding/json"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"railproof/checks/parts"
	"railproof/netlist"
)

// reference is a solution of the same equations by a general-purpose numerical library; see
// testdata/reference/README.md.
type reference struct {
	Circuit  string
	Mode     string
	Error    float64 `json:"estimated_error"`
	Expected []struct {
		Element, Quantity string
		Value             float64
		Unit              string
	}
}

// readReferences reads every reference solution in name order.
func readReferences(t testing.TB) map[string]reference {
	t.Helper()
	files, err := filepath.Glob("../../testdata/reference/*.json")
	if err != nil || len(files) == 0 {
		t.Fatalf("no reference solutions: %v", err)
	}
	all := map[string]reference{}
	for _, f := range files {
		text, err := os.ReadFile(f)
		if err != nil {
			t.Fatal(err)
		}
		var r reference
		if err := json.Unmarshal(text, &r); err != nil {
			t.Fatalf("%s: %v", f, err)
		}
		if r.Circuit != "" {
			all[strings.TrimSuffix(filepath.Base(f), ".json")] = r
		}
	}
	return all
}

// tolerance of a quantity: relative, and absolute for values near zero.
func tolerance(quantity string) (relative, absolute float64) {
	switch Quantity(quantity) {
	case PeakCurrent, RMSCurrent, SurgeCurrent, SurgeI2t, RippleCurrentRMS, MinCurrent, MaxOutputCurrent:
		return 0.005, 10e-6
	case MeanCurrent:
		return 0.002, 10e-6
	case MeanPower:
		return 0.002, 10e-6
	}
	return 0.002, 1e-3
}

// Every stress of every reference circuit within 0.2 % for voltages, means and powers and 0.5 % for peaks
// and RMS currents, or 1 mV, 10 uA, 10 uW near zero.
func TestReferences(t *testing.T) {
	if testing.Short() {
		t.Skip("takes long; held by the full run")
	}
	for name, r := range readReferences(t) {
		t.Run(name, func(t *testing.T) {
			c, d, faults, err := netlist.Read(netlist.Source{File: filepath.Join("../../testdata/reference", r.Circuit), Library: parts.Default()})
			if err != nil || len(faults) > 0 {
				t.Fatal(err, faults)
			}
			table := Nominal(context.Background(), NewSupply(c, d, parts.Default()), r.Mode == "cold-start")
			for _, want := range r.Expected {
				found, ok := table.Get(want.Element, Quantity(want.Quantity))
				if !ok {
					t.Errorf("%s %s is missing", want.Element, want.Quantity)
					continue
				}
				relative, absolute := tolerance(want.Quantity)
				if !(math.Abs(found.Value-want.Value) <= math.Max(relative*math.Abs(want.Value), absolute)) {
					t.Errorf("%s %s: %.7g, want %.7g (%+.3f %%) %s", want.Element, want.Quantity, found.Value, want.Value,
						100*(found.Value/want.Value-1), found.Unproven)
				}
			}
		})
	}
}
