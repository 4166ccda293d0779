package solver

import (
	"context"
	"math"
	"testing"
)

var testDiode = Diode{IS: 1e-14, N: 1, VT: ThermalVoltage(27)}

func bridge(c, r, rs float64, d Diode) (*Network, [4]Device, Device, Device) {
	n := New(5)
	n.Period = 0.02
	n.AddVoltageSource(1, 2, Sinusoid{Amplitude: 17, Frequency: 50})
	n.AddResistor(1, 3, rs)
	var ds [4]Device
	ds[0] = n.AddDiode(3, 4, d)
	ds[1] = n.AddDiode(2, 4, d)
	ds[2] = n.AddDiode(0, 3, d)
	ds[3] = n.AddDiode(0, 2, d)
	cap := n.AddCapacitor(4, 0, c, 0)
	load := n.AddResistor(4, 0, r)
	return n, ds, cap, load
}

func TestProbe(t *testing.T) {
	n, ds, c, _ := bridge(2200e-6, 25, 0.5, testDiode)
	s, err := SteadyState(context.Background(), n, Options{})
	if err != nil {
		t.Fatal(err)
	}
	t.Logf("steps %d periods %d iterations %d imbalance %g", s.Fine.Samples()-1, s.Periods, s.Iterations, s.Imbalance)
	for _, d := range ds {
		v, i, p := s.Fine.branchStats(d, 0)
		v0, i0, p0 := s.Coarse.branchStats(d, 0)
		t.Logf("diode vr %.5f %.5f  ipk %.5f %.5f irms %.5f %.5f mean %.6f %.6f p %.5f %.5f", v.Min.Value, v0.Min.Value, i.Max.Value, i0.Max.Value, i.RMS, i0.RMS, i.Mean, i0.Mean, p, p0)
	}
	v, i, _ := s.Fine.branchStats(c, 0)
	t.Logf("cap %.5f..%.5f mean %.5f irms %.5f", v.Min.Value, v.Max.Value, v.Mean, i.RMS)
	_ = math.Pi
}

func BenchmarkBridge(b *testing.B) {
	n, _, _, _ := bridge(2200e-6, 25, 0.5, testDiode)
	for b.Loop() {
		if _, err := SteadyState(context.Background(), n, Options{}); err != nil {
			b.Fatal(err)
		}
	}
}
