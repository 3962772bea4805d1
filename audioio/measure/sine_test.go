package measure_test

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"

	"sixdown/audioio/measure"
)

// IEEE Std 1057, three-parameter fit (from memory); figures derived: 48 kHz, 480
// samples, 0.5·cos(2π·1000·t + 0.3) + 0.01.
func TestFitSinesFigures(t *testing.T) {
	x := make([]float64, 480)
	rounded := make([]float64, len(x))
	for n := range x {
		x[n] = 0.5*math.Cos(2*math.Pi*1000*float64(n)/48000+0.3) + 0.01
		rounded[n] = math.Round(x[n]*32767) / 32767
	}
	var s [2]measure.Sine
	if err := measure.FitSines(s[:], [][]float64{x, rounded}, 1000, 48000); err != nil {
		t.Fatal(err)
	}
	for _, tt := range []struct {
		what           string
		got, want, tol float64
	}{
		{"A", real(s[0].Phasor), 0.47766824, 0.5e-8},
		{"B", -imag(s[0].Phasor), -0.1477601, 0.5e-7},
		{"C", s[0].Offset, 0.01, 1e-14},
		{"amplitude", s[0].Amplitude(), 0.5, 1e-14},
		{"phase", cmplx.Phase(s[0].Phasor), 0.3, 1e-14},
		{"residual", s[0].Residual, 0, 1e-14},
		// Printed to two and three figures: half a unit of the last.
		{"amplitude error in 16 bits", s[1].Amplitude() - 0.5, -2.0e-6, 0.05e-6},
		{"residual in 16 bits", s[1].Residual, 8.97e-6, 0.005e-6},
		// Uniform rounding error, step/√12.
		{"residual in 16 bits, theory", s[1].Residual, 1 / (32767 * math.Sqrt(12)), 0.02e-5},
	} {
		if !(math.Abs(tt.got-tt.want) <= tt.tol) {
			t.Errorf("%s: %v, want %v", tt.what, tt.got, tt.want)
		}
	}
}

// A pure sine comes back whatever its frequency and the length of the record, with no
// whole number of cycles. Rounding: samples and basis are off by 1e-14 at worst,
// and the fit divides by the condition of three terms over one cycle or more, some tens.
func TestFitSinesRecovers(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	worst := 0.0
	for range 300 {
		const rate = 48000
		n := 8 + int(math.Exp(r.Float64()*math.Log(100_000)))
		nu := (1 + (float64(n)/2.2-1)*math.Pow(r.Float64(), 3)) / float64(n) // one cycle to near half the rate
		amplitude, phase, offset := math.Exp(-8*r.Float64()), 2*math.Pi*r.Float64(), r.Float64()-0.5
		x := make([]float64, n)
		for i := range x {
			turns := nu * float64(i)
			x[i] = amplitude*math.Cos(2*math.Pi*(turns-math.Floor(turns))+phase) + offset
		}
		var s [1]measure.Sine
		if err := measure.FitSines(s[:], [][]float64{x}, nu*rate, rate); err != nil {
			t.Fatalf("%d samples, %v cycles: %v", n, nu*float64(n), err)
		}
		e := max(cmplx.Abs(s[0].Phasor-cmplx.Rect(amplitude, phase)), math.Abs(s[0].Offset-offset), s[0].Residual)
		worst = max(worst, e)
		if e > 1e-11 {
			t.Errorf("%d samples, %.3f cycles: off by %.2g", n, nu*float64(n), e)
		}
	}
	t.Logf("worst error %.2g", worst)
}

// With white noise of rms σ the amplitude spreads by σ·√(2/N) (least squares; IEEE Std
// 1057). 400 fits estimate that spread to 1/√800 = 3.5 %; four of these are allowed.
func TestStandardError(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	const n, fits, sigma = 1000, 400, 0.01
	square, stated := 0.0, 0.0
	for range fits {
		x := make([]float64, n)
		for i := range x {
			x[i] = 0.5*math.Sin(2*math.Pi*37*float64(i)/n) + sigma*r.NormFloat64()
		}
		var s [1]measure.Sine
		if err := measure.FitSines(s[:], [][]float64{x}, 37, n); err != nil {
			t.Fatal(err)
		}
		square += (s[0].Amplitude() - 0.5) * (s[0].Amplitude() - 0.5) / fits
		stated += s[0].StandardError() / fits
	}
	if want := sigma * math.Sqrt(2.0/n); math.Abs(stated/want-1) > 0.02 || math.Abs(math.Sqrt(square)/want-1) > 0.14 {
		t.Errorf("stated %v, seen %v, theory %v", stated, math.Sqrt(square), want)
	}
}

// A ratio of two channels gives gain and phase with their signs: the second channel is
// half as strong and 0.7 rad late.
func TestRatio(t *testing.T) {
	x := [2][]float64{make([]float64, 1000), make([]float64, 1000)}
	for n := range x[0] {
		x[0][n] = 0.8 * math.Sin(0.05*float64(n))
		x[1][n] = 0.4 * math.Sin(0.05*float64(n)-0.7)
	}
	var s [3]measure.Sine
	if err := measure.FitSines(s[:], [][]float64{x[0], x[1], make([]float64, 1000)}, 0.05/(2*math.Pi), 1); err != nil {
		t.Fatal(err)
	}
	h, err := measure.Ratio(s[1], s[0])
	if err != nil {
		t.Fatal(err)
	}
	if want := cmplx.Rect(0.5, -0.7); cmplx.Abs(h-want) > 1e-13 {
		t.Errorf("ratio %v, want %v", h, want)
	}
	if h, err := measure.Ratio(s[2], s[0]); err != nil || cmplx.Abs(h) > 1e-15 {
		t.Errorf("silence over a signal: %v, %v", h, err)
	}
	if _, err := measure.Ratio(s[0], s[2]); err == nil {
		t.Error("a signal over silence has a ratio")
	}
}

func TestFitSinesRefuses(t *testing.T) {
	x := make([]float64, 100)
	bad := append(make([]float64, 99), math.NaN())
	endless := append(make([]float64, 99), math.Inf(1))
	for name, tt := range map[string]struct {
		x        []float64
		hz, rate float64
	}{
		"zero": {x, 0, 48000}, "negative": {x, -1, 48000}, "half the rate": {x, 24000, 48000},
		"NaN": {x, math.NaN(), 48000}, "no rate": {x, 1000, 0}, "less than a cycle": {x, 470, 48000},
		"three samples": {x[:3], 20000, 48000}, "no samples": {nil, 1000, 48000},
		"sample NaN": {bad, 1000, 48000}, "sample infinite": {endless, 1000, 48000},
	} {
		var s [1]measure.Sine
		if err := measure.FitSines(s[:], [][]float64{tt.x}, tt.hz, tt.rate); err == nil {
			t.Errorf("%s: taken", name)
		}
	}
}

func TestFitSinesAllocatesNothing(t *testing.T) {
	channels := [][]float64{make([]float64, 12001), make([]float64, 12001)}
	var s [2]measure.Sine
	if n := testing.AllocsPerRun(10, func() {
		if err := measure.FitSines(s[:], channels, 1000, 48000); err != nil {
			t.Fatal(err)
		}
	}); n != 0 {
		t.Errorf("a fit allocates %v times", n)
	}
}

func BenchmarkFitSines(b *testing.B) {
	channels := make([][]float64, 4)
	for k := range channels {
		channels[k] = make([]float64, 12001)
	}
	s := make([]measure.Sine, len(channels))
	b.ReportAllocs()
	for b.Loop() {
		if err := measure.FitSines(s, channels, 1000, 48000); err != nil {
			b.Fatal(err)
		}
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/12001, "ns/frame")
}
