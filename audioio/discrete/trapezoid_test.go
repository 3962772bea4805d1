package discrete_test

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"

	"sixdown/audioio/discrete"
)

func newTrapezoid(t testing.TB, b *bench, rate, warpHz float64) *discrete.Trapezoid {
	t.Helper()
	z, err := discrete.NewTrapezoid(b.stateSpace(t), rate, warpHz)
	if err != nil {
		t.Fatal(err)
	}
	return z
}

// TestTrapezoidRC: the bilinear transform of a 1 kHz RC at 48 kHz without pre-warping. With k = tan-free 2fs/ω = 15.2789,
// b = 1/(1+k) = 0.06142931 and a = -(k-1)/(k+1) = -0.87714138; derived by hand, printed to eight figures.
func TestTrapezoidRC(t *testing.T) {
	z := newTrapezoid(t, rcLowPass(1000), 48000, 0)
	y := buffers(2, 4)
	z.Process(y, []float64{1, 0, 0, 0})
	const b, a = 0.06142931, 0.87714138
	want := []float64{b, b + a*b, a * (b + a*b), a * a * (b + a*b)}
	for i := range want {
		if math.Abs(y[0][i]-want[i]) > 1.5e-8 { // half a unit of the last figure, thrice
			t.Errorf("h[%d] = %.9f, want %.9f", i, y[0][i], want[i])
		}
	}
	gain := make([]complex128, 2)
	for _, row := range []struct{ f, db, deg float64 }{
		{1000, -3.01651, -45.0409}, {10000, -21.41292, -85.1247}, // the same transform, evaluated on the unit circle
	} {
		z.Gain(gain, row.f)
		if math.Abs(decibels(gain[0])-row.db) > 6e-6 || math.Abs(degrees(gain[0])-row.deg) > 6e-5 {
			t.Errorf("%g Hz: %.5f dB %.4f°, want %.5f dB %.4f°", row.f, decibels(gain[0]), degrees(gain[0]), row.db, row.deg)
		}
	}
}

// TestTrapezoidAxis: without pre-warping a digital frequency shows the analogue gain at (rate/π)·tan(πf/rate). The pairs
// are that formula's, printed to 1 mHz; A. V. Oppenheim and R. W. Schafer, Discrete-Time Signal Processing, on the bilinear transform.
func TestTrapezoidAxis(t *testing.T) {
	for _, row := range []struct{ rate, digital, analogue float64 }{
		{48000, 1000, 1001.430}, {48000, 5000, 5186.479}, {48000, 10000, 11723.893}, {48000, 20000, 57021.536},
		{44100, 1000, 1001.695}, {44100, 10000, 12123.798},
		{96000, 1000, 1000.357}, {96000, 20000, 23447.786},
	} {
		z := newTrapezoid(t, rcLowPass(2000), row.rate, 0)
		gain := make([]complex128, 2)
		z.Gain(gain, row.digital)
		want := 1 / complex(1, row.analogue/2000)
		if cmplx.Abs(gain[0]-want) > 1e-6 { // a milliherz of 1000, and less higher up
			t.Errorf("%g Hz at %g Hz: %v, want %v", row.digital, row.rate, gain[0], want)
		}
	}
}

// TestTrapezoidSteadyState steps a sine until it is steady and correlates: at the pre-warped frequency the gain must be the
// analogue one. 1/(1 + jf/fc) by the divider rule; what is left is the transient, e^-60, and rounding.
func TestTrapezoidSteadyState(t *testing.T) {
	for _, rate := range []float64{44100, 48000, 96000} {
		for _, f := range []float64{20, 300, 1000, 5000, 12000, 20000} {
			z := newTrapezoid(t, rcLowPass(1000), rate, f)
			got := steadyGain(z.Process, 2, rate, f, 0.25, 0.05)
			low := 1 / complex(1, f/1000)
			for k, want := range []complex128{low, 1 - low} {
				if cmplx.Abs(got[k]-want) > 1e-11 {
					t.Errorf("%g Hz at %g Hz, output %d: %v, want %v", f, rate, k, got[k], want)
				}
			}
		}
	}
}

// TestTrapezoidLinkwitzRiley: the same on a ladder of coils and capacitors with double poles:
// 1/(1 + √2 s + s²)², half at its corner, turned by 180 degrees.
func TestTrapezoidLinkwitzRiley(t *testing.T) {
	for _, f := range []float64{200, 1000, 2000, 4000, 10000} {
		z := newTrapezoid(t, linkwitzRiley4(2000), 48000, f)
		got := steadyGain(z.Process, 1, 48000, f, 0.1, 0.05)
		s := complex(0, f/2000)
		q := 1 + math.Sqrt2*s + s*s
		if want := 1 / (q * q); cmplx.Abs(got[0]-want) > 1e-11 {
			t.Errorf("%g Hz: %v, want %v", f, got[0], want)
		}
	}
}

// TestTrapezoidAgainstSciPy steps noise through the three-way in both programs: scipy.signal.cont2discrete, method
// bilinear, and dlsim, from the same A, B, C and D.
func TestTrapezoidAgainstSciPy(t *testing.T) {
	b := threeWay()
	ss := b.stateSpace(t)
	n := ss.States()
	random := rand.New(rand.NewPCG(11, 12))
	u := make([]float64, 500)
	for i := range u {
		u[i] = 2*random.Float64() - 1
	}
	rows := func(m []float64, cols int) (list [][]float64) {
		for ; len(m) > 0; m = m[cols:] {
			list = append(list, m[:cols])
		}
		return list
	}
	const script = `
import json, sys, numpy as np
from scipy.signal import cont2discrete
q = json.load(sys.stdin)
a, b, c, d, _ = cont2discrete([np.array(q[k], float) for k in "abcd"], 1/q["rate"], method="bilinear")
x = np.zeros((a.shape[0], 1)); y = []
for u in q["u"]:
    y.append((c @ x + d*u)[:, 0].tolist())
    x = a @ x + b*u
json.dump(y, sys.stdout)
`
	var want [][]float64
	askSciPy(t, script, map[string]any{
		"a": rows(ss.A, n), "b": rows(ss.B, 1), "c": rows(ss.C, n), "d": rows(ss.D, 1), "u": u, "rate": 48000,
	}, &want)
	z := newTrapezoid(t, b, 48000, 0)
	y := buffers(ss.Outputs(), len(u))
	z.Process(y, u)
	for i := range want {
		for k := range want[i] {
			if math.Abs(y[k][i]-want[i][k]) > 1e-10 { // 500 steps of rounding on states of conditioning 1e4
				t.Fatalf("sample %d, output %d: %.15g, scipy has %.15g", i, k, y[k][i], want[i][k])
			}
		}
	}
}

// TestTrapezoidBlocks: samples must not depend on the length of the blocks, Reset must bring back the
// start, and stepping must not allocate.
func TestTrapezoidBlocks(t *testing.T) {
	z := newTrapezoid(t, threeWay(), 48000, 1000)
	checkBlocks(t, 4, z.Process, z.Reset)
}

func TestTrapezoidErrors(t *testing.T) {
	ss := rcLowPass(1000).stateSpace(t)
	for _, row := range []struct{ rate, warp float64 }{
		{0, 0}, {-1, 0}, {math.NaN(), 0}, {math.Inf(1), 0}, {48000, -1}, {48000, 24000}, {48000, math.NaN()},
	} {
		if z, err := discrete.NewTrapezoid(ss, row.rate, row.warp); err == nil || z != nil {
			t.Errorf("rate %g, warp %g: no error", row.rate, row.warp)
		}
	}
}

// checkBlocks compares blocks of several lengths with one long one, twice over, and counts allocations.
func checkBlocks(t *testing.T, outputs int, process func([][]float64, []float64), reset func()) {
	t.Helper()
	random := rand.New(rand.NewPCG(3, 4))
	u := make([]float64, 5000)
	for i := range u {
		u[i] = random.NormFloat64()
	}
	want := buffers(outputs, len(u))
	process(want, u)
	for _, size := range []int{1, 7, 64, 479, 4096} {
		reset()
		got := buffers(outputs, len(u))
		part := make([][]float64, outputs)
		for from := 0; from < len(u); from += size {
			to := min(from+size, len(u))
			for k := range part {
				part[k] = got[k][from:to]
			}
			process(part, u[from:to])
		}
		for k := range got {
			for i, v := range got[k] {
				if math.Abs(v-want[k][i]) > 1e-13 { // the order of additions may differ at a block's end
					t.Fatalf("blocks of %d: output %d, sample %d: %g, want %g", size, k, i, v, want[k][i])
				}
			}
		}
	}
	if n := testing.AllocsPerRun(10, func() { process(want, u) }); n != 0 {
		t.Errorf("%g allocations", n)
	}
}

// BenchmarkTrapezoid steps the three-way, 29 states and 4 outputs.
func BenchmarkTrapezoid(b *testing.B) {
	z := newTrapezoid(b, threeWay(), 48000, 1000)
	u := make([]float64, 4096)
	u[0] = 1
	dst := buffers(4, len(u))
	b.ReportAllocs()
	for b.Loop() {
		z.Process(dst, u)
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(len(u)), "ns/sample")
}
