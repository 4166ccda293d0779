package solver

import (
	"errors"
	"fmt"
	"math"
)

// ErrNewton says that the nonlinear equations of one time step could not be solved.
var ErrNewton = errors.New("the nonlinear equations of a time step did not converge")

// slack is the relative difference of a slope from the factorised one that is left: Newton's method for a stage, and for
// the period with the derivatives of its stages, still contracts by about that factor an iteration.
const slack = 1e-2

const (
	maxNewton = 200 // iterations of one stage before it is given up
	// relativeCurrent and absoluteCurrent bound the error of the port currents against the last
	// linearisation, absoluteVoltage what that error may do to the port voltages.
	relativeCurrent = 1e-9
	absoluteCurrent = 1e-18 // A
	absoluteVoltage = 1e-8  // V
	// settledStep is a Newton step, V, that is not worth damping, and that ends a search which rounding keeps
	// from the bounds above: it moves a junction current by less than a millionth.
	settledStep  = 1e-8
	settledShare = 1e-9  // of the largest port voltage, the same beside hundreds of volts
	patience     = 20    // iterations before settledStep is enough
	roundingStep = 1e-12 // V, a step that is enough at any time
)

// stage solves one implicit stage after another. It owns all storage, so that stepping allocates nothing.
type stage struct {
	r *reduced

	v     []float64 // port voltages, the solution of the last stage
	fresh bool      // w and slope belong to v
	w     []float64 // port outputs beyond the stand-in
	i, g  []float64 // port outputs and, law by law, their derivatives
	slope dense     // dw/dv, block diagonal
	open  []float64 // port voltages with all w zero
	dv    []float64
	next  []float64 // proposed port voltages
	trial []float64
	lin   []float64 // outputs predicted by the linearisation

	jac      *factor   // I - k slope
	jacSlope []float64 // the slope jac was factorised for
	jacValid bool
	flow     dense // d state' / d state for jacSlope
	flowOK   bool
	// dv/dx and dw/dx, d x m, for flow
	sensitivity, outputs dense

	iterations int
}

func newStage(r *reduced) *stage {
	d := len(r.sys.ports)
	p := r.sys.maxPorts
	return &stage{
		r: r,
		v: make([]float64, d), w: make([]float64, d), i: make([]float64, p), g: make([]float64, p*p),
		slope: newDense(d, d), open: make([]float64, d), dv: make([]float64, d), next: make([]float64, d), trial: make([]float64, d),
		lin: make([]float64, d), jac: newFactor(d), jacSlope: make([]float64, d*d),
	}
}

// bias sets the port voltages from which the next search starts.
func (st *stage) bias(v []float64) {
	copy(st.v, v)
	st.fresh = false
}

// evaluate computes w and its derivatives at port voltages v.
func (st *stage) evaluate(v []float64, t float64) {
	d := len(v)
	for k := range st.r.sys.laws {
		l := &st.r.sys.laws[k]
		if l.count == 1 { // a junction: the same without the loops
			p := l.first
			guess := st.r.sys.ports[p].guess
			l.law.Evaluate(v[p:p+1], t, st.i[:1], st.g[:1])
			st.w[p], st.slope.data[p*d+p] = st.i[0]-guess*v[p], st.g[0]-guess
			continue
		}
		i, g := st.i[:l.count], st.g[:l.count*l.count]
		l.law.Evaluate(v[l.first:l.first+l.count], t, i, g)
		for a := range l.count {
			p := l.first + a
			guess := st.r.sys.ports[p].guess
			st.w[p] = i[a] - guess*v[p]
			row := st.slope.data[p*d+l.first : p*d+l.first+l.count]
			copy(row, g[a*l.count:(a+1)*l.count])
			row[a] -= guess
		}
	}
}

// stale reports whether the factorised Jacobian differs from the present slopes by more than counts.
func (st *stage) stale(tolerance float64) bool {
	if !st.jacValid {
		return true
	}
	d := len(st.v)
	for n := range st.r.sys.laws {
		l := &st.r.sys.laws[n]
		for p := l.first; p < l.first+l.count; p++ {
			for q := l.first; q < l.first+l.count; q++ {
				a, b := st.slope.data[p*d+q], st.jacSlope[p*d+q]
				if a == b {
					continue
				}
				guess := st.r.sys.ports[p].guess
				if math.Abs(a-b) > tolerance*(math.Min(math.Abs(a+guess), math.Abs(b+guess))+gmin) {
					return true
				}
			}
		}
	}
	return false
}

func (st *stage) factorise() error {
	d := len(st.v)
	k, a, slope := st.r.k.data, st.jac.lu, st.slope.data
	for n := range st.r.sys.laws {
		l := &st.r.sys.laws[n]
		if l.count == 1 {
			p := l.first
			g := -slope[p*d+p]
			for at := p; at < d*d; at += d {
				a[at] = k[at] * g
			}
		} else {
			for row := 0; row < d*d; row += d {
				for c := l.first; c < l.first+l.count; c++ {
					sum := 0.0
					for p := l.first; p < l.first+l.count; p++ {
						sum -= k[row+p] * slope[p*d+c]
					}
					a[row+c] = sum
				}
			}
		}
	}
	for at := 0; at < d*d; at += d + 1 {
		a[at]++
	}
	copy(st.jacSlope, slope)
	st.jacValid, st.flowOK = false, false
	if err := st.jac.factorise(); err != nil {
		return err
	}
	st.jacValid = true
	return nil
}

// solve finds the port voltages of a stage with predicted states x and inputs u at time t, starting from the
// last solution. Afterwards v, w and slope hold the solution.
func (st *stage) solve(x, u []float64, t float64) error {
	err := st.attempt(x, u, t, dampFrom)
	if err == nil || len(st.v) == 0 {
		return err
	}
	// From no bias at all, every step damped.
	for j := range st.v {
		st.v[j] = 0
	}
	st.jacValid, st.fresh = false, false
	return st.attempt(x, u, t, 0)
}

// attempt is one search for the port voltages; steps are damped from the given iteration on.
func (st *stage) attempt(x, u []float64, t float64, dampFrom int) error {
	for j := range st.open {
		st.open[j] = 0
	}
	st.r.px.addTo(st.open, x)
	st.r.pu.addTo(st.open, u)
	if len(st.v) == 0 {
		return nil
	}
	if !st.fresh || st.r.sys.timed {
		st.evaluate(st.v, t)
	}
	st.fresh = false
	for iteration := range maxNewton {
		// Residual of v = open + k w at the present v.
		for j := range st.dv {
			st.dv[j] = st.open[j] - st.v[j]
		}
		st.r.k.addTo(st.dv, st.w)
		tolerance := slack
		if iteration > 8 {
			tolerance = 0
		}
		if st.stale(tolerance) {
			if err := st.factorise(); err != nil {
				return err
			}
		}
		st.jac.solve(st.dv)
		for j := range st.v {
			st.next[j] = st.v[j] + st.dv[j]
			if math.IsNaN(st.next[j]) || math.IsInf(st.next[j], 0) {
				return ErrNewton
			}
		}
		limited := st.share()
		for n := range st.r.sys.laws {
			l := &st.r.sys.laws[n]
			if l.law.Limit(st.next[l.first:l.first+l.count], st.v[l.first:l.first+l.count]) {
				limited = true
			}
		}
		st.iterations++
		if iteration >= dampFrom && !limited {
			limited = st.damp(t)
		}
		if limited {
			copy(st.v, st.next)
			st.evaluate(st.v, t)
			continue
		}
		// Outputs that the linearisation predicts at the new point.
		d := len(st.v)
		for _, l := range st.r.sys.laws {
			for p := l.first; p < l.first+l.count; p++ {
				sum := st.w[p]
				for q := l.first; q < l.first+l.count; q++ {
					sum += st.jacSlope[p*d+q] * st.dv[q]
				}
				st.lin[p] = sum
			}
		}
		copy(st.v, st.next)
		st.evaluate(st.v, t)
		done := true
		for p := range st.w {
			port := &st.r.sys.ports[p]
			if port.output == outNone {
				continue
			}
			e := math.Abs(st.w[p] - st.lin[p])
			size := math.Abs(st.w[p] + port.guess*st.v[p])
			if e > relativeCurrent*size+absoluteCurrent && e*st.r.impedance[p] > absoluteVoltage+1e-14*math.Abs(st.v[p]) {
				done = false
				break
			}
		}
		if done {
			st.fresh = true
			return nil
		}
		if step := largest(st.dv); step < roundingStep || iteration > patience && step < settledStep+settledShare*largest(st.v) {
			st.fresh = true
			return nil
		}
	}
	return fmt.Errorf("%w (last step %.2g V)", ErrNewton, largest(st.dv))
}

// share shortens the step dv, and with it next, to what the laws with narrow ranges allow; it reports whether it did.
func (st *stage) share() bool {
	part := 1.0
	for n := range st.r.sys.laws {
		if l := &st.r.sys.laws[n]; l.sharer != nil {
			part = math.Min(part, l.sharer.Share(st.next[l.first:l.first+l.count], st.v[l.first:l.first+l.count]))
		}
	}
	if part >= 1 {
		return false
	}
	for j := range st.next {
		st.dv[j] *= part
		st.next[j] = st.v[j] + st.dv[j]
	}
	return true
}

// dampFrom is the iteration from which a step must shorten the next one, or is halved until it does: two sharp
// corners can otherwise pass an undamped step back and forth.
const dampFrom = 8

// damp halves dv, and with it next, until the simplified Newton step from there is shorter (the natural
// monotonicity test: Deuflhard, Newton Methods for Nonlinear Problems, 2004). It reports whether it did.
func (st *stage) damp(t float64) bool {
	full := largest(st.dv)
	if full < settledStep {
		return false
	}
	damped := false
	share := 1.0
	for range 16 {
		st.evaluate(st.next, t)
		for j := range st.trial {
			st.trial[j] = st.open[j] - st.next[j]
		}
		st.r.k.addTo(st.trial, st.w)
		st.jac.solve(st.trial)
		if largest(st.trial) <= (1-share/4)*full {
			return damped
		}
		damped = true
		share *= 0.5
		for j := range st.dv {
			st.next[j] = st.v[j] + share*st.dv[j]
		}
	}
	return damped
}

func largest(v []float64) float64 {
	m := 0.0
	for _, x := range v {
		m = math.Max(m, math.Abs(x))
	}
	return m
}

// states writes the states after the stage with predicted states x and inputs u.
func (st *stage) states(out, x, u []float64) {
	for k := range out {
		out[k] = 0
	}
	st.r.sx.addTo(out, x)
	st.r.su.addTo(out, u)
	st.r.sw.addTo(out, st.w)
}

// currents writes the port currents of the last solution.
func (st *stage) currents(out []float64) {
	for j := range out {
		out[j] = st.w[j] + st.r.sys.ports[j].guess*st.v[j]
	}
}

// unknowns writes all node potentials and branch currents after the stage.
func (st *stage) unknowns(out, x, u []float64) {
	for k := range out {
		out[k] = 0
	}
	st.r.zx.addTo(out, x)
	st.r.zu.addTo(out, u)
	st.r.zw.addTo(out, st.w)
}

// transition returns the derivative of the states after the stage by the predicted states, m x m.
func (st *stage) transition() (dense, error) {
	if st.stale(slack) {
		if err := st.factorise(); err != nil {
			return dense{}, err
		}
	}
	if st.flowOK {
		return st.flow, nil
	}
	if st.flow.data == nil {
		d, m := len(st.v), st.r.sys.states()
		st.flow, st.sensitivity, st.outputs = newDense(m, m), newDense(d, m), newDense(d, m)
	}
	copy(st.flow.data, st.r.sx.data)
	// d v / d x = (I - k slope)^-1 px; d w / d x = slope of that; d x' / d x = sx + sw of that.
	copy(st.sensitivity.data, st.r.px.data)
	st.jac.solveAll(st.sensitivity)
	d, m := len(st.v), st.r.sys.states()
	for _, l := range st.r.sys.laws {
		for p := l.first; p < l.first+l.count; p++ {
			row := st.outputs.data[p*m : p*m+m]
			for c := range row {
				row[c] = 0
			}
			for q := l.first; q < l.first+l.count; q++ {
				subtract(row, st.sensitivity.row(q), -st.jacSlope[p*d+q])
			}
		}
	}
	addProduct(st.flow, st.r.sw, st.outputs)
	st.flowOK = true
	return st.flow, nil
}
