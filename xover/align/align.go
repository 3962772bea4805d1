package align

import (
	"fmt"
)

// MaxOrder is the highest order that New makes.
const MaxOrder = 8

// The ripple that New takes, in dB. Below the least, the ripple edge says nothing about where the response
// falls; above the greatest, nobody would call it a pass band.
const (
	MinRippleDB = 0.001
	MaxRippleDB = 10
)

// A Spec says which alignment is wanted.
type Spec struct {
	Shape     Shape
	Order     int       // poles: 1 … 8, for a Linkwitz-Riley 2, 4, 6 or 8
	RippleDB  float64   // dB, peak to trough, of a Chebyshev: MinRippleDB … MaxRippleDB; else 0
	Reference Reference // what a Bessel's frequency means; else Magnitude
}

// An Alignment is a normalised all-pole response. It does not change once made, and may be used from
// several goroutines.
type Alignment struct {
	spec Spec
	low  poles // of the low-pass
	high poles // of the high-pass: the reciprocals
}

// poles holds the poles of a real, stable denominator, all in the left half plane.
type poles struct {
	pairs []complex128 // the upper one of each conjugate pair
	reals []float64
}

// New returns the alignment that spec asks for.
//
// The frequency of a Chebyshev is its ripple edge. Its order even, it ripples above its gain at DC, which is
// 1, because a lossless ladder fed from a zero source has no other gain there; its order odd, below.
func New(spec Spec) (*Alignment, error) {
	if err := spec.check(); err != nil {
		return nil, err
	}
	var p poles
	switch spec.Shape {
	case Butterworth:
		p = butterworth(spec.Order)
	case LinkwitzRiley:
		p = linkwitzRiley(spec.Order)
	case Bessel:
		p = bessel(spec.Order, spec.Reference)
	case Chebyshev:
		p = chebyshev(spec.Order, spec.RippleDB)
	}
	return &Alignment{spec: spec, low: p, high: p.reciprocal()}, nil
}

func (s Spec) check() error {
	if int(s.Shape) >= len(shapeNames) {
		return fmt.Errorf("alignment: %v is no shape; give %s", s.Shape, oneOf(shapeNames[:]))
	}
	if s.Order < 1 || s.Order > MaxOrder {
		return fmt.Errorf("%v: order is %d; give 1 to %d", s.Shape, s.Order, MaxOrder)
	}
	if s.Shape == LinkwitzRiley && s.Order%2 != 0 {
		return fmt.Errorf("%v: order is %d; give 2, 4, 6 or 8, since it is a square", s.Shape, s.Order)
	}
	if s.Shape == Chebyshev {
		// Written so that NaN fails.
		if !(s.RippleDB >= MinRippleDB && s.RippleDB <= MaxRippleDB) {
			return fmt.Errorf("%v: ripple is %g dB; give %g to %g dB", s.Shape, s.RippleDB, MinRippleDB, float64(MaxRippleDB))
		}
	} else if s.RippleDB != 0 {
		return fmt.Errorf("%v: ripple is %g dB; leave it out, only a chebyshev has one", s.Shape, s.RippleDB)
	}
	if int(s.Reference) >= len(referenceNames) {
		return fmt.Errorf("%v: %v is no reference; give %s", s.Shape, s.Reference, oneOf(referenceNames[:]))
	}
	if s.Shape != Bessel && s.Reference != Magnitude {
		return fmt.Errorf("%v: reference is %v; leave it out, only a bessel has one", s.Shape, s.Reference)
	}
	return nil
}

// Spec returns what New was asked for.
func (a *Alignment) Spec() Spec { return a.spec }

// Denominator returns the polynomial D of the normalised low-pass H(s) = 1/D(s), in ascending powers of s:
// D[0] = 1, len = order + 1. The high-pass is H(1/s). The slice is the caller's own.
//
// Every factor has positive coefficients, so multiplying them out cancels nothing: each coefficient is good
// to a few units of its last place.
func (a *Alignment) Denominator() []float64 {
	d := make([]float64, 1, a.spec.Order+1)
	d[0] = 1
	for _, p := range a.low.reals {
		d = multiply(d, -1/p, 0)
	}
	for _, p := range a.low.pairs {
		m := squaredModulus(p)
		d = multiply(d, -2*real(p)/m, 1/m)
	}
	return d
}

// multiply returns d(s)·(1 + b·s + c·s²), in ascending powers; c = 0 makes the factor linear. It may reuse d.
func multiply(d []float64, b, c float64) []float64 {
	d = append(d, 0)
	if c != 0 {
		d = append(d, 0)
	}
	for i := len(d) - 1; i > 0; i-- {
		d[i] += b * d[i-1]
		if i > 1 {
			d[i] += c * d[i-2]
		}
	}
	return d
}

// Poles returns the poles of the normalised low-pass, in the left half plane: the conjugate pairs first,
// each with its upper pole before the lower, then the real poles. len = order. The slice is the caller's own.
func (a *Alignment) Poles() []complex128 {
	all := make([]complex128, 0, a.spec.Order)
	for _, p := range a.low.pairs {
		all = append(all, p, complex(real(p), -imag(p)))
	}
	for _, p := range a.low.reals {
		all = append(all, complex(p, 0))
	}
	return all
}

// LowPass returns H(s) of the low-pass, s in units of the crossover's angular frequency. H(0) = 1. At a pole
// it is infinite or not a number. It allocates nothing.
//
// It is a product over the poles, not a polynomial: that keeps the relative error to a few units of
// 1e-15, however deep into the stop band.
func (a *Alignment) LowPass(s complex128) complex128 {
	h := complex(1, 0)
	for _, p := range a.low.reals {
		h *= complex(-p, 0) / (s - complex(p, 0))
	}
	for _, p := range a.low.pairs {
		h *= complex(squaredModulus(p), 0) / ((s - p) * (s - complex(real(p), -imag(p))))
	}
	return h
}

// HighPass returns H(s) of the high-pass, the mirror image of the low-pass: its value at s is that of the
// low-pass at 1/s. It is 0 at s = 0. It allocates nothing; its accuracy is that of LowPass.
func (a *Alignment) HighPass(s complex128) complex128 {
	h := complex(1, 0)
	for _, q := range a.high.reals {
		h *= s / (s - complex(q, 0))
	}
	for _, q := range a.high.pairs {
		h *= (s / (s - q)) * (s / (s - complex(real(q), -imag(q))))
	}
	return h
}

// reciprocal returns the poles of the mirror image, 1/p, still the upper one of each pair.
func (p poles) reciprocal() poles {
	r := poles{make([]complex128, len(p.pairs)), make([]float64, len(p.reals))}
	for i, z := range p.pairs {
		m := squaredModulus(z)
		r.pairs[i] = complex(real(z)/m, imag(z)/m) // the conjugate of 1/z
	}
	for i, x := range p.reals {
		r.reals[i] = 1 / x
	}
	return r
}

// scaled returns the poles multiplied by k.
func (p poles) scaled(k float64) poles {
	r := poles{make([]complex128, len(p.pairs)), make([]float64, len(p.reals))}
	for i, z := range p.pairs {
		r.pairs[i] = complex(k*real(z), k*imag(z))
	}
	for i, x := range p.reals {
		r.reals[i] = k * x
	}
	return r
}

func squaredModulus(z complex128) float64 { return real(z)*real(z) + imag(z)*imag(z) }
