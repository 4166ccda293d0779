package checks

import (
	"context"
	"math"
	"testing"
	"time"

	"railproof/checks/study"
	"railproof/netlist"
)

// wavesOf runs the checks on a sample with or without curves.
func wavesOf(t *testing.T, file string, waves bool) *Result {
	t.Helper()
	r, diagnostics, err := Run(context.Background(), Options{Source: netlist.Source{File: file}, Now: time.Unix(0, 0), Waves: waves})
	if err != nil || len(diagnostics) > 0 {
		t.Fatal(err, diagnostics)
	}
	return r
}

// The extreme of each curve is the stress that was judged, and it lies beyond the limit where the finding says so.
func TestWavesShowWhatWasJudged(t *testing.T) {
	if testing.Short() {
		t.Skip("takes long; held by the full run")
	}
	shown := map[study.Quantity]int{}
	for _, file := range []string{"../testdata/failing.cir", "../testdata/workshop-supply.cir"} {
		for _, f := range wavesOf(t, file, true).Findings {
			if f.Wave == nil {
				if f.shown() && f.Headline && f.Stress.Quantity != study.MeanPower {
					t.Errorf("%s: no curve of %s, %s", file, f.Element, f.Check)
				}
				continue
			}
			shown[f.Stress.Quantity]++
			w := f.Wave
			worst, limit := w.Worst.Value, w.Lines[0].Value
			if f.Stress.Quantity == study.MinHeadroom {
				limit = w.Lines[len(w.Lines)-1].Value
				worst += f.Stress.Value - worst + w.Lines[0].Value // the level plus the headroom is the trough
			} else if math.Abs(worst-f.Stress.Value) > 0.02*math.Abs(f.Stress.Value)+f.Stress.Error {
				t.Errorf("%s %s: the curve has %g, the finding %g", f.Element, f.Check, worst, f.Stress.Value)
			}
			if beyond := worst > limit; (beyond != f.Floor) != (f.Verdict == Violated) {
				t.Errorf("%s %s is %s, but its curve has %g and its line %g", f.Element, f.Check, f.Verdict, worst, limit)
			}
			low, high := math.Inf(1), math.Inf(-1)
			for _, v := range w.Values {
				low, high = math.Min(low, v), math.Max(high, v)
			}
			if slack := 0.01 * (high - low); w.Worst.Value < low-slack || w.Worst.Value > high+slack {
				t.Errorf("%s %s: the worst point %g is no point of the curve, %g to %g", f.Element, f.Check, w.Worst.Value, low, high)
			}
		}
	}
	for _, q := range []study.Quantity{study.PeakReverseVoltage, study.MinHeadroom, study.MaxVoltage, study.MaxInputVoltage} {
		if shown[q] == 0 {
			t.Errorf("no curve of any %s", q)
		}
	}
}

// Without being asked, no curve is followed.
func TestNoWavesUnlessAsked(t *testing.T) {
	if testing.Short() {
		t.Skip("takes long; held by the full run")
	}
	for _, f := range wavesOf(t, "../testdata/failing.cir", false).Findings {
		if f.Wave != nil {
			t.Fatalf("%s %s carries a curve", f.Element, f.Check)
		}
	}
}
