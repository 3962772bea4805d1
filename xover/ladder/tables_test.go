package ladder

import (
	"math"
	"testing"

	"sixdown/xover/align"
)

// Values for a zero source, source first, 1 Ω at 1 rad/s. The tables usually printed count from the load: L. Weinberg,
// "Additional Tables for Design of Optimum Ladder Networks", J. Franklin Inst. 264, 1957, Part I for Butterworth and
// Chebyshev (from memory), Part II for the Bessel of unit delay, orders 2 to 6 (read in a copy, 4 decimals). All are
// derived independently to 5 decimals; the tolerance is half a unit of the last.
func TestPrototypeTables(t *testing.T) {
	bw := func(n int) align.Spec { return align.Spec{Shape: align.Butterworth, Order: n} }
	lr := func(n int) align.Spec { return align.Spec{Shape: align.LinkwitzRiley, Order: n} }
	be := func(n int, r align.Reference) align.Spec {
		return align.Spec{Shape: align.Bessel, Order: n, Reference: r}
	}
	ch := func(n int, ripple float64) align.Spec {
		return align.Spec{Shape: align.Chebyshev, Order: n, RippleDB: ripple}
	}
	for _, row := range []struct {
		spec align.Spec
		want []float64
	}{
		{bw(1), []float64{1.00000}},
		{bw(2), []float64{1.41421, 0.70711}},
		{bw(3), []float64{1.50000, 1.33333, 0.50000}},
		{bw(4), []float64{1.53073, 1.57716, 1.08239, 0.38268}},
		{bw(5), []float64{1.54508, 1.69443, 1.38197, 0.89443, 0.30902}},
		{bw(6), []float64{1.55291, 1.75931, 1.55291, 1.20163, 0.75787, 0.25882}},

		{be(2, align.Delay), []float64{1.00000, 0.33333}},
		{be(3, align.Delay), []float64{0.83333, 0.48000, 0.16667}},
		{be(4, align.Delay), []float64{0.71014, 0.46268, 0.28986, 0.10000}},
		{be(5, align.Delay), []float64{0.62308, 0.42150, 0.31026, 0.19481, 0.06667}},
		{be(6, align.Delay), []float64{0.55946, 0.38208, 0.30054, 0.22462, 0.14000, 0.04762}},
		{be(2, align.Phase), []float64{1.73205, 0.57735}},
		{be(3, align.Phase), []float64{2.05518, 1.18378, 0.41104}},
		{be(4, align.Phase), []float64{2.27323, 1.48109, 0.92785, 0.32011}},
		{be(5, align.Phase), []float64{2.45261, 1.65914, 1.22126, 0.76681, 0.26242}},
		{be(6, align.Phase), []float64{2.61359, 1.78492, 1.40403, 1.04934, 0.65403, 0.22246}},
		{be(2, align.Magnitude), []float64{1.36165, 0.45388}},
		{be(3, align.Magnitude), []float64{1.46306, 0.84272, 0.29261}},
		{be(4, align.Magnitude), []float64{1.50119, 0.97807, 0.61273, 0.21139}},
		{be(5, align.Magnitude), []float64{1.51246, 1.02315, 0.75312, 0.47287, 0.16183}},
		{be(6, align.Magnitude), []float64{1.51243, 1.03290, 0.81249, 0.60723, 0.37848, 0.12873}},

		{ch(1, 0.1), []float64{0.15262}},
		{ch(2, 0.1), []float64{0.71585, 0.42152}},
		{ch(3, 0.1), []float64{1.08948, 1.08640, 0.51578}},
		{ch(4, 0.1), []float64{1.24533, 1.45756, 1.19942, 0.55439}},
		{ch(5, 0.1), []float64{1.37590, 1.59237, 1.55623, 1.24901, 0.57341}},
		{ch(6, 0.1), []float64{1.40351, 1.72358, 1.67492, 1.59986, 1.27523, 0.58406}},
		{ch(1, 0.5), []float64{0.34931}},
		{ch(2, 0.5), []float64{0.94026, 0.70145}},
		{ch(3, 0.5), []float64{1.34649, 1.30015, 0.79814}},
		{ch(4, 0.5), []float64{1.31375, 1.72790, 1.39157, 0.83515}},
		{ch(5, 0.5), []float64{1.53875, 1.64262, 1.81418, 1.42908, 0.85289}},
		{ch(6, 0.5), []float64{1.40421, 1.90183, 1.71015, 1.84938, 1.44827, 0.86268}},

		{lr(2), []float64{2, 0.5}},
		{lr(4), []float64{1.88562, 1.59099, 0.94281, 0.35355}},
		{lr(6), []float64{1.80000, 1.85185, 1.47273, 1.12037, 0.72727, 0.25000}},
		{lr(8), []float64{1.74941, 1.93202, 1.70186, 1.45476, 1.20953, 0.91319, 0.56545, 0.19134}},
	} {
		checkRow(t, row.spec, prototype(t, row.spec), row.want, 0.5e-5)
	}
	// The fourth-order Linkwitz-Riley in closed form, by hand from (s² + √2·s + 1)². Rounding only.
	checkRow(t, lr(4), prototype(t, lr(4)),
		[]float64{4 * math.Sqrt2 / 3, 9 / (4 * math.Sqrt2), 2 * math.Sqrt2 / 3, 1 / (2 * math.Sqrt2)}, 1e-14)
}

func checkRow(t *testing.T, name any, got, want []float64, tol float64) {
	t.Helper()
	if len(got) != len(want) {
		t.Errorf("%+v: %d values, want %d", name, len(got), len(want))
		return
	}
	for i := range want {
		if !(math.Abs(got[i]-want[i]) <= tol*(1+1e-9)) {
			t.Errorf("%+v: value %d is %.7f, want %.5f", name, i+1, got[i], want[i])
		}
	}
}

// The same Chebyshevs at their -3 dB point: S. Winder, Analog and Digital Filter Design, the tables for a source of
// no resistance, 0.5 and 1 dB. For even orders their -3 dB is below DC, that is below the bottom of the ripple,
// not below its top. Tolerance: the last figure, since one is printed a unit high (1 dB, order 4, first).
func TestChebyshevByHalfPower(t *testing.T) {
	for _, row := range []struct {
		ripple float64
		want   []float64
	}{
		{0.5, []float64{1.36144, 1.01565}},
		{0.5, []float64{1.57200, 1.51790, 0.93182}},
		{0.5, []float64{1.45345, 1.91162, 1.53954, 0.92395}},
		{0.5, []float64{1.62994, 1.73996, 1.92168, 1.51377, 0.90343}},
		{0.5, []float64{1.46994, 1.99084, 1.79019, 1.93593, 1.51606, 0.90305}},
		{1, []float64{1.30223, 1.19145}},
		{1, []float64{1.65199, 1.45972, 1.10778}},
		{1, []float64{1.37686, 2.05105, 1.51740, 1.12742}},
		{1, []float64{1.72155, 1.64455, 2.06119, 1.49297, 1.10354}},
		{1, []float64{1.38984, 2.11627, 1.70474, 2.09336, 1.50789, 1.11259}},
	} {
		n := len(row.want)
		spec := align.Spec{Shape: align.Chebyshev, Order: n, RippleDB: row.ripple}
		// Where ε²·T² reaches 1, or for even orders (1 + ε²·T²)/(1 + ε²) reaches 2.
		square := math.Pow(10, row.ripple/10) - 1
		chebyshev := 1 / math.Sqrt(square)
		if n%2 == 0 {
			chebyshev = math.Sqrt(2 + 1/square)
		}
		w := math.Cosh(math.Acosh(chebyshev) / float64(n))
		got := prototype(t, spec)
		for i := range got {
			got[i] *= w
		}
		checkRow(t, spec, got, row.want, 1e-5)
	}
}

// L = k·R/f and C = k/(R·f). V. Dickason, The Loudspeaker Design Cookbook, crossover chapter, prints Butterworth 2 and 3 and
// Linkwitz-Riley 2 to 4 decimals (from memory); all are derived, and the tolerance is half a unit of the
// last figure given here.
func TestTwoWayTable(t *testing.T) {
	for _, row := range []struct {
		spec      align.Spec
		low, high []float64
	}{
		{align.Spec{Order: 1}, []float64{0.15915}, []float64{0.15915}},
		{align.Spec{Order: 2}, []float64{0.22508, 0.11254}, []float64{0.11254, 0.22508}},
		{align.Spec{Order: 3}, []float64{0.23873, 0.21221, 0.07958}, []float64{0.10610, 0.11937, 0.31831}},
		{align.Spec{Order: 4}, []float64{0.24362, 0.25101, 0.17227, 0.06091}, []float64{0.10397, 0.10091, 0.14704, 0.41589}},
		{align.Spec{Shape: align.LinkwitzRiley, Order: 2}, []float64{0.31831, 0.07958}, []float64{0.07958, 0.31831}},
		{align.Spec{Shape: align.LinkwitzRiley, Order: 4},
			[]float64{0.30011, 0.25321, 0.15005, 0.05627}, []float64{0.08440, 0.10004, 0.16881, 0.45016}},
		{align.Spec{Shape: align.Bessel, Order: 2, Reference: align.Phase}, []float64{0.27566, 0.09189}, []float64{0.09189, 0.27566}},
		{align.Spec{Shape: align.Bessel, Order: 2}, []float64{0.21671, 0.07224}, []float64{0.11688, 0.35065}},
		{align.Spec{Shape: align.Bessel, Order: 4, Reference: align.Phase},
			[]float64{0.36180, 0.23572, 0.14767, 0.05095}, []float64{0.07001, 0.10746, 0.17153, 0.49719}},
		{align.Spec{Shape: align.Bessel, Order: 4},
			[]float64{0.23892, 0.15567, 0.09752, 0.03364}, []float64{0.10602, 0.16272, 0.25975, 0.75289}},
	} {
		a := must(t, row.spec)
		low, err := LowPass(a, 1, 1)
		if err != nil {
			t.Fatal(err)
		}
		high, err := HighPass(a, 1, 1)
		if err != nil {
			t.Fatal(err)
		}
		checkRow(t, row.spec, values(t, low), row.low, 0.5e-5)
		checkRow(t, row.spec, values(t, high), row.high, 0.5e-5)
	}
}

// The same, worked out for 8 Ω and 2 kHz, in mH and µF: derived; half a unit of the last figure.
func TestTwoWayInEightOhms(t *testing.T) {
	lr := func(n int) align.Spec { return align.Spec{Shape: align.LinkwitzRiley, Order: n} }
	for _, row := range []struct {
		spec align.Spec
		high bool
		want []float64
	}{
		{align.Spec{Order: 1}, false, []float64{0.6366}},
		{align.Spec{Order: 1}, true, []float64{9.9472}},
		{align.Spec{Order: 2}, false, []float64{0.9003, 7.0337}},
		{align.Spec{Order: 2}, true, []float64{7.0337, 0.9003}},
		{align.Spec{Order: 3}, false, []float64{0.9549, 13.2629, 0.3183}},
		{align.Spec{Order: 3}, true, []float64{6.6315, 0.4775, 19.8944}},
		{align.Spec{Order: 4}, false, []float64{0.9745, 15.6883, 0.6891, 3.8066}},
		{align.Spec{Order: 4}, true, []float64{6.4983, 0.4036, 9.1900, 1.6636}},
		{lr(2), false, []float64{1.2732, 4.9736}},
		{lr(2), true, []float64{4.9736, 1.2732}},
		{lr(4), false, []float64{1.2004, 15.8259, 0.6002, 3.5169}},
		{lr(4), true, []float64{5.2753, 0.4001, 10.5506, 1.8006}},
	} {
		size := LowPass
		if row.high {
			size = HighPass
		}
		n, err := size(must(t, row.spec), 2000, 8)
		if err != nil {
			t.Fatal(err)
		}
		for i, e := range n {
			wantKind, scale := Inductor, 1e3
			if (i%2 == 0) == row.high {
				wantKind, scale = Capacitor, 1e6
			}
			p := e.Expr.Part
			if p.Kind != wantKind || e.Shunt != (i%2 == 1) || math.Abs(p.Value*scale-row.want[i]) > 0.5e-4 {
				t.Errorf("%+v, high-pass %v: element %d is %+v, want %v", row.spec, row.high, i, e, row.want[i])
			}
		}
	}
}
