package discrete

import "math"

// PeakGain returns, for each output, the most volts that any input within ±1 V can bring about: the sum of |h[n]|
// over the impulse response. A full scale of so many times the input's peak never clips.
func (m *Matched) PeakGain() []float64 {
	probe := *m
	probe.arrange()
	peak := make([]float64, len(m.outputs))
	dst := make([][]float64, len(m.outputs))
	for k := range dst {
		dst[k] = make([]float64, block)
	}
	u := make([]float64, block)
	u[0] = 1
	slowest := m.slowest()
	memory := latency + taps + block // for as long as this at least, also where all is forgotten at once
	if slowest > 0 {
		const forgotten = -12 * math.Ln10 // all but 1e-12
		memory += int(min(forgotten/math.Log(slowest), longestProbe))
	}
	last := make([]float64, len(m.outputs)) // the largest of the last block
	for left := memory; left > 0; left -= block {
		probe.Process(dst, u)
		u[0] = 0
		for k, y := range dst {
			last[k] = 0
			for _, v := range y {
				peak[k] += math.Abs(v)
				last[k] = max(last[k], math.Abs(v))
			}
		}
	}
	// What is not waited for dies away no slower than the slowest section.
	for k := range peak {
		peak[k] += last[k] / (1 - slowest)
	}
	return peak
}

// longestProbe is how many samples of an impulse response are added up one by one.
const longestProbe = 1 << 18

// slowest is by how much a sample of the slowest section shrinks from one to the next, below 1.
func (m *Matched) slowest() float64 {
	slowest := 0.0
	for _, s := range m.sections {
		// The larger root of z² - a1 z - a2.
		half, root := s.a1/2, s.a1*s.a1/4+s.a2
		size := math.Abs(half) + math.Sqrt(max(root, 0))
		if root < 0 {
			size = math.Sqrt(-s.a2)
		}
		slowest = max(slowest, size)
	}
	return min(slowest, 1-0x1p-50)
}
