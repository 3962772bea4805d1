package signal

import (
	"math"
	"math/rand/v2"
)

const (
	pinkSections = 8
	pinkLowest   = 4.0 // Hz: below it the spectrum goes flat
)

// Pink is noise whose power falls by half for every octave, −3.01 dB,
// from 20 Hz to 0.45 of the sample rate, within ±0.3 dB; below 4 Hz it goes flat.
//
// White noise passes (1 − z⁻¹)^(−1/2), the discrete integrator of order one half
// (J. R. M. Hosking, "Fractional Differencing", Biometrika 68(1), 165–176, 1981).
// The coefficients of its series are the moments of the arcsine distribution, so
//
//	(1 − z⁻¹)^(−1/2) = (2/π) ∫ dθ / (1 − cos²θ·z⁻¹),  θ from 0 to π/2,
//
// a sum of one-pole sections. With tan θ = e^u the trapezoidal rule in u needs
// few of them, since for an analytic integrand its error falls exponentially with
// the spacing (L. N. Trefethen, J. A. C. Weideman, "The Exponentially Convergent
// Trapezoidal Rule", SIAM Review 56(3), 385–458, 2014). The poles so come out equally
// spaced in log frequency. What lies beyond the last nodes goes to the lowest pole
// and to a direct term. Towards half the sample rate |1 − e^(−jω)| falls short of ω;
// two zeros make up for that.
//
// Samples beyond the peak are clipped: at a crest of 4 one in 16 000, which adds
// less than 0.001 dB to the spectrum anywhere below 20 kHz.
type Pink struct {
	shape
	random rand.Source
	gain   float64
	pole   [pinkSections]float64
	weight [pinkSections]float64
	direct float64
	state  [pinkSections]float64
	x1, x2 float64 // the white samples before
}

// Zeros 1 + a·z⁻¹ + b·z⁻², over their sum: a least-squares fit, in dB, of
// √(2 sin(ω/2)/ω) from 0 to 0.95π. It is off by 0.08 dB at 20 kHz and 48 kHz.
const (
	pinkZeroA = 0.0880
	pinkZeroB = -0.0158
)

// NewPink returns so many seconds of pink noise. The same source in the same state gives the same noise.
func NewPink(rate int, seconds float64, src rand.Source, s NoiseSettings) (*Pink, error) {
	h, err := newShape("signal: pink noise", rate, seconds, s)
	if err != nil {
		return nil, err
	}
	if src == nil {
		return nil, errNoRandom
	}
	p := &Pink{shape: h, random: src}
	// Near z = 1, 1 − cos²θ ≈ θ² is the pole's frequency in radians a sample.
	first := math.Log(math.Tan(math.Sqrt(2 * math.Pi * pinkLowest / float64(rate))))
	last := 1.2 // θ = 73°: beyond it poles are so fast that the direct term serves for them
	step := (last - first) / (pinkSections - 1)
	p.direct = 1
	for i := range p.pole {
		u := first + float64(i)*step
		cos := 1 / math.Sqrt(1+math.Exp(2*u)) // cos θ from tan θ
		p.pole[i] = cos * cos
		p.weight[i] = step / (math.Pi * math.Cosh(u)) // (2/π)·dθ/du
		if i == 0 {
			p.weight[i] += 2 / math.Pi * math.Atan(math.Exp(u-step/2))
		}
		p.direct -= p.weight[i]
	}
	cut := crestToCut(h.crest, clippedVariance)
	p.gain = h.peak / (cut * math.Sqrt(p.variance()))
	return p, nil
}

// variance returns that of the output before gain and clipping. The sections
// s ← pole·s + x are driven by white noise of variance 1/6 through the two zeros, so of
// autocorrelation ρ0, ρ1, ρ2; then E[s_i·s_j] = (ρ0 + Σ_m ρ_m(p_i^m + p_j^m))/(1 − p_i·p_j).
// The direct term is a section whose pole is 0.
func (p *Pink) variance() float64 {
	const a, b = pinkZeroA, pinkZeroB
	rho := [3]float64{1 + a*a + b*b, a + a*b, b}
	poles := append(p.pole[:], 0)
	weights := append(p.weight[:], p.direct)
	sum := 0.0
	for i, pi := range poles {
		for j, pj := range poles {
			e := (rho[0] + rho[1]*(pi+pj) + rho[2]*(pi*pi+pj*pj)) / (1 - pi*pj)
			sum += weights[i] * weights[j] * e
		}
	}
	return sum * triangularVariance
}

// triangularVariance is that of the difference of two uniform variates in 0…1.
const triangularVariance = 1.0 / 6

// ReadSamples implements [Source].
func (p *Pink) ReadSamples(dst []float64) (int, error) {
	n, err := samplesLeft(dst, p.pos, p.length)
	block := dst[:n]
	p.white(block)
	p.filter(block)
	p.finish(block)
	return n, err
}

// white stores noise that has passed the two zeros. It is triangular, which takes one draw
// a sample; the sum over many samples that the filter makes of it is normal for any purpose here.
func (p *Pink) white(dst []float64) {
	x1, x2 := p.x1, p.x2
	for i := range dst {
		u := p.random.Uint64()
		// Through int64, since a conversion from uint64 must look at the highest bit.
		x := float64(int64(u>>32)-int64(u&math.MaxUint32)) * (1.0 / (1 << 32)) * p.gain
		dst[i] = x + pinkZeroA*x1 + pinkZeroB*x2
		x1, x2 = x, x1
	}
	p.x1, p.x2 = x1, x2
}

// filter sends a block through the sections and clips it. All sections run side by side: their
// states stay in registers, and the processor has eight recursions to overlap.
func (p *Pink) filter(block []float64) {
	s0, s1, s2, s3 := p.state[0], p.state[1], p.state[2], p.state[3]
	s4, s5, s6, s7 := p.state[4], p.state[5], p.state[6], p.state[7]
	for i, x := range block {
		s0 = p.pole[0]*s0 + x
		s1 = p.pole[1]*s1 + x
		s2 = p.pole[2]*s2 + x
		s3 = p.pole[3]*s3 + x
		s4 = p.pole[4]*s4 + x
		s5 = p.pole[5]*s5 + x
		s6 = p.pole[6]*s6 + x
		s7 = p.pole[7]*s7 + x
		low := (p.weight[0]*s0 + p.weight[1]*s1) + (p.weight[2]*s2 + p.weight[3]*s3)
		high := (p.weight[4]*s4 + p.weight[5]*s5) + (p.weight[6]*s6 + p.weight[7]*s7)
		y := low + high + p.direct*x
		if y > p.peak {
			y = p.peak
		} else if y < -p.peak {
			y = -p.peak
		}
		block[i] = y
	}
	p.state = [pinkSections]float64{s0, s1, s2, s3, s4, s5, s6, s7}
}
