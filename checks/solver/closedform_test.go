package solver

import (
	"context"
	"math"
	"testing"
)

// Means without a filter: half-wave Vpeak/pi = 0.318 Vpeak, full-wave 2 Vpeak/pi = 0.637 Vpeak (US Army
// TC 9-62, 4-11 and 4-12; exact by integration of a half sine). Ripple factors 1.21 and 0.48 follow from
// the RMS values Vpeak/2 and Vpeak/sqrt(2): sqrt((pi/2)^2 - 1) = 1.2114 and sqrt(pi^2/8 - 1) = 0.4834.
func TestMeansWithoutFilter(t *testing.T) {
	cases := []struct {
		name         string
		x            rectifier
		mean, factor float64
	}{
		{"half-wave", halfWave(1e-3, 0, 1000, sharp), 1 / math.Pi, math.Sqrt(math.Pi*math.Pi/4 - 1)},
		{"bridge", bridge(1e-3, 0, 1000, sharp), 2 / math.Pi, math.Sqrt(math.Pi*math.Pi/8 - 1)},
		{"centre-tap", centreTap(1e-3, 0, 1000, sharp), 2 / math.Pi, math.Sqrt(math.Pi*math.Pi/8 - 1)},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			v, _, _ := steady(t, c.x.net).Fine.Branch(c.x.load, 0)
			near(t, "mean", v.Mean/crest, c.mean, 2e-4)
			near(t, "ripple factor", math.Sqrt(v.RMS*v.RMS-v.Mean*v.Mean)/v.Mean, c.factor, 1e-3)
		})
	}
}

// Conduction angle with a reservoir so large that its voltage is constant: tan(theta) - theta = (pi/n) Rs/RL
// and Vdc/Vm = cos(theta), n = 1 half-wave, 2 full-wave (charge balance of the sine clipped at the constant
// output; derivation: integral of (cos x - cos theta)/Rs over the pulse equals the load current).
func TestConductionAngle(t *testing.T) {
	for _, ratio := range []float64{0.01, 0.05, 0.1} {
		for _, pulses := range []float64{1, 2} {
			low, high := 1e-6, 1.5
			for high-low > 1e-12 {
				if mid := (low + high) / 2; math.Tan(mid)-mid < math.Pi/pulses*ratio {
					low = mid
				} else {
					high = mid
				}
			}
			theta := (low + high) / 2
			const load = 100.0
			x := halfWave(ratio*load, 1, load, sharp)
			if pulses == 2 {
				x = bridge(ratio*load, 1, load, sharp)
			}
			v, _, _ := steady(t, x.net).Fine.Branch(x.load, 0)
			near(t, "Vdc/Vm", v.Mean/crest, math.Cos(theta), 1e-3)
		}
	}
}

// Peak inverse voltage with a reservoir, per diode: half-wave 2.83 Vs, centre-tap 2.83 E of one half, bridge
// 1.41 Vs (standard handbook table, from memory; recalculated: twice the crest, twice the crest, the crest).
func TestPeakInverseVoltage(t *testing.T) {
	vs := crest / math.Sqrt2
	cases := []struct {
		name string
		x    rectifier
		want float64
	}{
		{"half-wave", halfWave(0.1, 0.01, 1e5, sharp), 2.83},
		{"centre-tap", centreTap(0.1, 0.01, 1e5, sharp), 2.83},
		{"bridge", bridge(0.1, 0.01, 1e5, sharp), 1.41},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			s := steady(t, c.x.net)
			for _, d := range c.x.diodes {
				v, _, _ := s.Fine.Branch(d, 0)
				near(t, "PIV/Vs", -v.Min.Value/vs, c.want, 4e-3)
			}
		})
	}
}

// The ripple of a large, stiffly fed reservoir is a triangle: RMS = peak/sqrt(3) = peak-to-peak/(2 sqrt(3)).
func TestTriangularRipple(t *testing.T) {
	x := bridge(1e-3, 0.1, 10, sharp)
	v, _, _ := steady(t, x.net).Fine.Branch(x.load, 0)
	ripple := v.Max.Value - v.Min.Value
	near(t, "ripple RMS", math.Sqrt(v.RMS*v.RMS-v.Mean*v.Mean), ripple/(2*math.Sqrt(3)), 0.03)
}

// A capacitor across an ideal source draws w C V; an inductor with resistance draws V/sqrt(R^2 + (w L)^2).
func TestLinearLoads(t *testing.T) {
	w := 2 * math.Pi * lineFrequency
	n := New(3)
	n.Period = 1 / lineFrequency
	n.AddVoltageSource(1, 0, line(crest, 0.3))
	c := n.AddCapacitor(1, 0, 10e-6, 0)
	l := n.AddInductor(1, 2, 0.2, 0)
	r := n.AddResistor(2, 0, 30)
	s := steady(t, n)
	_, i, p := s.Fine.Branch(c, 0)
	near(t, "capacitor RMS current", i.RMS, w*10e-6*crest/math.Sqrt2, 1e-4)
	near(t, "capacitor peak current", i.Max.Value, w*10e-6*crest, 1e-3)
	if math.Abs(p) > 1e-3*crest*i.RMS {
		t.Errorf("capacitor takes %g W", p)
	}
	_, i, _ = s.Fine.Branch(l, 0)
	near(t, "inductor RMS current", i.RMS, crest/math.Sqrt2/math.Hypot(30, w*0.2), 1e-4)
	_, _, p = s.Fine.Branch(r, 0)
	near(t, "resistor power", p, 30*i.RMS*i.RMS, 1e-4)
}

// Choke input, both sides of the critical inductance L = R/(3 w) of a full-wave supply (from the second
// harmonic 4/(3 pi) Vm of the rectified sine against its mean 2/pi Vm): above it the output is 2/pi Vm and the
// current never stops; far below it the output climbs.
func TestCriticalInductance(t *testing.T) {
	const load = 100.0
	critical := load / (3 * 2 * math.Pi * lineFrequency)
	for _, c := range []struct {
		factor     float64
		continuous bool
	}{{1.15, true}, {0.3, false}} {
		n := New(5)
		n.Period = 1 / lineFrequency
		n.AddVoltageSource(1, 2, line(crest, 0))
		for _, d := range [][2]Node{{1, 3}, {2, 3}, {0, 1}, {0, 2}} {
			n.AddDiode(d[0], d[1], sharp)
		}
		choke := n.AddInductor(3, 4, c.factor*critical, 0)
		n.AddCapacitor(4, 0, 0.05, 0)
		out := n.AddResistor(4, 0, load)
		s := steady(t, n)
		v, _, _ := s.Fine.Branch(out, 0)
		_, i, _ := s.Fine.Branch(choke, 0)
		if c.continuous {
			near(t, "output", v.Mean, 2*crest/math.Pi, 2e-3)
			if i.Min.Value <= 0 {
				t.Errorf("choke current falls to %g A at %g times the critical inductance", i.Min.Value, c.factor)
			}
			continue
		}
		if v.Mean < 0.68*crest {
			t.Errorf("output %g V did not climb at %g times the critical inductance", v.Mean, c.factor)
		}
		if i.Min.Value < -1e-6 || i.Min.Value > 0.01*i.Mean {
			t.Errorf("choke current falls to %g A, expected zero", i.Min.Value)
		}
	}
}

// Zener arithmetic: 20 V through 100 ohm into a 12 V zener with a 1000 ohm load: the resistor carries
// (20 - 12)/100 = 80 mA and takes 0.64 W, the load 12 mA, the zener 68 mA and 0.816 W. By hand.
func TestZenerOperatingPoint(t *testing.T) {
	n := New(3)
	n.AddVoltageSource(1, 0, Level(20))
	r := n.AddResistor(1, 2, 100)
	z := n.AddDiode(0, 2, Diode{IS: 1e-14, N: 1, VT: ThermalVoltage(27), BV: 12, IBV: 68e-3})
	n.AddResistor(2, 0, 1000)
	n.AddCapacitor(2, 0, 100e-6, 0)
	s, err := OperatingPoint(context.Background(), n)
	if err != nil {
		t.Fatal(err)
	}
	_, i, p := s.Fine.Branch(r, 0)
	near(t, "resistor current", i.Mean, 80e-3, 1e-4)
	near(t, "resistor power", p, 0.64, 1e-4)
	_, i, p = s.Fine.Branch(z, 0)
	near(t, "zener current", -i.Mean, 68e-3, 1e-4)
	near(t, "zener power", p, 0.816, 1e-4)
}

// A start into R and C follows V (1 - exp(-t/RC)) and the current starts at V/R.
func TestColdStartOfRC(t *testing.T) {
	n := New(3)
	n.Period = 0.02
	n.AddVoltageSource(1, 0, Level(10))
	r := n.AddResistor(1, 2, 100)
	c := n.AddCapacitor(2, 0, 100e-6, 0)
	err := ColdStart(context.Background(), n, 0, 400, 3, func(p int, tr *Trajectory) bool {
		b, _ := tr.BranchOf(c, 0)
		for k := 0; k < tr.Samples(); k += 40 {
			at := tr.Start + float64(k)*tr.Step
			want := 10 * (1 - math.Exp(-at/0.01))
			if v := tr.Voltage(b, k); math.Abs(v-want) > 1e-4 {
				t.Errorf("at %g s: %g V, want %g V", at, v, want)
			}
		}
		if _, i := tr.BranchOf(r, 0); p == 0 {
			near(t, "first current", i[0], 0.1, 1e-4)
		}
		return true
	})
	if err != nil {
		t.Fatal(err)
	}
}
