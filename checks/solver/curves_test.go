package solver

import (
	"math"
	"testing"
)

// Rectifier curves: the quantities of O. H. Schade, "Analysis of rectifier operation", Proc. IRE 31 (1943), as
// a function of w C RL and Rs/RL. The values are an independent calculation with an ideal diode to the digits
// printed; no published numeric point was at hand. Tolerance: half a unit of the last digit and 0.5 %.
func TestRectifierCurves(t *testing.T) {
	rows := []struct {
		pulses                       int
		wcr, ratio                   float64
		vdc, irms, ipk, icap, ripple float64
	}{
		{2, 10, 0.01, 0.886, 2.12, 5.86, 1.87, 0.73},
		{2, 10, 0.05, 0.817, 1.77, 3.95, 1.46, 0.64},
		{2, 10, 0.10, 0.745, 1.61, 3.27, 1.27, 0.57},
		{2, 20, 0.02, 0.893, 2.04, 5.25, 1.78, 0.72},
		{2, 20, 0.05, 0.828, 1.79, 4.01, 1.48, 0.65},
		{2, 50, 0.01, 0.935, 2.30, 6.61, 2.07, 0.78},
		{2, 100, 0.01, 0.937, 2.30, 6.64, 2.07, 0.78},
		{2, 100, 0.02, 0.903, 2.06, 5.33, 1.81, 0.73},
		{2, 100, 0.05, 0.832, 1.79, 4.03, 1.49, 0.65},
		{2, 100, 0.10, 0.752, 1.62, 3.30, 1.28, 0.58},
		{1, 10, 0.01, 0.780, 2.63, 8.97, 2.43, 0.81},
		{1, 10, 0.05, 0.706, 2.26, 6.42, 2.02, 0.77},
		{1, 20, 0.02, 0.824, 2.59, 8.43, 2.39, 0.82},
		{1, 100, 0.01, 0.901, 2.92, 10.65, 2.74, 0.86},
		{1, 100, 0.05, 0.751, 2.29, 6.60, 2.06, 0.78},
		{1, 100, 0.10, 0.645, 2.09, 5.49, 1.84, 0.74},
	}
	w := 2 * math.Pi * lineFrequency
	for _, row := range rows {
		const load = 100.0
		c := row.wcr / (w * load)
		x := halfWave(row.ratio*load, c, load, sharp)
		if row.pulses == 2 {
			x = bridge(row.ratio*load, c, load, sharp)
		}
		s := steady(t, x.net)
		v, idc, _ := s.Fine.Branch(x.load, 0)
		_, source, _ := s.Fine.Branch(x.source, 0)
		_, reservoir, _ := s.Fine.Branch(x.reservoir, 0)
		peak := math.Max(source.Max.Value, -source.Min.Value)
		check := func(what string, found, want, digit float64) {
			t.Helper()
			if math.Abs(found-want) > digit/2+0.005*want {
				t.Errorf("n=%d wCR=%g Rs/R=%g: %s %.4f, want %.4f", row.pulses, row.wcr, row.ratio, what, found, want)
			}
		}
		check("Vdc/Vm", v.Mean/crest, row.vdc, 0.001)
		check("Irms/Idc", source.RMS/idc.Mean, row.irms, 0.01)
		check("Ipk/Idc", peak/idc.Mean, row.ipk, 0.01)
		check("Icap/Idc", reservoir.RMS/idc.Mean, row.icap, 0.01)
		check("Vpp f C/Idc", (v.Max.Value-v.Min.Value)*float64(row.pulses)*lineFrequency*c/idc.Mean, row.ripple, 0.01)
	}
}
