package circuit_test

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"strings"
	"testing"

	"sixdown/sim/circuit"
)

// The nodes of the tables below.
const (
	amp = circuit.Amp
	ret = circuit.Return
)

// resistorOf, coilOf and capacitorOf are parts of so many Ω, H or F, coils and capacitors with a loss in Ω.
func resistorOf(from, to int, ohm float64) circuit.Branch {
	return circuit.Branch{Name: "R", Kind: circuit.Resistor, From: from, To: to, Value: ohm}
}

func coilOf(from, to int, henry, loss float64) circuit.Branch {
	return circuit.Branch{Name: "L", Kind: circuit.Inductor, From: from, To: to, Value: henry, Loss: loss}
}

func capacitorOf(from, to int, farad, loss float64) circuit.Branch {
	return circuit.Branch{Name: "C", Kind: circuit.Capacitor, From: from, To: to, Value: farad, Loss: loss}
}

func newStateSpace(t *testing.T, n *circuit.Netlist, outs ...circuit.Output) *circuit.StateSpace {
	t.Helper()
	ss, err := circuit.NewStateSpace(n, outs)
	if err != nil {
		t.Fatal(err)
	}
	return ss
}

// TestStateSpaceByHand compares with gains that were worked out on paper from the divider rule and Kirchhoff's laws,
// and counts the natural frequencies. Rounding alone separates them, at most some hundred operations of it.
func TestStateSpaceByHand(t *testing.T) {
	const tol = 1e-12
	tests := []struct {
		name   string
		n      circuit.Netlist
		outs   []circuit.Output
		states int
		gain   func(s complex128) []complex128
	}{
		{
			name: "RC low-pass",
			n:    circuit.Netlist{Nodes: 3, Branches: []circuit.Branch{resistorOf(amp, 2, 1000), capacitorOf(2, ret, 1e-7, 0)}},
			outs: []circuit.Output{{From: 2, To: ret}, {From: amp, To: 2}}, states: 1,
			gain: func(s complex128) []complex128 { return []complex128{1 / (1 + s*1e-4), s * 1e-4 / (1 + s*1e-4)} },
		},
		{
			name: "source resistance alone",
			n:    circuit.Netlist{Nodes: 2, Source: 2, Branches: []circuit.Branch{resistorOf(amp, ret, 6)}},
			outs: []circuit.Output{{From: amp, To: ret}}, states: 0,
			gain: func(complex128) []complex128 { return []complex128{0.75} },
		},
		{
			name: "capacitor across the ideal source",
			n: circuit.Netlist{Nodes: 3, Branches: []circuit.Branch{
				capacitorOf(amp, ret, 1e-5, 0), resistorOf(amp, 2, 8), capacitorOf(2, ret, 1e-5, 0)}},
			outs: []circuit.Output{{From: amp, To: ret}, {From: 2, To: ret}}, states: 1,
			gain: func(s complex128) []complex128 { return []complex128{1, 1 / (1 + s*8e-5)} },
		},
		{
			// From rest the charge between the two capacitors in series stays 0, so only one of them counts.
			name: "triangle of capacitors behind a source resistance",
			n: circuit.Netlist{Nodes: 3, Source: 10, Branches: []circuit.Branch{
				capacitorOf(amp, 2, 3e-6, 0), capacitorOf(2, ret, 6e-6, 0), capacitorOf(amp, ret, 1e-6, 0)}},
			outs: []circuit.Output{{From: amp, To: ret}, {From: 2, To: ret}}, states: 1,
			gain: func(s complex128) []complex128 {
				a := 1 / (1 + s*10*3e-6) // 1 + 3·6/(3+6) µF
				return []complex128{a, a / 3}
			},
		},
		{
			// The loop of the source and two capacitors: u jumps, they follow; no u' is left.
			name: "capacitive divider on the ideal source, loaded",
			n: circuit.Netlist{Nodes: 3, Branches: []circuit.Branch{
				capacitorOf(amp, 2, 2e-6, 0), capacitorOf(2, ret, 1e-6, 0), resistorOf(2, ret, 100)}},
			outs: []circuit.Output{{From: 2, To: ret}}, states: 1,
			gain: func(s complex128) []complex128 { return []complex128{s * 2e-4 / (1 + s*3e-4)} },
		},
		{
			name: "two coils in series with nothing at their node",
			n: circuit.Netlist{Nodes: 4, Branches: []circuit.Branch{
				coilOf(amp, 2, 1e-3, 0), coilOf(2, 3, 2e-3, 0), resistorOf(3, ret, 8)}},
			outs: []circuit.Output{{From: 2, To: ret}, {From: 3, To: ret}}, states: 1,
			gain: func(s complex128) []complex128 {
				return []complex128{(8 + s*2e-3) / (8 + s*3e-3), 8 / (8 + s*3e-3)}
			},
		},
		{
			// L1, L2 and the source are a lossless loop; its current goes round unseen.
			name: "star of coils",
			n: circuit.Netlist{Nodes: 4, Branches: []circuit.Branch{
				coilOf(amp, 2, 1e-3, 0), coilOf(2, ret, 2e-3, 0), coilOf(2, 3, 3e-3, 0), resistorOf(3, ret, 8)}},
			outs: []circuit.Output{{From: 2, To: ret}, {From: 3, To: ret}}, states: 1,
			gain: func(s complex128) []complex128 {
				d := s*(1e-3*2e-3+1e-3*3e-3+2e-3*3e-3) + 8*3e-3
				return []complex128{2e-3 * (s*3e-3 + 8) / d, 2e-3 * 8 / d}
			},
		},
		{
			name: "lossless coil across the ideal source",
			n: circuit.Netlist{Nodes: 3, Branches: []circuit.Branch{
				coilOf(amp, ret, 1e-3, 0), resistorOf(amp, 2, 8), capacitorOf(2, ret, 1e-5, 0)}},
			outs: []circuit.Output{{From: 2, To: ret}}, states: 1,
			gain: func(s complex128) []complex128 { return []complex128{1 / (1 + s*8e-5)} },
		},
		{
			// Both windings end at the return; M = 0.5·√(4 mH · 1 mH) = 1 mH.
			name: "transformer",
			n: circuit.Netlist{Nodes: 3, Source: 2, Branches: []circuit.Branch{
				coilOf(amp, ret, 4e-3, 0), coilOf(2, ret, 1e-3, 0), resistorOf(2, ret, 8)},
				Couplings: []circuit.Coupling{{A: 0, B: 1, K: 0.5}}},
			outs: []circuit.Output{{From: 2, To: ret}}, states: 2,
			gain: func(s complex128) []complex128 {
				m := s * 1e-3
				return []complex128{m * 8 / ((2+s*4e-3)*(8+s*1e-3) - m*m)}
			},
		},
		{
			// The same with the secondary turned about and left floating: the sign changes, the rest does not.
			name: "transformer with a floating secondary",
			n: circuit.Netlist{Nodes: 4, Source: 2, Branches: []circuit.Branch{
				coilOf(amp, ret, 4e-3, 0), coilOf(3, 2, 1e-3, 0), resistorOf(2, 3, 8)},
				Couplings: []circuit.Coupling{{A: 0, B: 1, K: 0.5}}},
			outs: []circuit.Output{{From: 2, To: 3}}, states: 2,
			gain: func(s complex128) []complex128 {
				m := s * 1e-3
				return []complex128{-m * 8 / ((2+s*4e-3)*(8+s*1e-3) - m*m)}
			},
		},
		{
			// The shorted winding holds its flux at 0 and leaves L(1 - k²).
			name: "coil with a shorted one coupled to it",
			n: circuit.Netlist{Nodes: 3, Branches: []circuit.Branch{
				coilOf(amp, 2, 1e-3, 0), coilOf(ret, ret, 5e-3, 0), resistorOf(2, ret, 8)},
				Couplings: []circuit.Coupling{{A: 0, B: 1, K: 0.6}}},
			outs: []circuit.Output{{From: 2, To: ret}}, states: 1,
			gain: func(s complex128) []complex128 { return []complex128{8 / (8 + s*1e-3*(1-0.36))} },
		},
		{
			name: "losses of coil and capacitor",
			n: circuit.Netlist{Nodes: 3, Source: 0.1, Branches: []circuit.Branch{
				coilOf(amp, 2, 1e-3, 0.4), capacitorOf(2, ret, 1e-5, 0.2)}},
			outs: []circuit.Output{{From: 2, To: ret}}, states: 2,
			gain: func(s complex128) []complex128 {
				z := 0.2 + 1/(s*1e-5)
				return []complex128{z / (z + 0.5 + s*1e-3)}
			},
		},
		{
			name: "shorts and opens",
			n: circuit.Netlist{Nodes: 5, Branches: []circuit.Branch{
				resistorOf(amp, 2, 0), coilOf(2, 3, 0, 0), resistorOf(3, 4, 10), capacitorOf(4, ret, 0, 0), capacitorOf(amp, 4, 0, 0), resistorOf(4, ret, 30)}},
			outs: []circuit.Output{{From: 4, To: ret}, {From: 3, To: amp}}, states: 0,
			gain: func(complex128) []complex128 { return []complex128{0.75, 0} },
		},
		{
			// All of a tone control's range and more: pF next to mF, mΩ next to MΩ.
			name: "values nine decades apart",
			n: circuit.Netlist{Nodes: 4, Source: 1e-3, Branches: []circuit.Branch{
				resistorOf(amp, 2, 1e6), capacitorOf(2, ret, 1e-12, 0), resistorOf(amp, 3, 1e-3), capacitorOf(3, ret, 1e-3, 0)}},
			outs: []circuit.Output{{From: 2, To: amp}}, states: 2,
			gain: func(s complex128) []complex128 {
				z1, z2 := 1e6+1/(s*1e-12), 1e-3+1/(s*1e-3)
				a := 1 / (1 + 1e-3*(1/z1+1/z2))
				return []complex128{-a * 1e6 / z1}
			},
		},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			ss := newStateSpace(t, &tt.n, tt.outs...)
			if ss.States() != tt.states || len(ss.Poles()) != tt.states {
				t.Errorf("%d states, %d poles; want %d", ss.States(), len(ss.Poles()), tt.states)
			}
			for _, s := range []complex128{1i, 300i, 5e3i, 1e5i, 3e6i, 200, complex(1e4, 2e4)} {
				got := make([]complex128, len(tt.outs))
				ss.Response(got, s)
				for k, want := range tt.gain(s) {
					if !(cmplx.Abs(got[k]-want) <= tol*(1e-3+cmplx.Abs(want))) {
						t.Errorf("output %d at s = %v: %v, want %v", k, s, got[k], want)
					}
				}
			}
		})
	}
}

// TestStateSpaceAgainstSweep is the check of the two roads: the same random networks through the differential equations
// and through the frequency solver. They share no code after the netlist.
func TestStateSpaceAgainstSweep(t *testing.T) {
	count := 1200
	if testing.Short() {
		count = 200
	}
	freqs := logSpaced(2, 100e3, 41)
	// Relative to the largest gain in the network at that frequency. Nodal values up to 1e9 apart in
	// conductance cost seven of sixteen digits at worst.
	const tol = 1e-9
	for _, n := range randomNetworks(77, count) {
		compiled, err := circuit.Compile(&n.netlist, n.outs)
		if err != nil {
			continue // not a circuit: the generator's business
		}
		ss, err := circuit.NewStateSpace(&n.netlist, n.outs)
		if err != nil {
			t.Errorf("%s: %v", n.name, err)
			continue
		}
		got := make([]complex128, len(n.outs))
		for _, f := range freqs {
			s := complex(0, 2*math.Pi*f)
			want, err := compiled.At(s)
			if err != nil {
				continue
			}
			ss.Response(got, s)
			scale := 1.0
			for _, g := range want.Gain {
				scale = max(scale, cmplx.Abs(g))
			}
			for k := range got {
				if !(cmplx.Abs(got[k]-want.Gain[k]) <= tol*scale) {
					t.Errorf("%s: output %d at %.5g Hz: %v by state space, %v by the solver", n.name, k, f, got[k], want.Gain[k])
				}
			}
		}
		checkPassive(t, n.name, ss)
	}
}

// checkPassive checks that no state x gains energy without input: xᵀAx ≤ 0, Tellegen's theorem for
// states whose energy is |x|²/2; so no pole lies to the right either. The tolerance is rounding of the largest entry.
func checkPassive(t *testing.T, name string, ss *circuit.StateSpace) {
	t.Helper()
	n := ss.States()
	random := rand.New(rand.NewPCG(5, uint64(n)))
	size := 0.0
	for _, a := range ss.A {
		size = max(size, math.Abs(a))
	}
	for range 20 {
		x := make([]float64, n)
		for i := range x {
			x[i] = random.NormFloat64()
		}
		power, energy := 0.0, 0.0
		for i := range n {
			energy += x[i] * x[i]
			for j := range n {
				power += x[i] * ss.A[i*n+j] * x[j]
			}
		}
		if power > 1e-12*size*energy {
			t.Errorf("%s: a state of energy %g gains %g J/s", name, energy/2, power)
		}
	}
	for _, p := range ss.Poles() {
		if real(p) > 1e-12*size {
			t.Errorf("%s: pole at %v", name, p)
		}
		if p == 0 {
			t.Errorf("%s: a pole at 0 is left", name)
		}
	}
}

// TestStateSpacePoles compares with natural frequencies worked out on paper.
func TestStateSpacePoles(t *testing.T) {
	w := 2 * math.Pi * 2200.0
	root2 := math.Sqrt2
	tests := []struct {
		name string
		n    circuit.Netlist
		outs []circuit.Output
		want []complex128
		rel  float64
	}{
		{
			// s² + sR/L + 1/LC, R = 10 Ω, L = 1 mH, C = 10 µF: -5000 ± j√(1e8 - 25e6).
			name: "series resonance",
			n: circuit.Netlist{Nodes: 3, Source: 4, Branches: []circuit.Branch{
				coilOf(amp, 2, 1e-3, 6), capacitorOf(2, ret, 1e-5, 0)}},
			outs: []circuit.Output{{From: 2, To: ret}},
			want: []complex128{complex(-5000, math.Sqrt(75e6)), complex(-5000, -math.Sqrt(75e6))}, rel: 1e-13,
		},
		{
			// Linkwitz-Riley of order 4 is a squared Butterworth, so each pole is double. Element values: continued
			// fraction of (s² + √2 s + 1)². A double pole moves by the square root of the rounding.
			name: "Linkwitz-Riley 4 ladder",
			n: circuit.Netlist{Nodes: 4, Branches: []circuit.Branch{
				coilOf(amp, 2, 8/w*4*root2/3, 0), capacitorOf(2, ret, 1/(8*w)*9*root2/8, 0),
				coilOf(2, 3, 8/w*2*root2/3, 0), capacitorOf(3, ret, 1/(8*w)*root2/4, 0), resistorOf(3, ret, 8)}},
			outs: []circuit.Output{{From: 3, To: ret}},
			want: []complex128{complex(-w/root2, w/root2), complex(-w/root2, w/root2), complex(-w/root2, -w/root2), complex(-w/root2, -w/root2)},
			rel:  1e-6,
		},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			got := newStateSpace(t, &tt.n, tt.outs...).Poles()
			if len(got) != len(tt.want) {
				t.Fatalf("%d poles, want %d", len(got), len(tt.want))
			}
			for _, want := range tt.want {
				nearest := math.Inf(1)
				for _, p := range got {
					nearest = min(nearest, cmplx.Abs(p-want))
				}
				if nearest > tt.rel*cmplx.Abs(want) {
					t.Errorf("no pole within %g of %v: %v", nearest, want, got)
				}
			}
		})
	}
}

// TestSlowestTime: time constants by their formulas, and modes that no output shows.
func TestSlowestTime(t *testing.T) {
	outs := []circuit.Output{{From: 2, To: ret}}
	tests := []struct {
		name string
		n    circuit.Netlist
		want float64
	}{
		{"RC of 0.1 ms", circuit.Netlist{Nodes: 3, Branches: []circuit.Branch{resistorOf(amp, 2, 1000), capacitorOf(2, ret, 1e-7, 0)}}, 1e-4},
		{"a slower RC beside it that the output does not hear", circuit.Netlist{Nodes: 4, Branches: []circuit.Branch{
			resistorOf(amp, 2, 1000), capacitorOf(2, ret, 1e-7, 0), resistorOf(amp, 3, 1e6), capacitorOf(3, ret, 1e-6, 0)}}, 1e-4},
		{"the same behind a source resistance, heard: (1 MΩ + 1 Ω)·1 µF", circuit.Netlist{Nodes: 4, Source: 1, Branches: []circuit.Branch{
			resistorOf(amp, 2, 1000), capacitorOf(2, ret, 1e-7, 0), resistorOf(amp, 3, 1e6), capacitorOf(3, ret, 1e-6, 0)}}, 1.000001},
		{"only resistors", circuit.Netlist{Nodes: 3, Branches: []circuit.Branch{resistorOf(amp, 2, 1), resistorOf(2, ret, 1)}}, 0},
		{"lossless trap across the ideal source", circuit.Netlist{Nodes: 3, Branches: []circuit.Branch{coilOf(amp, 2, 1e-3, 0), capacitorOf(2, ret, 1e-5, 0)}}, math.Inf(1)},
	}
	for _, tt := range tests {
		got := newStateSpace(t, &tt.n, outs...).SlowestTime()
		// Rounding of an eigenvalue among at most two, which lie four decades apart; with the source resistance the other
		// RC (0.1 ms) slows this one by a part in 1e10 (1 Ω / 1 MΩ × 0.1 ms / 1 s).
		if !(got == tt.want || math.Abs(got-tt.want) <= 2e-10*tt.want) {
			t.Errorf("%s: %g s, want %g s", tt.name, got, tt.want)
		}
	}
}

type deafPort struct{}

func (deafPort) Impedance(complex128) complex128 { return 8 }
func (deafPort) Branches() []circuit.Branch      { return nil }

// TestStateSpaceErrors checks that what cannot be is refused in words that name it.
func TestStateSpaceErrors(t *testing.T) {
	out := []circuit.Output{{From: 2, To: ret}}
	tests := []struct {
		name string
		n    circuit.Netlist
		outs []circuit.Output
		want string
	}{
		{"port without an equivalent circuit", circuit.Netlist{Nodes: 3, Branches: []circuit.Branch{
			resistorOf(amp, 2, 1), {Name: "woofer", Kind: circuit.Port, From: 2, To: ret, Port: deafPort{}}}}, out, "woofer: has no equivalent circuit"},
		{"shorted ideal source", circuit.Netlist{Nodes: 3, Branches: []circuit.Branch{
			resistorOf(amp, 2, 0), resistorOf(2, ret, 0)}}, out, "shorted"},
		{"output at a loose node", circuit.Netlist{Nodes: 4, Branches: []circuit.Branch{
			resistorOf(amp, ret, 8), resistorOf(2, 3, 1)}}, out, "output 0: nothing joins its two ends"},
		{"three coils, each the opposite of the other two", circuit.Netlist{Nodes: 3, Branches: []circuit.Branch{
			coilOf(amp, 2, 1e-3, 0), coilOf(amp, 2, 1e-3, 0), coilOf(amp, 2, 1e-3, 0), resistorOf(2, ret, 8)},
			Couplings: []circuit.Coupling{{A: 0, B: 1, K: -0.9}, {A: 1, B: 2, K: -0.9}, {A: 0, B: 2, K: -0.9}}}, out, "contradict"},
		{"no such node", circuit.Netlist{Nodes: 2}, out, "numbered 0 to 1"},
	}
	for _, tt := range tests {
		ss, err := circuit.NewStateSpace(&tt.n, tt.outs)
		if err == nil || ss != nil || !strings.Contains(err.Error(), tt.want) {
			t.Errorf("%s: %v, %v; want an error with %q", tt.name, ss, err, tt.want)
		}
	}
}

// TestBilinear compares the difference equations with the network at s = a(z - 1)/(z + 1), of which they are a rewriting, by the
// sum G(zI - M)⁻¹F + H over a one-state network, where it is a quotient.
func TestBilinear(t *testing.T) {
	ss := newStateSpace(t, &circuit.Netlist{Nodes: 3, Branches: []circuit.Branch{resistorOf(amp, 2, 1000), capacitorOf(2, ret, 1e-7, 0)}},
		circuit.Output{From: 2, To: ret}, circuit.Output{From: amp, To: 2})
	for _, a := range []float64{96000, 2e3, 1e9} {
		m, f, g, h, err := ss.Bilinear(a)
		if err != nil {
			t.Fatal(err)
		}
		for _, z := range []complex128{1, 1i, cmplx.Rect(1, 0.1), complex(0.3, 0.4)} {
			s := complex(a, 0) * (z - 1) / (z + 1)
			low := 1 / (1 + s*1e-4)
			for k, want := range []complex128{low, 1 - low} {
				got := complex(g[k]*f[0], 0)/(z-complex(m[0], 0)) + complex(h[k], 0)
				if cmplx.Abs(got-want) > 1e-10 { // rounding, enlarged by z - M ≈ 1e-5 at a = 1e9
					t.Errorf("a = %g, z = %v, output %d: %v, want %v", a, z, k, got, want)
				}
			}
		}
	}
	for _, a := range []float64{0, -1, math.NaN(), math.Inf(1)} {
		if _, _, _, _, err := ss.Bilinear(a); err == nil {
			t.Errorf("a = %g: no error", a)
		}
	}
}

// BenchmarkStateSpace times the making of the equations and one gain.
func BenchmarkStateSpace(b *testing.B) {
	n, err := loadThreeWay()
	if err != nil {
		b.Fatal(err)
	}
	b.Run("new", func(b *testing.B) {
		b.ReportAllocs()
		for b.Loop() {
			if _, err := circuit.NewStateSpace(&n.netlist, n.outs); err != nil {
				b.Fatal(err)
			}
		}
	})
	b.Run("responses=100", func(b *testing.B) {
		ss, err := circuit.NewStateSpace(&n.netlist, n.outs)
		if err != nil {
			b.Fatal(err)
		}
		s := make([]complex128, 100)
		dst := make([][]complex128, len(s))
		for i, f := range logSpaced(10, 20e3, len(s)) {
			s[i] = complex(0, 2*math.Pi*f)
			dst[i] = make([]complex128, len(n.outs))
		}
		b.ReportAllocs()
		for b.Loop() {
			ss.Responses(dst, s)
		}
	})
}
