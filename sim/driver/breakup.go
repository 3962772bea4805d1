package driver

import "math"

// A Peak is a resonance of a diaphragm that bends, as it shows on the axis.
type Peak struct {
	Frequency float64 // Hz; > 0
	Q         float64 // of the resonance: Frequency over the width in Hz of the mode; > 0
	GainDB    float64 // dB at Frequency over what there would be without it; negative: a dip
}

// A Breakup is a radiator with peaks on its response. Each adds one mode to the piston's motion,
//
//	1 + (g-1)·(s/ω0Q)/(s²/ω0² + s/ω0Q + 1),   g = 10^(GainDB/20),
//
// so it is g at its frequency and 1 far away. Its zeros lie to the left of the jω axis, for dips too: a peak
// adds no phase beyond the minimum that goes with its magnitude.
type Breakup struct {
	of    Radiator
	peaks []mode
}

// A mode is a Peak made ready.
type mode struct{ f0, width, gain float64 } // Hz; 1/Q; factor

// NewBreakup returns r with peaks on it, in any order. It keeps r, not peaks.
func NewBreakup(r Radiator, peaks []Peak) *Breakup {
	b := &Breakup{of: r}
	for _, p := range peaks {
		b.peaks = append(b.peaks, mode{f0: p.Frequency, width: 1 / p.Q, gain: math.Pow(10, p.GainDB/20)})
	}
	return b
}

// Pressure returns r's pressure times the peaks.
func (b *Breakup) Pressure(f float64) complex128 {
	p := b.of.Pressure(f)
	for i := range b.peaks {
		m := &b.peaks[i]
		u := f / m.f0
		p *= complex(1-u*u, m.gain*m.width*u) / complex(1-u*u, m.width*u)
	}
	return p
}
