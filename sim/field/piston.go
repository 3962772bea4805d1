package field

import "math"

// Piston returns the directivity 2J1(x)/x, x = ka·sinθ, of a flat circular piston of radius a in an infinite
// baffle: its far-field pressure at the angle θ from its axis over that on the axis. k is the wavenumber 2πf/c,
// ka ≥ 0. A value below 0 is a side lobe in opposite phase; the first zero is at x = 3.8317.
//
// Lord Rayleigh, "The Theory of Sound", vol. II, § 302.
func Piston(ka, sinTheta float64) float64 {
	x := ka * sinTheta
	if math.Abs(x) < 1e-4 {
		return 1 - x*x/8 // the next term, x⁴/192, is below rounding
	}
	return 2 * math.J1(x) / x
}
