package study

import (
	"context"
	"math"
	"testing"

	"railproof/checks/parts"
	"railproof/netlist"
)

// vertexTolerance is what a vertex may be worse than the table, beside the numerical errors of both.
const vertexTolerance = 2e-3

// Every vertex of the tolerances, both ends of up to eight parameters in every combination, around every base condition:
// none is worse than what the search of signs found.
func TestEveryVertex(t *testing.T) {
	if testing.Short() {
		t.Skip("takes long; held by the full run")
	}
	for _, file := range []string{"tube-display", "workshop-supply", "checks/zener-regulation/fail", "checks/regulator-headroom/fail"} {
		t.Run(file, func(t *testing.T) {
			c, d, faults, err := netlist.Read(netlist.Source{File: "../../testdata/" + file + ".cir", Library: parts.Default()})
			if err != nil || len(faults) > 0 {
				t.Fatal(err, faults)
			}
			s := NewSupply(c, d, parts.Default())
			table := Worst(context.Background(), s, 0)
			p := table.Plan
			n := len(p.Parameters)
			if n > 8 {
				t.Fatalf("%d parameters", n)
			}
			var settings []Setting
			for _, base := range p.baseSettings() {
				for bits := range 1 << n {
					if n > 6 && bits%7 != 0 && bits != 1<<n-1 {
						continue // every seventh of the 256 is enough here: 7 has no factor in common with 256
					}
					set := base
					set.Shift = make([]float64, n)
					for k := range n {
						set.Shift[k] = float64(bits>>k&1)*2 - 1
					}
					settings = append(settings, set)
				}
			}
			outcomes := make([]*outcome, len(settings))
			inParallel(len(settings), 0, func(k int) {
				outcomes[k] = p.settle(p.solve(context.Background(), settings[k], nil))
			})
			compared := 0
			for _, out := range outcomes {
				for _, found := range out.read {
					if out.set.Held != (found.Quantity == MinHeadroom) && p.held() || math.IsNaN(found.Value) {
						continue
					}
					bound, ok := table.Get(found.Element, found.Quantity)
					if !ok || math.IsNaN(bound.Value) {
						continue
					}
					compared++
					beyond := badness(found.Quantity, found.Value) - badness(found.Quantity, bound.Value)
					if beyond > bound.Error+found.Error+vertexTolerance*math.Abs(bound.Value)+trifle(found.Unit) {
						t.Errorf("%s %s: %.6g in %s %v, beyond %.6g +- %.2g in %s %v", found.Element, found.Quantity, found.Value, found.Condition.Name, found.Condition.Also,
							bound.Value, bound.Error, bound.Condition.Name, bound.Condition.Also)
					}
				}
			}
			t.Logf("%d settings, %d stresses compared", len(settings), compared)
		})
	}
}
