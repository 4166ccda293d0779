package solver

import "math"

// maxBent is how many iterations the laws left by an elimination may take before all laws are searched together.
const maxBent = 8

// solveBent solves the stage by its elimination, with Newton's method for the laws that are left alone. It reports
// whether that found a solution in which the eliminated ones keep their regions; if not, nothing is changed.
func (st *stage) solveBent(x, u []float64, t float64) bool {
	e := st.by
	copy(e.drive, x)
	copy(e.drive[len(x):], u)
	e.lead.times(e.open, e.drive)
	for n, p := range e.ports {
		e.v[n], e.w[n] = st.v[p], st.w[p]
	}
	for k := range e.laws {
		l := &e.laws[k]
		copy(e.g[l.block:l.block+l.count*l.count], st.slope[l.lawSlot.block:])
		if st.r.sys.timed {
			copy(e.next, e.v)
			st.evaluateBent(e, l, t)
		}
	}
	if len(e.ports) > 0 && !st.searchBent(e, t) {
		return false
	}
	e.response.times(st.next, e.w)
	for p, open := range e.open {
		st.next[p] += open
	}
	for k, region := range e.regions {
		if region != 0 && st.r.sys.laws[k].region(st.next) != region {
			return false
		}
	}
	copy(st.v, st.next)
	copy(st.w, e.w0)
	for k, region := range e.regions {
		if region != 0 {
			st.r.sys.laws[k].addSlope(st.w, e.slope, st.v, 1)
		}
	}
	for n, p := range e.ports {
		st.v[p], st.w[p] = e.v[n], e.w[n]
	}
	for k := range e.laws {
		l := &e.laws[k]
		copy(st.slope[l.lawSlot.block:], e.g[l.block:l.block+l.count*l.count])
	}
	return true
}

// stays reports whether the laws left are still bent where they are now.
func (e *elimination) stays() bool {
	for k := range e.laws {
		l := &e.laws[k]
		if l.junction != nil && l.junction.region(e.v[l.at]) != 0 || l.piecewise != nil && l.piecewise.Region(e.v[l.at:l.at+l.count]) != 0 {
			return false
		}
	}
	return true
}

// searchBent finds the voltages v of the ports left, v = open + own w.
func (st *stage) searchBent(e *elimination, t float64) bool {
	for range maxBent {
		e.own.times(e.step, e.w)
		for n, p := range e.ports {
			e.step[n] += e.open[p] - e.v[n]
		}
		if !e.prepare() {
			return false
		}
		e.solve(e.step)
		step := largest(e.step)
		if !(step <= math.MaxFloat64) {
			return false
		}
		st.iterations++
		for n, dv := range e.step {
			e.next[n] = e.v[n] + dv
		}
		cut, straight := false, true
		for k := range e.laws {
			c, s := st.moveBent(e, &e.laws[k], t)
			cut, straight = cut || c, straight && s
		}
		if !cut && (straight || step < roundingStep) {
			return true
		}
	}
	return false
}

// moveBent takes the step of one law left, as stage.move does.
func (st *stage) moveBent(e *elimination, l *bentLaw, t float64) (cut, straight bool) {
	from, to := l.at, l.at+l.count
	if l.junction != nil {
		guess, promise := st.r.sys.guess[l.first], e.w[from]+e.g[l.block]*e.step[from]
		v, moved := l.junction.limited(e.next[from], e.v[from])
		i, g := l.junction.at(v)
		e.v[from], e.w[from], e.g[l.block] = v, i-guess*v, g-guess
		return moved, promised(e.w[from]-promise, i, v, math.Abs(e.own.data[from*e.own.cols+from]))
	}
	next, v := e.next[from:to], e.v[from:to]
	cut, straight = l.law.Limit(next, v), true
	off := e.off[from:to]
	for a := range off {
		off[a] = -e.w[from+a]
		for b, g := range e.g[l.block+a*l.count : l.block+(a+1)*l.count] {
			off[a] -= g * e.step[from+b]
		}
	}
	st.evaluateBent(e, l, t)
	for a := range off {
		n := from + a
		i := e.w[n] + st.r.sys.guess[l.first+a]*e.v[n]
		straight = straight && promised(off[a]+e.w[n], i, e.v[n], math.Abs(e.own.data[n*e.own.cols+n]))
	}
	return cut, straight
}

// evaluateBent moves a law left to next and evaluates it there.
func (st *stage) evaluateBent(e *elimination, l *bentLaw, t float64) {
	v, w, g := e.v[l.at:l.at+l.count], e.w[l.at:l.at+l.count], e.g[l.block:l.block+l.count*l.count]
	copy(v, e.next[l.at:])
	l.law.Evaluate(v, t, w, g)
	for a := range w {
		guess := st.r.sys.guess[l.first+a]
		w[a] -= guess * v[a]
		g[a*l.count+a] -= guess
	}
}

// prepare readies solve for the present derivatives, and reports whether there is a solution.
func (e *elimination) prepare() bool {
	if e.few {
		return true
	}
	e.factorise()
	return e.jac.factorise() == nil
}

// solve solves (I - own g) x = r in place. One or two laws of one port, the usual case, need no factors.
func (e *elimination) solve(r []float64) {
	own, g := e.own.data, e.g
	switch {
	case !e.few:
		e.jac.solve(r)
	case len(r) == 1:
		r[0] /= 1 - own[0]*g[0]
	default:
		a, b, c, d := 1-own[0]*g[0], -own[1]*g[1], -own[2]*g[0], 1-own[3]*g[1]
		inverse := 1 / (a*d - b*c)
		r[0], r[1] = (d*r[0]-b*r[1])*inverse, (a*r[1]-c*r[0])*inverse
	}
}

// factorise writes I - own g.
func (e *elimination) factorise() {
	b, a := len(e.ports), e.jac.lu
	for k := range e.laws {
		l := &e.laws[k]
		for row := range b {
			for c := range l.count {
				sum := 0.0
				for p := range l.count {
					sum -= e.own.data[row*b+l.at+p] * e.g[l.block+p*l.count+c]
				}
				a[row*b+l.at+c] = sum
			}
		}
	}
	for at := 0; at < b*b; at += b + 1 {
		a[at]++
	}
}

// bentTransition is transition by an elimination that holds at the solution.
func (st *stage) bentTransition(e *elimination) (dense, error) {
	if len(e.ports) == 0 {
		return e.still, nil
	}
	for k := range e.laws {
		l := &e.laws[k]
		copy(e.g[l.block:l.block+l.count*l.count], st.slope[l.lawSlot.block:])
	}
	if !e.prepare() {
		return dense{}, ErrSingular
	}
	m := e.still.rows
	for c := range m {
		// dv/dx = (I - own g)^-1 lead; dw/dx = g of that.
		for n, p := range e.ports {
			e.step[n] = e.lead.data[p*e.lead.cols+c]
		}
		e.solve(e.step)
		for k := range e.laws {
			l := &e.laws[k]
			for a := range l.count {
				sum := 0.0
				for b, g := range e.g[l.block+a*l.count : l.block+(a+1)*l.count] {
					sum += g * e.step[l.at+b]
				}
				e.off[l.at+a] = sum
			}
		}
		for r := range m {
			sum := e.still.data[r*m+c]
			for n, dw := range e.off {
				sum += e.reach.data[r*len(e.off)+n] * dw
			}
			e.flow.data[r*m+c] = sum
		}
	}
	return e.flow, nil
}
