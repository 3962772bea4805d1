package ladder

import (
	"fmt"
	"math"
	"slices"

	"sixdown/xover/align"
)

// A ThreeWay is a set of three networks whose outputs add up to a constant magnitude at every frequency, when
// every way drives the same resistance, woofer and tweeter have the same polarity, the mid has the
// polarity that MidReversed says, and MidExcessDB is padded off.
type ThreeWay struct {
	Low, Mid, High Network

	// MidReversed says that the mid is wired against the other two.
	MidReversed bool

	// MidExcessDB is by how much the mid's ladder is too loud, in dB: what a pad (LPad keeps the load that the
	// ladder needs) must take off, or a less sensitive driver. Where it is negative, first order with the
	// mid reversed, it is the woofer and tweeter that are too loud, by -MidExcessDB.
	MidExcessDB float64
}

// ThreeWayAllPass returns the three-way of that order (1 to 4) at fLow and fHigh (Hz), every way into the same load
// (Ω), whose sum is exactly flat. These networks exist for
//
//	order 1, mid either way round: any fHigh > fLow (with the mid not reversed, the sum has no phase shift either)
//	order 2, mid reversed:         fHigh > 2·fLow
//	order 3, mid not reversed:     any fHigh > fLow
//	order 3, mid reversed:         fHigh ≥ 2.77·fLow
//	order 4, mid not reversed:     fHigh ≥ 1.42·fLow
//
// and it is an error to ask for others. Near the limits they are of little use: the branches peak, or the
// mid needs a large pad. fLow and fHigh are where the asymptotes of woofer and tweeter meet their pass bands.
//
// The outer branches have a polynomial and its mirror image, the mid has the product of the two; the
// coefficients are those that make the magnitude of the sum 1, of the solutions there are the one that runs
// into the two-way network of the same order as fHigh/fLow grows.
//
// R. M. Bullock III, "Passive Three-Way All-Pass Crossover Networks", JAES 32(9), 1984 (the idea; the
// equations here were derived anew).
func ThreeWayAllPass(order int, invertedMid bool, fLow, fHigh, load float64) (*ThreeWay, error) {
	if err := checkThreeWay(fLow, fHigh, load); err != nil {
		return nil, err
	}
	ratio := fHigh / fLow
	if err := checkExists(order, invertedMid, ratio); err != nil {
		return nil, err
	}
	p, gain, ok := solveThreeWay(order, invertedMid, ratio)
	if !ok {
		return nil, fmt.Errorf("three-way: no values found for order %d at %g and %g Hz; move the frequencies apart", order, fLow, fHigh)
	}
	mid, ladderGain := midBand(p, ratio, math.Sqrt(fLow*fHigh), load)
	return &ThreeWay{
		Low:         lowPass(p, fLow, load),
		Mid:         mid,
		High:        highPass(p, fHigh, load),
		MidReversed: invertedMid,
		MidExcessDB: 20 * math.Log10(ladderGain/math.Abs(gain)),
	}, nil
}

// checkExists returns an error unless the three-way is one of those that exist.
func checkExists(order int, reversed bool, ratio float64) error {
	polarity := "not reversed"
	if reversed {
		polarity = "reversed"
	}
	least := 1.0
	switch {
	case order < 1 || order > 4:
		return fmt.Errorf("three-way: order is %d; give 1 to 4", order)
	case order == 2 && !reversed, order == 4 && reversed:
		// Order 2 would need lossless branches, order 4 branches that peak by 13 dB at a ratio of 10.
		other := map[int]string{2: "reversed", 4: "not reversed"}[order]
		return fmt.Errorf("three-way: order %d has no flat network with the mid %s; take the mid %s", order, polarity, other)
	case order == 2:
		least = 2 // a² = 4(r-1)²/(r(r-2)) ends there
	case order == 3 && reversed:
		least = 2.77 // the solution meets another and both end, at 2.761
	case order == 4:
		least = 1.42 // the coefficients grow without bound toward √2
	}
	// Most limits are excluded themselves, by the growth of the coefficients.
	if !(ratio > least) {
		return fmt.Errorf("three-way: order %d with the mid %s needs an upper frequency over %g times the lower, not %g times; move them apart",
			order, polarity, least, ratio)
	}
	return nil
}

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
			v += complex(2, 0) * g * a[2*j] * power(n-2*j)
			if j == 0 {
				v += complex(2, 0) * g * power(n)
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

// midBand returns the ladder of the mid, about the mean frequency f (Hz), and the g at which its gain would fit: its
// transfer is that of solveThreeWay's mid with this g.
//
// Seen from the load, the low-pass half of the ladder is the poles at infinity and the high-pass half those
// at 0: the continued fraction takes away order of the one, then the same of the other.
func midBand(p []float64, ratio, f, load float64) (Network, float64) {
	n := len(p) - 1
	lambda := math.Sqrt(ratio)
	up, down := make([]float64, n+1), make([]float64, n+1) // p(λs) and sⁿ·p(λ/s), the latter over λⁿ
	for i, a := range p {
		up[i] = a * math.Pow(lambda, float64(i))
		down[n-i] = a * math.Pow(lambda, float64(i-n))
	}
	d := make([]float64, 2*n+1)
	for i, u := range up {
		for j, v := range down {
			d[i+j] += u * v
		}
	}
	w := 2 * math.Pi * f
	network := make(Network, 2*n)

	r := split(d) // the even part over the odd
	var g float64
	for k := n - 1; k >= 0; k-- {
		g, r = r.next()
		if k%2 == 0 {
			network[n+k] = Series(L(g * load / w))
		} else {
			network[n+k] = Shunt(C(g / (load * w)))
		}
	}
	r = r.mirrored(n)
	gain := 1.0 // the transfer goes as gain·sⁿ toward DC, where d is 1
	for k := n - 1; k >= 0; k-- {
		g, r = r.next()
		gain /= g
		if k%2 == 0 {
			network[k] = Series(C(1 / (g * load * w)))
		} else {
			network[k] = Shunt(L(load / (g * w)))
		}
	}
	// κ·sⁿ/(p(λs)·sⁿp(λ/s)) with κ = g·λ^2n and the denominator over λⁿ
	return network, gain / math.Pow(lambda, float64(n))
}
