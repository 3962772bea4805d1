package driver

import (
	"fmt"
	"math"
	"math/cmplx"
	"math/rand/v2"
	"strings"
	"testing"
)

// A coil, a semi-inductance K·s^0.6 and one resonance: drivers by their formula, with noise, over the bands in which they are
// measured, raise no question; the same with other columns in place of ohms and degrees do.
func TestPhasesBelong(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	for name, d := range map[string]struct{ re, le, k, res, fs, q float64 }{
		"woofer":                  {6, 0.5e-3, 0, 30, 40, 3},
		"subwoofer":               {3.5, 2e-3, 0, 80, 22, 6},
		"tweeter":                 {5, 0.03e-3, 0, 10, 800, 2},
		"tweeter with ferrofluid": {5, 0.02e-3, 0, 2, 900, 0.7},
		"ribbon":                  {6, 5e-6, 0, 0.01, 40, 3},
		"half an inductance":      {6, 0, 0.02, 40, 40, 4},
	} {
		z := func(f float64) complex128 {
			s, n := complex(0, 2*math.Pi*f), complex(0, f/d.fs)
			return complex(d.re, 0) + complex(d.le, 0)*s + complex(d.k, 0)*cmplx.Pow(s, 0.6) + complex(d.res/d.q, 0)*n/(n*n+n/complex(d.q, 0)+1)
		}
		for _, band := range [][2]float64{{10, 20e3}, {20, 20e3}, {20, 500}, {100, 20e3}, {300, 3000}, {800, 20e3}} {
			for _, perOctave := range []float64{6, 24, 96} {
				for _, noise := range []float64{0, 0.02} {
					var b strings.Builder
					for _, f := range grid(band[0], band[1], int(perOctave*math.Log2(band[1]/band[0]))) {
						v := z(f) * cmplx.Rect(1+noise*rng.NormFloat64(), noise*rng.NormFloat64())
						fmt.Fprintf(&b, "%.6g %.6g %.6g\n", f, cmplx.Abs(v), cmplx.Phase(v)*180/math.Pi)
					}
					if n := mustTable(t, b.String()).strangers(); n != nil {
						t.Errorf("%s, %g to %g Hz, %g an octave, noise %g: %q", name, band[0], band[1], perOctave, noise, n)
					}
				}
			}
		}
		if name != "woofer" {
			continue
		}
		for what, row := range map[string]func(f float64, v complex128) (a, b float64){
			"the sign is turned": func(f float64, v complex128) (a, b float64) { return cmplx.Abs(v), -cmplx.Phase(v) * 180 / math.Pi },
			"dB": func(f float64, v complex128) (a, b float64) {
				return 20 * math.Log10(cmplx.Abs(v)), cmplx.Phase(v) * 180 / math.Pi
			},
			"Hz twice": func(f float64, v complex128) (a, b float64) { return f, cmplx.Abs(v) },
		} {
			var b strings.Builder
			for _, f := range grid(20, 20e3, 240) {
				x, y := row(f, z(f))
				fmt.Fprintf(&b, "%.6g %.6g %.6g\n", f, x, y)
			}
			n := mustTable(t, b.String()).strangers()
			if len(n) != 1 || strings.Contains(n[0], "sign") != (what == "the sign is turned") {
				t.Errorf("%s: %q", what, n)
			}
		}
	}
}
