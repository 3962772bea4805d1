package discrete

import (
	"fmt"
	"math"
	"math/cmplx"

	"sixdown/sim/circuit"
)

// Settings say how near a Matched must come to its network. The zero value is good.
type Settings struct {
	TopHz    float64 // top of the band that counts; 0: 20 kHz; at most 0.45 × rate is used
	LimitDB  float64 // largest error in dB where the gain is above -50 dB; 0: 0.001
	LimitDeg float64 // largest error in degrees there; 0: 0.01
}

// A Matched is a network as a recursion on samples that keeps the network's poles, z = e^{pT}, and has its numerators fitted
// over the audible band. It answers Latency samples late.
type Matched struct {
	rate     float64
	sections []section
	terms    []term
	outputs  []choice
	db, deg  float64

	state signals
	plain []int   // sections fed by the input
	chain []int   // sections fed by another, in order
	taps  [][]tap // per output
}

// NewMatched returns ss at rate samples a second, at rest. Error tells how near it came: a limit that cannot be met is no error.
// It fails if the rate is not positive and finite, or if the network has an undamped resonance, which would ring for ever.
//
// Sections of two poles stand side by side, equal poles one after the other; sections with poles near z = -1 and taps on the input turn
// the corner at half the sample rate. The factors of all these are a weighted least squares fit to
// C(jωI - A)⁻¹B + D, and those that are not missed are left out.
func NewMatched(ss *circuit.StateSpace, rate float64, settings Settings) (*Matched, error) {
	if !(rate > 0) || math.IsInf(rate, 1) {
		return nil, fmt.Errorf("discrete: sample rate is %g Hz; give a positive number", rate)
	}
	if math.IsInf(ss.SlowestTime(), 1) {
		return nil, fmt.Errorf("discrete: the network rings for ever; give its coils their winding resistance")
	}
	top := settings.TopHz
	if !(top > 0) {
		top = 20000
	}
	top = min(top, 0.45*rate)
	limitDB, limitDeg := settings.LimitDB, settings.LimitDeg
	if !(limitDB > 0) {
		limitDB = 0.001
	}
	if !(limitDeg > 0) {
		limitDeg = 0.01
	}
	f := newFit(ss, ss.HeardPoles(), rate, top)
	m := &Matched{rate: rate, sections: f.sections, terms: f.terms}
	for k := range ss.Outputs() {
		c := f.choose(k, limitDB, limitDeg, rate)
		m.db, m.deg = max(m.db, c.db), max(m.deg, c.deg)
		m.outputs = append(m.outputs, c)
	}
	m.arrange()
	return m, nil
}

// arrange lays out what Process does.
func (m *Matched) arrange() {
	used := make([]bool, len(m.sections))
	for _, c := range m.outputs {
		for _, j := range c.terms {
			for s := m.terms[j].section; s >= 0; s = m.sections[s].after {
				used[s] = true
			}
		}
	}
	m.plain, m.chain = nil, nil
	for s, u := range used {
		switch {
		case !u:
		case m.sections[s].after < 0:
			m.plain = append(m.plain, s)
		default:
			m.chain = append(m.chain, s)
		}
	}
	m.taps = make([][]tap, len(m.outputs))
	for k, c := range m.outputs {
		for i, j := range c.terms {
			t := m.terms[j]
			m.taps[k] = append(m.taps[k], tap{signal: t.section + 1, back: t.delay, factor: c.factors[i]})
		}
	}
	m.state = newSignals(1+len(m.sections), max(taps, latency))
}

// Latency is by how many samples the outputs are late.
func (m *Matched) Latency() int { return latency }

// Error is how far the gain of any output is off, in dB and degrees, from 20 Hz to the top of the band, where the
// gain is above -50 dB.
func (m *Matched) Error() (db, deg float64) { return m.db, m.deg }

// Reset puts the network at rest.
func (m *Matched) Reset() { m.state.clear() }

// Process runs u, V, through the network and stores output k, Latency samples late, in dst[k], V. It carries the state on from call to
// call, so that the length of the blocks makes no difference. It panics unless dst has a slice as long as u for each
// output. dst may overlap u. It allocates nothing.
func (m *Matched) Process(dst [][]float64, u []float64) {
	checkBlock(dst, len(m.outputs), len(u))
	for from := 0; from < len(u); from += block {
		n := min(block, len(u)-from)
		copy(m.state.at(0, 0, n), u[from:from+n])
		m.recur(n)
		for k := range dst {
			mix(dst[k][from:from+n], &m.state, m.taps[k])
		}
		m.state.roll(n)
	}
}

// recur runs all sections over a block of n.
func (m *Matched) recur(n int) {
	s := &m.state
	x := s.at(0, latency, n)
	plain := m.plain
	for ; len(plain) >= 4; plain = plain[4:] {
		a, b, c, d := plain[0], plain[1], plain[2], plain[3]
		recur4([4][]float64{s.at(1+a, 2, n+2), s.at(1+b, 2, n+2), s.at(1+c, 2, n+2), s.at(1+d, 2, n+2)}, x,
			&[4]section{m.sections[a], m.sections[b], m.sections[c], m.sections[d]})
	}
	for _, i := range plain {
		recur(s.at(1+i, 2, n+2), x, m.sections[i].a1, m.sections[i].a2)
	}
	for _, i := range m.chain {
		recur(s.at(1+i, 2, n+2), s.at(1+m.sections[i].after, 0, n), m.sections[i].a1, m.sections[i].a2)
	}
}

// Gain stores in dst[k] the gain of output k at f Hz as the samples have it, the latency taken out.
// It panics unless dst has a place for each output.
func (m *Matched) Gain(dst []complex128, f float64) {
	if len(dst) != len(m.outputs) {
		panic("discrete: Gain: one place in dst for each output, please")
	}
	omega := 2 * math.Pi * f / m.rate
	gains := make([]complex128, len(m.terms))
	termGains(gains, make([]complex128, len(m.sections)), m.sections, m.terms, latency, omega)
	early := cmplx.Rect(1, omega*latency)
	for k, c := range m.outputs {
		sum := complex(0, 0)
		for i, j := range c.terms {
			sum += complex(c.factors[i], 0) * gains[j]
		}
		dst[k] = sum * early
	}
}
