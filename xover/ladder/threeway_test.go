package ladder

import (
	"fmt"
	"math"
	"math/cmplx"
	"testing"
)

// kinds of three-way that exist, with the ratio that each needs.
var threeWays = []struct {
	order    int
	reversed bool
	least    float64
}{
	{1, false, 1}, {1, true, 1}, {2, true, 2}, {3, false, 1}, {3, true, 2.77}, {4, false, 1.42},
}

// sum returns the three ways' sum and the mid's share in it, excess padded off, at f in Hz, every load alike.
func (w *ThreeWay) sum(load, f float64) (all, midShare complex128) {
	low, _ := work(w.Low, complex(load, 0), f)
	mid, _ := work(w.Mid, complex(load, 0), f)
	high, _ := work(w.High, complex(load, 0), f)
	mid *= complex(math.Pow(10, -w.MidExcessDB/20), 0)
	if w.MidReversed {
		mid = -mid
	}
	return low + mid + high, mid
}

// What they are for. The tolerance is rounding, times the 2n-th order and the spread of the mid's coefficients.
func TestThreeWayIsFlat(t *testing.T) {
	const load = 6
	worst := 0.0
	for _, kind := range threeWays {
		for _, ratio := range []float64{1.001, 1.2, 1.4201, 1.43, 1.5, 2, 2.001, 2.02, 2.1, 2.5, 2.7701, 2.8, 3, 4, 8, 10, 30, 100, 1000, 1e4} {
			if ratio <= kind.least {
				continue
			}
			fLow := 2000 / math.Sqrt(ratio)
			w, err := ThreeWayAllPass(kind.order, kind.reversed, fLow, fLow*ratio, load)
			if err != nil {
				t.Error(err)
				continue
			}
			for _, n := range []Network{w.Low, w.Mid, w.High} {
				for _, v := range values(t, n) {
					if !(v > 0) {
						t.Errorf("%+v, ratio %g: a part has the value %v", kind, ratio, v)
					}
				}
			}
			for _, f := range around(2000) {
				sum, _ := w.sum(load, f)
				e := math.Abs(cmplx.Abs(sum) - 1)
				worst = max(worst, e)
				if !(e < 1e-11) {
					t.Errorf("%+v, ratio %g: the sum at %.4g Hz is off 1 by %.2g", kind, ratio, f, e)
				}
			}
		}
	}
	t.Logf("worst error %.2g", worst)
}

// In first order with the mid not reversed, even the phase is kept: the sum is 1.
func TestFirstOrderIsConstantVoltage(t *testing.T) {
	w, err := ThreeWayAllPass(1, false, 300, 3000, 8)
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range around(1000) {
		if sum, _ := w.sum(8, f); cmplx.Abs(sum-1) > 1e-14 {
			t.Errorf("the sum at %g Hz is %v, want 1", f, sum)
		}
	}
}

// With L = k·R/f and C = k/(R·f), f being fL for the woofer, √(fL·fH) for the mid, fH for the tweeter. After R. M. Bullock III,
// "Passive Three-Way All-Pass Crossover Networks", JAES 32(9), 1984. The figures are derived independently; they
// agree with those remembered from the paper to a unit of the last, save one (second order, ratio 10, the mid's
// series inductor: .0837 remembered, .0847 derived; the latter is the one that sums flat). Tolerance: half a
// unit of the last figure.
func TestThreeWayTables(t *testing.T) {
	for _, row := range []struct {
		order          int
		reversed       bool
		ratio          float64
		low, high, mid []float64
		excess         float64 // dB
	}{
		{1, false, 10, []float64{.1592}, []float64{.1592}, []float64{.5536, .0458}, 1.743},
		{1, false, 8, []float64{.1592}, []float64{.1592}, []float64{.5064, .0500}, 2.183},
		{1, true, 10, []float64{.1592}, []float64{.1592}, []float64{.5536, .0458}, -1.451},
		{1, true, 8, []float64{.1592}, []float64{.1592}, []float64{.5064, .0500}, -1.743},
		{2, true, 10, []float64{.3203, .0791}, []float64{.0791, .3203}, []float64{.3236, 1.0294, .0847, .0227}, 2.080},
		{2, true, 8, []float64{.3216, .0788}, []float64{.0788, .3216}, []float64{.3046, .9320, .0913, .0248}, 2.445},
		{3, false, 10, []float64{.2227, .2127, .0851}, []float64{.1137, .1191, .2977},
			[]float64{.4239, .3313, 1.0007, .0729, .0669, .0237}, 0.852},
		{3, false, 8, []float64{.2187, .2130, .0865}, []float64{.1158, .1189, .2927},
			[]float64{.3996, .2866, .8923, .0814, .0746, .0262}, 0.995},
		{3, true, 10, []float64{.2546, .2126, .0745}, []float64{.0995, .1191, .3401},
			[]float64{.3811, .3707, 1.0890, .0810, .0591, .0221}, 1.603},
		{3, true, 8, []float64{.2586, .2129, .0732}, []float64{.0979, .1190, .3459},
			[]float64{.3561, .3298, .9968, .0907, .0641, .0239}, 2.104},
		{4, false, 10, []float64{.2989, .2522, .1502, .0567}, []float64{.0848, .1005, .1687, .4468},
			[]float64{.3843, .2616, .5834, 1.4229, .0939, .0728, .0445, .0162}, 2.282},
		{4, false, 8, []float64{.2982, .2516, .1502, .0569}, []float64{.0849, .1007, .1686, .4450},
			[]float64{.3773, .2225, .5332, 1.2727, .1040, .0798, .0490, .0178}, 2.843},
	} {
		name := fmt.Sprintf("order %d, reversed %v, ratio %g", row.order, row.reversed, row.ratio)
		fLow := 1 / math.Sqrt(row.ratio)
		w, err := ThreeWayAllPass(row.order, row.reversed, fLow, fLow*row.ratio, 1)
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		scaled := func(n Network, f float64) []float64 {
			all := values(t, n)
			for i := range all {
				all[i] *= f
			}
			return all
		}
		checkRow(t, name+", low", scaled(w.Low, fLow), row.low, 0.5e-4)
		checkRow(t, name+", mid", scaled(w.Mid, 1), row.mid, 0.5e-4)
		checkRow(t, name+", high", scaled(w.High, fLow*row.ratio), row.high, 0.5e-4)
		if math.Abs(w.MidExcessDB-row.excess) > 0.5e-3+1e-6 {
			t.Errorf("%s: excess %.4f dB, want %.3f", name, w.MidExcessDB, row.excess)
		}
		if w.MidReversed != row.reversed {
			t.Errorf("%s: MidReversed is %v", name, w.MidReversed)
		}
		// Element by element: series and shunt by turns, the high-pass half first.
		for i, e := range w.Mid {
			k := i % row.order
			wantKind := Capacitor
			if (i >= row.order) != (k%2 == 1) {
				wantKind = Inductor
			}
			if e.Shunt != (k%2 == 1) || e.Expr.Part.Kind != wantKind {
				t.Errorf("%s: element %d of the mid is %+v", name, i, e)
			}
		}
	}
}

// Closed forms, derived by hand from |sum| = 1. First order: the gains (r - 1)/(r + 1) and (r + 3)/(r + 1). Second: p = 1 + a·s + s²
// with a² = 4(r - 1)²/(r(r - 2)). Rounding only.
func TestThreeWayClosedForms(t *testing.T) {
	for _, r := range []float64{2.1, 3, 8, 10, 250} {
		w, err := ThreeWayAllPass(1, false, 1, r, 1)
		if err != nil {
			t.Fatal(err)
		}
		if want := 20 * math.Log10((r+1)/(r-1)); math.Abs(w.MidExcessDB-want) > 1e-12 {
			t.Errorf("ratio %g: excess %v dB, want %v", r, w.MidExcessDB, want)
		}
		w, err = ThreeWayAllPass(1, true, 1, r, 1)
		if err != nil {
			t.Fatal(err)
		}
		if want := 20 * math.Log10((r+1)/(r+3)); math.Abs(w.MidExcessDB-want) > 1e-12 {
			t.Errorf("ratio %g, reversed: excess %v dB, want %v", r, w.MidExcessDB, want)
		}
		w, err = ThreeWayAllPass(2, true, 1/(2*math.Pi), r/(2*math.Pi), 1)
		if err != nil {
			t.Fatal(err)
		}
		// The ladder of 1 + a·s + s² is a, 1/a.
		a := 2 * (r - 1) / math.Sqrt(r*(r-2))
		for i, v := range values(t, w.Low) {
			if want := []float64{a, 1 / a}[i]; relative(v, want) > 1e-13 {
				t.Errorf("ratio %g, second order: value %d of the woofer is %v, want %v", r, i, v, want)
			}
		}
	}
}

// Far apart, a three-way is two two-ways: Linkwitz-Riley of even order, Butterworth of odd order, no excess.
// The departure goes as 1/ratio, or its root.
func TestThreeWayFarApart(t *testing.T) {
	for _, kind := range threeWays {
		w, err := ThreeWayAllPass(kind.order, kind.reversed, 1/(2*math.Pi), 1e8/(2*math.Pi), 1)
		if err != nil {
			t.Error(err)
			continue
		}
		want := map[int][]float64{1: {1}, 2: {2, 0.5}, 3: {1.5, 4. / 3, 0.5}, 4: {1.88562, 1.59099, 0.94281, 0.35355}}[kind.order]
		checkRow(t, kind, values(t, w.Low), want, 1e-5)
		if math.Abs(w.MidExcessDB) > 1e-3 {
			t.Errorf("%+v: excess %v dB, want none", kind, w.MidExcessDB)
		}
	}
}

// With the mid the wrong way round the sum dips: by 15 to 21 dB for even orders, at ratios 8 and 10 (derived; printed to
// the dB). It is the check that MidReversed means something.
func TestWrongPolarityDips(t *testing.T) {
	for _, order := range []int{2, 4} {
		for _, ratio := range []float64{8, 10} {
			w, err := ThreeWayAllPass(order, order == 2, 1000, 1000*ratio, 8)
			if err != nil {
				t.Fatal(err)
			}
			dip := 0.0
			for i := range 4001 {
				f := 100 * math.Pow(1e3, float64(i)/4000)
				sum, mid := w.sum(8, f)
				dip = min(dip, decibel(sum-2*mid))
			}
			if dip < -21.5 || dip > -14.5 {
				t.Errorf("order %d, ratio %g: the dip is %.2f dB, want -15 to -21", order, ratio, dip)
			}
		}
	}
}

// In third order, where the ways are in quadrature, the wrong polarity costs less: over both polarities and both
// ratios the sum spans -2.6 to +2.2 dB (derived, printed to 0.1 dB).
func TestWrongPolarityInThirdOrder(t *testing.T) {
	least, most := 0.0, 0.0
	for _, reversed := range []bool{false, true} {
		for _, ratio := range []float64{8, 10} {
			w, err := ThreeWayAllPass(3, reversed, 1000, 1000*ratio, 8)
			if err != nil {
				t.Fatal(err)
			}
			for i := range 4001 {
				sum, mid := w.sum(8, 100*math.Pow(1e3, float64(i)/4000))
				db := decibel(sum - 2*mid)
				least, most = min(least, db), max(most, db)
			}
		}
	}
	if math.Abs(least+2.6) > 0.05+1e-3 || math.Abs(most-2.2) > 0.05+1e-3 {
		t.Errorf("the sum spans %.3f to %.3f dB, want -2.6 to 2.2", least, most)
	}
}

func TestThreeWayRefuses(t *testing.T) {
	for _, test := range []struct {
		order     int
		reversed  bool
		low, high float64
		want      string
	}{
		{0, false, 300, 3000, "three-way: order is 0; give 1 to 4"},
		{5, false, 300, 3000, "three-way: order is 5; give 1 to 4"},
		{2, false, 300, 3000, "three-way: order 2 has no flat network with the mid not reversed; reverse it"},
		{4, true, 300, 3000, "three-way: order 4 has no flat network of use with the mid reversed, its ways would peak; do not reverse it"},
		{2, true, 300, 600, "three-way: order 2 with the mid reversed needs an upper frequency over 2 times the lower, not 2 times; move them apart"},
		{3, true, 300, 810, "three-way: order 3 with the mid reversed needs an upper frequency over 2.77 times the lower, not 2.7 times; move them apart"},
		{4, false, 300, 420, "three-way: order 4 with the mid not reversed needs an upper frequency over 1.42 times the lower, not 1.4 times; move them apart"},
		{3, false, 300, 300, "three-way: the upper frequency, 300 Hz, is not above the lower, 300 Hz; swap them or move them apart"},
		{3, false, 300, math.NaN(), "three-way: upper frequency is NaN Hz; give a positive number"},
	} {
		w, err := ThreeWayAllPass(test.order, test.reversed, test.low, test.high, 8)
		if w != nil || err == nil || err.Error() != test.want {
			t.Errorf("order %d: error is %v, want %s", test.order, err, test.want)
		}
	}
}

// The values are those of TestThreeWayTables, second order, ratio 10: C = .3236/(8·1000) and so on.
func ExampleThreeWayAllPass() {
	w, err := ThreeWayAllPass(2, true, 1000/math.Sqrt(10), 1000*math.Sqrt(10), 8)
	if err != nil {
		fmt.Println(err)
		return
	}
	steps, parts := w.Mid.Steps(new(Namer))
	for i, step := range steps {
		fmt.Printf("%s  %s = %.2g\n", step, parts[i].Name, parts[i].Value)
	}
	fmt.Printf("pad the mid by %.2f dB\n", w.MidExcessDB)
	// Output:
	// series C1  C1 = 4e-05
	// shunt L1  L1 = 0.0082
	// series L2  L2 = 0.00068
	// shunt C2  C2 = 2.8e-06
	// pad the mid by 2.08 dB
}
