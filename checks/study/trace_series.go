package study

import (
	"math"

	"railproof/checks/solver"
)

// series is one signal of one island over a window.
type series struct {
	times, values []float64
	max, min      Instant
}

// sameTime is the part of a window below which two times are one.
const sameTime = 1e-12

func newSeries() *series {
	return &series{max: Instant{Value: math.Inf(-1)}, min: Instant{Value: math.Inf(1)}}
}

// add appends a trajectory shifted in time, up to the end of the window.
func (s *series) add(tr *solver.Trajectory, read func(k int) float64, shift, end float64) {
	follows := len(s.times) > 0
	tr.Points(read, func(t, v float64) {
		if follows { // its first sample is the last of the trajectory before
			follows = false
			return
		}
		s.append(t+shift, v, end)
	})
	st := tr.Summary(read)
	if tr.Periodic && shift > 0 {
		return // the extremes of the first period are shown
	}
	s.extreme(st.Max.At+shift, st.Max.Value, end)
	s.extreme(st.Min.At+shift, st.Min.Value, end)
}

// append takes a point; what crosses the end of the window is cut there.
func (s *series) append(t, v, end float64) {
	n := len(s.times)
	if n > 0 && s.times[n-1] >= end*(1-sameTime) {
		return
	}
	if t > end*(1+sameTime) {
		if n == 0 {
			return
		}
		if span := t - s.times[n-1]; span > 0 {
			v = s.values[n-1] + (v-s.values[n-1])*(end-s.times[n-1])/span
		}
		t = end
	}
	s.times, s.values = append(s.times, t), append(s.values, v)
	s.extreme(t, v, end)
}

// tieOfExtremes is the relative difference below which the earlier of two extremes is shown.
const tieOfExtremes = 1e-7

func (s *series) extreme(t, v, end float64) {
	if t > end*(1+sameTime) || t < 0 {
		return
	}
	if v > s.max.Value+tieOfExtremes*math.Abs(s.max.Value) || math.IsInf(s.max.Value, 0) {
		s.max = Instant{t, v}
	}
	if v < s.min.Value-tieOfExtremes*math.Abs(s.min.Value) || math.IsInf(s.min.Value, 0) {
		s.min = Instant{t, v}
	}
}

// align brings series to one time axis that holds every time of each. A series without a value at a time is
// interpolated between its own; a time that one has twice, it has twice for all.
func align(list []*series) (times []float64, values [][]float64) {
	values = make([][]float64, len(list))
	at := make([]int, len(list))
	count := make([]int, len(list))
	for {
		next, last := math.Inf(1), 0.0
		for j, s := range list {
			if at[j] < len(s.times) {
				next = math.Min(next, s.times[at[j]])
			}
			if n := len(s.times); n > 0 {
				last = math.Max(last, s.times[n-1])
			}
		}
		if math.IsInf(next, 1) {
			return times, values
		}
		most := 0
		for j, s := range list {
			count[j] = 0
			for n := at[j]; n < len(s.times) && s.times[n] <= next+sameTime*last; n++ {
				count[j]++
			}
			most = max(most, count[j])
		}
		for m := range most {
			times = append(times, next)
			for j, s := range list {
				v := s.between(at[j], next)
				if count[j] > 0 {
					v = s.values[at[j]+min(m, count[j]-1)]
				}
				values[j] = append(values[j], v)
			}
		}
		for j := range list {
			at[j] += count[j]
		}
	}
}

// between is the value at a time that lies before point k and not before point k-1.
func (s *series) between(k int, t float64) float64 {
	switch n := len(s.times); {
	case n == 0:
		return math.NaN()
	case k == 0:
		return s.values[0]
	case k >= n:
		return s.values[n-1]
	}
	span := s.times[k] - s.times[k-1]
	if span <= 0 {
		return s.values[k]
	}
	return s.values[k-1] + (s.values[k]-s.values[k-1])*(t-s.times[k-1])/span
}
