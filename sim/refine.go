package sim

import "math"

// root returns where g, a function of frequency in Hz, changes sign between lo and hi, by bisection in log
// frequency down to neighbouring floating-point numbers or nearly so. It is slower than the methods that guess
// the shape of g, and cannot be misled by it: a gain that falls to 0, whose level is -Inf, does it no harm.
func root(lo, hi float64, g func(f float64) (float64, error)) (float64, error) {
	gLo, err := g(lo)
	if err != nil {
		return 0, err
	}
	for range 60 {
		mid := math.Sqrt(lo * hi)
		if mid <= lo || mid >= hi {
			break
		}
		gMid, err := g(mid)
		if err != nil {
			return 0, err
		}
		if gMid == 0 {
			return mid, nil
		}
		if (gMid < 0) == (gLo < 0) {
			lo = mid
		} else {
			hi = mid
		}
	}
	return math.Sqrt(lo * hi), nil
}

// minimum returns where g, a function of frequency in Hz that has one minimum between lo and hi, has it, by
// golden section: J. Kiefer, "Sequential Minimax Search for a Maximum", Proc. Amer. Math. Soc. 4, 502–506,
// 1953. Values near a minimum differ too little to tell its place to more than half the digits, so that is
// where it stops.
func minimum(lo, hi float64, g func(f float64) (float64, error)) (float64, error) {
	const golden = 0.6180339887498949 // (√5 - 1)/2
	x1, x2 := hi-golden*(hi-lo), lo+golden*(hi-lo)
	g1, err := g(x1)
	if err != nil {
		return 0, err
	}
	g2, err := g(x2)
	if err != nil {
		return 0, err
	}
	for hi-lo > 1e-8*hi {
		if g1 < g2 {
			hi, x2, g2 = x2, x1, g1
			x1 = hi - golden*(hi-lo)
			g1, err = g(x1)
		} else {
			lo, x1, g1 = x1, x2, g2
			x2 = lo + golden*(hi-lo)
			g2, err = g(x2)
		}
		if err != nil {
			return 0, err
		}
	}
	return (lo + hi) / 2, nil
}
