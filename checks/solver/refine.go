package solver

import "math"

// residual is b - A z for the nodal matrix of a stage length, formed element by element: a conductance acts
// on the difference of its node potentials, so that parts of the network which only junctions tie to the
// rest keep their tiny balance. In the assembled matrix that balance drowns in the rounding of the diagonal.
type residual struct {
	sum, low []float64 // running sums and their compensation (Neumaier 1974)
}

func newResidual(n int) *residual {
	return &residual{sum: make([]float64, n), low: make([]float64, n)}
}

func (r *residual) add(k int, v float64) {
	if k < 0 {
		return
	}
	s := r.sum[k]
	t := s + v
	if math.Abs(s) >= math.Abs(v) {
		r.low[k] += (s - t) + v
	} else {
		r.low[k] += (v - t) + s
	}
	r.sum[k] = t
}

// product subtracts a*b from row k, with the rounding error of the product kept.
func (r *residual) product(k int, a, b float64) {
	if k < 0 {
		return
	}
	p := a * b
	r.add(k, -p)
	r.low[k] -= math.FMA(a, b, -p)
}

// flow subtracts the current g v(b) from the balance of both nodes.
func (r *residual) flow(b Branch, g, v float64) {
	r.product(node(b.A), g, v)
	r.product(node(b.B), -g, v)
}

// form computes b - A z; the result is left in b.
func (r *residual) form(s *system, sigma float64, b, z []float64) {
	for k := range b {
		r.sum[k], r.low[k] = b[k], 0
	}
	voltage := func(b Branch) float64 { return at(z, b.A) - at(z, b.B) }
	index := 0
	for k := range s.net.devices {
		d := &s.net.devices[k]
		c := s.current[k]
		if c >= 0 {
			b := d.branches[0]
			r.flow(b, 1, z[c])
			r.add(c, -at(z, b.A))
			r.add(c, at(z, b.B))
		}
		switch d.kind {
		case resistor:
			if d.value != 0 {
				r.flow(d.branches[0], 1/d.value, voltage(d.branches[0]))
			}
		case capacitor:
			r.flow(d.branches[0], d.value/sigma, voltage(d.branches[0]))
		case inductor:
			for j, l := range s.inductance.row(index) {
				if l != 0 {
					r.product(c, -l/sigma, z[s.current[s.inductors[j]]])
				}
			}
			index++
		case voltageControlledVoltage:
			r.product(c, -d.value, voltage(d.control))
		case voltageControlledCurrent:
			r.flow(d.branches[0], d.value, voltage(d.control))
		case currentControlledVoltage:
			r.product(c, -d.value, z[s.current[d.partner]])
		case currentControlledCurrent:
			r.flow(d.branches[0], d.value, z[s.current[d.partner]])
		case nonlinear:
			for _, p := range d.ports {
				if p.output == outCurrent && p.guess != 0 {
					r.flow(p.sense, p.guess, voltage(p.sense))
				}
			}
		}
	}
	for k := range b {
		b[k] = r.sum[k] + r.low[k]
	}
}

// refinements is how often a solution of the nodal equations is corrected by its residual.
const refinements = 3

// solveRefined solves A z = b for every column of b with the factorised, rounded matrix and corrects the solutions
// against the exact balance of the elements.
func (s *system) solveRefined(lu *factor, sigma float64, b dense) dense {
	z, correction := b.clone(), newDense(b.rows, b.cols)
	lu.solveAll(z)
	balance, work, solution := newResidual(b.rows), make([]float64, b.rows), make([]float64, b.rows)
	for range refinements {
		for c := range b.cols {
			b.column(c, work)
			z.column(c, solution)
			balance.form(s, sigma, work, solution)
			correction.setColumn(c, work)
		}
		lu.solveAll(correction)
		for k, v := range correction.data {
			z.data[k] += v
		}
	}
	return z
}
