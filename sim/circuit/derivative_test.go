package circuit_test

import (
	"fmt"
	"math"
	"math/big"
	"math/cmplx"
	"testing"

	"sixdown/sim/circuit"
)

// TestDerivativesAgainstDifferences compares the adjoint's derivative of every gain and of the input impedance by every
// part with a central difference in 320-bit arithmetic. A step of 1e-20 of the value makes the difference's own error
// some 1e-40, so that it stands for the exact derivative.
//
// Agreement is asked for relative to the gradient's scale: the greatest |p·∂G/∂p| over all parts p, for the same output
// at the same frequency. So a part that hardly matters there is held to what matters.
func TestDerivativesAgainstDifferences(t *testing.T) {
	const agreement = 1e-8
	networks := randomNetworks(1969, 12)
	three, err := loadThreeWay()
	if err != nil {
		t.Fatal(err)
	}
	three.netlist.Source = 0.05
	networks = append(networks, three)
	worst, worstAt, count := 0.0, "", 0
	for _, n := range networks {
		freqs := logSpaced(23, 19e3, 4)
		outs := len(n.outs)
		got, gotValue := adjointGradient(t, n, freqs)
		slow := newBigCircuit(&n.netlist, n.outs)
		misses, farthest, miss := 0, 0.0, ""
		for f, hz := range freqs {
			value, want := differences(slow, len(n.netlist.Branches), 2*math.Pi*hz)
			for o := range outs + 1 {
				// The two programs must speak of the same circuit before their derivatives can be compared.
				if e := cmplx.Abs(gotValue[o][f]-value[o]) / cmplx.Abs(value[o]); !(e < 1e-9) {
					t.Errorf("%s: quantity %d at %.4g Hz is %v, in extended precision %v", n.name, o, hz, gotValue[o][f], value[o])
				}
				scale := 0.0
				for k, b := range n.netlist.Branches {
					scale = max(scale, b.Value*cmplx.Abs(want[o][k]))
				}
				for k, b := range n.netlist.Branches {
					if b.Kind == circuit.Port || b.Value == 0 {
						continue
					}
					count++
					e := b.Value * cmplx.Abs(got[o][k][f]-want[o][k]) / scale
					if e > worst {
						worst, worstAt = e, n.name+" "+b.Name
					}
					if !(e <= agreement) {
						misses++
						if !(e <= farthest) {
							farthest = e
							miss = fmt.Sprintf("of quantity %d (%d: Zin) by %s at %.4g Hz: %v, by differences %v: %.1e of the scale",
								o, outs, b.Name, hz, got[o][k][f], want[o][k], e)
						}
					}
				}
			}
		}
		if misses > 0 {
			t.Errorf("%s: %d derivatives are off; %s", n.name, misses, miss)
		}
	}
	t.Logf("%d derivatives of %d networks, worst disagreement %.1e of the gradient's scale (%s)", count, len(networks), worst, worstAt)
}

// adjointGradient asks a Sweep: value[q][f] and grad[q][branch][f], the last q being the input impedance.
func adjointGradient(t *testing.T, n *testNetwork, freqs []float64) (grad [][][]complex128, value [][]complex128) {
	t.Helper()
	c, err := circuit.Compile(&n.netlist, n.outs)
	if err != nil {
		t.Fatalf("%s: %v", n.name, err)
	}
	s, err := c.NewSweep(freqs)
	if err != nil {
		t.Fatalf("%s: %v", n.name, err)
	}
	if err := s.Solve(); err != nil {
		t.Fatalf("%s: %v", n.name, err)
	}
	if err := s.Gradient(); err != nil {
		t.Fatalf("%s: %v", n.name, err)
	}
	for q := range len(n.outs) + 1 {
		v := make([]complex128, len(freqs))
		if q < len(n.outs) {
			s.Gain(v, q)
		} else {
			s.InputImpedance(v)
		}
		value = append(value, v)
		byPart := make([][]complex128, len(n.netlist.Branches))
		for k, b := range n.netlist.Branches {
			if b.Kind == circuit.Port {
				continue
			}
			byPart[k] = make([]complex128, len(freqs))
			if q < len(n.outs) {
				s.GainGradient(byPart[k], q, k)
			} else {
				s.ImpedanceGradient(byPart[k], k)
			}
		}
		grad = append(grad, byPart)
	}
	return grad, value
}

// differences gives the gains and the impedance at w rad/s and their central differences by the first `parts` branches;
// by a port, a wire or an empty place it gives 0.
func differences(c *bigCircuit, parts int, w float64) (value []complex128, diff [][]complex128) {
	gains, zin := c.solve(w)
	for _, x := range append(gains, zin) {
		value = append(value, x.complex128())
		diff = append(diff, make([]complex128, parts))
	}
	step := bigFloat(1e-20)
	for k := range parts {
		if c.branches[k].Kind == circuit.Port || c.branches[k].Value == 0 {
			continue
		}
		p := c.values[k]
		h := bigZero().Mul(p, step)
		c.values[k] = bigZero().Add(p, h)
		gains, zin := c.solve(w)
		above := append(gains, zin)
		c.values[k] = bigZero().Sub(p, h)
		gains, zin = c.solve(w)
		below := append(gains, zin)
		c.values[k] = p
		for q := range diff {
			diff[q][k] = above[q].sub(below[q]).over(bigZero().Mul(h, big.NewFloat(2))).complex128()
		}
	}
	return value, diff
}
