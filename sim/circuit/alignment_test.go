package circuit_test

import (
	"fmt"
	"math"
	"math/cmplx"
	"testing"

	"sixdown/sim/circuit"
)

// TestLaddersAgainstScipy builds the ladder of each alignment from scipy's own polynomial and compares its simulated
// gain with scipy.signal.freqs: poles and polynomials on one side, coils and capacitors on the other.
func TestLaddersAgainstScipy(t *testing.T) {
	const fc, load = 2000.0, 8.0 // Hz, Ω
	freqs := logSpaced(20, 20e3, 60)
	var request jsonRequest
	for _, highPass := range []bool{false, true} {
		for order := 1; order <= 8; order++ {
			for _, a := range []jsonAlignment{
				{Shape: "butterworth"},
				{Shape: "linkwitz-riley"},
				{Shape: "bessel", Norm: "phase"},
				{Shape: "bessel", Norm: "delay"},
				{Shape: "bessel", Norm: "mag"},
				{Shape: "chebyshev", RippleDB: 0.5},
			} {
				if a.Shape == "linkwitz-riley" && order%2 == 1 {
					continue
				}
				a.Order, a.HighPass, a.Hz, a.FrequencyHz = order, highPass, fc, freqs
				request.Alignments = append(request.Alignments, a)
			}
		}
	}
	reply := askReference(t, request)
	worst := 0.0
	for i, a := range request.Alignments {
		want := &reply.Alignments[i]
		name := fmt.Sprintf("%s %d %s, high-pass %t", a.Shape, a.Order, a.Norm, a.HighPass)
		n := singlyTerminated(want.Denominator, a.HighPass, fc, load)
		c, err := circuit.Compile(n, []circuit.Output{{From: n.Nodes - 1, To: circuit.Return}})
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		s, err := c.NewSweep(freqs)
		if err != nil {
			t.Fatal(err)
		}
		if err := s.Solve(); err != nil {
			t.Fatal(err)
		}
		got := make([]complex128, len(freqs))
		s.Gain(got, 0)
		for f := range freqs {
			for _, h := range []complex128{want.Gain[f].value(), want.GainByPolynomial[f].value()} {
				// The polynomial's coefficients are rounded once and its continued fraction magnifies that: up to 1e3 at
				// order 8 (Linkwitz-Riley has its poles in coincident pairs).
				e := cmplx.Abs(got[f]-h) / cmplx.Abs(h)
				worst = max(worst, e)
				if !(e <= 1e-12) {
					t.Errorf("%s at %.4g Hz: gain %v, scipy %v: relative error %.1e", name, freqs[f], got[f], h, e)
				}
			}
		}
	}
	t.Logf("%d alignments, worst relative error %.1e", len(request.Alignments), worst)
}

// singlyTerminated is the LC ladder from an ideal voltage source into load (Ω) whose gain is 1/P(s/2πfc), or
// 1/P(2πfc/s) for a high-pass. p holds P, highest power first, 1 at the end.
//
// P is the sum of its even part A and its odd part B, and A/B is the admittance that the load looks back into with the
// source shorted. Its continued fraction is the ladder, from the load (W. Cauer, "Die Verwirklichung von
// Wechselstromwiderständen vorgeschriebener Frequenzabhängigkeit", Archiv für Elektrotechnik 17, 1926, 355-388).
func singlyTerminated(p []float64, highPass bool, fc, load float64) *circuit.Netlist {
	order := len(p) - 1
	split := func(parity int) []float64 { // the coefficients of one parity, highest power first
		var c []float64
		for i := parity; i <= order; i += 2 {
			c = append(c, p[i])
		}
		return c
	}
	high, low := split(0), split(1)
	var g []float64 // of order elements, load first
	for range order {
		q := high[0] / low[0]
		g = append(g, q)
		rest := make([]float64, 0, len(high))
		for i := 1; i < len(high); i++ {
			x := high[i]
			if i < len(low) {
				x -= q * low[i]
			}
			rest = append(rest, x)
		}
		high, low = low, rest
	}
	n := &circuit.Netlist{Nodes: 2}
	hot := circuit.Amp
	w := 2 * math.Pi * fc
	for k := range order {
		q := g[order-1-k]
		b := circuit.Branch{Name: fmt.Sprintf("g%d", k+1), From: hot}
		if k%2 == 0 { // a series arm comes first at the source
			b.To = n.Nodes
			n.Nodes++
			hot = b.To
		}
		if (k%2 == 0) != highPass {
			b.Kind = circuit.Inductor
			b.Value = load * q / w
			if highPass {
				b.Value = load / (q * w)
			}
		} else {
			b.Kind = circuit.Capacitor
			b.Value = q / (load * w)
			if highPass {
				b.Value = 1 / (q * load * w)
			}
		}
		n.Branches = append(n.Branches, b)
	}
	n.Branches = append(n.Branches, circuit.Branch{Name: "load", Kind: circuit.Resistor, From: hot, Value: load})
	return n
}
