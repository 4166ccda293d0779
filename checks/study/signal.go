package study

import (
	"math"

	"railproof/checks/solver"
)

// signal is a function of time that can be read off a trajectory. It remembers the statistics of the last two, which
// are the two grids of a solution.
type signal struct {
	of    func(tr *solver.Trajectory) func(k int) float64
	known [2]struct {
		of    *solver.Trajectory
		stats solver.Stats
	}
}

func newSignal(of func(tr *solver.Trajectory) func(k int) float64) *signal { return &signal{of: of} }

func potential(node int) *signal {
	return newSignal(func(tr *solver.Trajectory) func(int) float64 {
		samples := tr.Nodes[node]
		return func(k int) float64 { return samples[k] }
	})
}

func branchVoltage(d solver.Device, branch int) *signal {
	return newSignal(func(tr *solver.Trajectory) func(int) float64 {
		b, _ := tr.BranchOf(d, branch)
		return func(k int) float64 { return tr.Voltage(b, k) }
	})
}

func branchCurrent(d solver.Device, branch int) *signal {
	return newSignal(func(tr *solver.Trajectory) func(int) float64 {
		_, i := tr.BranchOf(d, branch)
		return func(k int) float64 { return i[k] }
	})
}

// figure is a signal that is the same at all times.
func figure(of func(tr *solver.Trajectory) float64) *signal {
	return newSignal(func(tr *solver.Trajectory) func(int) float64 {
		value := of(tr)
		return func(int) float64 { return value }
	})
}

// stats are the statistics of the signal over a trajectory.
func (s *signal) stats(tr *solver.Trajectory) *solver.Stats {
	for k := range s.known {
		if s.known[k].of == tr {
			return &s.known[k].stats
		}
	}
	s.known[1] = s.known[0]
	s.known[0].of, s.known[0].stats = tr, tr.Summary(s.of(tr))
	return &s.known[0].stats
}

// read is a statistic on the fine grid of a solution, its difference to the coarse one, and when it occurs.
func (s *signal) read(of *solver.Solution, pick func(st solver.Stats) (float64, float64)) (value, err, at float64) {
	value, at = pick(*s.stats(of.Fine))
	if of.Coarse != nil && of.Coarse != of.Fine {
		coarse, _ := pick(*s.stats(of.Coarse))
		err = math.Abs(value - coarse)
	}
	return value, err, at
}

// combine returns a linear combination of signals.
func combine(a float64, s *signal, b float64, t *signal) *signal {
	return newSignal(func(tr *solver.Trajectory) func(int) float64 {
		f, g := s.of(tr), t.of(tr)
		return func(k int) float64 { return a*f(k) + b*g(k) }
	})
}

func scaled(a float64, s *signal) *signal {
	return newSignal(func(tr *solver.Trajectory) func(int) float64 {
		f := s.of(tr)
		return func(k int) float64 { return a * f(k) }
	})
}

func product(s, t *signal) *signal {
	return newSignal(func(tr *solver.Trajectory) func(int) float64 {
		f, g := s.of(tr), t.of(tr)
		return func(k int) float64 { return f(k) * g(k) }
	})
}

func largest(st solver.Stats) (float64, float64)  { return st.Max.Value, st.Max.At }
func smallest(st solver.Stats) (float64, float64) { return st.Min.Value, st.Min.At }
func mean(st solver.Stats) (float64, float64)     { return st.Mean, math.NaN() }
func rms(st solver.Stats) (float64, float64)      { return st.RMS, math.NaN() }

// magnitude picks the extremum of larger magnitude.
func magnitude(st solver.Stats) (float64, float64) {
	if -st.Min.Value > st.Max.Value {
		return -st.Min.Value, st.Min.At
	}
	return st.Max.Value, st.Max.At
}

// swing picks the peak-to-peak value.
func swing(st solver.Stats) (float64, float64) {
	return st.Max.Value - st.Min.Value, math.NaN()
}

// alternating picks the RMS value of the signal less its mean.
func alternating(st solver.Stats) (float64, float64) {
	return math.Sqrt(math.Max(0, st.RMS*st.RMS-st.Mean*st.Mean)), math.NaN()
}
