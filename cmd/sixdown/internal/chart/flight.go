package chart

import (
	"math"
	"slices"

	"sixdown/sim"
)

// Measured responses may hold the flight of the sound to the microphone and the delay of what recorded it. Where that is
// more than leastFlight it is taken out of pictures of phase and time, in which nothing else could be seen.
const (
	leastFlight = 0.3e-3 // s; more than drivers are apart in depth, 0.1 m: common practice, no source
	mostFlight  = 0.2    // s, well within stepPeriod
	flightFrom  = 2e3    // Hz, from where group delay is flight and little else
)

// flight returns the time in s that the sum of r is late at high frequencies: the median of its group delay there. It is
// 0 if that is too little to be taken out.
func flight(r *sim.Response) float64 {
	var late []float64
	for i, d := range r.SumDelay {
		if r.Freqs[i] >= flightFrom && !math.IsNaN(d) {
			late = append(late, d)
		}
	}
	if len(late) == 0 {
		return 0
	}
	slices.Sort(late)
	if d := late[len(late)/2]; d > leastFlight {
		return min(d, mostFlight)
	}
	return 0
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
