package circuit_test

import (
	"testing"

	"sixdown/sim/circuit"
)

// threeWaySweep is the three-way of 38 branches and 20 nodes over 500 frequencies, which testdata/batched.py times too.
func threeWaySweep(tb testing.TB, source float64) *circuit.Sweep {
	tb.Helper()
	n, err := loadThreeWay()
	if err != nil {
		tb.Fatal(err)
	}
	if branches, nodes := len(n.netlist.Branches), n.netlist.Nodes; branches != 38 || nodes != 20 {
		tb.Fatalf("three-way-38.json has %d branches and %d nodes", branches, nodes)
	}
	n.netlist.Source = source
	c, err := circuit.Compile(&n.netlist, n.outs)
	if err != nil {
		tb.Fatal(err)
	}
	s, err := c.NewSweep(logSpaced(20, 20e3, 500))
	if err != nil {
		tb.Fatal(err)
	}
	return s
}

// moveParts gives every part but the drivers a new value, as each round of tuning does.
func moveParts(tb testing.TB, s *circuit.Sweep, parts []circuit.Branch, factor float64) {
	for k := range parts {
		if parts[k].Kind == circuit.Port {
			continue
		}
		if err := s.SetValue(k, parts[k].Value*factor); err != nil {
			tb.Fatal(err)
		}
	}
}

var sourceCases = []struct {
	name string
	ohm  float64
}{
	{"source=0", 0},
	{"source=0.05ohm", 0.05},
}

// BenchmarkSweep is what one evaluation of a tuner costs without derivatives: Solve, no copying out.
func BenchmarkSweep(b *testing.B) {
	for _, c := range sourceCases {
		b.Run(c.name, func(b *testing.B) {
			s := threeWaySweep(b, c.ohm)
			b.ReportAllocs()
			for b.Loop() {
				if err := s.Solve(); err != nil {
					b.Fatal(err)
				}
			}
			perFrequency(b)
		})
	}
}

// BenchmarkSweepMoved is BenchmarkSweep with all 35 values set anew before each Solve, so that nothing can be kept.
func BenchmarkSweepMoved(b *testing.B) {
	n, err := loadThreeWay()
	if err != nil {
		b.Fatal(err)
	}
	s := threeWaySweep(b, 0.05)
	b.ReportAllocs()
	factor := 1.0
	for b.Loop() {
		factor = 2.1 - factor
		moveParts(b, s, n.netlist.Branches, factor)
		if err := s.Solve(); err != nil {
			b.Fatal(err)
		}
	}
	perFrequency(b)
}

// BenchmarkGradient is Solve and then all derivatives by all 35 parts, of 3 gains and the input impedance.
func BenchmarkGradient(b *testing.B) {
	for _, c := range sourceCases {
		b.Run(c.name, func(b *testing.B) {
			s := threeWaySweep(b, c.ohm)
			if err := s.Solve(); err != nil {
				b.Fatal(err)
			}
			if err := s.Gradient(); err != nil { // the first makes room
				b.Fatal(err)
			}
			b.ReportAllocs()
			for b.Loop() {
				if err := s.Solve(); err != nil {
					b.Fatal(err)
				}
				if err := s.Gradient(); err != nil {
					b.Fatal(err)
				}
			}
			perFrequency(b)
		})
	}
}

// BenchmarkCompile is what a new arrangement costs before its first sweep.
func BenchmarkCompile(b *testing.B) {
	n, err := loadThreeWay()
	if err != nil {
		b.Fatal(err)
	}
	b.ReportAllocs()
	for b.Loop() {
		if _, err := circuit.Compile(&n.netlist, n.outs); err != nil {
			b.Fatal(err)
		}
	}
}

func perFrequency(b *testing.B) {
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/500, "ns/frequency")
}

// TestSweepAllocatesNothing keeps the promise of Sweep's doc comments.
func TestSweepAllocatesNothing(t *testing.T) {
	n, err := loadThreeWay()
	if err != nil {
		t.Fatal(err)
	}
	s := threeWaySweep(t, 0.05)
	got := make([]complex128, 500)
	factor := 1.0
	allocs := testing.AllocsPerRun(10, func() {
		factor = 2.1 - factor
		moveParts(t, s, n.netlist.Branches, factor)
		if err := s.SetLoss(0, 0.3*factor); err != nil {
			t.Fatal(err)
		}
		if err := s.Solve(); err != nil {
			t.Fatal(err)
		}
		if err := s.Gradient(); err != nil {
			t.Fatal(err)
		}
		s.Gain(got, 0)
		s.AmpGain(got)
		s.InputImpedance(got)
		s.BranchVoltage(got, 1)
		s.BranchCurrent(got, 1)
		s.GainGradient(got, 1, 3)
		s.ImpedanceGradient(got, 3)
	})
	if allocs != 0 {
		t.Errorf("a round of SetValue, Solve, Gradient and all readings allocates %g times", allocs)
	}
}
