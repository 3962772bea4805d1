package align

import "math"

// chebyshev returns the poles of the equal-ripple low-pass, those of 1/(1 + ε²·T_n(ω)²): on an ellipse whose half
// axes are sinh a along the real axis and cosh a along the imaginary one, a = asinh(1/ε)/n. ω = 1 is the
// ripple edge, where the response is the ripple below its maximum.
//
// L. Weinberg, Network Analysis and Synthesis, McGraw-Hill 1962 (from memory).
func chebyshev(order int, rippleDB float64) poles {
	// ε² = 10^(ripple/10) - 1; Expm1 keeps a small ripple from cancelling.
	epsilon := math.Sqrt(math.Expm1(rippleDB / 10 * math.Ln10))
	a := math.Asinh(1/epsilon) / float64(order)
	sinh, cosh := math.Sinh(a), math.Cosh(a)
	var p poles
	for _, z := range butterworth(order).pairs {
		p.pairs = append(p.pairs, complex(sinh*real(z), cosh*imag(z)))
	}
	if order%2 != 0 {
		p.reals = append(p.reals, -sinh)
	}
	return p
}
