package ladder

import (
	"fmt"
	"math"
	"math/big"
	"math/cmplx"
	"testing"

	"sixdown/xover/align"
)

// The ladder must be the alignment, magnitude and phase, however deep in the stop band. The tolerance is
// rounding, in the oracle too, times the Q of a few tens that a Chebyshev of order 8 has.
func TestLadderIsItsAlignment(t *testing.T) {
	const f, load = 2200, 8
	worst := 0.0
	for _, a := range every(t) {
		low, err := LowPass(a, f, load)
		if err != nil {
			t.Fatal(err)
		}
		high, err := HighPass(a, f, load)
		if err != nil {
			t.Fatal(err)
		}
		for _, at := range around(f) {
			s := complex(0, at/f)
			got, _ := work(low, load, at)
			e := cmplx.Abs(got/a.LowPass(s) - 1)
			got, _ = work(high, load, at)
			e = max(e, cmplx.Abs(got/a.HighPass(s)-1))
			worst = max(worst, e)
			if !(e < 1e-12) {
				t.Errorf("%+v at %.4g Hz is off by %.2g of itself", a.Spec(), at, e)
			}
		}
	}
	t.Logf("worst error %.2g", worst)
}

// What goes into a lossless ladder comes out into its load: Re(1/Zin) = |H|²/load.
func TestPowerIsConserved(t *testing.T) {
	const f, load = 2200, 8
	for _, a := range every(t) {
		n, err := LowPass(a, f, load)
		if err != nil {
			t.Fatal(err)
		}
		for _, at := range []float64{f / 10, f / 2, f, 2 * f} {
			h, z := work(n, load, at)
			out := real(h)*real(h) + imag(h)*imag(h)
			// Tolerance: where |H|² is 1e-6 the real part is what is left of a reactance, rounded.
			if in := real(1/z) * load; math.Abs(in-out) > 1e-12 {
				t.Errorf("%+v at %g Hz: %v goes in, %v comes out", a.Spec(), at, in, out)
			}
		}
	}
}

// prototype returns the normalised values, source first: those of a ladder for 1 Ω at 1 rad/s.
func prototype(t testing.TB, spec align.Spec) []float64 {
	t.Helper()
	n, err := LowPass(must(t, spec), 1/(2*math.Pi), 1)
	if err != nil {
		t.Fatal(err)
	}
	return values(t, n)
}

// The closed forms for a zero source, counted from the load: with a_k = sin((2k-1)π/2n),
//
//	Butterworth: g_1 = a_1, g_k = a_k·a_(k-1)/(c_(k-1)·g_(k-1)), c_k = cos²(kπ/2n)
//	Chebyshev:   g_1 = a_1/γ, the same with c_k = (γ² + sin²(kπ/2n))·cos²(kπ/2n), γ = sinh(asinh(1/ε)/n)
//
// L. Weinberg, Network Analysis and Synthesis, 1962 (from memory); they agree with an independent derivation. Tolerance:
// rounding, which the continued fraction multiplies by some tens at order 8.
func TestClosedForms(t *testing.T) {
	closed := func(n int, gamma float64, c func(k int) float64) []float64 {
		a := func(k int) float64 { return math.Sin(float64(2*k-1) * math.Pi / float64(2*n)) }
		g := make([]float64, n)
		g[n-1] = a(1) / gamma
		for k := 2; k <= n; k++ {
			g[n-k] = a(k) * a(k-1) / (c(k-1) * g[n-k+1])
		}
		return g
	}
	compare := func(spec align.Spec, want []float64) {
		t.Helper()
		for i, g := range prototype(t, spec) {
			if e := relative(g, want[i]); !(e < 1e-13) {
				t.Errorf("%+v: g%d is %v, want %v: off by %.2g of itself", spec, i+1, g, want[i], e)
			}
		}
	}
	for n := 1; n <= align.MaxOrder; n++ {
		angle := func(k int) float64 { return float64(k) * math.Pi / float64(2*n) }
		compare(align.Spec{Shape: align.Butterworth, Order: n}, closed(n, 1, func(k int) float64 {
			return math.Pow(math.Cos(angle(k)), 2)
		}))
		for _, ripple := range []float64{0.01, 0.1, 0.5, 1, 3} {
			gamma := math.Sinh(math.Asinh(1/math.Sqrt(math.Pow(10, ripple/10)-1)) / float64(n))
			compare(align.Spec{Shape: align.Chebyshev, Order: n, RippleDB: ripple}, closed(n, gamma, func(k int) float64 {
				return (gamma*gamma + math.Pow(math.Sin(angle(k)), 2)) * math.Pow(math.Cos(angle(k)), 2)
			}))
		}
	}
}

// The Bessel ladder of unit delay has rational values; here the continued fraction in exact rational
// arithmetic, from the coefficients (2n-k)!/(2^(n-k)·k!·(n-k)!). Tolerance: as for the closed forms.
func TestBesselLadderExactly(t *testing.T) {
	factorial := func(n int) *big.Int { return new(big.Int).MulRange(1, int64(n)) }
	for n := 1; n <= align.MaxOrder; n++ {
		theta := make([]*big.Rat, n+1)
		for k := range theta {
			below := new(big.Int).Mul(factorial(k), factorial(n-k))
			theta[k] = new(big.Rat).SetFrac(factorial(2*n-k), below.Lsh(below, uint(n-k)))
		}
		// Long division of the polynomial with every second power by that with the others, over and over.
		upper, lower := map[int]*big.Rat{}, map[int]*big.Rat{}
		for k := n; k >= 0; k-- {
			if (n-k)%2 == 0 {
				upper[k] = theta[k]
			} else {
				lower[k] = theta[k]
			}
		}
		want := make([]float64, n)
		for degree := n; degree >= 1; degree-- {
			g := new(big.Rat).Quo(upper[degree], lower[degree-1])
			rest := map[int]*big.Rat{}
			for k, u := range upper {
				if l := lower[k-1]; k < degree {
					rest[k] = u
					if l != nil {
						rest[k] = new(big.Rat).Sub(u, new(big.Rat).Mul(g, l))
					}
				}
			}
			upper, lower = lower, rest
			want[degree-1], _ = g.Float64()
		}
		for i, g := range prototype(t, align.Spec{Shape: align.Bessel, Order: n, Reference: align.Delay}) {
			if e := relative(g, want[i]); !(e < 1e-13) {
				t.Errorf("order %d: g%d is %v, want %v: off by %.2g of itself", n, i+1, g, want[i], e)
			}
		}
	}
}

// Resistive loads that add up: the input impedance of a low-pass and a high-pass side by side, every driver of that
// resistance, derived from Re(Yin) = (|L|² + |H|²)/R. Butterworth pairs of one order are a constant
// resistance; Linkwitz-Riley pairs rise to twice the load at the crossover.
func TestPairsAsALoad(t *testing.T) {
	const f, load = 1000, 8
	pair := func(spec align.Spec, at float64) complex128 {
		low, err := LowPass(must(t, spec), f, load)
		if err != nil {
			t.Fatal(err)
		}
		high, err := HighPass(must(t, spec), f, load)
		if err != nil {
			t.Fatal(err)
		}
		_, zl := work(low, load, at)
		_, zh := work(high, load, at)
		return 1 / (1/zl + 1/zh)
	}
	for n := 1; n <= 4; n++ {
		for _, at := range around(f) {
			if z := pair(align.Spec{Order: n}, at); cmplx.Abs(z-load) > 1e-12*load {
				t.Errorf("Butterworth %d shows %v at %g Hz, want %v exactly", n, z, at, load)
			}
		}
	}
	for _, test := range []struct {
		order int
		angle float64 // degrees, the most there is; printed to 2 decimals
	}{{2, 19.47}, {4, 20.93}} {
		spec := align.Spec{Shape: align.LinkwitzRiley, Order: test.order}
		if z := pair(spec, f); cmplx.Abs(z-2*load) > 1e-12*load {
			t.Errorf("Linkwitz-Riley %d shows %v at the crossover, want %v", test.order, z, 2*load)
		}
		most := 0.0
		for i := -500; i <= 500; i++ {
			most = max(most, math.Abs(cmplx.Phase(pair(spec, f*math.Pow(10, float64(i)/500)))*180/math.Pi))
		}
		if math.Abs(most-test.angle) > 0.005+1e-3 {
			t.Errorf("Linkwitz-Riley %d turns by up to %.3f°, want %.2f°", test.order, most, test.angle)
		}
	}
}

func TestThreeWayPlain(t *testing.T) {
	a := must(t, align.Spec{Shape: align.LinkwitzRiley, Order: 4})
	low, mid, high, err := ThreeWayPlain(a, 300, 3000, 8)
	if err != nil {
		t.Fatal(err)
	}
	// By its definition: the outer ways are the two-way's, the mid is the two sections in a row.
	wantLow, _ := LowPass(a, 300, 8)
	wantHigh, _ := HighPass(a, 3000, 8)
	first, _ := HighPass(a, 300, 8)
	second, _ := LowPass(a, 3000, 8)
	if fmt.Sprint(low, mid, high) != fmt.Sprint(wantLow, append(first, second...), wantHigh) {
		t.Errorf("got %v, %v, %v", low, mid, high)
	}
	// Far apart the sections do not see each other: the mid is the product of its two alignments at its middle.
	_, mid, _, err = ThreeWayPlain(a, 10, 1e6, 8)
	if err != nil {
		t.Fatal(err)
	}
	if h, _ := work(mid, 8, math.Sqrt(10*1e6)); math.Abs(decibel(h)) > 1e-3 { // the ratio is 1e5: nothing left at √1e5
		t.Errorf("the mid's gain is %v in the middle, want 1", h)
	}
}

func TestCrossoverRefuses(t *testing.T) {
	a := must(t, align.Spec{Order: 2})
	for _, test := range []struct {
		name string
		call func() (Network, error)
		want string
	}{
		{"negative load", func() (Network, error) { return LowPass(a, 2000, -8) }, "low-pass: load is -8 Ω; give a positive number"},
		{"zero frequency", func() (Network, error) { return LowPass(a, 0, 8) }, "low-pass: frequency is 0 Hz; give a positive number"},
		{"NaN frequency", func() (Network, error) { return HighPass(a, math.NaN(), 8) }, "high-pass: frequency is NaN Hz; give a positive number"},
		{"infinite load", func() (Network, error) { return HighPass(a, 2000, math.Inf(1)) }, "high-pass: load is +Inf Ω; give a positive number"},
		{"absurd load", func() (Network, error) { return HighPass(a, 2000, 1e200) }, "high-pass: load is 1e+200 Ω; give a number from 1e-30 to 1e+30"},
		{"swapped", func() (Network, error) { n, _, _, err := ThreeWayPlain(a, 3000, 300, 8); return n, err },
			"three-way: the upper frequency, 300 Hz, is not above the lower, 3000 Hz; swap them or move them apart"},
		{"no frequency", func() (Network, error) { n, _, _, err := ThreeWayPlain(a, 0, 300, 8); return n, err },
			"three-way: lower frequency is 0 Hz; give a positive number"},
	} {
		n, err := test.call()
		if n != nil || err == nil || err.Error() != test.want {
			t.Errorf("%s: error is %v, want %s", test.name, err, test.want)
		}
	}
}

// The values are those of TestTwoWayTable: L = 0.30011·8/2200 and so on.
func ExampleLowPass() {
	a, err := align.New(align.Spec{Shape: align.LinkwitzRiley, Order: 4})
	if err != nil {
		fmt.Println(err)
		return
	}
	network, err := LowPass(a, 2200, 8)
	if err != nil {
		fmt.Println(err)
		return
	}
	steps, parts := network.Steps(new(Namer))
	for i, step := range steps {
		fmt.Printf("%s  %s = %.3g\n", step, parts[i].Name, parts[i].Value)
	}
	// Output:
	// series L1  L1 = 0.00109
	// shunt C1  C1 = 1.44e-05
	// series L2  L2 = 0.000546
	// shunt C2  C2 = 3.2e-06
}
