package circuit

import (
	"math"
	"math/rand/v2"
	"testing"
)

// The fast kernels must give the digits of the plain ones, whatever goes in: the two are the same operations in
// the same order, and this processor rounds each of them alike.
func TestFastKernels(t *testing.T) {
	if !vectors {
		t.Log("this processor has no fast kernels; the plain ones are in use")
		return
	}
	r := rand.New(rand.NewPCG(8, 1))
	number := func() float64 {
		switch r.IntN(12) {
		case 0:
			return 0
		case 1:
			return math.Copysign(0, -1)
		case 2:
			return math.Inf(1)
		}
		return r.NormFloat64() * math.Pow(10, 20*r.Float64()-10)
	}
	random := func() *cvec {
		var x cvec
		for i := range lanes {
			x.re[i], x.im[i] = number(), number()
		}
		return &x
	}
	for range 2000 {
		a, b, c := random(), random(), random()
		x, y, z := number(), number(), number()
		for _, k := range []struct {
			name        string
			fast, plain func(p, q *cvec, s *[lanes]complex128)
		}{
			{"tank", func(p, _ *cvec, _ *[lanes]complex128) { fastTank(p, &a.re, &a.im, x, y, z) },
				func(p, _ *cvec, _ *[lanes]complex128) { plainTank(p, &a.re, &a.im, x, y, z) }},
			{"chain", func(p, _ *cvec, _ *[lanes]complex128) { fastChain(p, &a.re, &a.im, x, y, z) },
				func(p, _ *cvec, _ *[lanes]complex128) { plainChain(p, &a.re, &a.im, x, y, z) }},
			{"add", func(p, _ *cvec, _ *[lanes]complex128) { fastAdd(p, a, b) }, func(p, _ *cvec, _ *[lanes]complex128) { plainAdd(p, a, b) }},
			{"sub", func(p, _ *cvec, _ *[lanes]complex128) { fastSub(p, a, b) }, func(p, _ *cvec, _ *[lanes]complex128) { plainSub(p, a, b) }},
			{"mul", func(p, _ *cvec, _ *[lanes]complex128) { fastMul(p, a, b) }, func(p, _ *cvec, _ *[lanes]complex128) { plainMul(p, a, b) }},
			{"mulNeg", func(p, _ *cvec, _ *[lanes]complex128) { fastMulNeg(p, a, b) }, func(p, _ *cvec, _ *[lanes]complex128) { plainMulNeg(p, a, b) }},
			{"mulAdd", func(p, _ *cvec, _ *[lanes]complex128) { fastMulAdd(p, c, a, b) }, func(p, _ *cvec, _ *[lanes]complex128) { plainMulAdd(p, c, a, b) }},
			{"mulSub", func(p, _ *cvec, _ *[lanes]complex128) { fastMulSub(p, c, a, b) }, func(p, _ *cvec, _ *[lanes]complex128) { plainMulSub(p, c, a, b) }},
			{"inv", func(p, _ *cvec, _ *[lanes]complex128) { fastInv(p, a) }, func(p, _ *cvec, _ *[lanes]complex128) { plainInv(p, a) }},
			{"share", func(p, _ *cvec, _ *[lanes]complex128) { fastShare(p, a, b) }, func(p, _ *cvec, _ *[lanes]complex128) { plainShare(p, a, b) }},
			{"elim", func(p, q *cvec, _ *[lanes]complex128) { fastElim(p, q, a, b) }, func(p, q *cvec, _ *[lanes]complex128) { plainElim(p, q, a, b) }},
			{"elimAdd", func(p, q *cvec, _ *[lanes]complex128) { fastElimAdd(p, q, c, a, b) },
				func(p, q *cvec, _ *[lanes]complex128) { plainElimAdd(p, q, c, a, b) }},
			{"squareMul", func(p, _ *cvec, _ *[lanes]complex128) { fastSquareMul(p, a, b) }, func(p, _ *cvec, _ *[lanes]complex128) { plainSquareMul(p, a, b) }},
			{"scale", func(p, _ *cvec, _ *[lanes]complex128) { fastScale(p, a, x) }, func(p, _ *cvec, _ *[lanes]complex128) { plainScale(p, a, x) }},
			{"turn", func(p, _ *cvec, _ *[lanes]complex128) { fastTurn(p, a, &b.re, x) }, func(p, _ *cvec, _ *[lanes]complex128) { plainTurn(p, a, &b.re, x) }},
			{"mulStore", func(_, _ *cvec, s *[lanes]complex128) { fastMulStore(s, a, b) }, func(_, _ *cvec, s *[lanes]complex128) { plainMulStore(s, a, b) }},
		} {
			var p, q, pp, qq cvec
			var s, ss [lanes]complex128
			k.fast(&p, &q, &s)
			k.plain(&pp, &qq, &ss)
			for i := range lanes {
				for _, pair := range [][2]float64{
					{p.re[i], pp.re[i]}, {p.im[i], pp.im[i]}, {q.re[i], qq.re[i]}, {q.im[i], qq.im[i]},
					{real(s[i]), real(ss[i])}, {imag(s[i]), imag(ss[i])},
				} {
					if math.Float64bits(pair[0]) != math.Float64bits(pair[1]) && !(math.IsNaN(pair[0]) && math.IsNaN(pair[1])) {
						t.Fatalf("%s, lane %d: fast %g, plain %g", k.name, i, pair[0], pair[1])
					}
				}
			}
		}
	}
}

// A sweep with the plain kernels gives what it gives with the fast ones: this is the code that other
// processors run.
func TestPlainSweep(t *testing.T) {
	had := vectors
	defer func() { vectors = had }()
	n := &Netlist{Nodes: 5, Source: 0.3, Branches: []Branch{
		{Name: "L1", Kind: Inductor, From: Amp, To: 2, Value: 1e-3},
		{Name: "C1", Kind: Capacitor, From: 2, To: Return, Value: 1e-5},
		{Name: "L2", Kind: Inductor, From: 2, To: 3, Value: 1e-3, Loss: 0.1},
		{Name: "R1", Kind: Resistor, From: 3, To: Return, Value: 8},
		{Name: "C2", Kind: Capacitor, From: 3, To: 4, Value: 3e-6, Loss: 1},
		{Name: "L3", Kind: Inductor, From: 4, To: Return, Value: 2e-4, Loss: 0.2},
		{Name: "R2", Kind: Resistor, From: Amp, To: 4, Value: 33},
	}}
	var freqs []float64
	for f := 10.0; f < 40e3; f *= 1.07 {
		freqs = append(freqs, f)
	}
	c, err := Compile(n, []Output{{3, Return}, {2, 4}})
	if err != nil {
		t.Fatal(err)
	}
	answer := func(fast bool) []complex128 {
		vectors = fast && had
		s, err := c.NewSweep(freqs)
		if err != nil {
			t.Fatal(err)
		}
		if err := s.Gradient(); err != nil {
			t.Fatal(err)
		}
		return append(append([]complex128(nil), s.gain...), s.grad...)
	}
	fast, plain := answer(true), answer(false)
	for i := range fast {
		if fast[i] != plain[i] {
			t.Fatalf("number %d of %d: fast %g, plain %g", i, len(fast), fast[i], plain[i])
		}
	}
}
