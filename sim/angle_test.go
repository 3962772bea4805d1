package sim

import (
	"errors"
	"fmt"
	"math"
	"math/cmplx"
	"slices"
	"testing"

	"sixdown/sim/circuit"
	"sixdown/sim/field"
	"sixdown/xover"
)

func mustField(t testing.TB, s *System, freqs []float64, angles ...field.Angle) []*Response {
	t.Helper()
	rs, err := s.Field(freqs, angles)
	if err != nil {
		t.Fatal(err)
	}
	return rs
}

// Turned by nothing, the answers are Predict's to the last digit; turned, they are those of a design that has
// the ear there: at 30° up, 2 m away, it is 1 m above the axis and √3 m out. For Height the flight that is
// taken out is Distance, so the phases differ by that of 2 m - √3 m.
func TestFieldIsPredict(t *testing.T) {
	d := twoWay(linkwitzRiley4, 2000, 8, false)
	d.Drivers[0].At, d.Drivers[1].At = [3]float64{0, -0.1, -0.02}, [3]float64{0.02, 0.08, 0}
	d.Listen.Distance = 2
	freqs := logGrid([2]float64{20, 20e3})
	s := mustNew(t, d)
	rs := mustField(t, s, freqs, field.Angle{}, field.Angle{VerticalDeg: 30})
	r := mustPredict(t, s, freqs...)
	if !slices.Equal(rs[0].Sum, r.Sum) || !slices.Equal(rs[0].SumDelay, r.SumDelay) || !slices.Equal(rs[0].Ways[1].P, r.Ways[1].P) {
		t.Error("not turned at all: differs from Predict")
	}
	one, err := s.PredictAt(freqs, field.Angle{VerticalDeg: 30})
	if err != nil || !slices.Equal(one.Sum, rs[1].Sum) || one.Angle.VerticalDeg != 30 {
		t.Errorf("PredictAt differs from Field, or %v", err)
	}
	d.Listen = xover.Listen{Distance: math.Sqrt(3), Height: 1}
	up := mustPredict(t, mustNew(t, d), freqs...)
	flight := (2 - math.Sqrt(3)) / 343
	for k, f := range freqs {
		nearC(t, fmt.Sprintf("sum at %g Hz", f), rs[1].Sum[k], up.Sum[k]*cmplx.Rect(1, 2*math.Pi*f*flight), 1e-10)
		near(t, fmt.Sprintf("delay at %g Hz", f), rs[1].SumDelay[k], up.SumDelay[k]-flight, 1e-9) // nudge
	}
	if !slices.Equal(rs[1].Ways[0].H, r.Ways[0].H) || !slices.Equal(rs[1].Zin, r.Zin) {
		t.Error("the circuit's answers depend on the angle")
	}
}

// The alignments of S. Linkwitz, "Active Crossover Networks for Noncoincident Drivers", J. Audio Eng. Soc. 24(1),
// 2–8, 1976, with two point drivers a distance d apart, from afar, to three figures: sum on the axis, tilt of
// the main lobe, nulls (all derived). LR4: in phase, nulls at sinθ = ±λ/2d. B3: in quadrature, 3.01 dB up at sinθ
// = λ/4d toward the lagging way, null at as much to the other side.
func TestLobesByAngle(t *testing.T) {
	const fc, far = 2000.0, 2e4
	for _, tt := range []struct {
		name              string
		g                 []float64
		overLambda        float64 // d/λ
		onAxis, tilt, top float64 // dB, degrees, dB
		nulls             []float64
	}{
		{"LR4, d = λ", linkwitzRiley4, 1, 0, 0, 0, []float64{-30, 30}},
		{"LR4, d = 0.7λ", linkwitzRiley4, 0.7, 0, 0, 0, []float64{-45.585, 45.585}}, // asin(1/1.4)
		{"B3, d = λ", butterworth3, 1, 0, 14.478, 3.0103, []float64{-14.478}},       // asin(1/4)
		{"B3, d = λ/2", butterworth3, 0.5, 0, 30, 3.0103, []float64{-30}},           // asin(1/2)
	} {
		d := twoWay(tt.g, fc, 8, false)
		spacing := tt.overLambda * 343 / fc
		d.Drivers[0].At[1], d.Drivers[1].At[1] = -spacing/2, spacing/2
		d.Listen.Distance = far
		s := mustNew(t, d)
		level := func(deg float64) float64 {
			r, err := s.PredictAt([]float64{fc}, field.Angle{VerticalDeg: deg})
			if err != nil {
				t.Fatal(err)
			}
			return SPL(r.Sum[0]) - 90 + 20*math.Log10(far)
		}
		near(t, tt.name+": on the axis", level(0), tt.onAxis, 0.001)
		least := func(lo, hi, sign float64) float64 {
			x, _ := minimum(lo, hi, func(deg float64) (float64, error) { return sign * level(deg-90), nil })
			return x - 90
		}
		tilt := least(tt.tilt+80, tt.tilt+100, -1)
		near(t, tt.name+": tilt", tilt, tt.tilt, 0.01)
		near(t, tt.name+": at the top", level(tilt), tt.top, 0.001)
		for _, null := range tt.nulls {
			at := least(null+85, null+95, 1)
			near(t, tt.name+": null", at, null, 0.01)
			if depth := level(at); depth > -60 {
				t.Errorf("%s: the null is only %.1f dB", tt.name, depth)
			}
		}
	}
}

// The reverse null: one way of an LR4 pair reversed, level or phase of the other off by m dB or φ: depth over
// the sum (1-10^(-m/20))/(1+10^(-m/20)) or tan(φ/2) (derived); 1 dB → -24.8 dB, 10° → -21.2 dB.
func TestReverseNull(t *testing.T) {
	sum := func(reversed bool, db, deg float64) float64 {
		d := twoWay(linkwitzRiley4, 2000, 8, reversed)
		d.Drivers[1].Sensitivity += db
		d.Listen.Distance = 100
		d.Drivers[1].At[2] = -deg / 360 * 343 / 2000
		return SPL(mustPredict(t, mustNew(t, d), 2000).Sum[0])
	}
	near(t, "1 dB", sum(true, 1, 0)-sum(false, 1, 0), 20*math.Log10((1-math.Pow(10, -0.05))/(1+math.Pow(10, -0.05))), 1e-3)
	near(t, "1 dB, as printed", sum(true, 1, 0)-sum(false, 1, 0), -24.8, 0.05)
	near(t, "10°", sum(true, 0, 10)-sum(false, 0, 10), -21.2, 0.05)
}

// A diaphragm beams as the piston of its diameter, 2J1(x)/x, x = ka·sinθ; behind it is as at its side. Its first
// zero at x = 3.8317 and half at 2.2151 (SciPy).
func TestDiaphragmByAngle(t *testing.T) {
	drv := plainDriver("woofer", 8, 90)
	drv.Diameter = 0.13
	d := oneWay(drv)
	d.Listen.Distance = 2
	s := mustNew(t, d)
	at := func(x float64) float64 { return x / 0.5 * 343 / (2 * math.Pi * 0.065) } // f at which x is that, at 30°
	r := mustField(t, s, []float64{at(2.2150893677), at(3.8317059702), 1}, field.Angle{HorizontalDeg: 30}, field.Angle{}, field.Angle{VerticalDeg: 90}, field.Angle{HorizontalDeg: 150})
	near(t, "half", SPL(r[0].Sum[0]), 90-2*20*math.Log10(2), 1e-6)
	if got := SPL(r[0].Sum[1]); got > 90-150 {
		t.Errorf("at the first zero: %g dB", got)
	}
	near(t, "toward DC", SPL(r[0].Sum[2]), 90-20*math.Log10(2), 1e-5)
	near(t, "on its axis", SPL(r[1].Sum[1]), 90-20*math.Log10(2), 1e-12)
	nearC(t, "behind", r[3].Sum[0], r[2].Sum[0], 1e-12)
	// The area stands in for a diameter that is not given.
	drv.Diameter, drv.Sd = 0, math.Pi*0.065*0.065
	d.Drivers[0] = drv
	nearC(t, "by its area", mustField(t, mustNew(t, d), []float64{at(2.2150893677)}, field.Angle{HorizontalDeg: 30})[0].Sum[0], r[0].Sum[0], 1e-9)
}

// With a baffle the step toward DC is 6.02 dB, at all angles; without one there is none.
func TestBaffleStep(t *testing.T) {
	drv := plainDriver("woofer", 8, 90)
	drv.At, drv.Diameter = [3]float64{0, 0.06, -0.01}, 0.026
	d := oneWay(drv)
	d.Listen.Distance = 2.01
	d.Baffle = &xover.Baffle{Width: 0.22, Height: 0.38}
	s := mustNew(t, d)
	if w := s.Warnings(); len(w) > 0 {
		t.Errorf("warnings %q", w)
	}
	for _, r := range mustField(t, s, []float64{0.01}, field.Angle{}, field.Angle{HorizontalDeg: 60}, field.Angle{HorizontalDeg: -150}) {
		r2 := field.Point(drv.At).Distance(field.Listener{Distance: 2.01, Angle: r.Angle}.Ear())
		near(t, fmt.Sprintf("%+v", r.Angle), SPL(r.Sum[0]), 90-20*math.Log10(r2)-20*math.Log10(2), 1e-3)
	}
	if n := testing.AllocsPerRun(10, func() { s.Pressures(make([]complex128, 1), 0, []float64{1000}) }); n > 0 {
		t.Errorf("%v allocations", n)
	}
	d.Drivers[0].At[0] = 0.2
	want := `driver "woofer": it stands beside the baffle, whose edges are left out for it; correct at, or the baffle's width and height`
	if w := mustNew(t, d).Warnings(); !slices.Equal(w, []string{want}) {
		t.Errorf("warnings %q, want %q", w, want)
	}
	d.Drivers[0].At[0], d.Drivers[0].Diameter = 0.1, 0.03
	want = `driver "woofer": its diaphragm reaches over the edge of the baffle; correct its diameter, at, or the baffle's width and height`
	if w := mustNew(t, d).Warnings(); !slices.Equal(w, []string{want}) {
		t.Errorf("warnings %q, want %q", w, want)
	}
}

// What was measured has its diaphragm and its cabinet in it: neither is put in again. That it was measured from
// one side only is said where it matters.
func TestMeasuredResponseByAngle(t *testing.T) {
	d := oneWay(xover.Driver{Name: "woofer", Resistance: 8, ResponseFile: "w.frd"})
	d.Listen.Distance = 1
	open := files(map[string]string{"w.frd": "100 84 10\n1000 90 -30\n10000 70 -160\n"})
	predict := func() []*Response {
		s, err := New(d, open)
		if err != nil {
			t.Fatal(err)
		}
		return mustField(t, s, []float64{1000, 5000}, field.Angle{}, field.Angle{HorizontalDeg: 60})
	}
	bare := predict()
	d.Baffle = &xover.Baffle{Width: 0.22, Height: 0.38}
	d.Drivers[0].Diameter, d.Drivers[0].Breakup = 0.13, []xover.Peak{{Frequency: 5000, Q: 4, GainDB: 6}}
	for i, r := range predict() {
		if !slices.Equal(r.Sum, bare[i].Sum) {
			t.Errorf("%+v: baffle, diameter or breakup changed a measured response", r.Angle)
		}
	}
	nearC(t, "to the side", bare[1].Sum[0], bare[0].Sum[0], 1e-12)
	want := []string{`driver "woofer": its response was measured at one angle and is taken to be the same at all others, which is invented`}
	if len(bare[0].Warnings) > 0 || !slices.Equal(bare[1].Warnings, want) {
		t.Errorf("warnings %q straight ahead and %q to the side, want none and %q", bare[0].Warnings, bare[1].Warnings, want)
	}
}

func TestFieldErrors(t *testing.T) {
	drv := plainDriver("woofer", 8, 90)
	drv.At = [3]float64{1, 0, 0}
	s := mustNew(t, oneWay(drv))
	for _, tt := range []struct {
		angle field.Angle
		want  string
	}{
		{field.Angle{HorizontalDeg: 90}, `driver "woofer": it stands where the ear is at 90, 0 degrees; move one of them`},
		{field.Angle{VerticalDeg: math.NaN()}, `predict: an angle is 0, NaN degrees; give finite ones`},
		{field.Angle{HorizontalDeg: math.Inf(1)}, `predict: an angle is +Inf, 0 degrees; give finite ones`},
	} {
		rs, err := s.Field([]float64{1000}, []field.Angle{{}, tt.angle})
		if rs != nil || err == nil || err.Error() != tt.want {
			t.Errorf("%+v: got %v and error %v, want %s", tt.angle, rs, err, tt.want)
		}
	}
	if rs, err := s.Field([]float64{1000}, nil); err != nil || len(rs) != 0 {
		t.Errorf("no angles: got %v and error %v", rs, err)
	}
	if rs := mustField(t, s, nil, field.Angle{}); len(rs[0].Sum) != 0 {
		t.Errorf("no frequencies: got %v", rs[0].Sum)
	}
	// The error of the lowest task comes back, whichever is first.
	first, second := errors.New("first"), errors.New("second")
	err := share(100, func(task int) error {
		switch task {
		case 30:
			return first
		case 31:
			return second
		}
		return nil
	})
	if err != first {
		t.Errorf("got %v", err)
	}
}

// A vented box in the whole chain: fs = fb = 40 Hz, α = √2, Qt = 1/√(4+2√2), no leaks to speak of, is Thiele's
// fourth-order Butterworth: -3.01 dB at 40 Hz and 24.3 dB down at 20 Hz, 10·lg(1 + 2⁸) (by hand). The state
// equations, from the elements, give the same terminal voltage as the elimination, from the impedance.
func TestVentedBoxAtTheEar(t *testing.T) {
	const qt = 0.3826834323650898
	d := oneWay(xover.Driver{
		Name: "woofer", Re: 6, Fs: 40, Qms: 10 * qt, Qes: qt / 0.9, Vas: 0.1, Sensitivity: 88, HasSensitivity: true,
		Box: xover.Box{Kind: xover.VentedBox, Volume: 0.1 / math.Sqrt2, Tuning: 40, QL: 1000},
	})
	s := mustNew(t, d)
	r := mustPredict(t, s, 40, 20, 4000)
	// A QL of 1000 instead of none moves a1 and a3 by 1/1000 of some 2.6.
	near(t, "level at 40 Hz", SPL(r.Sum[0]), 88-3.0103, 0.03)
	near(t, "level at 20 Hz", SPL(r.Sum[1]), 88-10*math.Log10(257), 0.03)
	near(t, "level far above", SPL(r.Sum[2]), 88, 1e-3)

	d.Parts = []xover.Part{coil("L1", 2e-3, 0.3)}
	d.Ways[0].Network = []xover.Step{series(leaf("L1"))}
	d.Drivers[0].Le, d.Drivers[0].Box.QL = 0.5e-3, 0 // 0: the default, 7
	s = mustNew(t, d)
	ss, err := circuit.NewStateSpace(s.Netlist(), s.Outputs())
	if err != nil {
		t.Fatal(err)
	}
	h := make([]complex128, 1)
	for _, f := range []float64{5, 20, 31, 40, 66, 400, 10e3} {
		ss.Response(h, complex(0, 2*math.Pi*f))
		nearC(t, fmt.Sprintf("terminal voltage at %g Hz", f), h[0], mustPredict(t, s, f).Ways[0].H[0], 1e-9) // the promised agreement of the two
	}
}

func TestBreakupAtTheEar(t *testing.T) {
	drv := plainDriver("woofer", 8, 90)
	drv.Breakup = []xover.Peak{{Frequency: 4500, Q: 4, GainDB: 6}}
	r := mustPredict(t, mustNew(t, oneWay(drv)), 4500, 20)
	near(t, "on the peak", SPL(r.Sum[0]), 96, 1e-12)
	near(t, "far below", SPL(r.Sum[1]), 90, 1e-4) // (g-1)/Q·f/f0 squared, over 2
}

func BenchmarkField(b *testing.B) {
	d := benchDesign()
	d.Baffle = &xover.Baffle{Width: 0.25, Height: 1}
	for i, y := range []float64{-0.3, 0.1, 0.3} {
		d.Drivers[i].At[1], d.Drivers[i].Diameter = y, 0.2/float64(int(1)<<(2*i))
	}
	d.Listen.Distance = 2
	s := mustNew(b, d)
	freqs := logGrid([2]float64{20, 20e3})
	var angles []field.Angle
	for deg := -180.0; deg < 180; deg += 10 {
		angles = append(angles, field.Angle{HorizontalDeg: deg}, field.Angle{VerticalDeg: deg})
	}
	name := fmt.Sprintf("points=%d/angles=%d", len(freqs), len(angles))
	b.Run(name, func(b *testing.B) {
		b.ReportAllocs()
		for b.Loop() {
			mustField(b, s, freqs, angles...)
		}
	})
}
