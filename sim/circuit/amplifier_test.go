package circuit

import (
	"fmt"
	"math"
	"math/cmplx"
	"strings"
	"testing"
)

// An activeCase is a network with amplifiers whose gain from the open-circuit source is known by hand.
type activeCase struct {
	name string
	net  Netlist
	out  Output
	gain func(s complex128) complex128
	zin  func(s complex128) complex128 // nil: not looked at
}

// activeCases are derived by hand from V(Plus) = V(Minus) and no current into the inputs.
func activeCases() []activeCase {
	const r1, r2, c1, c2, rs = 10e3, 47e3, 3.3e-9, 10e-9, 600.0
	z := func(c float64, s complex128) complex128 { return 1 / (s * complex(c, 0)) }
	beside := func(a, b complex128) complex128 { return a * b / (a + b) }
	return []activeCase{
		{
			// The minus input is at 0 V, so the source sees rs + r1, and the output is -(r2 ∥ c2)/(rs + r1).
			name: "inverting, with a lag",
			net: Netlist{Nodes: 4, Source: rs, Branches: []Branch{
				{Name: "R1", From: Amp, To: 2, Value: r1}, {Name: "R2", From: 2, To: 3, Value: r2}, {Name: "C2", Kind: Capacitor, From: 2, To: 3, Value: c2},
				{Name: "load", From: 3, To: Return, Value: 1e3},
			}, Amplifiers: []Amplifier{{Name: "A1", Plus: Return, Minus: 2, Out: 3}}},
			out:  Output{3, Return},
			gain: func(s complex128) complex128 { return -beside(r2, z(c2, s)) / (rs + r1) },
			zin:  func(complex128) complex128 { return r1 },
		},
		{
			// The plus input behind r1 and c1, 1 + r2/10 kΩ times that.
			name: "not inverting, behind a low-pass",
			net: Netlist{Nodes: 5, Source: rs, Branches: []Branch{
				{Name: "R1", From: Amp, To: 2, Value: r1}, {Name: "C1", Kind: Capacitor, From: 2, To: Return, Value: c1},
				{Name: "R2", From: 4, To: 3, Value: r2}, {Name: "R3", From: 3, To: Return, Value: 10e3},
			}, Amplifiers: []Amplifier{{Name: "A1", Plus: 2, Minus: 3, Out: 4}}},
			out:  Output{4, Return},
			gain: func(s complex128) complex128 { return (1 + r2/10e3) / (1 + s*(rs+r1)*c1) },
			zin:  func(s complex128) complex128 { return r1 + z(c1, s) },
		},
		{
			// A follower with c1 from its output to between two resistors, R. P. Sallen and E. L. Key, "A Practical Method of Designing RC
			// Active Filters", IRE Trans. Circuit Theory 2, 1955: 1/(1 + s·c2·(Ra + Rb) + s²·Ra·Rb·c1·c2), Ra with the source's.
			name: "second-order low-pass about a follower",
			net: Netlist{Nodes: 4, Source: rs, Branches: []Branch{
				{Name: "R1", From: Amp, To: 2, Value: r1}, {Name: "R2", From: 2, To: 3, Value: r2},
				{Name: "C2", Kind: Capacitor, From: 3, To: Return, Value: c2}, {Name: "C1", Kind: Capacitor, From: 2, To: 3 + 1, Value: c1},
			}, Amplifiers: []Amplifier{{Name: "A1", Plus: 3, Minus: 4, Out: 4}}},
			out: Output{4, Return},
			gain: func(s complex128) complex128 {
				return 1 / (1 + s*c2*(rs+r1+r2) + s*s*(rs+r1)*r2*c1*c2)
			},
		},
		{
			// An inverting stage and another after it, from an ideal source: the product, and 1/r1 + 1/r2 into the source's end.
			name: "two in a row, from an ideal source",
			net: Netlist{Nodes: 6, Branches: []Branch{
				{Name: "R1", From: Amp, To: 2, Value: r1}, {Name: "C1", Kind: Capacitor, From: 2, To: 3, Value: c1}, {Name: "R5", From: 2, To: 3, Value: 1e6},
				{Name: "R3", From: 3, To: 4, Value: 22e3}, {Name: "R4", From: 4, To: 5, Value: 5.6e3}, {Name: "R2", From: Amp, To: Return, Value: r2},
			}, Amplifiers: []Amplifier{{Name: "A1", Plus: Return, Minus: 2, Out: 3}, {Name: "A2", Plus: Return, Minus: 4, Out: 5}}},
			out:  Output{5, Return},
			gain: func(s complex128) complex128 { return beside(1e6, z(c1, s)) / r1 * 5.6e3 / 22e3 },
			zin:  func(complex128) complex128 { return beside(r1, r2) },
		},
	}
}

func (c *activeCase) named() *Netlist {
	n := c.net
	n.Nodes = 2
	for _, b := range n.Branches {
		n.Nodes = max(n.Nodes, b.From+1, b.To+1)
	}
	for _, a := range n.Amplifiers {
		n.Nodes = max(n.Nodes, a.Out+1)
	}
	return &n
}

var activeFreqs = []float64{3, 40, 300, 1000, 7000, 20e3, 1e6}

func TestAmplifiersAgainstClosedForms(t *testing.T) {
	for _, tt := range activeCases() {
		c, err := Compile(tt.named(), []Output{tt.out})
		if err != nil {
			t.Fatalf("%s: %v", tt.name, err)
		}
		sweep, err := c.NewSweep(activeFreqs)
		if err != nil {
			t.Fatal(err)
		}
		if err := sweep.Solve(); err != nil {
			t.Fatalf("%s: %v", tt.name, err)
		}
		gain, zin := make([]complex128, len(activeFreqs)), make([]complex128, len(activeFreqs))
		sweep.Gain(gain, 0)
		sweep.InputImpedance(zin)
		for i, f := range activeFreqs {
			s := complex(0, 2*math.Pi*f)
			closeTo(t, fmt.Sprintf("%s: gain at %g Hz", tt.name, f), gain[i], tt.gain(s), 1e-12)
			if tt.zin != nil {
				closeTo(t, fmt.Sprintf("%s: input impedance at %g Hz", tt.name, f), zin[i], tt.zin(s), 1e-10) // of a small difference of the source's voltage
			}
			p, err := c.At(s)
			if err != nil {
				t.Fatal(err)
			}
			closeTo(t, fmt.Sprintf("%s: by itself at %g Hz", tt.name, f), p.Gain[0], tt.gain(s), 1e-12)
		}
	}
}

// Derivatives agree with differences of the closed forms' own values, which the sweep reproduces when values move.
func TestDerivativesWithAmplifiers(t *testing.T) {
	for _, tt := range activeCases() {
		n := tt.named()
		c, err := Compile(n, []Output{tt.out})
		if err != nil {
			t.Fatal(err)
		}
		sweep, err := c.NewSweep(activeFreqs)
		if err != nil {
			t.Fatal(err)
		}
		grad, up, down := make([]complex128, len(activeFreqs)), make([]complex128, len(activeFreqs)), make([]complex128, len(activeFreqs))
		for b := range n.Branches {
			value := n.Branches[b].Value
			at := func(dst []complex128, value float64) {
				if err := sweep.SetValue(b, value); err != nil {
					t.Fatal(err)
				}
				if err := sweep.Solve(); err != nil {
					t.Fatal(err)
				}
				sweep.Gain(dst, 0)
			}
			const h = 1e-4
			at(up, value*(1+h))
			at(down, value*(1-h))
			if err := sweep.SetValue(b, value); err != nil {
				t.Fatal(err)
			}
			if err := sweep.Gradient(); err != nil {
				t.Fatal(err)
			}
			sweep.GainGradient(grad, 0, b)
			for i, f := range activeFreqs {
				want := (up[i] - down[i]) / complex(2*h*value, 0)
				// The central difference is off by h² of the gain's own scale, and rounding by 1e-16/h of it.
				if scale := cmplx.Abs(tt.gain(complex(0, 2*math.Pi*f))) / value; cmplx.Abs(grad[i]-want) > 1e-7*scale {
					t.Errorf("%s: %s at %g Hz: %v, want %v", tt.name, n.Branches[b].Name, f, grad[i], want)
				}
			}
		}
	}
}

// The differential equations, which know nothing of the superposition, say the same.
func TestStateSpaceWithAmplifiers(t *testing.T) {
	for _, tt := range activeCases() {
		ss, err := NewStateSpace(tt.named(), []Output{tt.out})
		if err != nil {
			t.Fatalf("%s: %v", tt.name, err)
		}
		got := make([]complex128, 1)
		for _, f := range activeFreqs {
			s := complex(0, 2*math.Pi*f)
			ss.Response(got, s)
			closeTo(t, fmt.Sprintf("%s: %g Hz", tt.name, f), got[0], tt.gain(s), 1e-10)
		}
	}
}

// Voltages inside: the inputs are alike, and a branch has the voltage between its nodes.
func TestInsideWithAmplifiers(t *testing.T) {
	for _, tt := range activeCases() {
		n := tt.named()
		c, err := Compile(n, []Output{tt.out})
		if err != nil {
			t.Fatal(err)
		}
		sweep, err := c.NewSweep(activeFreqs)
		if err != nil {
			t.Fatal(err)
		}
		at := func(node int) []complex128 {
			v := make([]complex128, len(activeFreqs))
			if err := sweep.NodeVoltage(v, node); err != nil {
				t.Fatal(err)
			}
			return v
		}
		for _, a := range n.Amplifiers {
			plus, minus := at(a.Plus), at(a.Minus)
			for i := range plus {
				if cmplx.Abs(plus[i]-minus[i]) > 1e-12 {
					t.Errorf("%s: %s: inputs at %v and %v", tt.name, a.Name, plus[i], minus[i])
				}
			}
		}
		across, through := make([]complex128, len(activeFreqs)), make([]complex128, len(activeFreqs))
		for b := range n.Branches {
			br := &n.Branches[b]
			if err := sweep.BranchVoltage(across, b); err != nil {
				t.Fatal(err)
			}
			if err := sweep.BranchCurrent(through, b); err != nil {
				t.Fatal(err)
			}
			from, to := at(br.From), at(br.To)
			for i, f := range activeFreqs {
				y := complex(1/br.Value, 0)
				if br.Kind == Capacitor {
					y = complex(0, 2*math.Pi*f*br.Value)
				}
				if cmplx.Abs(across[i]-(from[i]-to[i])) > 1e-11 || cmplx.Abs(through[i]-across[i]*y) > 1e-11*cmplx.Abs(y) {
					t.Errorf("%s: %s at %g Hz: %v V and %v A between %v and %v", tt.name, br.Name, f, across[i], through[i], from[i], to[i])
				}
			}
		}
	}
}

func TestAmplifierFaults(t *testing.T) {
	net := func(a ...Amplifier) *Netlist {
		return &Netlist{Nodes: 5, Source: 600, Branches: []Branch{
			{Name: "R1", From: Amp, To: 2, Value: 1e3}, {Name: "R2", From: 2, To: 3, Value: 1e3}, {Name: "R3", From: 4, To: Return, Value: 1e3},
		}, Amplifiers: a}
	}
	solve := func(n *Netlist) error {
		c, err := Compile(n, []Output{{3, Return}})
		if err != nil {
			return err
		}
		s, err := c.NewSweep([]float64{1000})
		if err != nil {
			return err
		}
		return s.Solve()
	}
	for want, n := range map[string]*Netlist{
		"both inputs are at":            net(Amplifier{"A1", 2, 2, 3}),
		"which another source holds":    net(Amplifier{"A1", Return, 2, Amp}),
		"have their outputs at one":     net(Amplifier{"A1", Return, 2, 3}, Amplifier{"A2", Return, 4, 3}),
		"A1 has no feedback at 1000 Hz": net(Amplifier{"A1", Return, 2, 4}),
		"they are numbered 0 to 4":      net(Amplifier{"A1", Return, 2, 7}),
	} {
		if err := solve(n); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("got %v, want %q", err, want)
		}
	}
	if _, err := NewStateSpace(net(Amplifier{"A1", Return, 2, 4}), []Output{{3, Return}}); err == nil || !strings.Contains(err.Error(), "no feedback at high frequencies") {
		t.Errorf("differential equations: %v", err)
	}
}

func closeTo(t *testing.T, what string, got, want complex128, rel float64) {
	t.Helper()
	if !(cmplx.Abs(got-want) <= rel*cmplx.Abs(want)) {
		t.Errorf("%s: got %v, want %v", what, got, want)
	}
}
