package ladder

import (
	"math"
	"slices"

	"sixdown/xover/align"
)

// solveThreeWay returns the polynomial p of the outer branches, ascending powers with p[0] = p[order] = 1, and the gain g
// of the mid: with s in units of the mean frequency, λ² = r = ratio, and n the order,
//
//	sum = 1/p(λs) + 1/p(λ/s) + g·rⁿ/(p(λs)·p(λ/s)), |sum| = 1 on the imaginary axis.
//
// It follows the solution from r = ∞, where the crossovers do not see each other and p is that of a two-way
// whose sum is flat, by Newton's method in steps of 1/r, small enough not to land on another solution.
func solveThreeWay(order int, reversed bool, ratio float64) (p []float64, gain float64, ok bool) {
	start := align.Spec{Shape: align.LinkwitzRiley, Order: order}
	if order%2 != 0 {
		start.Shape = align.Butterworth
	}
	a, err := align.New(start)
	if err != nil {
		return nil, 0, false
	}
	p = a.Denominator()
	p[order] = 1 // which it is but for rounding
	gain = 1
	if reversed {
		gain = -1
	}
	x := append(p[1:order:order], gain)
	end := 1 / ratio
	for t, step := 0.0, end/8; t < end; {
		next := slices.Clone(x)
		if to := min(t+step, end); newton(next, to) && near(next, x) {
			x, t, step = next, to, 2*step
		} else if step /= 2; step < end/1e6 {
			return nil, 0, false
		}
	}
	copy(p[1:order], x)
	return p, x[order-1], true
}

// near says that no value of x moved by more than a fifth.
func near(x, from []float64) bool {
	for i := range x {
		if !(math.Abs(x[i]-from[i]) <= 0.2*math.Abs(from[i])) {
			return false
		}
	}
	return true
}

// newton improves x, the unknowns of flatness, for 1/r = t. It says whether it converged.
func newton(x []float64, t float64) bool {
	n := len(x)
	z := make([]complex128, n)
	const h = 0x1p-100
	for range 30 {
		system := make([][]float64, n) // Jacobian, and the residual as its last column
		for i := range system {
			system[i] = make([]float64, n+1)
		}
		for j := range n {
			// The derivative by a complex step has no rounding error to speak of: W. Squire and G. Trapp,
			// "Using Complex Variables to Estimate Derivatives of Real Functions", SIAM Review 40(1), 1998.
			for i := range z {
				z[i] = complex(x[i], 0)
			}
			z[j] += complex(0, h)
			for i, v := range flatness(z, t) {
				system[i][j] = imag(v) / h
				system[i][n] = real(v)
			}
		}
		if !eliminate(system) {
			return false
		}
		small := true
		for i := range x {
			d := system[i][n]
			x[i] -= d
			small = small && math.Abs(d) <= 1e-14*math.Abs(x[i])
		}
		if small {
			return true
		}
	}
	// At the level of rounding the steps may go on for ever; what counts is that nothing is left.
	for i := range x {
		z[i] = complex(x[i], 0)
	}
	for _, v := range flatness(z, t) {
		if !(math.Abs(real(v)) < 1e-13) {
			return false
		}
	}
	return true
}

// flatness returns what is left of |sum| = 1, a value an unknown; the unknowns are p[1] … p[n-1] and g.
//
// With A = p(λs), B = p(λ/s), κ = g·rⁿ, and a star for the value at -s, |sum|² = 1 is
// (A + B + κ)(A* + B* + κ) = AA*·BB*. With M = AA*, M' = BB* that is
//
//	κ² + 1 + κ(A + A* + B + B*) + AB* + A*B - (M - 1)(M' - 1) = 0,
//
// even, and the same at 1/s: so the coefficients of s⁰, s² … s^(2n-2) are all there is. Each is divided by the power of
// r that it grows with, r^(2n-j) for s^2j, so that the equations stay regular as t = 1/r goes to 0.
func flatness(x []complex128, t float64) []complex128 {
	n := len(x)
	a := make([]complex128, n+1)
	a[0], a[n] = 1, 1
	copy(a[1:n], x)
	g := x[n-1]
	power := func(k int) complex128 { return complex(math.Pow(t, float64(k)), 0) } // r^-k

	m := make([]complex128, n+1) // M = Σ m[i]·(λs)^2i
	for i := range m {
		for j := max(0, 2*i-n); j <= min(n, 2*i); j++ {
			m[i] += sign(j) * a[j] * a[2*i-j]
		}
	}

	left := make([]complex128, n)
	for j := range left {
		var v complex128
		scale := 2*n - j
		if j == 0 {
			v = g*g + power(scale)
		}
		if 2*j <= n {
			// κ(A + A* + B + B*), at s⁰ twice over
			v += 2 * g * a[2*j] * power(n-2*j)
			if j == 0 {
				v += 2 * g * power(n)
			}
		}
		for i := 0; i+2*j <= n; i++ { // AB* + A*B
			v += 2 * sign(i) * a[i] * a[i+2*j] * power(scale-i-j)
		}
		for i := 1; i+j <= n; i++ { // (M - 1)(M' - 1)
			v -= m[i] * m[i+j] * power(scale-2*i-j)
		}
		left[j] = v
	}
	return left
}

func sign(i int) complex128 { return complex(float64(1-2*(i&1)), 0) }

// eliminate solves the equations whose augmented rows are given, by Gauss with partial pivoting, and leaves
// the solution in the last column. It says whether the equations were regular.
func eliminate(rows [][]float64) bool {
	n := len(rows)
	for k := range n {
		best := k
		for i := k + 1; i < n; i++ {
			if math.Abs(rows[i][k]) > math.Abs(rows[best][k]) {
				best = i
			}
		}
		rows[k], rows[best] = rows[best], rows[k]
		if rows[k][k] == 0 {
			return false
		}
		for i := range rows {
			if i == k {
				continue
			}
			f := rows[i][k] / rows[k][k]
			for j := k; j <= n; j++ {
				rows[i][j] -= f * rows[k][j]
			}
		}
	}
	for k := range rows {
		rows[k][n] /= rows[k][k]
	}
	return true
}
