package signal_test

import (
	"io"
	"math"
	"math/rand/v2"
	"testing"

	"sixdown/audioio/signal"
)

// checkSource holds a source to the contract of [signal.Source]: whatever the
// block length the samples are the same, there are Len of them, nothing is
// written past n, io.EOF sticks and nothing is allocated.
func checkSource(t *testing.T, open func() signal.Source) []float64 {
	t.Helper()
	whole := make([]float64, open().Len()+3)
	for i := range whole {
		whole[i] = math.NaN()
	}
	n, err := open().ReadSamples(whole)
	if n != len(whole)-3 || err != nil {
		t.Fatalf("in one block: %d of %d samples, %v", n, len(whole)-3, err)
	}
	for _, block := range []int{1, 7, 64, 479, 4096} {
		src := open()
		dst := make([]float64, block)
		at := 0
		for {
			for i := range dst {
				dst[i] = math.NaN()
			}
			n, err := src.ReadSamples(dst)
			for i, v := range dst {
				switch {
				case i < n && v != whole[at+i]:
					t.Fatalf("blocks of %d: sample %d is %v, in one block %v", block, at+i, v, whole[at+i])
				case i >= n && !math.IsNaN(v):
					t.Fatalf("blocks of %d: written past the samples returned", block)
				}
			}
			at += n
			if err == io.EOF && n == 0 {
				break
			}
			if err != nil || n == 0 {
				t.Fatalf("blocks of %d: at sample %d: %d, %v", block, at, n, err)
			}
		}
		if at != len(whole)-3 {
			t.Fatalf("blocks of %d: %d samples, want %d", block, at, len(whole)-3)
		}
		if n, err := src.ReadSamples(dst); n != 0 || err != io.EOF {
			t.Fatalf("after the end: %d, %v", n, err)
		}
	}
	src := open()
	dst := make([]float64, 16)
	if a := testing.AllocsPerRun(50, func() {
		if _, err := src.ReadSamples(dst); err != nil && err != io.EOF {
			t.Fatal(err)
		}
	}); a != 0 {
		t.Fatalf("a block allocates %v times", a)
	}
	return whole[:len(whole)-3]
}

// must returns a source that is known to be right.
func must[S signal.Source](t testing.TB) func(S, error) signal.Source {
	return func(s S, err error) signal.Source {
		t.Helper()
		if err != nil {
			t.Fatal(err)
		}
		return s
	}
}

func TestSourceContract(t *testing.T) {
	plan, err := signal.NewSchedule([]float64{40, 1000, 15000}, 48000, signal.ToneSettings{LeadSeconds: 0.01, GapSeconds: 0.02, TailSeconds: 0.03})
	if err != nil {
		t.Fatal(err)
	}
	tests := []struct {
		name string
		open func() signal.Source
		peak float64
	}{
		{"tones", func() signal.Source { return must[*signal.Tones](t)(signal.NewTones(plan)) }, 0.5},
		{"sweep", func() signal.Source {
			return must[*signal.Sweep](t)(signal.NewSweep(48000, 20, 20000, 0.5, signal.SweepSettings{TailSeconds: 0.1}))
		}, 0.5},
		{"white", func() signal.Source {
			return must[*signal.White](t)(signal.NewWhite(48000, 0.5, rand.NewPCG(1, 2), signal.NoiseSettings{}))
		}, 0.5},
		{"pink", func() signal.Source {
			return must[*signal.Pink](t)(signal.NewPink(48000, 0.5, rand.NewPCG(1, 2), signal.NoiseSettings{Peak: 1, Crest: 2}))
		}, 1},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			x := checkSource(t, tt.open)
			top := 0.0
			for _, v := range x {
				top = max(top, math.Abs(v))
			}
			if !(top <= tt.peak) || top < 0.9*tt.peak {
				t.Errorf("peak %v, want %v", top, tt.peak)
			}
			// Rise and fall are there: neither end clicks.
			if math.Abs(x[0]) > 0.01 || math.Abs(x[len(x)-1]) > 0.01 {
				t.Errorf("the ends are %v and %v", x[0], x[len(x)-1])
			}
		})
	}
}

func BenchmarkReadSamples(b *testing.B) {
	plan, err := signal.NewSchedule([]float64{1000}, 48000, signal.ToneSettings{MeasureSeconds: 3000})
	if err != nil {
		b.Fatal(err)
	}
	for _, bb := range []struct {
		name string
		open func() signal.Source
	}{
		{"tones", func() signal.Source { return must[*signal.Tones](b)(signal.NewTones(plan)) }},
		{"sweep", func() signal.Source {
			return must[*signal.Sweep](b)(signal.NewSweep(48000, 20, 20000, 3600, signal.SweepSettings{}))
		}},
		{"white", func() signal.Source {
			return must[*signal.White](b)(signal.NewWhite(48000, 36000, rand.NewPCG(1, 2), signal.NoiseSettings{}))
		}},
		{"pink", func() signal.Source {
			return must[*signal.Pink](b)(signal.NewPink(48000, 36000, rand.NewPCG(1, 2), signal.NoiseSettings{}))
		}},
	} {
		b.Run(bb.name, func(b *testing.B) {
			src := bb.open()
			dst := make([]float64, 4096)
			b.ReportAllocs()
			for b.Loop() {
				n, err := src.ReadSamples(dst)
				if err == io.EOF || n < len(dst) {
					src = bb.open()
				}
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(len(dst)), "ns/sample")
		})
	}
}
