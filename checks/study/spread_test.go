package study

import (
	"context"
	"math"
	"reflect"
	"slices"
	"testing"

	"gonum.org/v1/gonum/stat"

	"railproof/checks/parts"
	"railproof/netlist"
)

// drawn is the position of one tolerance in many trials.
func drawn(d Distribution, seed uint64, n int) []float64 {
	s := &Spread{Seed: seed, Distribution: d, Varied: []Varied{{Kind: VariedLine}, {Kind: VariedTolerance}}}
	values := make([]float64, n)
	for k := range values {
		values[k] = s.Positions(uint64(k + 1))[1]
	}
	return values
}

// Positions have the mean, the deviation and the distribution function of the closed forms. Uniform in -1..1: deviation
// 1/sqrt(3). Normal cut off at 3 sigma: variance 1 - 6 phi(3) / (2 Phi(3) - 1) = 1 - 6 x 0.004431848 / 0.997300204
// = 0.973337, deviation 0.986578 / 3 of the end.
func TestDistributions(t *testing.T) {
	const n = 20000
	phi := func(z float64) float64 { return math.Erfc(-z/math.Sqrt2) / 2 }
	for _, c := range []struct {
		distribution Distribution
		deviation    float64
		below        func(x float64) float64 // share of the positions below x
	}{
		{Uniform, 0.5773503, func(x float64) float64 { return (x + 1) / 2 }},
		{Normal, 0.3288593, func(x float64) float64 { return (phi(3*x) - phi(-3)) / (phi(3) - phi(-3)) }},
	} {
		values := drawn(c.distribution, 1, n)
		mean, deviation := stat.MeanStdDev(values, nil)
		if limit := 4 * c.deviation / math.Sqrt(n); math.Abs(mean) > limit {
			t.Errorf("%s: mean %g, beyond 4 standard errors, %g", c.distribution, mean, limit)
		}
		if math.Abs(deviation/c.deviation-1) > 4/math.Sqrt(2*n) {
			t.Errorf("%s: deviation %g, want %g", c.distribution, deviation, c.deviation)
		}
		// Neighbouring trials are not correlated.
		if r := stat.Correlation(values[1:], values[:n-1], nil); math.Abs(r) > 4/math.Sqrt(n) {
			t.Errorf("%s: neighbouring trials have correlation %g", c.distribution, r)
		}
		// Kolmogorov and Smirnov: the largest distance of the distribution functions, at the 1 % level 1.63 / sqrt(n).
		slices.Sort(values)
		if values[0] < -1 || values[n-1] > 1 {
			t.Errorf("%s: positions %g..%g", c.distribution, values[0], values[n-1])
		}
		farthest := 0.0
		for k, x := range values {
			farthest = max(farthest, math.Abs(c.below(x)-(float64(k)+0.5)/n))
		}
		if farthest > 1.63/math.Sqrt(n) {
			t.Errorf("%s: the distribution is off by %g", c.distribution, farthest)
		}
	}
}

// Trials differ from one another, and from those of another seed.
func TestDrawsDiffer(t *testing.T) {
	a, b := drawn(Uniform, 1, 100), drawn(Uniform, 2, 100)
	all := append(slices.Clone(a), b...)
	slices.Sort(all)
	if len(slices.Compact(all)) != 200 {
		t.Error("two trials stand at the same position")
	}
	if !slices.Equal(a, drawn(Uniform, 1, 100)) {
		t.Error("a trial is not repeatable")
	}
}

// The ambient is uniform from its low to its high end, 0..40 degC round the 27 degC of the netlist.
func TestAmbientOfTrial(t *testing.T) {
	c, d, faults := netlist.Parse("half.cir", []byte("half wave\nV1 a 0 SIN(0 10 50)\nD1 a b DX\nC1 b 0 100u\nR1 b 0 1k\n.model DX D\n"), nil, parts.Default())
	if len(faults) > 0 {
		t.Fatal(faults)
	}
	p := NewPlan(NewSupply(c, d, parts.Default()))
	varied := p.varied()
	k := slices.IndexFunc(varied, func(v Varied) bool { return v.Kind == VariedAmbient })
	if k < 0 || varied[k].Low != 0 || varied[k].High != 40 {
		t.Fatalf("%+v", varied)
	}
	for at, want := range map[float64]float64{0: 0, 0.25: 10, 0.675: 27, 0.8: 32, 1: 40} {
		positions := make([]float64, len(varied))
		positions[k] = at
		set := p.trial(positions)
		if got := p.temperature(&set); math.Abs(got-want) > 1e-9 || positions[k] != at {
			t.Errorf("at %g: %g degC, want %g", at, got, want)
		}
	}
}

// divider is 10 V over two resistors of 500 ohm, line and resistors with the tolerances of common practice.
func divider(t *testing.T) *Table {
	t.Helper()
	c, d, faults := netlist.Parse("divider.cir", []byte("divider\nV1 a 0 10\nR1 a b 500\nR2 b 0 500\n"), nil, parts.Default())
	if len(faults) > 0 {
		t.Fatal(faults)
	}
	return Worst(context.Background(), NewSupply(c, d, parts.Default()), 1)
}

func sample(t *testing.T, table *Table, first uint64, n, jobs int) *Spread {
	t.Helper()
	s, err := Sample(context.Background(), table, SpreadOptions{Seed: 3, First: first, Trials: n, Distribution: Uniform, Jobs: jobs})
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func (s *Spread) columnOf(t *testing.T, element string, q Quantity) int {
	t.Helper()
	k := slices.IndexFunc(s.Stresses, func(x Sampled) bool { return x.Bound.Element == element && x.Bound.Quantity == q })
	if k < 0 {
		t.Fatalf("%s has no %s", element, q)
	}
	return k
}

// The voltage of a divider is V R2 / (R1 + R2) in every trial. With V uniform in 9..11 V and R1, R2 uniform within
// 5 % of 500 ohm its mean is 10 V / 2, as R1 and R2 are alike. Its variance is E[V^2] E[w^2] - 25 V^2 with
// E[V^2] = 100 (1 + 0.1^2 / 3) V^2 and w = 1/2 + (d2 - d1) / 4, of variance 2 x 0.05^2 / 3 / 16 = 1.0417e-4 :
// 100.3333 x 0.25010417 - 25 = 0.093785, so that the deviation is 0.30624 V.
func TestSpreadOfDivider(t *testing.T) {
	const n = 4000
	s := sample(t, divider(t), 1, n, 2)
	if len(s.Varied) != 3 || s.Varied[0].Kind != VariedLine || s.Varied[1].Name != "R1" || s.Varied[2].Name != "R2" {
		t.Fatalf("%+v", s.Varied)
	}
	k := s.columnOf(t, "node:b", MeanVoltage)
	for row, values := range s.Values {
		at := s.Positions(uint64(row + 1))
		v, r1, r2 := 9+2*at[0], 500*(1+0.05*at[1]), 500*(1+0.05*at[2])
		if want := v * r2 / (r1 + r2); math.Abs(values[k]/want-1) > 1e-9 {
			t.Fatalf("trial %d: %.10g V, want %.10g V", row+1, values[k], want)
		}
	}
	st := s.Statistics(k)
	const deviation = 0.30624
	if math.Abs(st.Mean-5) > 4*deviation/math.Sqrt(n) || math.Abs(st.Deviation/deviation-1) > 4/math.Sqrt(2*n) {
		t.Errorf("mean %g V, deviation %g V; want 5 V, %g V", st.Mean, st.Deviation, deviation)
	}
	// At most 11 V x 525 / 1000 and at least nothing of it: the worst case is 5.775 V.
	if x := &s.Stresses[k]; math.Abs(x.Limit()-5.775) > 1e-6 || len(x.Beyond) > 0 || math.Abs(st.Used-st.Max.Value/5.775) > 1e-6 || x.Nominal != 5 {
		t.Errorf("bound %g V, nominal %g V, used %g, beyond %v", x.Limit(), x.Nominal, st.Used, x.Beyond)
	}
}

// The statistics of a handful of values, worked out by hand: 1, 2, 3, 6 and one unsolved. Mean 3, variance
// (4 + 1 + 0 + 9) / 3 = 14/3, at most 8 of which 6 uses 3/4; from 1 to 8 the bins are 7/48 wide.
func TestStatistics(t *testing.T) {
	s := &Spread{
		Stresses: []Sampled{{Bound: Stress{Quantity: MaxVoltage, Value: 7.5, Error: 0.5}}},
		Trials:   []Range{{5, 7}, {10, 11}}, Values: [][]float64{{2}, {6}, {math.NaN()}, {1}, {3}},
	}
	st := s.Statistics(0)
	if st.Solved != 4 || st.Min != (Extremum{1, 10}) || st.Max != (Extremum{6, 6}) || st.Mean != 3 || math.Abs(st.Deviation*st.Deviation-14.0/3) > 1e-12 {
		t.Errorf("%+v", st)
	}
	if st.Percentiles != [...]float64{1, 2, 6, 6} || st.Used != 0.75 || st.Low != 1 || st.High != 8 {
		t.Errorf("%+v", st)
	}
	for bin, n := range st.Counts {
		if want := map[int]int{0: 1, 6: 1, 13: 1, 34: 1}[bin]; n != want {
			t.Errorf("bin %d holds %d, want %d", bin, n, want)
		}
	}
	// A floor: 1 of at least 0.5 uses half of it.
	s.Stresses[0].Bound = Stress{Quantity: MinHeadroom, Value: 0.5}
	if st = s.Statistics(0); st.Used != 0.5 || st.Low != 0.5 || st.High != 6 {
		t.Errorf("%+v", st)
	}
}

// Beyond the bound is a value that neither its own error nor that of the bound explains, on the side that is worse.
func TestBeyond(t *testing.T) {
	upper := Sampled{Bound: Stress{Quantity: MaxVoltage, Value: 10, Error: 0.1}}
	lower := Sampled{Bound: Stress{Quantity: MinHeadroom, Value: 2, Error: 0.1}}
	open := Sampled{Bound: Stress{Quantity: MaxVoltage, Value: 10, Unproven: "no winding"}}
	nought := Sampled{Bound: Stress{Quantity: MeanVoltage}}
	for _, c := range []struct {
		s          *Sampled
		value, err float64
		want       bool
	}{
		{&upper, 10.1, 0, false}, {&upper, 10.101, 0, true}, {&upper, 10.101, 0.01, false}, {&upper, 1, 0, false}, {&upper, math.NaN(), 0, false},
		{&lower, 1.9, 0, false}, {&lower, 1.899, 0, true}, {&lower, 1.899, 0.01, false}, {&lower, 9, 0, false},
		{&open, 11, 0, false}, {&nought, 1e-14, 0, false}, {&nought, 1e-9, 0, true},
	} {
		if got := c.s.beyond(c.value, c.err); got != c.want {
			t.Errorf("%g +- %g against %s %g: beyond %v", c.value, c.err, c.s.Bound.Quantity, c.s.Bound.Value, got)
		}
	}
}

// A bound that is too low is found out, trial by trial.
func TestSampleFindsABrokenBound(t *testing.T) {
	table := divider(t)
	k := slices.IndexFunc(table.Stresses, func(x Stress) bool { return x.Element == "node:b" && x.Quantity == MaxVoltage })
	table.Stresses[k].Value = 5.3
	s := sample(t, table, 11, 100, 0)
	column := s.columnOf(t, "node:b", MaxVoltage)
	var want []uint64
	for row := range s.Values {
		if s.Values[row][column] > 5.3*(1+1e-6)+table.Stresses[k].Error {
			want = append(want, uint64(row+11))
		}
	}
	if got := s.Stresses[column].Beyond; len(want) == 0 || !slices.Equal(got, want) {
		t.Errorf("beyond %v, want %v", got, want)
	}
	if st := s.Statistics(column); st.Farthest != st.Max {
		t.Errorf("farthest %v, largest %v", st.Farthest, st.Max)
	}
}

// Pieces of a study, in any order and by any number of jobs, are the whole.
func TestJoin(t *testing.T) {
	table := divider(t)
	whole := sample(t, table, 1, 30, 1)
	a, b, c := sample(t, table, 1, 7, 2), sample(t, table, 8, 1, 1), sample(t, table, 9, 22, 3)
	got, err := Join([]*Spread{c, a, b})
	if err != nil || !reflect.DeepEqual(got.Values, whole.Values) || !reflect.DeepEqual(got.Trials, whole.Trials) {
		t.Errorf("%v: %v of %v", err, got.Trials, whole.Trials)
	}
	if got, err = Join([]*Spread{c, a}); err != nil || !slices.Equal(got.Trials, []Range{{1, 7}, {9, 30}}) {
		t.Errorf("%v: %v", err, got)
	}
	if _, err = Join([]*Spread{whole, b}); err == nil || err.Error() != "trials 8..8 stand in two of the studies" {
		t.Errorf("a trial in common: %v", err)
	}
}
