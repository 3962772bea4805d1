package sim

import (
	"fmt"
	"math"
	"math/cmplx"
	"slices"
	"testing"

	"sixdown/sim/field"
	"sixdown/xover"
)

func mustAlign(t testing.TB, d *xover.Design) []Alignment {
	t.Helper()
	as, err := mustNew(t, d).Alignment([2]float64{})
	if err != nil {
		t.Fatal(err)
	}
	return as
}

// mustAlignOne is mustAlign of a design with one crossing.
func mustAlignOne(t testing.TB, d *xover.Design) Alignment {
	t.Helper()
	as := mustAlign(t, d)
	if len(as) != 1 {
		t.Fatalf("%d crossings, want 1", len(as))
	}
	return as[0]
}

const (
	alignFc     = 2345.678 // Hz, on no grid
	alignLambda = 343 / alignFc
)

// apartBy puts the drivers of twoWay one above the other, d in m apart, for an ear far away.
func apartBy(design *xover.Design, d float64) *xover.Design {
	design.Drivers[0].At[1], design.Drivers[1].At[1] = -d/2, d/2
	design.Listen.Distance = 10000 * alignLambda
	return design
}

// The published alignments with two point drivers, one above the other. Phases: S. Linkwitz, "Active Crossover Networks
// for Noncoincident Drivers", J. Audio Eng. Soc. 24(1), 2–8, 1976: odd orders in quadrature, Linkwitz-Riley in phase,
// and the sums, the numbers derived; so are the angles and nulls: with the drivers d apart the upper one, φ ahead, leads at θ by φ + 360°·(d/λ)·sinθ. So at d = λ the main
// lobe is at sinθ = -φ/360° and the nulls are where that is ±180°; the reversed null at equal levels is
// |1 - e^jφ|/|1 + e^jφ| = tan(φ/2).
func TestPublishedAlignmentsOfPointDrivers(t *testing.T) {
	bessel2 := []float64{math.Sqrt(3), 1 / math.Sqrt(3)}
	none := math.NaN()
	for _, tt := range []struct {
		name     string
		g        []float64
		reversed bool
		spacing  float64 // wavelengths
		sum      float64 // dB at the crossing, of two drivers that give 0 dB each
		phase    float64 // degrees
		null     float64 // dB, of the sum with one side reversed; -Inf: below -100
		lobe     float64 // degrees
		gain     float64 // dB of the lobe over straight ahead; NaN: that is a null
		nulls    []float64
	}{
		{"LR2 reversed", linkwitzRiley2, true, 1, 0, 0, math.Inf(-1), 0, 0, []float64{-30, 30}},
		{"LR4", linkwitzRiley4, false, 1, 0, 0, math.Inf(-1), 0, 0, []float64{-30, 30}},
		{"LR4 half a wavelength apart", linkwitzRiley4, false, 0.5, 0, 0, math.Inf(-1), 0, 0, nil}, // at ±90°
		{"LR4 two wavelengths apart", linkwitzRiley4, false, 2, 0, 0, math.Inf(-1), 0, 0, []float64{-14.4775, 14.4775}},
		{"B1", butterworth1, false, 1, 0, 90, 0, -14.4775, 3.0103, []float64{14.4775}}, // the other at asin(-3/4)
		{"B1 reversed", butterworth1, true, 1, 0, -90, 0, 14.4775, 3.0103, []float64{-14.4775}},
		{"B3", butterworth3, false, 1, 0, -90, 0, 14.4775, 3.0103, []float64{-14.4775}},
		{"B3 reversed", butterworth3, true, 1, 0, 90, 0, -14.4775, 3.0103, []float64{14.4775}},
		{"B3 half a wavelength apart", butterworth3, false, 0.5, 0, -90, 0, 30, 3.0103, []float64{-30}},
		{"B4", butterworth4, false, 1, 3.0103, 0, math.Inf(-1), 0, 0, []float64{-30, 30}},
		{"Bessel 2 reversed", bessel2, true, 1, 1.2494, 0, math.Inf(-1), 0, 0, []float64{-30, 30}},
		// Opposed: the lobe is at ±30°, the one above being named, beside the null ahead and that at asin(1).
		{"LR2", linkwitzRiley2, false, 1, math.Inf(-1), 180, none, 30, none, []float64{0}},
	} {
		a := mustAlignOne(t, apartBy(twoWay(tt.g, alignFc, 8, tt.reversed), tt.spacing*alignLambda))
		near(t, tt.name+" frequency", a.Frequency, alignFc, 1e-6*alignFc) // the drivers' distances differ in the 9th digit
		if sum := -a.LevelDB - levelBelow(tt.g); !math.IsInf(tt.sum, -1) {
			near(t, tt.name+" sum", sum, tt.sum, 5e-4)
		} else if sum > -100 {
			t.Errorf("%s: sum %g dB, want a null", tt.name, sum)
		}
		near(t, tt.name+" phase", math.Mod(a.PhaseDeg-tt.phase+540, 360)-180, 0, 1e-3)
		for _, apart := range []float64{a.MeanDeg, a.LeastDeg, a.WorstDeg} {
			near(t, tt.name+" apart", apart, math.Abs(tt.phase), 1e-3) // at all frequencies
		}
		switch {
		case math.IsInf(tt.null, -1):
			if a.Null.DepthDB > -100 {
				t.Errorf("%s: null of %g dB, want one without bottom", tt.name, a.Null.DepthDB)
			}
			near(t, tt.name+" null frequency", a.Null.Frequency, alignFc, 1e-5*alignFc)
		case !math.IsNaN(tt.null):
			near(t, tt.name+" null", a.Null.DepthDB, tt.null, 5e-4)
		}
		near(t, tt.name+" lobe", a.Lobe.AngleDeg, tt.lobe, 5e-3) // far, but not without end: 1/10000 of a wavelength is some 0.002°
		if !math.IsNaN(tt.gain) {
			near(t, tt.name+" lobe level", a.Lobe.LevelDB, tt.gain, 5e-4)
		}
		if len(a.Lobe.Nulls) != len(tt.nulls) {
			t.Errorf("%s: nulls %v, want at %v", tt.name, a.Lobe.Nulls, tt.nulls)
			continue
		}
		for i, n := range a.Lobe.Nulls {
			near(t, fmt.Sprintf("%s null %d", tt.name, i), n.AngleDeg, tt.nulls[i], 5e-3)
			if n.LevelDB > -60 { // 1/r makes one driver louder by some 1e-5
				t.Errorf("%s: the null at %g° is %g dB", tt.name, n.AngleDeg, n.LevelDB)
			}
		}
	}
}

// Bessel's second order, both branches 3.010 dB down at the crossover: 148.66° apart, a sum of -8.360 dB and, reversed,
// of +2.681 dB there (derived, from 3/(s² + 3s + 3) with s scaled by 1.36165). It is the same upward as downward, so the
// hole is at the crossing. The lobe is where the upper driver is half a wavelength less 15.67° nearer: with 3.010 dB.
func TestBesselOfPointDrivers(t *testing.T) {
	const scale = 1.3616541287
	a := mustAlignOne(t, apartBy(twoWay([]float64{scale, scale / 3}, alignFc, 8, false), alignLambda))
	near(t, "frequency", a.Frequency, alignFc, 1e-6*alignFc)
	near(t, "phase", a.PhaseDeg, 148.66, 0.006)
	near(t, "sum", -a.LevelDB-3.0103, -8.360, 1e-3)
	near(t, "hole", a.AsWired.DepthDB, -8.360-2.681, 1e-3)
	near(t, "hole frequency", a.AsWired.Frequency, alignFc, 1e-4*alignFc)
	if !a.ReversedIsBetter || !a.Best.Reversed {
		t.Error("it is better reversed")
	}
	near(t, "lobe", a.Lobe.AngleDeg, -math.Asin(148.66/360)*180/math.Pi, 6e-3)
	near(t, "lobe level", a.Lobe.LevelDB, 3.0103+8.360, 1e-3)
	if len(a.Lobe.Nulls) != 1 { // the other at asin(-(180 + 148.66)/360)
		t.Fatalf("nulls %v, want one", a.Lobe.Nulls)
	}
	near(t, "null", a.Lobe.Nulls[0].AngleDeg, math.Asin((180-148.66)/360)*180/math.Pi, 6e-3)
}

// levelBelow returns how far in dB a branch of the singly terminated prototype g is below 0 dB at its crossover, from
// the ladder by hand: for orders 1 to 4, H = 1/P(j).
func levelBelow(g []float64) float64 {
	v, i := complex128(1), complex128(1) // at the load of 1 Ω
	for k := len(g) - 1; k >= 0; k-- {
		if k%2 == 0 {
			v += complex(0, g[k]) * i
		} else {
			i += complex(0, g[k]) * v
		}
	}
	return DB(v)
}

// Over which frequencies both branches are within 12 dB of the sum, by hand: LR4 with its flat sum where 1 + x⁴ =
// 10^(12/20), B3 where 1 + x⁶ = 10^(12/10), LR2 reversed where 1 + x² = 10^(12/20).
func TestAlignmentBand(t *testing.T) {
	for _, tt := range []struct {
		name     string
		g        []float64
		reversed bool
		x        float64
	}{
		{"LR4", linkwitzRiley4, false, math.Pow(math.Pow(10, 0.6)-1, 1.0/4)},
		{"B3", butterworth3, false, math.Pow(math.Pow(10, 1.2)-1, 1.0/6)},
		{"LR2", linkwitzRiley2, true, math.Pow(math.Pow(10, 0.6)-1, 1.0/2)},
	} {
		a := mustAlignOne(t, twoWay(tt.g, alignFc, 8, tt.reversed))
		near(t, tt.name+" from", a.Band[0], alignFc/tt.x, 1e-9*alignFc)
		near(t, tt.name+" to", a.Band[1], alignFc*tt.x, 1e-9*alignFc)
		if n := len(a.Freqs); a.Freqs[0] != a.Band[0] || a.Freqs[n-1] != a.Band[1] || len(a.DifferenceDeg) != n || n < int(48*2*math.Log2(tt.x)) {
			t.Errorf("%s: the curve has %d points from %g to %g Hz", tt.name, n, a.Freqs[0], a.Freqs[n-1])
		}
	}
	// It ends where the band that is asked for does.
	as, err := mustNew(t, twoWay(butterworth1, 1000, 8, false)).Alignment([2]float64{800, 1500})
	if err != nil || len(as) != 1 || as[0].Band != [2]float64{800, 1500} {
		t.Errorf("got %+v and error %v", as, err)
	}
}

// One driver is farther away: then what was in step is off by 360°·f·d/c, and to bring the other as far back is what
// lines them up. The curve is that line; its mean over log frequency from a to b is that slope times (b - a)/ln(b/a).
func TestDelayThatLinesUp(t *testing.T) {
	for _, tt := range []struct {
		name     string
		g        []float64
		reversed bool
		back     float64 // m, the tweeter's place
		turn     bool    // whether one side is to be turned
	}{
		{"tweeter 10 mm in front", linkwitzRiley4, false, -0.010, false},
		{"tweeter 14 mm behind", linkwitzRiley4, false, 0.014, false},
		{"tweeter 14 mm behind and turned", linkwitzRiley4, true, 0.014, true},
		{"second order", linkwitzRiley2, true, 0.020, false},
		{"second order turned", linkwitzRiley2, false, -0.020, true},
		{"a third of a wavelength", linkwitzRiley4, false, alignLambda / 3, false},
		{"nothing", linkwitzRiley4, false, 0, false},
	} {
		d := twoWay(tt.g, alignFc, 8, tt.reversed)
		d.Drivers[1].At[2] = -tt.back
		d.Drivers[0].Sensitivity, d.Drivers[1].Sensitivity = 90, 90+20*math.Log10(1+tt.back) // 1/r
		a := mustAlignOne(t, d)
		near(t, tt.name+" delay", a.Best.Delay, -tt.back/343, 1e-9/343)
		near(t, tt.name+" offset", a.Best.Offset, -tt.back, 1e-9)
		if a.Best.Reversed != tt.turn {
			t.Errorf("%s: reversed %v, want %v", tt.name, a.Best.Reversed, tt.turn)
		}
		near(t, tt.name+" mean then", a.Best.MeanDeg, 0, 1e-4)
		near(t, tt.name+" worst then", a.Best.WorstDeg, 0, 1e-4)
		slope := -360 * tt.back / 343 // degrees a Hz
		start := 0.0
		if tt.turn {
			start = 180
		}
		for k, f := range a.Freqs {
			near(t, tt.name+" curve", math.Mod(a.DifferenceDeg[k]-slope*f-start+900, 360)-180, 0, 1e-4)
			if k > 0 && math.Abs(a.DifferenceDeg[k]-a.DifferenceDeg[k-1]) > 20 {
				t.Errorf("%s: the curve jumps at %g Hz", tt.name, f)
			}
		}
		if worst := math.Abs(slope) * a.Band[1]; worst < 180 && !tt.turn {
			near(t, tt.name+" worst", a.WorstDeg, worst, 1e-4)
			near(t, tt.name+" least", a.LeastDeg, math.Abs(slope)*a.Band[0], 1e-4)
			mean := math.Abs(slope) * (a.Band[1] - a.Band[0]) / math.Log(a.Band[1]/a.Band[0])
			near(t, tt.name+" mean", a.MeanDeg, mean, 0.02*mean+1e-4) // a mean of some 40 points, the ends among them
			if tt.back != 0 {
				near(t, tt.name+" worst at", a.WorstAt, a.Band[1], 1e-9)
			}
		}
		// With the polarity right it takes a quarter of a period or more for the other one to be better.
		if want := tt.turn != (math.Abs(slope)*alignFc > 90); a.ReversedIsBetter != want {
			t.Errorf("%s: reversed is better: %v, want %v", tt.name, a.ReversedIsBetter, want)
		}
	}
}

// The null's depth at equal levels is tan(φ/2), and with one way m dB louder (1 - 10^(-m/20))/(1 + 10^(-m/20)), where
// they are in step; derived.
func TestDepthOfTheNull(t *testing.T) {
	// In the first-order pair the two are 90° apart everywhere; the tweeter d farther away makes that φ = 90° - 360°·f·d/c.
	for _, phi := range []float64{10, 20, 45, 60} {
		d := twoWay(butterworth1, alignFc, 8, false)
		back := (90 - phi) / 360 * alignLambda
		d.Drivers[1].At[2], d.Drivers[1].Sensitivity = -back, 90+20*math.Log10(1+back)
		a := mustAlignOne(t, d)
		near(t, fmt.Sprintf("%g° apart", phi), a.PhaseDeg, phi, 1e-6)
		// By hand, at x = f/fc: the reversed sum over the sum is |1 - x·e^jφ(x)|/|1 + x·e^jφ(x)|, φ = 90° - (90° - φ1)·x.
		ratio := func(x float64) float64 {
			v := cmplx.Rect(x, math.Pi/2*(1-x)+phi*math.Pi/180*x)
			return cmplx.Abs(1-v) / cmplx.Abs(1+v)
		}
		near(t, fmt.Sprintf("%g° null at the crossing", phi), ratio(1), math.Tan(phi/2*math.Pi/180), 1e-12)
		lowest, at := math.Inf(1), 0.0
		for x := a.Band[0] / alignFc; x < a.Band[1]/alignFc; x += 1e-5 {
			if r := ratio(x); r < lowest {
				lowest, at = r, x
			}
		}
		near(t, fmt.Sprintf("%g° null", phi), a.Null.DepthDB, 20*math.Log10(lowest), 5e-4)
		near(t, fmt.Sprintf("%g° null frequency", phi), a.Null.Frequency/alignFc, at, 2e-5)
	}
	// Two that are in step at all frequencies cross in a null without bottom. How steep its sides are is the formula for
	// the levels, at the frequency where the branches differ by m dB.
	for _, tt := range []struct{ m, null float64 }{{1, -24.8}, {3, -15.3}} {
		x := math.Pow(10, tt.m/40/2) // LR4: high over low is x⁴
		r := mustPredict(t, mustNew(t, twoWay(linkwitzRiley4, alignFc, 8, true)), alignFc*x)
		near(t, fmt.Sprintf("%g dB apart", tt.m), SPL(r.Sum[0])-90, tt.null, 0.05) // printed to 0.1 dB
	}
}

// The sides of a three-way: at each crossing all ways but those beyond it are turned together, so that the other
// crossing stays as it is.
func TestSidesOfAThreeWay(t *testing.T) {
	as := mustAlign(t, benchDesign())
	if len(as) != 2 {
		t.Fatalf("%d crossings, want 2", len(as))
	}
	names := mustNew(t, benchDesign()).Names()
	for k, a := range as {
		if !slices.Equal(a.Lower, names[:k+1]) || !slices.Equal(a.Upper, names[k+1:]) {
			t.Errorf("crossing %d: %q and %q", k, a.Lower, a.Upper)
		}
		if !(a.Band[0] < a.Frequency && a.Frequency < a.Band[1]) {
			t.Errorf("crossing %d at %g Hz: band %g", k, a.Frequency, a.Band)
		}
		// By another road: the design with those ways reversed, at the null.
		d := benchDesign()
		for i := range d.Ways[:k+1] {
			d.Ways[i].Reversed = !d.Ways[i].Reversed
		}
		f := a.Null.Frequency
		turned, sum := mustPredict(t, mustNew(t, d), f), mustPredict(t, mustNew(t, benchDesign()), f)
		near(t, "null", a.Null.DepthDB, SPL(turned.Sum[0])-SPL(sum.Sum[0]), 1e-6)
	}
}

// A second woofer that never leads goes with the first.
func TestHelperIsOnTheSideOfItsWoofer(t *testing.T) {
	d := twoWay(linkwitzRiley4, 2000, 8, false)
	d.Drivers = append(d.Drivers, plainDriver("helper", 8, 89))
	d.Parts = append(d.Parts, coil("L9", 3e-3, 0.2))
	d.Ways = append(d.Ways, xover.Way{Name: "half", Driver: "helper", Network: []xover.Step{series(leaf("L9"))}})
	a := mustAlignOne(t, d)
	if !slices.Equal(a.Lower, []string{"low", "half"}) || !slices.Equal(a.Upper, []string{"high"}) {
		t.Errorf("%q and %q", a.Lower, a.Upper)
	}
}

// The lobe by Field, angle by angle, is no other than the one that is found by interpolation, with diaphragms and with
// the edges of a cabinet.
func TestLobeAgainstField(t *testing.T) {
	for _, fc := range []float64{500, 2000, 4000} {
		d := twoWay(linkwitzRiley4, fc, 8, false)
		d.Drivers[0].At, d.Drivers[0].Diameter = [3]float64{0, -0.09, -0.02}, 0.13
		d.Drivers[1].At, d.Drivers[1].Diameter = [3]float64{0.01, 0.06, 0}, 0.026
		d.Listen.Distance, d.Listen.Height = 2, 0.1
		d.Baffle = &xover.Baffle{Width: 0.21, Height: 0.36}
		a := mustAlignOne(t, d)
		s := mustNew(t, d)
		at := func(deg float64) float64 {
			r, err := s.PredictAt([]float64{a.Frequency}, field.Angle{VerticalDeg: deg})
			if err != nil {
				t.Fatal(err)
			}
			return SPL(r.Sum[0])
		}
		top := at(a.Lobe.AngleDeg)
		near(t, "lobe level", a.Lobe.LevelDB, top-at(0), 0.02)
		for deg := -45.0; deg <= 45; deg += 5 {
			if l := at(deg); l > top+0.12 { // 0.1 dB is alike
				t.Errorf("%g Hz: %.2f dB at %g°, %.2f dB at the lobe, %g°", fc, l, deg, top, a.Lobe.AngleDeg)
			}
		}
		for _, n := range a.Lobe.Nulls {
			if l := at(n.AngleDeg); l > at(n.AngleDeg-1) || l > at(n.AngleDeg+1) {
				t.Errorf("%g Hz: no null at %g°", fc, n.AngleDeg)
			}
		}
	}
}

// A measured response says nothing of other angles, which the lobe says.
func TestLobeOfMeasuredDrivers(t *testing.T) {
	d := twoWay(linkwitzRiley4, 2000, 8, false)
	d.Drivers[0].ResponseFile, d.Drivers[0].HasSensitivity = "w.frd", false
	s, err := New(d, files(map[string]string{"w.frd": "10 90 0\n1000 90 0\n40000 90 0\n"}))
	if err != nil {
		t.Fatal(err)
	}
	as, err := s.Alignment([2]float64{})
	if err != nil || len(as) != 1 || len(as[0].Lobe.Warnings) != 1 {
		t.Fatalf("got %+v and error %v, want one warning", as, err)
	}
	if w := mustAlignOne(t, twoWay(linkwitzRiley4, 2000, 8, false)).Lobe.Warnings; len(w) > 0 {
		t.Errorf("warnings %q", w)
	}
}

func TestAlignmentWithoutSumOrCrossing(t *testing.T) {
	d := twoWay(linkwitzRiley4, 2000, 8, false)
	d.Drivers[0].HasSensitivity = false
	if as := mustAlign(t, d); as != nil {
		t.Errorf("without a sum: got %+v", as)
	}
	if as := mustAlign(t, oneWay(plainDriver("woofer", 8, 90))); as == nil || len(as) > 0 {
		t.Errorf("without a crossing: got %+v", as)
	}
	if as, err := mustNew(t, d).Alignment([2]float64{200, 100}); as != nil || err == nil {
		t.Errorf("with a falling band: got %+v and error %v", as, err)
	}
}

// A polynomial of the fifth degree is interpolated exactly; a turning vector as well as the remainder's formula says:
// (x-x0)…(x-x5)/6! of the sixth derivative, at most 225/64/720 for x in the middle of six.
func TestLagrange(t *testing.T) {
	poly := func(x float64) complex128 { return complex(1+x*(2-x*(0.3-x*x*0.01*(1-x*0.1))), x*x) }
	v, w := make([]complex128, 12), make([]complex128, 12)
	for i := range v {
		v[i], w[i] = poly(float64(i)), cmplx.Rect(1, float64(i))
	}
	for x := 0.0; x <= 11; x += 0.25 {
		nearC(t, fmt.Sprintf("polynomial at %g", x), lagrange(v, x), poly(x), 1e-12)
		if x >= 2 && x <= 9 {
			if e := cmplx.Abs(lagrange(w, x) - cmplx.Rect(1, x)); e > 225.0/64/720 {
				t.Errorf("turning vector at %g: off by %g", x, e)
			}
		}
	}
}

func BenchmarkAlignment(b *testing.B) {
	s := mustNew(b, benchDesign())
	b.ReportAllocs()
	for b.Loop() {
		if _, err := s.Alignment([2]float64{}); err != nil {
			b.Fatal(err)
		}
	}
}

func ExampleSystem_Alignment() {
	s, err := New(twoWay(linkwitzRiley4, 2200, 8, true), nil)
	if err != nil {
		fmt.Println(err)
		return
	}
	as, err := s.Alignment([2]float64{})
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, a := range as {
		fmt.Printf("%s and %s are %.0f° apart at %.0f Hz; reversed is better: %v\n", a.Low, a.High, a.MeanDeg, a.Frequency, a.ReversedIsBetter)
	}
	// Output: low and high are 180° apart at 2200 Hz; reversed is better: true
}

// The lobe that an ear turned up sees is the one that is seen from straight ahead: what the fan of angles interpolates is, at
// every angle, what Predict computes there.
func TestLobeOfATurnedEar(t *testing.T) {
	d, _, err := xover.Parse("pair", []byte(`[listen]
distance = "3 m"
[parts]
R1 = "1 mohm"
R2 = "1 mohm"
[driver.a]
impedance = "8 ohm"
sensitivity = "90 dB"
diameter = "100 mm"
at = ["0 mm", "-120 mm", "0 mm"]
[driver.b]
impedance = "8 ohm"
sensitivity = "90 dB"
diameter = "60 mm"
at = ["0 mm", "120 mm", "0 mm"]
[[way]]
name = "low"
driver = "a"
network = ["series R1"]
[[way]]
name = "high"
driver = "b"
network = ["series R2"]
`))
	if err != nil {
		t.Fatal(err)
	}
	straight, err := New(d, nil)
	if err != nil {
		t.Fatal(err)
	}
	for _, up := range []float64{0, 20, -15} {
		s, err := straight.Turned(field.Angle{VerticalDeg: up})
		if err != nil {
			t.Fatal(err)
		}
		fan, err := s.newFan()
		if err != nil {
			t.Fatal(err)
		}
		rose, err := fan.at(1500)
		if err != nil {
			t.Fatal(err)
		}
		for _, deg := range []float64{-30, -20, 0, 7, 25} {
			r, err := straight.PredictAt([]float64{1500}, field.Angle{VerticalDeg: up + deg})
			if err != nil {
				t.Fatal(err)
			}
			want := cmplx.Abs(r.Sum[0])
			// The interpolation's error, 1/200 at some kHz where edges are, is far less for a diaphragm at 1.5 kHz.
			if got := rose.size(deg); math.Abs(got/want-1) > 1e-4 {
				t.Errorf("turned %g, at %g: %g Pa, Predict has %g", up, deg, got, want)
			}
		}
	}
}
