package solver

import "math"

// reduced is the linear part of a system for one stage length, seen from its states x, inputs u and ports.
// With w the port outputs beyond the stand-in conductances,
//
//	unknowns  z = zx x + zu u + zw w
//	ports     v = px x + pu u + k w
//	states   x' = sx x + su u + sw w
type reduced struct {
	sys        *system
	sigma      float64
	zx, zu, zw dense
	px, pu, k  dense
	sx, su, sw dense
	impedance  []float64 // |k[j][j]|, the port's own impedance in parallel with its stand-in
}

// reduce factorises the nodal matrix for stage length sigma (s) and eliminates everything but states, inputs
// and ports.
func (s *system) reduce(sigma float64) (*reduced, error) {
	n, m, q, d := s.unknowns, s.states(), len(s.sources), len(s.ports)
	lu := newFactor(n)
	s.assemble(lu.lu, sigma)
	if err := lu.factorise(); err != nil {
		return nil, err
	}
	r := &reduced{
		sys: s, sigma: sigma,
		zx: newDense(n, m), zu: newDense(n, q), zw: newDense(n, d),
		px: newDense(d, m), pu: newDense(d, q), k: newDense(d, d),
		sx: newDense(m, m), su: newDense(m, q), sw: newDense(m, d),
		impedance: make([]float64, d),
	}
	b, unknowns, work := make([]float64, n), make([]float64, n), make([]float64, n)
	balance := newResidual(n)
	column := func(fill func(), z, p, x dense, c int) error {
		for i := range b {
			b[i] = 0
		}
		fill()
		s.solveRefined(lu, sigma, b, unknowns, work, balance)
		for i, v := range unknowns {
			if math.IsNaN(v) || math.IsInf(v, 0) {
				return ErrSingular
			}
			z.row(i)[c] = v
		}
		for j := range s.ports {
			p.row(j)[c] = s.sensed(j, unknowns)
		}
		for k := range x.rows {
			x.row(k)[c] = s.stateOf(k, unknowns)
		}
		return nil
	}
	rows := s.voltageRows()
	for c := range m {
		if err := column(func() { s.stateColumn(b, c, sigma) }, r.zx, r.px, r.sx, c); err != nil {
			return nil, err
		}
	}
	for c := range q {
		if err := column(func() { s.inputColumn(b, c) }, r.zu, r.pu, r.su, c); err != nil {
			return nil, err
		}
	}
	for c := range d {
		if err := column(func() { s.portColumn(b, c, rows[c]) }, r.zw, r.k, r.sw, c); err != nil {
			return nil, err
		}
		r.impedance[c] = math.Abs(r.k.row(c)[c])
	}
	return r, nil
}

// sensed reads what port j senses off the unknowns z.
func (s *system) sensed(j int, z []float64) float64 {
	p := s.ports[j]
	if p.isCurrent {
		if c := s.current[p.senseOf]; c >= 0 {
			return z[c]
		}
		return 0
	}
	return at(z, p.sense.A) - at(z, p.sense.B)
}

// stateOf reads state k off the unknowns z.
func (s *system) stateOf(k int, z []float64) float64 {
	if k < len(s.capacitors) {
		b := s.net.devices[s.capacitors[k]].branches[0]
		return at(z, b.A) - at(z, b.B)
	}
	sum := 0.0
	for j, l := range s.inductance.row(k - len(s.capacitors)) {
		if l != 0 {
			sum += l * z[s.current[s.inductors[j]]]
		}
	}
	return sum
}

// at is the potential of a node.
func at(z []float64, n Node) float64 {
	if n == Reference {
		return 0
	}
	return z[node(n)]
}
