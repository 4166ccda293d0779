package solver

import (
	"context"
	"fmt"
)

// settledStage is the stage length, in seconds, at which capacitors count as open and inductors as shorts
// for the operating point.
const settledStage = 1e6

// OperatingPoint finds the constant solution of a network whose sources are constant (their value at t = 0).
// If Newton's method fails from zero, the sources are raised in steps.
func OperatingPoint(ctx context.Context, n *Network) (*Solution, error) {
	sys, err := newSystem(n)
	if err != nil {
		return nil, err
	}
	a, err := newMarch(sys, settledStage/gammaStage)
	if err != nil {
		return nil, err
	}
	if err := a.rest(ctx, 1); err != nil {
		a.stage = newStage(a.stage.r)
		a.last = a.stage
		for k := range a.x {
			a.x[k] = 0
		}
		const ramp = 200
		for k := 1; k <= ramp; k++ {
			if err := a.rest(ctx, float64(k)/ramp); err != nil {
				return nil, fmt.Errorf("operating point: %w", err)
			}
		}
	}
	tr := newTrajectory(n, 0, 1, 2)
	tr.Periodic = true
	z := make([]float64, sys.unknowns)
	a.sample(tr, 0, z)
	a.sample(tr, 1, z)
	return &Solution{Fine: tr, Coarse: tr, States: append([]float64(nil), a.x...), Periods: 1, Iterations: a.stage.iterations}, nil
}

// rest takes a few implicit Euler steps of settledStage with the sources at a fraction of their value.
func (a *march) rest(ctx context.Context, fraction float64) error {
	for range 4 {
		if ctx.Err() != nil {
			return ctx.Err()
		}
		a.inputs(0)
		for k := range a.u {
			a.u[k] *= fraction
		}
		copy(a.pred, a.x)
		if err := a.stage.solve(a.pred, a.u, 0); err != nil {
			return err
		}
		a.stage.states(a.x, a.pred, a.u)
	}
	return nil
}
