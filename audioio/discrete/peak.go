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
	for left := m.memory(); left > 0; left -= block {
		probe.Process(dst, u)
		u[0] = 0
		for k, y := range dst {
			for _, v := range y {
				peak[k] += math.Abs(v)
			}
		}
	}
	return peak
}

// memory is the number of samples in which the slowest section forgets all but 1e-12.
func (m *Matched) memory() int {
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
	const forgotten = -12 * math.Ln10
	return latency + taps + int(forgotten/math.Log(slowest))
}
