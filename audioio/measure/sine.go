package measure

import (
	"fmt"
	"math"
	"math/cmplx"
)

// Sine is what a sine fit found in a record: y(t) = Re(Phasor·e^(jωt)) + Offset
// + rest, t = 0 at the record's first sample.
type Sine struct {
	Phasor   complex128 // peak amplitude and phase, in the record's unit
	Offset   float64
	Residual float64 // rms of the rest: noise, hum, distortion, rounding
	Samples  int     // length of the record
}

// Amplitude returns the peak amplitude.
func (s Sine) Amplitude() float64 { return cmplx.Abs(s.Phasor) }

// StandardError returns the standard deviation of the amplitude, and of the phase in
// rad times the amplitude, if the rest is white noise: Residual·√(2/Samples).
func (s Sine) StandardError() float64 {
	return s.Residual * math.Sqrt(2/float64(s.Samples))
}

// fitBlock is how many samples share a stretch of the basis.
const fitBlock = 256

// FitSines stores in dst[i] the sine of frequency hz that fits channels[i] best
// in the least-squares sense. All channels have the same length, at least 4
// samples and one cycle, and len(dst) is their number, else FitSines panics or
// gives an error. rate and hz are in Hz, hz below rate/2.
//
// It is the three-parameter fit of IEEE Std 1057: y against cos ωt, sin ωt and 1 with the
// frequency known; no start values and no iteration. Beyond one cycle the normal
// equations are well conditioned, and the residual is taken from the samples in
// a second pass, since the difference of two sums of squares would lose it.
func FitSines(dst []Sine, channels [][]float64, hz, rate float64) error {
	if len(dst) != len(channels) {
		panic(fmt.Sprintf("measure: %d results for %d channels", len(dst), len(channels)))
	}
	if len(channels) == 0 {
		return nil
	}
	n := len(channels[0])
	for _, y := range channels {
		if len(y) != n {
			panic("measure: channels of different lengths")
		}
	}
	nu := hz / rate
	if !(rate > 0 && nu > 0 && nu < 0.5) {
		return fmt.Errorf("measure: sine fit: %v Hz at a sample rate of %v Hz; the frequency must be above 0 and below half the rate", hz, rate)
	}
	if n < 4 || nu*float64(n) < 1-1e-9 {
		return fmt.Errorf("measure: sine fit: %d samples hold %.3g cycles of %v Hz; take a record of at least one cycle and 4 samples", n, nu*float64(n), hz)
	}
	var c, s [fitBlock]float64
	var g gram
	for i := range dst {
		dst[i] = Sine{Samples: n}
	}
	// First pass. Phasor holds (Σ y·c, Σ y·s) and Offset Σ y until they are solved for.
	for from := 0; from < n; from += fitBlock {
		m := min(fitBlock, n-from)
		basis(c[:m], s[:m], nu, from)
		g.add(c[:m], s[:m])
		for k, y := range channels {
			var yc, ys, y1 float64
			for i, v := range y[from : from+m] {
				yc += v * c[i]
				ys += v * s[i]
				y1 += v
			}
			dst[k].Phasor += complex(yc, ys)
			dst[k].Offset += y1
		}
	}
	for k := range dst {
		a, b, offset := g.solve(real(dst[k].Phasor), imag(dst[k].Phasor), dst[k].Offset, float64(n))
		dst[k].Phasor, dst[k].Offset = complex(a, -b), offset
		if math.IsNaN(a-a) || math.IsNaN(b-b) || math.IsNaN(offset-offset) {
			return fmt.Errorf("measure: sine fit: channel %d holds samples that are not finite; record it again", k+1)
		}
	}
	for from := 0; from < n; from += fitBlock {
		m := min(fitBlock, n-from)
		basis(c[:m], s[:m], nu, from)
		for k, y := range channels {
			a, b, offset := real(dst[k].Phasor), -imag(dst[k].Phasor), dst[k].Offset
			sum := 0.0
			for i, v := range y[from : from+m] {
				rest := v - (a*c[i] + b*s[i] + offset)
				sum += rest * rest
			}
			dst[k].Residual += sum
		}
	}
	for k := range dst {
		dst[k].Residual = math.Sqrt(dst[k].Residual / float64(n))
	}
	return nil
}

// gram holds the sums of products of cos, sin and 1 over the record.
type gram struct{ cc, cs, ss, c, s float64 }

func (g *gram) add(c, s []float64) {
	for i := range c {
		g.cc += c[i] * c[i]
		g.cs += c[i] * s[i]
		g.ss += s[i] * s[i]
		g.c += c[i]
		g.s += s[i]
	}
}

// solve returns x of the symmetric positive definite
//
//	⎡n   c   s ⎤ ⎡x1⎤   ⎡y1⎤
//	⎢c   cc  cs⎥·⎢xc⎥ = ⎢yc⎥
//	⎣s   cs  ss⎦ ⎣xs⎦   ⎣ys⎦
//
// by elimination without exchange, which such a matrix does not need.
func (g *gram) solve(yc, ys, y1, n float64) (xc, xs, x1 float64) {
	lc, ls := g.c/n, g.s/n
	cc, cs, ss := g.cc-lc*g.c, g.cs-lc*g.s, g.ss-ls*g.s
	yc -= lc * y1
	ys -= ls * y1
	l := cs / cc
	xs = (ys - l*yc) / (ss - l*cs)
	xc = (yc - cs*xs) / cc
	x1 = (y1 - g.c*xc - g.s*xs) / n
	return xc, xs, x1
}

// Ratio returns the transfer function out/ref at the frequency that both were fitted at.
func Ratio(out, ref Sine) (complex128, error) {
	if ref.Phasor == 0 {
		return 0, fmt.Errorf("measure: ratio: the reference channel is silent; connect channel 1 to the amplifier's terminals")
	}
	return out.Phasor / ref.Phasor, nil
}
