package signal_test

import (
	"math"
	"testing"

	"sixdown/audioio/signal"
)

// In its window a tone is peak·sin(2π·cycles·n/window), n from 0: closed form. The
// phase stays below one turn, 6.3 rad, and its two or three roundings below 3e-15.
func TestTonesAreCoherent(t *testing.T) {
	plan, err := signal.NewSchedule([]float64{20, 997, 19000}, 44100, signal.ToneSettings{Peak: 0.8, GapSeconds: 0.01})
	if err != nil {
		t.Fatal(err)
	}
	src, err := signal.NewTones(plan)
	if err != nil {
		t.Fatal(err)
	}
	x := make([]float64, src.Len())
	if n, err := src.ReadSamples(x); n != len(x) || err != nil {
		t.Fatal(n, err)
	}
	for _, tone := range plan.Tones {
		window := x[tone.MeasureStart() : tone.MeasureStart()+tone.MeasureSamples]
		var re, im, sum float64
		for n, v := range window {
			turns := float64(n*tone.Cycles%tone.MeasureSamples) / float64(tone.MeasureSamples)
			if want := 0.8 * math.Sin(2*math.Pi*turns); math.Abs(v-want) > 3e-15 {
				t.Fatalf("%v Hz: sample %d of the window is %v, want %v", tone.FrequencyHz, n, v, want)
			}
			re += v * math.Cos(2*math.Pi*turns)
			im += v * math.Sin(2*math.Pi*turns)
			sum += v
		}
		// Orthogonality over whole cycles: the sine's amplitude and nothing else.
		half := float64(len(window)) / 2
		if math.Abs(im/half-0.8) > 1e-13 || math.Abs(re/half) > 1e-13 || math.Abs(sum/half) > 1e-13 {
			t.Errorf("%v Hz: sine %v, cosine %v, mean %v", tone.FrequencyHz, im/half, re/half, sum/half/2)
		}
		// Silent outside, and the middle of the raised cosine is half way up.
		if tone.StartSample > 0 && x[tone.StartSample-1] != 0 {
			t.Errorf("%v Hz: not silent before its beginning", tone.FrequencyHz)
		}
		if tone.End() < len(x) && x[tone.End()] != 0 {
			t.Errorf("%v Hz: not silent after its end", tone.FrequencyHz)
		}
	}
}

// Long after its beginning the phase is as exact as at first: the signal repeats every
// MeasureSamples, so the measuring window must equal the beginning, to the last bit.
func TestTonesDoNotDrift(t *testing.T) {
	const rate, n, cycles = 48000, 4801, 100
	const settle = 1000 * n // 100 s
	src, err := signal.NewTones(&signal.Schedule{
		Rate: rate, VoltsPerFullScale: 1, Peak: 1, LengthSamples: settle + n,
		Tones: []signal.Tone{{FrequencyHz: cycles * rate / float64(n), SettleSamples: settle, MeasureSamples: n, Cycles: cycles}},
	})
	if err != nil {
		t.Fatal(err)
	}
	x := make([]float64, src.Len())
	if _, err := src.ReadSamples(x); err != nil {
		t.Fatal(err)
	}
	for i := range n {
		if x[i] != x[settle+i] {
			t.Fatalf("sample %d is %v at first and %v at last", i, x[i], x[settle+i])
		}
	}
}
