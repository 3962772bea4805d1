package discrete_test

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"

	"sixdown/audioio/discrete"
	"sixdown/sim/circuit"
)

// What a Matched promises by default, with room for what lies between the points it looks at.
const (
	wantDB  = 0.002
	wantDeg = 0.02
)

func newMatched(t testing.TB, b *bench, rate float64) *discrete.Matched {
	t.Helper()
	m, err := discrete.NewMatched(b.stateSpace(t), rate, discrete.Settings{})
	if err != nil {
		t.Fatal(err)
	}
	return m
}

// checkGain compares the gain over the audible band, at frequencies the fit does not look at, with want.
func checkGain(t *testing.T, m *discrete.Matched, rate float64, want func(f float64) []complex128) {
	t.Helper()
	top := min(20000, 0.45*rate)
	got := make([]complex128, len(want(1000)))
	worstDB, worstDeg := 0.0, 0.0
	for f := 20.0; f <= top; f *= 1.0137 {
		m.Gain(got, f)
		for k, w := range want(f) {
			if decibels(w) < -50 {
				continue
			}
			db, deg := math.Abs(decibels(got[k]/w)), math.Abs(degrees(got[k]/w))
			worstDB, worstDeg = max(worstDB, db), max(worstDeg, deg)
			if !(db < wantDB && deg < wantDeg) {
				t.Errorf("%g Hz at %g Hz, output %d: %.5f dB, %.4f° off", f, rate, k, db, deg)
			}
		}
	}
	// A dip may be narrower than the grid that Error looks at; there the error can be up to twice what Error says.
	db, deg := m.Error()
	if worstDB > 2*db+1e-9 || worstDeg > 2*deg+1e-9 {
		t.Errorf("at %g Hz: %.5f dB and %.4f° off; Error says %.5f dB and %.4f°", rate, worstDB, worstDeg, db, deg)
	}
}

// TestMatchedRC: 1/(1 + jf/fc), by the divider rule, for corners from below the band to above it.
func TestMatchedRC(t *testing.T) {
	for _, rate := range []float64{44100, 48000, 96000} {
		for _, corner := range []float64{1, 50, 1000, 8000, 22000, 1e6} {
			checkGain(t, newMatched(t, rcLowPass(corner), rate), rate, func(f float64) []complex128 {
				low := 1 / complex(1, f/corner)
				return []complex128{low, 1 - low}
			})
		}
	}
}

// TestMatchedDecay: a capacitor left alone discharges by e^(-T/RC) every sample, whatever the fit did to
// the numerator. The edge poles, 0.95 at most, are gone by then.
func TestMatchedDecay(t *testing.T) {
	const rate, corner = 48000, 100.0
	m := newMatched(t, rcLowPass(corner), rate)
	u := make([]float64, 1200)
	for i := range 100 {
		u[i] = 1
	}
	y := buffers(2, len(u))
	m.Process(y, u)
	want := math.Exp(-2 * math.Pi * corner / rate)
	for i := 1100; i < len(u); i++ {
		if got := y[0][i] / y[0][i-1]; math.Abs(got-want) > 1e-11 { // rounding of a value that has come down to 1e-6
			t.Fatalf("sample %d: decays by %.15f, want %.15f", i, got, want)
		}
	}
}

// TestMatchedLinkwitzRiley: double poles, 1/(1 + √2 s + s²)² (S. H. Linkwitz, JAES 24(1), 1976).
func TestMatchedLinkwitzRiley(t *testing.T) {
	for _, rate := range []float64{44100, 48000, 96000} {
		for _, corner := range []float64{80, 2000, 9000} {
			checkGain(t, newMatched(t, linkwitzRiley4(corner), rate), rate, func(f float64) []complex128 {
				s := complex(0, f/corner)
				q := 1 + math.Sqrt2*s + s*s
				return []complex128{1 / (q * q)}
			})
		}
	}
}

// TestMatchedThreeWay compares with the frequency solver, which the fit never asks.
func TestMatchedThreeWay(t *testing.T) {
	b := threeWay()
	solver, err := circuit.Compile(&b.n, b.outs)
	if err != nil {
		t.Fatal(err)
	}
	for _, rate := range []float64{44100, 48000, 88200, 96000, 192000} {
		m := newMatched(t, b, rate)
		checkGain(t, m, rate, func(f float64) []complex128 {
			p, err := solver.At(complex(0, 2*math.Pi*f))
			if err != nil {
				t.Fatal(err)
			}
			return p.Gain
		})
		// Between the band and half the rate nothing is promised, but it must not run away.
		got := make([]complex128, 4)
		for f := min(20000, 0.45*rate); f < rate/2; f += 50 {
			m.Gain(got, f)
			for k, g := range got {
				if cmplx.Abs(g) > 2 {
					t.Errorf("%g Hz at %g Hz, output %d: gain of %g beyond the band", f, rate, k, cmplx.Abs(g))
				}
			}
		}
	}
}

// TestMatchedToneNetwork: a passive bass control, R1 from the input to the pot's top, the pot with a capacitor across each
// part, R2 to the return. It is flat, R2/(R1 + R2) = -20.828 dB, where (1-x)·VR·C1 = x·VR·C2, C1·R1 = C2·R2 and x = R2/(R1 + R2) (derived: each
// impedance is then the same multiple of one RC); the figures at full boost are the divider's, derived, printed to 1 mdB.
func TestMatchedToneNetwork(t *testing.T) {
	bass := func(x float64) *bench {
		b := newBench(0)
		top, wiper, bottom := b.node(), b.node(), b.node()
		b.resistor(circuit.Amp, top, 100e3)
		b.resistor(top, wiper, (1-x)*1e6)
		b.resistor(wiper, bottom, x*1e6)
		b.capacitor(top, wiper, 2.2e-9, 0)
		b.capacitor(wiper, bottom, 22e-9, 0)
		b.resistor(bottom, circuit.Return, 10e3)
		b.output(wiper)
		return b
	}
	for _, row := range []struct{ x, f, db float64 }{
		{1.0 / 11, 20, -20.828}, {1.0 / 11, 1000, -20.828}, {1.0 / 11, 20000, -20.828},
		{1, 20, -1.131}, {1, 100, -5.328}, {1, 1000, -18.993},
		{0, 20, -40.590}, {0, 100, -36.347}, {0, 1000, -22.660},
	} {
		m := newMatched(t, bass(row.x), 48000)
		got := make([]complex128, 1)
		m.Gain(got, row.f)
		if math.Abs(decibels(got[0])-row.db) > wantDB+0.0005 {
			t.Errorf("x = %g, %g Hz: %.4f dB, want %.3f dB", row.x, row.f, decibels(got[0]), row.db)
		}
	}
}

// TestMatchedSignal: what comes out must be what Gain says, Latency late: a tone's steady state, correlated.
func TestMatchedSignal(t *testing.T) {
	m := newMatched(t, threeWay(), 48000)
	want := make([]complex128, 4)
	for _, f := range []float64{40, 400, 3000, 16000} {
		m.Reset()
		got := steadyGain(m.Process, 4, 48000, f, 0.5, 0.1)
		m.Gain(want, f)
		for k := range got {
			got[k] *= cmplx.Rect(1, 2*math.Pi*f*float64(m.Latency())/48000)
			// The slowest mode, 15 Hz and real, has come down by e^-48 after half a second.
			if cmplx.Abs(got[k]-want[k]) > 1e-10 {
				t.Errorf("%g Hz, output %d: %v, want %v", f, k, got[k], want[k])
			}
		}
	}
}

func TestMatchedBlocks(t *testing.T) {
	m := newMatched(t, threeWay(), 48000)
	checkBlocks(t, 4, m.Process, m.Reset)
	m = newMatched(t, linkwitzRiley4(2000), 48000) // sections in a chain
	checkBlocks(t, 1, m.Process, m.Reset)
}

// TestPeakGain: the input that is the sign of the impulse response backwards reaches the bound, and noise does not
// pass it (Young's inequality: |h * u| ≤ Σ|h|·max|u|).
func TestPeakGain(t *testing.T) {
	m := newMatched(t, threeWay(), 48000)
	peak := m.PeakGain()
	const n = 48000
	u := make([]float64, n)
	u[0] = 1
	h := buffers(4, n)
	m.Process(h, u)
	y := buffers(4, n)
	for k := range peak {
		for i := range u {
			u[i] = math.Copysign(1, h[k][n-1-i])
		}
		m.Reset()
		m.Process(y, u)
		if got := y[k][n-1]; math.Abs(got-peak[k]) > 1e-9*peak[k] { // both leave off a tail of 1e-12 and less
			t.Errorf("output %d: reaches %.12g, bound %.12g", k, got, peak[k])
		}
	}
	random := rand.New(rand.NewPCG(1, 2))
	for i := range u {
		u[i] = math.Copysign(1, random.Float64()-0.5)
	}
	m.Process(y, u)
	for k := range y {
		for i, v := range y[k] {
			if math.Abs(v) > peak[k]*(1+1e-9) {
				t.Fatalf("output %d, sample %d: %g, bound %g", k, i, v, peak[k])
			}
		}
	}
}

// TestMatchedPlain: networks with nothing to recur on.
func TestMatchedPlain(t *testing.T) {
	b := newBench(2)
	b.resistor(circuit.Amp, circuit.Return, 6)
	b.output(circuit.Amp)
	checkGain(t, newMatched(t, b, 48000), 48000, func(float64) []complex128 { return []complex128{0.75} })

	silent := newBench(2)
	silent.resistor(circuit.Amp, circuit.Return, 0)
	silent.output(circuit.Amp)
	m := newMatched(t, silent, 48000)
	y := buffers(1, 100)
	y[0][3] = 1
	m.Process(y, make([]float64, 100))
	if y[0][3] != 0 || m.PeakGain()[0] != 0 {
		t.Errorf("a shorted output gives %g V, peak gain %g", y[0][3], m.PeakGain()[0])
	}
}

func TestMatchedErrors(t *testing.T) {
	ss := rcLowPass(1000).stateSpace(t)
	for _, rate := range []float64{0, -1, math.NaN(), math.Inf(1)} {
		if m, err := discrete.NewMatched(ss, rate, discrete.Settings{}); err == nil || m != nil {
			t.Errorf("rate %g: no error", rate)
		}
	}
	b := newBench(0)
	trap := b.node()
	b.coil(circuit.Amp, trap, 1e-3, 0)
	b.capacitor(trap, circuit.Return, 1e-5, 0)
	b.output(trap)
	if m, err := discrete.NewMatched(b.stateSpace(t), 48000, discrete.Settings{}); err == nil || m != nil {
		t.Error("an undamped resonance: no error")
	}
}

// BenchmarkMatched runs noise through the three-way: 29 states, 4 outputs.
func BenchmarkMatched(b *testing.B) {
	m := newMatched(b, threeWay(), 48000)
	random := rand.New(rand.NewPCG(1, 2))
	u := make([]float64, 4096)
	for i := range u {
		u[i] = 2*random.Float64() - 1
	}
	dst := buffers(4, len(u))
	b.ReportAllocs()
	for b.Loop() {
		m.Process(dst, u)
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(len(u)), "ns/sample")
}

func BenchmarkNewMatched(b *testing.B) {
	ss := threeWay().stateSpace(b)
	b.ReportAllocs()
	for b.Loop() {
		if _, err := discrete.NewMatched(ss, 48000, discrete.Settings{}); err != nil {
			b.Fatal(err)
		}
	}
}

// TestMatchedRandom compares random ways behind a source resistance with the frequency solver, at rates in turn.
func TestMatchedRandom(t *testing.T) {
	count := 60
	if testing.Short() {
		count = 12
	}
	rates := []float64{44100, 48000, 96000}
	for seed := range count {
		b := randomWays(uint64(seed))
		solver, err := circuit.Compile(&b.n, b.outs)
		if err != nil {
			t.Fatal(err)
		}
		rate := rates[seed%len(rates)]
		m := newMatched(t, b, rate)
		checkGain(t, m, rate, func(f float64) []complex128 {
			p, err := solver.At(complex(0, 2*math.Pi*f))
			if err != nil {
				t.Fatal(err)
			}
			return p.Gain
		})
	}
}

// randomWays is two ways of one to three sections and a driver each, from values that a builder could take.
func randomWays(seed uint64) *bench {
	random := rand.New(rand.NewPCG(99, seed))
	among := func(lo, hi float64) float64 { return lo * math.Pow(hi/lo, random.Float64()) }
	b := newBench(among(0.01, 1))
	b.output(circuit.Amp)
	for way := range 2 {
		hot := circuit.Amp
		for range 1 + random.IntN(3) {
			next := b.node()
			if way == 0 {
				b.coil(hot, next, among(0.1e-3, 5e-3), among(0.05, 0.5))
				b.capacitor(next, circuit.Return, among(2e-6, 100e-6), among(0.005, 0.1))
			} else {
				b.capacitor(hot, next, among(2e-6, 50e-6), among(0.005, 0.1))
				b.coil(next, circuit.Return, among(0.05e-3, 2e-3), among(0.05, 0.5))
			}
			hot = next
		}
		if way == 0 {
			b.driver(hot, among(3, 8), among(0.1e-3, 1e-3), among(1, 10), among(0.1e-3, 1e-3), among(25, 80), among(2, 8), among(0.2, 0.8))
		} else {
			b.driver(hot, among(3, 8), among(5e-6, 0.1e-3), among(0.5, 5), among(5e-6, 0.1e-3), among(400, 1500), among(1, 5), among(0.5, 2))
		}
		b.output(hot)
	}
	return b
}
