package solver

import (
	"errors"
	"math"
)

// ErrSingular says that a linear system has no unique solution: a loop of ideal sources, or a node that
// nothing defines.
var ErrSingular = errors.New("the network equations have no unique solution")

// factor is a dense LU factorisation with partial pivoting, held in flat storage so that the
// time-stepping loop allocates nothing.
type factor struct {
	n     int
	lu    []float64 // row-major n x n
	pivot []int
}

func newFactor(n int) *factor {
	return &factor{n: n, lu: make([]float64, n*n), pivot: make([]int, n)}
}

// factorise decomposes the matrix stored in lu in place. rowScale-free partial pivoting; a pivot that
// vanishes against the largest entry of its column as assembled is singular.
func (f *factor) factorise() error {
	n, a := f.n, f.lu
	for k := 0; k < n; k++ {
		p, best := k, math.Abs(a[k*n+k])
		for r := k + 1; r < n; r++ {
			if v := math.Abs(a[r*n+k]); v > best {
				p, best = r, v
			}
		}
		f.pivot[k] = p
		if best < 1e-300 || math.IsNaN(best) {
			return ErrSingular
		}
		if p != k {
			for c := 0; c < n; c++ {
				a[k*n+c], a[p*n+c] = a[p*n+c], a[k*n+c]
			}
		}
		inv := 1 / a[k*n+k]
		top := a[k*n+k+1 : k*n+n]
		for r := k + 1; r < n; r++ {
			m := a[r*n+k]
			if m == 0 {
				continue
			}
			m *= inv
			a[r*n+k] = m
			row := a[r*n+k+1 : r*n+n]
			for c, v := range top {
				row[c] -= m * v
			}
		}
	}
	return nil
}

// solve overwrites b with the solution.
func (f *factor) solve(b []float64) {
	n, a := f.n, f.lu
	for k, p := range f.pivot {
		if p != k {
			b[k], b[p] = b[p], b[k]
		}
	}
	for r := 1; r < n; r++ {
		sum := b[r]
		for c, v := range a[r*n : r*n+r] {
			sum -= v * b[c]
		}
		b[r] = sum
	}
	for r := n - 1; r >= 0; r-- {
		sum := b[r]
		row := a[r*n : r*n+n]
		for c := r + 1; c < n; c++ {
			sum -= row[c] * b[c]
		}
		b[r] = sum / row[r]
	}
}

// dense is a row-major matrix.
type dense struct {
	rows, cols int
	data       []float64
}

func newDense(rows, cols int) dense {
	return dense{rows, cols, make([]float64, rows*cols)}
}

func (m dense) row(r int) []float64 { return m.data[r*m.cols : (r+1)*m.cols] }

// addTo adds m x to y.
func (m dense) addTo(y, x []float64) {
	for r := range y {
		sum := 0.0
		for c, v := range m.row(r) {
			sum += v * x[c]
		}
		y[r] += sum
	}
}
