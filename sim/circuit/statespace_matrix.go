package circuit

import (
	"math"
	"sort"
)

// A matrix is dense, row by row. Unlike gonum's it may have no rows or no columns, which networks
// without coils, capacitors or resistors need.
type matrix struct {
	rows, cols int
	data       []float64
}

func newMatrix(rows, cols int) matrix { return matrix{rows, cols, make([]float64, rows*cols)} }

func identity(n int) matrix {
	m := newMatrix(n, n)
	for i := range n {
		m.set(i, i, 1)
	}
	return m
}

func (m matrix) at(i, j int) float64     { return m.data[i*m.cols+j] }
func (m matrix) set(i, j int, v float64) { m.data[i*m.cols+j] = v }

// t is the transpose.
func (m matrix) t() matrix {
	r := newMatrix(m.cols, m.rows)
	for i := range m.rows {
		for j := range m.cols {
			r.set(j, i, m.at(i, j))
		}
	}
	return r
}

func (m matrix) mul(o matrix) matrix {
	if m.cols != o.rows {
		panic("circuit: matrices do not fit")
	}
	r := newMatrix(m.rows, o.cols)
	for i := range m.rows {
		for k := range m.cols {
			f := m.at(i, k)
			if f == 0 {
				continue
			}
			for j := range o.cols {
				r.data[i*r.cols+j] += f * o.at(k, j)
			}
		}
	}
	return r
}

func (m matrix) add(o matrix) matrix { return m.plus(1, o) }
func (m matrix) sub(o matrix) matrix { return m.plus(-1, o) }

func (m matrix) plus(f float64, o matrix) matrix {
	if m.rows != o.rows || m.cols != o.cols {
		panic("circuit: matrices do not fit")
	}
	r := newMatrix(m.rows, m.cols)
	for i := range r.data {
		r.data[i] = m.data[i] + f*o.data[i]
	}
	return r
}

func (m matrix) scale(f float64) matrix {
	r := newMatrix(m.rows, m.cols)
	for i := range r.data {
		r.data[i] = f * m.data[i]
	}
	return r
}

// paste overwrites m with o, its first entry at row i, column j.
func (m matrix) paste(i, j int, o matrix) {
	for k := range o.rows {
		copy(m.data[(i+k)*m.cols+j:][:o.cols], o.data[k*o.cols:][:o.cols])
	}
}

// beside is m with the columns of o to the right.
func (m matrix) beside(o matrix) matrix {
	r := newMatrix(m.rows, m.cols+o.cols)
	r.paste(0, 0, m)
	r.paste(0, m.cols, o)
	return r
}

// pick is the matrix of the named rows and columns.
func (m matrix) pick(rows, cols []int) matrix {
	r := newMatrix(len(rows), len(cols))
	for i, p := range rows {
		for j, q := range cols {
			r.set(i, j, m.at(p, q))
		}
	}
	return r
}

// cholesky gives the upper triangular R with RᵀR = m; ok is false if m is not positive definite.
func (m matrix) cholesky() (r matrix, ok bool) {
	n := m.rows
	r = newMatrix(n, n)
	for i := range n {
		for j := i; j < n; j++ {
			v := m.at(i, j)
			for k := range i {
				v -= r.at(k, i) * r.at(k, j)
			}
			if j > i {
				r.set(i, j, v/r.at(i, i))
				continue
			}
			if !(v > 0) || math.IsInf(v, 1) {
				return r, false
			}
			r.set(i, i, math.Sqrt(v))
		}
	}
	return r, true
}

// cholSolve solves RᵀR x = rhs, R = r from cholesky.
func (r matrix) cholSolve(rhs matrix) matrix {
	n := r.rows
	x := newMatrix(n, rhs.cols)
	copy(x.data, rhs.data)
	for c := range rhs.cols {
		for i := range n {
			v := x.at(i, c)
			for k := range i {
				v -= r.at(k, i) * x.at(k, c)
			}
			x.set(i, c, v/r.at(i, i))
		}
		for i := n - 1; i >= 0; i-- {
			v := x.at(i, c)
			for k := i + 1; k < n; k++ {
				v -= r.at(i, k) * x.at(k, c)
			}
			x.set(i, c, v/r.at(i, i))
		}
	}
	return x
}

// inverseUpper inverts an upper triangular matrix.
func (r matrix) inverseUpper() matrix {
	n := r.rows
	x := identity(n)
	for c := range n {
		for i := c; i >= 0; i-- {
			v := x.at(i, c)
			for k := i + 1; k <= c; k++ {
				v -= r.at(i, k) * x.at(k, c)
			}
			x.set(i, c, v/r.at(i, i))
		}
	}
	return x
}

// upTo is 0 … n-1.
func upTo(n int) []int { return span(0, n) }

// span is from … to-1.
func span(from, to int) []int {
	s := make([]int, 0, to-from)
	for i := from; i < to; i++ {
		s = append(s, i)
	}
	return s
}

// sortBy sorts a list of indices, equal ones staying in order.
func sortBy(list []int, less func(i, j int) bool) {
	sort.SliceStable(list, func(a, b int) bool { return less(list[a], list[b]) })
}

// isValue tells whether v can be the value of a part.
func isValue(v float64) bool { return v >= 0 && !math.IsInf(v, 1) }

// geometricMean is √(ab), without overflow.
func geometricMean(a, b float64) float64 { return math.Sqrt(a) * math.Sqrt(b) }
