package solver

import (
	"errors"
	"math"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/blas64"
	"gonum.org/v1/gonum/lapack/lapack64"
)

// blockedFrom is the order from which the blocked routines of the numerical library beat the plain loops here,
// which are for the handful of ports of a usual island.
const blockedFrom = 24

// ErrSingular says that a linear system has no unique solution: a loop of ideal sources, or a node that
// nothing defines.
var ErrSingular = errors.New("the network equations have no unique solution")

// factor is a dense LU factorisation with partial pivoting, held in flat storage so that the
// time-stepping loop allocates nothing.
type factor struct {
	n     int
	lu    []float64 // row-major n x n
	pivot []int
	// inverse holds one over each pivot, below blockedFrom.
	inverse []float64
}

func newFactor(n int) *factor {
	return &factor{n: n, lu: make([]float64, n*n), pivot: make([]int, n), inverse: make([]float64, n)}
}

// factorise decomposes the matrix stored in lu in place. rowScale-free partial pivoting; a pivot that
// vanishes against the largest entry of its column as assembled is singular.
func (f *factor) factorise() error {
	n, a := f.n, f.lu
	if n >= blockedFrom {
		if !lapack64.Getrf(f.general(), f.pivot) {
			return ErrSingular
		}
		return nil
	}
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
		f.inverse[k] = inv
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
	if n >= blockedFrom {
		f.solveAll(dense{n, 1, b})
		return
	}
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
		rest := b[r+1 : n]
		for c, v := range a[r*n+r+1 : r*n+n] {
			sum -= v * rest[c]
		}
		b[r] = sum * f.inverse[r]
	}
}

func (f *factor) general() blas64.General {
	return blas64.General{Rows: f.n, Cols: f.n, Data: f.lu, Stride: f.n}
}

// solveAll overwrites each column of b, n x m, with the solution for it.
func (f *factor) solveAll(b dense) {
	if f.n >= blockedFrom {
		lapack64.Getrs(blas.NoTrans, f.general(), b.general(), f.pivot)
		return
	}
	m := b.cols
	for k, p := range f.pivot {
		if p != k {
			for c := range m {
				b.data[k*m+c], b.data[p*m+c] = b.data[p*m+c], b.data[k*m+c]
			}
		}
	}
	n, a := f.n, f.lu
	for r := 1; r < n; r++ {
		row := b.row(r)
		for j, v := range a[r*n : r*n+r] {
			subtract(row, b.row(j), v)
		}
	}
	for r := n - 1; r >= 0; r-- {
		row := b.row(r)
		for j := r + 1; j < n; j++ {
			subtract(row, b.row(j), a[r*n+j])
		}
		for c := range row {
			row[c] *= f.inverse[r]
		}
	}
}

// subtract takes factor x from y.
func subtract(y, x []float64, factor float64) {
	if factor == 0 {
		return
	}
	for c, v := range x {
		y[c] -= factor * v
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

func (m dense) general() blas64.General {
	return blas64.General{Rows: m.rows, Cols: m.cols, Data: m.data, Stride: max(1, m.cols)}
}

func (m dense) clone() dense {
	return dense{m.rows, m.cols, append([]float64(nil), m.data...)}
}

// column copies column c into v, setColumn v into column c.
func (m dense) column(c int, v []float64) {
	for r := range v {
		v[r] = m.data[r*m.cols+c]
	}
}

func (m dense) setColumn(c int, v []float64) {
	for r, x := range v {
		m.data[r*m.cols+c] = x
	}
}

// columns is a copy of the columns from up to but not including to.
func (m dense) columns(from, to int) dense {
	out := newDense(m.rows, to-from)
	for r := range m.rows {
		copy(out.row(r), m.row(r)[from:to])
	}
	return out
}

func (m dense) row(r int) []float64 { return m.data[r*m.cols : (r+1)*m.cols] }

// times sets y = m x.
func (m dense) times(y, x []float64) {
	clear(y)
	m.addTo(y, x)
}

// addTo adds m x to y.
func (m dense) addTo(y, x []float64) {
	if m.rows >= blockedFrom && m.cols >= blockedFrom {
		blas64.Gemv(blas.NoTrans, 1, m.general(), blas64.Vector{N: m.cols, Data: x, Inc: 1}, 1, blas64.Vector{N: m.rows, Data: y, Inc: 1})
		return
	}
	n, data := len(x), m.data
	for r := range y {
		sum := 0.0
		row := data[:n:n]
		data = data[n:]
		for c, v := range x {
			sum += row[c] * v
		}
		y[r] += sum
	}
}

// addProduct adds a b to out; out is neither.
func addProduct(out, a, b dense) {
	if a.rows >= blockedFrom || a.cols >= blockedFrom {
		if a.rows > 0 && a.cols > 0 && b.cols > 0 {
			blas64.Gemm(blas.NoTrans, blas.NoTrans, 1, a.general(), b.general(), 1, out.general())
		}
		return
	}
	for r := range a.rows {
		row := out.row(r)
		for k, v := range a.row(r) {
			if v == 0 {
				continue
			}
			for c, w := range b.row(k) {
				row[c] += v * w
			}
		}
	}
}
