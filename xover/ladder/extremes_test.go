package ladder

import (
	"math"
	"testing"

	"sixdown/xover/align"
)

// At the limits of what is taken, every value is still a positive finite number: no formula overflows.
func TestExtremesStayFinite(t *testing.T) {
	inspect := func(name string, n Network, err error) {
		t.Helper()
		if err != nil {
			t.Errorf("%s: %v", name, err)
		}
		_, parts := n.Steps(new(Namer))
		for _, p := range parts {
			if !(p.Value > 0) || math.IsInf(p.Value, 1) {
				t.Errorf("%s: %s is %v", name, p.Name, p.Value)
			}
		}
	}
	ends := []float64{least, 1, greatest}
	alignments := every(t)
	for _, x := range ends {
		for _, y := range ends {
			for _, a := range alignments {
				n, err := LowPass(a, x, y)
				inspect("low-pass", n, err)
				n, err = HighPass(a, x, y)
				inspect("high-pass", n, err)
			}
			n, err := VoiceCoil(x, y)
			inspect("voice coil", n, err)
			for _, db := range []float64{MinAttenuationDB, MaxAttenuationDB} {
				p, err := LPad(x, db)
				inspect("pad", p.Network(), err)
				n, err = BaffleStep(x, y, db)
				inspect("baffle step", n, err)
				for _, z := range ends {
					n, err = Trap(x, y, z, db)
					inspect("trap", n, err)
				}
			}
			for _, qms := range ends {
				for _, qes := range ends {
					n, err = Resonance(x, y, qms, qes)
					inspect("resonance", n, err)
					for _, le := range ends {
						n, err = Dual(x, le, y, qms, qes)
						inspect("dual", n, err)
					}
				}
			}
		}
		for _, kind := range threeWays {
			w, err := ThreeWayAllPass(kind.order, kind.reversed, least, greatest, x)
			if err != nil {
				t.Errorf("three-way %+v: %v", kind, err)
				continue
			}
			inspect("three-way, low", w.Low, nil)
			inspect("three-way, mid", w.Mid, nil)
			inspect("three-way, high", w.High, nil)
			if math.IsNaN(w.MidExcessDB) || math.IsInf(w.MidExcessDB, 0) {
				t.Errorf("three-way %+v: excess is %v dB", kind, w.MidExcessDB)
			}
		}
	}
	// A Chebyshev of the least ripple has the widest spread of poles.
	for n := 1; n <= align.MaxOrder; n++ {
		a := must(t, align.Spec{Shape: align.Chebyshev, Order: n, RippleDB: align.MinRippleDB})
		network, err := LowPass(a, 1000, 8)
		inspect("least ripple", network, err)
	}
}
