package sim

import (
	"math"
	"math/cmplx"
	"slices"
)

// A pair is two ways over a grid equally spaced in log frequency.
//
// What lines two ways up best is taken to be what makes them give most together, the delay τ of the upper one and
// the sign ±1 at which
//
//	C(τ) = ± Σ |a||b|·cos(φ - ωτ) / Σ |a||b|
//
// is highest, where a and b are the two pressures and φ is the phase of b relative to a. It is the maximum of the
// generalised cross-correlation of C. H. Knapp, G. C. Carter, "The Generalized Correlation Method for Estimation of Time
// Delay", IEEE Trans. Acoust. Speech Signal Process. 24(4), 320–327, 1976, weighted alike over log frequency; and as
// 2(1 - cos x) is the square of the chord of x, near to x², it is the least squares of the wrapped phase, weighted by
// the product of the magnitudes, without the jumps that wrapping would put into it. The ripple of the sum would be no
// guide: a wrong level may be hidden by a wrong phase.
type pair struct {
	freqs   []float64    // Hz
	product []complex128 // b·conj(a)
	total   float64      // Σ|a||b|
}

func newPair(r *Response, low, high int) *pair {
	p := &pair{freqs: r.Freqs, product: make([]complex128, len(r.Freqs))}
	for k := range p.product {
		p.product[k] = r.Ways[high].P[k] * cmplx.Conj(r.Ways[low].P[k])
		p.total += cmplx.Abs(p.product[k])
	}
	return p
}

// together returns C for the sign + and the upper way delayed by τ in s: 1 for two ways wholly in step, -1 for two
// wholly opposed, 0 for silence.
func (p *pair) together(tau float64) float64 {
	if p.total == 0 {
		return 0
	}
	sum := 0.0
	for k, v := range p.product {
		sin, cos := math.Sincos(2 * math.Pi * p.freqs[k] * tau)
		sum += real(v)*cos + imag(v)*sin
	}
	return sum / p.total
}

// slope returns the sign of the derivative of together.
func (p *pair) slope(tau float64) float64 {
	sum := 0.0
	for k, v := range p.product {
		sin, cos := math.Sincos(2 * math.Pi * p.freqs[k] * tau)
		sum += p.freqs[k] * (imag(v)*cos - real(v)*sin)
	}
	return sum
}

// apart returns by how many degrees the phase is off whole turns at each frequency, the upper way multiplied by sign
// and delayed by τ in s.
func (p *pair) apart(sign, tau float64) []float64 {
	apart := make([]float64, len(p.product))
	for k, v := range p.product {
		apart[k] = math.Abs(PhaseDeg(v * cmplx.Rect(sign, -2*math.Pi*p.freqs[k]*tau)))
	}
	return apart
}

const (
	delaySteps = 64   // over a period; C has few periods of its own in it
	wireTurn   = 0.01 // how much more of C makes it worth while to reverse a way that only needs a delay
)

// lineUp returns what lines the two up best within half a period of the crossing at fc in Hz, farther than which
// would be a delay to the next period, which the ear hears as one. Offset is left to the caller.
func (p *pair) lineUp(fc float64) LineUp {
	best, most := LineUp{}, math.Inf(-1)
	for _, sign := range [2]float64{1, -1} {
		step := 1 / (fc * delaySteps)
		tau := 0.0
		for i := -delaySteps / 2; i <= delaySteps/2; i++ {
			if t := float64(i) * step; sign*p.together(t) > sign*p.together(tau) {
				tau = t
			}
		}
		lo, hi := tau-step, tau+step
		for range 60 {
			mid := lo + (hi-lo)/2
			if sign*p.slope(mid) > 0 {
				lo = mid
			} else {
				hi = mid
			}
		}
		tau = lo + (hi-lo)/2
		if c := sign * p.together(tau); c > most {
			apart := p.apart(sign, tau)
			best = LineUp{Reversed: sign < 0, Delay: tau, MeanDeg: mean(apart), WorstDeg: slices.Max(apart)}
			most = c + wireTurn
		}
	}
	return best
}
