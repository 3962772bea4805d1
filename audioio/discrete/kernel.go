package discrete

import "fmt"

// block is the number of samples that are worked through at a time: so many that setting out costs little, and few
// enough that all signals of a block, some twenty, stay in a near cache. 128 to 512 are much the same.
const block = 256

// A tap is one term of an output's sum, by where its signal lies.
type tap struct {
	signal int // index into signals: 0 the input, 1 + s the w of section s
	back   int // samples before the present one
	factor float64
}

// signals are the input and the sections' w over a block, each with its history before it.
type signals struct {
	history int         // samples of the past that each signal keeps
	lines   [][]float64 // history + block samples each
}

func newSignals(count, history int) signals {
	s := signals{history: history, lines: make([][]float64, count)}
	for i := range s.lines {
		s.lines[i] = make([]float64, history+block)
	}
	return s
}

func (s *signals) clear() {
	for _, line := range s.lines {
		clear(line)
	}
}

// at is n samples of a signal, from back samples ago.
func (s *signals) at(signal, back, n int) []float64 {
	return s.lines[signal][s.history-back:][:n]
}

// roll moves the last samples of an n-sample block to where the past is kept.
func (s *signals) roll(n int) {
	for _, line := range s.lines {
		copy(line, line[n:n+s.history])
	}
}

// recur runs one section over a block. w starts with its two past values.
func recur(w, x []float64, a1, a2 float64) {
	w2, w1 := w[0], w[1]
	w = w[2:][:len(x)]
	for i, v := range x {
		v = (a2*w2 + v) + a1*w1
		w[i] = v
		w2, w1 = w1, v
	}
}

// recur4 runs four sections on the same input. Each waits for its own last value at every step; side by side
// the waits overlap. Two steps a turn, so that the older value can be overwritten in place.
func recur4(w [4][]float64, x []float64, s *[4]section) {
	n := len(x)
	wa, wb, wc, wd := w[0][2:][:n], w[1][2:][:n], w[2][2:][:n], w[3][2:][:n]
	a2, a1 := w[0][0], w[0][1]
	b2, b1 := w[1][0], w[1][1]
	c2, c1 := w[2][0], w[2][1]
	d2, d1 := w[3][0], w[3][1]
	i := 0
	for ; i+1 < n; i += 2 {
		v := x[i]
		a2 = (s[0].a2*a2 + v) + s[0].a1*a1
		b2 = (s[1].a2*b2 + v) + s[1].a1*b1
		c2 = (s[2].a2*c2 + v) + s[2].a1*c1
		d2 = (s[3].a2*d2 + v) + s[3].a1*d1
		wa[i], wb[i], wc[i], wd[i] = a2, b2, c2, d2
		v = x[i+1]
		a1 = (s[0].a2*a1 + v) + s[0].a1*a2
		b1 = (s[1].a2*b1 + v) + s[1].a1*b2
		c1 = (s[2].a2*c1 + v) + s[2].a1*c2
		d1 = (s[3].a2*d1 + v) + s[3].a1*d2
		wa[i+1], wb[i+1], wc[i+1], wd[i+1] = a1, b1, c1, d1
	}
	if i < n {
		v := x[i]
		wa[i] = (s[0].a2*a2 + v) + s[0].a1*a1
		wb[i] = (s[1].a2*b2 + v) + s[1].a1*b1
		wc[i] = (s[2].a2*c2 + v) + s[2].a1*c1
		wd[i] = (s[3].a2*d2 + v) + s[3].a1*d1
	}
}

// mix stores in dst the sum of factor × signal over taps; it takes eight at a time, so that dst is fetched seldom.
func mix(dst []float64, s *signals, taps []tap) {
	n := len(dst)
	clear(dst)
	for len(taps) >= 8 {
		p0, p1 := s.at(taps[0].signal, taps[0].back, n), s.at(taps[1].signal, taps[1].back, n)
		p2, p3 := s.at(taps[2].signal, taps[2].back, n), s.at(taps[3].signal, taps[3].back, n)
		p4, p5 := s.at(taps[4].signal, taps[4].back, n), s.at(taps[5].signal, taps[5].back, n)
		p6, p7 := s.at(taps[6].signal, taps[6].back, n), s.at(taps[7].signal, taps[7].back, n)
		f0, f1, f2, f3 := taps[0].factor, taps[1].factor, taps[2].factor, taps[3].factor
		f4, f5, f6, f7 := taps[4].factor, taps[5].factor, taps[6].factor, taps[7].factor
		p0, p1, p2, p3 = p0[:n], p1[:n], p2[:n], p3[:n]
		p4, p5, p6, p7 = p4[:n], p5[:n], p6[:n], p7[:n]
		for i := range dst {
			dst[i] += ((f0*p0[i] + f1*p1[i]) + (f2*p2[i] + f3*p3[i])) + ((f4*p4[i] + f5*p5[i]) + (f6*p6[i] + f7*p7[i]))
		}
		taps = taps[8:]
	}
	for len(taps) >= 2 {
		p0, p1 := s.at(taps[0].signal, taps[0].back, n), s.at(taps[1].signal, taps[1].back, n)
		f0, f1 := taps[0].factor, taps[1].factor
		p0, p1 = p0[:n], p1[:n]
		for i := range dst {
			dst[i] += f0*p0[i] + f1*p1[i]
		}
		taps = taps[2:]
	}
	if len(taps) == 1 {
		p0, f0 := s.at(taps[0].signal, taps[0].back, n), taps[0].factor
		p0 = p0[:n]
		for i := range dst {
			dst[i] += f0 * p0[i]
		}
	}
}

// checkBlock panics unless dst has n slices of length samples.
func checkBlock(dst [][]float64, n, samples int) {
	if len(dst) != n {
		panic(fmt.Sprintf("discrete: %d output slices; give %d", len(dst), n))
	}
	for k := range dst {
		if len(dst[k]) != samples {
			panic(fmt.Sprintf("discrete: output slice %d has %d samples; give it as many as the input, %d", k, len(dst[k]), samples))
		}
	}
}
