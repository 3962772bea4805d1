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
	columns         []float64 // column j is what now[j] adds to next; as many as now has places, one after the other
	now             []float64 // the states and then the input; zeros up to a multiple of eight
	next            []float64 // the next states and then the outputs

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
		now:  make([]float64, (n+1+7)/8*8),
		next: make([]float64, n+ss.Outputs()),
		ss:   ss, rate: rate, a: a,
	}
	rows := len(t.next)
	t.columns = make([]float64, rows*len(t.now))
	for j := range n {
		column := t.columns[j*rows:][:rows]
		for i := range n {
			column[i] = m[i*n+j]
		}
		for k := range t.outputs {
			column[n+k] = g[k*n+j]
		}
	}
	copy(t.columns[n*rows:], f)
	copy(t.columns[n*rows+n:], h)
	return t, nil
}

// Reset puts the network at rest: no charge, no current.
func (t *Trapezoid) Reset() { clear(t.now) }

// Process steps through u, V, and stores output k in dst[k], V. It carries the state on from call to call, so that the
// length of the blocks makes no difference. It panics unless dst has Outputs slices as long as u. dst must not overlap u. It allocates nothing.
func (t *Trapezoid) Process(dst [][]float64, u []float64) {
	checkBlock(dst, t.outputs, len(u))
	n := t.states
	for i, ui := range u {
		t.now[n] = ui
		t.step()
		for k, v := range t.next[n:] {
			dst[k][i] = v
		}
		copy(t.now, t.next[:n])
	}
}

// step computes next from now, eight columns at a time.
func (t *Trapezoid) step() {
	next := t.next
	clear(next)
	rows := len(next)
	columns := t.columns
	for x := t.now; len(x) >= 8; x = x[8:] {
		x0, x1, x2, x3, x4, x5, x6, x7 := x[0], x[1], x[2], x[3], x[4], x[5], x[6], x[7]
		c := columns[: 8*rows : 8*rows]
		c0, c1, c2, c3 := c[:rows], c[rows:][:rows], c[2*rows:][:rows], c[3*rows:][:rows]
		c4, c5, c6, c7 := c[4*rows:][:rows], c[5*rows:][:rows], c[6*rows:][:rows], c[7*rows:][:rows]
		for i := range next {
			next[i] += ((x0*c0[i] + x1*c1[i]) + (x2*c2[i] + x3*c3[i])) + ((x4*c4[i] + x5*c5[i]) + (x6*c6[i] + x7*c7[i]))
		}
		columns = columns[8*rows:]
	}
}

// Gain stores in dst[k] the steady-state gain of output k at f Hz as the samples have it: that of the
// network at f = warpHz, and elsewhere that at the frequency which the rule bends to f. It panics unless dst has Outputs places.
func (t *Trapezoid) Gain(dst []complex128, f float64) {
	t.ss.Response(dst, complex(0, t.a*math.Tan(math.Pi*f/t.rate)))
}
