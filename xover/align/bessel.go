package align

import (
	"cmp"
	"math"
	"math/big"
	"math/cmplx"
	"slices"
)

// bessel returns the poles of the maximally-flat-delay low-pass, the zeros of the reverse Bessel polynomial,
// scaled to what ref says the frequency means.
//
// W. E. Thomson, "Delay Networks having Maximally Flat Frequency Characteristics", Proc. IEE 96 (III), 1949;
// L. Storch, "Synthesis of Constant-Time-Delay Ladder Networks Using Bessel Polynomials", Proc. IRE 42, 1954.
func bessel(order int, ref Reference) poles {
	p := besselPoles(order) // as they come: unit group delay at DC
	switch ref {
	case Magnitude:
		return p.scaled(1 / p.halfPower())
	case Phase:
		// The product of the moduli of the poles is the constant term; it must be 1.
		return p.scaled(math.Pow(besselPolynomial(order)[0], -1/float64(order)))
	default:
		return p
	}
}

// besselPolynomial returns θ_n(s) = Σ a_k·s^k, a_k = (2n-k)! / (2^(n-k)·k!·(n-k)!), in ascending powers. All are whole
// numbers; up to order 8 they are exact.
func besselPolynomial(n int) []float64 {
	a := make([]float64, n+1)
	a[n] = 1
	for k := n - 1; k >= 0; k-- {
		// a_k / a_(k+1) = (2n-k)(k+1) / (2(n-k))
		a[k] = a[k+1] * float64((2*n-k)*(k+1)) / float64(2*(n-k))
	}
	return a
}

// besselPoles returns the zeros of the reverse Bessel polynomial, correct to rounding.
//
// All at once by Aberth's iteration, which needs no deflation; then Newton steps with the polynomial
// evaluated in extended precision, since near a zero its terms cancel.
//
// O. Aberth, "Iteration Methods for Finding all Zeros of a Polynomial Simultaneously", Math. Comp. 27, 1973.
func besselPoles(n int) poles {
	a := besselPolynomial(n)
	z := make([]complex128, n)
	for i := range z {
		// A start that is not symmetric about the real axis, of about the right size.
		z[i] = cmplx.Rect(float64(n)/1.5, math.Pi/2+math.Pi*(float64(i)+0.6)/float64(n))
	}
	for range 60 {
		for i := range z {
			v, d := horner(a, z[i])
			if v == 0 {
				continue
			}
			newton := v / d
			var repel complex128
			for j := range z {
				if j != i {
					repel += 1 / (z[i] - z[j])
				}
			}
			z[i] -= newton / (1 - newton*repel)
		}
	}
	for i := range z {
		for range 3 {
			_, d := horner(a, z[i])
			z[i] -= exactly(a, z[i]) / d
		}
	}

	var p poles
	for _, v := range z {
		switch tiny := 1e-9 * cmplx.Abs(v); {
		case imag(v) > tiny:
			p.pairs = append(p.pairs, v)
		case imag(v) >= -tiny:
			p.reals = append(p.reals, real(v))
		}
	}
	slices.SortFunc(p.pairs, func(a, b complex128) int { return cmp.Compare(imag(b), imag(a)) })
	return p
}

// horner returns the polynomial a, in ascending powers, and its derivative at z.
func horner(a []float64, z complex128) (value, derivative complex128) {
	for i := len(a) - 1; i >= 0; i-- {
		derivative = derivative*z + value
		value = value*z + complex(a[i], 0)
	}
	return value, derivative
}

// exactly returns the polynomial a at z, worked in numbers of 256 bits, of which cancellation leaves far
// more than the 53 that are kept.
func exactly(a []float64, z complex128) complex128 {
	const bits = 256
	number := func(x float64) *big.Float { return new(big.Float).SetPrec(bits).SetFloat64(x) }
	product := func(x, y *big.Float) *big.Float { return new(big.Float).SetPrec(bits).Mul(x, y) }
	x, y := number(real(z)), number(imag(z))
	re, im := number(0), number(0)
	for i := len(a) - 1; i >= 0; i-- {
		xr, yi := product(re, x), product(im, y)
		xi, yr := product(re, y), product(im, x)
		re.Sub(xr, yi).Add(re, number(a[i]))
		im.Add(xi, yr)
	}
	r, _ := re.Float64()
	i, _ := im.Float64()
	return complex(r, i)
}

// halfPower returns the frequency at which the low-pass with these poles has fallen to half its power at
// DC. The response must fall steadily, as a Bessel's does.
func (p poles) halfPower() float64 {
	excess := func(w float64) float64 { // of |H(0)/H(jw)|² over 2
		loss := 1.0
		for _, x := range p.reals {
			loss *= 1 + (w/x)*(w/x)
		}
		for _, z := range p.pairs {
			up, down := imag(z)-w, imag(z)+w
			sigma := real(z) * real(z)
			m := squaredModulus(z)
			loss *= (sigma + up*up) / m * (sigma + down*down) / m
		}
		return loss - 2
	}
	low, high := 0.0, 1.0
	for excess(high) < 0 {
		high *= 2
	}
	for {
		middle := low + (high-low)/2
		if middle <= low || middle >= high {
			return middle
		}
		if excess(middle) < 0 {
			low = middle
		} else {
			high = middle
		}
	}
}
