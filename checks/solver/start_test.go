package solver

import (
	"context"
	"math"
	"testing"
)

// A start far above the crest, where nothing conducts and a constant load empties the reservoir by the same charge in
// every period: no state of that kind is a steady one, and the search ends where a start from nothing ends.
func TestStartAboveTheCrest(t *testing.T) {
	build := func() (*Network, Device) {
		n := New(4)
		n.Period = 1 / lineFrequency
		n.AddVoltageSource(1, 0, line(crest, 0))
		n.AddResistor(1, 2, 0.05)
		d := n.AddDiode(2, 3, silicon)
		n.AddCapacitor(3, 0, 10e-3, 0)
		n.AddConstantCurrentLoad(3, 0, 0.46, 1)
		return n, d
	}
	mean := func(o Options) float64 {
		n, d := build()
		s, err := SteadyState(context.Background(), n, o)
		if err != nil {
			t.Fatal(err)
		}
		_, i, _ := s.Fine.Branch(d, 0)
		return i.Mean
	}
	cold := mean(Options{})
	if math.Abs(cold-0.46) > 1e-3*0.46 {
		t.Fatalf("the diode carries %.6g A; the load draws 0.46 A", cold)
	}
	for _, start := range []float64{1.5 * crest, 3 * crest, -crest} {
		for _, oneGrid := range []bool{false, true} {
			tolerance := 1e-3
			if oneGrid {
				tolerance = 5e-3 // nothing refines it
			}
			if warm := mean(Options{Start: []float64{start}, OneGrid: oneGrid}); math.Abs(warm-cold) > tolerance*cold {
				t.Errorf("from %.3g V, one grid %v: the diode carries %.6g A, from nothing %.6g A", start, oneGrid, warm, cold)
			}
		}
	}
}
