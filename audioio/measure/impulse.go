package measure

import (
	"fmt"
	"math"
	"math/cmplx"

	"gonum.org/v1/gonum/dsp/fourier"
)

// Impulse is an impulse response: one channel deconvolved by the reference.
type Impulse struct {
	rate     float64   // Hz
	response []float64 // circular: sample i is at i/rate s, the last ones before 0
	pulse    []float64 // the reference deconvolved by itself in the same way
	power    []float64 // |X|² of the reference, at multiples of rate/len(response)
	energy   float64   // Σx² of the reference
}

// NewImpulse deconvolves out by ref, records of the same length at rate Hz:
// Y·X*/(|X|² + ε) by fast transforms, ε the power below which no transfer is
// answered for, so that noise and distortion are not blown up where the sweep has nothing; padded with zeros to twice their length so
// that times before and after 0 stay apart (A. Farina, 108th Conv. Audio Eng. Soc.,
// preprint 5093, 2000; the regularisation is that of O. Kirkeby, P. A. Nelson,
// H. Hamada, F. Orduna-Bustamante, "Fast Deconvolution of Multichannel Systems Using
// Regularization", IEEE Trans. Speech Audio Process. 6(2), 189–194, 1998).
func NewImpulse(out, ref []float64, rate float64) (*Impulse, error) {
	if len(out) != len(ref) {
		panic("measure: channels of different lengths")
	}
	if err := checkFrequencies(nil, rate); err != nil {
		return nil, err
	}
	energy, err := energyOf(ref)
	if err != nil {
		return nil, err
	}
	if _, err := energyOf(out); err != nil {
		return nil, err
	}
	if energy == 0 {
		return nil, fmt.Errorf("measure: impulse response: the reference channel is silent; connect channel 1 to the amplifier's terminals")
	}
	n := smoothLength(2 * len(ref))
	fft := fourier.NewFFT(n)
	padded := make([]float64, n)
	copy(padded, ref)
	x := fft.Coefficients(nil, padded)
	copy(padded, out)
	y := fft.Coefficients(nil, padded)
	spectrum := make([]float64, len(x))
	for i, v := range x {
		spectrum[i] = power(v)
	}
	floor := energy * floorPower
	for i := range x {
		// The inverse transform is not normalised: 1/n here.
		weight := 1 / ((spectrum[i] + floor) * float64(n))
		y[i] *= cmplx.Conj(x[i]) * complex(weight, 0)
		x[i] = complex(spectrum[i]*weight, 0)
	}
	return &Impulse{
		rate: rate, response: fft.Sequence(padded, y), pulse: fft.Sequence(nil, x), power: spectrum, energy: energy,
	}, nil
}

// Window is the stretch of an impulse response that counts, in s.
type Window struct {
	Before float64 // up to so long before time 0
	After  float64 // and so long after it
	Fade   float64 // of which the outer parts of so long fall to 0 as a raised cosine, at each end
}

// Samples returns the impulse response from w.Before before time 0 to w.After after
// it, faded at both ends; time 0 is at index round(w.Before·rate).
func (m *Impulse) Samples(w Window) ([]float64, error) {
	n, err := m.check(w)
	if err != nil {
		return nil, err
	}
	return n.cut(m.response), nil
}

// Transfer stores in dst[i] the transfer function at hz[i] Hz of what lies in the
// window; len(dst) = len(hz), else it panics. Noise and echoes outside the window are
// gone, and so is harmonic distortion, which an exponential sweep puts before time 0
// (Farina 2000), if w.Before is shorter than the second harmonic's lead.
// Details narrower than about 1/(w.Before + w.After) Hz are smeared. The reference's own
// pulse goes through the same window and divides out, so that the sweep's
// limited range and the regularisation do not colour the result.
func (m *Impulse) Transfer(dst []complex128, hz []float64, w Window) error {
	if len(dst) != len(hz) {
		panic(fmt.Sprintf("measure: %d results for %d frequencies", len(dst), len(hz)))
	}
	if err := checkFrequencies(hz, m.rate); err != nil {
		return err
	}
	n, err := m.check(w)
	if err != nil {
		return err
	}
	for _, f := range hz {
		bin := int(math.Round(f / m.rate * float64(len(m.response))))
		// Five bins, since noise has dips: see atDip.
		sum := 0.0
		for _, v := range m.power[max(bin-2, 0):min(bin+3, len(m.power))] {
			sum += v
		}
		if !(sum > 5*m.energy*floorPower) {
			return errNothingAt(f)
		}
	}
	x := make([]complex128, len(hz))
	spectra([][]complex128{dst, x}, [][]float64{n.cut(m.response), n.cut(m.pulse)}, m.rate, hz)
	for i := range hz {
		dst[i] /= x[i]
	}
	return nil
}

// window is a Window in samples.
type window struct{ before, after, fade int }

func (m *Impulse) check(w Window) (window, error) {
	half := float64(len(m.response)/2) / m.rate
	if !(w.Before >= 0 && w.Before <= half && w.After > 0 && w.After <= half) {
		return window{}, fmt.Errorf("measure: window: %v s before and %v s after time 0; the record allows up to %.4g s each", w.Before, w.After, half)
	}
	if !(w.Fade >= 0 && 2*w.Fade <= w.Before+w.After) {
		return window{}, fmt.Errorf("measure: window: fades of %v s in a window of %v s; make them at most half of it", w.Fade, w.Before+w.After)
	}
	round := func(t float64) int { return int(math.Round(t * m.rate)) }
	n := window{before: round(w.Before), after: round(w.After), fade: round(w.Fade)}
	// Rounding up both could make them overlap or empty.
	n.before, n.after = min(n.before, len(m.response)/2), max(min(n.after, len(m.response)/2), 1)
	n.fade = min(n.fade, (n.before+n.after)/2)
	return n, nil
}

// cut returns that part of a circular response.
func (w window) cut(circular []float64) []float64 {
	out := make([]float64, w.before+w.after)
	copy(out, circular[len(circular)-w.before:])
	copy(out[w.before:], circular[:w.after])
	for i := range w.fade {
		g := 0.5 - 0.5*math.Cos(math.Pi*(float64(i)+0.5)/float64(w.fade))
		out[i] *= g
		out[len(out)-1-i] *= g
	}
	return out
}

// smoothLength returns the smallest number from n up with no prime factor above
// 5: the transform of a length with a large prime factor takes time by its square.
func smoothLength(n int) int {
	best := math.MaxInt
	for five := 1; five < 2*n; five *= 5 {
		for three := five; three < 2*n; three *= 3 {
			two := three
			for two < n {
				two *= 2
			}
			best = min(best, two)
		}
	}
	return best
}
