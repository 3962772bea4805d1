package align

import "math"

// butterworth returns the poles of the maximally flat low-pass, |H(jω)|² = 1/(1 + ω^2n): they lie evenly on the
// left half of the unit circle.
//
// S. Butterworth, "On the Theory of Filter Amplifiers", Experimental Wireless & the Wireless Engineer 7,
// Oct. 1930.
func butterworth(order int) poles {
	var p poles
	for k := 1; k <= order/2; k++ {
		sin, cos := math.Sincos(float64(2*k-1) * math.Pi / float64(2*order))
		p.pairs = append(p.pairs, complex(-sin, cos))
	}
	if order%2 != 0 {
		p.reals = append(p.reals, -1)
	}
	return p
}

// linkwitzRiley returns the poles of a Butterworth of half the order, each twice.
//
// S. Linkwitz, "Active Crossover Networks for Noncoincident Drivers", JAES 24(1), 1976.
func linkwitzRiley(order int) poles {
	half := butterworth(order / 2)
	return poles{
		pairs: append(half.pairs[:len(half.pairs):len(half.pairs)], half.pairs...),
		reals: append(half.reals[:len(half.reals):len(half.reals)], half.reals...),
	}
}
