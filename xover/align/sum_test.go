package align

import (
	"math"
	"math/cmplx"
	"testing"
)

// How the two ways of a crossover stand to each other. S. Linkwitz, "Active Crossover Networks for Noncoincident
// Drivers", JAES 24(1), 1976, for the shape of the facts (-6 dB and in phase, or quadrature); the
// figures are derived from the closed forms. Tolerance: half a unit of the last figure.
func TestCrossover(t *testing.T) {
	null := math.Inf(-1)
	for _, test := range []struct {
		name                string
		spec                Spec
		level               float64 // dB, each way at fc
		phase               float64 // degrees, high-pass less low-pass at fc
		same, inverted      float64 // dB, sum at fc
		power               float64 // dB, power sum at fc
		sameFlat, otherFlat bool    // 0 dB at every frequency
	}{
		{"B1", Spec{Shape: Butterworth, Order: 1}, -3.010, 90, 0, 0, 0, true, true},
		{"B2", Spec{Shape: Butterworth, Order: 2}, -3.010, 180, null, 3.010, 0, false, false},
		{"B3", Spec{Shape: Butterworth, Order: 3}, -3.010, -90, 0, 0, 0, true, true},
		{"B4", Spec{Shape: Butterworth, Order: 4}, -3.010, 0, 3.010, null, 0, false, false},
		{"LR2", Spec{Shape: LinkwitzRiley, Order: 2}, -6.021, 180, null, 0, -3.010, false, true},
		{"LR4", Spec{Shape: LinkwitzRiley, Order: 4}, -6.021, 0, 0, null, -3.010, true, false},
		{"LR6", Spec{Shape: LinkwitzRiley, Order: 6}, -6.021, 180, null, 0, -3.010, false, true},
		{"LR8", Spec{Shape: LinkwitzRiley, Order: 8}, -6.021, 0, 0, null, -3.010, true, false},
		{"Bessel 2 phase", Spec{Shape: Bessel, Order: 2, Reference: Phase}, -4.771, 180, null, 1.249, -1.761, false, false},
		{"Bessel 2", Spec{Shape: Bessel, Order: 2}, -3.010, 148.66, -8.360, 2.681, 0, false, false},
		{"Bessel 4 phase", Spec{Shape: Bessel, Order: 4, Reference: Phase}, -7.578, -3.70, -1.562, -31.39, -4.568, false, false},
		{"Bessel 4", Spec{Shape: Bessel, Order: 4}, -3.010, -118.32, -2.794, 1.686, 0, false, false},
	} {
		a := must(t, test.spec)
		low, high := a.LowPass(1i), a.HighPass(1i)
		for _, way := range []complex128{low, high} {
			if got := decibel(way); math.Abs(got-test.level) > 0.5e-3+1e-9 {
				t.Errorf("%s: a way is at %.4f dB, want %.3f", test.name, got, test.level)
			}
		}
		turn := cmplx.Phase(high/low) * 180 / math.Pi
		if d := math.Remainder(turn-test.phase, 360); math.Abs(d) > 0.5e-2 {
			t.Errorf("%s: the phases differ by %.3f°, want %.2f°", test.name, turn, test.phase)
		}
		for _, sum := range []struct {
			name string
			h    complex128
			want float64
		}{{"sum", low + high, test.same}, {"sum, one inverted", low - high, test.inverted}} {
			got, tol := decibel(sum.h), 0.5e-3+1e-9
			if sum.want < -30 {
				tol = 0.5e-2
			}
			if sum.want == null {
				if got > -270 { // nothing but rounding is left
					t.Errorf("%s: %s is at %.3f dB, want a null", test.name, sum.name, got)
				}
			} else if math.Abs(got-sum.want) > tol {
				t.Errorf("%s: %s is at %.4f dB, want %.3f", test.name, sum.name, got, sum.want)
			}
		}
		power := 10 * math.Log10(squaredModulus(low)+squaredModulus(high))
		if math.Abs(power-test.power) > 0.5e-3+1e-9 {
			t.Errorf("%s: the powers add up to %.4f dB, want %.3f", test.name, power, test.power)
		}
		for _, w := range grid() {
			low, high := a.LowPass(complex(0, w)), a.HighPass(complex(0, w))
			// Exact; order 8 leaves some rounding.
			if e := cmplx.Abs(low+high) - 1; test.sameFlat && math.Abs(e) > 1e-14 {
				t.Errorf("%s: the sum at %g is off 1 by %.2g", test.name, w, e)
			}
			if e := cmplx.Abs(low-high) - 1; test.otherFlat && math.Abs(e) > 1e-14 {
				t.Errorf("%s: the sum with one inverted at %g is off 1 by %.2g", test.name, w, e)
			}
			// Odd Butterworths in quadrature, Linkwitz-Rileys in phase or opposed, at every frequency: Linkwitz 1976.
			turn := high / low / complex(cmplx.Abs(high/low), 0)
			if test.spec.Shape == Butterworth && test.spec.Order%2 != 0 && math.Abs(real(turn)) > 1e-14 ||
				test.spec.Shape == LinkwitzRiley && math.Abs(imag(turn)) > 1e-14 {
				t.Errorf("%s: the ways stand at %v to each other at %g", test.name, turn, w)
			}
		}
	}
}

// Derived from the closed magnitudes. Tolerance: half a unit of the last figure.
func TestLevelsBesideCrossover(t *testing.T) {
	for _, test := range []struct {
		name string
		spec Spec
		w    float64
		want float64 // dB of the low-pass
	}{
		{"LR4", Spec{Shape: LinkwitzRiley, Order: 4}, 0.5, -0.527},
		{"LR4", Spec{Shape: LinkwitzRiley, Order: 4}, 1, -6.021},
		{"LR4", Spec{Shape: LinkwitzRiley, Order: 4}, 2, -24.609},
		{"LR2", Spec{Shape: LinkwitzRiley, Order: 2}, 0.5, -1.938},
		{"LR2", Spec{Shape: LinkwitzRiley, Order: 2}, 1, -6.021},
		{"LR2", Spec{Shape: LinkwitzRiley, Order: 2}, 2, -13.979},
		{"B3", Spec{Shape: Butterworth, Order: 3}, 0.5, -0.067},
		{"B3", Spec{Shape: Butterworth, Order: 3}, 1, -3.010},
		{"B3", Spec{Shape: Butterworth, Order: 3}, 2, -18.129},
		{"B4", Spec{Shape: Butterworth, Order: 4}, 0.5, -0.017},
		{"B4", Spec{Shape: Butterworth, Order: 4}, 1, -3.010},
		{"B4", Spec{Shape: Butterworth, Order: 4}, 2, -24.099},
	} {
		a := must(t, test.spec)
		if got := decibel(a.LowPass(complex(0, test.w))); math.Abs(got-test.want) > 0.5e-3+1e-9 {
			t.Errorf("%s low-pass at %g: %.4f dB, want %.3f", test.name, test.w, got, test.want)
		}
		if got := decibel(a.HighPass(complex(0, 1/test.w))); math.Abs(got-test.want) > 0.5e-3+1e-9 {
			t.Errorf("%s high-pass at %g: %.4f dB, want %.3f", test.name, 1/test.w, got, test.want)
		}
	}
	// The sums of B2 and B4 an octave from the crossover, derived in the same way.
	b2, b4 := must(t, Spec{Order: 2}), must(t, Spec{Order: 4})
	for _, w := range []float64{0.5, 2} {
		if got := decibel(b2.LowPass(complex(0, w)) - b2.HighPass(complex(0, w))); math.Abs(got-1.675) > 0.5e-3 {
			t.Errorf("B2, one inverted, at %g: %.4f dB, want 1.675", w, got)
		}
		if got := decibel(b4.LowPass(complex(0, w)) + b4.HighPass(complex(0, w))); math.Abs(got-0.510) > 0.5e-3 {
			t.Errorf("B4 at %g: %.4f dB, want 0.510", w, got)
		}
	}
}

// The sums as functions, worked by hand from (low-pass numerator ± high-pass numerator)/denominator. Rounding only.
func TestSumsInClosedForm(t *testing.T) {
	root2 := complex(math.Sqrt2, 0)
	for _, test := range []struct {
		name string
		spec Spec
		sign complex128
		want func(s complex128) complex128
	}{
		{"B1", Spec{Order: 1}, 1, func(complex128) complex128 { return 1 }},
		{"B1 inverted", Spec{Order: 1}, -1, func(s complex128) complex128 { return (1 - s) / (1 + s) }},
		{"B3", Spec{Order: 3}, 1, func(s complex128) complex128 { return (s*s - s + 1) / (s*s + s + 1) }},
		{"B3 inverted", Spec{Order: 3}, -1, func(s complex128) complex128 { return (1 - s) / (1 + s) }},
		{"LR2 inverted", Spec{Shape: LinkwitzRiley, Order: 2}, -1, func(s complex128) complex128 { return (1 - s) / (1 + s) }},
		{"LR4", Spec{Shape: LinkwitzRiley, Order: 4}, 1, func(s complex128) complex128 {
			return (s*s - root2*s + 1) / (s*s + root2*s + 1)
		}},
	} {
		a := must(t, test.spec)
		for _, w := range grid() {
			s := complex(0, w)
			if e := cmplx.Abs(a.LowPass(s) + test.sign*a.HighPass(s) - test.want(s)); e > 1e-14 {
				t.Errorf("%s at %g is off by %.2g", test.name, w, e)
			}
		}
	}
}

// The group delay of sums that are all-passes, in units of 1/ωc; derived from their closed forms. For LR4 the peak is
// exactly √2·(1 + √2) at √(√2 - 1). Tolerance: half a unit of the last figure; the place of a peak is flat,
// so it is known less well.
func TestGroupDelayOfSums(t *testing.T) {
	for _, test := range []struct {
		name        string
		spec        Spec
		sign        complex128
		dc, at      float64
		peak, place float64 // its height and place; 0: it is at DC
	}{
		{"LR2 inverted", Spec{Shape: LinkwitzRiley, Order: 2}, -1, 2.0000, 1.0000, 0, 0},
		{"B3 inverted", Spec{Order: 3}, -1, 2.0000, 1.0000, 0, 0},
		{"B3", Spec{Order: 3}, 1, 2.0000, 4.0000, 4.3094, 0.8556},
		{"LR4", Spec{Shape: LinkwitzRiley, Order: 4}, 1, 2.8284, 2.8284, 3.4142, 0.6436},
		{"LR6 inverted", Spec{Shape: LinkwitzRiley, Order: 6}, -1, 4.0000, 5.0000, 5.4857, 0.8173},
		{"LR8", Spec{Shape: LinkwitzRiley, Order: 8}, 1, 5.2263, 7.3910, 7.8188, 0.8879},
	} {
		a := must(t, test.spec)
		sum := func(s complex128) complex128 { return a.LowPass(s) + test.sign*a.HighPass(s) }
		const tol = 0.5e-4 + 1e-7
		if got := groupDelay(sum, 1e-3); math.Abs(got-test.dc) > tol+1e-5 { // ω² away from DC
			t.Errorf("%s: delay at DC is %.5f, want %.4f", test.name, got, test.dc)
		}
		if got := groupDelay(sum, 1); math.Abs(got-test.at) > tol {
			t.Errorf("%s: delay at fc is %.5f, want %.4f", test.name, got, test.at)
		}
		if test.peak == 0 {
			continue
		}
		peak, where := 0.0, 0.0
		for i := range 5000 {
			w := 0.5 + float64(i)*1e-4
			if d := groupDelay(sum, w); d > peak {
				peak, where = d, w
			}
		}
		if math.Abs(peak-test.peak) > tol || math.Abs(where-test.place) > 1.5e-4 {
			t.Errorf("%s: the peak is %.5f at %.4f, want %.4f at %.4f", test.name, peak, where, test.peak, test.place)
		}
	}
}
