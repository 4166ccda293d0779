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

// searchBent finds the voltages v of the ports left, v = open + own w.
func (st *stage) searchBent(e *elimination, t float64) bool {
	for range maxBent {
		e.own.times(e.step, e.w)
		for n, p := range e.ports {
			e.step[n] += e.open[p] - e.v[n]
		}
		if !e.newton() {
			return false
		}
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
	next, v := e.next[from:to], e.v[from:to]
	if l.junction != nil {
		next[0], cut = l.junction.limited(next[0], v[0])
	} else {
		cut = l.law.Limit(next, v)
	}
	straight = true
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
	if l.junction != nil {
		w[0], g[0] = l.junction.at(v[0])
	} else {
		l.law.Evaluate(v, t, w, g)
	}
	for a := range w {
		guess := st.r.sys.guess[l.first+a]
		w[a] -= guess * v[a]
		g[a*l.count+a] -= guess
	}
}

// newton turns the residual in step into Newton's step, and reports whether there is one. One or two junctions, the
// usual case, are solved in place.
func (e *elimination) newton() bool {
	if own, g, r := e.own.data, e.g, e.step; len(e.laws) == len(r) && len(r) <= 2 {
		if len(r) == 1 {
			r[0] /= 1 - own[0]*g[0]
			return true
		}
		a, b, c, d := 1-own[0]*g[0], -own[1]*g[1], -own[2]*g[0], 1-own[3]*g[1]
		inverse := 1 / (a*d - b*c)
		r[0], r[1] = (d*r[0]-b*r[1])*inverse, (a*r[1]-c*r[0])*inverse
		return true
	}
	e.factorise()
	if e.jac.factorise() != nil {
		return false
	}
	e.jac.solve(e.step)
	return true
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
	m := e.still.rows
	for k := range e.laws {
		l := &e.laws[k]
		copy(e.g[l.block:l.block+l.count*l.count], st.slope[l.lawSlot.block:])
	}
	e.factorise()
	if err := e.jac.factorise(); err != nil {
		return dense{}, err
	}
	// dv/dx = (I - own g)^-1 lead; dw/dx = g of that.
	for n, p := range e.ports {
		copy(e.bend.row(n), e.lead.row(p)[:m])
	}
	e.jac.solveAll(e.bend)
	clear(e.outputs.data)
	for k := range e.laws {
		l := &e.laws[k]
		for a := range l.count {
			for b, g := range e.g[l.block+a*l.count : l.block+(a+1)*l.count] {
				subtract(e.outputs.row(l.at+a), e.bend.row(l.at+b), -g)
			}
		}
	}
	copy(e.flow.data, e.still.data)
	addProduct(e.flow, e.reach, e.outputs)
	return e.flow, nil
}
