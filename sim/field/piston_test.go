package field

import (
	"fmt"
	"math"
	"testing"
)

// J1 and its zeros: M. Abramowitz, I. A. Stegun, "Handbook of Mathematical Functions", 1964, tables 9.1 and 9.5
// (from memory; SciPy's j1 and jn_zeros agree to all digits).
func TestPiston(t *testing.T) {
	for x, j1 := range map[float64]float64{0.5: 0.2422684577, 1: 0.4400505857, 2: 0.5767248078, 5: -0.3275791376, 10: 0.0434727462} {
		near(t, fmt.Sprintf("x = %g", x), Piston(2*x, 0.5), 2*j1/x, 5e-10) // half a unit of the last figure, times 2/x at most
	}
	for _, zero := range []float64{3.8317059702, 7.0155866698, 10.1734681351} {
		near(t, fmt.Sprintf("zero at %g", zero), Piston(zero, 1), 0, 1e-10)
	}
	// Derived with SciPy's brentq: 3 dB down at x = 1.6137411963697, 6.02 dB at 2.2150893677242.
	near(t, "3 dB", Piston(1.6137411963697, 1), math.Pow(10, -3./20), 1e-12)
	near(t, "half", Piston(2.2150893677242, 1), 0.5, 1e-12)
	near(t, "on the axis", Piston(50, 0), 1, 0)
	// Across the change of formula the series goes on: 1 - x²/8 + x⁴/192.
	for _, x := range []float64{0.9e-4, 1.1e-4} {
		near(t, "small x", Piston(x, 1), 1-x*x/8, 1e-15)
	}
}

// The directivity is the mean of the phases over the disc: integrated by the midpoint rule, in strips.
func TestPistonIsAMeanOverTheDisc(t *testing.T) {
	for _, x := range []float64{0.3, 2, 6, 15} {
		const n = 20000
		sum := 0.0
		for i := range n {
			u := 2*(float64(i)+0.5)/n - 1
			sum += math.Sqrt(1-u*u) * math.Cos(x*u)
		}
		near(t, fmt.Sprintf("x = %g", x), Piston(x, 1), sum*2/n*2/math.Pi, 1e-5) // of the rule, at the ends' roots
	}
}
