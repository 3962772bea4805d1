package tune

import (
	"context"
	"testing"
)

// BenchmarkDerivatives is the objective with all its derivatives, for a two-way of 10 parts and a three-way of 16.
func BenchmarkDerivatives(b *testing.B) {
	all := problemsIn(b)
	for _, name := range []string{"skerry", "lantern"} {
		b.Run(name, func(b *testing.B) {
			p := all[name]
			e, err := p.newEvaluator()
			if err != nil {
				b.Fatal(err)
			}
			x, err := p.logs(p.Start())
			if err != nil {
				b.Fatal(err)
			}
			b.ReportAllocs()
			for b.Loop() {
				e.x[0] = 0
				if _, err := e.derivatives(x); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

// BenchmarkRun is a whole search on one core, without and with a limit on the impedance.
func BenchmarkRun(b *testing.B) {
	all := problemsIn(b)
	for _, name := range []string{"skerry", "mooring"} {
		b.Run(name, func(b *testing.B) {
			for b.Loop() {
				if _, err := all[name].Run(context.Background(), Search{Workers: 1}); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

// An evaluation with derivatives allocates nothing once it is under way.
func TestEvaluationAllocatesNothing(t *testing.T) {
	for name, p := range problemsIn(t) {
		e, err := p.newEvaluator()
		if err != nil {
			t.Fatal(err)
		}
		x, err := p.logs(p.Start())
		if err != nil {
			t.Fatal(err)
		}
		if _, err := e.derivatives(x); err != nil {
			t.Fatal(err)
		}
		if n := testing.AllocsPerRun(20, func() {
			x[0] += 1e-3
			if _, err := e.derivatives(x); err != nil {
				t.Fatal(err)
			}
		}); n != 0 {
			t.Errorf("%s: an evaluation allocates %g times", name, n)
		}
	}
}
