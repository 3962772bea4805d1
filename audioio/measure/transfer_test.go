package measure_test

import (
	"fmt"
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"

	"sixdown/audioio/measure"
	"sixdown/audioio/signal"
)

// system is a linear system with an exact transfer function.
type system struct {
	name string
	run  func(x []float64) []float64
	h    func(z complex128) complex128 // z = e^(−jω)
}

// biquad is b over a, direct form; its transfer function is the same polynomials in z⁻¹.
func biquad(name string, b, a [3]float64) system {
	return system{
		name: name,
		run: func(x []float64) []float64 {
			y := make([]float64, len(x))
			var x1, x2, y1, y2 float64
			for n, x0 := range x {
				y0 := (b[0]*x0 + b[1]*x1 + b[2]*x2 - a[1]*y1 - a[2]*y2) / a[0]
				x1, x2, y1, y2 = x0, x1, y0, y1
				y[n] = y0
			}
			return y
		},
		h: func(z complex128) complex128 {
			num := complex(b[0], 0) + complex(b[1], 0)*z + complex(b[2], 0)*z*z
			return num / (complex(a[0], 0) + complex(a[1], 0)*z + complex(a[2], 0)*z*z)
		},
	}
}

// systems to be recovered. The coefficients come from R. Bristow-Johnson, "Audio EQ
// Cookbook", W3C Working Group Note, 2021 (from memory; derived): α = sin ω0/(2Q).
func systems() []system {
	w0 := 2 * math.Pi * 1000 / 48000
	cos := math.Cos(w0)
	alpha := func(q float64) float64 { return math.Sin(w0) / (2 * q) }
	a := alpha(math.Sqrt2 / 2)
	low := biquad("low-pass, Q 0.71", [3]float64{(1 - cos) / 2, 1 - cos, (1 - cos) / 2}, [3]float64{1 + a, -2 * cos, 1 - a})
	high := biquad("high-pass, Q 0.71", [3]float64{(1 + cos) / 2, -1 - cos, (1 + cos) / 2}, [3]float64{1 + a, -2 * cos, 1 - a})
	n := alpha(20)
	notch := biquad("notch, Q 20", [3]float64{1, -2 * cos, 1}, [3]float64{1 + n, -2 * cos, 1 - n})
	fir := system{
		name: "FIR: reversed, late, an echo",
		run: func(x []float64) []float64 {
			y := make([]float64, len(x))
			for n := range x {
				if n >= 7 {
					y[n] -= 0.6 * x[n-7]
				}
				if n >= 120 {
					y[n] += 0.2 * x[n-120]
				}
			}
			return y
		},
		h: func(z complex128) complex128 { return -0.6*cmplx.Pow(z, 7) + 0.2*cmplx.Pow(z, 120) },
	}
	return []system{low, high, notch, fir}
}

// The biquad above is the one of the literature: 1 kHz, 48 kHz, Q = 1/√2, equal
// to scipy.signal.butter(2, 1000, fs=48000) (derived, agrees; printed to 8 decimals).
func TestBiquadOfTheTest(t *testing.T) {
	y := systems()[0].run([]float64{1, 0, 0, 0})
	// The first three of the impulse response, by long division of the printed coefficients.
	b0, b1, b2, a1, a2 := 0.00391613, 0.00783225, 0.00391613, -1.81534108, 0.83100559
	want := []float64{b0, b1 - a1*b0, b2 - a1*(b1-a1*b0) - a2*b0}
	for i, w := range want {
		if math.Abs(y[i]-w) > 3e-8 {
			t.Errorf("sample %d: %v, want %v", i, y[i], w)
		}
	}
}

// sweep returns a sweep of 4 s with half a second of silence behind it.
func sweep(t testing.TB, rate int, f1, f2 float64) []float64 {
	t.Helper()
	src, err := signal.NewSweep(rate, f1, f2, 4, signal.SweepSettings{TailSeconds: 0.5})
	if err != nil {
		t.Fatal(err)
	}
	x := make([]float64, src.Len())
	if _, err := src.ReadSamples(x); err != nil {
		t.Fatal(err)
	}
	return x
}

func quantise(x []float64, bits int) []float64 {
	scale := math.Ldexp(1, bits-1)
	y := make([]float64, len(x))
	for i, v := range x {
		y[i] = math.RoundToEven(v*scale) / scale
	}
	return y
}

func logGrid(from, to float64, n int) []float64 {
	f := make([]float64, n)
	for i := range f {
		f[i] = from * math.Pow(to/from, float64(i)/float64(n-1))
	}
	return f
}

// compare returns the worst deviation of h from the exact one where that is
// above limitDB.
func compare(s system, h []complex128, hz []float64, rate, limitDB float64) (db, deg float64) {
	for i, f := range hz {
		want := s.h(cmplx.Rect(1, -2*math.Pi*f/rate))
		if 20*math.Log10(cmplx.Abs(want)) < limitDB {
			continue
		}
		ratio := h[i] / want
		db = max(db, math.Abs(20*math.Log10(cmplx.Abs(ratio))))
		deg = max(deg, math.Abs(cmplx.Phase(ratio))*180/math.Pi)
	}
	return db, deg
}

// A sweep through a known filter gives the filter back, from 20 Hz to 20 kHz, to 0.01 dB
// and 0.1° down to −60 dB with 24 bits, by the ratio of spectra. The rest is rounding: a 24-bit step
// spread over the record against the sweep's energy at a frequency is −130 dB at
// 20 kHz, so at −60 dB of gain 0.003 dB are expected.
func TestTransferRecovers(t *testing.T) {
	const rate = 48000
	ref := quantise(sweep(t, rate, 15, 22000), 24)
	hz := logGrid(20, 20000, 241)
	for _, s := range systems() {
		t.Run(s.name, func(t *testing.T) {
			exact := s.run(ref)
			out := [][]float64{exact, quantise(exact, 24)}
			h := [][]complex128{make([]complex128, len(hz)), make([]complex128, len(hz))}
			if err := measure.Transfer(h, out, ref, rate, hz); err != nil {
				t.Fatal(err)
			}
			// Without rounding nothing but arithmetic is left.
			db, deg := compare(s, h[0], hz, rate, -60)
			t.Logf("exact: %.2g dB, %.2g°", db, deg)
			if db > 1e-7 || deg > 1e-6 {
				t.Errorf("exact: %.2g dB, %.2g°", db, deg)
			}
			db, deg = compare(s, h[1], hz, rate, -60)
			t.Logf("24 bits: %.2g dB, %.2g°", db, deg)
			if db > 0.01 || deg > 0.1 {
				t.Errorf("24 bits: %.2g dB, %.2g°", db, deg)
			}
		})
	}
}

// The same by the impulse response in a window long enough for these filters.
func TestImpulseRecovers(t *testing.T) {
	const rate = 48000
	ref := quantise(sweep(t, rate, 15, 22000), 24)
	hz := logGrid(20, 20000, 241)
	for _, s := range systems() {
		t.Run(s.name, func(t *testing.T) {
			m, err := measure.NewImpulse(quantise(s.run(ref), 24), ref, rate)
			if err != nil {
				t.Fatal(err)
			}
			h := make([]complex128, len(hz))
			if err := m.Transfer(h, hz, measure.Window{Before: 0.2, After: 0.4, Fade: 0.05}); err != nil {
				t.Fatal(err)
			}
			db, deg := compare(s, h, hz, rate, -40)
			t.Logf("24 bits, window: %.2g dB, %.2g°", db, deg)
			if db > 0.01 || deg > 0.1 {
				t.Errorf("%.2g dB, %.2g°", db, deg)
			}
		})
	}
}

// A coil's iron distorts: y = 0.5x + 0.2x³. Of x³ = x·peak² three quarters go to the
// fundamental (sin³φ = ¾·sin φ − ¼·sin 3φ), so the gain is 0.5 + 0.2·0.5²·¾ = 0.5375. The third
// harmonic lands L·ln 3 before time 0 (Farina 2000), 0.70 s here, and a window that
// begins later leaves it out. The sweep stops at a sixth of the rate, since
// samples can hold no third harmonic of anything higher.
func TestWindowLeavesDistortionOut(t *testing.T) {
	const rate = 48000
	ref := sweep(t, rate, 15, 8000)
	out := make([]float64, len(ref))
	for i, x := range ref {
		out[i] = 0.5*x + 0.2*x*x*x
	}
	m, err := measure.NewImpulse(out, ref, rate)
	if err != nil {
		t.Fatal(err)
	}
	hz := logGrid(40, 7000, 100)
	h := make([]complex128, len(hz))
	if err := m.Transfer(h, hz, measure.Window{Before: 0.2, After: 0.3, Fade: 0.1}); err != nil {
		t.Fatal(err)
	}
	for i := range hz {
		if db := 20 * math.Log10(cmplx.Abs(h[i])/0.5375); math.Abs(db) > 0.01 {
			t.Errorf("%.1f Hz: off by %.4f dB", hz[i], db)
		}
	}
	// And there it is, where the theory puts it.
	src, err := signal.NewSweep(rate, 15, 8000, 4, signal.SweepSettings{})
	if err != nil {
		t.Fatal(err)
	}
	lead := src.HarmonicLead(3)
	x, err := m.Samples(measure.Window{Before: lead + 0.05, After: 0.01})
	if err != nil {
		t.Fatal(err)
	}
	at := 0
	for i := range int(0.1 * rate) { // 0.05 s to either side of the lead
		if math.Abs(x[i]) > math.Abs(x[at]) {
			at = i
		}
	}
	// The pulse holds up to 8 kHz, so its top is within half a period, 6e-5 s.
	if got := lead + 0.05 - float64(at)/rate; math.Abs(got-lead) > 6e-5 {
		t.Errorf("the third harmonic comes %.5f s early, want %.5f", got, lead)
	}
}

// Noise serves as well as a sweep. What is left is 24-bit rounding, where the noise's
// spectrum dips at random by up to 40 dB, and the filter is 40 dB down besides.
func TestTransferByNoise(t *testing.T) {
	const rate = 48000
	src, err := signal.NewPink(rate, 2, rand.NewPCG(1, 2), signal.NoiseSettings{})
	if err != nil {
		t.Fatal(err)
	}
	x := make([]float64, src.Len()+rate/2)
	if _, err := src.ReadSamples(x); err != nil {
		t.Fatal(err)
	}
	ref := quantise(x, 24)
	hz := logGrid(20, 20000, 3000)
	s := systems()[0]
	h := [][]complex128{make([]complex128, len(hz))}
	if err := measure.Transfer(h, [][]float64{quantise(s.run(ref), 24)}, ref, rate, hz); err != nil {
		t.Fatal(err)
	}
	db, deg := compare(s, h[0], hz, rate, -40)
	t.Logf("%.2g dB, %.2g°", db, deg)
	if db > 0.05 || deg > 0.3 {
		t.Errorf("%.2g dB, %.2g°", db, deg)
	}
}

// Two opposite impulses half a record of N samples apart have no spectrum at all at even
// multiples of rate/N and most at odd ones: there the neighbours give the answer. They lie 2 Hz
// to either side, over which a 1 kHz low-pass's curvature (its second difference, some
// (2/1000)² of its value) is below 1e-4 dB and 1e-3°; the next ones are twice as far.
func TestTransferAtDip(t *testing.T) {
	const rate, n = 48000, 24000
	ref := make([]float64, n)
	ref[0], ref[n/2] = 1, -1
	s := systems()[0]
	hz := []float64{400, 1000, 1204, 4000}
	h := [][]complex128{make([]complex128, len(hz))}
	if err := measure.Transfer(h, [][]float64{s.run(ref)}, ref, rate, hz); err != nil {
		t.Fatal(err)
	}
	if db, deg := compare(s, h[0], hz, rate, -60); db > 1e-4 || deg > 1e-3 {
		t.Errorf("%.2g dB, %.2g°", db, deg)
	}
}

func TestTransferRefuses(t *testing.T) {
	const rate = 48000
	src, err := signal.NewSweep(rate, 100, 10000, 4, signal.SweepSettings{RiseSeconds: 0.1, TailSeconds: 0.5})
	if err != nil {
		t.Fatal(err)
	}
	ref := make([]float64, src.Len())
	if _, err := src.ReadSamples(ref); err != nil {
		t.Fatal(err)
	}
	bad := append([]float64(nil), ref...)
	bad[1000] = math.NaN()
	silent := make([]float64, len(ref))
	for name, tt := range map[string]struct {
		out, ref []float64
		rate, hz float64
	}{
		"below the sweep":  {ref, ref, rate, 20},
		"above the sweep":  {ref, ref, rate, 20000},
		"zero":             {ref, ref, rate, 0},
		"half the rate":    {ref, ref, rate, 24000},
		"not a number":     {ref, ref, rate, math.NaN()},
		"no rate":          {ref, ref, 0, 1000},
		"silent reference": {ref, silent, rate, 1000},
		"bad reference":    {ref, bad, rate, 1000},
		"bad channel":      {bad, ref, rate, 1000},
		"empty":            {nil, nil, rate, 1000},
	} {
		h := [][]complex128{{0}}
		if err := measure.Transfer(h, [][]float64{tt.out}, tt.ref, tt.rate, []float64{tt.hz}); err == nil {
			t.Errorf("%s: taken as a whole, %v", name, h[0][0])
		}
		m, err := measure.NewImpulse(tt.out, tt.ref, tt.rate)
		if err == nil {
			err = m.Transfer(h[0], []float64{tt.hz}, measure.Window{Before: 0.1, After: 0.3, Fade: 0.02})
		}
		if err == nil {
			t.Errorf("%s: taken by the window, %v", name, h[0][0])
		}
	}
	m, err := measure.NewImpulse(ref, ref, rate)
	if err != nil {
		t.Fatal(err)
	}
	for _, w := range []measure.Window{
		{}, {After: -1}, {Before: -1, After: 1}, {After: math.NaN()}, {After: 100}, {After: math.Inf(1)},
		{After: 0.1, Fade: 0.06}, {After: 0.1, Fade: math.NaN()},
	} {
		if x, err := m.Samples(w); err == nil || x != nil {
			t.Errorf("window %+v: taken", w)
		}
	}
}

func BenchmarkTransfer(b *testing.B) {
	for _, channels := range []int{1, 3} {
		b.Run(fmt.Sprintf("channels=%d", channels), func(b *testing.B) {
			ref := sweep(b, 48000, 15, 22000)
			hz := logGrid(20, 20000, 240)
			outs, h := make([][]float64, channels), make([][]complex128, channels)
			for k := range outs {
				outs[k], h[k] = ref, make([]complex128, len(hz))
			}
			b.ReportAllocs()
			for b.Loop() {
				if err := measure.Transfer(h, outs, ref, 48000, hz); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
