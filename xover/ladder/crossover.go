package ladder

import (
	"fmt"
	"math"

	"sixdown/xover/align"
)

// LowPass returns the low-pass ladder with the alignment a at fc (Hz), for a load (Ω): series inductor first,
// then shunt capacitor, and so on, one element a pole. What fc means is the alignment's matter: for a
// Chebyshev it is the ripple edge.
//
// The values come from the continued fraction of the alignment's denominator; with L = g·R/ω and C = g/(R·ω).
func LowPass(a *align.Alignment, fc, load float64) (Network, error) {
	if err := check(quantity{"low-pass: frequency", fc, " Hz"}, quantity{"low-pass: load", load, " Ω"}); err != nil {
		return nil, err
	}
	return lowPass(a.Denominator(), fc, load), nil
}

// HighPass returns the high-pass ladder with the alignment a at fc (Hz), for a load (Ω): series capacitor
// first, then shunt inductor, and so on. It is the mirror image of LowPass about fc: each inductor becomes a
// capacitor that has the opposite reactance at fc.
func HighPass(a *align.Alignment, fc, load float64) (Network, error) {
	if err := check(quantity{"high-pass: frequency", fc, " Hz"}, quantity{"high-pass: load", load, " Ω"}); err != nil {
		return nil, err
	}
	return highPass(a.Denominator(), fc, load), nil
}

// ThreeWayPlain returns the networks of a three-way with the alignment a at fLow and fHigh (Hz), every way
// into the same load (Ω). The mid is the high-pass at fLow followed by the low-pass at fHigh.
//
// Each section of the mid is sized as if it were alone, fed from a zero source and ended by the load. It is
// not: the low-pass does not show the load to the high-pass before it, nor the high-pass a zero source to
// the low-pass. The two are right far apart and drift as fHigh/fLow shrinks; nor does the sum of three such
// ways come out flat. For networks without the approximation see ThreeWayAllPass.
func ThreeWayPlain(a *align.Alignment, fLow, fHigh, load float64) (low, mid, high Network, err error) {
	if err := checkThreeWay(fLow, fHigh, load); err != nil {
		return nil, nil, nil, err
	}
	d := a.Denominator()
	mid = append(highPass(d, fLow, load), lowPass(d, fHigh, load)...)
	return lowPass(d, fLow, load), mid, highPass(d, fHigh, load), nil
}

// lowPass is LowPass for any stable denominator, ascending powers, d[0] = 1.
func lowPass(d []float64, fc, load float64) Network {
	w := 2 * math.Pi * fc
	var n Network
	for i, g := range lowPassValues(d) {
		if i%2 == 0 {
			n = append(n, Series(L(g*load/w)))
		} else {
			n = append(n, Shunt(C(g/(load*w))))
		}
	}
	return n
}

// highPass is the mirror image of lowPass: its transfer is 1/d(1/s).
func highPass(d []float64, fc, load float64) Network {
	w := 2 * math.Pi * fc
	var n Network
	for i, g := range lowPassValues(d) {
		if i%2 == 0 {
			n = append(n, Series(C(1/(g*load*w))))
		} else {
			n = append(n, Shunt(L(load/(g*w))))
		}
	}
	return n
}

// A quantity is an argument under check, with the words for a message.
type quantity struct {
	name  string
	value float64
	unit  string // " Hz", or empty
}

// The arguments taken. No part is near these limits; inside them no formula here overflows.
const (
	least    = 1e-30
	greatest = 1e30
)

// check returns an error for the first quantity that is not a positive number of sane size.
func check(all ...quantity) error {
	for _, q := range all {
		if !(q.value > 0) || math.IsInf(q.value, 1) { // so that NaN fails
			return fmt.Errorf("%s is %g%s; give a positive number", q.name, q.value, q.unit)
		}
		if q.value < least || q.value > greatest {
			return fmt.Errorf("%s is %g%s; give a number from %g to %g", q.name, q.value, q.unit, least, greatest)
		}
	}
	return nil
}

func checkThreeWay(fLow, fHigh, load float64) error {
	err := check(
		quantity{"three-way: lower frequency", fLow, " Hz"},
		quantity{"three-way: upper frequency", fHigh, " Hz"},
		quantity{"three-way: load", load, " Ω"},
	)
	if err == nil && !(fHigh > fLow) {
		err = fmt.Errorf("three-way: the upper frequency, %g Hz, is not above the lower, %g Hz; swap them or move them apart", fHigh, fLow)
	}
	return err
}
