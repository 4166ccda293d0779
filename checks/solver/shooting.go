package solver

import (
	"context"
	"errors"
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"
)

// ErrUnsettled says that no periodic steady state was found within the allowed number of periods.
var ErrUnsettled = errors.New("no periodic steady state was found")

const (
	plainPeriods = 2       // integrated before Newton's method starts
	maxPeriods   = 600     // integrated in all before the search is given up
	stuckPeriods = 12      // plain periods after a Newton step that made things worse
	maxSteps     = 600_000 // time steps on one grid before the search is given up
	// relativeState and absoluteState (in units of stateScale) bound the last Newton step; what is then left
	// is of the order of its square.
	relativeState = 1e-6
	absoluteState = 1e-7
	// neutral: directions in which a period changes the state by less than this fraction are left where they
	// are: an isolated node between capacitors, the direct current in a winding without resistance, an output
	// that nothing loads. At 50 Hz it is a time constant of five hours and more, beyond which only the
	// conductance assumed across every junction would decide.
	neutral = 1e-6
)

// search is the state of a periodicity search.
type search struct {
	m       *march
	steps   int
	plain   int // periods before Newton's method
	scale   []float64
	periods int // integrated so far
	// enough is the size of the last Newton step, in units of the bounds above, at which the search ends; most bounds
	// its periods.
	enough float64
	most   int
}

// asRecorded is the size of a Newton step, in the same units, below which the period before it is the solution. A step
// between it and 1 is followed by one more: a reservoir that hardly anything loads turns a small change of its voltage
// into a large one of its ripple current. roughly is enough for a solution on one grid, which proves nothing by itself.
const (
	asRecorded = 1e-2
	roughly    = 10
)

// worthKeeping is the size of a Newton step, in units of the bound that ends the search, below which the next period
// is likely to be the last, so that it is recorded.
const worthKeeping = 1e5

// settle finds the state from which a period returns to itself, starting at x (overwritten), and returns that period.
func (s *search) settle(ctx context.Context, x []float64) (*Trajectory, error) {
	n, plain := len(x), s.plain
	if n > derivativesUpTo {
		return s.accelerate(ctx, x)
	}
	residual := make([]float64, n)
	best, worse, size := math.Inf(1), 0, math.Inf(1)
	var kept *Trajectory
	for s.periods < s.most && s.periods*s.steps < maxSteps {
		track := plain <= 0
		copy(s.m.x, x)
		record := track && size < worthKeeping || n == 0
		if record && kept == nil {
			kept = newTrajectory(s.m.sys.net, 0, s.m.step, s.steps+1)
		}
		if err := s.m.period(ctx, 0, s.steps, track, kept, record); err != nil {
			return nil, err
		}
		s.periods++
		norm := 0.0
		for k := range x {
			residual[k] = s.m.x[k] - x[k]
			norm = math.Max(norm, math.Abs(residual[k])/(s.scale[k]*absoluteState+relativeState*math.Abs(x[k])))
		}
		if n == 0 {
			return kept, nil
		}
		if math.IsNaN(norm) {
			return nil, ErrUnsettled
		}
		if !track {
			plain--
			copy(x, s.m.x)
			continue
		}
		if norm > 2*best {
			if worse++; worse > 3 {
				// Newton's method does not contract here: let the circuit settle by itself for a while.
				plain, worse, best = stuckPeriods, 0, math.Inf(1)
				copy(x, s.m.x)
				continue
			}
		} else {
			best, worse = math.Min(best, norm), 0
		}
		step, err := s.newton(residual)
		if err != nil {
			copy(x, s.m.x)
			plain = 1
			continue
		}
		before := size
		size = 0
		for k := range x {
			size = math.Max(size, math.Abs(step[k])/(s.scale[k]*absoluteState+relativeState*math.Abs(x[k])))
			x[k] += step[k]
		}
		if most := math.Max(1, s.enough); size < most && norm >= most {
			// What Newton's method calls neutral still moves: nothing conducts, and a load empties a reservoir.
			copy(x, s.m.x)
			plain = 1
			continue
		}
		if record && (size < s.enough || size < 1 && before < 1) {
			return kept, nil
		}
	}
	return nil, fmt.Errorf("%w in %d periods", ErrUnsettled, s.periods)
}

// newton solves (I - flow) step = residual in the scaled states; neutral directions get no step.
func (s *search) newton(residual []float64) ([]float64, error) {
	n := len(residual)
	a := mat.NewDense(n, n, nil)
	for r := range n {
		for c := range n {
			v := -s.m.flow.data[r*n+c] * s.scale[c] / s.scale[r]
			if r == c {
				v++
			}
			a.Set(r, c, v)
		}
	}
	b := mat.NewVecDense(n, nil)
	for k := range n {
		b.SetVec(k, residual[k]/s.scale[k])
	}
	var step mat.VecDense
	if n == 1 {
		if d := a.At(0, 0); math.Abs(d) > neutral {
			return []float64{residual[0] / d}, nil
		}
		return []float64{0}, nil
	}
	var lu mat.LU
	lu.Factorize(a)
	if lu.Cond() > 1e-3/neutral {
		var svd mat.SVD
		if !svd.Factorize(a, mat.SVDThin) {
			return nil, ErrUnsettled
		}
		values := svd.Values(nil)
		rank := 0
		for _, v := range values {
			if v > neutral*math.Max(1, values[0]) {
				rank++
			}
		}
		if rank == 0 {
			return make([]float64, n), nil
		}
		svd.SolveVecTo(&step, b, rank)
	} else if err := lu.SolveVecTo(&step, false, b); err != nil {
		return nil, err
	}
	out := make([]float64, n)
	for k := range out {
		out[k] = step.AtVec(k) * s.scale[k]
	}
	return out, nil
}
