package solver

import (
	"context"
	"fmt"
)

// ColdStart integrates from rest: every capacitor at its initial voltage and every inductor at its initial
// current (zero unless stated), sources as they are at t = start. visit is called with each period's
// trajectory, whose times count from start, and ends the integration by returning false.
func ColdStart(ctx context.Context, n *Network, start float64, steps, periods int, visit func(period int, tr *Trajectory) bool) error {
	sys, err := newSystem(n)
	if err != nil {
		return err
	}
	span := n.Period
	if span == 0 {
		span = 0.02
	}
	// A first step a million times shorter gives the solution just after switch-on.
	spark, err := newMarch(sys, span/float64(steps)*1e-6)
	if err != nil {
		return err
	}
	sys.initial(spark.x)
	z := make([]float64, sys.unknowns)
	if err := spark.advance(start, false); err != nil {
		return fmt.Errorf("at switch-on: %w", err)
	}
	m, err := newMarch(sys, span/float64(steps))
	if err != nil {
		return err
	}
	sys.initial(m.x)
	m.stage.bias(spark.stage.v)
	for p := range periods {
		tr := newTrajectory(n, float64(p)*span, m.step, steps+1)
		if p == 0 {
			spark.sample(tr, 0, z)
		} else {
			m.sample(tr, 0, z)
		}
		for k := range steps {
			if k&63 == 0 && ctx.Err() != nil {
				return ctx.Err()
			}
			if err := m.advance(start+float64(p)*span+float64(k)*m.step, false); err != nil {
				return err
			}
			m.sample(tr, k+1, z)
		}
		if !visit(p, tr) {
			return nil
		}
	}
	return nil
}

// initial writes the states before switch-on.
func (s *system) initial(x []float64) {
	for k, d := range s.capacitors {
		x[k] = s.net.devices[d].initial
	}
	for k := range s.inductors {
		sum := 0.0
		for j, l := range s.inductance.row(k) {
			sum += l * s.net.devices[s.inductors[j]].initial
		}
		x[len(s.capacitors)+k] = sum
	}
}
