package chart

import (
	"math"
	"math/cmplx"
	"strings"
	"testing"

	"sixdown/sim"
)

// TestNull: two ways that are equally loud at their crossing, and φ apart in phase, sum to 2·cos(φ/2) of one and, one
// reversed, to 2·sin(φ/2), so the reversed sum is lower by 20·lg tan(φ/2): derived by hand. The null lies at the
// crossing, where a fourth-order pair is symmetrical.
func TestNull(t *testing.T) {
	for _, phi := range []float64{10, 30, 60, 85} {
		s := twoWay(t, grid(700), phi)
		reversed, names, first := s.reversed(0)
		if len(names) != 1 || names[0] != "high" || first != 1 {
			t.Fatalf("%q are reversed", names)
		}
		at, depth := deepest(s.Response.Freqs, reversed, s.Response.Sum, 2000)
		want := 20 * math.Log10(math.Tan(phi/2*math.Pi/180))
		// The ratio is taken straight over steps of 1 %, over which it bends by some 1e-3 of itself.
		if math.Abs(depth-want) > 0.01*math.Abs(want)+0.02 || math.Abs(at/2000-1) > 0.005 {
			t.Errorf("%g° apart: a null of %.3f dB at %.1f Hz, want %.3f at 2000", phi, depth, at, want)
		}
	}
	s := twoWay(t, grid(700), 0)
	reversed, _, _ := s.reversed(0)
	// In step the null has no bottom; between the points of the grid it still reaches far down.
	if _, depth := deepest(s.Response.Freqs, reversed, s.Response.Sum, 2000); depth > -80 {
		t.Errorf("in step the null is %.1f dB deep", depth)
	}
}

// TestReversed: at the lower crossing of a three-way the low way is reversed, at the upper the high way.
func TestReversed(t *testing.T) {
	s := threeWay(t, grid(100))
	for k, want := range []string{"low", "high"} {
		sum, names, _ := s.reversed(k)
		if strings.Join(names, " ") != want {
			t.Errorf("at crossing %d %q is reversed, want %s", k, names, want)
		}
		for i := range sum {
			way := s.Response.Ways[2*k].P[i]
			if d := s.Response.Sum[i] - 2*way - sum[i]; cmplx.Abs(d) > 1e-14 {
				t.Fatalf("at crossing %d the reversed sum is off by %g", k, cmplx.Abs(d))
			}
		}
	}
}

// stepOf returns the step response of a formula.
func stepOf(t *testing.T, h func(s complex128) complex128) *Step {
	t.Helper()
	r := &sim.Response{Freqs: StepFrequencies(), Ways: []sim.WayResponse{{Name: "out"}}}
	for _, f := range r.Freqs {
		r.Ways[0].H = append(r.Ways[0].H, h(complex(0, 2*math.Pi*f)))
	}
	step, err := StepOf(r, 0)
	if err != nil {
		t.Fatal(err)
	}
	return step
}

// TestStep compares with the inverse Laplace transforms of H(s)/s, from any table of them (M. Abramowitz and I. A.
// Stegun, "Handbook of Mathematical Functions", 1964, chapter 29), 0.1 ms and more from the edge, which the Gaussian
// of 20 kHz rounds over some ±30 µs. What the end of the harmonics leaves is A/(2π²·f·t) at a time t from an edge: with
// A = 0.029 at f = 64 kHz, 2.3e-4 at 0.1 ms.
func TestStep(t *testing.T) {
	const w = 2 * math.Pi * 200
	a, b := w/math.Sqrt2, w/math.Sqrt2 // a second-order Butterworth's poles are -a ± jb
	for _, c := range []struct {
		name string
		h    func(s complex128) complex128
		step func(t float64) float64
		tol  float64
	}{
		{"wire", func(complex128) complex128 { return 1 }, func(float64) float64 { return 1 }, 3e-4},
		{"delay of 1 ms", func(s complex128) complex128 { return cmplx.Exp(-1e-3 * s) }, func(t float64) float64 {
			if t < 1e-3 {
				return 0
			}
			return 1
		}, 3e-4},
		// The Gaussian's second moment, (0.83/(2π·20 kHz))² or so, times half the curvature of the response, w² or less.
		{"first-order low-pass", func(s complex128) complex128 { return w / (s + w) }, func(t float64) float64 { return 1 - math.Exp(-w*t) }, 1e-4},
		{"second-order high-pass", func(s complex128) complex128 { return s * s / (s*s + math.Sqrt2*w*s + w*w) }, func(t float64) float64 {
			return math.Exp(-a*t) * (math.Cos(b*t) - a/b*math.Sin(b*t))
		}, 3e-4},
	} {
		step := stepOf(t, c.h)
		checked := 0
		for i, at := range step.Seconds {
			want := 0.0
			if at > 0 {
				want = c.step(at)
			}
			if math.Abs(at) < 1e-4 || c.name == "delay of 1 ms" && math.Abs(at-1e-3) < 1e-4 {
				continue
			}
			checked++
			if got := step.Ways[0][i]; math.Abs(got-want) > c.tol {
				t.Fatalf("%s: %g at %g ms, want %g", c.name, got, 1000*at, want)
			}
		}
		if checked < 400 {
			t.Errorf("%s: %d points are checked only", c.name, checked)
		}
	}
	if _, err := StepOf(&sim.Response{Freqs: []float64{1, 2}}, 0); err == nil {
		t.Error("two frequencies are enough")
	}
}

// TestStepOfASum: ways add up to the sum, whose peak is 1.
func TestStepOfASum(t *testing.T) {
	s := threeWay(t, grid(10)).Step
	for i := range s.Sum {
		if d := s.Ways[0][i] + s.Ways[1][i] + s.Ways[2][i] - s.Sum[i]; math.Abs(d) > 1e-12 {
			t.Fatalf("the ways miss the sum by %g", d)
		}
	}
	if peak := max(most(s.Sum), -least(s.Sum)); math.Abs(peak-1) > 1e-12 {
		t.Errorf("the peak is %g", peak)
	}
}

// TestPhasors: the chain of arrows ends where the sum's arrow does, but for an arrow of less than half a unit, which
// is not drawn.
func TestPhasors(t *testing.T) {
	subject := threeWay(t, grid(50))
	for k, p := range Phasors(subject) {
		s := emptyScene(t)
		p.draw(s, rect{10, 10, 340, p.height()})
		var tips []point
		for _, m := range s.marks {
			// The heads are the only triangles; their first corner is the tip.
			if h, ok := m.(shape); ok && len(h.loops[0]) == 3 {
				tips = append(tips, h.loops[0][0])
			}
		}
		if len(tips) < 3 || math.Hypot(tips[0].x-tips[len(tips)-1].x, tips[0].y-tips[len(tips)-1].y) > 0.5 {
			t.Errorf("crossing %d: the tips are at %v; the first, the sum's, and the last must meet", k, tips)
		}
	}
}

// TestPolarMapRefusals: maps that are no grid.
func TestPolarMapRefusals(t *testing.T) {
	for name, m := range map[string]*PolarMap{
		"nothing":           {},
		"a row is missing":  {Freqs: []float64{1, 2}, AngleDeg: []float64{0, 10}, LevelDB: [][]float64{{0, 0}}},
		"a row is short":    {Freqs: []float64{1, 2}, AngleDeg: []float64{0, 10}, LevelDB: [][]float64{{0, 0}, {0}}},
		"angles fall":       {Freqs: []float64{1, 2}, AngleDeg: []float64{10, 0}, LevelDB: [][]float64{{0, 0}, {0, 0}}},
		"frequency of zero": {Freqs: []float64{0, 2}, AngleDeg: []float64{0, 10}, LevelDB: [][]float64{{0, 0}, {0, 0}}},
	} {
		if _, err := Polar(m); err == nil {
			t.Errorf("%s: a map is drawn", name)
		}
		if _, err := PolarCurves(m, nil); err == nil {
			t.Errorf("%s: curves are drawn", name)
		}
	}
}

// TestGainsAlone: a design without a sum at the ear, and a tone network, are drawn by their gains.
func TestGainsAlone(t *testing.T) {
	r := &sim.Response{Freqs: grid(100), Ways: []sim.WayResponse{{Name: "out"}}}
	for _, f := range r.Freqs {
		r.Ways[0].H = append(r.Ways[0].H, lr4(f, 1000, false))
		r.Zin = append(r.Zin, complex(8, 0))
	}
	s := &Subject{Response: r}
	p := Response([]*Subject{s}, "gain").(*plotPanel)
	if len(p.series) != 1 || p.series[0].pen.ink != total || p.y.hi < 0 || p.y.hi > 10 {
		t.Errorf("a gain of 1 is drawn as %d curves below %g dB", len(p.series), p.y.hi)
	}
	// -6.02 dB at the crossover frequency, of a Linkwitz-Riley alignment.
	if got := interpolated(r.Freqs, p.series[0].y, 1000); math.Abs(got+6.0206) > 0.01 {
		t.Errorf("at 1 kHz it is %g dB", got)
	}
}

func BenchmarkSVG(b *testing.B) {
	p := pageOf(b, threeWay(b, grid(960)))
	b.ReportAllocs()
	for b.Loop() {
		svgOf(b, p, Auto, 0)
	}
}
