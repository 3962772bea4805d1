package sim

import (
	"fmt"
	"math"
	"math/cmplx"
	"testing"

	"sixdown/xover"
)

// Singly terminated low-pass prototypes, 1 rad/s, 1 Ω, from the source on. Their duals make the high-passes.
var (
	// Butterworth: zero-source ladders, as printed by L. Weinberg, "Additional Tables for Design of Optimum
	// Ladder Networks", Part I, J. Franklin Inst. 264, 1957 (from memory); these are exact, from a_k =
	// sin((2k-1)π/2n), c_k = cos²(kπ/2n), g_1 = a_1, g_k = a_k·a_(k-1)/(c_(k-1)·g_(k-1)), counted from the
	// load.
	butterworth1 = butterworthLadder(1)
	butterworth2 = butterworthLadder(2)
	butterworth3 = butterworthLadder(3)
	butterworth4 = butterworthLadder(4)
	// Linkwitz-Riley: continued fraction of (s + 1)² and (s² + √2·s + 1)², by hand.
	linkwitzRiley2 = []float64{2, 0.5}
	linkwitzRiley4 = []float64{4 * math.Sqrt2 / 3, 9 / (4 * math.Sqrt2), 2 * math.Sqrt2 / 3, 1 / (2 * math.Sqrt2)}
	// The same of higher order, derived; printed to five decimals.
	linkwitzRiley6 = []float64{1.80000, 1.85185, 1.47273, 1.12037, 0.72727, 0.25000}
	linkwitzRiley8 = []float64{1.74941, 1.93202, 1.70186, 1.45476, 1.20953, 0.91319, 0.56545, 0.19134}
)

func butterworthLadder(n int) []float64 {
	a := func(k int) float64 { return math.Sin(float64(2*k-1) * math.Pi / float64(2*n)) }
	c := func(k int) float64 { return math.Pow(math.Cos(float64(k)*math.Pi/float64(2*n)), 2) }
	g := make([]float64, n) // from the source
	for k := 1; k <= n; k++ {
		if g[n-k] = a(k); k > 1 {
			g[n-k] *= a(k-1) / (c(k-1) * g[n-k+1])
		}
	}
	return g
}

// twoWay is a crossover of two ladders at fc into two resistances, with flat drivers side by side.
func twoWay(g []float64, fc, load float64, reversed bool) *xover.Design {
	d := &xover.Design{
		Drivers: []xover.Driver{plainDriver("woofer", load, 90), plainDriver("tweeter", load, 90)},
		Tune:    xover.Tune{Band: [2]float64{fc / 16, 16 * fc}},
	}
	w := 2 * math.Pi * fc
	var low, high []xover.Step
	for i, v := range g {
		l, h := fmt.Sprintf("A%d", i+1), fmt.Sprintf("B%d", i+1)
		if i%2 == 0 {
			d.Parts = append(d.Parts, coil(l, v*load/w, 0), capacitor(h, 1/(v*load*w), 0))
			low, high = append(low, series(leaf(l))), append(high, series(leaf(h)))
		} else {
			d.Parts = append(d.Parts, capacitor(l, v/(load*w), 0), coil(h, load/(v*w), 0))
			low, high = append(low, shunt(leaf(l))), append(high, shunt(leaf(h)))
		}
	}
	d.Ways = []xover.Way{{Name: "low", Driver: "woofer", Network: low}, {Name: "high", Driver: "tweeter", Reversed: reversed, Network: high}}
	return d
}

// What the ways of the classic alignments do at the crossover: S. Linkwitz, "Active Crossover Networks for
// Noncoincident Drivers", J. Audio Eng. Soc. 24(1), 2–8, 1976, for the pairs in phase and the odd orders in
// quadrature; the numbers are derived.
func TestAlignmentsAtTheCrossover(t *testing.T) {
	const fc, load = 2000, 8
	null := math.Inf(-1)
	for _, tt := range []struct {
		name     string
		g        []float64
		branch   float64 // dB of each way at fc
		phase    float64 // degrees, high less low
		same     float64 // dB of the sum at fc
		reversed float64 // dB of the sum at fc with one way reversed
		power    float64 // dB of the power sum at fc
		tol      float64 // dB and, by 10, degrees
	}{
		// Exact values: what is left is the printing of the columns, half of 0.001 dB and of 0.01°.
		{"B1", butterworth1, -3.010, 90, 0, 0, 0, 6e-4},
		{"B2", butterworth2, -3.010, 180, null, 3.010, 0, 6e-4},
		{"B3", butterworth3, -3.010, -90, 0, 0, 0, 6e-4},
		{"B4", butterworth4, -3.010, 0, 3.010, null, 0, 6e-4},
		{"LR2", linkwitzRiley2, -6.021, 180, null, 0, -3.010, 6e-4},
		{"LR4", linkwitzRiley4, -6.021, 0, 0, null, -3.010, 6e-4},
		// Five decimals of a part make some 1e-4 dB.
		{"LR6", linkwitzRiley6, -6.021, 180, null, 0, -3.010, 1e-3},
		{"LR8", linkwitzRiley8, -6.021, 0, 0, null, -3.010, 1e-3},
	} {
		r := mustPredict(t, mustNew(t, twoWay(tt.g, fc, load, false)), fc)
		low, high := r.Ways[0].H[0], r.Ways[1].H[0]
		near(t, tt.name+" low", DB(low), tt.branch, tt.tol)
		near(t, tt.name+" high", DB(high), tt.branch, tt.tol)
		turn := PhaseDeg(high / low * cmplx.Rect(1, -tt.phase*math.Pi/180)) // no trouble at ±180°
		near(t, tt.name+" phase", turn, 0, 10*tt.tol)
		near(t, tt.name+" power sum", 10*math.Log10(math.Pow(cmplx.Abs(low), 2)+math.Pow(cmplx.Abs(high), 2)), tt.power, tt.tol)
		level := func(r *Response) float64 { return SPL(r.Sum[0]) - 90 }
		inverse := mustPredict(t, mustNew(t, twoWay(tt.g, fc, load, true)), fc)
		for _, side := range []struct{ got, want float64 }{{level(r), tt.same}, {level(inverse), tt.reversed}} {
			switch {
			case !math.IsInf(side.want, -1):
				near(t, tt.name+" sum", side.got, side.want, tt.tol)
			case side.got > -80: // a null to within the digits of the parts
				t.Errorf("%s: the sum is %g dB, want a null", tt.name, side.got)
			}
		}
		// Wiring in reverse turns the gain by half a turn and does nothing else.
		nearC(t, tt.name+" reversed gain", inverse.Ways[1].H[0], -high, 1e-14)
		nearC(t, tt.name+" reversed input impedance", inverse.Zin[0], r.Zin[0], 1e-14)
	}
}

// Levels of one branch off the crossover, derived from the alignments' polynomials.
func TestBranchLevels(t *testing.T) {
	for _, tt := range []struct {
		name             string
		g                []float64
		below, at, above float64 // dB of the low-pass at fc/2, fc, 2fc
	}{
		{"LR4", linkwitzRiley4, -0.527, -6.021, -24.609},
		{"LR2", linkwitzRiley2, -1.938, -6.021, -13.979},
		{"B3", butterworth3, -0.067, -3.010, -18.129},
		{"B4", butterworth4, -0.017, -3.010, -24.099},
	} {
		r := mustPredict(t, mustNew(t, twoWay(tt.g, 1000, 4, false)), 500, 1000, 2000)
		for i, want := range []float64{tt.below, tt.at, tt.above} {
			near(t, fmt.Sprintf("%s low at %g Hz", tt.name, r.Freqs[i]), DB(r.Ways[0].H[i]), want, 6e-4) // printed figures
			near(t, fmt.Sprintf("%s high at %g Hz", tt.name, r.Freqs[2-i]), DB(r.Ways[1].H[2-i]), want, 6e-4)
		}
	}
}

// allPass is a sum in closed form, s in units of the crossover's ω, and its group delay in units of 1/ωc.
type allPass struct {
	name     string
	g        []float64
	reversed bool
	sum      func(s complex128) complex128
	delay    func(w float64) float64
}

// first and second are the delays of all-passes of first order and of second order with a given Q, from the
// derivative of their phases -2·atan(w) and -2·atan((w/Q)/(1 - w²)), by hand.
func first(w float64) float64 { return 2 / (1 + w*w) }

func second(q float64) func(w float64) float64 {
	return func(w float64) float64 {
		return 2 * q * (1 + w*w) / (q*q*(1-w*w)*(1-w*w) + w*w)
	}
}

// The closed forms follow from the alignments' polynomials, by hand.
func allPasses() []allPass {
	c := func(x float64) complex128 { return complex(x, 0) }
	order1 := func(s complex128) complex128 { return (1 - s) / (1 + s) }
	return []allPass{
		{"LR2", linkwitzRiley2, true, order1, first},
		{"B3 reversed", butterworth3, true, order1, first},
		{"B3", butterworth3, false, func(s complex128) complex128 { return (s*s - s + 1) / (s*s + s + 1) }, second(1)},
		{"LR4", linkwitzRiley4, false, func(s complex128) complex128 {
			return (s*s - c(math.Sqrt2)*s + 1) / (s*s + c(math.Sqrt2)*s + 1)
		}, second(math.Sqrt2 / 2)},
	}
}

func TestSumsAreAllPasses(t *testing.T) {
	const fc = 1000
	for _, ap := range allPasses() {
		s := mustNew(t, twoWay(ap.g, fc, 8, ap.reversed))
		for _, x := range []float64{0.01, 0.1, 0.5, 0.6436, 1, 1.3, 2, 10, 100} {
			r := mustPredict(t, s, x*fc)
			what := fmt.Sprintf("%s at %g fc", ap.name, x)
			// 90 dB for 2.83 V, at 1 m; rounding through ladders of four parts.
			flat := complex(20e-6*math.Pow(10, 90.0/20), 0)
			nearC(t, what, r.Sum[0]/flat, ap.sum(complex(0, x)), 1e-11)
			want := ap.delay(x) / (2 * math.Pi * fc)
			near(t, what+": group delay", r.SumDelay[0], want, 1e-6*want)
		}
	}
}

// Group delays of sums in units of 1/ωc, derived; printed to four decimals.
func TestGroupDelayOfSums(t *testing.T) {
	const fc = 1000
	for _, tt := range []struct {
		name     string
		g        []float64
		reversed bool
		at, tau  float64 // f/fc; s·ωc
		tol      float64
	}{
		{"LR2", linkwitzRiley2, true, 1e-3, 2.0000, 6e-5},
		{"LR2", linkwitzRiley2, true, 1, 1.0000, 6e-5},
		{"B3", butterworth3, false, 1, 4.0000, 6e-5},
		{"B3", butterworth3, false, 0.8556, 4.3094, 6e-5},
		{"LR4", linkwitzRiley4, false, 1e-3, 2.8284, 6e-5},
		{"LR4", linkwitzRiley4, false, 1, 2.8284, 6e-5},
		{"LR4", linkwitzRiley4, false, math.Sqrt(math.Sqrt2 - 1), math.Sqrt2 * (1 + math.Sqrt2), 4e-6}, // the peak, exact
		// Parts to five decimals.
		{"LR6", linkwitzRiley6, true, 1e-3, 4.0000, 5e-4},
		{"LR6", linkwitzRiley6, true, 1, 5.0000, 5e-4},
		{"LR6", linkwitzRiley6, true, 0.8173, 5.4857, 5e-4},
		{"LR8", linkwitzRiley8, false, 1e-3, 5.2263, 5e-4},
		{"LR8", linkwitzRiley8, false, 1, 7.3910, 5e-4},
		{"LR8", linkwitzRiley8, false, 0.8879, 7.8188, 5e-4},
	} {
		r := mustPredict(t, mustNew(t, twoWay(tt.g, fc, 8, tt.reversed)), tt.at*fc)
		near(t, fmt.Sprintf("%s at %g fc", tt.name, tt.at), r.SumDelay[0]*2*math.Pi*fc, tt.tau, tt.tol)
	}
}

// What the pair looks like to the amplifier, since Re(1/Zin) is the power sum over R (lossless ladders,
// derived).
func TestInputImpedanceOfPairs(t *testing.T) {
	const fc, load = 1500, 8
	freqs := logGrid([2]float64{fc / 30, fc * 30})
	for name, g := range map[string][]float64{"B1": butterworth1, "B2": butterworth2, "B3": butterworth3, "B4": butterworth4} {
		for i, z := range mustPredict(t, mustNew(t, twoWay(g, fc, load, false)), freqs...).Zin {
			nearC(t, fmt.Sprintf("%s at %g Hz", name, freqs[i]), z, load, 1e-12) // exact
		}
	}
	for name, tt := range map[string]struct {
		g     []float64
		worst float64 // degrees
	}{"LR2": {linkwitzRiley2, 19.47}, "LR4": {linkwitzRiley4, 20.93}} {
		s := mustNew(t, twoWay(tt.g, fc, load, false))
		nearC(t, name+" at fc", mustPredict(t, s, fc).Zin[0], 2*load, 1e-12)
		worst := 0.0
		for _, d := range PhasesDeg(mustPredict(t, s, freqs...).Zin) {
			worst = max(worst, math.Abs(d))
		}
		near(t, name+": worst angle", worst, tt.worst, 0.01) // printed figures, and a grid of 48 an octave
	}
}
