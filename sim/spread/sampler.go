package spread

import (
	"math"
	"math/rand/v2"
)

// A Sampler is a sequence of points in the unit cube that fills it evenly: Halton's, with digits permuted at random as in A. B.
// Owen, "A Randomized Halton Algorithm in R", arXiv:1706.02808, 2017. Any point can be had without those before it. It does
// not change, and may be used from several goroutines.
type Sampler struct {
	axes []axis
}

// An axis writes the point's number in its base, permutes each digit, and puts them behind the point in turn.
type axis struct {
	base   int
	digits [][]float64 // by digit, from the lowest: what each value of it adds
	rest   []float64   // what the digits from here on add while they are 0
}

// NewSampler returns the sequence of that seed in so many dimensions.
func NewSampler(dimensions int, seed uint64) *Sampler {
	random := rand.New(rand.NewPCG(seed, 0x6a11)) // any second word
	s := &Sampler{axes: make([]axis, dimensions)}
	for d, base := range primes(dimensions) {
		a := &s.axes[d]
		a.base = base
		for scale := 1 / float64(base); scale > 0x1p-54; scale /= float64(base) {
			adds := make([]float64, base)
			for value, to := range random.Perm(base) {
				adds[value] = float64(to) * scale
			}
			a.digits = append(a.digits, adds)
		}
		a.rest = make([]float64, len(a.digits)+1)
		for k := len(a.digits) - 1; k >= 0; k-- {
			a.rest[k] = a.rest[k+1] + a.digits[k][0]
		}
	}
	return s
}

// At stores point i, from 0, in dst, whose length is the number of dimensions; each coordinate lies strictly between 0 and 1.
func (s *Sampler) At(dst []float64, i int) {
	for d := range s.axes {
		a := &s.axes[d]
		u, k := 0.0, 0
		for n := i; n > 0 && k < len(a.digits); n /= a.base {
			u += a.digits[k][n%a.base]
			k++
		}
		dst[d] = min(max(u+a.rest[k], 0x1p-53), 1-0x1p-53)
	}
}

// primes returns the first n primes.
func primes(n int) []int {
	var ps []int
	for c := 2; len(ps) < n; c++ {
		prime := true
		for _, p := range ps {
			if p*p > c {
				break
			}
			if c%p == 0 {
				prime = false
				break
			}
		}
		if prime {
			ps = append(ps, c)
		}
	}
	return ps
}

// deviation returns by what a part of tolerance tol, a fraction, is off at the coordinate u.
func deviation(u, tol float64, normal bool) float64 {
	if !normal {
		return tol * (2*u - 1)
	}
	return tol / 3 * math.Sqrt2 * math.Erfinv(2*u-1)
}
