package driver

import (
	"fmt"
	"math"
	"math/cmplx"
	"testing"
)

// K = 0.02, n = 0.7 (illustrative), derived from Leach's form (2002) by K·ω^n·(cos(nπ/2) + j·sin(nπ/2)).
func TestLeach(t *testing.T) {
	c := Leach{K: 0.02, N: 0.7}
	for f, want := range map[float64]complex128{
		100: complex(0.82566, 1.62045), 1e3: complex(4.13812, 8.12151), 10e3: complex(20.7397, 40.7040),
	} {
		nearC(t, fmt.Sprintf("%g Hz", f), c.Impedance(jw(f)), want, 1e-5) // printed figures
	}
	nearC(t, "at DC", c.Impedance(0), 0, 0)
	nearC(t, "N = 1", Leach{K: 1e-3, N: 1}.Impedance(jw(1e3)), complex(0, 2*math.Pi), 1e-14) // an inductor
}

// The ladder keeps what its comment promises: the trapezoidal rule's error 2·sin(nπ)·e^(-π²/h), h = ln 4, is
// 0.16 %, and the joined pairs at the ends add somewhat less at 20 Hz and 20 kHz.
func TestLeachLadder(t *testing.T) {
	for _, n := range []float64{0.3, 0.5, 0.6, 0.7, 0.8, 0.95, 0.999, 1} {
		c := Leach{K: 0.02, N: n}
		es := c.Elements()
		for _, f := range grid(20, 20e3, 200) {
			nearC(t, fmt.Sprintf("n = %g at %g Hz", n, f), nodal(t, es, jw(f)), c.Impedance(jw(f)), 3e-3)
		}
		for _, e := range es {
			if !(e.Value > 0) || math.IsInf(e.Value, 0) {
				t.Errorf("n = %g: %s is %g", n, e.Name, e.Value)
			}
		}
	}
}

// nodal is the impedance between Plus and Minus of an equivalent circuit, by Gaussian elimination on the nodal
// equations for 1 A.
func nodal(t *testing.T, es []Element, s complex128) complex128 {
	t.Helper()
	nodes := 0
	for _, e := range es {
		nodes = max(nodes, e.From, e.To)
	}
	a := make([][]complex128, nodes+1) // row and column 0, Minus, stay unused; the last column is the current
	for i := range a {
		a[i] = make([]complex128, nodes+2)
	}
	a[Plus][nodes+1] = 1
	for _, e := range es {
		y := complex(1/e.Value, 0)
		switch e.Kind {
		case Inductor:
			y /= s
		case Capacitor:
			y = s * complex(e.Value, 0)
		}
		a[e.From][e.From] += y
		a[e.To][e.To] += y
		a[e.From][e.To] -= y
		a[e.To][e.From] -= y
	}
	for k := nodes; k >= 1; k-- {
		if cmplx.Abs(a[k][k]) == 0 {
			t.Fatalf("node %d hangs loose", k)
		}
		for i := 1; i < k; i++ {
			m := a[i][k] / a[k][k]
			for j := 1; j <= nodes+1; j++ {
				a[i][j] -= m * a[k][j]
			}
		}
	}
	return a[Plus][nodes+1] / a[Plus][Plus]
}
