package solver

import (
	"context"
	"errors"
	"fmt"
	"math"
)

// Options bounds the effort of a solution. The zero value asks for the defaults.
type Options struct {
	Steps    int // steps a period of the first grid; default 128
	MaxSteps int // steps a period at which refinement ends; default 16384
	// Start holds the states at the start of the period of a neighbouring solution (Solution.States), from
	// which the search may start; nil or of another length: ignored.
	Start []float64
	// Tolerances end the refinement; the zero value stands for Exact.
	Tolerances Tolerances
	// OneGrid solves on the first grid alone: Coarse is then Fine, and nothing says how accurate it is.
	OneGrid bool
}

const (
	defaultSteps = 128
	// inductiveSteps is the first grid of a network with inductors, whose node voltages jump where a junction
	// cuts their current off: what lies between two samples at a jump is known to one step only.
	inductiveSteps  = 1024
	defaultMaxSteps = 16384
	powerFloor      = 1e-9 // W; below this the power balance is not judged
	voltageFloor    = 1e-6 // V
	currentFloor    = 1e-9 // A
	// currentShare: changes of a current below this part of the largest current of the network do not count.
	currentShare = 2e-5
)

// Tolerances are the relative changes between two grids below which a solution counts as accurate. The rule is of second
// order, so that the finer grid is nearer to the truth than to the coarser one, by a factor of about three.
type Tolerances struct {
	Voltage float64 // of voltages and mean currents
	Current float64 // of peak and RMS currents
	Power   float64 // of mean powers, which go with the square of the currents
	// Balance bounds the mean power into capacitors and inductors, which is zero in the periodic steady state,
	// against the apparent power of the sources.
	Balance float64
}

// Exact are the tolerances of a netlist exactly as written, Working those of the many conditions of a check, in which
// the difference of two grids counts against the part.
var (
	Exact   = Tolerances{Voltage: 1e-3, Current: 5e-3, Power: 1e-3, Balance: 1e-4}
	Working = Tolerances{Voltage: 2e-3, Current: 1e-2, Power: 4e-3, Balance: 2.5e-4}
)

// ErrInaccurate says that two grids still differ by more than the tolerance at the largest number of steps.
var ErrInaccurate = errors.New("the solution changes with the step beyond the tolerance")

// Solution is a periodic steady state or operating point on two grids.
type Solution struct {
	Fine, Coarse *Trajectory // one period at N and N/2 steps; the same for an operating point
	States       []float64   // at the start of the period
	Periods      int         // integrated in all
	Iterations   int         // of the port equations, in all
	Imbalance    float64     // |mean power into C and L| / apparent power of the sources; see Tolerances
}

// Measure evaluates a statistic on both grids: the value on the fine one and the difference to the coarse
// one as its numerical error.
func (s *Solution) Measure(statistic func(tr *Trajectory) float64) (value, err float64) {
	value = statistic(s.Fine)
	if s.Coarse == nil || s.Coarse == s.Fine {
		return value, 0
	}
	return value, math.Abs(value - statistic(s.Coarse))
}

// SteadyState finds the periodic steady state of the network, or its operating point if it has no period.
// The step is halved until the results of two grids agree to the tolerances.
//
// Errors: ErrSingular, ErrNewton, ErrUnsettled, that of an ended context and ErrInaccurate, wrapped with the place.
// With ErrInaccurate the solution of the last two grids is returned too.
func SteadyState(ctx context.Context, n *Network, o Options) (*Solution, error) {
	if n.Period == 0 {
		return OperatingPoint(ctx, n)
	}
	if o.MaxSteps == 0 {
		o.MaxSteps = defaultMaxSteps
	}
	if o.Tolerances == (Tolerances{}) {
		o.Tolerances = Exact
	}
	sys, err := newSystem(n)
	if err != nil {
		return nil, err
	}
	if o.Steps == 0 {
		o.Steps = defaultSteps
		if len(sys.inductors) > 0 {
			o.Steps = inductiveSteps
		}
	}
	x := make([]float64, sys.states())
	plain := plainPeriods
	if len(o.Start) == len(x) {
		copy(x, o.Start)
		plain = 0
	}
	sol := &Solution{}
	if plain > 0 && sol.sketch(ctx, sys, x, o.Steps/sketchedBy) {
		plain = 0
	}
	differs, enough := "", asRecorded
	if o.OneGrid {
		enough = roughly
	}
	for steps := o.Steps; steps <= o.MaxSteps; steps *= 2 {
		tr, err := sol.grid(ctx, sys, x, steps, search{plain: plain, enough: enough, most: maxPeriods})
		if err != nil {
			if (errors.Is(err, ErrNewton) || errors.Is(err, ErrUnsettled)) && steps*2 <= o.MaxSteps && sol.Fine == nil && steps < 4*o.Steps {
				// A finer step may carry Newton's method over what a coarse one could not.
				for k := range x {
					x[k] = 0
				}
				plain = plainPeriods
				continue
			}
			if sol.Coarse != nil { // what two grids say is kept
				return sol, fmt.Errorf("%w at %d steps a period %s; on the next grid: %w", ErrInaccurate, sol.Fine.Samples()-1, differs, err)
			}
			return nil, err
		}
		sol.Coarse, sol.Fine = sol.Fine, tr
		plain = 0
		if o.OneGrid {
			sol.Coarse, sol.States = tr, append(sol.States[:0], x...)
			return sol, nil
		}
		if sol.Coarse == nil {
			continue
		}
		sol.States = append(sol.States[:0], x...)
		sol.Imbalance = imbalance(n, sol.Fine)
		differs = sol.disagreement(n, &o.Tolerances)
		if sol.Imbalance <= o.Tolerances.Balance && differs == "" {
			return sol, nil
		}
	}
	if sol.Coarse == nil {
		return nil, fmt.Errorf("%w: only one grid could be solved", ErrInaccurate)
	}
	return sol, fmt.Errorf("%w at %d steps a period (power imbalance %.2g) %s", ErrInaccurate, sol.Fine.Samples()-1, sol.Imbalance, differs)
}

// A steady state is first sketched from nothing on a grid coarser by this factor, as far as that is easily done.
const (
	sketchedBy      = 4
	sketchedFrom    = 12 // steps a period
	sketchedPeriods = 10
	sketchedEnough  = 1e4 // of the bounds of the state
)

// sketch moves the state x to near the periodic one, and reports whether it could.
func (s *Solution) sketch(ctx context.Context, sys *system, x []float64, steps int) bool {
	if steps < sketchedFrom || len(x) == 0 || len(x) > derivativesUpTo {
		return false
	}
	near := make([]float64, len(x))
	if _, err := s.grid(ctx, sys, near, steps, search{plain: plainPeriods, enough: sketchedEnough, most: sketchedPeriods}); err != nil {
		return false
	}
	copy(x, near)
	return true
}

// grid solves on one grid, from state x, which it moves to the solution.
func (s *Solution) grid(ctx context.Context, sys *system, x []float64, steps int, find search) (*Trajectory, error) {
	m, err := newMarch(sys, sys.net.Period/float64(steps))
	if err != nil {
		return nil, err
	}
	find.m, find.steps, find.scale = m, steps, sys.stateScale()
	tr, err := find.settle(ctx, x)
	s.Periods += find.periods
	s.Iterations += m.stage.iterations
	if err != nil {
		return nil, err
	}
	if sys.centre(m, tr) {
		if tr, err = m.record(ctx, 0, steps, false); err != nil {
			return nil, err
		}
		s.Periods++
		copy(x, m.x)
	}
	tr.Periodic = true
	return tr, nil
}

// centre moves the flux of inductors that ideal sources alone drive, so that their mean current over the
// recorded period is zero: a winding without resistance keeps whatever direct current it had, and a real one
// loses it. It reports whether it moved any.
func (s *system) centre(m *march, tr *Trajectory) bool {
	for _, k := range s.lossless {
		_, current := tr.BranchOf(s.inductors[k], 0)
		mean := tr.Mean(func(n int) float64 { return current[n] })
		for j, l := range s.inductance.row(k) {
			m.x[len(s.capacitors)+j] -= l * mean
		}
	}
	return len(s.lossless) > 0
}

// disagreement compares the branch voltages and currents and the node voltages of the two grids; it names the
// first quantity that differs by more than the tolerance, "" if none does.
func (s *Solution) disagreement(n *Network, allowed *Tolerances) string {
	largest := 0.0
	for d := range n.devices {
		for k := range n.devices[d].branches {
			_, i := s.Fine.BranchOf(Device(d), k)
			for _, v := range i {
				largest = math.Max(largest, math.Abs(v))
			}
		}
	}
	floor := currentFloor + currentShare*largest
	for d := range n.devices {
		for k := range n.devices[d].branches {
			v1, i1, p1 := s.Fine.Branch(Device(d), k)
			v0, i0, p0 := s.Coarse.Branch(Device(d), k)
			size := math.Max(math.Abs(v1.Max.Value), math.Abs(v1.Min.Value))
			peak := math.Max(math.Abs(i1.Max.Value), math.Abs(i1.Min.Value))
			compare := []struct {
				what                    string
				fine, coarse, tolerance float64
				// onCharge: not judged for a capacitor, whose current may jump where a junction switches, and
				// whose mean current and power are zero by periodicity; its RMS current is.
				onCharge bool
			}{
				{"largest voltage", v1.Max.Value, v0.Max.Value, allowed.Voltage*size + voltageFloor, false},
				{"smallest voltage", v1.Min.Value, v0.Min.Value, allowed.Voltage*size + voltageFloor, false},
				{"mean voltage", v1.Mean, v0.Mean, allowed.Voltage*size + voltageFloor, false},
				{"largest current", i1.Max.Value, i0.Max.Value, allowed.Current*peak + floor, true},
				{"smallest current", i1.Min.Value, i0.Min.Value, allowed.Current*peak + floor, true},
				{"RMS current", i1.RMS, i0.RMS, allowed.Current*i1.RMS + floor, false},
				{"mean current", i1.Mean, i0.Mean, allowed.Voltage*i1.RMS + floor, true},
				{"mean power", p1, p0, allowed.Power*v1.RMS*i1.RMS + powerFloor, true},
			}
			if n.devices[d].kind == capacitor {
				// The crest and the trough themselves are wanted, and no kink may hide more of them.
				for _, e := range [][2]Extreme{{v1.Max, v0.Max}, {v1.Min, v0.Min}} {
					tolerance := allowed.Voltage*(math.Abs(e[0].Value)+0.1*size) + voltageFloor
					if differ(e[0].Value, e[1].Value, tolerance) || e[0].Doubt > tolerance {
						return fmt.Sprintf("extreme voltage of device %d: %.6g, then %.6g, within %.2g", d, e[1].Value, e[0].Value, e[0].Doubt)
					}
				}
			}
			for _, c := range compare {
				if n.devices[d].kind == capacitor && c.onCharge {
					continue
				}
				if differ(c.fine, c.coarse, c.tolerance) {
					return fmt.Sprintf("%s of device %d branch %d: %.6g, then %.6g", c.what, d, k, c.coarse, c.fine)
				}
			}
		}
	}
	for k := 1; k < n.nodes; k++ {
		fine := s.Fine.Summary(func(j int) float64 { return s.Fine.Nodes[k][j] })
		coarse := s.Coarse.Summary(func(j int) float64 { return s.Coarse.Nodes[k][j] })
		if differ(fine.Ripple(), coarse.Ripple(), allowed.Voltage*(fine.Ripple()+1e-3*fine.RMS)+voltageFloor) {
			return fmt.Sprintf("ripple of node %d: %.6g V, then %.6g V", k, coarse.Ripple(), fine.Ripple())
		}
	}
	return ""
}

func differ(a, b, tolerance float64) bool { return !(math.Abs(a-b) <= tolerance) }

// Branch summarises the voltage and current of a branch and its mean power.
func (tr *Trajectory) Branch(d Device, k int) (v, i Stats, power float64) {
	b, current := tr.BranchOf(d, k)
	voltage := func(n int) float64 { return tr.Voltage(b, n) }
	v = tr.Summary(voltage)
	i = tr.Summary(func(n int) float64 { return current[n] })
	return v, i, tr.MeanPower(d, k)
}

// imbalance is the mean power into the energy stores over the apparent power (RMS voltage times RMS current)
// of the sources.
func imbalance(n *Network, tr *Trajectory) float64 {
	var stored, apparent float64
	for d := range n.devices {
		kind := n.devices[d].kind
		for k, b := range n.devices[d].branches {
			_, current := tr.BranchOf(Device(d), k)
			switch kind {
			case capacitor, inductor:
				stored += tr.Mean(func(s int) float64 { return tr.Voltage(b, s) * current[s] })
			case voltageSource, currentSource:
				v := tr.Summary(func(s int) float64 { return tr.Voltage(b, s) })
				i := tr.Summary(func(s int) float64 { return current[s] })
				apparent += v.RMS * i.RMS
			}
		}
	}
	if math.Abs(stored) < powerFloor {
		return 0
	}
	return math.Abs(stored) / math.Max(apparent, powerFloor)
}
