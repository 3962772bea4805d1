package align

import (
	"fmt"
	"math"
	"math/big"
	"math/cmplx"
	"testing"
)

// every returns each alignment that New makes, Chebyshevs with two ripples.
func every(t testing.TB) []*Alignment {
	var all []*Alignment
	add := func(spec Spec) { all = append(all, must(t, spec)) }
	for n := 1; n <= MaxOrder; n++ {
		add(Spec{Shape: Butterworth, Order: n})
		if n%2 == 0 {
			add(Spec{Shape: LinkwitzRiley, Order: n})
		}
		for _, ref := range []Reference{Magnitude, Phase, Delay} {
			add(Spec{Shape: Bessel, Order: n, Reference: ref})
		}
		for _, ripple := range []float64{0.1, 3} {
			add(Spec{Shape: Chebyshev, Order: n, RippleDB: ripple})
		}
	}
	return all
}

func must(t testing.TB, spec Spec) *Alignment {
	t.Helper()
	a, err := New(spec)
	if err != nil {
		t.Fatal(err)
	}
	return a
}

// grid returns frequencies from 1/100 to 100 times the crossover's, 40 a decade, the crossover's own included.
func grid() []float64 {
	var w []float64
	for i := -80; i <= 80; i++ {
		w = append(w, math.Pow(10, float64(i)/40))
	}
	return w
}

func relative(got, want float64) float64 { return math.Abs(got-want) / math.Abs(want) }

func decibel(h complex128) float64 { return 20 * math.Log10(cmplx.Abs(h)) }

// The magnitudes that define the shapes: Butterworth 1930, Linkwitz 1976 (its square), and Chebyshev's
// polynomial (L. Weinberg, Network Analysis and Synthesis, 1962, from memory). Exact, so the tolerance is
// the rounding of eight factors and of the formula itself.
func TestMagnitudeOfDefinition(t *testing.T) {
	for _, a := range every(t) {
		spec := a.Spec()
		n := float64(spec.Order)
		var want func(w float64) float64
		rel := 1e-14
		switch spec.Shape {
		case Butterworth:
			want = func(w float64) float64 { return 1 / math.Sqrt(1+math.Pow(w, 2*n)) }
		case LinkwitzRiley:
			want = func(w float64) float64 { return 1 / (1 + math.Pow(w, n)) }
		case Chebyshev:
			square := math.Pow(10, spec.RippleDB/10) - 1
			top := 1.0
			if spec.Order%2 == 0 {
				top += square // the gain at DC is at the bottom of the ripple, and it is 1
			}
			want = func(w float64) float64 {
				var c float64
				if w <= 1 {
					c = math.Cos(n * math.Acos(w))
				} else {
					c = math.Cosh(n * math.Acosh(w))
				}
				return math.Sqrt(top / (1 + square*c*c))
			}
			rel = 5e-14 // the cancellation in the formula: n·acosh(100) is 42, and its error goes into the exponent
		default:
			continue
		}
		for _, w := range grid() {
			if e := relative(cmplx.Abs(a.LowPass(complex(0, w))), want(w)); !(e < rel) {
				t.Errorf("%+v low-pass at %g is off by %.2g of itself", spec, w, e)
			}
			if e := relative(cmplx.Abs(a.HighPass(complex(0, 1/w))), want(w)); !(e < rel) {
				t.Errorf("%+v high-pass at %g is off by %.2g of itself", spec, 1/w, e)
			}
		}
	}
}

// Reverse Bessel polynomials, highest power first: H. L. Krall and O. Frink, "A New Class of Orthogonal Polynomials:
// The Bessel Polynomials", Trans. AMS 65, 1949 (from memory).
var krallFrink = [][]int64{
	1: {1, 1},
	2: {1, 3, 3},
	3: {1, 6, 15, 15},
	4: {1, 10, 45, 105, 105},
	5: {1, 15, 105, 420, 945, 945},
	6: {1, 21, 210, 1260, 4725, 10395, 10395},
	7: {1, 28, 378, 3150, 17325, 62370, 135135, 135135},
	8: {1, 36, 630, 6930, 51975, 270270, 945945, 2027025, 2027025},
}

// besselExactly returns θ_n(0)/θ_n(s), worked in rational numbers and rounded once.
func besselExactly(n int, s complex128) complex128 {
	x, y := new(big.Rat).SetFloat64(real(s)), new(big.Rat).SetFloat64(imag(s))
	re, im := new(big.Rat), new(big.Rat)
	product := func(a, b *big.Rat) *big.Rat { return new(big.Rat).Mul(a, b) }
	for _, c := range krallFrink[n] {
		re, im = new(big.Rat).Sub(product(re, x), product(im, y)), new(big.Rat).Add(product(re, y), product(im, x))
		re.Add(re, new(big.Rat).SetInt64(c))
	}
	square := new(big.Rat).Add(product(re, re), product(im, im))
	scale := new(big.Rat).Quo(new(big.Rat).SetInt64(krallFrink[n][n]), square)
	r, _ := product(re, scale).Float64()
	i, _ := product(im, scale).Float64()
	return complex(r, -i)
}

// Phase included. The tolerance is rounding: twelve operations a pair, four pairs.
func TestBesselExactly(t *testing.T) {
	for n := 1; n <= MaxOrder; n++ {
		a := must(t, Spec{Shape: Bessel, Order: n, Reference: Delay})
		for _, w := range grid() {
			s := complex(0, w)
			if e := cmplx.Abs(a.LowPass(s)/besselExactly(n, s) - 1); !(e < 1e-14) {
				t.Errorf("order %d at %g is off by %.2g of itself", n, w, e)
			}
		}
		for i, c := range a.Denominator() {
			want := float64(krallFrink[n][n-i]) / float64(krallFrink[n][n])
			if e := relative(c, want); !(e < 1e-14) {
				t.Errorf("order %d: coefficient %d is %v, want %v", n, i, c, want)
			}
		}
	}
}

// The group delay of a Bessel of unit delay is 1 - ω^2n/|θ_n(jω)|²: L. Storch, Proc. IRE 42, 1954 (from memory; for n = 1
// and 2 it is checked by hand in a line). The tolerance is that of the difference quotient.
func TestBesselDelay(t *testing.T) {
	for n := 1; n <= MaxOrder; n++ {
		a := must(t, Spec{Shape: Bessel, Order: n, Reference: Delay})
		for _, w := range []float64{0.01, 0.3, 1, 2, 3.5, 5, 9} {
			h := cmplx.Abs(a.LowPass(complex(0, w))) / float64(krallFrink[n][n])
			want := 1 - math.Pow(w, 2*float64(n))*h*h
			if got := groupDelay(a.LowPass, w); math.Abs(got-want) > 1e-8 {
				t.Errorf("order %d at %g: delay %v, want %v", n, w, got, want)
			}
		}
	}
}

// groupDelay returns -d(arg H)/dω at jω, in units of 1/ω: for a response that is analytic it is -Re(H'/H), taken here
// by a central difference of fourth order.
func groupDelay(h func(complex128) complex128, w float64) float64 {
	const d = 1e-3
	at := func(k float64) complex128 { return h(complex(0, w*(1+k*d))) }
	slope := (8*(at(1)-at(-1)) - (at(2) - at(-2))) / complex(0, 12*d*w)
	return -real(slope / at(0))
}

// Derived by bisection on the exact polynomial; the first six agree with S. Winder, Analog and Digital Filter
// Design, Table 2.1, to its figures save for order 4, which is printed 2.13. Tolerance: half a unit of the last figure.
func TestBesselHalfPower(t *testing.T) {
	for i, want := range []float64{1.000000, 1.361654, 1.755672, 2.113918, 2.427411, 2.703395, 2.951722, 3.179617} {
		byDelay := must(t, Spec{Shape: Bessel, Order: i + 1, Reference: Delay})
		byMagnitude := must(t, Spec{Shape: Bessel, Order: i + 1})
		// A frequency unit of the second is so many of the first.
		got := real(byDelay.Poles()[0]) / real(byMagnitude.Poles()[0])
		if math.Abs(got-want) > 0.5e-6 {
			t.Errorf("order %d: half power at %.7f of the delay's frequency, want %.6f", i+1, got, want)
		}
		if e := relative(cmplx.Abs(byMagnitude.LowPass(1i)), math.Sqrt(0.5)); !(e < 4e-15) {
			t.Errorf("order %d: the gain at its frequency is off half power by %.2g", i+1, e)
		}
	}
}

// The n-th root of the constant term, derived. Tolerance: half a unit of the last figure.
func TestBesselAsymptote(t *testing.T) {
	for i, want := range []float64{1, 1.732051, 2.466212, 3.201086, 3.936283, 4.671655} {
		byDelay := must(t, Spec{Shape: Bessel, Order: i + 1, Reference: Delay})
		byPhase := must(t, Spec{Shape: Bessel, Order: i + 1, Reference: Phase})
		got := real(byDelay.Poles()[0]) / real(byPhase.Poles()[0])
		if math.Abs(got-want) > 0.5e-6 {
			t.Errorf("order %d: asymptotes cross at %.7f of the delay's frequency, want %.6f", i+1, got, want)
		}
		if d := byPhase.Denominator(); relative(d[i+1], 1) > 1e-14 {
			t.Errorf("order %d: leading coefficient %v, want that of a Butterworth, 1", i+1, d[i+1])
		}
	}
}

// Poles, polynomial and responses are three faces of one thing. The polynomial cancels near its zeros, hence
// the wider tolerance: order 8, ripple 3 dB has Q about 30.
func TestFacesAgree(t *testing.T) {
	for _, a := range every(t) {
		d := a.Denominator()
		if len(d) != a.Spec().Order+1 || d[0] != 1 {
			t.Errorf("%+v: denominator %v", a.Spec(), d)
		}
		if n := len(a.Poles()); n != a.Spec().Order {
			t.Errorf("%+v: %d poles", a.Spec(), n)
		}
		for _, p := range a.Poles() {
			if !(real(p) < 0) {
				t.Errorf("%+v: pole %v is not in the left half plane", a.Spec(), p)
			}
		}
		for _, s := range []complex128{1i, 0.3i, 4i, 0.7, 2 + 3i, -0.01 - 0.5i} {
			var v complex128
			for i := len(d) - 1; i >= 0; i-- {
				v = v*s + complex(d[i], 0)
			}
			h := complex(1, 0)
			for _, p := range a.Poles() {
				h *= p / (p - s)
			}
			if e := cmplx.Abs(a.LowPass(s)*v - 1); e > 1e-12 {
				t.Errorf("%+v at %v: response and polynomial differ by %.2g", a.Spec(), s, e)
			}
			if e := cmplx.Abs(a.LowPass(s)/h - 1); e > 1e-14 {
				t.Errorf("%+v at %v: response and poles differ by %.2g", a.Spec(), s, e)
			}
			if e := cmplx.Abs(a.HighPass(1/s)/h - 1); e > 1e-13 { // the rounding of 1/s, by a Q of 30
				t.Errorf("%+v at %v: high-pass is no mirror image, by %.2g", a.Spec(), s, e)
			}
		}
		if low, high := a.LowPass(0), a.HighPass(0); low != 1 || high != 0 {
			t.Errorf("%+v: gains at DC are %v and %v, want exactly 1 and 0", a.Spec(), low, high)
		}
	}
}

func TestChebyshevRipple(t *testing.T) {
	for _, ripple := range []float64{MinRippleDB, 0.1, 0.5, 1, 3, MaxRippleDB} {
		for n := 1; n <= MaxOrder; n++ {
			a := must(t, Spec{Shape: Chebyshev, Order: n, RippleDB: ripple})
			least, most := math.Inf(1), math.Inf(-1)
			for i := range 20001 {
				db := decibel(a.LowPass(complex(0, float64(i)/20000)))
				least, most = min(least, db), max(most, db)
			}
			wantLeast, wantMost := -ripple, 0.0
			if n%2 == 0 {
				wantLeast, wantMost = 0, ripple
			}
			// The grid misses an extreme by at most half a step: the response is flat there to 1e-6 dB.
			if math.Abs(least-wantLeast) > 1e-6 || math.Abs(most-wantMost) > 1e-6 {
				t.Errorf("%g dB, order %d: the pass band spans %.7f to %.7f dB, want %g to %g", ripple, n, least, most, wantLeast, wantMost)
			}
			if edge := decibel(a.LowPass(1i)); math.Abs(edge-wantLeast) > 1e-12 {
				t.Errorf("%g dB, order %d: the edge is at %v dB, want %g", ripple, n, edge, wantLeast)
			}
			if beyond := decibel(a.LowPass(1.0001i)); !(beyond < wantLeast) {
				t.Errorf("%g dB, order %d: beyond the edge it is at %v dB", ripple, n, beyond)
			}
		}
	}
}

func TestNewRefuses(t *testing.T) {
	for _, test := range []struct {
		spec Spec
		want string
	}{
		{Spec{}, "butterworth: order is 0; give 1 to 8"},
		{Spec{Order: 9}, "butterworth: order is 9; give 1 to 8"},
		{Spec{Order: -1}, "butterworth: order is -1; give 1 to 8"},
		{Spec{Shape: LinkwitzRiley, Order: 3}, "linkwitz-riley: order is 3; give 2, 4, 6 or 8, since it is a square"},
		{Spec{Shape: Chebyshev, Order: 3}, "chebyshev: ripple is 0 dB; give 0.001 to 10 dB"},
		{Spec{Shape: Chebyshev, Order: 3, RippleDB: math.NaN()}, "chebyshev: ripple is NaN dB; give 0.001 to 10 dB"},
		{Spec{Shape: Chebyshev, Order: 3, RippleDB: math.Inf(1)}, "chebyshev: ripple is +Inf dB; give 0.001 to 10 dB"},
		{Spec{Order: 3, RippleDB: 1}, "butterworth: ripple is 1 dB; leave it out, only a chebyshev has one"},
		{Spec{Order: 3, RippleDB: math.NaN()}, "butterworth: ripple is NaN dB; leave it out, only a chebyshev has one"},
		{Spec{Order: 3, Reference: Delay}, "butterworth: reference is delay; leave it out, only a bessel has one"},
		{Spec{Shape: Bessel, Order: 3, Reference: 9}, "bessel: Reference(9) is no reference; give magnitude, phase or delay"},
		{Spec{Shape: 9, Order: 3}, "alignment: Shape(9) is no shape; give butterworth, linkwitz-riley, bessel or chebyshev"},
	} {
		a, err := New(test.spec)
		if a != nil || err == nil || err.Error() != test.want {
			t.Errorf("%+v: error is %v, want %s", test.spec, err, test.want)
		}
	}
}

func TestNames(t *testing.T) {
	for _, s := range []Shape{Butterworth, LinkwitzRiley, Bessel, Chebyshev} {
		if got, err := ParseShape(s.String()); err != nil || got != s {
			t.Errorf("%v parses as %v, %v", s, got, err)
		}
	}
	for _, r := range []Reference{Magnitude, Phase, Delay} {
		if got, err := ParseReference(r.String()); err != nil || got != r {
			t.Errorf("%v parses as %v, %v", r, got, err)
		}
	}
	_, err := ParseShape("Linkwitz")
	if want := `shape: "Linkwitz" is not one; give butterworth, linkwitz-riley, bessel or chebyshev`; err == nil || err.Error() != want {
		t.Errorf("error is %v, want %s", err, want)
	}
	_, err = ParseReference("")
	if want := `reference: "" is not one; give magnitude, phase or delay`; err == nil || err.Error() != want {
		t.Errorf("error is %v, want %s", err, want)
	}
}

func TestResponsesAllocateNothing(t *testing.T) {
	a := must(t, Spec{Shape: Bessel, Order: 7})
	var h complex128
	if n := testing.AllocsPerRun(100, func() { h += a.LowPass(2i) + a.HighPass(2i) }); n != 0 {
		t.Errorf("%v allocations a call, want none", n)
	}
}

func ExampleNew() {
	a, err := New(Spec{Shape: LinkwitzRiley, Order: 4})
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, octave := range []float64{0.5, 1, 2} {
		fmt.Printf("%.1f fc: %.2f dB\n", octave, 20*math.Log10(cmplx.Abs(a.LowPass(complex(0, octave)))))
	}
	// Output:
	// 0.5 fc: -0.53 dB
	// 1.0 fc: -6.02 dB
	// 2.0 fc: -24.61 dB
}

func ExampleAlignment_Denominator() {
	a, err := New(Spec{Shape: Butterworth, Order: 3})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%.3f\n", a.Denominator()) // 1 + 2s + 2s² + s³
	// Output: [1.000 2.000 2.000 1.000]
}
