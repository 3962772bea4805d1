package signal

import (
	"fmt"
	"math"
	"math/rand/v2"
)

// NoiseSettings shape noise. The zero value works.
type NoiseSettings struct {
	Peak        float64 // highest magnitude, full scale 1; 0 is 0.5. No sample exceeds it.
	Crest       float64 // peak over rms, 2 to 8; 0 is 4, that is 12.04 dB. The rms is Peak/Crest.
	EdgeSeconds float64 // length of rise and of fall in s; 0 is 20 ms or a tenth of the noise, whichever is shorter
}

// shape is what all noises share: level, length, edges.
type shape struct {
	peak, crest  float64
	length, edge int // samples
	pos          int
}

func newShape(where string, rate int, seconds float64, s NoiseSettings) (shape, error) {
	if err := checkRate(where, rate); err != nil {
		return shape{}, err
	}
	if err := checkSeconds(where, "the length", seconds); err != nil {
		return shape{}, err
	}
	if err := checkSeconds(where, "the edge", s.EdgeSeconds); err != nil {
		return shape{}, err
	}
	peak, err := peakOr(where, s.Peak, 0.5)
	if err != nil {
		return shape{}, err
	}
	crest := s.Crest
	if crest == 0 {
		crest = 4
	}
	if !(crest >= 2 && crest <= 8) {
		return shape{}, fmt.Errorf("%s: a crest factor of %v; give 2 to 8", where, s.Crest)
	}
	rise := s.EdgeSeconds
	if rise == 0 {
		rise = min(0.02, seconds/10)
	}
	h := shape{
		peak: peak, crest: crest,
		length: int(math.Round(seconds * float64(rate))),
		edge:   int(math.Round(rise * float64(rate))),
	}
	if h.length < 1 || 2*h.edge > h.length {
		return shape{}, fmt.Errorf("%s: %v s with edges of %v s; make the noise longer or the edges shorter", where, seconds, rise)
	}
	return h, nil
}

// Len returns the length in samples.
func (h *shape) Len() int { return h.length }

// finish shapes the edges of a block that begins at pos, and moves on behind it.
func (h *shape) finish(block []float64) {
	if first, behind := h.pos, h.pos+len(block); first < h.edge || behind > h.length-h.edge {
		for i := range block {
			block[i] *= edge(first+i, h.length, h.edge)
		}
	}
	h.pos += len(block)
}

// White is noise of independent samples: its spectrum is flat up to half the
// sample rate. They follow a normal distribution cut off at the peak by drawing
// again, which, other than clipping, leaves them independent.
type White struct {
	shape
	random *rand.Rand
	sigma  float64 // of the distribution before it is cut off
}

// NewWhite returns so many seconds of white noise. The same source in the same state gives the same noise.
func NewWhite(rate int, seconds float64, src rand.Source, s NoiseSettings) (*White, error) {
	h, err := newShape("signal: white noise", rate, seconds, s)
	if err != nil {
		return nil, err
	}
	if src == nil {
		return nil, errNoRandom
	}
	cut := crestToCut(h.crest, truncatedVariance)
	return &White{shape: h, random: rand.New(src), sigma: h.peak / cut}, nil
}

// ReadSamples implements [Source].
func (w *White) ReadSamples(dst []float64) (int, error) {
	n, err := samplesLeft(dst, w.pos, w.length)
	block := dst[:n]
	for i := range block {
		x := w.sigma * w.random.NormFloat64()
		for math.Abs(x) > w.peak {
			x = w.sigma * w.random.NormFloat64()
		}
		block[i] = x
	}
	w.finish(block)
	return n, err
}

// truncatedVariance returns the variance of a standard normal variate that is drawn
// again while outside ±c: 1 − 2c·φ(c)/(2Φ(c) − 1).
func truncatedVariance(c float64) float64 {
	return 1 - 2*c*normalDensity(c)/math.Erf(c/math.Sqrt2)
}

// clippedVariance returns the variance of a standard normal variate set to ±c
// where outside: (2Φ(c) − 1) − 2c·φ(c) + 2c²(1 − Φ(c)).
func clippedVariance(c float64) float64 {
	return math.Erf(c/math.Sqrt2) - 2*c*normalDensity(c) + c*c*math.Erfc(c/math.Sqrt2)
}

func normalDensity(x float64) float64 {
	return math.Exp(-x*x/2) / math.Sqrt(2*math.Pi)
}

// crestToCut returns where a standard normal distribution must be limited, in
// standard deviations, for the outcome's peak over rms to be crest. That ratio rises with the cut.
func crestToCut(crest float64, variance func(c float64) float64) float64 {
	lo, hi := 0.1, 2*crest
	for range 60 {
		c := (lo + hi) / 2
		if c/math.Sqrt(variance(c)) < crest {
			lo = c
		} else {
			hi = c
		}
	}
	return (lo + hi) / 2
}
