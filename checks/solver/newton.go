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
	// exactFrom is the iteration from which every change of a slope counts.
	exactFrom = 9
	// dampFrom is the iteration from which a step must shorten the next one, or is halved until it does: two sharp
	// corners can otherwise pass an undamped step back and forth.
	dampFrom = 8
)

// solve finds the port voltages of a stage with predicted states x and inputs u at time t, starting from the
// last solution. Afterwards v, w and slope hold the solution.
func (st *stage) solve(x, u []float64, t float64) error {
	if len(st.v) == 0 {
		return nil
	}
	if st.by != nil && st.solveBent(x, u, t) {
		if !st.by.stays() {
			st.choose()
		}
		return nil
	}
	if st.attempt(x, u, t, dampFrom) == nil {
		st.choose()
		return nil
	}
	// From no bias at all, every step damped.
	for j := range st.v {
		st.v[j] = 0
	}
	st.jacValid, st.fresh, st.by = false, false, nil
	return st.attempt(x, u, t, 0)
}

// attempt is one search for the port voltages; steps are damped from the given iteration on.
func (st *stage) attempt(x, u []float64, t float64, dampFrom int) error {
	st.r.px.times(st.open, x)
	st.r.pu.addTo(st.open, u)
	if !st.fresh || st.r.sys.timed {
		st.evaluate(st.v, t)
	}
	st.fresh = false
	step := 0.0
	for iteration := range maxNewton {
		tolerance := slack
		if iteration >= exactFrom {
			tolerance = 0
		}
		if st.stale(tolerance) {
			if err := st.factorise(); err != nil {
				return err
			}
		}
		st.newtonStep(st.dv, st.v)
		if step = largest(st.dv); !(step <= math.MaxFloat64) {
			return ErrNewton
		}
		for j, dv := range st.dv {
			st.next[j] = st.v[j] + dv
		}
		st.iterations++
		limited := st.share()
		if iteration >= dampFrom && !limited {
			limited = st.damp(t, step)
		}
		cut, straight := st.move(t)
		if !limited && !cut && (straight || step < roundingStep || iteration > patience && step < settledStep+settledShare*largest(st.v)) {
			st.fresh = true
			return nil
		}
	}
	return fmt.Errorf("%w (last step %.2g V)", ErrNewton, step)
}

// newtonStep writes Newton's step for v = open + k w at port voltages v, at which w was evaluated.
func (st *stage) newtonStep(step, v []float64) {
	st.r.k.times(step, st.w)
	for j, open := range st.open {
		step[j] += open - v[j]
	}
	st.jac.solve(step)
}

// share shortens the step dv, and with it next, to what the laws with narrow ranges allow; it reports whether it did.
func (st *stage) share() bool {
	part := 1.0
	for _, n := range st.r.sys.sharers {
		l := &st.r.sys.laws[n]
		part = math.Min(part, l.law.(Sharer).Share(st.next[l.first:l.first+l.count], st.v[l.first:l.first+l.count]))
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

// move takes the step to next, shortened where a law is too steep (cut), and evaluates the laws there. straight reports
// whether their outputs are what the linearisation promised.
func (st *stage) move(t float64) (cut, straight bool) {
	straight = true
	for k := range st.r.sys.laws {
		l := &st.r.sys.laws[k]
		p := l.first
		if j := l.junction; j != nil {
			v, moved := j.limited(st.next[p], st.v[p])
			i, g := j.at(v)
			guess := st.r.sys.guess[p]
			w := i - guess*v
			straight = straight && promised(w-st.w[p]-st.jacSlope[l.block]*st.dv[p], i, v, st.r.impedance[p])
			cut = cut || moved
			st.v[p], st.w[p], st.slope[l.block] = v, w, g-guess
			continue
		}
		next, w := st.next[p:p+l.count], st.w[p:p+l.count]
		cut = l.law.Limit(next, st.v[p:p+l.count]) || cut
		off := st.off[:l.count] // minus the outputs that the linearisation promises
		for a := range off {
			off[a] = -w[a]
			for b, g := range st.jacSlope[l.block+a*l.count : l.block+(a+1)*l.count] {
				off[a] -= g * st.dv[p+b]
			}
		}
		copy(st.v[p:p+l.count], next)
		st.evaluateLaw(l, st.v, t)
		for a := range off {
			straight = straight && promised(off[a]+w[a], w[a]+st.r.sys.guess[p+a]*next[a], next[a], st.r.impedance[p+a])
		}
	}
	return cut, straight
}

// promised reports whether an output of size i at voltage v and a port of some impedance, which differs by off from the
// linearisation, is what that promised.
func promised(off, i, v, impedance float64) bool {
	e := math.Abs(off)
	return e <= absoluteCurrent+relativeCurrent*math.Abs(i) || e*impedance <= absoluteVoltage+1e-14*math.Abs(v)
}

// damp halves dv, and with it next, until the simplified Newton step from there is shorter (the natural
// monotonicity test: Deuflhard, Newton Methods for Nonlinear Problems, 2004). full is the length of dv. It reports
// whether it did.
func (st *stage) damp(t, full float64) bool {
	if full < settledStep {
		return false
	}
	damped := false
	share := 1.0
	for range 16 {
		st.evaluate(st.next, t)
		st.newtonStep(st.trial, st.next)
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

// stale reports whether the factorised Jacobian differs from the present slopes by more than the relative tolerance.
func (st *stage) stale(tolerance float64) bool {
	if !st.jacValid {
		return true
	}
	for n := range st.r.sys.laws {
		l := &st.r.sys.laws[n]
		for k, a := range st.slope[l.block : l.block+l.count*l.count] {
			b := st.jacSlope[l.block+k]
			if a == b {
				continue
			}
			guess := st.r.sys.guess[l.first+k/l.count]
			if math.Abs(a-b) > tolerance*(min(math.Abs(a+guess), math.Abs(b+guess))+gmin) {
				return true
			}
		}
	}
	return false
}

func (st *stage) factorise() error {
	st.r.sys.jacobian(st.jac.lu, st.r.k, st.slope)
	copy(st.jacSlope, st.slope)
	st.jacValid, st.flowOK = false, false
	if err := st.jac.factorise(); err != nil {
		return err
	}
	st.jacValid = true
	return nil
}

// jacobian writes I - k slope into a; slope are the blocks of all laws.
func (s *system) jacobian(a []float64, k dense, slope []float64) {
	d := k.rows
	for n := range s.laws {
		l := &s.laws[n]
		if l.count == 1 {
			g := -slope[l.block]
			for at := l.first; at < d*d; at += d {
				a[at] = k.data[at] * g
			}
			continue
		}
		block := slope[l.block : l.block+l.count*l.count]
		for row := l.first; row < d*d; row += d {
			for c := range l.count {
				sum := 0.0
				for p := range l.count {
					sum -= k.data[row+p] * block[p*l.count+c]
				}
				a[row+c] = sum
			}
		}
	}
	for at := 0; at < d*d; at += d + 1 {
		a[at]++
	}
}
