package solver

import (
	"context"
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"
)

// derivativesUpTo is the number of states up to which Newton's method for the period carries their derivatives along;
// with more, their products cost more than further periods.
const derivativesUpTo = 80

// mixed is how many earlier periods an accelerated step combines.
const mixed = 30

// accelerate finds the state from which a period returns to itself by plain periods, each next state being the
// combination of the last ones whose combined change is smallest (Anderson 1965; for a linear network the same as
// minimising the residual over a Krylov space). It ends as settle does.
func (s *search) accelerate(ctx context.Context, x []float64) (*Trajectory, error) {
	n := len(x)
	unit := func(k int) float64 { return s.scale[k]*absoluteState + relativeState*math.Abs(x[k]) }
	var states, changes []*mat.VecDense // of the last periods, scaled
	best, size := math.Inf(1), math.Inf(1)
	kept := newTrajectory(s.m.sys.net, 0, s.m.step, s.steps+1)
	for s.periods < s.most && s.periods*s.steps < maxSteps {
		copy(s.m.x, x)
		record := size < worthKeeping
		if err := s.m.period(ctx, 0, s.steps, false, kept, record); err != nil {
			return nil, err
		}
		s.periods++
		at, change := mat.NewVecDense(n, nil), mat.NewVecDense(n, nil)
		norm := 0.0
		for k := range x {
			at.SetVec(k, x[k]/s.scale[k])
			change.SetVec(k, (s.m.x[k]-x[k])/s.scale[k])
			norm = math.Max(norm, math.Abs(s.m.x[k]-x[k])/unit(k))
		}
		if math.IsNaN(norm) {
			return nil, ErrUnsettled
		}
		if norm > 10*best {
			states, changes = nil, nil // what was learnt no longer holds
		}
		best = math.Min(best, norm)
		states, changes = append(states, at), append(changes, change)
		if len(states) > mixed {
			states, changes = states[1:], changes[1:]
		}
		next := combine(states, changes)
		before := size
		size = 0
		for k := range x {
			v := next.AtVec(k) * s.scale[k]
			size = math.Max(size, math.Abs(v-x[k])/unit(k))
			x[k] = v
		}
		if record && norm < 1 && (size < s.enough || size < 1 && before < 1) {
			return kept, nil
		}
	}
	return nil, fmt.Errorf("%w in %d periods", ErrUnsettled, s.periods)
}

// combine returns the state that the last states and their changes over a period lead to.
func combine(states, changes []*mat.VecDense) *mat.VecDense {
	last := len(states) - 1
	n := states[last].Len()
	next := mat.NewVecDense(n, nil)
	next.AddVec(states[last], changes[last])
	if last == 0 {
		return next
	}
	dx, df := mat.NewDense(n, last, nil), mat.NewDense(n, last, nil)
	var column mat.VecDense
	for j := range last {
		column.SubVec(states[j+1], states[j])
		dx.SetCol(j, column.RawVector().Data)
		column.SubVec(changes[j+1], changes[j])
		df.SetCol(j, column.RawVector().Data)
	}
	// gamma = argmin |change - df gamma|, by singular values, since the differences may depend on one another.
	var svd mat.SVD
	if !svd.Factorize(df, mat.SVDThin) {
		return next
	}
	values, rank := svd.Values(nil), 0
	for _, v := range values {
		if v > 1e-12*values[0] {
			rank++
		}
	}
	if rank == 0 {
		return next
	}
	var gamma, step mat.VecDense
	svd.SolveVecTo(&gamma, changes[last], rank)
	dx.Add(dx, df)
	step.MulVec(dx, &gamma)
	next.SubVec(next, &step)
	return next
}
