package chart

import (
	"math"
	"math/cmplx"
	"testing"

	"sixdown/sim"
)

// grid returns n frequencies from 20 Hz to 20 kHz, equally spaced in log frequency.
func grid(n int) []float64 {
	f := make([]float64, n)
	for i := range f {
		f[i] = 20 * math.Pow(1000, float64(i)/float64(n-1))
	}
	f[n-1] = 20e3
	return f
}

// lr4 is the fourth-order alignment of S. H. Linkwitz, "Active Crossover Networks for Noncoincident Drivers",
// J. Audio Eng. Soc. 24(1), 2–8, 1976: the square of a second-order Butterworth, low- or high-pass.
func lr4(f, fc float64, high bool) complex128 {
	s := complex(0, f/fc)
	h := 1 / (s*s + math.Sqrt2*s + 1)
	if high {
		h *= s * s
	}
	return h * h
}

// design makes a Subject of ways that a formula gives, at 1 Pa for a gain of 1.
func design(t testing.TB, freqs []float64, at []float64, ways map[string]func(f float64) complex128, order ...string) *Subject {
	t.Helper()
	r := &sim.Response{Title: "Formula", Freqs: freqs}
	value := func(f float64) []complex128 {
		var p []complex128
		for _, name := range order {
			p = append(p, ways[name](f))
		}
		return p
	}
	for _, name := range order {
		r.Ways = append(r.Ways, sim.WayResponse{Name: name, Driver: name})
	}
	total := func(f float64) (sum complex128) {
		for _, p := range value(f) {
			sum += p
		}
		return sum
	}
	for _, f := range freqs {
		for i, p := range value(f) {
			r.Ways[i].H, r.Ways[i].P = append(r.Ways[i].H, p), append(r.Ways[i].P, p)
		}
		sum, near := total(f), total(f*1.0001)
		r.Sum = append(r.Sum, sum)
		r.SumDelay = append(r.SumDelay, -cmplx.Phase(near/sum)/(2*math.Pi*f*0.0001))
		r.Amp = append(r.Amp, 1)
		// A load with a resonance at 60 Hz and a coil.
		x := f/60 - 60/f
		r.Zin = append(r.Zin, 6+complex(30, 0)/complex(1, 4*x)+complex(0, f/4000))
	}
	s := &Subject{Response: r}
	for k, f := range at {
		p := value(f)
		sum := total(f)
		c := Crossing{Parts: p}
		c.Low, c.High, c.Frequency = order[k], order[k+1], f
		c.LevelDB, c.PhaseDeg = sim.DB(p[k])-sim.DB(sum), sim.PhaseDeg(p[k+1]/p[k])
		c.Lower, c.Upper, c.OneTimeBase = order[:k+1], order[k+1:], true
		// Fourth-order pairs, and those nearly so, are the deepest at their crossing.
		others := sum - 2*p[k+1]
		if k == 0 && len(order) > 2 {
			others = sum - 2*p[k]
		}
		c.Null = sim.Hole{DepthDB: sim.DB(others / sum), Frequency: f}
		c.AsWired = sim.Hole{DepthDB: -c.Null.DepthDB, Frequency: f}
		c.ReversedIsBetter = c.Null.DepthDB > 0
		s.Crossing = append(s.Crossing, c)
	}
	s.Targets = make([][]float64, len(order))
	for i := range order {
		s.Targets[i] = sim.SPLs(r.Ways[i].P)
		for k := range s.Targets[i] {
			s.Targets[i][k] -= 1
		}
	}
	steps := &sim.Response{Freqs: StepFrequencies(), Ways: make([]sim.WayResponse, len(order))}
	for _, f := range steps.Freqs {
		for i, p := range value(f) {
			steps.Ways[i].Name = order[i]
			steps.Ways[i].P = append(steps.Ways[i].P, p)
		}
		steps.Sum = append(steps.Sum, total(f))
	}
	var err error
	if s.Step, err = StepOf(steps, 0); err != nil {
		t.Fatal(err)
	}
	return s
}

// twoWay is a pair at 2 kHz whose high way is ahead by a constant phase.
func twoWay(t testing.TB, freqs []float64, aheadDeg float64) *Subject {
	turn := cmplx.Rect(1, aheadDeg*math.Pi/180)
	return design(t, freqs, []float64{2000}, map[string]func(float64) complex128{
		"low":  func(f float64) complex128 { return lr4(f, 2000, false) },
		"high": func(f float64) complex128 { return lr4(f, 2000, true) * turn },
	}, "low", "high")
}

// threeWay has crossings at 300 Hz and 3 kHz.
func threeWay(t testing.TB, freqs []float64) *Subject {
	return design(t, freqs, []float64{300, 3000}, map[string]func(float64) complex128{
		"low":  func(f float64) complex128 { return lr4(f, 300, false) },
		"mid":  func(f float64) complex128 { return lr4(f, 300, true) * lr4(f, 3000, false) * cmplx.Rect(0.9, 0.5) },
		"high": func(f float64) complex128 { return lr4(f, 3000, true) * cmplx.Rect(1.1, -0.4) },
	}, "low", "mid", "high")
}

// pageOf is a page of every panel there is about one design or two.
func pageOf(t testing.TB, subjects ...*Subject) *Page {
	t.Helper()
	p := &Page{Title: "All of it: 10 Ω, 4.7 µF, −6 dB, 90°", Caption: []string{"crossing at 2 kHz, −6.0 dB each; ripple 0.0 dB from 200 Hz to 20 kHz; lowest |Z| 6.12 Ω at 1.2 kHz; a rather long line, which must be broken after one of its semicolons"}}
	p.Panels = append(p.Panels, Response(subjects, "dB SPL at 2 m for 2.83 V"), Phase(subjects, "at the ear"), GroupDelay(subjects, "of the sum"))
	p.Panels = append(p.Panels, Impedance(subjects, "what the amplifier sees")...)
	for _, s := range subjects {
		p.Panels = append(p.Panels, Phasors(s)...)
	}
	for _, s := range subjects {
		p.Panels = append(p.Panels, Null(s))
	}
	p.Panels = append(p.Panels, StepResponse(subjects))
	for _, edge := range []float64{90, 180} {
		whole, err := Polar(pistonMap(edge, grid(61)[14:]))
		if err != nil {
			t.Fatal(err)
		}
		curves, err := PolarCurves(pistonMap(edge, []float64{500, 2000, 5000, 10e3}))
		if err != nil {
			t.Fatal(err)
		}
		p.Panels = append(p.Panels, append(whole, curves...)...)
	}
	return p
}

// pistonMap is the directivity 2J₁(x)/x, x = ka·sinθ, of a flat piston of 50 mm radius in a wall: P. M. Morse and
// K. U. Ingard, "Theoretical Acoustics", 1968, section 7.4; the far side, which it does not have, sees the sine of
// half the angle.
func pistonMap(edge float64, freqs []float64) *PolarMap {
	m := &PolarMap{Title: "Horizontal", Note: "dB re straight ahead; positive: to the right", Freqs: freqs}
	for a := -edge; a <= edge; a += 5 {
		var levels []float64
		for _, f := range m.Freqs {
			x := 2 * math.Pi * f / 343 * 0.05 * math.Sin(a*90/edge*math.Pi/180)
			d := 1.0
			if x != 0 {
				d = 2 * math.J1(x) / x
			}
			levels = append(levels, 20*math.Log10(math.Abs(d)))
		}
		m.AngleDeg, m.LevelDB = append(m.AngleDeg, a), append(m.LevelDB, levels)
	}
	return m
}
