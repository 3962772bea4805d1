package driver

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
)

// Drivers at random, of every coil, in free air or in a vented box, with up to two ripples, in tables coarse and fine: the
// fit comes down to the noise, sees a box where there is one, and adds no ripple of its own. 60 rows leave the
// rms of the noise uncertain by 9 % (1/√120), of which 2.5 are allowed; 0.1 % more is for what even an exact
// semi-inductance loses to its ladder.
func TestFitOfRandomDrivers(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 5))
	between := func(a, b float64) float64 { return a * math.Pow(b/a, r.Float64()) } // evenly in the logarithm
	for k := range 60 {
		m := &model{coil: PlainCoil + Coil(r.IntN(4)), body: single + body(r.IntN(2)), extras: r.IntN(3)}
		re := between(3, 12)
		le := re / (2 * math.Pi * between(1000, 6000))
		v := []float64{re}
		switch m.coil {
		case PlainCoil:
			v = append(v, le)
		case OneLoss:
			v = append(v, 0.3*le, 2*re, 0.7*le)
		case TwoLosses:
			v = append(v, 0.2*le, 0.5*re, 0.7*le, 2*re, 0.2*le)
		case SemiInductance:
			v = append(v, re*between(0.2, 1), 0.5+0.4*r.Float64())
		}
		ws, q := 2*math.Pi*between(20, 60), between(1.5, 9)
		if m.body == single {
			ws = 2 * math.Pi * between(20, 1200)
		}
		v = append(v, ws, re*q/between(0.25, 1.2), q)
		if m.body == vented {
			v = append(v, ws*between(0.7, 1.4), between(0.4, 5), between(4, 15))
		}
		for range m.extras {
			v = append(v, 2*math.Pi*between(300, 5000), re*between(0.05, 0.3), between(2, 12))
		}
		noise := [...]float64{0, 0.001, 0.005}[r.IntN(3)]
		rows := [...]int{60, 120, 500}[r.IntN(3)]
		d := make([]complex128, len(v))
		f := mustFit(t, noisyFile(grid(10, 20e3, rows), func(f float64) complex128 {
			return m.impedance(v, 2*math.Pi*f, d)
		}, noise, uint64(k)), FitSettings{})
		what := fmt.Sprintf("%d: coil %d, body %d, %d extra, noise %g, %d rows, %.4g", k, m.coil, m.body, m.extras, noise, rows, v)
		if limit := 100*noise*math.Sqrt2*1.23 + 0.1; f.RMSPercent > limit {
			t.Errorf("%s: off by %.3f %%, want %.3f %%", what, f.RMSPercent, limit)
		}
		if (f.Box != nil) != (m.body == vented) || len(f.Extra) > m.extras {
			t.Errorf("%s: box %v, extra %v", what, f.Box, f.Extra)
		}
	}
}
