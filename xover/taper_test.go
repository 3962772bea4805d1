package xover

import (
	"math"
	"testing"
)

func TestFraction(t *testing.T) {
	log := func(mid float64) *Part { return &Part{Kind: Potentiometer, Taper: Log, Mid: mid} }
	tests := []struct {
		name     string
		part     *Part
		at, want float64
		tol      float64
	}{
		{"linear", &Part{Taper: Linear}, 0.3, 0.3, 0},
		// Derived by hand: Mid 0.1 gives b = 81, and 81^¼ = 3, 81^¾ = 27, so 2/80, 8/80 and 26/80. Rounding only.
		{"log 0.1 at a quarter", log(0.1), 0.25, 0.025, 1e-16},
		{"log 0.1 at half", log(0.1), 0.5, 0.1, 1e-15},
		{"log 0.1 at three quarters", log(0.1), 0.75, 0.325, 1e-15},
		// Mid 0.2 gives b = 16: (2 − 1)/15, 1/5, (8 − 1)/15.
		{"log 0.2 at a quarter", log(0.2), 0.25, 1. / 15, 1e-15},
		{"log 0.2 at three quarters", log(0.2), 0.75, 7. / 15, 1e-15},
		// Mid 0.15 gives b = (17/3)²; b^¼ = √(17/3), worked out to five figures, so half a unit of the last.
		{"log 0.15 at a quarter", log(0.15), 0.25, 0.04437, 0.5e-5},
		{"log 0.15 at three quarters", log(0.15), 0.75, 0.40144, 0.5e-5},
		{"log with the default mid", log(0), 0.5, DefaultMid, 1e-15},
		{"log through the middle is linear", log(0.5), 0.3, 0.3, 1e-15},
		// Mid 0.9 gives b = 1/81: (1/3 − 1)/(1/81 − 1) = 2/3 · 81/80.
		{"log that bends the other way", log(0.9), 0.25, 0.675, 1e-15},
		{"log with a vanishing mid stays finite", log(1e-300), 0.5, 1e-300, 1e-312},
		{"reverse log is 1 − log(1 − x)", &Part{Taper: ReverseLog, Mid: 0.1}, 0.75, 0.975, 1e-15},
		{"below the start", log(0.1), -1, 0, 0},
		{"beyond the end", log(0.1), 2, 1, 0},
		{"at the end", log(0.1), 1, 1, 0},
		{"not a number", log(0.1), math.NaN(), 0, 0},
	}
	for _, test := range tests {
		if got := test.part.Fraction(test.at); !(math.Abs(got-test.want) <= test.tol) {
			t.Errorf("%s: %v, want %v ± %v", test.name, got, test.want, test.tol)
		}
	}
}

// TestFractionRises turns each taper from end to end: it must start at 0, end at 1 and never fall.
func TestFractionRises(t *testing.T) {
	for _, taper := range []Taper{Linear, Log, ReverseLog} {
		for _, mid := range []float64{0.001, 0.1, 0.2, 0.499} {
			p := Part{Taper: taper, Mid: mid}
			last := 0.0
			for i := range 1001 {
				f := p.Fraction(float64(i) / 1000)
				if !(f >= last && f <= 1) || i == 0 && f != 0 || i == 1000 && f != 1 {
					t.Fatalf("taper %d with mid %v: %v after %v at %d/1000", taper, mid, f, last, i)
				}
				last = f
			}
		}
	}
}
