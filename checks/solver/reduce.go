package solver

import (
	"errors"
	"fmt"
	"math"
)

// maxUnknowns bounds one independent part of a network: its equations are dense, and their factorisation grows with the
// third power.
const maxUnknowns = 2000

// ErrTooLarge says that an independent part of a network has too many unknowns.
var ErrTooLarge = errors.New("too large to be solved")

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
	if n > maxUnknowns {
		return nil, fmt.Errorf("%w: %d unknowns in one independent part; expected at most %d", ErrTooLarge, n, maxUnknowns)
	}
	lu := newFactor(n)
	s.assemble(lu.lu, sigma)
	if err := lu.factorise(); err != nil {
		return nil, err
	}
	// One column of right-hand sides for each state, input and port.
	b, buffer := newDense(n, m+q+d), make([]float64, n)
	rows := s.voltageRows()
	for c := range b.cols {
		for i := range buffer {
			buffer[i] = 0
		}
		switch {
		case c < m:
			s.stateColumn(buffer, c, sigma)
		case c < m+q:
			s.inputColumn(buffer, c-m)
		default:
			s.portColumn(buffer, c-m-q, rows[c-m-q])
		}
		b.setColumn(c, buffer)
	}
	z := s.solveRefined(lu, sigma, b)
	r := &reduced{
		sys: s, sigma: sigma,
		zx: z.columns(0, m), zu: z.columns(m, m+q), zw: z.columns(m+q, m+q+d),
		px: newDense(d, m), pu: newDense(d, q), k: newDense(d, d),
		sx: newDense(m, m), su: newDense(m, q), sw: newDense(m, d),
		impedance: make([]float64, d),
	}
	for c := range z.cols {
		z.column(c, buffer)
		for _, v := range buffer {
			if math.IsNaN(v) || math.IsInf(v, 0) {
				return nil, ErrSingular
			}
		}
		p, x, at := r.px, r.sx, c
		switch {
		case c >= m+q:
			p, x, at = r.k, r.sw, c-m-q
		case c >= m:
			p, x, at = r.pu, r.su, c-m
		}
		for j := range s.ports {
			p.row(j)[at] = s.sensed(j, buffer)
		}
		for k := range x.rows {
			x.row(k)[at] = s.stateOf(k, buffer)
		}
	}
	for j := range s.ports {
		r.impedance[j] = math.Abs(r.k.row(j)[j])
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
