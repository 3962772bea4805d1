package sim

import (
	"fmt"
	"math"
	"math/cmplx"
	"testing"
)

// EPDR over |Z| by angle in degrees, derived from the definition in E. Benjamin, "Audio Power Amplifiers for
// Loudspeaker Loads", J. Audio Eng. Soc. 42(9), 670–683, 1994, as the numerical maximum of (V -
// V·sinθ)·(V/|z|)·sin(θ - φ).
func TestEPDR(t *testing.T) {
	for _, tt := range []struct{ deg, ratio, of8, of4 float64 }{
		{0, 1, 8, 4},
		{15, 0.66242, 5.299, 2.650},
		{30, 0.47066, 3.765, 1.883},
		{36.87, 0.41029, 3.282, 1.641},
		{45, 1 / (2 * math.Sqrt2), 2.828, 1.414},
		{60, 0.27807, 2.225, 1.112},
		{75, 0.22741, 1.819, 0.910},
		{90, 1 / (3 * math.Sqrt(3)), 1.540, 0.770},
	} {
		for _, sign := range []float64{1, -1} {
			z := cmplx.Rect(8, sign*tt.deg*math.Pi/180)
			near(t, fmt.Sprintf("%g°", sign*tt.deg), EPDR(z)/8, tt.ratio, 6e-6) // printed to five decimals
			near(t, fmt.Sprintf("8 Ω, %g°", sign*tt.deg), EPDR(z), tt.of8, 6e-4)
			near(t, fmt.Sprintf("4 Ω, %g°", sign*tt.deg), EPDR(z/2), tt.of4, 6e-4)
		}
	}
}

// The closed form against a search over the cycle for the greatest dissipation, which is the definition.
func TestEPDRAgainstTheDefinition(t *testing.T) {
	for deg := -90.0; deg <= 90; deg += 7.5 {
		phi, peak := deg*math.Pi/180, 0.0
		for k := range 100000 {
			theta := 2 * math.Pi * float64(k) / 100000
			peak = max(peak, (1-math.Sin(theta))*math.Sin(theta-phi))
		}
		// A grid point lies within π/100000 of the maximum, where p is flat: short by some 1e-9 of it.
		near(t, fmt.Sprintf("%g°", deg), EPDR(cmplx.Rect(1, phi)), 1/(4*peak), 1e-8)
	}
}
