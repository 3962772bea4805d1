package ladder

import (
	"math"
	"math/cmplx"
	"testing"

	"sixdown/xover/align"
)

// The oracle of these tests: a ladder worked back from its load, one element at a time, as a book's first chapter
// does it. It shares nothing with the code under test but the Network type.

// impedance returns that of the expression at the complex frequency s, in rad/s.
func impedance(e Expr, s complex128) complex128 {
	switch e.Op {
	case InSeries:
		var z complex128
		for _, arg := range e.Args {
			z += impedance(arg, s)
		}
		return z
	case InParallel:
		var y complex128
		for _, arg := range e.Args {
			y += 1 / impedance(arg, s)
		}
		return 1 / y
	}
	v := complex(e.Part.Value, 0)
	switch e.Part.Kind {
	case Inductor:
		return s * v
	case Capacitor:
		return 1 / (s * v)
	}
	return v
}

// work returns the voltage across the load over that at the amplifier, and the impedance the amplifier sees, at
// f in Hz, for a load of that impedance.
func work(n Network, load complex128, f float64) (gain, input complex128) {
	s := complex(0, 2*math.Pi*f)
	v, i := complex(1, 0), 1/load
	for k := len(n) - 1; k >= 0; k-- {
		z := impedance(n[k].Expr, s)
		if n[k].Shunt {
			i += v / z
		} else {
			v += i * z
		}
	}
	return 1 / v, v / i
}

func must(t testing.TB, spec align.Spec) *align.Alignment {
	t.Helper()
	a, err := align.New(spec)
	if err != nil {
		t.Fatal(err)
	}
	return a
}

// every returns each alignment there is, Chebyshevs with two ripples.
func every(t testing.TB) []*align.Alignment {
	var all []*align.Alignment
	for n := 1; n <= align.MaxOrder; n++ {
		all = append(all, must(t, align.Spec{Shape: align.Butterworth, Order: n}))
		if n%2 == 0 {
			all = append(all, must(t, align.Spec{Shape: align.LinkwitzRiley, Order: n}))
		}
		for _, ref := range []align.Reference{align.Magnitude, align.Phase, align.Delay} {
			all = append(all, must(t, align.Spec{Shape: align.Bessel, Order: n, Reference: ref}))
		}
		for _, ripple := range []float64{0.1, 3} {
			all = append(all, must(t, align.Spec{Shape: align.Chebyshev, Order: n, RippleDB: ripple}))
		}
	}
	return all
}

// around returns frequencies from f/100 to 100·f, 20 a decade.
func around(f float64) []float64 {
	var all []float64
	for i := -40; i <= 40; i++ {
		all = append(all, f*math.Pow(10, float64(i)/20))
	}
	return all
}

func decibel(h complex128) float64 { return 20 * math.Log10(cmplx.Abs(h)) }

func relative(got, want float64) float64 { return math.Abs(got-want) / math.Abs(want) }

// values returns the parts' values in order, of a network that has one part an element.
func values(t testing.TB, n Network) []float64 {
	t.Helper()
	var all []float64
	for _, e := range n {
		if e.Expr.Op != Leaf {
			t.Fatalf("%+v is more than a part", e)
		}
		all = append(all, e.Expr.Part.Value)
	}
	return all
}
