package chart

import (
	"math"
	"math/cmplx"
	"slices"
	"strings"
	"testing"

	"sixdown/sim"
)

// TestNull: two ways that are equally loud at their crossing, and φ apart in phase, sum to 2·cos(φ/2) of one and, one
// reversed, to 2·sin(φ/2), so the reversed sum is lower by 20·lg tan(φ/2) and the sum as wired by as much if that is
// above 0: derived by hand. A mark is on its curve, at the level that the curve of the formula has there.
func TestNull(t *testing.T) {
	for _, c := range []struct {
		phi  float64
		text string
		note string
		on   string  // the name of the marked curve
		of1  float64 // its pressure at the crossing, relative to one way's
	}{
		{20, "high reversed: −15.1 dB at 2 kHz", "the deeper the null, the better in step", "", 2 * math.Sin(10*math.Pi/180)},
		{60, "high reversed: −4.8 dB at 2 kHz", "the deeper the null, the better in step", "", 1},
		// In quadrature, as odd orders are, both are as loud.
		{89, "high reversed: no null", "the deeper the null, the better in step", "", 2 * math.Sin(44.5*math.Pi/180)},
		{91, "high reversed: no null", "the deeper the null, the better in step", "", 2 * math.Sin(45.5*math.Pi/180)},
		{150, "as wired: −11.4 dB at 2 kHz", "reversed is better", "sum", 2 * math.Cos(75*math.Pi/180)},
		{-150, "as wired: −11.4 dB at 2 kHz", "reversed is better", "sum", 2 * math.Cos(75*math.Pi/180)},
		{180, "as wired: below −60 dB at 2 kHz", "reversed is better", "sum", 0},
	} {
		p := Null(twoWay(t, grid(700), c.phi)).(*plotPanel)
		if len(p.callouts) != 1 || p.callouts[0].text != c.text || p.note != c.note {
			t.Errorf("%g° apart: %+v under %q, want %q under %q", c.phi, p.callouts, p.note, c.text, c.note)
			continue
		}
		mark := p.callouts[0]
		for _, s := range p.series {
			if s.name != c.on {
				continue
			}
			if got := interpolated(s.x, s.y, 2000); mark.x != 2000 || math.Abs(got-mark.y) > 1e-9 {
				t.Errorf("%g° apart: the mark at %g dB, %g Hz is off its curve, which is at %g dB", c.phi, mark.y, mark.x, got)
			}
		}
		// A way of a fourth-order pair is at 1/2 Pa there; 94 dB SPL is 1 Pa re 20 µPa. The grid has no point at
		// 2 kHz, and the reference curve is straight between two: 0.02 dB. 60 dB below the top is as deep as is shown.
		want := max(20*math.Log10(c.of1/2/20e-6), topOf([]float64{20 * math.Log10(1/20e-6)})-nullRange)
		if math.Abs(mark.y-want) > 0.02 {
			t.Errorf("%g° apart: the mark is at %.3f dB, want %.3f", c.phi, mark.y, want)
		}
	}
}

// TestNullWithoutTimeBase: where two drivers' phases cannot be held against each other, no null is marked, and the phasors say so.
func TestNullWithoutTimeBase(t *testing.T) {
	s := twoWay(t, grid(100), 150)
	s.Crossing[0].OneTimeBase = false
	p := Null(s).(*plotPanel)
	if len(p.callouts) != 0 || p.note != "low and high are not on one time base" {
		t.Errorf("%+v are marked under %q", p.callouts, p.note)
	}
	if texts, _ := drawn(t, Phasors(s)[0]); !slices.Contains(texts, "not on one time base: the angles mean nothing") {
		t.Errorf("with the phasors is written %q", texts)
	}
}

// TestReversed: at the lower crossing of a three-way the low way is reversed, at the upper the high way.
func TestReversed(t *testing.T) {
	s := threeWay(t, grid(100))
	for k, want := range []string{"low", "high"} {
		names, first := s.turnable(&s.Crossing[k])
		if strings.Join(names, " ") != want || first != 2*k {
			t.Errorf("at crossing %d %q is reversed, want %s", k, names, want)
		}
		for i, sum := range s.reversed(names) {
			way := s.Response.Ways[2*k].P[i]
			if d := s.Response.Sum[i] - 2*way - sum; cmplx.Abs(d) > 1e-14 {
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

// TestLowestImpedance: the marks are where the summary says, on the grid or not, and none is beyond the span.
func TestLowestImpedance(t *testing.T) {
	s := twoWay(t, grid(50), 0)
	if c := Impedance([]*Subject{s}, "")[0].(*plotPanel).callouts; len(c) != 0 {
		t.Errorf("%v are marked, and there is no summary", c)
	}
	s.Summary = &sim.Summary{MinImpedance: 6.13, MinImpedanceAt: 867.9, MinEPDR: 2.5, MinEPDRAt: 30e3}
	p := Impedance([]*Subject{s}, "")[0].(*plotPanel)
	texts, marks := drawn(t, p)
	discs := 0
	for _, m := range marks {
		if d, ok := m.(disc); ok {
			discs++
			// 700 units wide at x = 10, less axisWidth: three decades.
			if want := 10 + axisWidth + (700-axisWidth)*math.Log10(867.9/20)/3; math.Abs(d.at.x-want) > 1e-6 {
				t.Errorf("the mark is at %g, want %g", d.at.x, want)
			}
		}
	}
	if discs != 1 || !slices.Contains(texts, "lowest 6.13 Ω at 868 Hz") || slices.ContainsFunc(texts, func(s string) bool { return strings.Contains(s, "2.50 Ω") }) {
		t.Errorf("%d marks, and %q is written", discs, texts)
	}
}

// TestNamesOfBothDesigns: the second design's lines are pale, and what is written at them is not.
func TestNamesOfBothDesigns(t *testing.T) {
	a, b := twoWay(t, grid(200), 0), twoWay(t, grid(200), 40)
	a.Name, b.Name = "A", "B"
	_, marks := drawn(t, Response([]*Subject{a, b}, ""))
	pales, names := 0, 0
	for _, m := range marks {
		switch m := m.(type) {
		case line:
			if m.pen.ink == way1Pale || m.pen.ink == way2Pale || m.pen.ink == totalPale {
				pales++
			}
		case text:
			if want, ok := map[string]ink{"low B": way1, "high B": way2, "sum B": total}[m.text]; ok {
				names++
				if m.ink != want {
					t.Errorf("%q is written in ink %d, want %d", m.text, m.ink, want)
				}
			}
		}
	}
	if pales < 3 || names != 3 {
		t.Errorf("%d pale lines and %d names of B, want 3 or more and 3", pales, names)
	}
}

// Points without a name, such as those that others beat, get no line to a text that is not there.
func TestNamelessMarksHaveNoLeader(t *testing.T) {
	marks := make([]Mark, 60)
	for i := range marks {
		marks[i] = Mark{Across: 3.2, Up: 1 + float64(i)/30}
	}
	strokes := func(marks []Mark) (n int) {
		s := emptyScene(t)
		Frontier("Frontier", "", " Ω", " dB", marks, false).draw(s, rect{40, 40, 500, 200})
		for _, m := range s.marks {
			if _, ok := m.(line); ok {
				n++
			}
		}
		return n
	}
	if few, many := strokes([]Mark{marks[0], marks[59]}), strokes(marks); many != few {
		t.Errorf("%d lines for two points, %d for sixty", few, many)
	}
}
