package circuit

import (
	"fmt"

	"gonum.org/v1/gonum/mat"
)

// Bilinear returns the difference equations
//
//	w[n+1] = M w[n] + F u[n],   y[n] = G w[n] + H u[n]
//
// that come of putting s = a (z - 1)/(z + 1) in the differential equations, a in rad/s: the trapezoidal rule with
// a = 2/T; the gain at z is exactly that of the network at this s. Shapes are those of A, B, C and D. It fails unless a is
// positive and finite.
//
// With R = (aI - A)⁻¹: M = R(aI + A), F = (I + M)RB, G = C, H = D + CRB; w is the state x less RB u.
func (ss *StateSpace) Bilinear(a float64) (m, f, g, h []float64, err error) {
	if !isValue(a) || a == 0 {
		return nil, nil, nil, nil, fmt.Errorf("circuit: bilinear constant is %g rad/s; give a positive number", a)
	}
	n := ss.States()
	g = append([]float64(nil), ss.C...)
	h = append([]float64(nil), ss.D...)
	if n == 0 {
		return nil, nil, g, h, nil
	}

	left := mat.NewDense(n, n, append([]float64(nil), ss.A...))
	left.Scale(-1, left)
	for i := range n {
		left.Set(i, i, left.At(i, i)+a)
	}
	right := mat.NewDense(n, n+1, nil) // aI + A, and B
	for i := range n {
		for j := range n {
			right.Set(i, j, ss.A[i*n+j])
		}
		right.Set(i, i, right.At(i, i)+a)
		right.Set(i, n, ss.B[i])
	}
	var solved mat.Dense
	if err := solved.Solve(left, right); err != nil {
		if _, poor := err.(mat.Condition); !poor { // poor condition is only the spread of the values
			return nil, nil, nil, nil, fmt.Errorf("circuit: bilinear constant %g rad/s: %w; choose another", a, err)
		}
	}
	m = make([]float64, n*n)
	f = make([]float64, n)
	for i := range n {
		for j := range n {
			m[i*n+j] = solved.At(i, j)
		}
		f[i] = solved.At(i, n)
	}
	for k := range h {
		for j := range n {
			h[k] += ss.C[k*n+j] * solved.At(j, n)
		}
	}
	for i := range n {
		for j := range n {
			f[i] += m[i*n+j] * solved.At(j, n)
		}
	}
	return m, f, g, h, nil
}
