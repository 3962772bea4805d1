package ladder

import "slices"

// A lossless ladder that ends in a resistance is read off the even and odd parts of its denominator: their
// quotient is the impedance or admittance that the resistance sees, source shorted, and a continued
// fraction takes that apart element by element, from the load toward the source.
//
// W. Cauer, Synthesis of Linear Communication Networks, McGraw-Hill 1958; O. Brune's and R. M. Foster's theorems
// warrant that a stable denominator gives positive elements (from memory).

// remains is the quotient of two polynomials, one even and one odd, of which only every second coefficient
// is kept, highest power first. The upper is one degree above the lower.
type remains struct{ upper, lower []float64 }

// split sorts the coefficients of d, ascending powers of s, by parity.
func split(d []float64) remains {
	var r remains
	for i := len(d) - 1; i >= 0; i -= 2 {
		r.upper = append(r.upper, d[i])
	}
	for i := len(d) - 2; i >= 0; i -= 2 {
		r.lower = append(r.lower, d[i])
	}
	return r
}

// next takes away the pole at infinity: it returns g in upper/lower = g·s + rest, and the reciprocal of the
// rest. It is a row of Routh's array.
func (r remains) next() (g float64, rest remains) {
	g = r.upper[0] / r.lower[0]
	left := make([]float64, 0, len(r.upper)-1)
	for i, u := range r.upper[1:] {
		if i+1 < len(r.lower) {
			u -= g * r.lower[i+1]
		}
		left = append(left, u)
	}
	return g, remains{upper: r.lower, lower: left}
}

// lowPassValues returns the normalised values g of the ladder with the transfer 1/d(s), d in ascending powers of s
// with d[0] = 1, between a zero source and 1 Ω, source first: g[0] is a series inductor, g[1] a shunt
// capacitor, and so on.
func lowPassValues(d []float64) []float64 {
	g := make([]float64, len(d)-1)
	r := split(d)
	for k := len(g) - 1; k >= 0; k-- {
		g[k], r = r.next()
	}
	return g
}

// mirrored returns the remains after an even number of steps, or an odd one, of a fraction that began with
// the even part on top, in the variable 1/s: with the even part on top again, since that is the one with a
// constant term, and so with the pole.
func (r remains) mirrored(steps int) remains {
	even, odd := r.upper, r.lower
	if steps%2 != 0 {
		even, odd = odd, even
	}
	slices.Reverse(even)
	slices.Reverse(odd)
	return remains{upper: even, lower: odd}
}
