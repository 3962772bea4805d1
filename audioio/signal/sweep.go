package signal

import (
	"fmt"
	"math"
)

// SweepSettings shape a sweep. The zero value works.
type SweepSettings struct {
	Peak        float64 // amplitude, full scale 1; 0 is 0.5
	EdgeSeconds float64 // length of rise and of fall in s; 0 is 20 ms or a tenth of the sweep, whichever is shorter
	TailSeconds float64 // silence after the sweep in s, for the circuit's decay; 0 is none
}

// Sweep is a sine whose frequency rises exponentially from f1 to f2 in T:
//
//	x(t) = sin(2π·f1·L·(e^(t/L) − 1)),  L = T/ln(f2/f1)
//
// A. Farina, "Simultaneous Measurement of Impulse Response and Distortion with
// a Swept-Sine Technique", 108th Conv. Audio Eng. Soc., preprint 5093, 2000.
type Sweep struct {
	rate       float64
	f1, l      float64 // Hz, s
	peak       float64
	length     int // of the sweep, samples
	edge, tail int // samples
	pos        int
}

// NewSweep returns a sweep from f1 to f2 (Hz, 0 < f1 < f2 ≤ rate/2) that takes so many seconds.
func NewSweep(rate int, f1, f2, seconds float64, s SweepSettings) (*Sweep, error) {
	const where = "signal: sweep"
	if err := checkRate(where, rate); err != nil {
		return nil, err
	}
	if !(f1 > 0 && f1 < f2 && f2 <= float64(rate)/2) {
		return nil, fmt.Errorf("%s: from %v to %v Hz at a sample rate of %d Hz; give two rising frequencies above 0 and up to half the rate", where, f1, f2, rate)
	}
	if err := checkSeconds(where, "the length", seconds); err != nil {
		return nil, err
	}
	if err := checkSeconds(where, "the edge", s.EdgeSeconds); err != nil {
		return nil, err
	}
	if err := checkSeconds(where, "the tail", s.TailSeconds); err != nil {
		return nil, err
	}
	peak, err := peakOr(where, s.Peak, 0.5)
	if err != nil {
		return nil, err
	}
	rise := s.EdgeSeconds
	if rise == 0 {
		rise = min(0.02, seconds/10)
	}
	w := &Sweep{
		rate: float64(rate), f1: f1, l: seconds / math.Log(f2/f1), peak: peak,
		length: int(math.Round(seconds * float64(rate))),
		edge:   int(math.Round(rise * float64(rate))),
		tail:   int(math.Round(s.TailSeconds * float64(rate))),
	}
	if w.length < 2 || 2*w.edge > w.length {
		return nil, fmt.Errorf("%s: %v s with edges of %v s; make the sweep longer or the edges shorter", where, seconds, rise)
	}
	return w, nil
}

// Len returns the length in samples, the tail included.
func (w *Sweep) Len() int { return w.length + w.tail }

// FrequencyAt returns the momentary frequency in Hz, t seconds from the beginning.
func (w *Sweep) FrequencyAt(t float64) float64 { return w.f1 * math.Exp(t/w.l) }

// HarmonicLead returns by how many seconds the n-th harmonic's impulse response
// comes before that of the fundamental, L·ln n (Farina 2000), n ≥ 1.
func (w *Sweep) HarmonicLead(n int) float64 { return w.l * math.Log(float64(n)) }

// cycles returns the phase in turns, t seconds from the beginning. Expm1 keeps the
// early phase exact; late in a ten-minute sweep to 20 kHz, after two million
// turns, what is left of a float64 is still 5e-10 of a turn.
func (w *Sweep) cycles(t float64) float64 { return w.f1 * w.l * math.Expm1(t/w.l) }

// ReadSamples implements [Source].
func (w *Sweep) ReadSamples(dst []float64) (int, error) {
	n, err := samplesLeft(dst, w.pos, w.Len())
	for i := range dst[:n] {
		dst[i] = w.at(w.pos)
		w.pos++
	}
	return n, err
}

func (w *Sweep) at(i int) float64 {
	if i >= w.length {
		return 0
	}
	turns := w.cycles(float64(i) / w.rate)
	turns -= math.Floor(turns)
	return w.peak * edge(i, w.length, w.edge) * math.Sin(2*math.Pi*turns)
}
