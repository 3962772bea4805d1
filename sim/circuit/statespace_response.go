package circuit

// Response stores in dst[k] the gain of output k, V_out/V_open, at the complex frequency s in rad/s:
// C(sI - A)⁻¹B + D. It panics unless len(dst) is Outputs. At a natural frequency the result is infinite or not
// a number.
func (ss *StateSpace) Response(dst []complex128, s complex128) {
	ss.Responses([][]complex128{dst}, []complex128{s})
}

// Responses stores in dst[i][k] the gain of output k at s[i] in rad/s; see Response. It allocates its work space once
// for all frequencies.
func (ss *StateSpace) Responses(dst [][]complex128, s []complex128) {
	n := ss.States()
	work := newResolvent(n)
	for i, si := range s {
		if len(dst[i]) != ss.Outputs() {
			panic("circuit: Response: one place in dst for each output, please")
		}
		x := work.solve(ss, si)
		for k := range dst[i] {
			sum := complex(ss.D[k], 0)
			for j, c := range ss.C[k*n : (k+1)*n] {
				sum += complex(c, 0) * x[j]
			}
			dst[i][k] = sum
		}
	}
}

// A resolvent solves (sI - A)x = B.
type resolvent struct {
	n int
	m []complex128
	x []complex128
}

func newResolvent(n int) *resolvent {
	return &resolvent{n, make([]complex128, n*n), make([]complex128, n)}
}

// solve works by elimination with row exchanges. A Hessenberg form would cost less at many frequencies, but
// the rotations that make it mix fast and slow states, and the slow ones lose their digits.
func (r *resolvent) solve(ss *StateSpace, s complex128) []complex128 {
	n := r.n
	for i, v := range ss.A {
		r.m[i] = complex(-v, 0)
	}
	for i := range n {
		r.m[i*n+i] += s
		r.x[i] = complex(ss.B[i], 0)
	}
	solveComplex(r.m, r.x)
	return r.x
}

// solveComplex overwrites x with m⁻¹x and m with its factors.
func solveComplex(m, x []complex128) {
	n := len(x)
	for k := range n {
		p, best := k, size1(m[k*n+k])
		for i := k + 1; i < n; i++ {
			if v := size1(m[i*n+k]); v > best {
				p, best = i, v
			}
		}
		if p != k {
			for j := k; j < n; j++ {
				m[k*n+j], m[p*n+j] = m[p*n+j], m[k*n+j]
			}
			x[k], x[p] = x[p], x[k]
		}
		inverse := 1 / m[k*n+k]
		pivot := m[k*n+k+1 : (k+1)*n]
		for i := k + 1; i < n; i++ {
			f := m[i*n+k]
			if f == 0 {
				continue
			}
			f *= inverse
			row := m[i*n+k+1 : (i+1)*n]
			for j, v := range pivot {
				row[j] -= f * v
			}
			x[i] -= f * x[k]
		}
		m[k*n+k] = inverse
	}
	for k := n - 1; k >= 0; k-- {
		sum := x[k]
		for j := k + 1; j < n; j++ {
			sum -= m[k*n+j] * x[j]
		}
		x[k] = sum * m[k*n+k]
	}
}

// size1 is |Re z| + |Im z|, which is enough to choose a pivot.
func size1(z complex128) float64 {
	re, im := real(z), imag(z)
	if re < 0 {
		re = -re
	}
	if im < 0 {
		im = -im
	}
	return re + im
}
