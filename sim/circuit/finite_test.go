package circuit_test

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"

	"sixdown/sim/circuit"
)

// A lossless trap at its exact resonance shorts what lies across it: 8 Ω behind 4 Ω gets nothing, and the trap carries
// all that 4 Ω let through. Nothing is infinite but the impedance of what carries no current.
func TestExactResonance(t *testing.T) {
	const l, c = 0x1p-10, 0x1p-20
	f := 0x1p15 / (2 * math.Pi) // ω is 2¹⁵, to a bit or exactly
	n := &circuit.Netlist{Nodes: 4, Branches: []circuit.Branch{
		{Name: "R1", Kind: circuit.Resistor, From: circuit.Amp, To: 2, Value: 4},
		{Name: "L1", Kind: circuit.Inductor, From: 2, To: 3, Value: l},
		{Name: "C1", Kind: circuit.Capacitor, From: 3, To: circuit.Return, Value: c},
		{Name: "R2", Kind: circuit.Resistor, From: 2, To: circuit.Return, Value: 8},
	}}
	s := sweepOf(t, n, []circuit.Output{{From: 2}}, []float64{f})
	got := make([]complex128, 1)
	s.Gain(got, 0)
	if cmplx.Abs(got[0]) > 1e-12 {
		t.Errorf("the gain is %v, want 0", got[0])
	}
	for b, want := range []float64{0.25, 0.25, 0.25, 0} {
		if err := s.BranchCurrent(got, b); err != nil || cmplx.Abs(got[0]-complex(want, 0)) > 1e-12 {
			t.Errorf("current of %s is %v (%v), want %g", n.Branches[b].Name, got[0], err, want)
		}
	}
	// 0.25 A through ωL = 32 Ω.
	if err := s.BranchVoltage(got, 1); err != nil || cmplx.Abs(got[0]-8i) > 1e-10 {
		t.Errorf("voltage of L1 is %v (%v), want 8j", got[0], err)
	}
	if err := s.NodeVoltage(got, 3); err != nil || cmplx.Abs(got[0]+8i) > 1e-10 {
		t.Errorf("voltage between L1 and C1 is %v (%v), want -8j", got[0], err)
	}
	s.InputImpedance(got)
	if cmplx.Abs(got[0]-4) > 1e-10 {
		t.Errorf("the input impedance is %v, want 4", got[0])
	}
}

// What carries no current has an infinite impedance and not a number that is none: a capacitor that leads nowhere.
func TestNoCurrent(t *testing.T) {
	n := &circuit.Netlist{Nodes: 3, Source: 1000, Branches: []circuit.Branch{
		{Name: "C1", Kind: circuit.Capacitor, From: circuit.Amp, To: 2, Value: 1e-6},
	}}
	s := sweepOf(t, n, []circuit.Output{{From: 2}}, []float64{100, 1000})
	got := make([]complex128, 2)
	s.InputImpedance(got)
	if !cmplx.IsInf(got[0]) || !cmplx.IsInf(got[1]) {
		t.Errorf("the input impedance is %v, want infinity", got)
	}
	s.Gain(got, 0)
	if got[0] != 1 || got[1] != 1 {
		t.Errorf("the gain is %v, want 1", got)
	}
	if err := s.ImpedanceGradient(got, 0); err != nil || got[0] != 0 {
		t.Errorf("the impedance moves by %v (%v), want 0", got[0], err)
	}
}

func sweepOf(t *testing.T, n *circuit.Netlist, outs []circuit.Output, freqs []float64) *circuit.Sweep {
	t.Helper()
	c, err := circuit.Compile(n, outs)
	if err != nil {
		t.Fatal(err)
	}
	s, err := c.NewSweep(freqs)
	if err != nil {
		t.Fatal(err)
	}
	if err := s.Solve(); err != nil {
		t.Fatal(err)
	}
	return s
}

// Coils with next to no loss: at the frequencies where the branches at a node resonate the sweep must stay with the slow
// road, which chooses its pivots and has digits to spare.
func TestNearlyLossless(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 9))
	count := 3000
	if testing.Short() {
		count = 500
	}
	worst := 0.0
	for range count {
		n := &circuit.Netlist{Nodes: 5, Source: 0.1 * r.Float64()}
		log := func(lo, hi float64) float64 { return lo * math.Pow(hi/lo, r.Float64()) }
		var at [5]struct{ c, gamma float64 } // what is capacitive and inductive at each node
		add := func(k circuit.Kind, a, b int) {
			v := circuit.Branch{Name: "X", Kind: k, From: a, To: b}
			if k == circuit.Inductor {
				v.Value, v.Loss = log(1e-5, 1e-2), log(1e-10, 1e-6)
				at[a].gamma += 1 / v.Value
				at[b].gamma += 1 / v.Value
			} else {
				v.Value = log(1e-7, 1e-4)
				at[a].c += v.Value
				at[b].c += v.Value
			}
			n.Branches = append(n.Branches, v)
		}
		for node := 2; node < 5; node++ {
			add(circuit.Kind(1+r.IntN(2)), node-1, node)
			add(circuit.Kind(1+r.IntN(2)), node, circuit.Return)
		}
		add(circuit.Kind(1+r.IntN(2)), 1+r.IntN(2), 4)
		n.Branches = append(n.Branches, circuit.Branch{Name: "R", Kind: circuit.Resistor, From: 4, To: circuit.Return, Value: log(1, 100)})
		var freqs []float64
		for node := 2; node < 5; node++ {
			if at[node].c > 0 && at[node].gamma > 0 {
				freqs = append(freqs, math.Sqrt(at[node].gamma/at[node].c)/(2*math.Pi))
			}
		}
		if len(freqs) == 0 {
			continue
		}
		outs := []circuit.Output{{From: 4}, {From: 2}}
		c, err := circuit.Compile(n, outs)
		if err != nil {
			t.Fatal(err)
		}
		s, err := c.NewSweep(freqs)
		if err != nil {
			t.Fatal(err)
		}
		if s.Solve() != nil {
			continue // the whole network resonates
		}
		got := make([]complex128, len(freqs))
		for o := range outs {
			s.Gain(got, o)
			for i, f := range freqs {
				p, err := c.At(complex(0, 2*math.Pi*f))
				if err != nil {
					t.Fatal(err)
				}
				// A gain that a resonance of the whole magnifies is as uncertain as its frequency: judged by its size.
				e := cmplx.Abs(got[i]-p.Gain[o]) / max(cmplx.Abs(p.Gain[o]), 1)
				worst = max(worst, e)
			}
		}
	}
	t.Logf("worst error %.1e", worst)
	if !(worst < 1e-9) {
		t.Errorf("the sweep is off by %.1e", worst)
	}
}
