package measure_test

import (
	"math"
	"math/cmplx"
	"testing"

	"sixdown/audioio/measure"
	"sixdown/audioio/signal"
)

// The default schedule serves 16-bit takes, also for a way 50 dB down, where the sine has
// A = 51.8 steps of amplitude. No two samples of a window share a phase, so what
// rounding does to the amplitude is what it does to a continuous sine: it adds
// Σ_k (−1)^k·2/(πk)·J1(2πkA) steps (after W. R. Bennett, "Spectra of Quantized Signals", Bell Syst.
// Tech. J. 27(3), 446–472, 1948; derived from the sawtooth's Fourier series). With |J1(x)| ≤ √(2/(πx))
// that is at most 2ζ(3/2)/(π²√A) = 0.074 steps, 0.0123 dB. Phase: 0.074/51.8 rad, 0.08°.
func TestTonesIn16Bits(t *testing.T) {
	const rate = 48000
	var hz []float64
	for _, b := range signal.ThirdOctaves(20, 20000) {
		hz = append(hz, b.Hz)
	}
	plan, err := signal.NewSchedule(hz, rate, signal.ToneSettings{})
	if err != nil {
		t.Fatal(err)
	}
	src, err := signal.NewTones(plan)
	if err != nil {
		t.Fatal(err)
	}
	x := make([]float64, src.Len())
	if _, err := src.ReadSamples(x); err != nil {
		t.Fatal(err)
	}
	gain := math.Pow(10, -50.0/20)
	out := make([]float64, len(x))
	for i, v := range x {
		out[i] = -gain * v // wired the wrong way round
	}
	ref, out := quantise(x, 16), quantise(out, 16)
	worstDB, worstDeg := 0.0, 0.0
	for _, tone := range plan.Tones {
		from, to := tone.MeasureStart(), tone.MeasureStart()+tone.MeasureSamples
		var s [2]measure.Sine
		if err := measure.FitSines(s[:], [][]float64{ref[from:to], out[from:to]}, tone.FrequencyHz, rate); err != nil {
			t.Fatal(err)
		}
		h, err := measure.Ratio(s[1], s[0])
		if err != nil {
			t.Fatal(err)
		}
		h /= complex(-gain, 0)
		db, deg := math.Abs(20*math.Log10(cmplx.Abs(h))), math.Abs(cmplx.Phase(h))*180/math.Pi
		worstDB, worstDeg = max(worstDB, db), max(worstDeg, deg)
		if db > 0.0125 || deg > 0.08 {
			t.Errorf("%.1f Hz: off by %.4f dB, %.3f°", tone.FrequencyHz, db, deg)
		}
	}
	t.Logf("16 bits, 50 dB down: %.2g dB, %.2g°", worstDB, worstDeg)
}
