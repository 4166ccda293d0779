package solver

import "math"

// stage solves one implicit stage after another. It owns all storage, so that stepping allocates nothing.
type stage struct {
	r *reduced

	v     []float64 // port voltages, the solution of the last stage
	fresh bool      // w and slope belong to v
	w     []float64 // port outputs beyond the stand-in
	slope []float64 // dw/dv, the block of one law after another; see lawSlot.block
	open  []float64 // port voltages with all w zero
	dv    []float64
	next  []float64 // proposed port voltages
	trial []float64
	off   []float64 // outputs of one law less those that the linearisation promised

	jac      *factor   // I - k slope
	jacSlope []float64 // the slopes jac was factorised for
	jacValid bool
	flow     dense // d state' / d state for jacSlope
	flowOK   bool
	// dv/dx and dw/dx, d x m, for flow
	sensitivity, outputs dense

	eliminates   bool         // laws are eliminated at all
	by           *elimination // which holds at the solution, nil: none
	eliminations []*elimination
	regions, met []int // of the laws at this solution and at the last one for which there was no elimination

	iterations int
}

func newStage(r *reduced) *stage {
	d := len(r.sys.ports)
	vector := func() []float64 { return make([]float64, d) }
	return &stage{
		r: r,
		v: vector(), w: vector(), slope: make([]float64, r.sys.slopes), open: vector(), dv: vector(), next: vector(), trial: vector(),
		regions: make([]int, len(r.sys.laws)), met: make([]int, len(r.sys.laws)),
		eliminates: d <= eliminateUpTo, off: vector(), jac: newFactor(d), jacSlope: make([]float64, r.sys.slopes),
	}
}

// bias sets the port voltages from which the next search starts.
func (st *stage) bias(v []float64) {
	copy(st.v, v)
	st.fresh, st.by = false, nil
}

// evaluate computes w and its derivatives at port voltages v.
func (st *stage) evaluate(v []float64, t float64) {
	guess := st.r.sys.guess
	for k := range st.r.sys.laws {
		l := &st.r.sys.laws[k]
		p := l.first
		if l.junction != nil {
			i, g := l.junction.at(v[p])
			st.w[p], st.slope[l.block] = i-guess[p]*v[p], g-guess[p]
			continue
		}
		st.evaluateLaw(l, v, t)
	}
}

func (st *stage) evaluateLaw(l *lawSlot, v []float64, t float64) {
	p := l.first
	w, g := st.w[p:p+l.count], st.slope[l.block:l.block+l.count*l.count]
	l.law.Evaluate(v[p:p+l.count], t, w, g)
	for a := range w {
		guess := st.r.sys.guess[p+a]
		w[a] -= guess * v[p+a]
		g[a*l.count+a] -= guess
	}
}

// states writes the states after the stage with predicted states x and inputs u.
func (st *stage) states(out, x, u []float64) {
	st.r.sx.times(out, x)
	st.r.su.addTo(out, u)
	st.r.sw.addTo(out, st.w)
}

// currents writes the port currents of the last solution.
func (st *stage) currents(out []float64) {
	for j, guess := range st.r.sys.guess {
		out[j] = st.w[j] + guess*st.v[j]
	}
}

// unknowns writes all node potentials and branch currents after the stage.
func (st *stage) unknowns(out, x, u []float64) {
	st.r.zx.times(out, x)
	st.r.zu.addTo(out, u)
	st.r.zw.addTo(out, st.w)
}

// transition returns the derivative of the states after the stage by the predicted states, m x m.
func (st *stage) transition() (dense, error) {
	if st.by != nil {
		return st.bentTransition(st.by)
	}
	if st.stale(slack) {
		if err := st.factorise(); err != nil {
			return dense{}, err
		}
	}
	if st.flowOK {
		return st.flow, nil
	}
	d, m := len(st.v), st.r.sys.states()
	if st.flow.data == nil {
		st.flow, st.sensitivity, st.outputs = newDense(m, m), newDense(d, m), newDense(d, m)
	}
	copy(st.flow.data, st.r.sx.data)
	// d v / d x = (I - k slope)^-1 px; d w / d x = slope of that; d x' / d x = sx + sw of that.
	copy(st.sensitivity.data, st.r.px.data)
	st.jac.solveAll(st.sensitivity)
	for k := range st.r.sys.laws {
		l := &st.r.sys.laws[k]
		for a := range l.count {
			row := st.outputs.row(l.first + a)
			for c := range row {
				row[c] = 0
			}
			for b, g := range st.jacSlope[l.block+a*l.count : l.block+(a+1)*l.count] {
				subtract(row, st.sensitivity.row(l.first+b), -g)
			}
		}
	}
	addProduct(st.flow, st.r.sw, st.outputs)
	st.flowOK = true
	return st.flow, nil
}

// largest is the largest magnitude; NaN if there is one.
func largest(v []float64) float64 {
	m := 0.0
	for _, x := range v {
		if a := math.Abs(x); !(a <= m) {
			if a != a {
				return a
			}
			m = a
		}
	}
	return m
}
