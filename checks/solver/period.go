package solver

import (
	"context"
	"fmt"
	"math"
)

// Coefficients of the two-stage rule (Alexander 1977): both stages have the length gammaStage h, and the
// second starts from x + leap (x1 - x), x1 being the state after the first.
const (
	gammaStage = 1 - math.Sqrt2/2
	leap       = (1 - gammaStage) / gammaStage
)

// march steps a system over uniform steps.
type march struct {
	sys   *system
	step  float64 // s
	stage *stage

	x, x1, pred []float64
	u           []float64
	flow        dense // d x / d x at the start of the period
	work        dense
}

func newMarch(sys *system, step float64) (*march, error) {
	r, err := sys.reduce(gammaStage * step)
	if err != nil {
		return nil, err
	}
	m := sys.states()
	return &march{
		sys: sys, step: step, stage: newStage(r),
		x: make([]float64, m), x1: make([]float64, m), pred: make([]float64, m),
		u: make([]float64, len(sys.sources)), flow: newDense(m, m), work: newDense(m, m),
	}, nil
}

func (a *march) inputs(t float64) {
	for k, d := range a.sys.sources {
		a.u[k] = a.sys.net.devices[d].wave.At(t)
	}
}

// advance takes one step from time t. Afterwards x is the new state, pred and u are the predicted state and
// the inputs of the last stage, from which the unknowns can be read. With track it also propagates flow.
func (a *march) advance(t float64, track bool) error {
	t1, t2 := t+gammaStage*a.step, t+a.step
	a.inputs(t1)
	if err := a.stage.solve(a.x, a.u, t1); err != nil {
		return fmt.Errorf("%w at %.6g s", err, t1)
	}
	a.stage.states(a.x1, a.x, a.u)
	if track {
		// pred = x + leap (x1 - x): its derivative is (1 - leap) F + leap J1 F.
		j1, err := a.stage.transition()
		if err != nil {
			return err
		}
		multiply(a.work, j1, a.flow)
		for k, v := range a.work.data {
			a.work.data[k] = (1-leap)*a.flow.data[k] + leap*v
		}
	}
	for k := range a.pred {
		a.pred[k] = a.x[k] + leap*(a.x1[k]-a.x[k])
	}
	a.inputs(t2)
	if err := a.stage.solve(a.pred, a.u, t2); err != nil {
		return fmt.Errorf("%w at %.6g s", err, t2)
	}
	a.stage.states(a.x, a.pred, a.u)
	if track {
		j2, err := a.stage.transition()
		if err != nil {
			return err
		}
		multiply(a.flow, j2, a.work)
	}
	return nil
}

// period integrates over steps steps from time start. With track, flow becomes the monodromy matrix.
func (a *march) period(ctx context.Context, start float64, steps int, track bool) error {
	if track {
		identity(a.flow)
	}
	for k := range steps {
		if k&63 == 0 && ctx.Err() != nil {
			return ctx.Err()
		}
		if err := a.advance(start+float64(k)*a.step, track); err != nil {
			return err
		}
	}
	return nil
}

func identity(m dense) {
	for k := range m.data {
		m.data[k] = 0
	}
	for k := range m.rows {
		m.data[k*m.cols+k] = 1
	}
}

// multiply sets out = a b; out is neither.
func multiply(out, a, b dense) {
	for r := range a.rows {
		row := out.row(r)
		for c := range row {
			row[c] = 0
		}
		for k, v := range a.row(r) {
			if v == 0 {
				continue
			}
			for c, w := range b.row(k) {
				row[c] += v * w
			}
		}
	}
}
