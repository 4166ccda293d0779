package solver

import "slices"

// elimination is a stage with the laws eliminated that are exactly linear around a solution, as a blocking junction and
// a regulator in regulation are. With states x, inputs u and the outputs w of the laws that are left,
//
//	all ports  v = lead (x, u, 1) + response w
//
// It holds while every eliminated law stays in its region.
type elimination struct {
	regions []int // of the laws, 0: left; see Piecewise
	sound   bool  // rounding leaves it exact enough
	lead    dense
	drive   []float64 // x, u, 1
	// response of all ports, and of those left, to the outputs of those left.
	response, own dense
	slope         []float64 // of the eliminated laws, in the blocks of all; nought for those left
	w0            []float64 // w = slope v + w0 of an eliminated port

	laws  []bentLaw // those left
	ports []int     // theirs among all
	few   bool      // one or two laws of one port
	// The search for the voltages of the ports left.
	v, next, w, off []float64
	g               []float64 // dw/dv, law by law
	open            []float64 // voltages of all ports with the outputs of those left nought
	step            []float64
	jac             *factor // I - own g

	// d state' / d state = still + reach dw/dx, w being the outputs of the ports left.
	still, reach, flow dense
}

// bentLaw places a law that is left among the ports left, and its derivatives among theirs.
type bentLaw struct {
	*lawSlot
	at, block int
}

// eliminateUpTo is the number of ports up to which laws are eliminated, maxEliminations how many ways are kept.
const (
	eliminateUpTo   = blockedFrom
	maxEliminations = 12
)

// choose finds the elimination for the solution just found. One is made when its regions are met twice in a row.
func (st *stage) choose() {
	st.by = nil
	if !st.eliminates {
		return
	}
	left := 0
	for k := range st.r.sys.laws {
		l := &st.r.sys.laws[k]
		st.regions[k] = l.region(st.v)
		if st.regions[k] == 0 {
			left += l.count
		}
	}
	if left == len(st.v) {
		return
	}
	at := slices.IndexFunc(st.eliminations, func(e *elimination) bool { return slices.Equal(e.regions, st.regions) })
	if at < 0 {
		if !slices.Equal(st.regions, st.met) {
			copy(st.met, st.regions)
			return
		}
		if len(st.eliminations) == maxEliminations {
			st.eliminations = st.eliminations[1:]
		}
		at = len(st.eliminations)
		st.eliminations = append(st.eliminations, st.eliminate())
	}
	if e := st.eliminations[at]; e.sound {
		st.by = e
	}
}

// eliminate makes the elimination for the regions of the solution just found.
func (st *stage) eliminate() *elimination {
	e := newElimination(st)
	r := st.r
	m, q, b, d := r.px.cols, r.pu.cols, len(e.ports), len(st.v)
	// (I - k slope) v = px x + pu u + k w0 + k w
	given, rest, column := newDense(d, m+q+1+b), make([]float64, d), make([]float64, d)
	r.k.times(rest, e.w0)
	for row := range d {
		to := given.row(row)
		copy(to, r.px.row(row))
		copy(to[m:], r.pu.row(row))
		to[m+q] = rest[row]
		for n, p := range e.ports {
			to[m+q+1+n] = r.k.row(row)[p]
		}
	}
	jac := newFactor(d)
	r.sys.jacobian(jac.lu, r.k, e.slope)
	if jac.factorise() != nil {
		return e // not sound
	}
	all := given.clone()
	jac.solveAll(all)
	// Corrected by what is left of the equations: between blocking junctions the rounding of the matrix counts.
	e.sound = !slices.ContainsFunc(e.laws, func(l bentLaw) bool { _, ok := l.law.(Sharer); return ok })
	for c := range all.cols {
		all.column(c, column)
		given.column(c, rest)
		st.rest(rest, e.slope, column, jac)
		for row, v := range rest {
			column[row] += v
		}
		e.sound = e.sound && largest(rest) <= soundness*largest(column)
		all.setColumn(c, column)
		e.carry(r, c, column, rest)
	}
	e.lead, e.response = all.columns(0, m+q+1), all.columns(m+q+1, m+q+1+b)
	for n, p := range e.ports {
		copy(e.own.row(n), e.response.row(p))
	}
	return e
}

// newElimination sorts the laws at the solution just found into those left and those eliminated, and makes room.
func newElimination(st *stage) *elimination {
	r := st.r
	m, d := r.px.cols, len(st.v)
	e := &elimination{regions: slices.Clone(st.regions), slope: slices.Clone(st.slope), w0: slices.Clone(st.w), drive: make([]float64, m+r.pu.cols+1)}
	e.drive[len(e.drive)-1] = 1
	for k, region := range e.regions {
		l := &r.sys.laws[k]
		if region != 0 {
			l.addSlope(e.w0, e.slope, st.v, -1)
			continue
		}
		e.laws = append(e.laws, bentLaw{l, len(e.ports), len(e.g)})
		e.g = append(e.g, make([]float64, l.count*l.count)...)
		for p := l.first; p < l.first+l.count; p++ {
			e.ports = append(e.ports, p)
			e.w0[p] = 0
		}
		clear(e.slope[l.block : l.block+l.count*l.count])
	}
	b := len(e.ports)
	room := make([]float64, 5*b+d)
	for k, v := range []*[]float64{&e.v, &e.next, &e.w, &e.off, &e.step} {
		*v = room[k*b : (k+1)*b : (k+1)*b]
	}
	e.open = room[5*b:]
	if e.few = b <= 2 && b == len(e.laws); !e.few {
		e.jac = newFactor(b)
	}
	e.own, e.still, e.reach, e.flow = newDense(b, b), r.sx.clone(), newDense(m, b), newDense(m, m)
	return e
}

// carry takes column c of lead and response, v, into account for the derivatives of the states; outputs is scratch.
func (e *elimination) carry(r *reduced, c int, v, outputs []float64) {
	m, left := r.sx.rows, c-len(e.drive)
	if c >= m && left < 0 {
		return
	}
	clear(outputs)
	for k := range r.sys.laws {
		r.sys.laws[k].addSlope(outputs, e.slope, v, 1)
	}
	to, at := e.still, c
	if left >= 0 {
		outputs[e.ports[left]]++
		to, at = e.reach, left
	}
	for row := range m {
		for p, w := range outputs {
			to.row(row)[at] += r.sw.row(row)[p] * w
		}
	}
}

// soundness is the relative size of the correction of an elimination below which it is exact enough.
const soundness = 1e-7

// rest turns a given right-hand side into Newton's step from v to the solution of (I - k slope) v = given.
func (st *stage) rest(given, slope, v []float64, jac *factor) {
	w := st.trial
	clear(w)
	for k := range st.r.sys.laws {
		st.r.sys.laws[k].addSlope(w, slope, v, 1)
	}
	st.r.k.addTo(given, w)
	for p := range given {
		given[p] -= v[p]
	}
	jac.solve(given)
}

// addSlope adds factor times the slope of the law times v to w; slope are the blocks of all laws.
func (l *lawSlot) addSlope(w, slope, v []float64, factor float64) {
	for a := range l.count {
		for b, g := range slope[l.block+a*l.count : l.block+(a+1)*l.count] {
			w[l.first+a] += factor * g * v[l.first+b]
		}
	}
}
