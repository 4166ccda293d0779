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

// longLeap is the extrapolation of a state, against its size, from which overshooting counts in a network
// without inductors or regulators too: a source that jumps onto a capacitor.
const longLeap = 0.02

// march steps a system over uniform steps.
type march struct {
	sys   *system
	step  float64 // s
	stage *stage  // of length gammaStage step
	euler *stage  // of length step/cutSteps, made when first needed; see cutsOff
	last  *stage  // the one that ended the last step

	x, x1, pred []float64
	u           []float64
	spare       []float64 // a second pred and u, for cutStep
	spareInputs []float64
	flow        dense // d x / d x at the start of the period
	work        dense

	onJump       func(share float64) // called just before a junction cuts off, see Trajectory.jumps
	sampleNumber int
	leaped       bool      // the last step extrapolated far, see longLeap
	scale        []float64 // natural size of each state

	unknowns      []float64 // for sampling
	before        []float64 // x, and the port currents, at the start of the step
	currentBefore []float64
	flowBefore    []float64
}

func newMarch(sys *system, step float64) (*march, error) {
	r, err := sys.reduce(gammaStage * step)
	if err != nil {
		return nil, err
	}
	m := sys.states()
	a := &march{
		unknowns: make([]float64, sys.unknowns),
		sys:      sys, step: step, stage: newStage(r),
		x: make([]float64, m), x1: make([]float64, m), pred: make([]float64, m),
		u: make([]float64, len(sys.sources)), spare: make([]float64, m), spareInputs: make([]float64, len(sys.sources)),
		before: make([]float64, m), currentBefore: make([]float64, len(sys.ports)),
	}
	a.last, a.scale = a.stage, sys.stateScale()
	return a, nil
}

func (a *march) inputs(t float64) {
	for k, d := range a.sys.sources {
		a.u[k] = a.sys.net.devices[d].wave.At(t)
	}
}

// advance takes one step from time t. Afterwards x is the new state, pred and u are the predicted state and
// the inputs of the last stage, from which the unknowns can be read. With track it also propagates flow.
func (a *march) advance(t float64, track bool) error {
	guard := len(a.sys.ports) > 0
	if guard {
		copy(a.before, a.x)
		a.last.currents(a.currentBefore)
		if track {
			copy(a.flowBefore, a.flow.data)
		}
	}
	if err := a.twoStages(t, track); err != nil {
		return err
	}
	if guard && a.cutsOff(a.stage) {
		copy(a.x, a.before)
		if track {
			copy(a.flow.data, a.flowBefore)
		}
		return a.cutStep(t, track)
	}
	return nil
}

// twoStages takes one step with the two-stage rule.
func (a *march) twoStages(t float64, track bool) error {
	t1, t2 := t+gammaStage*a.step, t+a.step
	a.inputs(t1)
	if err := a.stage.solve(a.x, a.u, t1); err != nil {
		return fmt.Errorf("%w at %.6g s", err, t1)
	}
	a.stage.states(a.x1, a.x, a.u)
	if len(a.sys.ports) > 0 {
		// What flowed in the first stage counts as flowing before the second.
		for j := range a.currentBefore {
			if i := a.stage.w[j] + a.sys.guess[j]*a.stage.v[j]; math.Abs(i) > math.Abs(a.currentBefore[j]) {
				a.currentBefore[j] = i
			}
		}
	}
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
	a.leaped = false
	for k := range a.pred {
		a.pred[k] = a.x[k] + leap*(a.x1[k]-a.x[k])
		if math.Abs(a.pred[k]-a.x1[k]) > longLeap*(a.scale[k]+math.Abs(a.x1[k])) {
			a.leaped = true
		}
	}
	a.inputs(t2)
	if err := a.stage.solve(a.pred, a.u, t2); err != nil {
		return fmt.Errorf("%w at %.6g s", err, t2)
	}
	a.stage.states(a.x, a.pred, a.u)
	a.last = a.stage
	if track {
		j2, err := a.stage.transition()
		if err != nil {
			return err
		}
		multiply(a.flow, j2, a.work)
	}
	return nil
}

// cutsOff reports whether a junction that carried current stopped in the last step. The second stage of the
// rule starts from an extrapolated state. Where a junction cuts off the current of an inductance that state
// has overshot, and the inductance answers with a voltage spike that is not in the circuit; where a regulator
// reaches its set voltage the output capacitor has overshot, and nothing draws the excess back.
func (a *march) cutsOff(st *stage) bool {
	every := a.leaped || len(a.sys.inductors) > 0
	for j, before := range a.currentBefore {
		if math.Abs(before) < 1e-9 || !every && !a.sys.regulating[j] {
			continue
		}
		if now := st.w[j] + a.sys.guess[j]*st.v[j]; math.Abs(now) < 1e-3*math.Abs(before) {
			return true
		}
	}
	return false
}

// cutSteps is how many implicit Euler steps stand for a step in which a junction cuts off.
const cutSteps = 16

// cutStep takes one step in short ones of the implicit Euler rule, which does not extrapolate.
func (a *march) cutStep(t float64, track bool) error {
	short := a.step / cutSteps
	if a.euler == nil {
		r, err := a.sys.reduce(short)
		if err != nil {
			return err
		}
		a.euler = newStage(r)
	}
	a.euler.bias(a.stage.v)
	cut := false
	for k := range cutSteps {
		at := t + float64(k+1)*short
		if !cut && k > 0 {
			a.last.currents(a.currentBefore)
		}
		held, heldInputs := a.pred, a.u
		a.pred, a.u = a.spare, a.spareInputs
		copy(a.pred, a.x)
		a.inputs(at)
		if err := a.euler.solve(a.pred, a.u, at); err != nil {
			return fmt.Errorf("%w at %.6g s", err, at)
		}
		if !cut && k > 0 && a.onJump != nil && a.cutsOff(a.euler) {
			cut = true
			// Show the solution just before: solve it again.
			a.pred, a.u, a.spare, a.spareInputs = held, heldInputs, a.pred, a.u
			if err := a.euler.solve(a.pred, a.u, at-short); err != nil {
				return err
			}
			a.last = a.euler
			a.onJump(float64(k) / cutSteps)
			a.pred, a.u, a.spare, a.spareInputs = a.spare, a.spareInputs, a.pred, a.u
			if err := a.euler.solve(a.pred, a.u, at); err != nil {
				return err
			}
			held, heldInputs = a.spare, a.spareInputs
		}
		a.spare, a.spareInputs = held, heldInputs
		a.euler.states(a.x, a.pred, a.u)
		a.last = a.euler
		if track {
			j, err := a.euler.transition()
			if err != nil {
				return err
			}
			copy(a.work.data, a.flow.data)
			multiply(a.flow, j, a.work)
		}
	}
	a.stage.bias(a.euler.v)
	return nil
}

// period integrates over steps steps from time start. With track, flow becomes the monodromy matrix; with keep, every
// unknown at every step goes into a trajectory, whose first sample is taken to be its last.
func (a *march) period(ctx context.Context, start float64, steps int, track bool, into *Trajectory, keep bool) error {
	if track {
		if m := len(a.x); a.flow.data == nil {
			a.flow, a.work, a.flowBefore = newDense(m, m), newDense(m, m), make([]float64, m*m)
		}
		identity(a.flow)
	}
	if keep {
		into.forget()
		a.onJump = a.keepJump(into, a.unknowns)
		defer func() { a.onJump = nil }()
	}
	for k := range steps {
		if k&63 == 0 && ctx.Err() != nil {
			return ctx.Err()
		}
		a.sampleNumber = k + 1
		if err := a.advance(start+float64(k)*a.step, track); err != nil {
			return err
		}
		if keep {
			a.sample(into, k+1, a.unknowns)
		}
	}
	if keep {
		into.close()
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
	for k := range out.data {
		out.data[k] = 0
	}
	addProduct(out, a, b)
}
