package circuit

import "math"

// A doubled is a number of about 32 digits, the unevaluated sum of two float64, the second at most half a unit in
// the last place of the first. The slow road is computed in it: where digits cancel, there are enough.
//
// The algorithms are those of T. J. Dekker, "A Floating-Point Technique for Extending the Available Precision",
// Numer. Math. 18, 1971, 224–242, with the product's error had from a fused multiply-add. Numbers whose square
// or reciprocal leaves the range of float64 are not catered for: admittances stay far inside.
type doubled struct{ hi, lo float64 }

// twoSum is a + b exactly.
func twoSum(a, b float64) doubled {
	s := a + b
	t := s - a
	return doubled{s, (a - (s - t)) + (b - t)}
}

// twoProduct is a·b exactly.
func twoProduct(a, b float64) doubled {
	p := a * b
	return doubled{p, math.FMA(a, b, -p)}
}

// tidy restores the order of the parts; |a| ≥ |b|.
func tidy(a, b float64) doubled {
	s := a + b
	return doubled{s, b - (s - a)}
}

func (x doubled) add(y doubled) doubled {
	s, t := twoSum(x.hi, y.hi), twoSum(x.lo, y.lo)
	s = tidy(s.hi, s.lo+t.hi)
	return tidy(s.hi, s.lo+t.lo)
}

func (x doubled) neg() doubled { return doubled{-x.hi, -x.lo} }

func (x doubled) sub(y doubled) doubled { return x.add(y.neg()) }

func (x doubled) mul(y doubled) doubled {
	p := twoProduct(x.hi, y.hi)
	return tidy(p.hi, p.lo+(x.hi*y.lo+x.lo*y.hi))
}

// inv is 1/x, by one step of Newton's method from the reciprocal in float64.
func (x doubled) inv() doubled {
	r := doubled{1 / x.hi, 0}
	e := doubled{1, 0}.sub(x.mul(r)) // what is left of one
	return r.add(r.mul(e))
}

// A cdoubled is a complex number of doubled parts.
type cdoubled struct{ re, im doubled }

func doubledOf(z complex128) cdoubled {
	return cdoubled{doubled{hi: real(z)}, doubled{hi: imag(z)}}
}

// complex rounds to complex128.
func (z cdoubled) complex() complex128 { return complex(z.re.hi, z.im.hi) }

func (z cdoubled) zero() bool { return z.re.hi == 0 && z.im.hi == 0 }

func (z cdoubled) add(y cdoubled) cdoubled { return cdoubled{z.re.add(y.re), z.im.add(y.im)} }

func (z cdoubled) sub(y cdoubled) cdoubled { return cdoubled{z.re.sub(y.re), z.im.sub(y.im)} }

func (z cdoubled) mul(y cdoubled) cdoubled {
	return cdoubled{z.re.mul(y.re).sub(z.im.mul(y.im)), z.re.mul(y.im).add(z.im.mul(y.re))}
}

// scale multiplies by a real number.
func (z cdoubled) scale(x float64) cdoubled {
	return cdoubled{z.re.mul(doubled{hi: x}), z.im.mul(doubled{hi: x})}
}

func (z cdoubled) inv() cdoubled {
	d := z.re.mul(z.re).add(z.im.mul(z.im)).inv()
	return cdoubled{z.re.mul(d), z.im.mul(d).neg()}
}

// modulus is |z| in float64.
func (z cdoubled) modulus() float64 { return math.Hypot(z.re.hi, z.im.hi) }
