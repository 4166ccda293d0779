package study

import (
	"context"
	"fmt"
	"math"
	"strings"
	"testing"

	"railproof/checks/parts"
	"railproof/checks/solver"
	"railproof/netlist"
)

// timingSupply is the bridge supply whose equations testdata/reference/time_scipy.py integrates.
func timingSupply(b *testing.B) (*Supply, *Plan) {
	c, d, faults, err := netlist.Read(netlist.Source{File: "../../testdata/reference/bridge-timing.cir", Library: parts.Default()})
	if err != nil || len(faults) > 0 {
		b.Fatal(err, faults)
	}
	s := NewSupply(c, d, parts.Default())
	return s, NewPlan(s)
}

// BenchmarkCondition solves one condition of bridge, reservoir and load to the working tolerances, from nothing and
// from the solution of a neighbouring condition.
func BenchmarkCondition(b *testing.B) {
	_, p := timingSupply(b)
	set := Setting{Line: LineHigh, Loads: make([]float64, len(p.loads))}
	for k := range set.Loads {
		set.Loads[k] = 1
	}
	solve := func(b *testing.B, warm states) *outcome {
		out := p.solve(context.Background(), set, warm)
		for i := range out.islands {
			if out.islands[i].err != nil {
				b.Fatal(out.islands[i].err)
			}
		}
		return out
	}
	b.Run("cold", func(b *testing.B) {
		for b.Loop() {
			solve(b, nil)
		}
	})
	b.Run("neighbour", func(b *testing.B) {
		nearby := set
		nearby.Line = LineNominal
		warm := states{}
		out := p.solve(context.Background(), nearby, nil)
		for i := range out.islands {
			warm[i] = out.islands[i].solution.States
		}
		for b.Loop() {
			solve(b, warm)
		}
	})
}

// BenchmarkEqualAccuracy solves the same supply from rest on the coarsest grid whose mean, trough and crest are
// within 0.1 %, and peak and RMS current within 0.5 %, of SciPy's tight solution: what testdata/reference/time_scipy.py asks of
// SciPy's own methods. Nothing is solved twice for an estimate of the error.
func BenchmarkEqualAccuracy(b *testing.B) {
	_, p := timingSupply(b)
	set := Setting{Nominal: true, Line: LineAsWritten}
	limits := map[tableKey]float64{
		{"node:OUT", MeanVoltage}: 1e-3, {"node:OUT", MinVoltage}: 1e-3, {"node:OUT", MaxVoltage}: 1e-3,
		{"V1", PeakCurrent}: 5e-3, {"V1", RMSCurrent}: 5e-3,
	}
	exact := map[tableKey]float64{}
	for _, e := range readReferences(b)["bridge-timing"].Expected {
		exact[tableKey{e.Element, Quantity(e.Quantity)}] = e.Value
	}
	for _, steps := range []int{24, 32, 40, 48, 52, 56, 60, 64, 72, 80, 96, 128, 256} {
		effort := solver.Options{Steps: steps, OneGrid: true}
		found, within := readingsOf(p.settle(p.solveWith(context.Background(), set, nil, 1, effort))), true
		for key, limit := range limits {
			within = within && math.Abs(found[key].Value/exact[key]-1) < limit
		}
		if !within {
			continue
		}
		_, parts := p.lay(set)
		for b.Loop() {
			if _, err := solver.SteadyState(context.Background(), parts[0].Network, effort); err != nil {
				b.Fatal(err)
			}
		}
		b.ReportMetric(float64(steps), "steps/period")
		return
	}
	b.Fatal("no grid is within the limits")
}

// BenchmarkCheck is the whole study of the workshop supply, bridge and regulator: tolerances, cold start, line off
// and shorted output.
func BenchmarkCheck(b *testing.B) {
	c, d, faults, err := netlist.Read(netlist.Source{File: "../../testdata/workshop-supply.cir", Library: parts.Default()})
	if err != nil || len(faults) > 0 {
		b.Fatal(err, faults)
	}
	for _, jobs := range []int{1, 2} {
		b.Run(fmt.Sprint(jobs), func(b *testing.B) {
			for b.Loop() {
				Worst(context.Background(), NewSupply(c, d, parts.Default()), jobs)
			}
		})
	}
}

// BenchmarkSupplies solves N identical supplies exactly as written: time and memory linear in N.
func BenchmarkSupplies(b *testing.B) {
	for _, n := range []int{1, 4, 16, 64, 256} {
		var text strings.Builder
		text.WriteString("title\n.subckt supply\n" + strings.Join(bridgeText(21.2, 0.8, 2200e-6, 33), "\n") + "\n" + plainModel + ".ends\n")
		for k := range n {
			fmt.Fprintf(&text, "X%d supply\n", k)
		}
		c, d, faults := netlist.Parse("many.cir", []byte(text.String()), nil, parts.Default())
		if len(faults) > 0 {
			b.Fatal(faults)
		}
		b.Run(fmt.Sprint(n), func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				Nominal(context.Background(), NewSupply(c, d, parts.Default()), false)
			}
		})
	}
}
