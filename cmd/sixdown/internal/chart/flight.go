package chart

import "math"

// held says what the first subject's measurements hold of flight time, which pictures of phase and time leave out, since
// nothing else could be seen; "" if nothing.
func held(subjects []*Subject) string {
	if late := subjects[0].late(); late > 0 {
		return ", less the " + decimals(1000*late, 2) + " ms that the tables hold"
	}
	return ""
}

// late is Late where there is a sum to be drawn.
func (s *Subject) late() float64 {
	if !s.sounds() {
		return 0
	}
	return s.Late
}

// withoutFlight returns z over freqs, in Hz, the time late in s taken out of its phase.
func withoutFlight(z []complex128, freqs []float64, late float64) []complex128 {
	if late == 0 {
		return z
	}
	out := make([]complex128, len(z))
	for i, f := range freqs {
		sin, cos := math.Sincos(2 * math.Pi * f * late)
		out[i] = z[i] * complex(cos, sin)
	}
	return out
}
