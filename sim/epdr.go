package sim

import (
	"math"
	"math/cmplx"
)

// EPDR returns the equivalent peak dissipation resistance in Ω of the load z in Ω: the resistor that would heat
// an output transistor of the amplifier to the same peak. The idea is E. Benjamin's, "Audio Power Amplifiers
// for Loudspeaker Loads", J. Audio Eng. Soc. 42(9), 670–683, 1994.
//
// An ideal class-B stage with rails ±V that swings to the full rail gives V·sinθ; into z the current is
// (V/|z|)·sin(θ - φ), and the transistor that carries it while it is positive turns (V - V·sinθ)·(V/|z|)·sin(θ
// - φ) into heat. That is greatest at θ = 150° + 2φ/3, where it is 2·(V²/|z|)·sin³(30° + φ/3), for φ ≥ 0; the
// other sign mirrors it. A resistor R peaks at V²/(4R), so R = |z|/(8·sin³(30° + |φ|/3)). It is exact, and |z|
// for a resistor.
func EPDR(z complex128) float64 {
	s := math.Sin(math.Pi/6 + math.Abs(cmplx.Phase(z))/3)
	return cmplx.Abs(z) / (8 * s * s * s)
}
