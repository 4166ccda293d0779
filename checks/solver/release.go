package solver

import (
	"context"
	"fmt"
)

// Release integrates what follows when nothing drives the network any more, from the initial states that its
// capacitors and inductors were given: octave after octave of time, each with steps steps, the first lasting
// first seconds and every next one as long as all before it together. visit is called with each octave's
// trajectory and ends the integration by returning false.
func Release(ctx context.Context, n *Network, first float64, steps, octaves int, visit func(tr *Trajectory) bool) error {
	sys, err := newSystem(n)
	if err != nil {
		return err
	}
	x := make([]float64, sys.states())
	sys.initial(x)
	start, length := 0.0, first
	var bias []float64
	z := make([]float64, sys.unknowns)
	for octave := range octaves {
		m, err := newMarch(sys, length/float64(steps))
		if err != nil {
			return err
		}
		copy(m.x, x)
		if bias != nil {
			m.stage.bias(bias)
		}
		// A first step a million times shorter shows the solution at the start of the octave.
		spark, err := newMarch(sys, m.step*1e-6)
		if err != nil {
			return err
		}
		copy(spark.x, x)
		spark.stage.bias(m.stage.v)
		if err := spark.advance(start, false); err != nil {
			return fmt.Errorf("after line off: %w", err)
		}
		tr := newTrajectory(n, start, m.step, steps+1)
		spark.sample(tr, 0, z)
		for k := range steps {
			if ctx.Err() != nil {
				return ctx.Err()
			}
			if err := m.advance(start+float64(k)*m.step, false); err != nil {
				return fmt.Errorf("after line off: %w", err)
			}
			m.sample(tr, k+1, z)
		}
		if !visit(tr) {
			return nil
		}
		copy(x, m.x)
		bias = append(bias[:0], m.stage.v...)
		start += length
		if octave > 0 {
			length *= 2
		}
	}
	return nil
}
