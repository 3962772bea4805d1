package audioio_test

import (
	"context"
	"io"
	"math/rand/v2"
	"os"
	"testing"

	"sixdown/audioio"
	"sixdown/audioio/signal"
	"sixdown/sim"
	"sixdown/xover"
)

// load makes a system of a design under testdata.
func load(tb testing.TB, name string) (*xover.Design, *sim.System) {
	tb.Helper()
	src, err := os.ReadFile("testdata/" + name)
	if err != nil {
		tb.Fatal(err)
	}
	d, _, err := xover.Parse(name, src)
	if err != nil {
		tb.Fatal(err)
	}
	s, err := sim.New(d, nil)
	if err != nil {
		tb.Fatal(err)
	}
	return d, s
}

// drain takes what is written and forgets it.
type drain struct{ pos, end int64 }

func (d *drain) Write(p []byte) (int, error) {
	d.pos += int64(len(p))
	d.end = max(d.end, d.pos)
	return len(p), nil
}

func (d *drain) Seek(offset int64, whence int) (int64, error) {
	switch whence {
	case io.SeekStart:
		d.pos = offset
	case io.SeekCurrent:
		d.pos += offset
	case io.SeekEnd:
		d.pos = d.end + offset
	}
	return d.pos, nil
}

// BenchmarkRenderNoise is a minute of pink noise through the three-way, written as 24 bits at 48 kHz.
func BenchmarkRenderNoise(b *testing.B) {
	_, sys := load(b, "breakwater.toml")
	const seconds = 60
	b.ReportAllocs()
	for b.Loop() {
		src, err := signal.NewPink(48000, seconds, rand.NewPCG(1, 2), signal.NoiseSettings{Peak: 1})
		if err != nil {
			b.Fatal(err)
		}
		in := audioio.Input{Kind: audioio.Noise, Source: src, Rate: 48000, Volts: 10, BandHz: [2]float64{20, 20000}}
		if _, err := audioio.RenderBroadband(context.Background(), sys, in, &drain{}, audioio.Settings{}); err != nil {
			b.Fatal(err)
		}
	}
	b.ReportMetric(seconds*float64(b.N)/b.Elapsed().Seconds(), "x-real-time")
}
