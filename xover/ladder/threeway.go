package ladder

import (
	"errors"
	"fmt"
	"math"
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
//	order 3, mid reversed:         fHigh > 2.77·fLow
//	order 4, mid not reversed:     fHigh > 1.42·fLow
//
// and it is an error to ask for others. (Order 2 with the mid not reversed would need poles on the imaginary
// axis; order 4 with the mid reversed has solutions, but their branches peak, by 13 dB at fHigh = 10·fLow, and more
// the farther apart.) Near the limits the networks are of little use: the branches peak, or the mid needs a
// large pad. fLow and fHigh are where the asymptotes of woofer and tweeter meet their pass bands.
//
// The outer branches have a polynomial and its mirror image for denominators, the mid has the product of the
// two; the coefficients are those that make the magnitude of the sum 1. Where there are several such, they are the
// ones that become those of a flat two-way of the same order as fHigh/fLow grows.
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
	case order == 2 && !reversed:
		return errors.New("three-way: order 2 has no flat network with the mid not reversed; reverse it")
	case order == 4 && reversed:
		return errors.New("three-way: order 4 has no flat network of use with the mid reversed, its ways would peak; do not reverse it")
	case order == 2:
		least = 2 // a² = 4(r-1)²/(r(r-2)) ends there
	case order == 3 && reversed:
		least = 2.77 // the solution meets another and both end, at 2.761
	case order == 4:
		least = 1.42 // the coefficients grow without bound toward √2
	}
	if !(ratio > least) {
		return fmt.Errorf("three-way: order %d with the mid %s needs an upper frequency over %g times the lower, not %g times; move them apart",
			order, polarity, least, ratio)
	}
	return nil
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
