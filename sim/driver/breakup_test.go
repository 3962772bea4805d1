package driver

import (
	"fmt"
	"math"
	"math/cmplx"
	"testing"
)

// All by hand from the mode's formula: g at its frequency, 1 far away, and where the mode's own resonance curve
// is 3 dB down, at u - 1/u = ±1/Q, it is (g ± j)/(1 ± j), so |H|² = (g² + 1)/2.
func TestBreakup(t *testing.T) {
	flat := NewFlat(90)
	p0 := flat.Pressure(1000)
	for _, p := range []Peak{{4500, 4, 6}, {4500, 4, -6}, {1000, 12, 10}, {6000, 0.7, 3}} {
		h := func(f float64) complex128 { return NewBreakup(flat, []Peak{p}).Pressure(f) / p0 }
		g := math.Pow(10, p.GainDB/20)
		name := fmt.Sprintf("%+v", p)
		nearC(t, name+" at its frequency", h(p.Frequency), complex(g, 0), 1e-14)
		nearC(t, name+" far below", h(p.Frequency/1e5), 1, 1e-4) // (g-1)/Q·1e-5
		nearC(t, name+" far above", h(p.Frequency*1e5), 1, 1e-4)
		for _, sign := range []float64{-1, 1} {
			u := sign/(2*p.Q) + math.Sqrt(1/(4*p.Q*p.Q)+1)
			near(t, name+" at the edges of the mode", cmplx.Abs(h(u*p.Frequency)), math.Sqrt((g*g+1)/2), 1e-13)
		}
	}
	// Peaks multiply.
	a, b := Peak{4500, 4, 6}, Peak{6000, 8, -3}
	both := NewBreakup(flat, []Peak{a, b}).Pressure(5000)
	nearC(t, "two peaks", both*p0, NewBreakup(flat, []Peak{a}).Pressure(5000)*NewBreakup(flat, []Peak{b}).Pressure(5000), 1e-14)
	nearC(t, "no peaks", NewBreakup(flat, nil).Pressure(5000), p0, 0)
}

// The phase of a peak or a dip is that which H. W. Bode, "Network Analysis and Feedback Amplifier Design", 1945,
// finds for its magnitude: φ(f) = (1/π)·∫ (dln|H|/du)·ln coth(|u|/2) du, u = ln(f'/f). The integral is taken by
// the midpoint rule.
func TestBreakupIsMinimumPhase(t *testing.T) {
	for _, p := range []Peak{{4500, 3, 9}, {4500, 3, -9}} {
		b := NewBreakup(NewFlat(90), []Peak{p})
		for _, f := range []float64{2000, 4000, 4500, 5200, 9000} {
			const n, span = 40000, 8.0
			sum, ln := 0.0, func(u float64) float64 { return math.Log(cmplx.Abs(b.Pressure(f * math.Exp(u)))) }
			for i := range n {
				lo, hi := span*(2*float64(i)/n-1), span*(2*float64(i+1)/n-1)
				sum += (ln(hi) - ln(lo)) * -math.Log(math.Tanh(math.Abs(lo+hi)/4))
			}
			if got, want := cmplx.Phase(b.Pressure(f)), sum/math.Pi; math.Abs(got-want) > 2e-3 { // steps of 4e-4 about the kernel's pole, and what lies beyond e⁸
				t.Errorf("%+v at %g Hz: phase %.5f, want %.5f", p, f, got, want)
			}
		}
	}
}

func TestBreakupAllocatesNothing(t *testing.T) {
	b := NewBreakup(NewFlat(90), []Peak{{4500, 4, 6}, {6000, 8, -3}})
	if n := testing.AllocsPerRun(10, func() { b.Pressure(4000) }); n != 0 {
		t.Errorf("%v allocations", n)
	}
}
