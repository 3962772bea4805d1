package circuit_test

import (
	"fmt"
	"math"
	"math/cmplx"
	"testing"

	"sixdown/sim/circuit"
)

// TestVanishingPivots asks for networks of ideal coils and capacitors exactly where the branches at some node, or all
// branches of a part of the ladder, resonate. There a pivot of plain Gaussian elimination without row exchange is all
// rounding error, though the network itself has a good answer.
func TestVanishingPivots(t *testing.T) {
	var networks []*testNetwork
	var request jsonRequest
	add := func(name string, n circuit.Netlist, freqs []float64) {
		for k := range n.Branches {
			n.Branches[k].Name = fmt.Sprintf("%c%d", "RLCX"[n.Branches[k].Kind], k)
		}
		tn := &testNetwork{name: name, netlist: n}
		for k := 2; k < n.Nodes; k++ {
			tn.outs = append(tn.outs, circuit.Output{From: k, To: circuit.Return})
		}
		tn.outs = append(tn.outs, circuit.Output{From: circuit.Amp, To: n.Nodes - 1})
		networks = append(networks, tn)
		request.Networks = append(request.Networks, tn.toJSON(freqs, nil))
	}
	for _, source := range []float64{0, 0.3} {
		for stages := 1; stages <= 5; stages++ {
			for _, load := range []float64{0, 1e-3, 8, 1e5, 1e6} { // Ω; 0: none
				if stages == 1 && source == 0 && load == 0 {
					continue // its one node resonance is its own: see TestLosslessResonance
				}
				n := lcLadder(stages)
				if load > 0 {
					n.Branches = append(n.Branches, circuit.Branch{Kind: circuit.Resistor, From: n.Nodes - 1, Value: load})
				}
				n.Source = source
				// Without source resistance and load, the last tail is the whole network: see TestLosslessResonance.
				freqs := append(nodeResonances(&n), tailResonances(&n, source == 0 && load == 0)...)
				add(fmt.Sprintf("%d stages, source %g Ω, load %g Ω", stages, source, load), n, freqs)
			}
		}
	}
	reply := askReference(t, request)
	got := 0
	y := &yardstick{what: "gain, Z, V, I"}
	for i, n := range networks {
		freqs, want := request.Networks[i].FrequencyHz, &reply.Networks[i]
		c, err := circuit.Compile(&n.netlist, n.outs)
		if err != nil {
			t.Errorf("%s: %v", n.name, err)
			continue
		}
		for f, hz := range freqs {
			// A pure LC network that resonates as a whole has no finite answer, and float64 cannot say how large it
			// is; those are for TestLosslessResonance.
			if want.ZinSense[f] > 1e9 || want.GainSense[0][f] > 1e9 {
				continue
			}
			s, err := c.NewSweep([]float64{hz})
			if err != nil {
				t.Fatal(err)
			}
			where := func() string { return fmt.Sprintf("%s at %.6g Hz", n.name, hz) }
			if err := s.Solve(); err != nil {
				t.Errorf("%s: %v", where(), err)
				continue
			}
			got++
			v := make([]complex128, 1)
			for o, out := range n.outs {
				s.Gain(v, o)
				y.compare(v[0], want.Gain[o][f].value(), 8*unit*want.GainSense[o][f]+8*reply.ExtendedEps*cancelling(want.NodeMagnitude, out.From, out.To, f, want.Gain[o][f]), where)
			}
			s.InputImpedance(v)
			y.compare(v[0], want.Zin[f].value(), 8*unit*want.ZinSense[f], where)
			for k, b := range n.netlist.Branches {
				item := func() string { return where() + " " + b.Name }
				cancel := 8 * reply.ExtendedEps * cancelling(want.NodeMagnitude, b.From, b.To, f, want.BranchVoltage[k][f])
				if err := s.BranchVoltage(v, k); err != nil {
					t.Fatal(err)
				}
				y.compare(v[0], want.BranchVoltage[k][f].value(), 8*unit*want.BranchVoltageSense[k][f]+cancel, item)
				if err := s.BranchCurrent(v, k); err != nil {
					t.Fatal(err)
				}
				y.compare(v[0], want.BranchCurrent[k][f].value(), 8*unit*want.BranchCurrentSense[k][f]+cancel, item)
			}
			y.settle(t)
			gradientAtResonance(t, n, hz)
		}
	}
	if got < 100 {
		t.Errorf("only %d cases could be compared", got)
	}
	t.Logf("%d networks, %d cases", len(networks), got)
	y.log(t)
}

// gradientAtResonance holds all derivatives at one frequency against differences in extended precision.
func gradientAtResonance(t *testing.T, n *testNetwork, hz float64) {
	t.Helper()
	grad, _ := adjointGradient(t, n, []float64{hz})
	_, want := differences(newBigCircuit(&n.netlist, n.outs), len(n.netlist.Branches), 2*math.Pi*hz)
	worst := 0.0
	for q := range want {
		scale := 0.0
		for k, b := range n.netlist.Branches {
			scale = max(scale, b.Value*cmplx.Abs(want[q][k]))
		}
		for k, b := range n.netlist.Branches {
			worst = max(worst, b.Value*cmplx.Abs(grad[q][k][0]-want[q][k])/scale)
		}
	}
	if !(worst <= 1e-8) {
		t.Errorf("%s at %.6g Hz: derivatives differ from differences by %.1e of the scale", n.name, hz, worst)
	}
}

// lcLadder is a low-pass of ideal coils in series and ideal capacitors across, all different.
func lcLadder(stages int) circuit.Netlist {
	n := circuit.Netlist{Nodes: 2}
	hot := circuit.Amp
	for k := range stages {
		x := float64(k)
		n.Branches = append(n.Branches,
			circuit.Branch{Kind: circuit.Inductor, From: hot, To: n.Nodes, Value: (1.7 - 0.21*x) * 1e-3},
			circuit.Branch{Kind: circuit.Capacitor, From: n.Nodes, Value: (9 + 3.3*x) * 1e-6})
		hot = n.Nodes
		n.Nodes++
	}
	return n
}

// nodeResonances is the frequencies (Hz) at which the coils and capacitors of n that meet at some node other than the
// terminals resonate, by ω² = Σ(1/L)/ΣC.
func nodeResonances(n *circuit.Netlist) []float64 {
	var freqs []float64
	for k := 2; k < n.Nodes; k++ {
		elastance, c := 0.0, 0.0
		for _, b := range n.Branches {
			switch {
			case b.From != k && b.To != k:
			case b.Kind == circuit.Inductor:
				elastance += 1 / b.Value
			case b.Kind == circuit.Capacitor:
				c += b.Value
			}
		}
		freqs = append(freqs, math.Sqrt(elastance/c)/(2*math.Pi))
	}
	return freqs
}

// tailResonances is the frequencies (Hz) at which the last two, three, … stages of an unloaded lcLadder resonate with the
// node before them held at 0 V: there a pivot of elimination from the far end vanishes. They are found by bisection on
// the sign of that pivot, d_k = B_k - S_k² /d_(k+1), B_k the susceptance at node k and S_k that of the coil between k and k+1.
// With short, all the stages together are left out.
func tailResonances(n *circuit.Netlist, short bool) []float64 {
	var coil, capacitor []float64
	for _, b := range n.Branches {
		switch b.Kind {
		case circuit.Inductor:
			coil = append(coil, b.Value)
		case circuit.Capacitor:
			capacitor = append(capacitor, b.Value)
		}
	}
	var freqs []float64
	first := 0
	if short {
		first = 1
	}
	for k := len(coil) - 2; k >= first; k-- {
		pivot := func(w float64) float64 {
			d := 0.0
			for j := len(coil) - 1; j >= k; j-- {
				b := w*capacitor[j] - 1/(w*coil[j])
				if j < len(coil)-1 {
					s := 1 / (w * coil[j+1])
					b -= s + s*s/d
				}
				d = b
			}
			return d
		}
		const steps = 4000
		for i := range steps {
			lo := 2 * math.Pi * 100 * math.Pow(100, float64(i)/steps)
			hi := 2 * math.Pi * 100 * math.Pow(100, float64(i+1)/steps)
			if !(pivot(lo) < 0 && pivot(hi) > 0) { // a pole of d goes the other way
				continue
			}
			for range 80 {
				mid := (lo + hi) / 2
				if pivot(mid) < 0 {
					lo = mid
				} else {
					hi = mid
				}
			}
			freqs = append(freqs, lo/(2*math.Pi))
		}
	}
	return freqs
}

// TestLosslessResonance: where a network without any loss resonates there is no finite answer, and Solve says so or
// gives a gain so large that nobody takes it for a working point; it never gives NaN.
func TestLosslessResonance(t *testing.T) {
	// ω² = 1/LC of a single stage with no load: V across C is infinite.
	n := circuit.Netlist{Nodes: 3, Branches: []circuit.Branch{
		{Name: "L1", Kind: circuit.Inductor, From: 1, To: 2, Value: 1e-3},
		{Name: "C1", Kind: circuit.Capacitor, From: 2, Value: 10e-6},
	}}
	hz := 1 / (2 * math.Pi * math.Sqrt(1e-3*10e-6))
	c, err := circuit.Compile(&n, []circuit.Output{{From: 2}})
	if err != nil {
		t.Fatal(err)
	}
	s, err := c.NewSweep([]float64{hz / 3, hz})
	if err != nil {
		t.Fatal(err)
	}
	if err := s.Solve(); err == nil {
		v := make([]complex128, 2)
		s.Gain(v, 0)
		if !(cmplx.Abs(v[1]) > 1e8) {
			t.Errorf("gain at the resonance is %v", v[1])
		}
	} else if len(err.Error()) < 20 {
		t.Errorf("error says too little: %v", err)
	}
}
