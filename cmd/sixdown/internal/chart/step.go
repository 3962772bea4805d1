package chart

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/dsp/fourier"

	"sixdown/sim"
)

// The step is one edge of a square wave of period stepPeriod, long enough that what one edge stirs has died before
// the next. Such a wave has odd harmonics alone, so nothing is asked of the response at DC, where it may be
// unknown.
const (
	stepPeriod = 0.5     // s
	stepSize   = 1 << 16 // samples in a period: one each 7.6 µs
	stepBand   = 20e3    // Hz, where the Gaussian that rounds the edge is 3.01 dB down
	stepTop    = 64e3    // Hz, where it is 31 dB down and the harmonics end
	stepFrom   = -0.5e-3 // s, from when what measurements hold of flight is over
	stepTo     = 5e-3    // s
	mostFlight = 0.2     // s, well within stepPeriod
)

// A Step is what a design answers to a step of the amplifier's voltage, as heard through a Gaussian low-pass of
// 20 kHz without delay. The Gaussian keeps the edge from ringing at the end of the band.
type Step struct {
	Seconds []float64   // from the step, flight time over the listening distance taken out
	Names   []string    // of the ways
	Ways    [][]float64 // by way, relative to the peak of Sum
	Sum     []float64   // at the ear; of a design without a sum nil, and Ways are volts for a step of 1 V
}

// StepFrequencies returns the frequencies in Hz at which StepOf needs the response.
func StepFrequencies() []float64 {
	var f []float64
	for n := 1; float64(n)/stepPeriod <= stepTop; n += 2 {
		f = append(f, float64(n)/stepPeriod)
	}
	return f
}

// StepOf returns the step response that belongs to a response over StepFrequencies, from when the time late in s is over that
// measurements hold of flight.
func StepOf(r *sim.Response, late float64) (*Step, error) {
	if want := StepFrequencies(); len(r.Freqs) != len(want) || r.Freqs[0] != want[0] {
		return nil, fmt.Errorf("chart: a step response needs the response at %d frequencies, and there are %d; predict it at StepFrequencies", len(want), len(r.Freqs))
	}
	fft := fourier.NewFFT(stepSize)
	step := &Step{}
	const dt = stepPeriod / stepSize
	late = min(late, mostFlight)
	first, last := int(math.Ceil((late+stepFrom)/dt)), int(math.Floor((late+stepTo)/dt))
	for i := first; i <= last; i++ {
		step.Seconds = append(step.Seconds, float64(i)*dt)
	}
	if r.Sum != nil {
		step.Sum = edge(fft, r.Freqs, r.Sum, first, last)
	}
	for _, w := range r.Ways {
		h := w.H
		if r.Sum != nil {
			h = w.P
		}
		step.Names = append(step.Names, w.Name)
		step.Ways = append(step.Ways, edge(fft, r.Freqs, h, first, last))
	}
	if r.Sum == nil {
		return step, nil
	}
	peak := max(most(step.Sum), -least(step.Sum))
	if !(peak > 0) {
		return step, nil // it is silent
	}
	for _, c := range append([][]float64{step.Sum}, step.Ways...) {
		for i := range c {
			c[i] /= peak
		}
	}
	return step, nil
}

// edge returns what a system of response h at the odd harmonics f makes of one rising edge, from sample first to
// sample last after it.
func edge(fft *fourier.FFT, f []float64, h []complex128, first, last int) []float64 {
	coefficients := make([]complex128, stepSize/2+1)
	for k, hk := range h {
		// A square wave of ±½ that rises at 0 is Σ 2/(πn)·sin(2πnt/T) over odd n, and sin is the real part of
		// -j·e^{jωt}; Sequence adds each term and its conjugate.
		n := 2*k + 1
		coefficients[n] = complex(0, -1/(math.Pi*float64(n))) * hk * complex(rounding(f[k]), 0)
	}
	wave := fft.Sequence(nil, coefficients)
	// Before the edge all is at rest at what -½ makes.
	rest := wave[(first+stepSize)%stepSize]
	out := make([]float64, 0, last-first+1)
	for i := first; i <= last; i++ {
		out = append(out, wave[(i+stepSize)%stepSize]-rest)
	}
	return out
}

// rounding is the Gaussian low-pass.
func rounding(f float64) float64 {
	x := f / stepBand
	return math.Exp(-math.Ln2 / 2 * x * x)
}
