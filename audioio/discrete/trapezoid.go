package discrete

import (
	"fmt"
	"math"

	"sixdown/sim/circuit"
)

// A Trapezoid is a network stepped by the trapezoidal rule. Its gain is the network's own on a bent frequency axis, and
// the axis is scaled (pre-warped) so that one frequency stays where it is.
type Trapezoid struct {
	states, outputs int
	step            []float64 // (states + outputs) × (states + 1): next state and output from state and input
	now, next       []float64 // states, and the input in the last place

	ss   *circuit.StateSpace
	rate float64 // Hz
	a    float64 // rad/s, s = a(z - 1)/(z + 1)
}

// NewTrapezoid returns ss at rate samples a second, at rest. At warpHz its steady state is that of the network exactly; warpHz of 0
// keeps the axis true at low frequencies (a = 2·rate). It fails unless 0 ≤ warpHz < rate/2.
//
// Method: A. Tustin, "A Method of Analysing the Behaviour of Linear Systems in Terms of Time Series", J. IEE 94(IIA), 1947,
// 130–142; with a = ω/tan(ω/2·rate).
func NewTrapezoid(ss *circuit.StateSpace, rate, warpHz float64) (*Trapezoid, error) {
	if !(rate > 0) || math.IsInf(rate, 1) {
		return nil, fmt.Errorf("discrete: sample rate is %g Hz; give a positive number", rate)
	}
	if !(warpHz >= 0 && warpHz < rate/2) {
		return nil, fmt.Errorf("discrete: pre-warp frequency is %g Hz; give one from 0 to below half the sample rate, %g Hz", warpHz, rate/2)
	}
	a := 2 * rate
	if half := math.Pi * warpHz / rate; half > 1e-9 { // below, tan x = x to the last digit
		a = 2 * math.Pi * warpHz / math.Tan(half)
	}
	m, f, g, h, err := ss.Bilinear(a)
	if err != nil {
		return nil, err
	}
	n := ss.States()
	t := &Trapezoid{
		states: n, outputs: ss.Outputs(),
		now: make([]float64, n+1), next: make([]float64, n+1),
		ss: ss, rate: rate, a: a,
	}
	t.step = make([]float64, 0, (n+t.outputs)*(n+1))
	for i := range n {
		t.step = append(append(t.step, m[i*n:(i+1)*n]...), f[i])
	}
	for k := range t.outputs {
		t.step = append(append(t.step, g[k*n:(k+1)*n]...), h[k])
	}
	return t, nil
}

// Reset puts the network at rest: no charge, no current.
func (t *Trapezoid) Reset() { clear(t.now) }

// Process steps through u, V, and stores output k in dst[k], V. It carries the state on from call to call, so that the
// length of the blocks makes no difference. It panics unless dst has Outputs slices as long as u. dst must not overlap u. It allocates nothing.
func (t *Trapezoid) Process(dst [][]float64, u []float64) {
	checkBlock(dst, t.outputs, len(u))
	n := t.states
	now, next := t.now, t.next
	for i, ui := range u {
		now[n] = ui
		row := t.step
		for j := range n {
			next[j] = dot(row[:n+1], now)
			row = row[n+1:]
		}
		for k := range dst {
			dst[k][i] = dot(row[:n+1], now)
			row = row[n+1:]
		}
		now, next = next, now
	}
	t.now, t.next = now, next
}

// Gain stores in dst[k] the steady-state gain of output k at f Hz as the samples have it: that of the
// network at f = warpHz, and elsewhere that at the frequency which the rule bends to f. It panics unless dst has Outputs places.
func (t *Trapezoid) Gain(dst []complex128, f float64) {
	t.ss.Response(dst, complex(0, t.a*math.Tan(math.Pi*f/t.rate)))
}

// dot is Σ a[i]·b[i]; four sums run side by side, so that none waits for the one before.
func dot(a, b []float64) float64 {
	b = b[:len(a)]
	var s0, s1, s2, s3 float64
	for len(a) >= 4 && len(b) >= 4 {
		s0 += a[0] * b[0]
		s1 += a[1] * b[1]
		s2 += a[2] * b[2]
		s3 += a[3] * b[3]
		a, b = a[4:], b[4:]
	}
	for i := range a {
		s0 += a[i] * b[i]
	}
	return (s0 + s1) + (s2 + s3)
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
