package signal

import (
	"fmt"
	"math"
)

// SweepSettings shape a sweep. The zero value works.
type SweepSettings struct {
	Peak        float64 // amplitude, full scale 1; 0 is 0.5
	RiseSeconds float64 // length of the rise at f1 in s; 0 is 20 ms or a tenth of the sweep, whichever is shorter
	FallSeconds float64 // length of the fall at f2 in s; 0 is 2 ms or a tenth of the sweep, whichever is shorter
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
	rise, fall int // samples
	tail       int // samples
	pos        int
}

// NewSweep returns a sweep from f1 to f2 (Hz, 0 < f1 < f2 ≤ rate/2) that takes so
// many seconds. Rise and fall take power from the ends of the range: let it reach a
// third of an octave below and some percent above what is to be measured.
func NewSweep(rate int, f1, f2, seconds float64, s SweepSettings) (*Sweep, error) {
	const where = "signal: sweep"
	if err := checkRate(where, rate); err != nil {
		return nil, err
	}
	if !(f1 > 0 && f1 < f2 && f2 <= float64(rate)/2) {
		return nil, fmt.Errorf("%s: from %v to %v Hz at a sample rate of %d Hz; give two rising frequencies above 0 and up to half the rate", where, f1, f2, rate)
	}
	for _, t := range []struct {
		what    string
		seconds float64
	}{
		{"the length", seconds}, {"the rise", s.RiseSeconds}, {"the fall", s.FallSeconds}, {"the tail", s.TailSeconds},
	} {
		if err := checkSeconds(where, t.what, t.seconds); err != nil {
			return nil, err
		}
	}
	peak, err := peakOr(where, s.Peak, 0.5)
	if err != nil {
		return nil, err
	}
	if s.RiseSeconds == 0 {
		s.RiseSeconds = min(0.02, seconds/10)
	}
	if s.FallSeconds == 0 {
		s.FallSeconds = min(0.002, seconds/10)
	}
	samples := func(seconds float64) int { return int(math.Round(seconds * float64(rate))) }
	w := &Sweep{
		rate: float64(rate), f1: f1, l: seconds / math.Log(f2/f1), peak: peak,
		length: samples(seconds),
		rise:   samples(s.RiseSeconds),
		fall:   samples(s.FallSeconds),
		tail:   samples(s.TailSeconds),
	}
	if w.length < 2 || w.rise+w.fall > w.length {
		return nil, fmt.Errorf("%s: %v s with a rise of %v s and a fall of %v s; make the sweep longer or those shorter",
			where, seconds, s.RiseSeconds, s.FallSeconds)
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
	return w.peak * rise(i, w.rise) * rise(w.length-1-i, w.fall) * math.Sin(2*math.Pi*turns)
}
