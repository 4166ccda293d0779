package study

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/stat"
)

// HistogramBins is how many bins of equal width a histogram has. They reach from the smallest value, or the bound
// if that is smaller, to the largest, or the bound.
const HistogramBins = 48

// Percentiles are the shares of the trials, in per cent, at which a distribution is told.
var Percentiles = [...]float64{5, 50, 95, 99}

// Extremum is a value and the trial it was found in, the first of equals.
type Extremum struct {
	Value float64
	Trial uint64
}

// Statistics are what is told of a sampled stress. Values are NaN where no trial has one.
type Statistics struct {
	Solved          int
	Min, Max        Extremum
	Mean, Deviation float64 // of the sample, n - 1
	Percentiles     [len(Percentiles)]float64
	// Used is the share of the bound that the worst value uses: it over the bound, or the bound over it where
	// smaller is worse. NaN unless both are above nought.
	Used      float64
	Farthest  Extremum // of the trials beyond the bound; trial 0: none is
	Low, High float64
	Counts    []int // of the histogram from Low to High
}

// Bounded reports whether the worst case has a proven bound.
func (s *Sampled) Bounded() bool { return s.Bound.Unproven == "" && !math.IsNaN(s.Bound.Value) }

// SmallerIsWorse reports whether the bound is a lower one.
func (s *Sampled) SmallerIsWorse() bool {
	return smallerIsWorse[s.Bound.Quantity] || signed[s.Bound.Quantity] && s.Bound.Value < 0
}

// Limit is the bound with its numerical error counted against the part.
func (s *Sampled) Limit() float64 {
	if s.SmallerIsWorse() {
		return s.Bound.Value - s.Bound.Error
	}
	return s.Bound.Value + s.Bound.Error
}

// rounding is what double precision may leave of a value that is exactly nought, such as the mean of a balanced
// winding, in SI units.
const rounding = 1e-12

// beyond reports whether a value lies beyond the bound by more than its own numerical error. What the worst case
// itself takes for equal is not beyond.
func (s *Sampled) beyond(v, inexact float64) bool {
	margin := tie*math.Abs(s.Bound.Value) + rounding + inexact
	if s.SmallerIsWorse() {
		return s.Bounded() && v < s.Limit()-margin
	}
	return s.Bounded() && v > s.Limit()+margin
}

// worse reports whether a is worse than b.
func (s *Sampled) worse(a, b float64) bool { return a != b && (a < b) == s.SmallerIsWorse() }

// Worst is the extremum that is the worse one.
func (st *Statistics) Worst(s *Sampled) Extremum {
	if s.SmallerIsWorse() {
		return st.Min
	}
	return st.Max
}

// Statistics works out the distribution of the k-th stress.
func (s *Spread) Statistics(k int) Statistics {
	sampled, nan := &s.Stresses[k], math.NaN()
	st := Statistics{Min: Extremum{Value: nan}, Max: Extremum{Value: nan}, Mean: nan, Deviation: nan, Used: nan, Low: nan, High: nan}
	var values []float64
	row := 0
	for _, r := range s.Trials {
		for trial := r.First; trial <= r.Last; trial++ {
			v := s.Values[row][k]
			row++
			if math.IsNaN(v) {
				continue
			}
			values = append(values, v)
			if !(v >= st.Min.Value) {
				st.Min = Extremum{v, trial}
			}
			if !(v <= st.Max.Value) {
				st.Max = Extremum{v, trial}
			}
			if _, ok := slices.BinarySearch(sampled.Beyond, trial); ok && (st.Farthest.Trial == 0 || sampled.worse(v, st.Farthest.Value)) {
				st.Farthest = Extremum{v, trial}
			}
		}
	}
	for i := range st.Percentiles {
		st.Percentiles[i] = nan
	}
	if st.Solved = len(values); st.Solved == 0 {
		return st
	}
	st.Mean = stat.Mean(values, nil)
	if st.Solved > 1 {
		st.Deviation = stat.StdDev(values, nil)
	}
	sorted := slices.Sorted(slices.Values(values))
	for i, p := range Percentiles {
		st.Percentiles[i] = stat.Quantile(p/100, stat.Empirical, sorted, nil)
	}
	if worst, limit := st.Worst(sampled).Value, sampled.Limit(); sampled.Bounded() && worst > rounding && limit > rounding {
		st.Used = worst / limit
		if sampled.SmallerIsWorse() {
			st.Used = limit / worst
		}
	}
	st.histogram(sampled, values)
	return st
}

func (st *Statistics) histogram(s *Sampled, values []float64) {
	st.Low, st.High = st.Min.Value, st.Max.Value
	if limit := s.Limit(); !math.IsNaN(limit) {
		st.Low, st.High = min(st.Low, limit), max(st.High, limit)
	}
	st.Counts = make([]int, HistogramBins)
	width := (st.High - st.Low) / HistogramBins
	for _, v := range values {
		bin := 0
		if width > 0 {
			bin = min(max(int((v-st.Low)/width), 0), HistogramBins-1)
		}
		st.Counts[bin]++
	}
}
